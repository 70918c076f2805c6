"""The sheet: the one object in which an outcome is shown, in a terminal, a notebook, a desk, and on paper."""

import math
import os
from dataclasses import dataclass, replace
from functools import cached_property
from pathlib import Path
from typing import Any, Final

import numpy as np
from markupsafe import Markup

from pipeflex.errors import Fault, InputError
from pipeflex.files.text_file import write_text
from pipeflex.model.layout import SHAPES
from pipeflex.model.outcome import Ladder, Outcome, Turn
from pipeflex.present import UNIT_SYSTEMS, UnitSystem
from pipeflex.sheet import headline as head
from pipeflex.sheet import html, results, sources
from pipeflex.sheet.headline import Headline
from pipeflex.sheet.inputs import Entry, inputs
from pipeflex.sheet.ledger import Line, ledger
from pipeflex.sheet.scene import Scene, scene
from pipeflex.sheet.svg import svg
from pipeflex.sheet.terminal import as_text

PAPERS: Final = ("A4", "Letter")


@dataclass(frozen=True, kw_only=True, eq=False)
class Sheet:
    """One outcome in one unit system.

    Parameters
    ----------
    outcome : answer of a single design.
    units : "metric" or "us".
    design_text : the design as a file has it; the page carries it.
    fingerprint : of the design; taken from it if not given.
    ladder : all methods for the design, if they are to be shown.
    turns : where the answer turns if one input alone is changed.
    paper : "A4" or "Letter".

    Raises
    ------
    InputError
        Another unit system or paper, or an outcome of several rows.
    """

    outcome: Outcome
    units: UnitSystem = "metric"
    design_text: str = ""
    fingerprint: str = ""
    ladder: Ladder | None = None
    turns: tuple[Turn, ...] = ()
    paper: str = "A4"

    def __post_init__(self) -> None:
        faults = []
        if self.units not in UNIT_SYSTEMS:
            faults.append(Fault("units", str(self.units), allowed="one of " + ", ".join(UNIT_SYSTEMS)))
        if self.paper not in PAPERS:
            faults.append(Fault("paper", str(self.paper), allowed="one of " + ", ".join(PAPERS)))
        if np.size(self.outcome.outside) != 1:
            count = f"{np.size(self.outcome.outside)} rows"
            faults.append(Fault("outcome", count, allowed="one row of an outcome, as `outcome.row(i)` gives it"))
        if faults:
            raise InputError(*faults)
        if np.ndim(self.outcome.outside):
            object.__setattr__(self, "outcome", replace(self.outcome.row(0), steps=self.outcome.steps))
        if not self.fingerprint:
            object.__setattr__(self, "fingerprint", self.outcome.design.fingerprint)

    # --- what it says ---------------------------------------------------------------------------

    def headline(self) -> Headline:
        """Verdict and lines of the headline."""
        return head.headline(self.outcome, self.units, self.ladder, self.turns)

    def scene(self, view: str = "plan", **options: Any) -> Scene:
        """The drawing, with the options of `pipeflex.sheet.scene.scene`."""
        return scene(self.outcome, self.units, view, **options)

    @cached_property
    def view(self) -> "View":
        """Everything that is printed, as text."""
        return View(self)

    # --- where it is shown ----------------------------------------------------------------------

    def text(self) -> str:
        """The sheet for a terminal."""
        return as_text(self.view)

    def __str__(self) -> str:
        return self.text()

    def __repr__(self) -> str:
        return f"<Sheet of {self.view.line or self.view.heading}, {self.fingerprint}: {self.outcome.verdict}>"

    def html(self) -> str:
        """The whole sheet as one offline page."""
        return html.page(self.view)

    def part(self, name: str) -> str:
        """One part as an HTML fragment: a name of `pipeflex.sheet.html.PARTS`."""
        if name not in html.PARTS:
            raise InputError(Fault("part", name, allowed="one of " + ", ".join(html.PARTS)))
        return html.part(name, self.view)

    def _repr_html_(self) -> str:
        return html.fragment(self.view)

    def write(self, path: str | os.PathLike[str], overwrite: bool = False) -> Path:
        """Write the page, whole or not at all; returns where it is.

        Raises
        ------
        InputError
            The file is there already and `overwrite` is not set, or cannot be written.
        """
        place = Path(path)
        if place.exists() and not overwrite:
            raise InputError(Fault("path", str(place), allowed="a new file, or overwrite=True"))
        write_text(place, self.html())
        return place


class View:
    """The texts of a sheet by name, as templates and terminal ask for them."""

    def __init__(self, sheet: Sheet) -> None:
        outcome, design, units = sheet.outcome, sheet.outcome.design, sheet.units
        title = design.title
        self.sheet, self.units, self.paper = sheet, units, sheet.paper
        self.fingerprint, self.design_text = sheet.fingerprint, sheet.design_text
        self.line = title.line
        self.heading = title.title or f"Thermal expansion of a {SHAPES[design.layout.shape].title}"
        self.name = " ".join(t for t in (title.line, self.heading) if t)
        revision = f"revision {title.revision}, " if title.revision else ""
        self.stamp = f"{revision}fingerprint {self.fingerprint}"
        self.foot = ", ".join(t for t in (title.project, title.date) if t)
        self.title_rows = _title_rows(sheet)
        self.question = head.question(outcome, units)
        self.headline = sheet.headline()
        said = [*outcome.outside_reasons, *outcome.remarks]
        self.serious = tuple(r.words(units) for r in said if r.serious)
        self.remarks = tuple(r.words(units) for r in said if not r.serious)
        self.checks = results.checks(outcome, units)
        self.loads = results.loads(outcome, units)
        self.changing_loads = results.changing_loads(outcome, units)
        self.load_terms = results.load_terms(outcome, units)
        self.movements = results.movements(outcome, units)
        self.rungs = results.rungs(sheet.ladder, outcome, units) if sheet.ladder else ()
        self.turns = results.turns(sheet.turns, units)
        self.cautions = sources.CAUTIONS

    @cached_property
    def scene(self) -> Scene:
        return self.sheet.scene()

    @property
    def drawing(self) -> Markup:
        return Markup(svg(self.scene))

    @property
    def left_out(self) -> tuple[str, ...]:
        return self.scene.left_out

    @cached_property
    def inputs(self) -> tuple[Entry, ...]:
        return inputs(self.sheet.outcome.design, self.units)

    @cached_property
    def ledger(self) -> tuple[Line, ...]:
        return ledger(self.sheet.outcome.steps, self.units)

    @cached_property
    def tables(self) -> tuple[sources.TableRow, ...]:
        return sources.tables(self.sheet.outcome.design, self.units)

    @cached_property
    def literature(self) -> tuple[str, ...]:
        return sources.literature(self.sheet.outcome)


def _title_rows(sheet: Sheet) -> list[list[tuple[str, str]]]:
    title = sheet.outcome.design.title
    known = [
        ("Line", title.line), ("Project", title.project), ("Revision", title.revision), ("Date", title.date),
        ("By", title.by), ("Checked", title.checked), ("Code", sheet.outcome.design.code.key),
        ("Fingerprint", sheet.fingerprint),
    ]  # fmt: skip
    filled = [(label, value) for label, value in known if value]
    count = math.ceil(len(filled) / 4)
    rows = [filled[i * 4 : i * 4 + 4] for i in range(count)]
    return [*rows, [("Notes", title.notes)]] if title.notes else rows

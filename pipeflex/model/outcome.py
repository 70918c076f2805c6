"""Records of an answer: complete, or not made at all. Numbers carry a row axis last."""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any, Self

import numpy as np

from pipeflex import present
from pipeflex.model.design import Design
from pipeflex.model.words import Concern, Judgement, Standing, Verdict
from pipeflex.trace import Step

Rows = Any
"""An array with rows last, or the float of a single row."""


class _Row:
    """Picks one row out of every array of a frozen answer record."""

    __slots__: tuple[str, ...] = ()

    def row(self, i: int) -> Self:
        made = object.__new__(type(self))
        for name in type(self).__slots__:
            value = getattr(self, name)
            if isinstance(value, np.ndarray) and value.dtype != object:
                value = value[..., i].item() if value.ndim == 1 else value[..., i]
            object.__setattr__(made, name, value)
        return made


@dataclass(frozen=True, slots=True, kw_only=True)
class Check(_Row):
    """One demand against one limit.

    demand, limit : SI of `kind`, (rows,); an unlimited limit means that none is given. places : where it may
    govern, `place` which one does, (rows,). states : between or in which states of the line.
    unjudged : why the method does not judge it; empty if it does.
    """

    key: str
    title: str
    concern: Concern
    kind: str
    demand: Rows
    limit: Rows
    places: tuple[str, ...] = ("",)
    place: Rows = 0
    states: str = ""
    unjudged: str = ""
    note: str = ""

    @property
    def ratio(self) -> Rows:
        """Demand over limit; zero where no limit is given."""
        return np.abs(self.demand) / self.limit

    @property
    def judged(self) -> Rows:
        if self.unjudged:
            return np.zeros(np.shape(self.limit), bool)[()]
        return np.isfinite(self.limit)

    @property
    def exceeded(self) -> Rows:
        return self.judged & ~(self.ratio <= 1.0)  # what is no number does not hold

    @property
    def judgement(self) -> Judgement:
        """State of the check of a single row."""
        if not self.judged:
            return Judgement.NOT_JUDGED
        return Judgement.EXCEEDED if self.exceeded else Judgement.HOLDS

    @property
    def reason(self) -> str:
        """Why a single row is not judged."""
        return self.unjudged or ("" if self.judged else "no limit given")

    @property
    def where(self) -> str:
        return self.places[int(self.place)]


@dataclass(frozen=True, slots=True, kw_only=True)
class Load(_Row):
    """Force or moment of the pipe on the steel (or equipment) at one point, in every state looked at.

    thermal, friction, weight : (states, rows), SI of `kind`; a working load, unfactored. A positive number acts
    `positive` ("east"), a negative one `negative`.
    """

    point: str
    name: str
    positive: str
    negative: str
    kind: str
    states: tuple[str, ...]
    thermal: Rows
    friction: Rows
    weight: Rows

    @property
    def total(self) -> Rows:
        return self.thermal + self.friction + self.weight

    @property
    def worst(self) -> Rows:
        """Index of the state of the greatest load, (rows,)."""
        return np.abs(self.total).argmax(axis=0)

    def greatest(self) -> Rows:
        """Greatest load with its sign, (rows,)."""
        total = np.asarray(self.total)
        return np.take_along_axis(total, np.asarray(self.worst)[None], axis=0)[0]

    def toward(self, value: float) -> str:
        """Direction in words of a load of one row."""
        return self.positive if value >= 0 else self.negative


@dataclass(frozen=True, slots=True, kw_only=True)
class Movement(_Row):
    """How far a point of the line moves from its installed place, in every state looked at, (states, rows) [m]."""

    point: str
    name: str
    positive: str
    negative: str
    states: tuple[str, ...]
    value: Rows


@dataclass(frozen=True, slots=True, kw_only=True)
class Remark(_Row):
    """A sentence with numbers. `text` has named places for `values`, each an SI number of a kind, (rows,).

    rows : mask of the rows that it concerns. serious : set apart on screen and paper.
    """

    text: str
    values: Mapping[str, tuple[Rows, str]]
    rows: Rows
    serious: bool = False

    def row(self, i: int) -> Self:
        values = {k: (np.broadcast_to(v, np.shape(self.rows))[i].item(), kind) for k, (v, kind) in self.values.items()}
        return replace(self, values=values, rows=bool(np.asarray(self.rows)[i]))

    def words(self, units: present.UnitSystem = "metric") -> str:
        """The sentence of a single row."""
        if not self.values:
            return self.text
        return self.text.format(**{k: present.text(v, kind, units) for k, (v, kind) in self.values.items()})


@dataclass(frozen=True, slots=True, kw_only=True)
class Shape(_Row):
    """The deformed line: points along the run and their movement in one state, (3, points, rows) [m]."""

    state: str
    points: Rows
    movement: Rows
    leg: tuple[int, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Along(_Row):
    """A quantity along the run: distance from the first end and value, (points, rows)."""

    key: str
    title: str
    kind: str
    distance: Rows
    value: Rows


@dataclass(frozen=True, slots=True, kw_only=True)
class Outcome:
    """The answer of one method for a design.

    outside : mask of the rows for which the method is outside its limits, `outside_reasons` say why, as remarks.
    results : line results by symbol, (rows,). A single design has one row; `row` gives floats.
    """

    design: Design
    method: str
    method_title: str
    checks: tuple[Check, ...]
    loads: tuple[Load, ...]
    movements: tuple[Movement, ...]
    results: Mapping[str, Rows]
    remarks: tuple[Remark, ...]
    outside: Rows
    outside_reasons: tuple[Remark, ...]
    steps: tuple[Step, ...] = ()
    shapes: tuple[Shape, ...] = ()
    along: tuple[Along, ...] = ()

    def row(self, i: int, design: Design | None = None) -> Self:
        """One row as floats; remarks that do not concern it are left out. `design` : that row, if at hand."""

        def concerned(remarks: tuple[Remark, ...]) -> tuple[Remark, ...]:
            return tuple(r.row(i) for r in remarks if np.asarray(r.rows)[i])

        return replace(
            self,
            design=design or self.design.row(i),
            checks=tuple(c.row(i) for c in self.checks),
            loads=tuple(v.row(i) for v in self.loads),
            movements=tuple(v.row(i) for v in self.movements),
            results={k: np.asarray(v)[..., i][()] for k, v in self.results.items()},
            remarks=concerned(self.remarks),
            outside=bool(np.asarray(self.outside)[i]),
            outside_reasons=concerned(self.outside_reasons),
            shapes=tuple(s.row(i) for s in self.shapes),
            along=tuple(s.row(i) for s in self.along),
        )

    def check(self, key: str) -> Check:
        """The check of that key."""
        return next(c for c in self.checks if c.key == key)

    @property
    def standing(self) -> Standing:
        """Whether the method is inside its limits for a single row."""
        return Standing.OUTSIDE if self.outside else Standing.INSIDE

    def worst(self) -> Check | None:
        """The judged check of the greatest ratio of a single row; None where none is judged."""
        judged = [c for c in self.checks if c.judged]
        return max(judged, key=lambda c: c.ratio) if judged else None

    @property
    def verdict(self) -> Verdict:
        """Headline of a single row: what is exceeded most decides the word."""
        worst = self.worst()
        if worst is not None and worst.exceeded and (worst is not self.leading or not self.outside):
            room = worst.concern in (Concern.ROOM, Concern.SHOE)
            return Verdict.NO_ROOM if room else Verdict.STIFF
        if self.outside or worst is None or not self.leading.judged:
            return Verdict.UNKNOWN
        return Verdict.FLEXIBLE

    @property
    def leading(self) -> Check:
        """The check for which the method exists: the stress range, or the screening value."""
        return self.checks[0]

    def ratio(self) -> Rows:
        """Greatest ratio of all judged checks, (rows,)."""
        ratios = [np.where(c.judged, c.ratio, 0.0) for c in self.checks]
        return np.max(ratios, axis=0)

    def adequate(self) -> Rows:
        """Whether every judged check holds and the method is inside its limits, (rows,)."""
        held = np.all([~np.asarray(c.exceeded) for c in self.checks], axis=0)
        return held & ~np.asarray(self.outside) & self.leading.judged


@dataclass(frozen=True, slots=True, kw_only=True)
class Rung(_Row):
    """One row of the ladder: a method, whether it is inside its limits, and what it says."""

    key: str
    title: str
    standing: Standing
    reason: str
    ratio: Rows
    leg: Rows
    anchor: Rows
    reference: bool = False
    """A comparison row: it has no rank and feeds no headline."""
    to_best: Rows = float("nan")
    """Its ratio over that of the reference, the highest method that answers."""
    at_leg: Rows = float("nan")
    """Ratio of the reference at the leg that this row asks."""
    unsafe: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Ladder:
    """All methods for one design, rule to beam."""

    design: Design
    rungs: tuple[Rung, ...]
    best: Outcome | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Turn(_Row):
    """Where the answer turns if one input alone is changed: its path, label and kind, present and turning value."""

    path: str
    label: str
    kind: str
    present: Rows
    turns: Rows


@dataclass(frozen=True, slots=True, kw_only=True)
class Fit:
    """What a fit found: the value and its outcome, or why none holds and what would help."""

    path: str
    value: float | None
    outcome: Outcome | None
    design: Design | None
    reason: str = ""
    help: str = ""

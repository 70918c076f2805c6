"""What a desk shows of an answer beside its picture: checks and bands as HTML, every text of it escaped."""

from collections.abc import Iterable, Sequence

import numpy as np

from pipeflex import present
from pipeflex.desks.answer import FOLLOWS
from pipeflex.desks.static import escaped
from pipeflex.model.outcome import Load, Outcome
from pipeflex.model.words import Judgement
from pipeflex.present import UnitSystem
from pipeflex.sheet import html, results
from pipeflex.sheet.page import Sheet

_LONGEST = 36
"""Longest text of a place that stands in one line; a longer one leaves the states to the tooltip."""
_LOADS = "Loads are working loads, unfactored, of the pipe on the steel."
_LOOKS = {Judgement.EXCEEDED: "pf-state pf-exceeded"}


def checks_table(outcome: Outcome, units: UnitSystem = "metric", left_out: Sequence[str] = ()) -> str:
    """Every check in one line: demand and limit, ratio, state, where; anchors with the parts of their force.

    left_out : labels for which there was no room in the picture above.
    """
    shown = zip(results.checks(outcome, units), outcome.checks, strict=True)
    lines = []
    for row, check in shown:
        where = row.where if len(row.where) <= _LONGEST else check.where
        if check.key.startswith("anchor") and (load := _along(outcome, int(check.key[-1]) - 1)) is not None:
            where = parts_in_words(load, units)
        waits = check.unjudged == FOLLOWS
        reason = row.reason if row.judgement is Judgement.NOT_JUDGED and not waits else ""
        cells = (
            ("pf-name", row.title),
            ("pf-number", _against(row.demand, row.limit)),
            ("pf-number", row.ratio),
            (_LOOKS.get(row.judgement, "pf-state"), FOLLOWS if waits else "" if reason else str(row.judgement)),
            ("pf-where", "; ".join(t for t in (reason, where) if t)),
        )
        inner = "".join(f'<td class="{name}">{escaped(text)}</td>' for name, text in cells)
        lines.append(f'<tr title="{escaped("; ".join(t for t in (row.where, row.reason) if t))}">{inner}</tr>')
    words = [_LOADS, f"No room in the picture for {', '.join(left_out)}."] if left_out else [_LOADS]
    caption = f"<caption>{escaped(' '.join(words))}</caption>"
    return f'<table class="pf-checks">{caption}<tbody>{"".join(lines)}</tbody></table>'


def _against(demand: str, limit: str) -> str:
    """Demand and limit with one unit where they share it."""
    if not demand or limit == "none given":
        return demand
    (number, _, unit), (_, _, other) = demand.partition("\u00a0"), limit.partition("\u00a0")
    return f"{number} / {limit}" if unit == other else f"{demand} / {limit}"


def _along(outcome: Outcome, end: int) -> Load | None:
    """The force of the pipe on an anchor along the run."""
    layout = outcome.design.layout
    point = f"anchor {layout.ends[end].name or ('first', 'last')[end]}"
    mine = [v for v in outcome.loads if v.point == point and v.kind == "force" and v.positive == layout.along]
    return mine[0] if mine else None


def parts_in_words(load: Load, units: UnitSystem) -> str:
    """Thermal part, friction and weight of the greatest force, and which way it goes."""
    i, total = int(load.worst), float(np.atleast_1d(load.greatest()).ravel()[0])
    sign = -1.0 if total < 0 else 1.0
    named = (("legs", load.thermal), ("friction", load.friction), ("weight", load.weight))
    parts = [(word, sign * float(values[i])) for word, values in named]
    said = [(w, v) for w, v in parts if w != "weight" or abs(v) > 0.005 * abs(total)]
    words = " + ".join(f"{w} {present.number(v, load.kind, units)}" for w, v in said)
    return f"{words}, to {load.toward(total)}"


def parts(sheet: Sheet, names: Iterable[str]) -> str:
    """Parts of the sheet as the bands of a desk show them."""
    inner = "".join(f"<div>{sheet.part(name)}</div>" for name in names)
    return f'<div class="pipeflex"><style>{html.style()}</style>{inner}</div>' if inner else ""

"""Columns with a field varied, and what is found with them: a fit, and where the answer turns."""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from typing import Any, Final

import numpy as np

from pipeflex.errors import Fault, InputError, MissingInput, PipeflexError, refuse
from pipeflex.methods.solving import method, solve
from pipeflex.model.design import Design
from pipeflex.model.fields import SPEC, FrozenMap, Number
from pipeflex.model.layout import SIZE_WORDS
from pipeflex.model.outcome import Fit, Outcome, Turn
from pipeflex.model.record import at, put
from pipeflex.present import UnitSystem, percent, text

LONGEST: Final = 12.0
"""Longest leg that a fit tries [m]."""
LEG_STEP: Final = 0.05
"""Step to which a fitted length is rounded up [m]; 2 in for U.S. display."""
_FARTHEST: Final = 3 * LONGEST
_GUIDES, _LENGTHS = 40, 60
_VERIFIED: Final = 40
"""How many values that hold in a column are tried as single designs."""
_GRID: Final = 65
_ROUNDS: Final = 4


def vary(design: Design, path: str, values: Any) -> Design:
    """A column of designs with one number varied: a map is the column of a column.

    Parameters
    ----------
    design : a single design, or a column of as many rows as there are values.
    path : dotted path of a number ("layout.sizes.leg", "duty.cases.operating.temperature").
    values : (rows,) SI numbers.

    Raises
    ------
    InputError
        No such field, or a value outside its range; names the rows.
    """
    values = np.asarray(values, float)
    if values.ndim != 1:
        raise InputError(Fault(path, f"values with {values.ndim} axes", allowed="one value a row"))
    return put(design, path, values)


def sift(
    design: Design, answer: Callable[[Design], Outcome]
) -> tuple[Outcome | None, np.ndarray, tuple[PipeflexError, ...]]:
    """Answer a column without the rows at fault.

    Returns
    -------
    outcome, rows that were kept (indices), and the errors met, at most one pass for each kind of error; None
    where no row is left.
    """
    kept = np.arange(design.rows or 1)
    errors: list[PipeflexError] = []
    while len(kept):
        try:
            return answer(design), kept, tuple(errors)
        except PipeflexError as error:
            bad = sorted({r for fault in error.faults for r in fault.rows})
            if not bad and len(kept) == 1:
                bad = [0]
            if not bad:
                raise
            errors.append(error)
            good = np.setdiff1d(np.arange(len(kept)), bad)
            kept = kept[good]
            design = design.taken(good)
    return None, kept, tuple(errors)


def tried(design: Design, path: str, values: np.ndarray, key: str | None = None) -> tuple[np.ndarray, Outcome | None]:
    """Outcome of a design for those values of one number that can be answered, and these values."""
    values = np.asarray(values, float)
    while len(values):
        try:
            column = vary(design, path, values)
            break
        except InputError as error:
            bad = {r for fault in error.faults for r in fault.rows}
            if not bad and len(values) > 1:
                raise
            values = np.delete(values, sorted(bad) or [0])
    else:
        return values, None
    outcome, kept, _ = sift(column, lambda d: solve(d, key))
    return values[kept], outcome


def fit(
    design: Design,
    path: str = "layout.sizes.leg",
    *,
    target: float | None = None,
    step: float = LEG_STEP,
    longest: float | None = None,
    key: str | None = None,
    units: UnitSystem = "metric",
) -> Fit:
    """The first adequate value of one length past the stress peak, rounded up to a step.

    Target on the stress, every other judged check at 1.00. Searches one step to the room, or 12 m.

    Parameters
    ----------
    path : length to be fitted: a size, or "layout.first_guide".
    target : greatest ratio of the leading check; the design's own by default.
    step : values tried are its multiples [m].
    longest : end of the search [m].
    key : method; the highest by default.
    units : of the numbers in `reason` and `help`.

    Returns
    -------
    Fit
        With `value` absent where none holds, and what would help instead.
    """
    if target is None:
        target = float(design.limits.target)
    refuse(
        InputError,
        (not (math.isfinite(step) and 0 < step <= LONGEST), Fault("step", step, "above zero", "length", high=LONGEST)),
        (not 0 < target <= 1, Fault("target", target, "above zero", "ratio", high=1.0)),
    )
    end = _end(design, path) if longest is None else longest
    asked = _Asked(design, path, target, step, key, units)
    values, outcome = tried(design, path, _steps(step, end), key)
    for i in [] if outcome is None else _adequate(outcome, target)[:_VERIFIED].tolist():
        value = round(float(values[i]), 9)
        chosen = put(design, path, value)
        # rests, their friction and the sustained stress are known to a single design only
        single = solve(chosen, key)
        if single.adequate() and single.leading.ratio <= target:
            return Fit(path=path, value=value, outcome=single, design=chosen)
    within = "within the room of" if longest is None and end == design.limits.room else "up to"
    reason = f"No {_label(path).lower()} {within} {asked.length(end)} holds at the target of {percent(target)}."
    return Fit(path=path, value=None, outcome=None, design=None, reason=reason, help=_help(asked, outcome))


@dataclass(frozen=True, slots=True)
class _Asked:
    """What a fit was asked."""

    design: Design
    path: str
    target: float
    step: float
    key: str | None
    units: UnitSystem

    def length(self, value: float) -> str:
        return text(value, "length", self.units)


def _steps(step: float, end: float) -> np.ndarray:
    """Multiples of a step up to an end."""
    return step * np.arange(1, int(end / step + 1e-9) + 1)


def _end(design: Design, path: str) -> float:
    """How far a fit searches: to the room for a size of a loop, to the anchor for a guide, 12 m at most [m]."""
    if path == "layout.first_guide":
        return min(LONGEST, float(design.layout.leg_lengths()[[0, -1]].min()))
    return min(float(design.limits.room), LONGEST)


def _adequate(outcome: Outcome, target: float) -> np.ndarray:
    """Indices of the values past the peak of the leading ratio that meet the target and all other checks."""
    leading = np.asarray(outcome.leading.ratio)
    good = np.asarray(outcome.adequate()) & (leading <= target)
    peak = int(np.where(np.asarray(outcome.outside), -1.0, leading).argmax())
    return np.flatnonzero(good & (np.arange(len(good)) >= peak))


def _help(asked: _Asked, outcome: Outcome | None) -> str:
    """What would help where no value holds: a longer one with more room, or a guide farther off."""
    words, design = _label(asked.path).lower(), asked.design
    free = replace_limits(design, room=math.inf)
    values, wide = tried(free, asked.path, _steps(asked.step, _FARTHEST), asked.key)
    hits = np.zeros(0, int) if wide is None else _adequate(wide, asked.target)
    if wide is not None and len(hits):
        found = int(hits[0])
        taken = float(np.asarray(wide.check("room").demand)[found]) if len(wide.checks) > 1 else 0.0
        room = f"; it takes a room of {asked.length(taken)}" if taken > design.limits.room else ""
        return f"A {words} of {asked.length(float(values[found]))} would{room}."
    if lever := _guide_lever(asked, free):
        return lever
    if outcome is None:
        return "No value of it makes a run that can be answered."
    last = outcome.row(-1)
    if last.outside:
        return "; ".join(r.words(asked.units) for r in last.outside_reasons) + "."
    worst = last.worst()
    return f"{worst.title} stays at {percent(float(worst.ratio))}: the {words} is no lever." if worst else ""


def _guide_lever(asked: _Asked, free: Design) -> str:
    """The nearest distance of the first guide at which some value of the fitted length holds, and that value."""
    layout = free.layout
    if layout.first_guide is None or asked.path == "layout.first_guide":
        return ""
    present = float(layout.first_guide)
    guides = np.unique(np.ceil(np.linspace(present, max(LONGEST, present), _GUIDES) / asked.step) * asked.step)
    lengths = _steps(max(asked.step, LONGEST / _LENGTHS), LONGEST)
    guide, length = (v.ravel() for v in np.meshgrid(guides, lengths, indexing="ij"))
    kept, column = _placed(free, asked.path, length, "layout.first_guide", guide)
    outcome, rows, _ = sift(column, lambda d: solve(d, asked.key)) if column is not None else (None, kept, ())
    if outcome is None:
        return ""
    leading = np.asarray(outcome.leading.ratio)
    good = (leading <= asked.target) & np.asarray(outcome.adequate())
    if not good.any():
        return ""
    first = np.flatnonzero(good)
    guide, length = guide[kept][rows], length[kept][rows]
    at_guide = guide[first].min()
    value = length[first][guide[first] == at_guide].min()
    word = _label(asked.path).lower()
    return (
        f"The guide is the lever: with the first guide at {asked.length(float(at_guide))} or farther, "
        f"a {word} of {asked.length(float(value))} holds."
    )


def _placed(
    design: Design, path: str, values: np.ndarray, other: str, others: np.ndarray
) -> tuple[np.ndarray, Design | None]:
    """A column with two lengths varied, without the pairs that make no layout; their indices."""
    kept = np.arange(len(values))
    while len(kept):
        try:
            wide = vary(design.column().taken(np.zeros(len(kept), int)), path, values[kept])
            return kept, vary(wide, other, others[kept])
        except InputError as error:
            bad = sorted({r for fault in error.faults for r in fault.rows})
            if not bad:
                raise
            kept = np.delete(kept, bad)
    return kept, None


def replace_limits(design: Design, **changes: Any) -> Design:
    """A design with site limits changed."""
    return replace(design, limits=replace(design.limits, **changes))


def _label(path: str) -> str:
    name = path.rpartition(".")[2]
    return SIZE_WORDS.get(name, name.replace("_", " ").capitalize())


def _kind(design: Design, path: str) -> str:
    """Kind of quantity of a number at a path."""
    parent_path, _, name = path.rpartition(".")
    parent = at(design, parent_path) if parent_path else design
    if isinstance(parent, FrozenMap):
        return "length"
    spec = next(f.metadata[SPEC] for f in parent.__dataclass_fields__.values() if f.name == name)
    assert isinstance(spec, Number)
    return spec.kind


def reserve(design: Design, paths: Sequence[str] | None = None, key: str | None = None) -> tuple[Turn, ...]:
    """Where the answer turns, one input at a time: the value nearest to the present one at which it changes.

    Parameters
    ----------
    paths : numbers to vary; the hottest case, the leg and the run by default.
    key : method; the one that answers the design by default.

    Returns
    -------
    tuple of Turn
        `turns` is not a number where the answer does not turn within the searched range.
    """
    outcome = solve(design, key)
    used = method(outcome.method).key if key is None else key
    state = bool(outcome.adequate())
    # columns know neither rests nor their friction: where they disagree today no turning value is told
    agrees = bool(np.all(solve(design.column(), used).adequate() == state))
    turns = []
    for path in paths if paths is not None else _usual(design):
        present = at(design, path)
        if present is None:
            raise MissingInput(Fault(path, None, allowed="a value to start from"))
        kind = _kind(design, path)
        low, high = _range(design, path, float(present), kind)
        found = _turn(design, path, float(present), low, high, state, used) if agrees else math.nan
        turns.append(Turn(path=path, label=_turn_label(path), kind=kind, present=float(present), turns=found))
    return tuple(turns)


def _turn_label(path: str) -> str:
    parts = path.split(".")
    return f"{parts[2]}, metal temperature" if parts[:2] == ["duty", "cases"] else _label(path)


def _usual(design: Design) -> tuple[str, ...]:
    hottest = int(design.temperatures()[:, 0].argmax())
    sizes = tuple(f"layout.sizes.{name}" for name in ("leg", "run") if name in design.layout.sizes)
    return (f"duty.cases.{design.duty.cases[hottest].name}.temperature", *sizes)


def _range(design: Design, path: str, present: float, kind: str) -> tuple[float, float]:
    if kind == "temperature":
        curve = design.pipe.material.expansion
        return float(design.coldest()[0]) + 1.0, float(curve.temperature[-1])
    return present * 0.05, present * 4.0


def _turn(design: Design, path: str, present: float, low: float, high: float, state: bool, key: str) -> float:
    """Nearest value at which the answer turns, by columns of trial values narrowed around the first change."""
    best = math.nan
    for far in (low, high):
        near, end = present, far
        for _ in range(_ROUNDS):
            trial = np.linspace(near, end, _GRID)[1:]
            held, outcome = tried(design, path, trial, key)
            if outcome is None:
                break
            changed = np.flatnonzero(np.asarray(outcome.adequate()) != state)
            if not len(changed):
                break
            i = int(changed[0])
            near, end = (float(held[i - 1]) if i else near), float(held[i])
        else:
            if math.isnan(best) or abs(end - present) < abs(best - present):
                best = end
    return best

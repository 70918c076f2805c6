"""Checks, loads, movements, ladder and turning values as rows of text."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from pipeflex import present
from pipeflex.model.outcome import Check, Ladder, Load, Outcome, Turn
from pipeflex.model.words import Judgement
from pipeflex.present import UNIT_SYSTEMS, UnitSystem
from pipeflex.sheet.numbers import alike

_NOTHING = "\u2013"


@dataclass(frozen=True, slots=True)
class CheckRow:
    """One check: demand and limit with their unit, ratio, state word, reason or note, place and states."""

    title: str
    demand: str
    limit: str
    ratio: str
    judgement: Judgement
    reason: str
    where: str


def checks(outcome: Outcome, units: UnitSystem = "metric") -> tuple[CheckRow, ...]:
    """The checks of a single row."""
    return tuple(_check(c, units) for c in outcome.checks)


def _check(check: Check, units: UnitSystem) -> CheckRow:
    limit, demand = float(check.limit), float(check.demand)
    known = not check.unjudged
    return CheckRow(
        title=check.title,
        demand=present.text(demand, check.kind, units) if known else "",
        limit=present.text(limit, check.kind, units) if math.isfinite(limit) else "none given",
        ratio=present.percent(float(check.ratio)) if check.judged else "",
        judgement=check.judgement,
        reason="; ".join(t for t in (check.reason, check.note) if t),
        where=", ".join(t for t in (check.where, check.states) if t) if known else "",
    )


@dataclass(frozen=True, slots=True)
class LoadRow:
    """The greatest of one load: direction in words, and thermal part, friction, weight and sum in each unit system.

    The parts are counted along the direction of the sum. `alone` : the point has no other load.
    """

    point: str
    direction: str
    state: str
    parts: tuple[tuple[str, ...], ...]
    alone: bool


@dataclass(frozen=True, slots=True)
class LoadStates:
    """One load in every state: thermal part, friction, weight and sum, positive as the heading says."""

    heading: str
    states: tuple[tuple[str, ...], ...]


def loads(outcome: Outcome, units: UnitSystem = "metric") -> tuple[LoadRow, ...]:
    """The greatest of every load of a single row."""
    points = [load.point for load in outcome.loads]
    return tuple(_greatest(load, units, points.count(load.point) == 1) for load in outcome.loads)


def _both(units: UnitSystem) -> tuple[UnitSystem, ...]:
    """Both unit systems, that of the sheet first."""
    return (units, *(u for u in UNIT_SYSTEMS if u != units))


def _columns(load: Load) -> np.ndarray:
    """Thermal part, friction, weight and sum, (states, 4)."""
    return np.stack([np.atleast_1d(v) for v in (load.thermal, load.friction, load.weight, load.total)], axis=1)


def _greatest(load: Load, units: UnitSystem, alone: bool) -> LoadRow:
    i = int(load.worst)
    numbers = _columns(load)[i]
    total = float(numbers[-1])
    signed = [float(v) for v in numbers * (-1.0 if total < 0 else 1.0)]
    parts = tuple(tuple(alike(signed, load.kind, u)) for u in _both(units))
    return LoadRow(load.point, f"{load.name}, {load.toward(total)}", load.states[i], parts, alone)


def changing_loads(outcome: Outcome, units: UnitSystem = "metric") -> tuple[LoadStates, ...]:
    """The loads of a single row in every state; those that print alike in all states are left out."""
    every = (_in_states(load, units) for load in outcome.loads)
    return tuple(load for load in every if len({row[1:] for row in load.states}) > 1)


def _in_states(load: Load, units: UnitSystem) -> LoadStates:
    numbers = _columns(load)
    flat = alike([float(v) for v in numbers.ravel()], load.kind, units)
    rows = tuple((state, *flat[4 * i : 4 * i + 4]) for i, state in enumerate(load.states))
    return LoadStates(f"{load.point}, {load.name}, positive {load.positive}", rows)


def load_terms(outcome: Outcome, units: UnitSystem = "metric") -> str:
    """What every load table must say."""
    friction = present.number(float(outcome.design.layout.friction), "ratio", units, 2)
    return (
        "Working loads, unfactored, of the pipe on the steel (or equipment). "
        f"Friction factor {friction}; thermal part, friction and weight apart, in each state of the line."
    )


@dataclass(frozen=True, slots=True)
class MovementRow:
    """How far a point moves from its installed place, in one state."""

    point: str
    direction: str
    state: str
    values: tuple[str, ...]


def movements(outcome: Outcome, units: UnitSystem = "metric") -> tuple[MovementRow, ...]:
    """The greatest movement of each point of a single row."""
    rows = []
    for m in outcome.movements:
        values = np.atleast_1d(m.value)
        i = int(np.abs(values).argmax())
        value = float(values[i])
        texts = tuple(present.text(abs(value), "movement", u) for u in _both(units))
        rows.append(MovementRow(m.point, m.positive if value >= 0 else m.negative, m.states[i], texts))
    return tuple(rows)


@dataclass(frozen=True, slots=True)
class RungRow:
    """One method of the ladder; `chosen` is the one that answers, `reference` a comparison without rank."""

    title: str
    standing: str
    ratio: str
    leg: str
    at_leg: str
    anchor: str
    remark: str
    chosen: bool
    reference: bool


def rungs(ladder: Ladder, outcome: Outcome, units: UnitSystem = "metric") -> tuple[RungRow, ...]:
    """The ladder as rows."""

    def shown(value: float, kind: str) -> str:
        return present.text(value, kind, units) if math.isfinite(value) else _NOTHING

    def part(value: float) -> str:
        return present.percent(value) if math.isfinite(value) else _NOTHING

    return tuple(
        RungRow(
            title=r.title,
            standing="comparison" if r.reference else str(r.standing),
            ratio=part(float(r.ratio)),
            leg=shown(float(r.leg), "length"),
            at_leg=part(float(r.at_leg)),
            anchor=shown(float(r.anchor), "force"),
            remark="; ".join(t for t in (r.reason, r.unsafe) if t),
            chosen=r.key == outcome.method,
            reference=r.reference,
        )
        for r in ladder.rungs
    )


def turns(found: Sequence[Turn], units: UnitSystem = "metric") -> tuple[tuple[str, str, str], ...]:
    """Label, present value and turning value of each input that turns the answer alone."""
    return tuple(
        (t.label, present.text(float(t.present), t.kind, units), present.text(float(t.turns), t.kind, units))
        for t in found
        if math.isfinite(float(t.turns))
    )

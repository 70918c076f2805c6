"""What ends and supports feel: thermal, friction and weight apart, in every state looked at.

Friction never helps: the frictionless answer and that with the upper friction factor are both solved, heating up and
cooling down, and the worse of each load counts.
"""

from dataclasses import dataclass, field
from typing import Any, Final

import numpy as np

from pipeflex.mechanics.beam import Answer, Moments, Settled, States, moments, settle
from pipeflex.mechanics.beam.elements import chunks, elements, holds
from pipeflex.methods.basis import Basis, remark
from pipeflex.methods.beam_model import Model, bows, build, end_movements, modulus_ratio, strains
from pipeflex.methods.common import direction_words, side_friction
from pipeflex.model.design import Design
from pipeflex.model.outcome import Load, Remark
from pipeflex.model.words import State

Rows = np.ndarray

_NOTHING: Final = 1e-7
_STEPS: Final = 8
"""Steps from one state to the next of a history with friction: anchor loads within 0.1 % of those of sixteen steps,
side loads of guides within some 3 %."""
_BALANCED: Final = 1e-5
"""Force left over, as a part of the greatest on an end, below which a state counts as converged."""
_TURNS: Final = ("seen from {}", "anticlockwise ", "clockwise ")


@dataclass(slots=True)
class Parts:
    """Forces (and moments) on one point by state: thermal, friction, weight, each (state, component, rows)."""

    thermal: Rows
    friction: Rows
    weight: Rows


@dataclass(slots=True)
class Felt:
    """Loads of all points, and what the history told beside them."""

    states: tuple[str, ...]
    ends: tuple[Parts, Parts]
    holds: Parts
    remarks: list[Remark] = field(default_factory=list)
    weighed: list[tuple[str, Model, Moments]] = field(default_factory=list)
    """Support states in which weight alone acts, with the moments of its first state."""
    converged: bool = True
    contacts: Answer | None = None
    """A frictionless history, gaps and rests as they act; weight in all states."""


def plain_loads(design: Design, basis: Basis, model: Model, answer: Answer, names: tuple[str, ...], R_E: Rows) -> Felt:
    """Loads of a column: the linear answer scaled to each state, and friction of the weight as a sum on each side.

    answer : of the states named, at E_a; or of a growth of one, when there is a single state.
    R_E : modulus of each state over E_a, (states, rows).
    """

    share = (basis.case_growth * R_E if model.uniform else R_E)[:, None]

    def scaled(values: Rows) -> Rows:
        return np.asarray(values * share)

    both = [scaled(answer.end_a), scaled(answer.end_b)]
    held = scaled(answer.hold_force)
    rub = side_friction(design, basis)
    ends = []
    for thermal, leg, force in zip(both, (0, -1), rub, strict=True):
        t = np.repeat(thermal, 2, axis=0)
        friction = np.zeros_like(t)
        along = basis.vectors[:, leg] / basis.lengths[leg]
        sign = np.sign((thermal[:, :3] * along).sum(axis=1))
        push = np.where(sign == 0, 1.0, sign)[:, None] * along * force
        friction[0::2, :3], friction[1::2, :3] = push, -push
        ends.append(Parts(t, friction, np.zeros_like(t)))
    states = tuple(f"{n}, friction {way}" for n in names for way in ("adding", "relieving"))
    zeros = np.zeros_like(np.repeat(held, 2, axis=0))
    return Felt(states, (ends[0], ends[1]), Parts(np.repeat(held, 2, axis=0), zeros, zeros))


def settled_loads(design: Design, basis: Basis, factors: list[Any]) -> tuple[Felt, Model]:
    """Loads of a single design with its rests, gaps and friction, along two histories: tied in cold, tied in hot."""
    model = build(design, basis, factors, rests=True)
    histories = _histories(design, basis)
    names: list[str] = []
    parts: list[tuple[Parts, Parts, Parts]] = []
    felt_remarks: list[Remark] = []
    weighed: list[tuple[str, Model, Moments]] = []
    contacts: Answer | None = None
    unsettled = False
    for labels, states, R_E in histories:
        without = settle(model.run, states, steps=1, rubbing=False)  # nothing is locked in without friction
        with_ = settle(model.run, states, steps=_STEPS)
        for one, mu in ((without, "without friction"), (with_, "with friction")):
            told = _unsettled(one, labels, mu)
            unsettled = unsettled or bool(told)
            felt_remarks += told
        parts.append(_apart(without, with_, R_E))
        names += labels[1:]
        first = len(design.duty.cases)
        parts.append(_frictionless(parts[-1], first))
        names += [f"{label}, without friction" for label in labels[1 : first + 1]]
        if contacts is None:
            contacts = without.answer
            weighed.append(("all rests carrying", model, moments(contacts)))
        lifted = _without_lifted(model, without, basis, design, factors)
        if lifted is not None:
            weighed.append(lifted)
            felt_remarks.append(remark("A rest lifts: the sustained stress without it is judged too."))
    joined = [
        Parts(*(np.concatenate([getattr(p[i], n) for p in parts]) for n in ("thermal", "friction", "weight")))
        for i in range(3)
    ]
    felt = Felt(tuple(names), (joined[0], joined[1]), joined[2], felt_remarks, weighed, not unsettled, contacts)
    return felt, model


def _histories(design: Design, basis: Basis) -> list[tuple[list[str], States, Rows]]:
    """Names, states and E_m/E_a of two histories: the run as laid, its cases, and what stays locked in afterwards."""
    every = strains(design, basis)
    cases, ties = every[:-2], every[-2:]
    move_a, move_b = end_movements(design)
    order = np.argsort(-cases[:, 0, 0], kind="stable").tolist()
    R = modulus_ratio(design, basis)
    found = []
    for tie, going, day in ((0, order, "coldest"), (1, order[::-1], "hottest")):
        visits = [*going, going[0]] if len(going) > 1 else going
        names, before = [f"tied in on the {day} day"], ties[tie][0, 0]
        for n, c in enumerate(visits):
            way = State.HEATING if cases[c, 0, 0] > before else State.COOLING
            again = " again" if n == len(going) else ""
            names.append(f"{design.duty.cases[c].name}, {way}{again}, tied in on the {day} day")
            before = cases[c, 0, 0]
        names.append(f"{State.INSTALLED} again, tied in on the {day} day")
        still, cold = np.zeros((1, 6, 1)), np.zeros((1, *ties.shape[1:]))
        bow = bows(design)
        if bow is not None:
            level = np.zeros((1, *bow.shape[1:]))
            bow = np.concatenate([level, bow[visits], level])
        states = States(
            strain=np.concatenate([cold, cases[visits] - ties[tie], cold]),
            bow=bow,
            weight=1.0,
            movement_a=np.concatenate([still, move_a[visits], still]),
            movement_b=np.concatenate([still, move_b[visits], still]),
        )
        found.append((names, states, np.concatenate([R[visits], np.ones_like(R[:1])])))
        if np.array_equal(ties[0], ties[1]):
            break
    return found


def _apart(without: Settled, with_: Settled, R_E: Rows) -> tuple[Parts, Parts, Parts]:
    """Thermal, friction and weight of both ends and all holds; the modulus of the state goes with the thermal part."""

    def part(smooth: Rows, rough: Rows) -> Parts:
        weight = np.broadcast_to(smooth[:1], smooth[1:].shape)
        thermal = (smooth[1:] - smooth[:1]) * R_E[:, None]
        return Parts(thermal, rough[1:] - smooth[1:], weight)

    a, b = without.answer, with_.answer
    return part(a.end_a, b.end_a), part(a.end_b, b.end_b), part(a.hold_force, b.hold_force)


def _frictionless(parts: tuple[Parts, Parts, Parts], first: int) -> tuple[Parts, Parts, Parts]:
    """The first states without their friction: where friction relieves a load it must not be counted on."""
    still = [Parts(p.thermal[:first], np.zeros_like(p.friction[:first]), p.weight[:first]) for p in parts]
    return still[0], still[1], still[2]


def _unsettled(found: Settled, labels: list[str], mu: str) -> list[Remark]:
    largest = float(np.abs(found.answer.end_a[:, :3]).max(initial=0.0))
    if found.converged.all() or found.left.max() <= _BALANCED * largest:
        return []
    i = int(np.argmin(found.converged))
    text = f"Not converged, {mu}, {labels[i]}: force left over {{left}}."
    return [remark(text, True, True, left=(float(found.left.max()), "force"))]


def _without_lifted(
    model: Model, found: Settled, basis: Basis, design: Design, factors: list[Any]
) -> tuple[str, Model, Moments] | None:
    """Moments of the weight once the rests that lift in any state carry nothing."""
    gone = found.lifted[1:].any(axis=0) & ~found.lifted[0]
    tags = [model.run.supports[i].tag for i in model.rests if gone[i]]
    if not tags:
        return None
    left = build(design, basis, factors, rests=True, without=tags)
    held = settle(left.run, States(strain=np.zeros((1, left.run.pieces, 1)), weight=1.0), rubbing=False)
    return "without the rests that lift", left, moments(held.answer)


def loads_of(design: Design, model: Model, felt: Felt) -> tuple[Load, ...]:
    """Loads of both ends and every support that feels anything."""
    found: list[Load] = []
    scale = max(float(np.abs(p.thermal + p.friction + p.weight)[:, :3].max(initial=0.0)) for p in felt.ends)
    for i, parts in enumerate(felt.ends):
        point = f"anchor {design.layout.ends[i].name or ('first', 'last')[i]}"
        for d in range(6):
            name, kind = ("force", "force") if d < 3 else ("moment", "moment")
            positive, negative = (
                (direction_words(design, d), direction_words(design, d, back=True))
                if d < 3
                else _turning(design, d - 3)
            )
            made = _load(point, name, positive, negative, kind, felt.states, parts, d, scale)
            if float(np.abs(made.total).max(initial=0.0)) > _NOTHING * scale:
                found.append(made)
    return (*found, *_support_loads(design, model, felt, scale))


def _load(
    point: str,
    name: str,
    positive: str,
    negative: str,
    kind: str,
    states: tuple[str, ...],
    parts: Parts,
    d: int,
    scale: float,
) -> Load:
    """One component of the load on one point; what rounding leaves of nothing is nothing."""

    def clean(values: Rows) -> Rows:
        return np.where(np.abs(values) > _NOTHING * scale, values, 0.0) if values.any() else values

    return Load(
        point=point, name=name, positive=positive, negative=negative, kind=kind, states=states,
        thermal=clean(parts.thermal[:, d]), friction=clean(parts.friction[:, d]), weight=clean(parts.weight[:, d]),
    )  # fmt: skip


def _turning(design: Design, d: int) -> tuple[str, str]:
    seen = _TURNS[0].format(("the " if d < 2 else "") + (direction_words(design, d) if d < 2 else "above"))
    return _TURNS[1] + seen, _TURNS[2] + seen


def _support_loads(design: Design, model: Model, felt: Felt, scale: float) -> list[Load]:
    """Load along each hold of each support."""
    run = model.run
    if not run.supports:
        return []
    made = elements(run, chunks(run)[0])
    unit = holds(run, made).unit
    found, at = [], 0
    for support in run.supports:
        for _hold in support.holds:
            direction = unit[:, at, 0]
            d = int(np.abs(direction).argmax())
            back = bool(direction[d] < 0)
            load = _load(
                support.tag, "force", direction_words(design, d, back), direction_words(design, d, not back), "force",
                felt.states, felt.holds, at, scale,
            )  # fmt: skip
            if float(np.abs(load.total).max(initial=0.0)) > _NOTHING * scale:
                found.append(load)
            at += 1
    return found

"""The guided cantilever: one rule for all right-angled runs.

Each leg square to a movement bends like a beam whose ends stay parallel; parallel legs share the movement by
l^3. The rule knows no bend flexibility, no stress intensification and not the stub between corner and guide.
"""

from dataclasses import dataclass
from typing import Any, Final

import numpy as np

from pipeflex.errors import Fault, ScopeError
from pipeflex.mechanics import cantilever, expansion, support
from pipeflex.methods.basis import Basis, remark
from pipeflex.methods.common import (
    Outside,
    anchor_checks,
    direction_words,
    friction_reach,
    guide_check,
    held_rigidly,
    leg_names,
    room_check,
    shoe_alarm,
    shoe_check,
    unseen,
)
from pipeflex.model.design import Design
from pipeflex.model.layout import SHAPES
from pipeflex.model.outcome import Check, Load, Movement, Outcome
from pipeflex.model.words import Concern, State
from pipeflex.trace import Calc

KEY: Final = "guided_cantilever"
TITLE: Final = "guided cantilever"
_SQUARE = 1e-6


@dataclass(slots=True)
class Legs:
    """A right-angled run. Index arrays `leg` and `way` list each leg with each movement square to it."""

    lengths: np.ndarray
    """(legs, rows) [m]"""
    apart: np.ndarray
    """Distance of the ends in the three directions with its sign, (3, rows) [m]"""
    axis: np.ndarray
    """Direction of each leg, (legs,)"""
    leg: np.ndarray
    way: np.ndarray
    cubes: np.ndarray
    """Sum of l^3 of the legs square to each direction, (3, rows) [m3]"""


def legs_of(design: Design, basis: Basis) -> Legs:
    """The legs of a right-angled run.

    Raises
    ------
    ScopeError
        Legs that are not square to each other, or a run without a leg that could take the growth.
    """
    vectors, lengths, apart = basis.vectors, basis.lengths, basis.apart
    axis = np.asarray(np.abs(vectors[:, :, 0]).argmax(axis=0))
    along = np.abs(np.take_along_axis(vectors, axis[None, :, None], axis=0)[0])
    skew = along < lengths * (1 - _SQUARE)
    if skew.any():
        first = int(skew.any(axis=1).argmax()) + 1
        raise ScopeError(Fault(f"layout, leg {first}", "a leg at a slant", allowed="legs square to each other"))
    moves = (np.abs(apart) > _SQUARE).any(axis=1)
    square = moves[:, None] & (axis[None] != np.arange(3)[:, None])
    way, leg = np.nonzero(square)
    stiff = moves & ~square.any(axis=1)
    if stiff.any():
        raise ScopeError(
            Fault("layout.shape", SHAPES[design.layout.shape].title, allowed="a run with a leg square to its growth")
        )
    cubes = np.stack([(lengths[square[d]] ** 3).sum(axis=0) for d in range(3)])
    return Legs(lengths, apart, axis, leg, way, cubes)


def limits(design: Design, basis: Basis) -> Outside:
    """Where the rule is outside its limits, and why."""
    outside = Outside(design.rows or 1)
    layout = design.layout
    unseen(design, outside)
    for s in layout.supports:
        between = s.kind == "line stop" or (s.kind == "guide" and 1 < s.leg < layout.leg_count)
        outside.add(f"A {s.kind} on leg {s.leg} between the ends", between)
    for corner in layout.corners:
        outside.note(f"The rule does not see the stress intensification of corners ({corner.kind}).",
                     corner.kind not in ("bend", "square"))  # fmt: skip
    if not layout.shape.endswith("U"):
        _near_guide(design, basis, outside)
    return outside


def _near_guide(design: Design, basis: Basis, outside: Outside) -> None:
    """Any run but a loop whose first guide stands too near is outside: the stub between corner and guide is unseen."""
    layout = design.layout
    lengths = basis.lengths
    ends = {1: 0, layout.leg_count: layout.leg_count - 1}
    for leg, i in ends.items():
        square = lengths[1 if leg == 1 else layout.leg_count - 2]
        needed = cantilever.guide_distance_needed(basis.E_a, basis.D_o, basis.e, square, basis.S_A)
        near = [lengths[i] - s.distance if leg == 1 else np.asarray(s.distance)
                for s in layout.supports if s.kind == "guide" and s.leg == leg]  # fmt: skip
        first = layout.first_guide if layout.first_guide is not None else layout.guide_spacing
        if first is not None:
            near.append(np.asarray(first))
        for distance in near:
            outside.add(
                f"The first guide on leg {leg} stands {{g}} from its corner, nearer than {{need}}",
                distance < needed, g=(distance, "length"), need=(needed, "length"),
            )  # fmt: skip


def run(design: Design, basis: Basis, calc: Calc) -> Outcome:
    """Answer of the rule for a column."""
    legs = legs_of(design, basis)
    names = leg_names(design)
    outside = limits(design, basis)
    calc.say("Guided cantilever", heading=True)
    stress, worst, delta = _stress(design, basis, legs, names, calc)
    l_req = calc(
        cantilever.leg_needed, E_a=basis.E_a, D_o=basis.D_o,
        delta=np.take_along_axis(delta, worst[None], axis=0)[0], S_A=basis.S_A,
    )  # fmt: skip
    loads, anchors = _anchors(design, basis, legs, calc)
    room, shoe = room_check(design, basis, calc), shoe_check(design, basis)
    checks = (
        Check(
            key="range", title="Range, bending stress S of the rule", concern=Concern.STRESS, kind="stress",
            demand=stress, limit=basis.S_A, places=tuple(names[i] for i in legs.leg), place=worst,
            states=f"{State.COLDEST} to {State.HOTTEST}",
        ),
        room,
        shoe,
        *anchors,
        guide_check(design),
    )  # fmt: skip
    results = {name: basis.pool[name] for name in ("w", "e", "E_a", "S_A", "f", "I", "Z")}
    governing = np.take_along_axis(legs.lengths[legs.leg], worst[None], axis=0)[0]
    results |= {"l_req": l_req, "l": governing, "S": stress} | held_rigidly(design, basis, calc)
    severe = design.code.severe_cyclic
    remarks = [*basis.remarks, *outside.notes, shoe_alarm(design, shoe)]
    if severe is not None:
        remarks.append(
            remark("Cyclic conditions may be severe (the range above 0.8 S_A and more than 7000 cycles): "
                   "the code asks more.", severe(stress, basis.S_A, basis.pool["N"]), True)
        )  # fmt: skip
    return Outcome(
        design=design, method=KEY, method_title=TITLE, checks=checks, loads=loads,
        movements=_movements(design, basis, legs), results=results, remarks=tuple(remarks),
        outside=outside.mask, outside_reasons=tuple(outside.reasons),
    )  # fmt: skip


def _stress(
    design: Design, basis: Basis, legs: Legs, names: tuple[str, ...], calc: Calc
) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Greatest stress, index of its leg among `legs.leg`, and the movements of those legs."""
    ways = np.unique(legs.way)
    apart = np.abs(legs.apart[ways])
    growth = calc.each(
        expansion.free_growth, over="direction", names=[direction_words(design, d) for d in ways],
        words="growth that the run must absorb", e=basis.e, X=apart,
    )  # fmt: skip
    growth_of = dict(zip(ways.tolist(), growth, strict=True))
    listed = [names[i] for i in legs.leg]
    y = np.stack([growth_of[w] for w in legs.way.tolist()])
    length = legs.lengths[legs.leg]
    delta = calc.each(cantilever.shared_movement, over="leg", names=listed, y=y, l=length, c_3=legs.cubes[legs.way])
    if len(np.unique(legs.leg)) < len(legs.leg):
        delta = _resultant(legs.leg, delta, calc)
    stress, worst = calc.worst(
        cantilever.cantilever_stress, over="leg", names=listed, E_a=basis.E_a, D_o=basis.D_o, delta=delta, l=length
    )
    return stress, worst, delta


def _resultant(leg: np.ndarray, delta: np.ndarray, calc: Calc) -> np.ndarray:
    """Movements of a leg square to it in two directions, taken together."""
    calc.say("A leg with movement in two directions square to it takes their resultant.")
    total: np.ndarray = np.sqrt(np.stack([(delta[leg == i] ** 2).sum(axis=0) for i in range(leg.max() + 1)]))
    return np.asarray(total[leg])


def _anchors(design: Design, basis: Basis, legs: Legs, calc: Calc) -> tuple[tuple[Load, ...], tuple[Check, ...]]:
    """Loads on both ends in every case, heating up and cooling down; and the checks of both anchors."""
    layout, cases = design.layout, design.duty.cases
    growth, R_E = basis.case_growth, basis.case_modulus / basis.E_a
    loads: list[Load] = []
    ways = np.unique(legs.way)
    thrust = {}
    for d in ways.tolist():
        total = growth * np.abs(legs.apart[d])
        # the force along d is the same in all legs square to it: their flexibilities add
        thrust[d] = R_E * 12 * basis.E_a * basis.I * total / legs.cubes[d]
    friction = _friction(design, basis, calc)
    states = tuple(f"{c.name}, {way}" for c in cases for way in (State.HEATING, State.COOLING))
    forces = tuple(np.zeros((len(states), 3, design.rows or 1)) for _ in range(2))
    for end, (own_leg, sign) in enumerate(((0, -1.0), (layout.leg_count - 1, 1.0))):
        own = int(legs.axis[own_leg])
        for d in ways.tolist():
            outward = sign * np.sign(legs.apart[d])
            thermal = np.repeat(outward * thrust[d], 2, axis=0)
            rub = np.zeros_like(thermal)
            if d == own:
                rub[0::2], rub[1::2] = outward * friction[end], -outward * friction[end]
            loads.append(_load(design, end, d, states, thermal, rub))
            forces[end][:, d] = loads[-1].total
    _trace_anchor(design, basis, legs, growth, R_E, friction, calc)
    loads += _moments(design, legs, thrust, states)
    return tuple(loads), tuple(anchor_checks(design, states, (forces[0], forces[1])))


def _load(design: Design, end: int, d: int, states: tuple[str, ...], thermal: Any, friction: Any) -> Load:
    positive, negative = direction_words(design, d), direction_words(design, d, back=True)
    return Load(
        point=f"anchor {design.layout.ends[end].name or ('first', 'last')[end]}",
        name="force", positive=positive, negative=negative, kind="force", states=states,
        thermal=thermal, friction=friction, weight=np.zeros_like(thermal),
    )  # fmt: skip


def _friction(design: Design, basis: Basis, calc: Calc) -> np.ndarray:
    """Friction that reaches each end: of its own side only, to the middle of what bends, (2, rows) [N]."""
    reach, beside = friction_reach(design, basis)
    named = [end.name or f"end {i + 1}" for i, end in enumerate(design.layout.ends)]
    friction: np.ndarray = calc.each(
        support.friction_force, over="anchor", names=named, mu=design.layout.friction, w=basis.w,
        L_mu=reach, W_c=beside,
        words="friction of the supports on the anchor's own side, to the middle of the part that bends",
    )  # fmt: skip
    return friction


def _trace_anchor(design: Design, basis: Basis, legs: Legs, growth: Any, R_E: Any, friction: Any, calc: Calc) -> None:
    """The governing anchor load, line by line: the hottest and the coldest case at the first end."""
    if not calc.tracing:
        return
    own = int(legs.axis[0])
    if own not in legs.way:
        return
    i = int(np.flatnonzero(legs.way == own)[0])
    l = legs.lengths[legs.leg[i]]
    cases = design.duty.cases
    worst = int(np.abs(growth * R_E)[:, 0].argmax())
    end = design.layout.ends[0].name or "first"
    calc.say(f"Anchor {end}, {cases[worst].name}: the pipe on the steel, working load, unfactored")
    part = l**3 / legs.cubes[own]
    delta = np.abs(growth[worst]) * np.abs(legs.apart[own]) * part
    calc.given("R_E", R_E[worst], "modulus of the case over that at 21 °C")
    calc.given("delta_s", delta, "its part of the growth from the tie-in day that makes it greatest")
    F = calc(
        cantilever.cantilever_force, symbol="F_th", shown={"delta": "delta_s"},
        R_E=R_E[worst], E_a=basis.E_a, I=basis.I, delta=delta, l=l,
    )  # fmt: skip
    F_a = calc(support.anchor_force, F_th=F, F_mu=friction[0])
    F_min = calc(support.least_anchor_load, F_least=design.limits.least_anchor, w=basis.w, L=legs.lengths.sum(axis=0))
    calc.given("F_des", support.rounded_up(np.maximum(F_a, F_min)), "rounded up, common practice")


def _moments(design: Design, legs: Legs, thrust: dict[int, Any], states: tuple[str, ...]) -> list[Load]:
    """Moment of the rule where a bent leg ends in an anchor."""
    loads = []
    for end, leg in enumerate((0, len(legs.lengths) - 1)):
        for d in legs.way[legs.leg == leg].tolist():
            moment = np.repeat(np.abs(thrust[d]) * legs.lengths[leg] / 2, 2, axis=0)
            name = design.layout.ends[end].name or ("first", "last")[end]
            loads.append(
                Load(point=f"anchor {name}", name="moment", positive="either way", negative="either way",
                     kind="moment", states=states, thermal=moment, friction=np.zeros_like(moment),
                     weight=np.zeros_like(moment))
            )  # fmt: skip
    return loads


def _movements(design: Design, basis: Basis, legs: Legs) -> tuple[Movement, ...]:
    """Growth of the two outer legs away from their anchors, in every case."""
    corners = design.layout.corner_names()
    states = tuple(c.name for c in design.duty.cases)
    found = []
    for leg, corner, sign in ((0, corners[0], 1.0), (len(legs.lengths) - 1, corners[-1], -1.0)):
        d = int(legs.axis[leg])
        way = sign * np.sign(basis.vectors[d, leg])
        found.append(
            Movement(point=f"corner {corner}", name="along the run", positive=direction_words(design, d),
                     negative=direction_words(design, d, back=True), states=states,
                     value=way * basis.case_growth * legs.lengths[leg])
        )  # fmt: skip
    return tuple(found)

"""What several methods share: words for places, checks of room, shoes and guides, and what a method cannot see."""

from itertools import pairwise
from typing import Any

import numpy as np

from pipeflex.mechanics import expansion, support
from pipeflex.mechanics.section import STANDARD_GRAVITY
from pipeflex.methods.basis import Basis, pipe_weight, remark
from pipeflex.model.design import Design
from pipeflex.model.outcome import Check, Remark
from pipeflex.model.words import Concern, State
from pipeflex.trace import Calc

_OPPOSITE = {
    "east": "west", "west": "east", "north": "south", "south": "north", "up": "down", "down": "up",
}  # fmt: skip


class Outside:
    """Collects the reasons why a method is outside its limits, row by row, and remarks beside them."""

    def __init__(self, rows: int) -> None:
        self.mask = np.zeros(rows, bool)
        self.reasons: list[Remark] = []
        self.notes: list[Remark] = []

    def add(self, text: str, where: Any, **values: tuple[Any, str]) -> None:
        """A reason, for the rows where it holds."""
        if not np.any(where):
            return
        where = np.broadcast_to(where, self.mask.shape)
        self.mask = self.mask | where
        shaped = {k: (np.broadcast_to(v, self.mask.shape), kind) for k, (v, kind) in values.items()}
        self.reasons.append(remark(text, where, True, **shaped))

    def note(self, text: str, where: Any) -> None:
        """A remark that leaves the method inside its limits."""
        if np.any(where):
            self.notes.append(remark(text, np.broadcast_to(where, self.mask.shape)))


def direction_words(design: Design, d: int, back: bool = False) -> str:
    """Word of a direction of the layout: 0 along, 1 across, 2 up."""
    word = (design.layout.along, design.layout.across, "up")[d]
    return word if not back else _OPPOSITE.get(word, f"opposite to {word}")


def leg_names(design: Design) -> tuple[str, ...]:
    """Names of the legs between ends and corners: "leg 2, A to B"."""
    ends = design.layout.ends
    stops = (ends[0].name or "first end", *design.layout.corner_names(), ends[1].name or "last end")
    return tuple(f"leg {i + 1}, {a} to {b}" for i, (a, b) in enumerate(pairwise(stops)))


def unseen(design: Design, outside: Outside) -> None:
    """What a quick rule cannot see of a design: said, and outside its limits where that may be unsafe."""
    layout, duty = design.layout, design.duty
    outside.add("Another pipe or temperature along the run", bool(layout.segments))
    for case in duty.cases:
        moved = [np.asarray(v) != 0 for v in (*case.first_end_movement, *case.last_end_movement)]
        turned = [np.asarray(v) != 0 for v in (*case.first_end_rotation, *case.last_end_rotation)]
        outside.add(f"Imposed end movement in {case.name}", np.any(moved + turned, axis=0))
        outside.note(f"Top-to-bottom temperature difference in {case.name}: not judged.",
                     np.asarray(case.top_to_bottom) != 0)  # fmt: skip
    elastic = any(np.isfinite(v).any() for e in layout.ends for v in (*e.stiffness, *e.rotational_stiffness))
    outside.note("Ends are taken as rigid: their stiffness is not judged.", elastic)
    outside.note("Concentrated weights are judged by their friction only.", bool(layout.weights))
    limits = any(np.isfinite(v).any() for e in layout.ends for v in (*e.force_limits, *e.moment_limits))
    outside.note("Force and moment limits of the ends are not judged.", limits)
    outside.note("Cold spring earns nothing in the range; its reactions are not judged.",
                 np.asarray(duty.cold_spring) > 0)  # fmt: skip
    outside.note("Gap and stiffness of guides are not judged.",
                 layout.first_guide is not None or any(s.kind == "guide" for s in layout.supports))  # fmt: skip
    outside.note("Limits of single supports are not judged.", any(np.isfinite(s.limit).any() for s in layout.supports))
    outside.note("Springs are not judged.", any(s.kind == "spring" for s in layout.supports))
    outside.note("Eq. (1b) was asked: this method does not know the sustained stress, so eq. (1a) is used.",
                 duty.unused_sustained)  # fmt: skip
    outside.note("The sustained stress of weight and pressure is not judged.", True)


def friction_reach(design: Design, basis: Basis) -> tuple[np.ndarray, np.ndarray]:
    """Length whose friction reaches each end [m], and what weighs on it beside the line [N], both (2, rows).

    An end's own leg and half of what lies between the outer legs; of an L, half of the other leg.
    """
    beside = np.zeros_like(basis.lengths)
    for one in design.layout.weights:
        beside[one.leg - 1] += one.mass * STANDARD_GRAVITY
    for part in design.layout.segments:
        if part.pipe is not None:
            beside[part.leg - 1] += (pipe_weight(part.pipe) - basis.w) * (np.asarray(part.end) - part.start)

    def of_sides(values: np.ndarray) -> np.ndarray:
        first, last = values[0], values[-1]
        if len(values) == 2:
            return np.stack([first + last / 2, last + first / 2])
        between = values[1:-1].sum(axis=0)
        return np.stack([first + between / 2, last + between / 2])

    return of_sides(basis.lengths), of_sides(beside)


def side_friction(design: Design, basis: Basis) -> np.ndarray:
    """Friction that reaches each end, of its own side only, (2, rows) [N]."""
    reach, beside = friction_reach(design, basis)
    return np.asarray(support.friction_force(np.asarray(design.layout.friction), basis.w, reach, beside))


def anchor_checks(design: Design, states: tuple[str, ...], forces: tuple[Any, Any], unjudged: str = "") -> list[Check]:
    """Level force of the pipe on both anchors against what they can take.

    forces : of the two ends, (states, 3, rows) [N].
    """
    rows = design.rows or 1
    checks = []
    for i, (end, force) in enumerate(zip(design.layout.ends, forces, strict=True)):
        level = np.sqrt(force[:, 0] ** 2 + force[:, 1] ** 2)
        place = level.argmax(axis=0)
        checks.append(
            Check(
                key=f"anchor {i + 1}", title=f"Anchor {end.name or ('first', 'last')[i]}, level force",
                concern=Concern.REACTION, kind="force",
                demand=np.take_along_axis(level, place[None], axis=0)[0],
                limit=np.broadcast_to(end.anchor_limit, (rows,)), places=states, place=place, unjudged=unjudged,
                note="" if unjudged else "thermal and friction together",
            )
        )  # fmt: skip
    return checks


def room_check(design: Design, basis: Basis, calc: Calc) -> Check:
    """Room of a loop, hot, to the outside of the insulation."""
    rows = design.rows or 1
    limit = np.broadcast_to(design.limits.room, (rows,))
    shared: dict[str, Any] = {
        "key": "room", "title": "Room", "concern": Concern.ROOM, "kind": "length", "states": State.HOTTEST,
    }  # fmt: skip
    if "leg" not in design.layout.sizes or not design.layout.shape.endswith("U"):
        return Check(**shared, demand=np.zeros(rows), limit=limit, unjudged="room is judged for a loop")
    hot = np.maximum(basis.case_growth.max(axis=0), 0.0)
    calc.say("Room")
    calc.given("e_h", hot, "installed on the coldest tie-in day, to the hottest case")
    taken = calc(
        support.room_taken, shown={"e": "e_h"}, l=design.layout.sizes["leg"], e=hot, D_o=basis.D_o,
        t_ins=design.pipe.insulation_thickness, t_clad=basis.t_clad,
    )  # fmt: skip
    return Check(**shared, demand=taken, limit=limit)


def shoe_check(design: Design, basis: Basis, moved: np.ndarray | None = None) -> Check:
    """Movement of the run on its shoes, along each leg.

    moved : (legs, rows), greatest movement along every leg [m]; without it the growth of the two outer legs, which
    says nothing of longer chains, segments and imposed movements.
    """
    layout, rows = design.layout, design.rows or 1
    unjudged = ""
    if moved is None:
        outer = np.abs(basis.case_growth).max(axis=0) * basis.lengths[[0, -1]]
        moved = np.concatenate([outer[:1], np.zeros((max(len(basis.lengths) - 2, 0), rows)), outer[1:]])
        shifted = layout.segments or any(np.any(np.asarray(v) != 0) for c in design.duty.cases
                                         for v in (*c.first_end_movement, *c.last_end_movement))  # fmt: skip
        if shifted or (layout.shape == "points" and len(basis.lengths) > 3):
            unjudged = "only the beam knows it, one design at a time"
    return Check(
        key="shoe", title="Movement on the shoes", concern=Concern.SHOE, kind="movement", demand=moved.max(axis=0),
        limit=np.broadcast_to(design.limits.shoe_stop, (rows,)), places=leg_names(design)[: len(moved)],
        place=moved.argmax(axis=0), states=f"from {State.INSTALLED}", unjudged=unjudged,
    )  # fmt: skip


def shoe_alarm(design: Design, check: Check) -> Remark:
    """Movement beyond the alarm, where shoes have to be looked at."""
    alarm = np.asarray(design.limits.shoe_alarm)
    return remark("Movement on the shoes is beyond the alarm of {alarm}: look at the length and place of the shoes.",
                  ~(np.asarray(check.demand) <= alarm), alarm=(design.limits.shoe_alarm, "movement"))  # fmt: skip


def guide_check(design: Design) -> Check:
    """The side load of the first guide, which no rule knows."""
    rows = design.rows or 1
    return Check(
        key="guide", title="First guide, side", concern=Concern.REACTION, kind="force",
        demand=np.zeros(rows), limit=np.broadcast_to(design.limits.guide_limit, (rows,)),
        unjudged="the rule does not know it",
    )  # fmt: skip


def held_rigidly(design: Design, basis: Basis, calc: Calc) -> dict[str, Any]:
    """What the straight run would feel if it could not grow at all: a comparison, never a green tick."""
    pressure = np.stack([np.broadcast_to(c.pressure, basis.e.shape) for c in design.duty.cases])
    worst = np.abs(basis.case_growth).argmax(axis=0)[None]
    P = np.take_along_axis(pressure, worst, axis=0)[0]
    e = np.take_along_axis(basis.case_growth - basis.e_P, worst, axis=0)[0]
    E_m = np.take_along_axis(basis.case_modulus, worst, axis=0)[0]
    calc.say("For comparison only: the same run if it were held rigidly at both ends", heading=True)
    calc.given("e_w", e, "case that moves the line most, from the tie-in day that makes it greatest, without pressure")
    S_H = calc(expansion.hoop_stress, P=P, D_o=basis.D_o, T_w=basis.T_w)
    S_x = calc(expansion.held_stress, nu=basis.nu, S_H=S_H, E_m=E_m, e=e, shown={"e": "e_w"})
    F_r = calc(expansion.held_thrust, A=basis.A, S_x=S_x)
    S_eq = calc(expansion.equivalent_stress, S_H=S_H, S_x=S_x)
    held = {"S_H": S_H, "S_x": S_x, "F_r": F_r, "S_eq": S_eq}
    if (spacing := design.layout.guide_spacing) is not None:
        held["F_cr"] = calc(expansion.column_buckling, E_m=E_m, I=basis.I, L_g=spacing)
    return held

"""Checks of the beam answer: ends, guides and supports, cold spring, design load; and how the line moves."""

from dataclasses import replace
from typing import Any

import numpy as np

from pipeflex.mechanics import support
from pipeflex.methods.basis import Basis
from pipeflex.methods.beam_loads import Felt
from pipeflex.methods.beam_model import Model, support_tag
from pipeflex.methods.common import direction_words, side_friction
from pipeflex.model.design import Design
from pipeflex.model.outcome import Check, Movement, Shape
from pipeflex.model.words import Concern
from pipeflex.trace import Calc

Rows = np.ndarray


def with_cold_spring(design: Design, basis: Basis, checks: list[Check], cold: dict[str, Any]) -> list[Check]:
    """Anchor checks with the greatest reactions of a cold-sprung run, friction added."""
    if not cold:
        return checks
    sprung = np.maximum(cold["R_m"], cold["R_a"]) + side_friction(design, basis)
    note = "thermal and friction together, cold spring counted"
    return [replace(c, demand=np.maximum(c.demand, sprung[i]), note=note) for i, c in enumerate(checks)]


def design_load(design: Design, basis: Basis, anchors: list[Check], calc: Calc) -> dict[str, Any]:
    """Design load of the more heavily loaded anchor: at least 2 kN or a tenth of the line's weight, rounded up."""
    worst = np.maximum(anchors[0].demand, anchors[1].demand)
    calc.say("Design load of the anchors: the pipe on the steel, working load, unfactored", heading=True)
    F_a = calc.given("F_a", worst, "beam solution with friction, the greater of both ends and all states, level")
    length = basis.lengths.sum(axis=0)
    F_min = calc(support.least_anchor_load, F_least=design.limits.least_anchor, w=basis.w, L=length)
    F_des = calc.given("F_des", support.rounded_up(np.maximum(F_a, F_min)), "rounded up, common practice")
    return {"F_des": F_des}


def moved_along_legs(design: Design, shapes: tuple[Shape, ...]) -> Rows:
    """Greatest movement along each level leg in any case, (legs, 1) [m]."""
    vectors = design.layout.leg_vectors()[:, :, 0]
    along = vectors / np.sqrt((vectors**2).sum(axis=0))
    moved = np.zeros((vectors.shape[1], 1))
    for shape in shapes:
        own = np.abs((shape.movement[:, :, 0] * along[:, list(shape.leg)]).sum(axis=0))
        np.maximum.at(moved[:, 0], list(shape.leg), own)
    moved[np.abs(along[2]) > 0.5] = 0.0
    return moved


def corner_movements(design: Design, shapes: tuple[Shape, ...]) -> tuple[Movement, ...]:
    """Movement of the line at every corner, along, across and up, in every case."""
    if not shapes:
        return ()
    points = design.layout.corner_points()[:, 1:-1, 0]
    states = tuple(s.state for s in shapes)
    found = []
    for corner, name in enumerate(design.layout.corner_names()):
        apart = ((shapes[0].points[:, :, 0] - points[:, corner, None]) ** 2).sum(axis=0)
        nearest = int(apart.argmin())
        for d, way in enumerate(("along", "across", "up")):
            value = np.stack([s.movement[d, nearest] for s in shapes])
            if np.abs(value).max() > 1e-7:
                found.append(
                    Movement(point=f"corner {name}", name=way, positive=direction_words(design, d),
                             negative=direction_words(design, d, back=True), states=states, value=value)
                )  # fmt: skip
    return tuple(found)


def end_checks(design: Design, felt: Felt, unjudged: str) -> list[Check]:
    """Forces and moments of each end in its nozzle's own directions, where a limit is given."""
    rows = design.rows or 1
    checks = []
    for i, parts in enumerate(felt.ends):
        end = design.layout.ends[i]
        limits = (*end.force_limits, *end.moment_limits)
        if not any(np.isfinite(v).any() for v in limits):
            continue
        frame = _frame(end.axis, rows)
        total = parts.thermal + parts.friction + parts.weight
        own = np.concatenate([np.einsum("ijr,sjr->sir", frame, total[:, n : n + 3]) for n in (0, 3)], axis=1)
        name = end.name or ("first", "last")[i]
        for d, limit in enumerate(limits):
            if not np.isfinite(limit).any():
                continue
            place = np.abs(own[:, d]).argmax(axis=0)
            words = ("along the nozzle", "square to it, level", "square to it, upright")[d % 3]
            kind = "force" if d < 3 else "moment"
            title = f"{name}, {kind} {words}" if d < 3 else f"{name}, moment about the direction {words}"
            checks.append(
                Check(
                    key=f"end {i + 1} {kind} {d % 3 + 1}", title=title[0].upper() + title[1:],
                    concern=Concern.REACTION, kind=kind,
                    demand=np.take_along_axis(np.abs(own[:, d]), place[None], axis=0)[0],
                    limit=np.broadcast_to(limit, (rows,)), places=felt.states, place=place, unjudged=unjudged,
                )
            )  # fmt: skip
    return checks


def _frame(axis: tuple[Any, ...], rows: int) -> Rows:
    """Directions of a nozzle: along it, level and square to it, and the third, (3, 3, rows)."""
    first = np.stack([np.broadcast_to(np.asarray(v, float), (rows,)) for v in axis])
    first = first / np.sqrt((first**2).sum(axis=0))
    up = np.where(np.abs(first[2]) < 0.999, np.array([[0.0], [0.0], [1.0]]), np.array([[0.0], [1.0], [0.0]]))
    level = np.cross(up, first, axis=0)
    level = level / np.sqrt((level**2).sum(axis=0))
    return np.stack([first, level, np.cross(first, level, axis=0)])


def guide_check(design: Design, model: Model, felt: Felt, doubt: str) -> Check:
    """Greatest side load of a guide."""
    rows = design.rows or 1
    limit = np.broadcast_to(design.limits.guide_limit, (rows,))
    shared: dict[str, Any] = {
        "key": "guide", "title": "Guides, side", "concern": Concern.REACTION, "kind": "force", "limit": limit,
    }  # fmt: skip
    if not model.guides:
        return Check(**shared, demand=np.zeros(rows), unjudged="there is no guide")
    first = [i for i, s in enumerate(model.run.supports) for _ in s.holds]
    mine = [i for i, s in enumerate(first) if s in model.guides]
    total = np.abs(felt.holds.thermal + felt.holds.friction)[:, mine]
    worst = total.max(axis=0)
    place = worst.argmax(axis=0)
    tags = tuple(model.run.supports[first[i]].tag for i in mine)
    return Check(**shared, demand=worst.max(axis=0), places=tags, place=place, unjudged=doubt)


def support_checks(design: Design, model: Model, felt: Felt, doubt: str) -> list[Check]:
    """Greatest force on each support for which a limit is given."""
    rows = design.rows or 1
    of_hold = [s.tag for s in model.run.supports for _ in s.holds]
    total = np.abs(felt.holds.thermal + felt.holds.friction + felt.holds.weight)
    checks = []
    for i, one in enumerate(design.layout.supports):
        if not np.isfinite(one.limit).any():
            continue
        name = support_tag(one)
        mine = [h for h, tag in enumerate(of_hold) if tag == name]
        demand = total[:, mine].max(axis=1) if mine else np.zeros((1, rows))
        place = demand.argmax(axis=0)
        checks.append(
            Check(
                key=f"support {i + 1}", title=f"{name[0].upper()}{name[1:]}", concern=Concern.REACTION, kind="force",
                demand=demand.max(axis=0), limit=np.broadcast_to(one.limit, (rows,)), places=felt.states, place=place,
                unjudged=doubt if mine else "it is judged one design at a time",
            )
        )  # fmt: skip
    return checks

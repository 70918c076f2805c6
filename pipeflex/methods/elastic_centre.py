"""The elastic centre: a plane run between two anchors, bends counted k times their length."""

from typing import Any, Final

import numpy as np

from pipeflex.errors import Fault, ScopeError
from pipeflex.mechanics import elastic_centre as mechanics
from pipeflex.methods.basis import Basis
from pipeflex.methods.beam_stress import corner_factors
from pipeflex.methods.common import (
    Outside,
    anchor_checks,
    direction_words,
    room_check,
    shoe_alarm,
    shoe_check,
    side_friction,
    unseen,
)
from pipeflex.model.design import Design
from pipeflex.model.outcome import Check, Load, Outcome
from pipeflex.model.words import Concern, State
from pipeflex.trace import Calc, Matrix, follow

KEY: Final = "elastic_centre"
TITLE: Final = "elastic centre"
_LEVEL: Final = 1e-6


def limits(design: Design, basis: Basis) -> Outside:
    """Where the method is outside its limits: anything between the anchors."""
    outside = Outside(design.rows or 1)
    layout = design.layout
    unseen(design, outside)
    guided = layout.first_guide is not None or layout.guide_spacing is not None
    outside.add("Restraint between the anchors: the run is guided",
                guided or any(s.kind in ("guide", "line stop") for s in layout.supports))  # fmt: skip
    return outside


def run(design: Design, basis: Basis, calc: Calc) -> Outcome:
    """Answer of the elastic centre for a column.

    Raises
    ------
    ScopeError
        A run that is not level, or that is straight.
    """
    layout, rows = design.layout, design.rows or 1
    corners = layout.corner_points()
    if np.ptp(corners[2], axis=0).max() > _LEVEL:
        raise ScopeError(Fault("layout", "a run that rises or falls", allowed="a run in one level plane"))
    if layout.leg_count < 2:
        raise ScopeError(Fault("layout.shape", layout.shape, allowed="a run that is not straight"))
    outside = limits(design, basis)
    calc.say("Elastic centre", heading=True)
    factors = corner_factors(design, basis, calc)
    radius = np.stack([np.broadcast_to(layout.corner(i).radius, (rows,)) for i in range(layout.leg_count - 1)])
    k = np.stack([np.broadcast_to(f["k"], (rows,)) for f in factors])
    found = mechanics.elastic_centre(corners[:2], basis.apart[:2] * basis.e, basis.E_a * basis.I, radius, k)
    check, pool = _stress(design, basis, found, factors)
    _trace(design, found, pool, calc)
    loads, anchors = _loads(design, basis, found)
    shoe = shoe_check(design, basis)
    results = {name: basis.pool[name] for name in ("w", "e", "E_a", "S_A", "f", "I", "Z")}
    return Outcome(
        design=design, method=KEY, method_title=TITLE,
        checks=(check, room_check(design, basis, calc), shoe, *anchors), loads=loads,
        movements=(), results=results | {"S_E": check.demand},
        remarks=(*basis.remarks, *outside.notes, shoe_alarm(design, shoe)),
        outside=outside.mask, outside_reasons=tuple(outside.reasons),
    )  # fmt: skip


def _points(design: Design) -> tuple[str, ...]:
    """Names of the points: the first anchor, start, middle and end of every bend, the last anchor."""
    bends = [f"bend {c}, {p}" for c in design.layout.corner_names() for p in ("start", "middle", "end")]
    ends = [f"anchor {e.name or w}" for e, w in zip(design.layout.ends, ("first", "last"), strict=True)]
    return (ends[0], *bends, ends[1])


def _stress(
    design: Design, basis: Basis, found: mechanics.ElasticCentre, factors: list[dict[str, Any]]
) -> tuple[Check, dict[str, Any]]:
    """Range at every point: in-plane bending with the intensification of its bend."""
    i_i = np.ones_like(found.moment)
    for n, f in enumerate(factors):
        i_i[1 + 3 * n : 4 + 3 * n] = f["i_i"]
    stress = i_i * np.abs(found.moment) / basis.Z
    place = stress.argmax(axis=0)
    check = Check(
        key="range", title="Range, in-plane bending", concern=Concern.STRESS, kind="stress",
        demand=np.take_along_axis(stress, place[None], axis=0)[0], limit=basis.S_A, places=_points(design),
        place=place, states=f"{State.COLDEST} to {State.HOTTEST}",
    )  # fmt: skip
    there = {"M_i": np.abs(found.moment), "i_i": i_i}
    pool = {name: np.take_along_axis(v, place[None], axis=0)[0] for name, v in there.items()}
    return check, {**pool, "Z": basis.Z}


def _trace(design: Design, found: mechanics.ElasticCentre, pool: dict[str, Any], calc: Calc) -> None:
    if not calc.tracing:
        return
    names = ("weighted length", "centre, along", "centre, across", "Ixx", "Iyy", "Ixy")
    values = (found.length, found.centre[0], found.centre[1], found.second_x, found.second_y, found.product)
    kinds = ("length", "length", "length", "volume", "volume", "volume")
    ref = "S. W. Spielvogel, Piping Stress Calculations Simplified (1955): elastic centre, from memory, confirm"
    calc.show(
        Matrix(words="the weighted line of the run", equation="lengths; bends k times theirs", ref=ref, heads=names,
               kinds=kinds, rows=(("run", tuple(float(v[0]) for v in values)),))
    )  # fmt: skip
    calc.show(
        Matrix(words="moments by the thrust through the elastic centre", equation="M = F·arm", ref=ref,
               heads=("moment",), kinds=("moment",),
               rows=tuple((n, (float(m[0]),)) for n, m in zip(_points(design), found.moment, strict=True)))
    )  # fmt: skip
    zero = np.zeros_like(pool["Z"])
    full = {**pool, "i_o": zero + 1.0, "M_o": zero, "M_t": zero, "F_x": zero, "i_t": 1.0, "i_a": 1.0, "A": zero + 1.0}
    calc.given("M_i", pool["M_i"], "elastic centre, at the governing point")
    follow([r for r in design.code.expansion_stress if getattr(r, "__name__", "") == "resultant_bending"], full, calc)


def _loads(design: Design, basis: Basis, found: mechanics.ElasticCentre) -> tuple[tuple[Load, ...], tuple[Check, ...]]:
    """Loads on both anchors in every case, friction adding and relieving."""
    share = basis.case_growth * basis.case_modulus / basis.E_a / basis.e
    names = tuple(f"{c.name}, friction {w}" for c in design.duty.cases for w in ("adding", "relieving"))
    rub = side_friction(design, basis)
    loads: list[Load] = []
    forces = tuple(np.zeros((len(names), 3, design.rows or 1)) for _ in range(2))
    for i, (sign, leg, moment) in enumerate(((-1.0, 0, found.moment_a), (1.0, -1, found.moment_b))):
        name = design.layout.ends[i].name or ("first", "last")[i]
        along = basis.vectors[:2, leg] / basis.lengths[leg]
        for d in (0, 1):
            thermal = np.repeat(sign * found.force[d] * share, 2, axis=0)
            push = np.sign(thermal[0::2] * along[d]) * along[d] * rub[i]
            friction = np.zeros_like(thermal)
            friction[0::2], friction[1::2] = push, -push
            loads.append(
                Load(point=f"anchor {name}", name="force", positive=direction_words(design, d),
                     negative=direction_words(design, d, back=True), kind="force", states=names, thermal=thermal,
                     friction=friction, weight=np.zeros_like(thermal))
            )  # fmt: skip
            forces[i][:, d] = thermal + friction
        turning = np.repeat(moment * share, 2, axis=0)
        loads.append(
            Load(point=f"anchor {name}", name="moment", positive="anticlockwise seen from above",
                 negative="clockwise seen from above", kind="moment", states=names, thermal=turning,
                 friction=np.zeros_like(turning), weight=np.zeros_like(turning))
        )  # fmt: skip
    return tuple(loads), tuple(anchor_checks(design, names, (forces[0], forces[1])))

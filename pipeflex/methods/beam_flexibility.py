"""The run as beams with exact bends: the reference answer.

Bending, torsion and stretch; shear is left out. The range is that of the run with its guides and line stops closed and
without friction; reactions of a single design follow its rests, gaps and friction along a history.
"""

from dataclasses import replace
from typing import Any, Final

import numpy as np

from pipeflex.errors import Fault, ScopeError
from pipeflex.mechanics.beam import Answer, linear, residual
from pipeflex.methods.basis import Basis, remark
from pipeflex.methods.beam_checks import (
    corner_movements,
    design_load,
    end_checks,
    guide_check,
    moved_along_legs,
    support_checks,
    with_cold_spring,
)
from pipeflex.methods.beam_loads import Felt, loads_of, plain_loads, settled_loads
from pipeflex.methods.beam_model import (
    Model,
    build,
    case_states,
    modulus_ratio,
    range_states,
    unit_states,
)
from pipeflex.methods.beam_shape import shapes_of, stress_along
from pipeflex.methods.beam_stress import (
    Range,
    Sections,
    Sustained,
    corner_factors,
    sections_of,
    stress_range,
    sustained,
    trace_range,
    trace_sustained,
)
from pipeflex.methods.beam_trace import show_solution
from pipeflex.methods.common import (
    Outside,
    anchor_checks,
    held_rigidly,
    room_check,
    shoe_alarm,
    shoe_check,
)
from pipeflex.model.design import Design
from pipeflex.model.layout import SHAPES
from pipeflex.model.outcome import Check, Load, Outcome, Remark
from pipeflex.model.words import Concern, State
from pipeflex.trace import Calc, follow

KEY: Final = "beam_flexibility"
TITLE: Final = "beam flexibility"

Rows = np.ndarray


def run(design: Design, basis: Basis, calc: Calc) -> Outcome:
    """Answer of the beam for a column."""
    rows = design.rows or 1
    if design.layout.leg_count < 2:
        title = SHAPES[design.layout.shape].title
        raise ScopeError(Fault("layout.shape", title, allowed="a run with a change of direction"))
    calc.say("Beam flexibility", heading=True)
    factors = corner_factors(design, basis, calc)
    model = build(design, basis, [f["k"] for f in factors], rests=False)
    sections = sections_of(design, basis, model, factors)
    answer = linear(model.run, unit_states(rows) if model.uniform else range_states(design, basis))
    found = stress_range(design, sections, answer, basis.e if model.uniform else None)
    remarks = [*basis.remarks, *_remarks(design, model, calc.tracing)]
    show_solution(design, basis, model, answer, calc)
    felt, owner = _loads(design, basis, model, answer, factors, calc.tracing)
    shown = (sections, found)
    if felt.contacts is not None:
        shown = _with_contacts(design, basis, owner, factors, felt.contacts, shown, remarks)
    trace_range(design, *shown, calc)
    sustained_check = _sustained_check(design, basis, factors, felt, calc)
    range_check = _range_check(*shown)
    if design.duty.unused_sustained and not sustained_check.unjudged:
        range_check = _with_unused(design, basis, range_check, sustained_check, calc)
    shapes = shapes_of(design, basis, model, answer) if calc.tracing else ()
    loads = loads_of(design, owner, felt) if calc.tracing or rows == 1 else _column_loads(design, owner, felt)
    moved = moved_along_legs(design, shapes) if shapes else None
    shoe = shoe_check(design, basis, moved)
    totals = [p.thermal + p.friction + p.weight for p in felt.ends]
    doubt = "" if felt.converged else "not converged"
    anchors = anchor_checks(design, felt.states, (totals[0][:, :3], totals[1][:, :3]), doubt)
    cold = _cold_spring(design, basis, model, answer, shown[1], remarks, calc)
    checks = [
        range_check,
        room_check(design, basis, calc),
        shoe,
        *with_cold_spring(design, basis, anchors, cold),
        *end_checks(design, felt, doubt or ("cold spring moves the reactions" if cold else "")),
        guide_check(design, owner, felt, doubt),
        *support_checks(design, owner, felt, doubt),
        sustained_check,
    ]
    remarks.append(shoe_alarm(design, shoe))
    results = {name: basis.pool[name] for name in ("w", "e", "E_a", "S_A", "f", "I", "Z")}
    results |= {"S_E": range_check.demand} | held_rigidly(design, basis, calc)
    results |= cold | design_load(design, basis, anchors, calc)
    severe = design.code.severe_cyclic
    if severe is not None:
        remarks.append(
            remark("Cyclic conditions may be severe (the range above 0.8 S_A and more than 7000 cycles): "
                   "the code asks more.", severe(range_check.demand, range_check.limit, basis.pool["N"]), True)
        )  # fmt: skip
    remarks += felt.remarks
    outside = Outside(rows)
    outside.add("The supports did not settle: reactions are not known", not felt.converged)
    extra: dict[str, Any] = {}
    movements = corner_movements(design, shapes)
    if calc.tracing:
        results["residual"] = _left(answer)
        calc.say(f"Equilibrium of the run: {_balance(answer)}")
        extra = {
            "shapes": shapes,
            "along": stress_along(model, sections, found),
        }
    return Outcome(
        design=design, method=KEY, method_title=TITLE, checks=tuple(checks), loads=loads, movements=movements,
        results=results, remarks=_whole(remarks, rows), outside=outside.mask, outside_reasons=tuple(outside.reasons),
        **extra,
    )  # fmt: skip


def _whole(remarks: list[Remark], rows: int) -> tuple[Remark, ...]:
    return tuple(
        Remark(text=r.text, values=r.values, rows=np.broadcast_to(r.rows, (rows,)), serious=r.serious) for r in remarks
    )


def _has_rests(design: Design) -> bool:
    return design.layout.rest_spacing is not None or any(s.kind == "rest" for s in design.layout.supports)


def _remarks(design: Design, model: Model, single: bool) -> list[Remark]:
    """What this method leaves out of a design."""
    found = []
    if model.guides:
        found.append(remark("The range is that of guides without gap and without friction."))
    if model.stops and not (single and _has_rests(design)):
        found.append(remark("Friction on line stops is counted only where rests are given.", True, True))
    if _has_rests(design) and not single:
        found.append(remark("Rests, their friction and the sustained stress are judged one design at a time."))
    if design.layout.weights and not _has_rests(design):
        found.append(remark("Concentrated weights act by their friction only: no rests are given."))
    if design.duty.unused_sustained and not (single and _has_rests(design)):
        found.append(remark("Eq. (1b) was asked: the sustained stress is not known, so eq. (1a) is used."))
    return found


def _loads(
    design: Design, basis: Basis, model: Model, answer: Answer, factors: list[dict[str, Any]], single: bool
) -> tuple[Felt, Model]:
    """Loads of a single design with rests by its history; of a column, or without rests, by sums of friction."""
    if single and _has_rests(design):
        return settled_loads(design, basis, [f["k"] for f in factors])
    R_E = modulus_ratio(design, basis)
    if model.uniform:
        return plain_loads(design, basis, model, answer, tuple(c.name for c in design.duty.cases), R_E), model
    states, names = case_states(design, basis)
    cases = linear(model.run, states)
    return plain_loads(design, basis, model, cases, names, np.repeat(R_E, 2, axis=0)), model


def _column_loads(design: Design, model: Model, felt: Felt) -> tuple[Load, ...]:
    return tuple(v for v in loads_of(design, model, felt) if v.point.startswith("anchor"))


def _with_contacts(
    design: Design,
    basis: Basis,
    model: Model,
    factors: list[dict[str, Any]],
    contacts: Answer,
    closed: tuple[Sections, Range],
    remarks: list[Remark],
) -> tuple[Sections, Range]:
    """The range with gaps and rests as they act; it governs where rests hold a line that rises or falls."""
    sections = sections_of(design, basis, model, factors)
    found = stress_range(design, sections, contacts, None)
    remarks.append(
        remark("With gaps and rests as they act, and without friction, the range is {S}.", S=(found.S_E, "stress"))
    )
    more = float((found.S_E / found.S_A)[0]) > float((closed[1].S_E / closed[1].S_A)[0]) * (1 + 1e-9)
    if not more:
        return closed
    remarks.append(remark("Rests hold the line: the range with gaps and rests as they act governs.", True, True))
    return sections, found


def _with_unused(design: Design, basis: Basis, check: Check, weighed: Check, calc: Calc) -> Check:
    """The range against eq. (1b), with the greatest sustained stress of the run taken at every point."""
    if design.layout.segments:
        return check
    pool = {**basis.pool, "S_L": weighed.demand}
    limit = follow(design.code.allowable_range_with_sustained, pool, calc)
    return replace(check, limit=limit, note="eq. (1b), with the unused sustained stress added")


def _range_check(sections: Sections, found: Range) -> Check:
    return Check(
        key="range", title="Range S_E / S_A", concern=Concern.STRESS, kind="stress", demand=found.S_E,
        limit=found.S_A, places=sections.places, place=found.place, states=f"{State.COLDEST} to {State.HOTTEST}",
    )  # fmt: skip


def _sustained_check(design: Design, basis: Basis, factors: list[dict[str, Any]], felt: Felt, calc: Calc) -> Check:
    """Sustained stress of weight and pressure against S_h, in the worst support state of a single design."""
    rows = design.rows or 1
    shared: dict[str, Any] = {
        "key": "sustained", "title": "Sustained stress S_L / S_h", "concern": Concern.STRESS, "kind": "stress",
        "limit": basis.S_h,
    }  # fmt: skip
    if not felt.weighed or not design.code.sustained_stress:
        why = "no rests are given" if calc.tracing else "rests are judged one design at a time"
        return Check(**shared, demand=np.zeros(rows), unjudged=why)
    pressure = np.stack([np.broadcast_to(c.pressure, (rows,)) for c in design.duty.cases]).max(axis=0)
    worst: tuple[Sustained, str] | None = None
    for name, model, weighed in felt.weighed:
        found = sustained(design, sections_of(design, basis, model, factors), weighed, pressure)
        if worst is None or float((found.S_L / found.S_h)[0]) > float((worst[0].S_L / worst[0].S_h)[0]):
            worst = (found, name)
    assert worst is not None
    found, name = worst
    trace_sustained(design, found, name, calc)
    shared |= {"limit": found.S_h, "unjudged": "" if felt.converged else "not converged"}
    return Check(**shared, demand=found.S_L, places=found.places, place=found.place, states=name)


def _cold_spring(
    design: Design, basis: Basis, model: Model, answer: Answer, found: Range, remarks: list[Remark], calc: Calc
) -> dict[str, Any]:
    """Greatest reactions with cold spring, where the code gives them: two anchors with nothing between."""
    if not np.any(np.asarray(design.duty.cold_spring) > 0):
        return {}
    if model.run.supports or not design.code.cold_spring:
        remarks.append(remark("Cold spring is not counted: it is for two anchors with nothing between.", True, True))
        return {}
    hot = basis.case_strain.argmax(axis=0)[None]
    E_m = np.take_along_axis(basis.case_modulus, hot, axis=0)[0]
    calc.say("Cold spring: greatest reactions on an end", heading=True)
    pool = {
        "R_F": calc.given("R_F", _greatest_range(basis, model, answer), "beam solution at E_a"),
        "C_cs": design.duty.cold_spring, "E_m": E_m, "E_a": basis.E_a, "S_h": basis.S_h, "S_E": found.S_E,
        "R_E": calc.given("R_E", E_m / basis.E_a, "modulus of the hottest case over that at 21 °C"),
    }  # fmt: skip
    follow(design.code.cold_spring, pool, calc)
    return {name: pool[name] for name in ("R_m", "R_a")}


def _balance(answer: Answer) -> str:
    """Force left over beside the greatest force of the solution, in words."""
    greatest = float(np.abs(answer.end_a[:, :3]).max(initial=0.0))
    part = float(_left(answer)[0]) / greatest if greatest else 0.0
    return f"the forces on ends and supports add up to nothing within {max(part, 1e-16):.0e} of the greatest."


def _left(answer: Answer) -> Rows:
    """Force left out of balance, greatest of all states, (rows,) [N]."""
    return np.asarray(np.abs(residual(answer)[:, :3]).max(axis=(0, 1)))


def _greatest_range(basis: Basis, model: Model, answer: Answer) -> Rows:
    """Greatest reaction range on an end at E_a, (rows,) [N]."""
    ends = np.concatenate([answer.end_a[:, :3], answer.end_b[:, :3]], axis=1)
    span = ends[0] * basis.e if model.uniform else ends.max(axis=0) - ends.min(axis=0)
    return np.asarray(np.abs(span).max(axis=0))

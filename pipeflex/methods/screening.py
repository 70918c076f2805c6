"""The code's screening rule: whether a run of one size between two anchors needs no formal analysis."""

from typing import Final

import numpy as np

from pipeflex.errors import Fault, ScopeError
from pipeflex.mechanics import expansion
from pipeflex.methods.basis import Basis, remark
from pipeflex.methods.common import Outside, anchor_checks, room_check, shoe_check, unseen
from pipeflex.model.design import Design
from pipeflex.model.outcome import Check, Outcome
from pipeflex.model.words import Concern, State
from pipeflex.trace import Calc, Rule, pick

KEY: Final = "screening"
TITLE: Final = "screening rule of the code"
_UNEQUAL: Final = 2.5


def limits(design: Design, basis: Basis) -> Outside:
    """Where the rule is outside its limits: anything between the anchors, above all."""
    outside = Outside(design.rows or 1)
    layout = design.layout
    unseen(design, outside)
    guides = layout.first_guide is not None or layout.guide_spacing is not None
    stops = any(s.kind in ("guide", "line stop") for s in layout.supports)
    outside.add("Restraint between the anchors: the run is guided", guides or stops)
    outside.note("Rests between the anchors hold the line by friction: the rule knows none.",
                 layout.rest_spacing is not None or any(s.kind == "rest" for s in layout.supports))  # fmt: skip
    lengths = basis.lengths
    apart = np.sqrt((basis.apart**2).sum(axis=0))
    if layout.shape in ("U", "raised U"):
        full = layout.full_sizes()
        sides = np.abs(2 * full["before"] + full["width"] - full["run"]) > 1e-9 * np.asarray(full["run"])
        outside.note("Unequal sides of a U with L/U above 2.5: the rule may be unsafe.",
                     sides & (lengths.sum(axis=0) > _UNEQUAL * apart))  # fmt: skip
    outside.note("Nearly straight runs (sawtooth) may be unsafe by the rule.",
                 lengths.sum(axis=0) < 1.05 * apart)  # fmt: skip
    return outside


def run(design: Design, basis: Basis, calc: Calc) -> Outcome:
    """Answer of the rule for a column. It says nothing of reactions."""
    clauses: tuple[Rule, ...] = design.code.screening
    L_dev = basis.lengths.sum(axis=0)
    U_a = np.sqrt((basis.apart**2).sum(axis=0))
    if not clauses:
        raise ScopeError(Fault("code.key", design.code.key, allowed="a code with a screening rule"))
    straight = L_dev - U_a <= 1e-9 * L_dev
    if straight.any():
        raise ScopeError(Fault("layout.shape", design.layout.shape, allowed="a run that is not straight",
                               rows=tuple(np.flatnonzero(straight).tolist()) if straight.size > 1 else ()))  # fmt: skip
    outside = limits(design, basis)
    calc.say("Screening", heading=True)
    calc.given("L_dev", L_dev, "geometry of the run", words="developed length of the run")
    calc.given("U_a", U_a, "geometry of the run")
    y = calc(expansion.free_growth, symbol="y", e=basis.e, X=U_a, shown={"X": "U_a"})
    pool = {**basis.pool, "L_dev": L_dev, "U_a": U_a, "y": y}
    value_clause, greatest_clause = clauses
    q = calc(value_clause, **pick(value_clause, pool))  # type: ignore[arg-type]
    K_1 = calc(greatest_clause, **pick(greatest_clause, pool))  # type: ignore[arg-type]
    check = Check(
        key="screening", title="Screening value", concern=Concern.STRESS, kind="screening value", demand=q,
        limit=K_1, states=f"{State.COLDEST} to {State.HOTTEST}", note="says nothing of reactions",
    )  # fmt: skip
    nothing = np.zeros((1, 3, design.rows or 1))
    anchors = anchor_checks(design, ("",), (nothing, nothing), unjudged="the rule says nothing of reactions")
    results = {name: basis.pool[name] for name in ("w", "e", "E_a", "S_A", "f", "I", "Z")}
    notes = [*basis.remarks, *outside.notes]
    notes.append(remark("The rule is for lines that are not under severe cyclic conditions, of one size, between "
                        "two anchors with nothing between; it says nothing of reactions."))  # fmt: skip
    shaped = [
        r if np.shape(r.rows) == outside.mask.shape else remark(r.text, np.ones_like(outside.mask)) for r in notes
    ]
    checks = (check, room_check(design, basis, calc), shoe_check(design, basis), *anchors)
    return Outcome(
        design=design, method=KEY, method_title=TITLE, checks=checks, loads=(), movements=(),
        results={**results, "q": q, "K_1": K_1}, remarks=tuple(shaped), outside=outside.mask,
        outside_reasons=tuple(outside.reasons),
    )  # fmt: skip

"""The methods in order of rising fidelity, and the ways to ask them."""

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Any, Final

import numpy as np

from pipeflex.errors import Fault, InputError, PipeflexError, ScopeError
from pipeflex.mechanics import cantilever, expansion
from pipeflex.methods import beam_flexibility, elastic_centre, guided_cantilever, screening
from pipeflex.methods.basis import Basis, basis
from pipeflex.model.design import Design
from pipeflex.model.fields import FrozenMap
from pipeflex.model.outcome import Ladder, Outcome, Rung
from pipeflex.model.record import put
from pipeflex.model.words import Standing
from pipeflex.present import percent
from pipeflex.trace import PLAIN, Calc, Trace


@dataclass(frozen=True, slots=True)
class Method:
    """One method: key, label, rank among the methods, and how a column is answered by it."""

    key: str
    title: str
    rank: int
    run: Callable[[Design, Basis, Calc], Outcome]


METHODS: Final[tuple[Method, ...]] = (
    Method(screening.KEY, screening.TITLE, 1, screening.run),
    Method(guided_cantilever.KEY, guided_cantilever.TITLE, 2, guided_cantilever.run),
    Method(elastic_centre.KEY, elastic_centre.TITLE, 3, elastic_centre.run),
    Method(beam_flexibility.KEY, beam_flexibility.TITLE, 4, beam_flexibility.run),
)
"""All methods, rule to beam."""


def method(key: str) -> Method:
    """The method of that key.

    Raises
    ------
    InputError
        No such method; the known ones are named.
    """
    for one in METHODS:
        if one.key == key:
            return one
    raise InputError(Fault("method", key, allowed="a method", near=tuple(m.key for m in METHODS)))


def solve(design: Design, key: str | None = None) -> Outcome:
    """Answer a design, or a column of designs.

    Parameters
    ----------
    design : one line, or a column of lines of one skeleton.
    key : method. Without one, a single design is answered by the highest method that is inside its limits (or
        the highest that can answer at all, if none is inside), a column by the highest method of all.

    Returns
    -------
    Outcome
        Floats, with its steps, for a single design; arrays (..., rows) without steps for a column.

    Raises
    ------
    InputError, TableError
        An input at fault; the error names its field, and its rows in a column.
    ScopeError
        No method can answer.
    """
    if design.rows is not None:
        return _column(design, method(key) if key else METHODS[-1])
    if key is not None:
        return _single(design, method(key))
    first: Outcome | None = None
    refused: list[PipeflexError] = []
    for one in reversed(METHODS):
        try:
            outcome = _single(design, one)
        except ScopeError as error:
            refused.append(error)
            continue
        if not outcome.outside:
            return outcome
        first = first or outcome
    if first is None:
        raise refused[0]
    return first


def _column(design: Design, one: Method) -> Outcome:
    column = design.column()
    return one.run(column, basis(column, PLAIN), PLAIN)


def _single(design: Design, one: Method) -> Outcome:
    column, trace = design.column(), Trace()
    outcome = one.run(column, basis(column, trace), trace)
    return replace(outcome.row(0, design), steps=tuple(trace.steps))


def ladder(design: Design) -> Ladder:
    """All methods for one design, rule to beam, with the developed-length rule as a marked comparison.

    `best` is the outcome of the highest method inside its limits, or of the highest that can answer at all. Every row
    says how its ratio compares with the reference, and what the reference says at the leg that the row asks.
    """
    rungs: list[Rung] = []
    answers: list[Outcome] = []
    for one in METHODS:
        try:
            outcome = _single(design, one)
        except ScopeError as error:
            rungs.append(_refused(one, error))
            continue
        answers.append(outcome)
        rungs.append(_rung(one, outcome))
    if not answers:
        raise ScopeError(Fault("layout", "a run that no method can answer", allowed="a change of direction"))
    rungs += _developed(design)
    inside = [o for o in answers if not o.outside]
    best = (inside or answers)[-1]
    reference = answers[-1]
    compared = [_compared(design, r, reference) for r in rungs]
    return Ladder(design=design, rungs=tuple(compared), best=best)


def _refused(one: Method, error: ScopeError) -> Rung:
    nothing = float("nan")
    return Rung(
        key=one.key, title=one.title, standing=Standing.OUTSIDE, reason=error.text(), ratio=nothing, leg=nothing,
        anchor=nothing,
    )  # fmt: skip


def _rung(one: Method, outcome: Outcome) -> Rung:
    reasons = "; ".join(r.words() for r in outcome.outside_reasons)
    anchors = [float(c.demand) for c in outcome.checks if c.key.startswith("anchor")]
    return Rung(
        key=one.key, title=one.title, standing=outcome.standing, reason=reasons,
        ratio=float(outcome.leading.ratio), leg=_leg_asked(outcome),
        anchor=max(anchors, default=float("nan")),
    )  # fmt: skip


def _leg_asked(outcome: Outcome) -> float:
    """The leg that a rule asks, where it is the leg that governs; not a number otherwise."""
    leg = outcome.design.layout.sizes.get("leg", np.nan)
    governs = np.isclose(outcome.results.get("l", np.nan), float(leg), rtol=1e-9)
    return float(outcome.results["l_req"]) if governs else float("nan")


def _compared(design: Design, rung: Rung, reference: Outcome) -> Rung:
    """A rung beside the reference answer, with a plain word where the rule is unsafe for this design."""
    if rung.key == reference.method or np.isnan(rung.ratio):
        return rung
    exact = float(reference.leading.ratio)
    unsafe = ""
    if rung.ratio <= 1 < exact:
        unsafe = f"Unsafe here: {reference.method_title} has {percent(exact)} where this row has {percent(rung.ratio)}."
    at_leg = _at_leg(design, rung.leg, reference.method)
    if at_leg > 1:
        unsafe = f"Unsafe here: at the leg that it asks, {reference.method_title} has {percent(at_leg)}."
    alike = float("nan") if rung.key == screening.KEY else rung.ratio / exact
    return replace(rung, to_best=alike, at_leg=at_leg, unsafe=unsafe)


def _at_leg(design: Design, leg: float, key: str) -> float:
    """Ratio of the reference at another leg; not a number where there is no such leg."""
    if "leg" not in design.layout.sizes or not np.isfinite(leg) or leg <= 0:
        return float("nan")
    try:
        sizes = {**design.layout.sizes, "leg": np.array([leg])}
        if "width" in (full := design.layout.full_sizes()):
            sizes["width"] = full["width"]
        trial = put(design, "layout.sizes", FrozenMap(sizes))
        return float(_column(trial, method(key)).leading.ratio[0])
    except PipeflexError:
        return float("nan")


def _developed(design: Design) -> tuple[Rung, ...]:
    """The handbooks' developed-length rule for a loop, as a comparison without rank."""
    layout = design.layout
    if layout.shape != "U":
        return ()
    column = design.column()
    start = basis(column, PLAIN)
    S_rule = design.duty.rule_stress or float(start.S_A[0])
    sizes = column.layout.full_sizes()
    growth = expansion.free_growth(start.e, sizes["run"])
    needed = float(cantilever.developed_length(start.E_a, start.D_o, growth, S_rule)[0])
    present = float(cantilever.loop_developed(sizes["leg"], sizes["width"])[0])
    leg = (needed - float(sizes["width"][0])) / 2
    whose = "the stress entered" if design.duty.rule_stress else "S_A"
    return (
        Rung(
            key="developed_length", title=f"developed-length rule at {whose}", standing=Standing.OUTSIDE,
            reason="for comparison: a rule of copper and heating handbooks, safe only at their low stress",
            ratio=(needed / present) ** 2, leg=max(leg, 0.0), anchor=float("nan"), reference=True,
        ),
    )  # fmt: skip


def literature(outcome: Outcome) -> tuple[str, ...]:
    """Published sources that the steps of an outcome cite, in order."""
    refs: dict[str, Any] = {}
    for step in outcome.steps:
        formula = getattr(step, "formula", None) or getattr(step, "table", None)
        ref = getattr(formula, "ref", None) or getattr(step, "ref", None)
        if ref:
            refs[ref] = None
    return tuple(refs)

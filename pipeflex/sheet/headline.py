"""The headline of an answer: verdict, how far, where, by which method, and where the answer turns."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from pipeflex import present
from pipeflex.methods.basis import table_values
from pipeflex.model.outcome import Check, Ladder, Outcome, Turn
from pipeflex.model.words import Origin, Standing, Verdict
from pipeflex.present import UnitSystem

_TURNS_NAMED = 2
_SHORT = {"guided_cantilever": "rule", "beam_flexibility": "beam"}
_NOUNS = {
    "straight": "straight run",
    "L": "change of direction",
    "Z": "offset",
    "U": "loop",
    "raised U": "raised loop",
    "points": "run",
}


@dataclass(frozen=True, slots=True)
class Headline:
    """verdict : the word. first, second, third : the lines, the third empty where all values are confirmed."""

    verdict: Verdict
    first: str
    second: str
    third: str
    code: str

    @property
    def lines(self) -> tuple[str, ...]:
        """The lines that say something."""
        return tuple(line for line in (self.first, self.second, self.third) if line)


def headline(
    outcome: Outcome, units: UnitSystem = "metric", ladder: Ladder | None = None, turns: Sequence[Turn] = ()
) -> Headline:
    """The headline of a single row."""
    verdict = outcome.verdict
    count = sum(curve.origin[i] == Origin.MEMORY for curve, i in table_values(outcome.design))
    third = f"{count} table value{'s are' if count > 1 else ' is'} {Origin.MEMORY}" if count else ""
    return Headline(
        verdict,
        f"{verdict.upper()}. {_how_far(outcome, units)}",
        " ".join(_by_which(outcome, units, ladder, turns)),
        third.replace(", confirm", ": confirm"),
        outcome.design.code.key,
    )


def question(outcome: Outcome, units: UnitSystem = "metric") -> str:
    """What is asked, in one sentence."""
    design = outcome.design
    layout, pipe = design.layout, design.pipe
    leg = layout.sizes.get("leg")
    with_leg = f" with a leg of {present.text(float(leg), 'length', units)}" if leg is not None else ""
    size = pipe.size or present.text(float(pipe.outside_diameter), "pipe dimension", units)
    span = present.span(float(design.coldest()[0]), float(design.hottest()[0]), "temperature", units)
    return (
        f"Is this {_NOUNS[layout.shape]}{with_leg} of {size} pipe, {pipe.material.key},"
        f" flexible enough for {span} by {design.code.key}?"
    )


def _of_what(check: Check, outcome: Outcome) -> str:
    return "of the allowable range" if check is outcome.leading and check.key == "range" else "of its limit"


def _how_far(outcome: Outcome, units: UnitSystem) -> str:
    worst = outcome.worst()
    if outcome.verdict is Verdict.UNKNOWN or worst is None:
        return _reason(outcome, units)
    leading = worst is outcome.leading and worst.key == "range"
    subject = "" if leading else f"{worst.title}: "
    words = f"{subject}{present.percent(float(worst.ratio))} {_of_what(worst, outcome)}"
    if worst.where:
        words += f", {'at ' if worst.where.startswith('corner') else ''}{worst.where}"
    if worst.states:
        words += f", {worst.states}"
    return words + "."


def _reason(outcome: Outcome, units: UnitSystem) -> str:
    reasons = [r.words(units) for r in outcome.outside_reasons]
    if reasons:
        return f"The {outcome.method_title} is {Standing.OUTSIDE}: {'; '.join(reasons)}."
    return f"{outcome.leading.title}: {outcome.leading.reason or 'nothing is judged'}."


def _by_which(outcome: Outcome, units: UnitSystem, ladder: Ladder | None, turns: Sequence[Turn]) -> list[str]:
    words = [f"By the {_SHORT.get(outcome.method, outcome.method_title)}."]
    if ladder is not None:
        words += _other_methods(outcome, units, ladder)
    turning = [t for t in turns if math.isfinite(float(t.turns))][:_TURNS_NAMED]
    if turning:
        words.append(_turning(outcome, units, turning))
    return words


def _other_methods(outcome: Outcome, units: UnitSystem, ladder: Ladder) -> list[str]:
    """What the rule would ask, and every method inside its limits that says otherwise."""
    words = []
    ratio = float(outcome.leading.ratio)
    for rung in ladder.rungs:
        if rung.key == outcome.method or rung.reference:
            continue
        said = []
        if math.isfinite(float(rung.leg)):
            said.append(f"would ask a leg of {present.text(float(rung.leg), 'length', units)}")
        other = float(rung.ratio)
        if rung.standing is Standing.INSIDE and math.isfinite(other) and (other > 1) != (ratio > 1):
            said.append(f"says {present.percent(other)}")
        if said:
            words.append(f"The {_SHORT.get(rung.key, rung.title)} {' and '.join(said)}.")
    return words


def _turning(outcome: Outcome, units: UnitSystem, turns: Sequence[Turn]) -> str:
    """Where one input alone turns the answer, rounded to the side on which it holds."""
    holds = outcome.verdict is Verdict.FLEXIBLE
    named = []
    for t in turns:
        value = holding_side(float(t.turns), float(t.present), t.kind, units, holds)
        named.append((t.label, value))
    if holds:
        return "Turns at " + " or ".join(_with_label(*n) for n in named) + "."
    return "It holds with " + ", or with ".join(_with_label(*n) for n in named) + "."


def _with_label(label: str, value: str) -> str:
    return f"{label[:1].lower()}{label[1:]} {value}"


def holding_side(turns: float, now: float, kind: str, units: UnitSystem, holds: bool) -> str:
    """The turning value as text, rounded toward the present value where that holds, away from it where not."""
    unit = present.display(kind, units)
    amount = present.shown(turns, kind, units) * 10.0**unit.decimals
    upward = (now > turns) == holds
    rounded = math.ceil(amount - 1e-9) if upward else math.floor(amount + 1e-9)
    exact = rounded / 10.0**unit.decimals
    return present.text(exact * float(unit.factor) + float(unit.offset), kind, units, unit.decimals)

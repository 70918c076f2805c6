"""The answer of a design in two strokes: what needs no history of friction first, the whole of it soon after."""

from dataclasses import dataclass, replace
from typing import Final

from pipeflex.methods import beam_flexibility, solve
from pipeflex.model.design import Design
from pipeflex.model.outcome import Check, Ladder, Outcome, Turn
from pipeflex.model.words import Concern

FOLLOWS: Final = "follows"
"""Reason of a check that the first stroke leaves to the second."""
_FIRST: Final = ("range", "room", "shoe")


@dataclass(frozen=True, slots=True)
class Answer:
    """An outcome; whether it is whole; and what is known beside it by now."""

    outcome: Outcome
    whole: bool
    ladder: Ladder | None = None
    turns: tuple[Turn, ...] = ()
    complete: bool = False
    """Whether nothing more follows."""


def first_answer(design: Design) -> Answer:
    """Range, room, movement and hot shape by the beam: a rest, a gap or friction changes none of these.

    Whatever does depend on them is not judged yet, and says so. Raises as `solve`.
    """
    layout = design.layout
    kept = tuple(s for s in layout.supports if s.kind != "rest")
    free = replace(layout, rest_spacing=None, guide_gap=0.0, friction=0.0, supports=kept)
    outcome = solve(replace(design, layout=free), beam_flexibility.KEY)
    checks = tuple(c if c.key in _FIRST else _left(c) for c in outcome.checks)
    return Answer(replace(outcome, design=design, checks=checks, loads=(), steps=()), whole=False)


def whole_answer(design: Design) -> Answer:
    """Everything, with rests, gaps and friction. Raises as `solve`."""
    return Answer(solve(design), whole=True)


def settled(answer: Answer) -> bool:
    """Whether the verdict can only stay: the answer is whole, or what is judged by now is exceeded."""
    return answer.whole or any(c.judged and c.exceeded for c in answer.outcome.checks)


def _left(check: Check) -> Check:
    return replace(check, unjudged=FOLLOWS) if check.concern is Concern.REACTION or check.key == "sustained" else check

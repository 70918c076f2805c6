"""A drawing in words, for those who cannot see it."""

import math

from pipeflex import present
from pipeflex.model.layout import SHAPES, SIZE_WORDS
from pipeflex.model.outcome import Outcome
from pipeflex.present import UnitSystem


def length_text(metres: float, units: UnitSystem) -> str:
    """A length of the drawing without its unit, with a third decimal where the input has one."""
    decimals = present.display("length", units).decimals
    amount = present.shown(metres, "length", units)
    if abs(round(amount, decimals) - amount) > 1e-6 >= abs(round(amount, decimals + 1) - amount):
        decimals += 1
    return present.number(metres, "length", units, decimals)


def described(outcome: Outcome, units: UnitSystem, view: str, scale: str) -> str:
    """Shape, sizes, ends, supports, and where the range is greatest."""
    layout = outcome.design.layout
    title = SHAPES[layout.shape].title
    words = [f"{view[0].upper()}{view[1:]}, {scale}: {title}"]
    if layout.shape == "points":
        lengths = layout.leg_lengths()[:, 0]
        listed = ", ".join(present.text(float(v), "length", units) for v in lengths[:12])
        words.append(f"{len(lengths)} legs: {listed}" + (" and more" if len(lengths) > 12 else ""))
    else:
        sizes = layout.full_sizes()
        words.append(
            "; ".join(
                f"{SIZE_WORDS[k][0].lower()}{SIZE_WORDS[k][1:]} {present.text(float(v), 'length', units)}"
                for k, v in sizes.items()
            )
        )
    words.append("anchors " + " and ".join(e.name or "unnamed" for e in layout.ends))
    if layout.first_guide is not None:
        words.append(f"first guide {present.text(float(layout.first_guide), 'length', units)} from the corner")
    if math.isfinite(float(outcome.design.limits.room)):
        words.append(f"room {present.text(float(outcome.design.limits.room), 'length', units)}")
    worst = outcome.worst()
    if worst is not None:
        place = f" at {worst.where}" if worst.where else ""
        words.append(f"greatest ratio {present.percent(float(worst.ratio))}, {worst.title}{place}")
    return ". ".join(words) + "."

"""What a drawing is made of. Lengths in millimetres on paper, x to the right, y down, turns clockwise in degrees."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final, Literal

XY = tuple[float, float]
Role = Literal["ink", "heat", "ribbon", "paper", "faint", "lit"]
"""What a colour means: pipe and text, heat, ratio ribbon, ground, help lines, and what the reader points at."""
Anchor = Literal["start", "middle", "end"]

HEAVY: Final = 0.9
"""Weight of the pipe [mm]."""
MEDIUM: Final = 0.5
THIN: Final = 0.22
SMALL: Final = 2.6
"""Size of small letters [mm]; `TEXT` of the others."""
TEXT: Final = 3.1


@dataclass(frozen=True, slots=True)
class Stroke:
    """A line through points; `dash` alternates lengths drawn and left out."""

    points: tuple[XY, ...]
    role: Role = "ink"
    weight: float = THIN
    dash: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class Area:
    """A filled polygon."""

    points: tuple[XY, ...]
    role: Role = "ink"
    opacity: float = 1.0


@dataclass(frozen=True, slots=True)
class Label:
    """One line of text. `at` is its `anchor` end, at half the height of the letters."""

    at: XY
    text: str
    role: Role = "ink"
    size: float = TEXT
    anchor: Anchor = "middle"
    turn: float = 0.0
    bold: bool = False

    def box(self, margin: float = 0.0) -> tuple[XY, ...]:
        """Corners of the rectangle that the text takes, estimated for the widest of common fonts."""
        width = text_width(self.text, self.size) * (1.08 if self.bold else 1.0)
        left = {"start": 0.0, "middle": -width / 2, "end": -width}[self.anchor]
        half = 0.62 * self.size
        c, s = math.cos(math.radians(self.turn)), math.sin(math.radians(self.turn))
        x, y = self.at
        corners = (
            (left - margin, -half - margin),
            (left + width + margin, -half - margin),
            (left + width + margin, half + margin),
            (left - margin, half + margin),
        )
        return tuple((x + a * c - b * s, y + a * s + b * c) for a, b in corners)


@dataclass(frozen=True, slots=True)
class Spot:
    """A place that can be pointed at: the field that it belongs to, and what it says."""

    at: XY
    text: str
    path: str = ""


@dataclass(frozen=True, slots=True)
class Scene:
    """A drawing ready to be rendered: shapes in their order, then labels on top.

    width, height : of the paper [mm]. scale : "1 : 100". description : the drawing in words.
    left_out : labels for which there was no room.
    """

    title: str
    width: float
    height: float
    scale: str
    shapes: tuple[Area | Stroke, ...]
    labels: tuple[Label, ...]
    spots: tuple[Spot, ...]
    description: str
    left_out: tuple[str, ...] = ()


_NARROW, _WIDE = frozenset("iljtfrI.,:;|!'()[] \u2009\u00a0"), frozenset("mwMW%@—…")


def text_width(text: str, size: float) -> float:
    """Width of a text [mm], on the safe side of common sans-serif fonts."""
    return size * sum(0.38 if c in _NARROW else 0.96 if c in _WIDE else 0.64 for c in text)


def shortened(text: str, longest: int) -> str:
    """A text cut to so many characters."""
    return text if len(text) <= longest else text[: longest - 1].rstrip() + "…"


def bounds(points: Sequence[XY]) -> tuple[float, float, float, float]:
    """Least x and y, greatest x and y."""
    xs, ys = zip(*points, strict=True)
    return min(xs), min(ys), max(xs), max(ys)

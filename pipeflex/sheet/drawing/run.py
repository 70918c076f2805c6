"""The run as it is drawn: to a standard scale, long straights broken, seen from one side."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from pipeflex.model.layout import Layout
from pipeflex.present import UnitSystem
from pipeflex.sheet.drawing.parts import XY

Floats = NDArray[np.float64]

VIEWS: Final = ("plan", "elevation", "isometric")
_HALF, _ROOT = 0.5, 3**0.5 / 2
_SCALES: Final[dict[UnitSystem, tuple[tuple[int, str], ...]]] = {
    "metric": tuple(
        (s, f"1 : {s}") for s in (20, 25, 50, 100, 200, 250, 500, 1000, 2000, 2500, 5000, 10000, 20000)
    ),
    "us": (
        (16, '3/4" = 1\'-0"'), (24, '1/2" = 1\'-0"'), (32, '3/8" = 1\'-0"'), (48, '1/4" = 1\'-0"'),
        (64, '3/16" = 1\'-0"'), (96, '1/8" = 1\'-0"'), (120, "1\" = 10'"), (240, "1\" = 20'"),
        (360, "1\" = 30'"), (480, "1\" = 40'"), (600, "1\" = 50'"), (1200, "1\" = 100'"),
        (2400, "1\" = 200'"), (6000, "1\" = 500'"), (12000, "1\" = 1000'"), (24000, "1\" = 2000'"),
    ),
}  # fmt: skip
_ARC_STEPS: Final = 8
_LONG: Final = 1.5
"""A straight so many times the typical leg may be broken."""


def view_matrix(view: str, viewpoint: int) -> Floats:
    """From along, across, up to right and up on paper; the isometric has its axes at 30 degrees, unshortened."""
    if view == "plan":
        return np.array([[1.0, 0, 0], [0, 1, 0]])
    if view == "elevation":
        return np.array([[1.0, 0, 0], [0, 0, 1]])
    c, s = ((1, 0), (0, 1), (-1, 0), (0, -1))[viewpoint % 4]
    turned = np.array([[c, -s, 0], [s, c, 0], [0, 0, 1]])
    return np.asarray(np.array([[_ROOT, -_ROOT, 0], [_HALF, _HALF, 1]]) @ turned)


@dataclass(frozen=True, slots=True)
class Leg:
    """A straight from corner to corner, as drawn.

    start, unit : (3,). length : true [m]. near, far : parts drawn, from its start and up to its end [m];
    together they are the length unless the leg is broken.
    """

    start: Floats
    unit: Floats
    length: float
    near: float
    far: float

    @property
    def drawn(self) -> float:
        return self.near + self.far

    @property
    def broken(self) -> bool:
        return self.drawn < self.length

    def place(self, distance: float) -> Floats | None:
        """Where a point of the leg is drawn, None within the part left out."""
        if distance <= self.near or not self.broken:
            return np.asarray(self.start + self.unit * distance)
        if distance >= self.length - self.far:
            return np.asarray(self.start + self.unit * (distance - self.length + self.drawn))
        return None


@dataclass(frozen=True, slots=True)
class DrawnRun:
    """A layout as drawn in one view.

    corners : (n, 3), ends and corners as drawn [m]. true : the same where they are. radii : of the inner corners [m].
    turns : change of direction at each of them [rad], and the straight that its bend takes from a leg [m].
    matrix : (2, 3) of the view. scale : metres are divided by it. shift : of the drawing on paper [mm].
    """

    legs: tuple[Leg, ...]
    corners: Floats
    true: Floats
    radii: tuple[float, ...]
    turns: tuple[tuple[float, float], ...]
    matrix: Floats
    scale: int
    scale_text: str
    shift: XY

    def paper(self, point: Floats) -> XY:
        """A drawn point in space on paper [mm]."""
        x, y = self.matrix @ point * (1000 / self.scale)
        return float(x + self.shift[0]), float(self.shift[1] - y)

    def direction(self, vector: Floats) -> XY:
        """Unit vector on paper of a direction in space; zero where it points at the reader."""
        x, y = self.matrix @ vector
        size = float(np.hypot(x, y))
        return (0.0, 0.0) if size < 1e-6 else (float(x) / size, float(-y) / size)

    def on_paper(self, metres: float) -> float:
        """A length in space as millimetres on paper."""
        return metres * 1000 / self.scale

    def tangent(self, corner: int) -> float:
        """Distance from an inner corner to the start of its bend, as drawn [m]."""
        before, after = self.legs[corner], self.legs[corner + 1]
        return float(min(self.turns[corner][1], before.far, after.near))

    def along(self, distance: float) -> Floats | None:
        """Where a point at a distance along the true centreline, bends as arcs, is drawn."""
        taken, begin = 0.0, 0.0
        for i, leg in enumerate(self.legs):
            last = i == len(self.legs) - 1
            turn, cut = (0.0, 0.0) if last else self.turns[i]
            straight = leg.length - begin - cut
            if distance <= taken + straight or (last and distance <= taken + straight * (1 + 1e-9) + 1e-9):
                return leg.place(min(begin + max(distance - taken, 0.0), leg.length))
            taken += straight
            arc = 0.0 if last else self.radii[i] * turn
            if distance <= taken + arc and arc > 0:
                return self._on_bend(i, (distance - taken) / arc * turn)
            taken, begin = taken + arc, cut
        return np.asarray(self.corners[-1])

    def centreline(self) -> list[list[Floats]]:
        """The pipe as pieces of points in space, bends as arcs; a break parts two pieces."""
        pieces: list[list[Floats]] = [[self.corners[0]]]
        for i, leg in enumerate(self.legs):
            if leg.broken:
                cut = leg.start + leg.unit * leg.near
                pieces[-1].append(cut)
                pieces.append([cut])
            if i == len(self.legs) - 1:
                pieces[-1].append(self.corners[-1])
            else:
                pieces[-1] += self._bend(i)
        return pieces

    def _bend(self, i: int) -> list[Floats]:
        if self.tangent(i) <= 0:
            return [self.corners[i + 1]]
        return [self._on_bend(i, a) for a in np.linspace(0, self.turns[i][0], _ARC_STEPS + 1)]

    def _on_bend(self, i: int, angle: float) -> Floats:
        """A point of a bend, as drawn, after so much of its turn [rad]."""
        u, v = self.legs[i].unit, self.legs[i + 1].unit
        turn, reach = self.turns[i][0], self.tangent(i)
        radius = reach / np.tan(turn / 2)
        inward = (v - u * np.cos(turn)) / np.sin(turn)
        start = self.corners[i + 1] - u * reach
        return np.asarray(start + radius * (u * np.sin(angle) + inward * (1 - np.cos(angle))))

    def carried(self, points: Floats, legs: Sequence[int]) -> list[Floats | None]:
        """Where points of the true run, (3, n), each on or near one leg, are drawn."""
        out: list[Floats | None] = []
        for point, i in zip(points.T, legs, strict=True):
            leg = self.legs[i]
            away = point - self.true[i]
            distance = float(away @ leg.unit)
            at = leg.place(distance)
            out.append(None if at is None else at + away - leg.unit * distance)
        return out


def drawn_run(
    layout: Layout,
    units: UnitSystem,
    matrix: Floats,
    inner: tuple[float, float, float, float],
    stub: float,
    extra: Floats | None = None,
    coarser: int = 0,
) -> DrawnRun:
    """Lay a single layout out at the finest standard scale at which it fits.

    Parameters
    ----------
    inner : left, top, width, height on paper that the run may take [mm].
    stub : least length on paper of a straight that is broken [mm].
    extra : (n, 3), offsets from the first corner that must also be on the drawing [m].
    coarser : the scale is not finer than this one.
    """
    true = layout.corner_points()[:, :, 0].T
    vectors = np.diff(true, axis=0)
    lengths = np.linalg.norm(vectors, axis=1)
    unit = vectors / lengths[:, None]
    inner_legs = lengths[1:-1] if len(lengths) > 2 else lengths.min(keepdims=True)
    long = (lengths > _LONG * np.median(inner_legs)) & (len(lengths) > 1)
    if layout.shape != "points":
        long[1:-1] = False
    left, top, width, height = inner

    def laid(metres: float) -> tuple[Floats, Floats]:
        drawn = np.where(long, np.minimum(lengths, metres), lengths)
        corners = true[0] + np.vstack([np.zeros(3), np.cumsum(unit * drawn[:, None], axis=0)])
        return drawn, corners

    def flat(corners: Floats) -> Floats:
        seen = corners if extra is None or len(corners) < 2 else np.vstack([corners, corners[1] + extra])
        return np.asarray(seen @ matrix.T)

    def fits(metres: float, scale: int) -> bool:
        size = np.ptp(flat(laid(metres)[1]), axis=0) * 1000 / scale
        return bool(size[0] <= width and size[1] <= height)

    scale, scale_text = next(
        ((s, words) for s, words in _SCALES[units] if s >= coarser and fits(stub * s / 1000, s)),
        _SCALES[units][-1],
    )
    low, high = stub * scale / 1000, float(lengths.max())
    if not fits(high, scale):
        for _ in range(24):
            middle = (low + high) / 2
            low, high = (middle, high) if fits(middle, scale) else (low, middle)
    else:
        low = high
    drawn, corners = laid(low)
    guide = layout.first_guide or 0.0
    legs = []
    for i, (start, length, d) in enumerate(zip(corners, lengths, drawn, strict=False)):
        cut = d < length - 1e-9
        shown = float(np.clip(1.2 * guide, 0.5 * d, 0.75 * d)) if cut else d / 2
        near, far = (d - shown, shown) if i == 0 else (shown, d - shown) if i == len(lengths) - 1 else (d / 2, d / 2)
        legs.append(Leg(start, unit[i], float(length), float(near), float(far if cut else length - near)))
    seen = flat(corners) * 1000 / scale
    low_xy, high_xy = seen.min(axis=0), seen.max(axis=0)
    shift = (
        left + (width - float(high_xy[0] + low_xy[0])) / 2,
        top + (height + float(high_xy[1] + low_xy[1])) / 2,
    )
    radii = tuple(float(layout.corner(i).radius) for i in range(len(lengths) - 1))
    turned = np.arccos(np.clip((unit[:-1] * unit[1:]).sum(axis=1), -1, 1))
    turns = tuple((float(a), float(r * np.tan(a / 2))) for a, r in zip(turned, radii, strict=True))
    return DrawnRun(tuple(legs), corners, true, radii, turns, matrix, scale, scale_text, shift)

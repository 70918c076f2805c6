"""The board on which a drawing is composed: it knows what is taken and finds room for labels."""

import math
from collections.abc import Iterable, Sequence
from itertools import pairwise

from pipeflex.sheet.drawing.parts import (
    TEXT,
    THIN,
    XY,
    Anchor,
    Area,
    Label,
    Role,
    Spot,
    Stroke,
    bounds,
)

Polygon = tuple[XY, ...]
_Box = tuple[float, float, float, float]


def moved(point: XY, direction: XY, distance: float) -> XY:
    """A point moved along a unit vector."""
    return point[0] + direction[0] * distance, point[1] + direction[1] * distance


def square_to(direction: XY) -> XY:
    """The direction turned a quarter, counterclockwise as seen."""
    return direction[1], -direction[0]


def unit_between(a: XY, b: XY) -> XY:
    """Unit vector from one point to another, zero if they are one."""
    size = math.dist(a, b)
    return (0.0, 0.0) if size < 1e-9 else ((b[0] - a[0]) / size, (b[1] - a[1]) / size)


def band(a: XY, b: XY, half: float) -> Polygon:
    """Rectangle about a line."""
    u = unit_between(a, b)
    if u == (0.0, 0.0):
        u = (1.0, 0.0)
    n = square_to(u)
    a, b = moved(a, u, -half), moved(b, u, half)
    return moved(a, n, half), moved(b, n, half), moved(b, n, -half), moved(a, n, -half)


def _apart(one: Polygon, other: Polygon) -> bool:
    """Whether an edge of the first convex polygon parts the two."""
    for (x0, y0), (x1, y1) in zip(one, (*one[1:], one[0]), strict=True):
        nx, ny = y1 - y0, x0 - x1
        side = [nx * (x - x0) + ny * (y - y0) for x, y in one]
        there = [nx * (x - x0) + ny * (y - y0) for x, y in other]
        if min(there) >= max(side) - 1e-9 or max(there) <= min(side) + 1e-9:
            return True
    return False


def overlap(one: Polygon, other: Polygon) -> bool:
    """Whether two convex polygons share some area."""
    return not _apart(one, other) and not _apart(other, one)


class _Taken:
    """Convex polygons with their bounds."""

    def __init__(self) -> None:
        self.items: list[tuple[_Box, Polygon]] = []

    def add(self, polygon: Polygon) -> None:
        self.items.append((bounds(polygon), polygon))

    def hit(self, polygon: Polygon) -> bool:
        left, top, right, bottom = bounds(polygon)
        for (x0, y0, x1, y1), other in self.items:
            if left < x1 and x0 < right and top < y1 and y0 < bottom and overlap(polygon, other):
                return True
        return False


class Board:
    """Collects strokes, areas and labels.

    Solid things (pipe, marks, letters, dimension lines) are crossed by nothing that is placed later; thin ones
    (extension lines, hatches, hot shape) only letters keep away from.
    """

    def __init__(self, width: float, height: float, margin: float = 0.8) -> None:
        self.width, self.height, self.margin = width, height, margin
        self.shapes: list[Area | Stroke] = []
        self.labels: list[Label] = []
        self.spots: list[Spot] = []
        self.left_out: list[str] = []
        self._solid, self._thin = _Taken(), _Taken()

    def draw(
        self,
        points: Iterable[XY],
        role: Role = "ink",
        weight: float = THIN,
        dash: tuple[float, ...] = (),
        keep: str = "thin",
        clear: float = 0.5,
    ) -> None:
        """A stroke; `keep` says whether it is solid, thin, or may be written over."""
        points = tuple(points)
        self.shapes.append(Stroke(points, role, weight, dash))
        self.hold(points, keep, weight / 2 + clear)

    def hold(self, points: Sequence[XY], keep: str, half: float) -> None:
        """Keep the ground along a line."""
        taken = {"solid": self._solid, "thin": self._thin}.get(keep)
        if taken is not None:
            for a, b in pairwise(points):
                taken.add(band(a, b, half))

    def fill(self, points: Iterable[XY], role: Role = "ink", opacity: float = 1.0, keep: str = "") -> None:
        """A filled convex polygon."""
        area = Area(tuple(points), role, opacity)
        self.shapes.append(area)
        if keep:
            (self._solid if keep == "solid" else self._thin).add(area.points)

    def inside(self, polygon: Polygon) -> bool:
        """Whether a polygon is wholly on the paper."""
        left, top, right, bottom = bounds(polygon)
        m = self.margin
        return left >= m and top >= m and right <= self.width - m and bottom <= self.height - m

    def free_for_letters(self, label: Label, over_thin: bool = False) -> bool:
        box = label.box(0.35)
        return self.inside(box) and not self._solid.hit(box) and (over_thin or not self._thin.hit(box))

    def free_for_line(self, a: XY, b: XY, half: float = 0.7) -> bool:
        strip = band(a, b, half)
        return self.inside(strip) and not self._solid.hit(strip)

    def write(self, label: Label) -> None:
        """A label where it is, whatever is there."""
        self.labels.append(label)
        self._solid.add(label.box(0.35))

    def place(self, candidates: Iterable[Label]) -> bool:
        """The first of the candidates for which there is room, if need be over thin lines; else it is left out."""
        listed = tuple(candidates)
        for over_thin in (False, True):
            for label in listed:
                if self.free_for_letters(label, over_thin):
                    self.write(label)
                    return True
        if listed:
            self.left_out.append(listed[0].text)
        return False

    def beside(
        self,
        at: XY,
        text: str,
        *,
        distances: Sequence[float] = (4.0, 6.0, 8.5, 11.0),
        first: XY | None = None,
        role: Role = "ink",
        size: float = TEXT,
        bold: bool = False,
        spread: int = 6,
    ) -> bool:
        """A label near a point, trying the direction `first` and then round it, farther and farther.

        spread : how far round, in twelfths of a turn to each side.
        """
        start = math.atan2(first[1], first[0]) if first and first != (0.0, 0.0) else -math.pi / 2

        def candidates() -> Iterable[Label]:
            for distance in distances:
                for step in (0, 1, -1, 2, -2, 3, -3, 4, -4, 5, -5, 6)[: 2 * spread + 1]:
                    angle = start + step * math.pi / 6
                    d = (math.cos(angle), math.sin(angle))
                    anchor: Anchor = "start" if d[0] > 0.4 else "end" if d[0] < -0.4 else "middle"
                    # letters are wide: from the side their near end, not their middle, keeps the distance
                    near = distance if anchor == "middle" else distance * 0.75
                    yield Label(moved(at, d, near), text, role, size, anchor, bold=bold)

        return self.place(candidates())

    def arrow_head(self, tip: XY, direction: XY, role: Role = "ink", length: float = 2.2) -> None:
        """A slender filled head whose tip points along the direction."""
        back, n = moved(tip, direction, -length), square_to(direction)
        self.fill((tip, moved(back, n, length * 0.17), moved(back, n, -length * 0.17)), role)

    def spot(self, at: XY, text: str, path: str = "") -> None:
        """A place that can be pointed at."""
        self.spots.append(Spot(at, text, path))


def readable(direction: XY) -> float:
    """Turn of text along a direction [degrees clockwise], so that it is read from below or from the right."""
    turn = math.degrees(math.atan2(direction[1], direction[0]))
    if turn > 89.5:
        turn -= 180
    elif turn < -90.5:
        turn += 180
    return turn

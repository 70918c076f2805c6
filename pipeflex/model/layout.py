"""The run: shape and sizes in trade words, corners, ends, supports, weights, and what changes along it.

Axes of a layout: first along the run (`along`, say east), second across it (`across`, say north), third up.
A new shape is an entry of `SHAPES`, not a class.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Final

import numpy as np

from pipeflex.errors import Bad, Fault, InputError, MissingInput, refuse
from pipeflex.model.fields import FrozenMap, many, number, numbers, pick_of, sub, text, vector, whole
from pipeflex.model.pipe import Pipe
from pipeflex.model.record import Record, record

CORNER_KINDS: Final = ("bend", "square", "closely spaced mitre", "widely spaced mitre", "socket welded",
                       "threaded", "brazed")  # fmt: skip
SUPPORT_KINDS: Final = ("guide", "rest", "line stop", "spring")

SHORTEST: Final = 1e-3
"""Least length of a leg [m]."""
FARTHEST: Final = 1e5
"""Greatest length and distance [m]."""


@record
class Corner(Record):
    """What the pipe turns with. `radius` is that of the centreline; a mitre also has its half angle and spacing."""

    kind: str = pick_of(*CORNER_KINDS, label="Corners")
    radius: float = number("pipe dimension", at_least=0, default=0.0, label="Bend radius")
    radius_from: str = text(longest=300, default="")
    flanges: int = whole(default=0)
    half_angle: float = number("angle", at_least=0, default=0.0)
    spacing: float = number("pipe dimension", at_least=0, default=0.0)

    def check(self) -> None:
        refuse(
            InputError,
            (
                (self.kind == "bend") & (np.asarray(self.radius) <= 0),
                Fault("radius", self.radius, "above zero for a bend", "pipe dimension"),
            ),
            (
                ("mitre" in self.kind)
                & ((np.asarray(self.half_angle) <= 0) | (np.asarray(self.half_angle) > MOST_MITRE)),
                Fault("half_angle", self.half_angle, "above zero for a mitre", "angle", high=MOST_MITRE),
            ),
            (
                (self.kind == "closely spaced mitre") & (np.asarray(self.spacing) <= 0),
                Fault("spacing", self.spacing, "above zero for closely spaced mitres", "pipe dimension"),
            ),
            (self.flanges > 2, Fault("flanges", self.flanges, allowed="0, 1 or 2 flanged ends")),
        )


@record
class End(Record):
    """An end of the run: an anchor or the nozzle of equipment.

    stiffness [N/m] and rotational_stiffness [N m/rad] along and about the three axes; unlimited is rigid.
    force_limits [N], moment_limits [N m]: of the three directions of `axis`, square to it, and the third.
    """

    name: str = text(default="")
    tag: str = text(default="")
    stiffness: tuple[float, ...] = vector("stiffness", 3, default=(np.inf,) * 3, at_least=0, unlimited=True)
    rotational_stiffness: tuple[float, ...] = vector(
        "rotational stiffness", 3, default=(np.inf,) * 3, at_least=0, unlimited=True
    )
    axis: tuple[float, ...] = vector("ratio", 3, default=(1.0, 0.0, 0.0))
    force_limits: tuple[float, ...] = vector("force", 3, default=(np.inf,) * 3, at_least=0, unlimited=True)
    moment_limits: tuple[float, ...] = vector("moment", 3, default=(np.inf,) * 3, at_least=0, unlimited=True)
    anchor_limit: float = number("force", at_least=1, unlimited=True, label="Anchor can take", default=np.inf)

    def check(self) -> None:
        size = sum(np.asarray(v) ** 2 for v in self.axis)
        refuse(InputError, (size < 1e-12, Fault("axis", "no direction", allowed="a vector of some length")))


@record
class Support(Record):
    """A support at a distance along one leg (legs count from 1)."""

    kind: str = pick_of(*SUPPORT_KINDS)
    name: str = text(default="")
    leg: int = whole(at_least=1)
    distance: float = number("length", at_least=0)
    gap: float = number("movement", at_least=0, default=0.0)
    friction: float | None = number("ratio", at_least=0, at_most=2, optional=True, default=None)
    stiffness: float = number("stiffness", above=0, unlimited=True, default=np.inf)
    load: float = number("force", at_least=0, default=0.0)
    limit: float = number("force", above=0, unlimited=True, default=np.inf)


@record
class Weight(Record):
    """A concentrated mass (a valve, a flange pair) at a distance along one leg."""

    name: str = text(default="")
    mass: float = number("mass", above=0, at_most=1e6)
    leg: int = whole(at_least=1)
    distance: float = number("length", at_least=0)


@record
class Segment(Record):
    """A stretch of one leg with another pipe or temperature."""

    name: str = text(default="")
    leg: int = whole(at_least=1)
    start: float = number("length", at_least=0)
    end: float = number("length", above=0)
    temperature_offset: float = number("temperature change", default=0.0)
    pipe: Pipe | None = sub(lambda: Pipe, optional=True)

    def check(self) -> None:
        refuse(
            InputError,
            (
                np.asarray(self.end) <= np.asarray(self.start),
                Fault("end", self.end, "beyond the start of the segment", "length"),
            ),
        )


@record
class Point(Record):
    """One corner or end of a run given by its points, along, across and up from any origin."""

    along: float = number("length", at_least=-FARTHEST, at_most=FARTHEST, default=0.0)
    across: float = number("length", at_least=-FARTHEST, at_most=FARTHEST, default=0.0)
    up: float = number("length", at_least=-FARTHEST, at_most=FARTHEST, default=0.0)


@dataclass(frozen=True, slots=True)
class Shape:
    """How trade sizes become corners. `needs` must be given; `derived` computes those left out."""

    key: str
    title: str
    needs: tuple[str, ...]
    derived: dict[str, tuple[str, Callable[[dict[str, Any]], Any]]]
    corners: Callable[[dict[str, Any]], list[tuple[Any, Any, Any]]]
    legs: int


def _half_run(s: dict[str, Any]) -> Any:
    return s["run"] / 2


_WIDTH = ("half the leg, common practice", lambda s: s["leg"] / 2)
_MIDDLE = ("the loop in the middle of the run", lambda s: (s["run"] - s["width"]) / 2)


def _u(s: dict[str, Any]) -> list[tuple[Any, Any, Any]]:
    b, w, leg = s["before"], s["width"], s["leg"]
    return [(0, 0, 0), (b, 0, 0), (b, leg, 0), (b + w, leg, 0), (b + w, 0, 0), (s["run"], 0, 0)]


def _raised_u(s: dict[str, Any]) -> list[tuple[Any, Any, Any]]:
    b, w, leg, rise = s["before"], s["width"], s["leg"], s["rise"]
    return [
        (0, 0, 0), (b, 0, 0), (b, 0, rise), (b, leg, rise),
        (b + w, leg, rise), (b + w, 0, rise), (b + w, 0, 0), (s["run"], 0, 0),
    ]  # fmt: skip


def _z(s: dict[str, Any]) -> list[tuple[Any, Any, Any]]:
    return [(0, 0, 0), (s["before"], 0, 0), (s["before"], s["leg"], 0), (s["run"], s["leg"], 0)]


SHAPES: Final[dict[str, Shape]] = {
    "straight": Shape("straight", "straight run", ("run",), {}, lambda s: [(0, 0, 0), (s["run"], 0, 0)], 1),
    "L": Shape(
        "L",
        "L, one change of direction",
        ("run", "leg"),
        {},
        lambda s: [(0, 0, 0), (s["run"], 0, 0), (s["run"], s["leg"], 0)],
        2,
    ),
    "Z": Shape("Z", "Z, offset", ("run", "leg"), {"before": ("the offset in the middle of the run", _half_run)}, _z, 3),
    "U": Shape("U", "U, loop", ("run", "leg"), {"width": _WIDTH, "before": _MIDDLE}, _u, 5),
    "raised U": Shape(
        "raised U",
        "raised loop",
        ("run", "leg", "rise"),
        {"width": _WIDTH, "before": _MIDDLE},
        _raised_u,
        7,
    ),
    "points": Shape("points", "run by its points", (), {}, lambda s: [], 0),
}
SIZE_WORDS: Final = {
    "run": "Between anchors",
    "leg": "Leg",
    "width": "Width",
    "before": "From the first anchor to the first corner",
    "rise": "Rise",
}
MOST_LEGS: Final = 200
MOST_MITRE: Final = float(np.radians(22.5)) * (1 + 1e-9)
"""Greatest half angle of a mitre for which factors are published (ASME B31.3 Table D300) [rad]."""


@record
class Layout(Record):
    """The run of one line between two ends.

    sizes [m] : named sizes of the shape; `run` is anchor to anchor, loop width included.
    corners : one for all, or one each. first_guide [m] : along the run from the loop's corners, on both sides;
    none if absent. rest_spacing [m] : rests along the run; friction : the upper friction factor.
    """

    shape: str = pick_of(*SHAPES, label="Shape")
    sizes: FrozenMap = numbers("length", at_least=SHORTEST, at_most=FARTHEST, label="Sizes")
    points: tuple[Point, ...] = many(lambda: Point)
    corners: tuple[Corner, ...] = many(lambda: Corner)
    ends: tuple[End, ...] = many(lambda: End, factory=lambda: (End(name="west"), End(name="east")))
    first_guide: float | None = number("length", above=0, optional=True, label="First guide", default=None)
    guide_gap: float = number(
        "movement", at_least=0, at_most=0.1, default=0.003, label="Guide gap a side", basis="common practice"
    )
    guide_stiffness: float = number("stiffness", above=0, unlimited=True, label="Guide stiffness", default=np.inf)
    guide_spacing: float | None = number(
        "length", at_least=0.01, at_most=FARTHEST, optional=True, label="Between guides", default=None
    )
    rest_spacing: float | None = number(
        "length", at_least=0.01, at_most=FARTHEST, optional=True, label="Between rests", default=None
    )
    friction: float = number(
        "ratio",
        at_least=0,
        at_most=1.0,
        default=0.3,
        label="Friction",
        basis="steel on steel, common practice",
    )
    supports: tuple[Support, ...] = many(lambda: Support)
    weights: tuple[Weight, ...] = many(lambda: Weight)
    segments: tuple[Segment, ...] = many(lambda: Segment)
    along: str = text(default="east", label="Along the run")
    across: str = text(default="north", label="Across the run")
    pockets: str = pick_of("yes", "no", "drained", default="yes", label="May be pocketed")

    def check(self) -> None:
        if self.shape == "points":
            refuse(
                MissingInput,
                (len(self.points) < 2, Fault("points", None, allowed="two points at least")),
                (len(self.points) > MOST_LEGS, Fault("points", None, allowed=f"at most {MOST_LEGS} points")),
            )
        self._check_sizes()
        legs = self.leg_count
        turns = legs - 1
        refuse(
            InputError,
            (len(self.ends) != 2, Fault("ends", f"{len(self.ends)} ends", allowed="two ends")),
            (
                turns > 0 and len(self.corners) not in (1, turns),
                Fault(
                    "corners",
                    f"{len(self.corners)} corners",
                    allowed="a kind of corner for all" + (f", or one each for {turns}" if turns > 1 else ""),
                ),
            ),
        )
        lengths = self.leg_lengths()
        self._check_legs(lengths)
        self._check_places(lengths)

    def _check_sizes(self) -> None:
        shape = SHAPES[self.shape]
        known = (*shape.needs, *shape.derived)
        unknown = [Fault(f"sizes.{k}", k, "a size of this shape", near=known) for k in self.sizes if k not in known]
        if unknown:
            raise InputError(*unknown)
        missing = [Fault(f"sizes.{k}", None, allowed="a length") for k in shape.needs if k not in self.sizes]
        if missing:
            raise MissingInput(*missing)
        if "before" not in known:
            return
        full = self.full_sizes()
        run, width, before = full["run"], full.get("width", 0.0), full["before"]
        beyond = np.asarray(run - width)
        refuse(
            InputError,
            (
                beyond <= 0,
                Fault("sizes.width", width, "less than the run", "length", high=float(np.ravel(run)[0])),
            ),
            (
                (beyond > 0) & ((np.asarray(before) <= 0) | (np.asarray(before) >= beyond)),
                Fault("sizes.before", before, "within the run", "length", low=0.0, high=float(np.ravel(beyond)[0])),
            ),
        )

    def _check_legs(self, lengths: np.ndarray) -> None:
        faults = []
        for i, length in enumerate(lengths):
            field, words = "sizes", f"sizes that leave leg {i + 1} a length"
            if self.shape == "points":
                field, words = f"points.{i + 1}", "a point away from the one before"
            faults.append((length < SHORTEST, Fault(field, length, words, "length", low=SHORTEST)))
        refuse(InputError, *faults)

    def _check_places(self, lengths: np.ndarray) -> None:
        faults: list[Bad] = []
        placed = [(f"supports.{i}", s.leg, s.distance) for i, s in enumerate(self.supports)]
        placed += [(f"weights.{i}", s.leg, s.distance) for i, s in enumerate(self.weights)]
        placed += [(f"segments.{i}", s.leg, s.end) for i, s in enumerate(self.segments)]
        for path, leg, distance in placed:
            if leg > len(lengths):
                faults.append((True, Fault(f"{path}.leg", leg, allowed=f"1 to {len(lengths)}")))
                continue
            length = lengths[leg - 1]
            over = np.asarray(distance) > length
            fault = Fault(f"{path}.distance", distance, f"within leg {leg}", "length", 0.0, float(length.max()))
            faults.append((over, fault))
        for i, one in enumerate(self.segments):
            for j, other in enumerate(self.segments[:i]):
                meet = (np.asarray(one.start) < np.asarray(other.end)) & (np.asarray(other.start) < np.asarray(one.end))
                fault = Fault(f"segments.{i}", f"a stretch of leg {one.leg} that meets segment {j}", "stretches apart")
                faults.append((meet & (one.leg == other.leg), fault))
        if self.first_guide is not None and self.leg_count > 1:
            shortest = np.minimum(lengths[0], lengths[-1])
            fault = Fault(
                "first_guide", self.first_guide, "on the run, short of the anchor", "length", 0.0,
                float(np.min(shortest)),
            )  # fmt: skip
            faults.append((np.asarray(self.first_guide) >= shortest, fault))
        refuse(InputError, *faults)

    @property
    def leg_count(self) -> int:
        return len(self.points) - 1 if self.shape == "points" else SHAPES[self.shape].legs

    def full_sizes(self) -> dict[str, Any]:
        """All sizes of the shape [m], those left out computed from the others."""
        sizes = dict(self.sizes)
        for name, (_, compute) in SHAPES[self.shape].derived.items():
            if name not in sizes:
                sizes[name] = compute(sizes)
        return sizes

    def corner_points(self) -> np.ndarray:
        """Ends and corners in order, (3, n, rows) [m]."""
        if self.shape == "points":
            points: list[tuple[Any, ...]] = [(p.along, p.across, p.up) for p in self.points]
        else:
            points = list(SHAPES[self.shape].corners(self.full_sizes()))
        flat = [np.atleast_1d(np.asarray(v, float)) for point in points for v in point]
        return np.stack(np.broadcast_arrays(*flat)).reshape(len(points), 3, -1).transpose(1, 0, 2)

    def leg_vectors(self) -> np.ndarray:
        """Legs from corner to corner, (3, n - 1, rows) [m]."""
        return np.diff(self.corner_points(), axis=1)

    def leg_lengths(self) -> np.ndarray:
        """Lengths of the legs from corner to corner, (n - 1, rows) [m]."""
        lengths: np.ndarray = np.sqrt((self.leg_vectors() ** 2).sum(axis=0))
        return lengths

    def corner_names(self) -> tuple[str, ...]:
        """Letters of the corners, from A."""
        return tuple(letters(i) for i in range(self.leg_count - 1))

    def corner(self, i: int) -> Corner:
        """The corner of index i, counted from 0."""
        return self.corners[i if len(self.corners) > 1 else 0]


def letters(i: int) -> str:
    """A, B, ... Z, AA, AB ..."""
    first, last = divmod(i, 26)
    return (letters(first - 1) if first else "") + chr(ord("A") + last)

"""A run of pipe between two ends: its geometry, checked, and the plan by which it is cut into elements.

Rows of a column share one plan (corners, kinds and order of supports); every number may differ from row to row.
"""

from collections.abc import Sequence
from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from pipeflex.errors import Fault, InputError, refuse
from pipeflex.mechanics.beam.compliance import Array, Indices, cross, dot
from pipeflex.mechanics.beam.parts import Break, End, Number, Placed, PointWeight, Section, Support

CHUNK = 1024
"""Rows worked on at a time, so that they stay in the cache."""

_REUSED = 31 << 20
_STRAIGHT_THROUGH = 1e-6
_TOUCHING = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class Plan:
    """How every row is cut into elements, in order along the run.

    leg, piece, bend : per element; `bend` is -1 for a straight.
    first, last : per element, index into `Run.cuts` of a straight's ends.
    begin, part : per element, fraction of the bend before and in it.
    support_station, weight_station : station (element that begins there) of each support and concentrated weight.
    bend_piece : piece before each bend; the next one is after it.
    """

    leg: Indices
    piece: Indices
    bend: Indices
    first: Indices
    last: Indices
    begin: Array
    part: Array
    support_station: Indices
    weight_station: Indices
    bend_piece: Indices


@dataclass(frozen=True, slots=True, eq=False)
class Run:
    """A checked run; made by `assemble`.

    origin : (3, row), the first corner [m]; corners : (3, corner, row) from there.
    along : (3, leg, row) unit vectors; lengths : (leg, row) corner to corner [m].
    angle, radius, factor : (bend, row) change of direction [rad], bend radius [m], flexibility factor k.
    inward : (3, bend, row), from the start of the bend to its centre.
    cuts : (2 legs + placed, row), distances along the leg: straights' starts, their ends, then all placed things [m].
    axial, bending, torsion, weight : (piece, row), E A, E I, G J, weight per length.
    """

    origin: Array
    corners: Array
    along: Array
    lengths: Array
    angle: Array
    radius: Array
    factor: Array
    inward: Array
    cuts: Array
    axial: Array
    bending: Array
    torsion: Array
    weight: Array
    supports: tuple[Support, ...]
    weights: tuple[PointWeight, ...]
    ends: tuple[End, End]
    plan: Plan
    cache: dict[object, object] = field(default_factory=dict)

    @property
    def rows(self) -> int:
        return int(self.corners.shape[2])

    @property
    def pieces(self) -> int:
        return int(self.bending.shape[0])

    @property
    def live(self) -> tuple[int, ...]:
        """Axes along which the run extends at all; all of them where there is no bend."""
        if "live" not in self.cache:
            every = tuple(i for i in range(3) if not self.bends or self.corners[i].any())
            self.cache["live"] = every
        return self.cache["live"]  # type: ignore[return-value]

    @property
    def bends(self) -> int:
        return int(self.angle.shape[0])


def assemble(
    corners: Array,
    section: Section,
    *,
    modulus: Number,
    poisson: Number = 0.3,
    radius: Number = 0.0,
    bend_factor: Number = 1.0,
    weight: Number = 0.0,
    supports: Sequence[Support] = (),
    weights: Sequence[PointWeight] = (),
    breaks: Sequence[Break] = (),
    ends: tuple[End, End] | None = None,
) -> Run:
    """Build and check a run.

    Parameters
    ----------
    corners : (3, corner, row) or (3, corner), z up; the first and last are the ends [m].
    section : area and second moments; a bend has those of the piece before it.
    modulus : E [Pa], broadcasts to (piece, row).
    poisson : ratio nu, broadcasts to (piece, row); G = E/(2 (1 + nu)).
    radius : bend radius [m], broadcasts to (bend, row); 0 is a square corner.
    bend_factor : flexibility factor k, broadcasts to (bend, row).
    weight : per length [N/m], broadcasts to (piece, row).
    supports, weights, breaks : in any order; their order along the run must be that of the first row in every row.
    ends : both rigid unless given.

    Raises
    ------
    InputError
        Zero-length leg, straight-through or folded corner, overlapping tangents, a placed thing off its straight,
        two rigid holds at one place in one direction.
    """
    corners = np.asarray(corners, dtype=float)
    corners = corners[:, :, None] if corners.ndim == 2 else corners
    _check_shape(corners)
    supports, weights, breaks = tuple(supports), tuple(weights), tuple(breaks)
    rows, legs = corners.shape[2], corners.shape[1] - 1
    if rows > CHUNK:
        # the C library hands freed blocks back to the system page by page until it has seen so large a one come and go
        np.empty(_REUSED, np.uint8)
    pieces = legs + len(breaks)
    _check_places((*breaks, *supports, *weights), legs)

    def per_piece(value: Number, name: str, positive: bool = True) -> Array:
        value = _spread(value, (pieces, rows), name)
        fits = ((value > 0) if positive else (value >= 0)) & (value < np.inf)
        if not fits.all():
            refuse(InputError, (~fits.all(axis=0), Fault(name, value[~fits][0], "positive and finite")))
        return value

    e = per_piece(modulus, "modulus")
    inertia = per_piece(section.inertia, "section.inertia")
    torsion = 2.0 * inertia if section.torsion is None else per_piece(section.torsion, "section.torsion")
    radius = _spread(radius, (legs - 1, rows), "radius")
    factor = _spread(bend_factor, (legs - 1, rows), "bend_factor")
    if not ((radius >= 0).all() and (factor >= 1.0).all()):
        refuse(
            InputError,
            (~(radius >= 0).all(axis=0), Fault("radius", None, "0 or more")),
            (~(factor >= 1.0).all(axis=0), Fault("bend_factor", None, "at least 1")),
        )
    origin = corners[:, 0]
    local = corners - origin[:, None]
    along, lengths, angle, inward, tangents = geometry(local, radius)
    placed: tuple[Placed, ...] = (*breaks, *supports, *weights)
    start = np.concatenate([np.zeros((1, rows)), tangents])
    end = lengths - np.concatenate([tangents, np.zeros((1, rows))])
    distances = np.empty((len(placed), rows))
    for i, thing in enumerate(placed):
        distances[i] = thing.distance
    plan, order = _plan(legs, radius, breaks, supports, weights, distances)
    _check_on_straight(placed, distances, start, end, lengths, order)
    return Run(
        origin=origin,
        corners=local,
        along=along,
        lengths=lengths,
        angle=angle,
        radius=radius,
        factor=factor,
        inward=inward,
        cuts=np.concatenate([start, end, distances]),
        axial=e * per_piece(section.area, "section.area"),
        bending=e * inertia,
        torsion=e / (2.0 * (1.0 + _spread(poisson, (pieces, rows), "poisson"))) * torsion,
        weight=per_piece(weight, "weight", positive=False),
        supports=supports,
        weights=weights,
        ends=ends or (End(), End()),
        plan=plan,
    )


def _spread(value: Number, shape: tuple[int, int], name: str) -> Array:
    whole = np.empty(shape)
    try:
        whole[...] = value
    except ValueError:
        raise InputError(Fault(name, f"shape {np.shape(value)}", f"shape {shape}")) from None
    return whole


def _check_shape(corners: Array) -> None:
    wrong = corners.ndim != 3 or corners.shape[0] != 3 or corners.shape[1] < 2
    refuse(InputError, (wrong, Fault("corners", f"shape {corners.shape}", "shape (3, 2 or more, rows)")))
    finite = np.isfinite(corners).all(axis=(0, 1))
    if not finite.all():
        refuse(InputError, (~finite, Fault("corners", "not a number", "finite coordinates")))


def _check_places(placed: tuple[Placed, ...], legs: int) -> None:
    bad = []
    for thing in placed:
        name, leg, bend = _name(thing), thing.leg, thing.bend
        if (leg is None) == (bend is None):
            bad.append((True, Fault(name, None, "either on a leg or on a bend")))
        if leg is not None and not 0 <= leg < legs:
            bad.append((True, Fault(f"{name}.leg", leg, f"0 .. {legs - 1}")))
        if bend is not None and not 0 <= bend < legs - 1:
            bad.append((True, Fault(f"{name}.bend", bend, f"0 .. {legs - 2}")))
    if bad:
        refuse(InputError, *bad)


def _name(thing: Placed) -> str:
    return f"{type(thing).__name__.lower()} {thing.tag}".strip()


def geometry(corners: Array, radius: Array) -> tuple[Array, Array, Array, Array, Array]:
    """Unit vectors and lengths of the legs, angle, inward vector and tangent length of the bends; checked."""
    legs = corners[:, 1:] - corners[:, :-1]
    lengths = np.sqrt(dot(legs, legs))
    short = ~(lengths > 0)
    if short.any():
        refuse(
            InputError,
            *((short[i], Fault(f"leg {i + 1}", 0.0, "longer than zero", "length")) for i in range(len(lengths))),
        )
    along = legs / lengths
    before, after = along[:, :-1], along[:, 1:]
    turn = cross(before, after)
    sine, cosine = np.sqrt(dot(turn, turn)), dot(before, after)
    plain = sine < _STRAIGHT_THROUGH
    if plain.any():
        refuse(
            InputError,
            *(
                (
                    plain[i],
                    Fault(f"corner {i + 1}", "straight through or folded back", "a change of direction"),
                )
                for i in range(len(sine))
            ),
        )
    tangents = radius * sine / (1.0 + cosine)
    room = lengths.copy()
    room[:-1] -= tangents
    room[1:] -= tangents
    tight = room < -_TOUCHING * lengths
    if tight.any():
        refuse(
            InputError,
            *(
                (
                    tight[i],
                    Fault(
                        f"leg {i + 1}",
                        lengths[i],
                        f"longer than the tangents of its bends, {float((lengths - room)[i][tight[i]][0]):.6g} m:"
                        " a smaller radius or a longer leg",
                        "length",
                    ),
                )
                for i in np.flatnonzero(tight.any(axis=1))
            ),
        )
    return along, lengths, np.arctan2(sine, cosine), (after - cosine * before) / sine, tangents


def _plan(
    legs: int,
    radius: Array,
    breaks: tuple[Break, ...],
    supports: tuple[Support, ...],
    weights: tuple[PointWeight, ...],
    distances: Array,
) -> tuple[Plan, list[list[int]]]:
    """Cut the run at bends and placed things; also the placed things of each leg in their order."""
    placed: tuple[Placed, ...] = (*breaks, *supports, *weights)
    on_leg: list[list[int]] = [[] for _ in range(legs)]
    on_bend: list[list[int]] = [[] for _ in range(legs)]
    for i, thing in enumerate(placed):
        if thing.leg is not None:
            on_leg[thing.leg].append(i)
        elif thing.bend is not None:
            on_bend[thing.bend].append(i)
    curved: NDArray[np.bool_] = np.asarray((radius > 0).any(axis=1))
    table: list[tuple[int, int, int, int, int, float, float]] = []
    station = [0] * len(placed)
    piece = 0
    before: list[int] = []
    for leg in range(legs):
        things = on_leg[leg]
        things.sort(key=lambda i: distances[i, 0])
        at = leg
        for i in things:
            table.append((leg, piece, -1, at, 2 * legs + i, 0.0, 0.0))
            station[i] = len(table)
            at = 2 * legs + i
            piece += i < len(breaks)
        table.append((leg, piece, -1, at, legs + leg, 0.0, 0.0))
        if leg < legs - 1:
            middle = bool(on_bend[leg])
            for half in range(1 + middle):
                if curved[leg]:
                    table.append((leg, piece, leg, 0, 0, 0.5 * half, 0.5 if middle else 1.0))
                if middle and not half:
                    for i in on_bend[leg]:
                        station[i] = len(table)
            before.append(piece)
            piece += 1
    columns = list(zip(*table, strict=True))
    leg_, piece_, bend_, first, last = np.array(columns[:5], dtype=np.intp)
    b, s = len(breaks), len(breaks) + len(supports)
    stations = np.array(station, dtype=np.intp)
    begin, part = np.array(columns[5:])
    plan = Plan(
        leg=leg_,
        piece=piece_,
        bend=bend_,
        first=first,
        last=last,
        begin=begin,
        part=part,
        support_station=stations[b:s],
        weight_station=stations[s:],
        bend_piece=np.array(before, dtype=np.intp),
    )
    return plan, on_leg


def _check_on_straight(
    placed: tuple[Placed, ...],
    distances: Array,
    start: Array,
    end: Array,
    lengths: Array,
    order: list[list[int]],
) -> None:
    legs = np.array([-1 if thing.leg is None else thing.leg for thing in placed], dtype=np.intp)
    slack = _TOUCHING * lengths[legs]
    on: NDArray[np.bool_] = (distances >= start[legs] - slack) & (distances <= end[legs] + slack)
    wrong = ~on & (legs >= 0)[:, None]
    if wrong.any():
        refuse(
            InputError,
            *(
                (
                    wrong[i],
                    Fault(
                        f"{_name(placed[i])}.distance",
                        distances[i],
                        f"on the straight part of leg {legs[i] + 1}",
                        "length",
                        low=float(start[legs[i]][wrong[i]][0]),
                        high=float(end[legs[i]][wrong[i]][0]),
                    ),
                )
                for i in np.flatnonzero(wrong.any(axis=1))
            ),
        )
    if distances.shape[1] == 1:
        return
    for things in order:
        for one, other in pairwise(things):
            swapped = distances[other] < distances[one]
            if swapped.any():
                what = f"{_name(placed[one])}, {_name(placed[other])}"
                refuse(InputError, (swapped, Fault(what, None, "in the same order along the run in every row")))

"""From the wrenches of an answer: moments in local axes, movements and rotations anywhere, equilibrium."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from pipeflex.mechanics.beam.causes import own_twists, point_wrenches, twists
from pipeflex.mechanics.beam.compliance import (
    UP,
    Array,
    Properties,
    Shape,
    Vector,
    cross,
    dot,
    inner_product,
    less,
    outer,
    spaced,
    vector,
    yielding,
)
from pipeflex.mechanics.beam.elements import Elements, chunks, elements, members, of_shape, station_points
from pipeflex.mechanics.beam.parts import States
from pipeflex.mechanics.beam.run import Run
from pipeflex.mechanics.beam.sweep import Answer

POINTS = ("start", "middle", "end")


@dataclass(frozen=True, slots=True, eq=False)
class Moments:
    """Moments and axial force at the start, middle and end of every element, (state, point, element, row).

    in_plane, out_plane : bending in and out of the plane of the element's bend [N*m]; for a straight the plane of
        the corner before it (at its end, of the corner after it).
    torsion : [N*m]; axial : tension positive [N].
    fraction : (state, element, row), where the middle is: one half, or on a straight that carries weight the place
        where its own weight makes the vertical bending moment greatest.
    """

    in_plane: Array
    out_plane: Array
    torsion: Array
    axial: Array
    fraction: Array

    def resultant(self) -> Array:
        """All three moments together [N*m]."""
        squares = self.in_plane**2
        squares += self.out_plane**2
        squares += self.torsion**2
        return np.sqrt(squares, out=squares)


@dataclass(frozen=True, slots=True, eq=False)
class Movements:
    """Movement and rotation along the run.

    position : (3, place, row) [m], in the coordinates of the corners.
    movement : (state, 3, place, row) [m]; rotation : (state, 3, place, row) [rad], global axes.
    """

    position: Array
    movement: Array
    rotation: Array


def moments(answer: Answer) -> Moments:
    """Moments in local axes along the run."""
    count, _, n, rows = answer.wrench.shape
    in_plane, out_plane, torsion, axial = (np.zeros((count, 3, n, rows)) for _ in range(4))
    whole = Moments(in_plane, out_plane, torsion, axial, np.full((count, n, rows), 0.5))
    for part in chunks(answer.run):
        _moments(answer, elements(answer.run, part), whole)
    return whole


def _factor(states: States, count: int) -> Array:
    return np.broadcast_to(np.asarray(states.weight, dtype=float), (count,))[:, None, None]


def _moments(answer: Answer, made: Elements, whole: Moments) -> None:
    """Fill in the moments of a slice of rows."""
    run, shape, bent, straight, rows = answer.run, made.shape, made.bent, made.straight, made.rows
    wrench = answer.wrench[..., rows].swapaxes(0, 1)
    working = [part if part.any() else None for part in wrench]
    force: Vector = working[:3]
    about: Vector = working[3:]
    weight = _factor(answer.states, wrench.shape[1]) * made.prop.weight
    live = spaced(run.live)
    start, along, inward, length = shape.start[live], shape.along[live], shape.inward[live], shape.length
    middle = whole.fraction[..., rows]
    weighs = bool(weight.any())
    if weighs:
        middle[:, straight] = _peak(wrench[:3, :, straight], weight[:, straight], shape.along, length, made)
    mid_tan, mid_in, end_tan, end_in = along, inward, along.copy(), inward.copy()
    end_in[:, straight] = _after(run, made)[live]
    mid_point = start[:, None] + (middle * length) * along[:, None]
    end_point = start + length * along
    if len(bent):
        lead, side, first, radius = along[:, bent], inward[:, bent], start[:, bent], shape.radius[bent]
        half = 0.5 * shape.angle[bent]
        s, c = np.sin(half), np.cos(half)
        tangent, inner = c * lead + s * side, c * side - s * lead
        mid_tan, mid_in = along.copy(), inward.copy()
        mid_tan[:, bent], mid_in[:, bent] = tangent, inner
        end_tan[:, bent], end_in[:, bent] = c * tangent + s * inner, c * inner - s * tangent
        mid_point[:, :, bent] = (first + radius * (s * lead + (1.0 - c) * side))[:, None]
        end_point[:, bent] = first + 2.0 * radius * s * tangent
    places = (
        (start[:, None], along, inward, np.zeros(())),
        (mid_point, mid_tan, mid_in, middle),
        (end_point[:, None], end_tan, end_in, np.ones(())),
    )
    for i, (point, tangent, inner, fraction) in enumerate(places):
        pull, turn = force, about
        if weighs and i < 2:
            beyond_force, beyond_moment = _beyond(made, weight, fraction)
            pull, turn = [*(wrench[:3] + beyond_force)], [*(wrench[3:] + beyond_moment)]
        there = less(turn, outer(vector(point, run.live), pull))
        ahead, inside = vector(tangent, run.live), vector(inner, run.live)
        for field, value in (
            (whole.in_plane, inner_product(there, outer(ahead, inside))),
            (whole.out_plane, inner_product(there, inside)),
            (whole.torsion, inner_product(there, ahead)),
            (whole.axial, inner_product(pull, ahead)),
        ):
            if value is not None:
                field[:, i, :, rows] = value


def _peak(force: Array, weight: Array, along: Array, length: Array, made: Elements) -> Array:
    """Fraction of each straight at which the shear in the vertical plane vanishes, within the straight."""
    tau, size = along[:, made.straight], length[made.straight]
    slope = 1.0 - tau[UP] ** 2
    shear = force[UP] - dot(force, tau[:, None]) * tau[UP]
    carried = weight * slope * size
    with np.errstate(divide="ignore", invalid="ignore"):
        place = 1.0 - shear / carried
    return np.clip(np.where(carried > 0, place, 0.5), 0.0, 1.0)


def _after(run: Run, made: Elements) -> Array:
    """For each straight a vector in the plane of the corner after it (the last one, if any), square to it."""
    leg, after = run.plan.leg[made.straight], made.shape.inward[:, made.straight]
    before_bend = leg < run.bends
    after[:, before_bend] = run.inward[:, leg[before_bend], made.rows]
    return after


def _beyond(made: Elements, weight: Array, fraction: Array) -> tuple[Array, Array]:
    """Force and moment about O of an element's own weight beyond a fraction of it, (3, state, element, row)."""
    shape = made.shape
    beyond = np.broadcast_to(1.0 - fraction, weight.shape)
    force = np.zeros((3, *weight.shape))
    force[UP] = -weight * shape.length * beyond
    centre = shape.start[:, None] + (0.5 * (1.0 + fraction) * shape.length) * shape.along[:, None]
    centre = np.broadcast_to(centre, force.shape).copy()
    if len(made.bent):
        b = made.bent
        spread = 0.5 * shape.angle[b] * beyond[:, b]
        place = shape.angle[b] - spread
        ring = shape.radius[b] * np.sinc(spread / np.pi)
        centre[:, :, b] = (
            shape.start[:, None, b]
            + shape.radius[b] * shape.inward[:, None, b]
            + ring * (np.sin(place) * shape.along[:, None, b] - np.cos(place) * shape.inward[:, None, b])
        )
    return force, cross(centre, force)


def _twists(answer: Answer, made: Elements) -> Array:
    """Twist about O at every station, (state, 6, station, row)."""
    member = members(made, answer.run)
    free = own_twists(answer.run, answer.states, made, member)
    return twists(member, free, answer.wrench[..., made.rows], answer.start[..., made.rows])


def _moved(twist: Array, point: Array) -> Array:
    """Movement of the points (3, place, row) by twists (state, 6, place, row)."""
    rotation = twist[:, 3:].swapaxes(0, 1)
    return twist[:, :3] + cross(rotation, point[:, None]).swapaxes(0, 1)


def support_movements(answer: Answer) -> Movements:
    """Movement at every support, in their order; places are the supports."""
    parts = []
    for rows in chunks(answer.run):
        made = elements(answer.run, rows)
        station = answer.run.plan.support_station
        point, twist = station_points(made, station), _twists(answer, made)[:, :, station]
        parts.append((point + answer.run.origin[:, None, rows], _moved(twist, point), twist[:, 3:]))
    return Movements(*(np.concatenate(values, axis=-1) for values in zip(*parts, strict=True)))


def movements(answer: Answer, fractions: Sequence[float] = (0.0, 0.5, 1.0)) -> Movements:
    """Movement at fractions of every element; places run along the run, element by element.

    Parameters
    ----------
    answer : of `linear` or `settle`.
    fractions : of the length or angle of each element, 0 .. 1, the same for all.
    """
    parts = [_movements(answer, elements(answer.run, rows), fractions) for rows in chunks(answer.run)]
    return Movements(*(np.concatenate(values, axis=-1) for values in zip(*parts, strict=True)))


def _movements(answer: Answer, made: Elements, fractions: Sequence[float]) -> tuple[Array, Array, Array]:
    """All fractions at once, each in a row of its own: row by row, fraction by fraction."""
    run, rows, times = answer.run, made.end.shape[1], len(fractions)

    def spread(values: Array) -> Array:
        return np.repeat(values, times, axis=-1)

    def places(values: Array) -> Array:
        whole = values.reshape(*values.shape[:-1], rows, times).swapaxes(-1, -2)
        return whole.reshape(*values.shape[:-2], -1, rows)

    share = np.tile(np.array(fractions, dtype=float), rows)
    shape, prop = Shape(*(spread(v) for v in made.shape)), Properties(*(spread(v) for v in made.prop))
    whole = Elements(made.rows, shape, prop, made.straight, made.bent, spread(made.end))
    part = replace(whole, shape=shape._replace(length=share * shape.length, angle=share * shape.angle))
    member, wrench = of_shape(part, run), spread(answer.wrench[..., made.rows])
    weight = _factor(answer.states, len(wrench)) * prop.weight
    if weight.any():
        wrench = wrench + np.concatenate(_beyond(whole, weight, share)).swapaxes(0, 1)
    free = own_twists(run, answer.states, part, member, spread)
    twist = spread(_twists(answer, made)[:, :, :-1]) + free + yielding(member, wrench)
    point = shape.start + member.chord
    origin = spread(run.origin[:, made.rows])
    return places(point + origin[:, None]), places(_moved(twist, point)), places(twist[:, 3:])


def residual(answer: Answer) -> Array:
    """Force and moment (about the first corner) left over on the whole run, (state, 6, row) [N, N*m].

    Sums what the ends and supports receive and what weighs; the friction forces of `settle` included.
    """
    run = answer.run
    parts = []
    for rows in chunks(run):
        made = elements(run, rows)
        count = len(answer.wrench)
        factor = _factor(answer.states, count)
        total = factor * members(made, run).load.sum(axis=1)
        if run.weights:
            total = total + factor * point_wrenches(run, made).sum(axis=1)
        total = total - _reactions(answer, made)
        parts.append(total)
    return np.concatenate(parts, axis=-1)


def _reactions(answer: Answer, made: Elements) -> Array:
    """Wrench of the pipe on all ends and supports about O, (state, 6, row)."""
    a, b = answer.end_a[..., made.rows], answer.end_b[..., made.rows]
    arm = cross(made.end[:, None], b[:, :3].swapaxes(0, 1))
    b = np.concatenate([b[:, :3], b[:, 3:] + arm.swapaxes(0, 1)], axis=1)
    on_supports = answer.support_force[..., made.rows]
    if not on_supports.shape[2]:
        return a + b
    point = station_points(made, answer.run.plan.support_station)
    turning = cross(point[:, None], on_supports.swapaxes(0, 1)).swapaxes(0, 1)
    total: Array = a + b + np.concatenate([on_supports, turning], axis=1).sum(axis=2)
    return total

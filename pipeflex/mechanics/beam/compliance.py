"""Compliance of straights and exact bends, and what makes them move without force.

A section of the pipe moves as a twist t = (movement of the body point at O, rotation); what the rest of the run
does to it is a wrench W = (force, moment about O).  Along the run the twist grows by ``c W``, so compliances about
one common point O add, and free growth of any element, bends included, is a pure translation by strain x chord.

Vectors are arrays (3, ...), twists and wrenches (6, ...), compliances (6, 6, ...); the trailing axes are
(element, row).  Included: bending, torsion, axial stretch.  Left out: shear deflection, which for pipe spans longer
than about ten diameters is below one per cent.

References
----------
S. P. Timoshenko, Strength of Materials, part I, 3rd ed. 1955 (curved bars, unit-load method).
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Indices = NDArray[np.intp]

UP = 2
"""Axis that points up: weight acts along -z."""

_TINY = 1e-300
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)


class Properties(NamedTuple):
    """Stiffness and weight per element.

    axial : E A [N]; bending : E I / k [N*m2]; torsion : G J [N*m2]; weight : per length [N/m].  Shape (element, row).
    """

    axial: Array
    bending: Array
    torsion: Array
    weight: Array


class Shape(NamedTuple):
    """Centre line of straights (angle 0) or bends.

    start : (3, element, row) from O [m]; along : unit tangent at the start; inward : unit vector from the start to
    the bend's centre (any for a straight); length [m]; radius [m]; angle [rad].
    """

    start: Array
    along: Array
    inward: Array
    length: Array
    radius: Array
    angle: Array


class Member(NamedTuple):
    """What the sweep needs of each element.

    An element has three directions (chord, towards the inside of the bend, normal) in which it yields without turning
    and about which it turns.

    axes : (3, direction, element, row), unit vectors; arms : the same shape, movement at O as it turns by one.
    yields : (direction, element, row) [m/N]; turns : (direction, element, row) [rad/(N*m)].
    chord : (3, element, row) [m].
    bow : (6, element, row), twist per unit of curvature [m].
    load : (6, element, row), wrench of the element's own weight about O.
    sag : (6, element, row), twist of its far end by its own weight.
    """

    axes: Array
    arms: Array
    yields: Array
    turns: Array
    chord: Array
    bow: Array
    load: Array
    sag: Array


def cross(a: Array, b: Array) -> Array:
    """Vector product along the first axis; the other axes broadcast."""
    a0, a1, a2 = a
    b0, b1, b2 = b
    return np.array([a1 * b2 - a2 * b1, a2 * b0 - a0 * b2, a0 * b1 - a1 * b0])


def dot(a: Array, b: Array) -> Array:
    """Scalar product along the first axis."""
    product: Array = a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
    return product


def _twist(movement: Array, rotation: Array, q: Array) -> Array:
    """Twist about O of a body that moves so at q."""
    return np.concatenate([movement + cross(q, rotation), rotation])


def _wrench(force: Array, q: Array) -> Array:
    """Wrench about O of a force at q."""
    return np.concatenate([force, cross(q, force)])


def _rotated_up(vector: Array) -> Array:
    """The vector product of the upward unit vector with `vector`."""
    return np.stack([-vector[1], vector[0], np.zeros_like(vector[0])])


def members(shape: Shape, prop: Properties, bent: Indices, weighs: bool = True) -> Member:
    """Straights and exact circular bends.

    Parameters
    ----------
    shape : centre line; angle and radius are 0 on straights.
    prop : stiffness; on bends the bending stiffness is E I / k, k acting on bending in and out of plane.
    bent : indices of the bends.
    weighs : False leaves the terms of weight zero.
    """
    along, length = shape.along, shape.length
    axes = np.empty((3, 3, *length.shape))
    axes[:, 0], axes[:, 1] = along, shape.inward
    yields, turns = np.empty((3, *length.shape)), np.empty((3, *length.shape))
    bending = length / prop.bending
    yields[0], yields[1:] = length / prop.axial, length * length * bending / 12.0
    turns[0], turns[1:] = length / prop.torsion, bending
    middle = shape.start + 0.5 * length * along
    other, chord, turned = middle, length * along, middle
    shift = np.zeros_like(middle)
    if len(bent):
        other, chord, turned = middle.copy(), chord, middle.copy()
        _bend(shape, prop, bent, axes, yields, turns, (middle, other, chord, turned, shift))
    axes[:, 2] = cross(axes[:, 0], axes[:, 1])
    arms = np.empty_like(axes)
    arms[:, 2] = cross(middle, axes[:, 2])
    arms[:, :2] = cross(other[:, None], axes[:, :2])
    turn = _rotated_up(chord)
    bow = _twist(shift, turn, turned)
    load, sag = np.zeros_like(bow), np.zeros_like(bow)
    if weighs:
        down = np.zeros_like(chord)
        down[UP] = -prop.weight
        load = _wrench(length * down, middle)
        sag = _straight_sag(shape, prop, down)
        if len(bent):
            part, soft = Shape(*(f[..., bent, :] for f in shape)), Properties(*(f[bent] for f in prop))
            sag[:, bent] = _bend_sag(part, soft, axes[:, 2, bent], turned[:, bent])
    return Member(axes, arms, yields, turns, chord, bow, load, sag)


def _bend(
    shape: Shape,
    prop: Properties,
    bent: Indices,
    axes: Array,
    yields: Array,
    turns: Array,
    points: tuple[Array, ...],
) -> None:
    """Put the bends in: directions, softness, and the points at which yielding and turning part.

    In the plane that is the arc's centroid; out of it the point at which a force square to the plane does not twist
    the chord.
    """
    middle, other, chord, centre, shift = points
    along, inward = shape.along[:, bent], shape.inward[:, bent]
    radius, angle = shape.radius[bent], shape.angle[bent]
    arc, half = radius * angle, 0.5 * angle
    sin_half, cos_half = np.sin(half), np.cos(half)
    tau = cos_half * along + sin_half * inward
    beta = cos_half * inward - sin_half * along
    about = shape.start[:, bent] + radius * inward
    sine = 2.0 * sin_half * cos_half
    plus, minus = 0.5 * radius * (angle + sine), 0.5 * radius * (angle - sine)
    soft, twisting, stretch = 1.0 / prop.bending[bent], 1.0 / prop.torsion[bent], 1.0 / prop.axial[bent]
    span = 2.0 * radius * sin_half
    inner = radius * np.sinc(half / np.pi)
    turn = twisting * plus + soft * minus
    couple = radius * span * twisting
    outer = couple / (turn + _TINY)
    axes[:, 0, bent], axes[:, 1, bent] = tau, beta
    yields[0, bent] = stretch * plus + soft * (radius**2 * plus - inner**2 * arc)
    yields[1, bent] = (stretch + radius**2 * soft) * minus
    yields[2, bent] = radius**2 * arc * twisting - couple * outer
    turns[0, bent], turns[1, bent], turns[2, bent] = turn, twisting * minus + soft * plus, soft * arc
    middle[:, bent], other[:, bent], centre[:, bent] = about - inner * beta, about - outer * beta, about
    chord[:, bent] = span * tau
    shift[:, bent] = radius * (plus * beta[UP] * tau - minus * tau[UP] * beta)


def _straight_sag(shape: Shape, prop: Properties, down: Array) -> Array:
    """Twist of a straight's far end by its own weight: ordinary cantilever formulas."""
    along, length = shape.along, shape.length
    lengthwise = dot(down, along) * along
    crosswise = down - lengthwise
    moved = length**2 * (crosswise * (length**2 / (8.0 * prop.bending)) + lengthwise * (0.5 / prop.axial))
    turned = cross(along, crosswise) * (length**3 / (6.0 * prop.bending))
    return _twist(moved, turned, shape.start + length * along)


def yielding(member: Member, wrench: Array) -> Array:
    """Twist of every element under wrenches (state, 6, element, row)."""
    force, moment = wrench[:, :3, None], wrench[:, 3:, None]
    push = member.yields * (member.axes * force).sum(axis=1)
    turn = member.turns * ((member.arms * force).sum(axis=1) + (member.axes * moment).sum(axis=1))
    moved = (member.axes * push[:, None] + member.arms * turn[:, None]).sum(axis=2)
    return np.concatenate([moved, (member.axes * turn[:, None]).sum(axis=2)], axis=1)


def compliance(member: Member, parts: tuple[int, ...], directions: tuple[int, ...], work: Array) -> Array:
    """Compliance about O, (part, part, element, row).

    Parameters
    ----------
    member : the elements.
    parts : components of the twist wanted.
    directions : in which the elements turn; those of yielding follow.
    work : (2, part, part, element, row), overwritten; the answer is its first half.
    """
    c: Array = work[0]
    extra: Array = work[1]
    moves = [i for i in parts if i < 3]
    turns = [i - 3 for i in parts if i >= 3]
    whole = np.concatenate([member.arms[moves], member.axes[turns]])
    for n, k in enumerate(directions):
        z = whole[:, k]
        target = extra if n else c
        np.multiply((member.turns[k] * z)[:, None], z[None], out=target)
        if n:
            c += extra
    top, spare = c[: len(moves), : len(moves)], extra[: len(moves), : len(moves)]
    for k in [i for i in range(3) if len(parts) == 6 or i not in directions]:
        z = member.axes[moves, k]
        np.multiply((member.yields[k] * z)[:, None], z[None], out=spare)
        top += spare
    return c


def _bend_sag(shape: Shape, prop: Properties, normal: Array, centre: Array) -> Array:
    """Twist of a bend's far end by its own weight: Gauss quadrature, exact to rounding up to a half circle."""
    along, inward, radius, angle = shape.along, shape.inward, shape.radius, shape.angle
    last = np.cos(angle) * along + np.sin(angle) * inward
    movement, rotation = np.zeros_like(along), np.zeros_like(along)
    down = np.zeros_like(along)
    for node, share in zip(0.5 * (1.0 + _NODES), 0.5 * _WEIGHTS, strict=True):
        a = node * angle
        tau = np.cos(a) * along + np.sin(a) * inward
        out = np.sin(a) * along - np.cos(a) * inward
        down[UP] = -prop.weight * radius
        force = down * (angle - a)
        moment = radius * cross(tau - last, down)
        ds = share * radius * angle
        torsion = ds / prop.torsion * (dot(tau, moment) + radius * dot(normal, force))
        in_plane = ds / prop.bending * (dot(normal, moment) - radius * dot(tau, force))
        out_plane = ds / prop.bending * dot(out, moment)
        stretch = ds / prop.axial * dot(tau, force)
        rotation += torsion * tau + in_plane * normal + out_plane * out
        movement += radius * torsion * normal + (stretch - radius * in_plane) * tau
    return _twist(movement, rotation, centre)

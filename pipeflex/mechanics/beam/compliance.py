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

UP = 2
"""Axis that points up: weight acts along -z."""

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

    compliance : (6, 6, element, row) about O; chord : (3, element, row) [m]; bow : (6, element, row), twist per unit
    of curvature [m]; load : (6, element, row), wrench of the element's own weight about O; sag : (6, element, row),
    twist of its far end by its own weight.
    """

    compliance: Array
    chord: Array
    bow: Array
    load: Array
    sag: Array


def cross(a: Array, b: Array) -> Array:
    """Vector product along the first axis; the other axes broadcast."""
    a0, a1, a2 = a
    b0, b1, b2 = b
    return np.stack([a1 * b2 - a2 * b1, a2 * b0 - a0 * b2, a0 * b1 - a1 * b0])


def dot(a: Array, b: Array) -> Array:
    """Scalar product along the first axis."""
    product: Array = a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
    return product


def _outer(a: Array, b: Array) -> Array:
    return a[:, None] * b[None]


_EYE = np.eye(3)[:, :, None, None]


def _about_origin(ff: Array, fm: Array | None, mm: Array, q: Array) -> Array:
    """Compliance known about the point q, moved to O."""
    moved = cross(q[:, None], mm)
    c = np.empty((6, 6, *mm.shape[2:]))
    if fm is None:
        fm = moved
    else:
        ff = ff + cross(q[:, None], fm.swapaxes(0, 1))
        fm = fm + moved
    c[:3, :3] = ff + cross(q[:, None], fm.swapaxes(0, 1)).swapaxes(0, 1)
    c[:3, 3:] = fm
    c[3:, :3] = fm.swapaxes(0, 1)
    c[3:, 3:] = mm
    return c


def _twist(movement: Array, rotation: Array, q: Array) -> Array:
    """Twist about O of a body that moves so at q."""
    return np.concatenate([movement + cross(q, rotation), rotation])


def _wrench(force: Array, q: Array) -> Array:
    return np.concatenate([force, cross(q, force)])


def _rotated_up(vector: Array) -> Array:
    """The vector product of the upward unit vector with `vector`."""
    return np.stack([-vector[1], vector[0], np.zeros_like(vector[0])])


def straights(shape: Shape, prop: Properties, weighs: bool = True) -> Member:
    """Straight elements.

    Parameters
    ----------
    shape : angle and radius are not read.
    prop : stiffness and weight.
    weighs : False leaves the terms of weight zero.
    """
    along, length = shape.along, shape.length
    middle = shape.start + 0.5 * length * along
    bending = length / prop.bending
    axis = _outer(along, along)
    across = length * length / 12.0 * bending
    ff = (length / prop.axial - across) * axis + across * _EYE
    mm = (length / prop.torsion - bending) * axis + bending * _EYE
    c = _about_origin(ff, None, mm, middle)
    chord = length * along
    turn = _rotated_up(chord)
    bow = _twist(np.zeros_like(turn), turn, middle)
    load = np.zeros_like(bow)
    sag = np.zeros_like(bow)
    if weighs:
        down = np.zeros_like(chord)
        down[UP] = -prop.weight
        load = _wrench(length * down, middle)
        lengthwise = dot(down, along) * along
        crosswise = down - lengthwise
        end_move = length**2 * (
            crosswise * (length**2 / (8.0 * prop.bending)) + lengthwise * (0.5 / prop.axial)
        )
        sag = _twist(
            end_move, cross(along, crosswise) * (length**3 / (6.0 * prop.bending)), shape.start + chord
        )
    return Member(c, chord, bow, load, sag)


def bends(shape: Shape, prop: Properties, weighs: bool = True) -> Member:
    """Exact circular bends; `prop.bending` is E I / k, the flexibility factor k acting on both bending directions.

    Parameters
    ----------
    shape : centre line.
    prop : stiffness and weight.
    weighs : False leaves the terms of weight zero.
    """
    along, inward, radius, angle = shape.along, shape.inward, shape.radius, shape.angle
    arc = radius * angle
    sin_half, cos_half = np.sin(0.5 * angle), np.cos(0.5 * angle)
    tau = cos_half * along + sin_half * inward
    beta = cos_half * inward - sin_half * along
    normal = cross(along, inward)
    centre = shape.start + radius * inward
    plus, minus = 0.5 * (arc + radius * np.sin(angle)), 0.5 * (arc - radius * np.sin(angle))
    tau2, beta2, normal2 = _outer(tau, tau), _outer(beta, beta), _outer(normal, normal)
    tangents = plus * tau2 + minus * beta2
    soft = 1.0 / prop.bending
    twist_soft = 1.0 / prop.torsion
    chord = 2.0 * radius * sin_half * tau
    ff = (1.0 / prop.axial + radius**2 * soft) * tangents + (radius**2 * arc * twist_soft) * normal2
    fm = radius * (twist_soft * _outer(normal, chord) - soft * _outer(chord, normal))
    mm = twist_soft * tangents + soft * (minus * tau2 + plus * beta2 + arc * normal2)
    c = _about_origin(ff, fm, mm, centre)
    turn = _rotated_up(chord)
    shift = radius * (plus * beta[UP] * tau - minus * tau[UP] * beta)
    bow = _twist(shift, turn, centre)
    load = np.zeros_like(bow)
    sag = np.zeros_like(bow)
    if weighs:
        down = np.zeros_like(chord)
        down[UP] = -prop.weight * arc
        load = _wrench(down, centre - radius * np.sinc(angle / (2.0 * np.pi)) * beta)
        sag = _bend_sag(shape, prop, normal, centre)
    return Member(c, chord, bow, load, sag)


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

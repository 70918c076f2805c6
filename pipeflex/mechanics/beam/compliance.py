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

from functools import cached_property
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Indices = NDArray[np.intp]
Vector = list[Array | None]
"""Three components, those that are exactly zero left out."""

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


def spaced(axes: tuple[int, ...]) -> slice:
    """Two or three of the three axes as a slice: they are always evenly spaced."""
    return slice(axes[0], axes[-1] + 1, axes[1] - axes[0])


def vector(values: Array, live: tuple[int, ...]) -> Vector:
    """A vector from its components along the axes given."""
    return [values[live.index(i)] if i in live else None for i in range(3)]


def outer(a: Vector, b: Vector) -> Vector:
    """Vector product; what is left out in a and b is left out of the work."""

    def component(i: int, j: int) -> Array | None:
        (p, q), (r, t) = (a[i], b[j]), (a[j], b[i])
        plus = None if p is None or q is None else p * q
        if r is None or t is None:
            return plus
        return -(r * t) if plus is None else plus - r * t

    return [component(1, 2), component(2, 0), component(0, 1)]


def inner_product(a: Vector, b: Vector) -> Array | None:
    """Scalar product; None where no component is in both."""
    total: Array | None = None
    for p, q in zip(a, b, strict=True):
        if p is not None and q is not None:
            total = p * q if total is None else total + p * q
    return total


def less(a: Vector, b: Vector) -> Vector:
    """Difference of two vectors."""

    def component(p: Array | None, q: Array | None) -> Array | None:
        if q is None:
            return p
        return -q if p is None else p - q

    return [component(p, q) for p, q in zip(a, b, strict=True)]


def cross(a: Array, b: Array) -> Array:
    """Vector product along the first axis; the other axes broadcast."""
    return np.array(outer([*a], [*b]))


def dot(a: Array, b: Array) -> Array:
    """Scalar product along the first axis."""
    product: Array = a[0] * b[0]
    for p, q in zip(a[1:], b[1:], strict=True):
        product = product + p * q
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


class Member:
    """What the sweep needs of each element: straights and exact circular bends.

    An element has three directions (chord, towards the inside of the bend, normal) in which it yields without turning
    and about which it turns.  What is not asked for is not worked out.

    Parameters
    ----------
    shape : centre line; angle and radius are 0 on straights.
    prop : stiffness; on bends the bending stiffness is E I / k, k acting on bending in and out of plane.
    bent : indices of the bends.
    live : axes along which the run extends at all.

    Attributes
    ----------
    yields : (direction, element, row) [m/N]; turns : (direction, element, row) [rad/(N*m)].
    chord : (3, element, row) [m].
    """

    def __init__(self, shape: Shape, prop: Properties, bent: Indices, live: tuple[int, ...]) -> None:
        self.shape, self.prop, self.bent, self.live = shape, prop, bent, live
        length = shape.length
        self.yields, self.turns = np.empty((3, *length.shape)), np.empty((3, *length.shape))
        bending = length / prop.bending
        self.yields[0], self.yields[1:] = length / prop.axial, length * length * bending / 12.0
        self.turns[0], self.turns[1:] = length / prop.torsion, bending
        # in the plane yielding and turning part at the centroid; out of it at the point at which a force square to
        # the plane does not twist the chord
        self.chord = length * shape.along
        self._middle = shape.start + 0.5 * self.chord
        self._ways = [shape.along, shape.inward]
        if len(bent):
            self._bend()

    def _bend(self) -> None:
        """Put the bends in."""
        shape, prop, bent = self.shape, self.prop, self.bent
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
        inner = radius * np.divide(sin_half, half, out=np.ones_like(half), where=half > 0.0)
        turn = twisting * plus + soft * minus
        couple = radius * span * twisting
        aside = couple / (turn + _TINY)
        yields, turns = self.yields, self.turns
        yields[0, bent] = stretch * plus + soft * (radius**2 * plus - inner**2 * arc)
        yields[1, bent] = (stretch + radius**2 * soft) * minus
        yields[2, bent] = radius**2 * arc * twisting - couple * aside
        turns[0, bent], turns[1, bent], turns[2, bent] = turn, twisting * minus + soft * plus, soft * arc
        self._ways = [way.copy() for way in self._ways]
        self._ways[0][:, bent], self._ways[1][:, bent] = tau, beta
        self._middle[:, bent] = about - inner * beta
        self.chord[:, bent] = span * tau
        self._about, self._beta, self._aside = about, beta, aside
        self._plus, self._minus = plus, minus

    @cached_property
    def ways(self) -> list[Vector]:
        """The three directions."""
        one, two = (vector(way[spaced(self.live)], self.live) for way in self._ways)
        return [one, two, outer(one, two)]

    @cached_property
    def normal_arm(self) -> Vector:
        """Movement at O as an element turns by one about its normal."""
        return outer(vector(self._middle[spaced(self.live)], self.live), self.ways[2])

    @cached_property
    def other_arms(self) -> list[Vector]:
        """Movement at O as an element turns by one about its chord, and about the direction to the inside."""
        other = self._middle
        if len(self.bent):
            other = other.copy()
            other[:, self.bent] = self._about - self._aside * self._beta
        return [outer(vector(other[spaced(self.live)], self.live), way) for way in self.ways[:2]]

    @cached_property
    def axes(self) -> Array:
        """The three directions, (3, direction, element, row)."""
        return _whole(self.ways, self.shape.length.shape)

    @cached_property
    def arms(self) -> Array:
        """Movement at O as an element turns by one about each of them, (3, direction, element, row)."""
        return _whole([*self.other_arms, self.normal_arm], self.shape.length.shape)

    @cached_property
    def bow(self) -> Array:
        """Twist per unit of curvature, (6, element, row) [m]."""
        turned = self.shape.start + 0.5 * self.shape.length * self.shape.along
        shift = np.zeros_like(turned)
        if len(self.bent):
            tau, beta = (way[:, self.bent] for way in self._ways)
            radius = self.shape.radius[self.bent]
            turned[:, self.bent] = self._about
            shift[:, self.bent] = radius * (self._plus * beta[UP] * tau - self._minus * tau[UP] * beta)
        return _twist(shift, _rotated_up(self.chord), turned)

    @cached_property
    def load(self) -> Array:
        """Wrench of the element's own weight about O, (6, element, row)."""
        return _wrench(self.shape.length * self._down, self._middle)

    @cached_property
    def sag(self) -> Array:
        """Twist of the far end by its own weight, (6, element, row)."""
        shape, prop, bent = self.shape, self.prop, self.bent
        sag = _straight_sag(shape, prop, self._down)
        if len(bent):
            part, soft = Shape(*(f[..., bent, :] for f in shape)), Properties(*(f[bent] for f in prop))
            sag[:, bent] = _bend_sag(part, soft, self.axes[:, 2, bent], self._about)
        return sag

    @cached_property
    def _down(self) -> Array:
        down = np.zeros_like(self.chord)
        down[UP] = -self.prop.weight
        return down


def _whole(vectors: list[Vector], shape: tuple[int, ...]) -> Array:
    """Vectors as one array, (3, vector, element, row)."""
    whole = np.zeros((3, len(vectors), *shape))
    for n, one in enumerate(vectors):
        for i, component in enumerate(one):
            if component is not None:
                whole[i, n] = component
    return whole


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
    work : (part, part, element, row), overwritten: the answer.
    """
    sources: list[tuple[list[Array | None], list[Array | None]]] = []
    for k in directions:
        arm = member.normal_arm if k == 2 else member.other_arms[k]
        ways = [arm[i] if i < 3 else member.ways[k][i - 3] for i in parts]
        sources.append((ways, _softened(member.turns[k], ways)))
    for k in [i for i in range(3) if len(parts) == 6 or i not in directions]:
        ways = [member.ways[k][i] if i < 3 else None for i in parts]
        sources.append((ways, _softened(member.yields[k], ways)))
    spare = np.empty_like(work[0, 0])
    for i in range(len(parts)):
        for j in range(i + 1):
            filled = False
            for ways, soft in sources:
                a, b = soft[i], ways[j]
                if a is None or b is None:
                    continue
                np.multiply(a, b, out=spare if filled else work[i, j])
                if filled:
                    work[i, j] += spare
                filled = True
            if not filled:
                work[i, j] = 0.0
            if i != j:
                work[j, i] = work[i, j]
    return work


def _softened(softness: Array, ways: list[Array | None]) -> list[Array | None]:
    return [None if way is None else softness * way for way in ways]


def _bend_sag(shape: Shape, prop: Properties, normal: Array, centre: Array) -> Array:
    """Twist of a bend's far end by its own weight: Gauss quadrature, exact to rounding up to a half circle."""
    along, inward = shape.along[:, None], shape.inward[:, None]
    radius, angle, normal = shape.radius, shape.angle, normal[:, None]
    last = np.cos(angle) * along + np.sin(angle) * inward
    node, share = (v[:, None, None] for v in (0.5 * (1.0 + _NODES), 0.5 * _WEIGHTS))
    sine, cosine = np.sin(node * angle), np.cos(node * angle)
    tau = cosine * along + sine * inward
    out = sine * along - cosine * inward
    down = np.zeros_like(along)
    down[UP] = -prop.weight * radius
    force = down * (angle - node * angle)
    moment = radius * cross(tau - last, down)
    ds = share * radius * angle
    torsion = ds / prop.torsion * (dot(tau, moment) + radius * dot(normal, force))
    in_plane = ds / prop.bending * (dot(normal, moment) - radius * dot(tau, force))
    out_plane = ds / prop.bending * dot(out, moment)
    stretch = ds / prop.axial * dot(tau, force)
    rotation = torsion * tau + in_plane * normal + out_plane * out
    movement = radius * torsion * normal + (stretch - radius * in_plane) * tau
    return _twist(movement.sum(axis=1), rotation.sum(axis=1), centre)

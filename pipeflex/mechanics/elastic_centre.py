"""Forces of a plane run between two anchors by its elastic centre: bending alone, bends counted k times.

The line of the pipe, each element weighted by its flexibility (1 for a straight, k for a bend), has a centroid and
second moments; the anchors' force acts through that centroid as if the ends were joined to it by rigid arms.

Valid for a run in one plane with anchors at both ends, nothing between, and one section throughout.  Stretch and
shear are left out, so forces come out a little high.

References
----------
S. W. Spielvogel, Piping Stress Calculations Simplified, 5th ed. 1955 (elastic centre, bends as k times their length);
S. Timoshenko, D. H. Young, Theory of Structures, 2nd ed. 1965 (elastic centre of frames).
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pipeflex.mechanics.beam.run import geometry

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class ElasticCentre:
    """A plane run and its forces; the plane is x, y and the last axis is the row.

    centre : (2, row) [m]; length : (row,), flexibility-weighted line [m].
    second_x, second_y, product : (row,), integrals of y2, x2 and x y of the weighted line about the centre [m3].
    force : (2, row) [N], of the pipe on the last anchor, minus that on the first.
    moment_a, moment_b : (row,) [N*m], of the pipe on the first and the last anchor, anticlockwise positive.
    points : (2, point, row): the first anchor, start, middle and end of every bend, the last anchor [m].
    moment : (point, row) [N*m], bending moment at the points.
    """

    centre: Array
    length: Array
    second_x: Array
    second_y: Array
    product: Array
    force: Array
    moment_a: Array
    moment_b: Array
    points: Array
    moment: Array


def elastic_centre(
    corners: Array,
    movement: Array,
    bending: float | Array,
    radius: float | Array = 0.0,
    bend_factor: float | Array = 1.0,
) -> ElasticCentre:
    """Forces of the anchors of a plane run.

    Parameters
    ----------
    corners : (2, corner, row) or (2, corner), ends included [m].
    movement : (2, row) or (2,), what the run takes up [m]: its free growth from the first end to the last, less the
        movement of the last anchor against the first.
    bending : E I [N*m2], float or (row,).
    radius : bend radius [m], broadcasts to (bend, row); 0 is a square corner.
    bend_factor : flexibility factor k, broadcasts to (bend, row).

    Raises
    ------
    InputError
        Zero-length leg, straight-through corner, overlapping tangents.
    """
    corners = np.asarray(corners, dtype=float)
    corners = corners[:, :, None] if corners.ndim == 2 else corners
    movement = np.asarray(movement, dtype=float).reshape(2, -1)
    legs, rows = corners.shape[1] - 1, corners.shape[2]
    radius = np.broadcast_to(np.asarray(radius, dtype=float), (legs - 1, rows))
    factor = np.broadcast_to(np.asarray(bend_factor, dtype=float), (legs - 1, rows))
    origin = corners[:, 0]
    local = np.concatenate([corners - origin[:, None], np.zeros((1, legs + 1, rows))])
    along, lengths, angle, inward, tangents = geometry(local, radius)
    local, along, inward = local[:2], along[:2], inward[:2]

    none = np.zeros((1, rows))
    straight = lengths - np.concatenate([none, tangents]) - np.concatenate([tangents, none])
    middle = local[:, :-1] + (np.concatenate([none, tangents]) + 0.5 * straight) * along
    begin = local[:, 1:-1] - tangents * along[:, :-1]
    arc_centre = begin + radius * inward
    half = 0.5 * angle
    tau = np.cos(half) * along[:, :-1] + np.sin(half) * inward
    beta = np.cos(half) * inward - np.sin(half) * along[:, :-1]
    arc = radius * angle
    arc_middle = arc_centre - radius * np.sinc(half / np.pi) * beta
    weight = np.concatenate([straight, factor * arc])
    place = np.concatenate([middle, arc_middle], axis=1)
    length = weight.sum(axis=0)
    centre = (weight * place).sum(axis=1) / length

    own = straight**3 / 12.0 * _square(along)
    sine = np.sin(angle)
    ring = 0.5 * radius**3 * ((angle - sine) * _square(tau) + (angle + sine) * _square(beta))
    off = arc_middle - arc_centre
    ring = factor * (ring - arc * _square(off))
    second = own.sum(axis=1) + ring.sum(axis=1) + (weight * _square(place - centre[:, None])).sum(axis=1)
    second_y, second_x, product = second
    shared = bending / (second_x * second_y - product**2)
    force = shared * np.stack(
        [second_y * movement[0] + product * movement[1], product * movement[0] + second_x * movement[1]]
    )
    end = begin + 2.0 * radius * np.sin(half) * tau
    bend_points = np.stack([begin, arc_centre - radius * beta, end], axis=2).reshape(2, -1, rows)
    points = np.concatenate([local[:, :1], bend_points, local[:, -1:]], axis=1)
    arm = centre[:, None] - points
    moment = arm[0] * force[1] - arm[1] * force[0]
    return ElasticCentre(
        centre=centre + origin,
        length=length,
        second_x=second_x,
        second_y=second_y,
        product=product,
        force=force,
        moment_a=-moment[0],
        moment_b=moment[-1],
        points=points + origin[:, None],
        moment=moment,
    )


def _square(v: Array) -> Array:
    """x2, y2 and x y of plane vectors."""
    return np.stack([v[0] ** 2, v[1] ** 2, v[0] * v[1]])

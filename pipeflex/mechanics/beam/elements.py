"""Elements and holds of a slice of rows, about O = the first corner: what the sweep and the recovery read."""

from dataclasses import dataclass

import numpy as np

from pipeflex.errors import Fault, InputError, refuse
from pipeflex.mechanics.beam.compliance import Array, Indices, Member, Properties, Shape, cross, dot, spaced
from pipeflex.mechanics.beam.parts import Hold, States, states_first
from pipeflex.mechanics.beam.run import CHUNK, Run

_KEPT = 4 * CHUNK
"""Rows of a run that keeps its elements."""

_VERTICAL = 1e-6


@dataclass(frozen=True, slots=True, eq=False)
class Elements:
    """Centre line of a slice of rows, cut at the stations.

    shape, prop : see `Shape` and `Properties`, (..., element, row).
    straight, bent : indices of the straights and of the bends.
    end : (3, row), the far end of the last element.
    """

    rows: slice
    shape: Shape
    prop: Properties
    straight: Indices
    bent: Indices
    end: Array


@dataclass(frozen=True, slots=True, eq=False)
class Holds:
    """Holds of a slice of rows.

    line : (6, hold, row), the unit wrench of each hold about O; unit : (3, hold, row), its direction.
    softness : (hold, row), reciprocal stiffness; station, support : (hold,).
    """

    line: Array
    unit: Array
    softness: Array
    station: Indices
    support: Indices


def chunks(run: Run) -> list[slice]:
    """Slices of rows to work on one after the other."""
    return [slice(i, min(i + CHUNK, run.rows)) for i in range(0, run.rows, CHUNK)]


def elements(run: Run, rows: slice) -> Elements:
    """Centre line and stiffness of the elements; kept for a run of few rows."""
    if run.rows > _KEPT:
        return _elements(run, rows)
    key = ("elements", rows.start)
    if key not in run.cache:
        run.cache[key] = _elements(run, rows)
    return run.cache[key]  # type: ignore[return-value]


def _elements(run: Run, rows: slice) -> Elements:
    plan, live = run.plan, spaced(run.live)
    bend = plan.bend
    bent, straight = np.flatnonzero(bend >= 0), np.flatnonzero(bend < 0)
    corners, along, cuts = run.corners[:, :, rows], run.along[live, :, rows], run.cuts[:, rows]
    leg_s, leg_b, which = plan.leg[straight], plan.leg[bent], bend[bent]
    unit = along[:, leg_s]
    from_, to = cuts[plan.first[straight]], cuts[plan.last[straight]]
    size = (len(bend), corners.shape[2])
    every = np.zeros((3, 3, *size))
    start, tangent, inward = every[:, live]
    length, radius, angle = np.empty(size), np.zeros(size), np.zeros(size)
    start[:, straight] = corners[live][:, leg_s] + from_ * unit
    tangent[:, straight] = unit
    length[straight] = to - from_
    inward[:, straight] = _beside(run, leg_s, rows)[live]
    if len(bent):
        r, phi, lead = run.radius[which, rows], run.angle[which, rows], along[:, leg_b]
        first = corners[live][:, leg_b] + cuts[len(run.lengths) + leg_b] * lead
        side = run.inward[live][:, which, rows]
        if plan.begin[bent].any():
            turned = plan.begin[bent, None] * phi
            sine, cosine = np.sin(turned), np.cos(turned)
            first = first + r * (sine * lead + (1.0 - cosine) * side)
            lead, side = cosine * lead + sine * side, cosine * side - sine * lead
        start[:, bent], tangent[:, bent], inward[:, bent] = first, lead, side
        radius[bent], angle[bent] = r, plan.part[bent, None] * phi
        length[bent] = radius[bent] * angle[bent]
    bending = run.bending[plan.piece, rows]
    if len(bent):
        bending[bent] /= run.factor[which, rows]
    prop = Properties(run.axial[plan.piece, rows], bending, run.torsion[plan.piece, rows], run.weight[plan.piece, rows])
    return Elements(
        rows, Shape(every[0], every[1], every[2], length, radius, angle), prop, straight, bent, corners[:, -1]
    )


def _beside(run: Run, leg: Indices, rows: slice) -> Array:
    """A unit vector in the plane of a neighbouring corner (the one before, if any), square to the leg."""
    if run.bends == 0:
        one = run.along[:, leg, rows]
        flat = np.stack([-one[1], one[0], np.zeros_like(one[0])])
        size = np.sqrt(dot(flat, flat))
        return np.where(size > _VERTICAL, flat / np.where(size > _VERTICAL, size, 1.0), [[[1.0]], [[0.0]], [[0.0]]])
    live = spaced(run.live)
    inward, before, angle = run.inward[live, :, rows], run.along[live, :-1, rows], run.angle[:, rows]
    beside = np.zeros((3, len(run.lengths), inward.shape[2]))
    beside[live, 1:] = np.cos(angle) * inward - np.sin(angle) * before
    beside[live, 0] = inward[:, 0]
    return beside[:, leg]


def members(made: Elements, run: Run) -> Member:
    """Compliance, growth, bow and weight terms of every element; kept for a run of one chunk."""
    if run.rows > CHUNK:
        return of_shape(made, run)
    if "members" not in run.cache:
        run.cache["members"] = of_shape(made, run)
    return run.cache["members"]  # type: ignore[return-value]


def of_shape(made: Elements, run: Run) -> Member:
    """Compliance, growth, bow and weight terms of the elements given."""
    return Member(made.shape, made.prop, made.bent, run.live)


def station_points(made: Elements, station: Indices) -> Array:
    """(3, station, row)."""
    points = np.concatenate([made.shape.start, made.end[:, None]], axis=1)
    return points[:, station]


def holds(run: Run, made: Elements) -> Holds:
    """Direction, place and softness of every hold; kept for a run of one chunk."""
    if run.rows > CHUNK:
        return _holds(run, made)
    if "holds" not in run.cache:
        run.cache["holds"] = _holds(run, made)
    return run.cache["holds"]  # type: ignore[return-value]


def _holds(run: Run, made: Elements) -> Holds:
    given: list[tuple[int, Hold]] = [(i, hold) for i, s in enumerate(run.supports) for hold in s.holds]
    support = np.array([i for i, _ in given], dtype=np.intp)
    rows = made.end.shape[1]
    if not given:
        none = np.empty((6, 0, rows))
        return Holds(none, none[:3], none[0], support, support)
    along, lateral = support_axes(run, made)
    unit = np.zeros((3, len(given), rows))
    softness = np.empty((len(given), rows))
    words = [h.direction if isinstance(h.direction, str) else "" for _, h in given]
    for word, axes in (("along", along), ("lateral", lateral)):
        which = [j for j, one in enumerate(words) if one == word]
        unit[:, which] = axes[:, support[which]]
    for j, (_, hold) in enumerate(given):
        if words[j] == "vertical":
            unit[2, j] = 1.0
        elif not words[j]:
            unit[:, j] = np.reshape(hold.direction, (3, 1))
    _unit_length(run, unit, support)
    for j, (_, hold) in enumerate(given):
        softness[j] = hold.stiffness if np.ndim(hold.stiffness) == 0 else hold.stiffness[made.rows]  # type: ignore[index]
    with np.errstate(divide="ignore"):
        softness = 1.0 / softness
    station = run.plan.support_station[support]
    point = station_points(made, station)
    return Holds(np.concatenate([unit, cross(point, unit)]), unit, softness, station, support)


def _unit_length(run: Run, unit: Array, support: Indices) -> None:
    size = np.sqrt(dot(unit, unit))
    if not (size > 0.0).all():
        refuse(
            InputError,
            *(
                (
                    ~(size[j] > 0.0),
                    Fault(
                        f"support {run.supports[support[j]].tag or support[j] + 1}",
                        "a direction without length",
                        "on a vertical leg nothing is lateral: give a vector; else a vector that is not zero",
                    ),
                )
                for j in range(len(size))
            ),
        )
    unit /= size


def support_axes(run: Run, made: Elements) -> tuple[Array, Array]:
    """Unit vectors along the pipe and lateral to it at every support, (3, support, row); lateral is 0 on risers."""
    station = np.minimum(run.plan.support_station, len(made.shape.length) - 1)
    along = made.shape.along[:, station]
    square = np.array([s.bend is not None for s in run.supports]) & (made.shape.angle[station] == 0).all(axis=1)
    for i in np.flatnonzero(square).tolist():
        bend = run.supports[i].bend
        half = 0.5 * run.angle[bend, made.rows]
        along[:, i] = np.cos(half) * run.along[:, bend, made.rows] + np.sin(half) * run.inward[:, bend, made.rows]
    flat = np.array([-along[1], along[0], np.zeros_like(along[0])])
    size = np.sqrt(dot(flat, flat))
    lateral = np.where(size > _VERTICAL, flat / np.where(size > _VERTICAL, size, 1.0), 0.0)
    return along, lateral


def state_strains(run: Run, states: States, count: int, rows: slice) -> tuple[Array, Array | None]:
    """Free strain and bow curvature of each element, (state, element, row)."""
    plan = run.plan
    shape = (count, run.pieces, run.rows)
    is_bend = np.flatnonzero(plan.bend >= 0)

    def per_element(pieces: Array, bend: Array | None) -> Array:
        values = pieces[:, plan.piece]
        if len(is_bend):
            before = plan.piece[is_bend]
            mean = 0.5 * (pieces[:, before] + pieces[:, before + 1])
            values[:, is_bend] = mean if bend is None else bend[:, plan.bend[is_bend]]
        return values

    bend_strain = None
    if states.bend_strain is not None:
        bend_strain = states_first(states.bend_strain, (count, run.bends, run.rows))[:, :, rows]
    strain = per_element(states_first(states.strain, shape)[:, :, rows], bend_strain)
    if states.bow is None:
        return strain, None
    return strain, per_element(states_first(states.bow, shape)[:, :, rows], None)

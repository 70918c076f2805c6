"""Linear answers: one sweep along the run, a rank-one step at each hold, no linear solver and no penalty numbers.

Going from end A the section's twist is t = t_free + C W, W the wrench that the rest of the run puts on it.  An
element adds its compliance to C; a hold along h (force h lam on the pipe, softness 1/k) makes
``y = C h, s = h y + 1/k, C -= y y'/s``; back-substitution from end B gives every wrench.  Gaps are taken as closed,
supports as holding both ways and without friction: `settle` does without these.

References
----------
The rank-one step is the Sherman-Morrison formula (J. Sherman, W. J. Morrison, Ann. Math. Stat. 21 (1950) 124).
"""

from dataclasses import dataclass

import numpy as np

from pipeflex.errors import Fault, UnstableLayoutError, refuse
from pipeflex.mechanics.beam.compliance import UP, Array, Member, cross
from pipeflex.mechanics.beam.elements import (
    Elements,
    Holds,
    chunks,
    elements,
    holds,
    members,
    state_strains,
    station_points,
)
from pipeflex.mechanics.beam.parts import States, states_first
from pipeflex.mechanics.beam.run import Run

_SAME = 1e-12
_FLOATS = 1e-11


@dataclass(frozen=True, slots=True, eq=False)
class Answer:
    """Forces of every state; moments and movements come from `recover`.

    wrench : (state, 6, element, row), what the far side puts on the far end of each element, about the first corner.
    hold_force : (state, hold, row) [N], force of the pipe on the support along the hold's direction; holds are in the
        order of `run.supports` and their `holds`.
    support_force : (state, 3, support, row) [N], force of the pipe on each support, global axes, friction included.
    end_a, end_b : (state, 6, row), force [N] and moment [N*m] of the pipe on the ends, global axes, about the ends.
    start : (state, 6, row), twist of the first section about the first corner.
    """

    run: Run
    states: States
    wrench: Array
    hold_force: Array
    support_force: Array
    end_a: Array
    end_b: Array
    start: Array


@dataclass(frozen=True, slots=True, eq=False)
class _Step:
    """One rank-one step of the sweep, kept for the way back."""

    station: int
    hold: int
    line: Array
    y: Array
    s: Array
    rest: Array


def linear(run: Run, states: States) -> Answer:
    """Forces with every hold closed and holding both ways.

    Raises
    ------
    UnstableLayoutError
        The run floats, or two rigid holds act at one place in one direction.
    """
    parts = []
    for made in (elements(run, rows) for rows in chunks(run)):
        held, member = holds(run, made), members(made, run)
        wrench, force, *rest = sweep(
            run, made, member.compliance, held, *free_twists(run, states, made, member)
        )
        parts.append((wrench, force, on_supports(run, held, force), *rest))
    if len(parts) == 1:
        return Answer(run, states, *parts[0])
    return Answer(run, states, *(np.concatenate(field, axis=-1) for field in zip(*parts, strict=True)))


def on_supports(run: Run, held: Holds, force: Array) -> Array:
    """Forces of the holds gathered by support, (state, 3, support, row)."""
    gathered = np.zeros((len(force), 3, len(run.supports), force.shape[2]))
    vectors = force[:, None] * held.unit
    for i, support in enumerate(held.support):
        gathered[:, :, support] += vectors[:, :, i]
    return gathered


def free_twists(
    run: Run, states: States, made: Elements, member: Member
) -> tuple[Array, Array | None, Array | None, Array, Array]:
    """What the states put into the sweep: `free`, `loads`, `jumps`, `moved_a` and `moved_b` of `sweep`."""
    count, rows = states.count(), made.rows
    strain, bow = state_strains(run, states, count, rows)
    free = np.zeros((count, 6, *strain.shape[1:]))
    free[:, :3] = strain[:, None] * member.chord
    if bow is not None:
        free += bow[:, None] * member.bow
    factor = np.broadcast_to(np.asarray(states.weight, dtype=float), (count,))[:, None, None, None]
    loads = jumps = None
    if factor.any() and run.weight.any():
        free += factor * member.sag
        loads = factor * member.load
    if factor.any() and run.weights:
        jumps = factor * point_wrenches(run, made)
    moved = [
        np.zeros((count, 6, made.end.shape[1]))
        if m is None
        else states_first(m, (count, 6, run.rows))[:, :, rows]
        for m in (states.movement_a, states.movement_b)
    ]
    return free, loads, jumps, moved[0], moved[1]


def twists(compliance: Array, free: Array, wrench: Array, start: Array) -> Array:
    """Twist about O at every station, (state, 6, station, row)."""
    steps = free + np.einsum("ijer,sjer->sier", compliance, wrench)
    first = start[:, :, None]
    return np.concatenate([first, first + np.cumsum(steps, axis=2)], axis=2)


def point_wrenches(run: Run, made: Elements) -> Array:
    """Wrench about O of the concentrated weights at each station, (6, station, row)."""
    jumps = np.zeros((6, len(made.shape.length) + 1, made.end.shape[1]))
    for weight, station in zip(run.weights, run.plan.weight_station, strict=True):
        force = np.zeros((3, made.end.shape[1]))
        force[UP] = -(weight.force if np.ndim(weight.force) == 0 else weight.force[made.rows])  # type: ignore[index]
        point = station_points(made, np.array([station]))[:, 0]
        jumps[:, station] += np.concatenate([force, cross(point, force)])
    return jumps


def end_lines(point: Array) -> Array:
    """Unit wrenches about O of the six stiffnesses of an end at `point`, (6, 6 axes, row)."""
    lines = np.zeros((6, 6, point.shape[1]))
    for i in range(3):
        lines[i, i] = lines[3 + i, 3 + i] = 1.0
    x, y, z = point
    lines[4, 0], lines[5, 0] = z, -y
    lines[3, 1], lines[5, 1] = -z, x
    lines[3, 2], lines[4, 2] = y, -x
    return lines


def _stiffness(run: Run, end: int, rows: slice) -> Array:
    size = run.rows
    return np.stack(
        [np.broadcast_to(np.asarray(k, dtype=float), (size,))[rows] for k in run.ends[end].stiffness]
    )


def sweep(
    run: Run,
    made: Elements,
    compliance: Array,
    held: Holds,
    free: Array,
    loads: Array | None,
    jumps: Array | None,
    moved_a: Array,
    moved_b: Array,
    target: Array | None = None,
) -> tuple[Array, Array, Array, Array, Array]:
    """Forces from free twists and loads.

    Parameters
    ----------
    compliance : (6, 6, element, row).
    free : (state, 6, element, row), twist of each element's far end against its near end without force.
    loads : (state, 6, element, row), wrench of the loads on each element.
    jumps : (state, 6, station, row), wrench applied at each station.
    moved_a, moved_b : (state, 6, row), imposed movement of the ends.
    target : (state, hold, row), imposed movement of the holds; 0 unless given.

    Returns
    -------
    wrench, hold_force, end_a, end_b, start : see `Answer`.
    """
    count, _, n, rows = free.shape
    stiff_a = _stiffness(run, 0, made.rows)
    loose = np.flatnonzero((stiff_a == 0).any(axis=1))
    size = 6 + len(loose)
    c, prop = np.zeros((size, size, rows)), _prop(made)
    t = np.zeros((count, size, rows))
    t[:, :6] = moved_a
    if len(loose):
        prop[loose] = np.where(stiff_a[loose] == 0, prop[loose], stiff_a[loose])
        stiff_a = np.where(stiff_a == 0, prop, stiff_a)
    with np.errstate(divide="ignore"):
        for i in np.flatnonzero(np.isfinite(stiff_a).any(axis=1)):
            c[i, i] = 1.0 / stiff_a[i]
        for j, i in enumerate(loose):
            c[6 + j, i] = c[i, 6 + j] = c[6 + j, 6 + j] = c[i, i]
            t[:, 6 + j] = moved_a[:, i]
        soft_a = c[range(6), range(6)].copy()
        soft_b = 1.0 / _stiffness(run, 1, made.rows)

    steps: list[_Step] = []
    order = np.argsort(held.station, kind="stable")
    stations = held.station[order].tolist()
    queue = list(zip(stations, order.tolist(), strict=True))
    at = 0

    def step(
        station: int, hold: int, line: Array, soft: Array, target: Array | float, arrival: Array | None
    ) -> None:
        y = np.einsum("ijr,jr->ir", c[:, : len(line)], line)
        s = np.einsum("ir,ir->r", line, y[: len(line)]) + soft
        if arrival is not None:
            _refuse_double(run, held, hold, s, arrival)
        rest = (target - np.einsum("ir,sir->sr", line, t[:, : len(line)])) / s
        np.add(t, y * rest[:, None], out=t)
        np.subtract(c, y[:, None] * (y / s), out=c)
        steps.append(_Step(station, hold, line, y, s, rest))

    for e in range(n + 1):
        if jumps is not None:
            t += np.einsum("ijr,sjr->sir", c[:, :6], jumps[:, :, e])
        if at < len(queue) and queue[at][0] == e:
            before = c[:6, :6].copy() if at + 1 < len(queue) and queue[at + 1][0] == e else c[:6, :6]
            while at < len(queue) and queue[at][0] == e:
                hold = queue[at][1]
                line = held.line[:, hold]
                arrival = np.einsum("ir,ijr,jr->r", line, before, line)
                step(e, hold, line, held.softness[hold], 0.0 if target is None else target[:, hold], arrival)
                at += 1
        if e < n:
            if loads is not None:
                t += np.einsum("ijr,sjr->sir", c[:, :6], loads[:, :, e])
            t[:, :6] += free[:, :, e]
            c[:6, :6] += compliance[:, :, e]
    tip = end_lines(made.end)
    for i in range(6):
        if np.isfinite(soft_b[i]).any():
            step(n, -1 - i, tip[:, i], soft_b[i], moved_b[:, i], None)
    for j, i in enumerate(loose):
        line = np.zeros((size, rows))
        line[6 + j] = 1.0
        soft = np.where(_stiffness(run, 0, made.rows)[i] == 0, -soft_a[i], np.inf)
        y = c[6 + j]
        floats = np.isfinite(soft) & ~(np.abs(y[6 + j] + soft) > _FLOATS * soft_a[i])
        refuse(
            UnstableLayoutError,
            (
                floats,
                Fault("ends", "the run floats", f"hold the run against axis {'xyzxyz'[i]} {_KIND[i // 3]}"),
            ),
        )
        step(n, -7 - j, line, soft, 0.0, None)
    return _back(made, held, steps, c.shape[0], loads, jumps, soft_a, loose, moved_a, free, tip)


_KIND = ("(movement)", "(rotation)")


def _prop(made: Elements) -> Array:
    """Stiffness of the size of the run's own, for axes of end A that are free; taken out again at the end."""
    length = made.shape.length.sum(axis=0)
    bending = made.prop.bending.mean(axis=0)
    return np.stack([3.0 * bending / length**3] * 3 + [bending / length] * 3)


def _refuse_double(run: Run, held: Holds, hold: int, s: Array, arrival: Array) -> None:
    bad = ~(s > _SAME * arrival)
    if bad.any():
        tag = run.supports[held.support[hold]].tag or f"{held.support[hold]}"
        refuse(
            UnstableLayoutError,
            (
                bad,
                Fault(
                    f"support {tag}", "a direction already held here", "one rigid hold a place and direction"
                ),
            ),
        )


def _back(
    made: Elements,
    held: Holds,
    steps: list[_Step],
    size: int,
    loads: Array | None,
    jumps: Array | None,
    soft_a: Array,
    loose: Array,
    moved_a: Array,
    free: Array,
    tip: Array,
) -> tuple[Array, Array, Array, Array, Array]:
    """Back-substitution from end B to end A."""
    count, _, n, rows = free.shape
    w = np.zeros((count, size, rows))
    wrench = np.empty((count, 6, n, rows))
    hold_force = np.empty((count, held.line.shape[1], rows))
    end_b = np.zeros((count, 6, rows))
    at = len(steps)
    for e in range(n, -1, -1):
        while at and steps[at - 1].station == e:
            at -= 1
            one = steps[at]
            force = one.rest - np.einsum("ir,sir->sr", one.y, w) / one.s
            w[:, : len(one.line)] += one.line * force[:, None]
            if one.hold >= 0:
                hold_force[:, one.hold] = -force
            elif one.hold >= -6:
                end_b[:, -1 - one.hold] = -force
        if jumps is not None:
            w[:, :6] += jumps[:, :, e]
        if e:
            wrench[:, :, e - 1] = w[:, :6]
            if loads is not None:
                w[:, :6] += loads[:, :, e - 1]
    end_a = w[:, :6].copy()
    start = moved_a + soft_a * end_a
    for j, i in enumerate(loose):
        start[:, i] = moved_a[:, i] + soft_a[i] * (w[:, i] + w[:, 6 + j])
    return wrench, hold_force, end_a, end_b, start

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
from pipeflex.mechanics.beam.causes import free_twists
from pipeflex.mechanics.beam.compliance import Array, Indices, Member, compliance
from pipeflex.mechanics.beam.elements import (
    Elements,
    Holds,
    chunks,
    elements,
    holds,
    members,
)
from pipeflex.mechanics.beam.parts import States
from pipeflex.mechanics.beam.run import Run

_SAME = 1e-12
_FLOATS = 1e-11
_TOUCHING = 1e-9
_END_B, _END_A = -1, -7

Work = dict[tuple[int, ...], Array]


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
    count, n, rows_ = states.count(), len(run.plan.bend), run.rows
    held_count = sum(len(s.holds) for s in run.supports)
    sizes = ((6, n), (held_count,), (3, len(run.supports)), (6,), (6,), (6,))
    fields = [np.zeros((count, *size, rows_)) for size in sizes]
    work: Work = {}
    for made in (elements(run, rows) for rows in chunks(run)):
        held, member = holds(run, made), members(made, run)
        wrench, force, support, *ends = (field[..., made.rows] for field in fields)
        sweep(run, made, member, held, *free_twists(run, states, made, member), work=work, out=(wrench, force, *ends))
        support[...] = on_supports(run, held, force)
    return Answer(run, states, *fields)


def on_supports(run: Run, held: Holds, force: Array) -> Array:
    """Forces of the holds gathered by support, (state, 3, support, row)."""
    gathered = np.zeros((len(force), 3, len(run.supports), force.shape[2]))
    vectors = force[:, None] * held.unit
    for i, support in enumerate(held.support):
        gathered[:, :, support] += vectors[:, :, i]
    return gathered


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
    whole = np.empty((6, rows.stop - rows.start))
    for i, stiffness in enumerate(run.ends[end].stiffness):
        whole[i] = np.broadcast_to(stiffness, run.rows)[rows]
    return whole


def sweep(
    run: Run,
    made: Elements,
    member: Member,
    held: Holds,
    free: Array,
    loads: Array | None,
    jumps: Array | None,
    moved_a: Array,
    moved_b: Array,
    target: Array | None = None,
    work: Work | None = None,
    out: tuple[Array, ...] | None = None,
) -> tuple[Array, Array, Array, Array, Array]:
    """Forces from free twists and loads.

    A run in a coordinate plane whose holds are in the plane or square to it falls into two independent halves, of
    which one without cause is left out.

    Parameters
    ----------
    free : (state, 6, element, row), twist of each element's far end against its near end without force.
    loads : (state, 6, element, row), wrench of the loads on each element.
    jumps : (state, 6, station, row), wrench applied at each station.
    moved_a, moved_b : (state, 6, row), imposed movement of the ends.
    target : (state, hold, row), imposed movement of the holds; 0 unless given.
    work : kept from chunk to chunk.
    out : zeros to be filled with the answer.

    Returns
    -------
    wrench, hold_force, end_a, end_b, start : see `Answer`.
    """
    count, _, n, rows = free.shape
    if out is None:
        sizes = ((6, n), (held.line.shape[1],), (6,), (6,), (6,))
        out = tuple(np.zeros((count, *size, rows)) for size in sizes)
    work = {} if work is None else work
    stiff = (_stiffness(run, 0, made.rows), _stiffness(run, 1, made.rows))
    for parts, directions, which in _halves(run, made, held):
        pick = list(parts)
        load, jump = (None if a is None else a[:, pick] for a in (loads, jumps))
        strain, at_a, at_b = free[:, pick], moved_a[:, pick], moved_b[:, pick]
        pushed = None if target is None else target[:, which]
        causes = (strain, load, jump, at_a, at_b, pushed)
        free_end = (stiff[0][pick] == 0).any()
        if len(parts) < 6 and not free_end and not any(a is not None and a.any() for a in causes):
            continue
        key = (len(parts), n, rows)
        if key not in work:
            work[key] = np.empty((len(parts), len(parts), n, rows))
        part = _Half(run, made, held, stiff, parts, which)
        c = compliance(member, parts, directions, work[key])
        wrench, force, end_a, end_b, start = part.solve(c, strain, load, jump, at_a, at_b, pushed)
        out[0][:, pick], out[1][:, which] = wrench, force
        out[2][:, pick], out[3][:, pick], out[4][:, pick] = end_a, end_b, start
    return out  # type: ignore[return-value]


def _halves(run: Run, made: Elements, held: Holds) -> list[tuple[tuple[int, ...], tuple[int, ...], Indices]]:
    """Components, directions of turning and holds of each independent part of the problem."""
    everything = np.arange(held.line.shape[1])
    for normal in {0, 1, 2} - set(run.live):
        inside = ~held.unit[normal].any(axis=1)
        square = ~held.unit[list(run.live)].any(axis=(0, 2))
        if (inside | square).all():
            plane = (*run.live, 3 + normal)
            rest = (normal, *(3 + i for i in run.live))
            return [(plane, (2,), np.flatnonzero(inside)), (rest, (0, 1), np.flatnonzero(~inside))]
    return [(tuple(range(6)), (0, 1, 2), everything)]


class _Half:
    """The sweep over some components of twist and wrench."""

    def __init__(
        self,
        run: Run,
        made: Elements,
        held: Holds,
        stiff: tuple[Array, Array],
        parts: tuple[int, ...],
        which: Indices,
    ) -> None:
        self.run, self.which, self.parts = run, which, parts
        self.softness, self.support = held.softness[which], held.support[which]
        pick = list(parts)
        self.lines = held.line[pick][:, which]
        self.tip = end_lines(made.end)[pick][:, pick]
        self.stiff_a, self.stiff_b = stiff[0][pick], stiff[1][pick]
        self.loose: list[int] = np.flatnonzero((self.stiff_a == 0).any(axis=1)).tolist()
        with np.errstate(divide="ignore"):
            self.soft_a, self.soft_b = 1.0 / self.stiff_a, 1.0 / self.stiff_b
        if len(self.loose):
            self.soft_a = np.where(self.stiff_a == 0, 1.0 / _prop(made)[pick], self.soft_a)
        self.before = np.zeros((len(parts), len(parts), made.end.shape[1]))
        self.at_station: dict[int, list[int]] = {}
        for hold, station in enumerate(held.station[which].tolist()):
            self.at_station.setdefault(station, []).append(hold)
        self.same_place: set[int] = set()
        if self.at_station:
            length = made.shape.length
            near = (length <= _TOUCHING * length.sum(axis=0)).any(axis=1)
            self.same_place.update((np.flatnonzero(near) + 1).tolist())
        self.steps: list[_Step] = []

    def solve(
        self,
        compliance: Array,
        free: Array,
        loads: Array | None,
        jumps: Array | None,
        moved_a: Array,
        moved_b: Array,
        target: Array | None,
    ) -> tuple[Array, Array, Array, Array, Array]:
        """Forces of this part; arguments and answers as of `sweep`, with its components only."""
        count, p, n, rows = free.shape
        loose, soft_a = self.loose, self.soft_a
        self.c = np.zeros((p + len(loose), p + len(loose), rows))
        self.t = np.zeros((count, p + len(loose), rows))
        c, t = self.c, self.t
        self.t[:, :p] = moved_a
        c[range(p), range(p)] = soft_a
        for j, i in enumerate(loose):
            c[p + j, i] = c[i, p + j] = c[p + j, p + j] = soft_a[i]
            t[:, p + j] = moved_a[:, i]
        for e in range(n + 1):
            if jumps is not None:
                t += np.einsum("ijr,sjr->sir", c[:, :p], jumps[:, :, e])
            if e in self.at_station:
                self._holds(e, target)
            if e < n:
                if loads is not None:
                    t += np.einsum("ijr,sjr->sir", c[:, :p], loads[:, :, e])
                t[:, :p] += free[:, :, e]
                c[:p, :p] += compliance[:, :, e]
        for i in np.flatnonzero((self.stiff_b > 0).any(axis=1)).tolist():
            self._step(n, _END_B - i, self.tip[:, i], self.soft_b[i], moved_b[:, i])
        for j, i in enumerate(loose):
            self._release(n, j, i, p)
        return self._back(loads, jumps, moved_a, free)

    def _step(
        self,
        station: int,
        hold: int,
        line: Array,
        soft: Array,
        target: Array | float,
        reach: Array | None = None,
    ) -> None:
        y = np.einsum("ijr,jr->ir", self.c[:, : len(line)], line)
        s = (line * y[: len(line)]).sum(axis=0) + soft
        if reach is not None and not (s > _SAME * reach).all():
            support = self.support[hold]
            tag = self.run.supports[support].tag or f"{support + 1}"
            fault = Fault(f"support {tag}", "held here already", "one rigid hold a place and direction")
            refuse(UnstableLayoutError, (~(s > _SAME * reach), fault))
        rest = (target - (line * self.t[:, : len(line)]).sum(axis=1)) / s
        self.t += y * rest[:, None]
        self.c -= y[:, None] * (y / s)
        self.steps.append(_Step(station, hold, line, y, s, rest))

    def _holds(self, station: int, target: Array | None) -> None:
        """The holds of one station; `before` is the compliance at which the pipe came to this place."""
        here = self.at_station[station]
        p = len(self.lines)
        if station not in self.same_place:
            self.before = self.c[:p, :p].copy()
        lines = self.lines[:, here]
        alone = len(here) == 1 and station not in self.same_place
        reach = np.zeros((1, 1)) if alone else (lines * np.einsum("ijr,jhr->ihr", self.before, lines)).sum(axis=0)
        for n, hold in enumerate(here):
            aim = 0.0 if target is None else target[:, hold]
            self._step(station, hold, self.lines[:, hold], self.softness[hold], aim, reach[n])

    def _release(self, station: int, j: int, i: int, p: int) -> None:
        """Take the prop of a free axis of end A out again."""
        line = np.zeros((len(self.c), self.c.shape[2]))
        line[p + j] = 1.0
        soft = np.where(self.stiff_a[i] == 0, -self.soft_a[i], np.inf)
        floats = np.isfinite(soft) & ~(np.abs(self.c[p + j, p + j] + soft) > _FLOATS * self.soft_a[i])
        axis = self.parts[i]
        what = f"an end or support against {'movement along' if axis < 3 else 'rotation about'} {'xyz'[axis % 3]}"
        refuse(UnstableLayoutError, (floats, Fault("ends", "the run floats", what)))
        self._step(station, _END_A - j, line, soft, 0.0)

    def _back(
        self, loads: Array | None, jumps: Array | None, moved_a: Array, free: Array
    ) -> tuple[Array, Array, Array, Array, Array]:
        """Back-substitution from end B to end A."""
        count, p, n, rows = free.shape
        w = np.zeros((count, len(self.c), rows))
        wrench = np.empty((count, p, n, rows))
        hold_force = np.empty((count, self.lines.shape[1], rows))
        end_b = np.zeros((count, p, rows))
        at = len(self.steps)
        for e in range(n, -1, -1):
            while at and self.steps[at - 1].station == e:
                at -= 1
                one = self.steps[at]
                force = one.rest - (one.y * w).sum(axis=1) / one.s
                w[:, : len(one.line)] += one.line * force[:, None]
                if one.hold >= 0:
                    hold_force[:, one.hold] = -force
                elif one.hold > _END_A:
                    end_b[:, _END_B - one.hold] = -force
            if jumps is not None:
                w[:, :p] += jumps[:, :, e]
            if e:
                wrench[:, :, e - 1] = w[:, :p]
                if loads is not None:
                    w[:, :p] += loads[:, :, e - 1]
        end_a = w[:, :p].copy()
        start = moved_a + self.soft_a * end_a
        for j, i in enumerate(self.loose):
            start[:, i] = moved_a[:, i] + self.soft_a[i] * (w[:, i] + w[:, p + j])
            end_a[:, i] = np.where(self.stiff_a[i] == 0, 0.0, end_a[:, i])
        return wrench, hold_force, end_a, end_b, start


def _prop(made: Elements) -> Array:
    """Stiffness of the size of the run's own, for axes of end A that are free; taken out again at the end."""
    length = made.shape.length.sum(axis=0)
    bending = made.prop.bending.mean(axis=0)
    return np.stack([3.0 * bending / length**3] * 3 + [bending / length] * 3)

"""One run whose states alone change: everything solved once for unit causes, then summed."""

from dataclasses import dataclass

import numpy as np

from pipeflex.errors import Fault, InputError, refuse
from pipeflex.mechanics.beam.causes import point_wrenches
from pipeflex.mechanics.beam.compliance import Array
from pipeflex.mechanics.beam.elements import Holds, elements, holds, members
from pipeflex.mechanics.beam.parts import States, states_first
from pipeflex.mechanics.beam.run import Run
from pipeflex.mechanics.beam.sweep import Answer, on_supports, sweep


@dataclass(frozen=True, slots=True, eq=False)
class Influence:
    """Answers of a run to unit causes; made by `influence`.

    table : (cause, value); causes are the strain of every piece and bend, their bow, weight, movements of both ends,
        movements of the last holds.
    places : columns and shape (without the state axis) of each field of `Answer`.
    """

    run: Run
    table: Array
    places: tuple[tuple[slice, tuple[int, ...]], ...]

    def answer(self, states: States, moved: Array | None = None) -> Answer:
        """The same as `linear`, in some microseconds.

        moved : (state, hold), imposed movement of the last holds [m]; none unless given.
        """
        run, count = self.run, states.count()
        per = run.pieces + run.bends
        causes = np.zeros((count, len(self.table)))
        _spread_over(run, causes[:, :per], states.strain, states.bend_strain)
        if states.bow is not None:
            _spread_over(run, causes[:, per : 2 * per], states.bow, None)
        causes[:, 2 * per] = states.weight
        for at, movement in ((2 * per + 1, states.movement_a), (2 * per + 7, states.movement_b)):
            if movement is not None:
                causes[:, at : at + 6] = np.asarray(movement)[:, :, 0]
        if moved is not None:
            causes[:, 2 * per + 13 :] = moved
        values = causes @ self.table
        fields = [values[:, at].reshape(count, *shape) for at, shape in self.places]
        return Answer(run, states, *fields)


def _spread_over(run: Run, causes: Array, pieces: Array | float, bends: Array | float | None) -> None:
    """Fill in values of pieces, then of bends (the mean of their neighbours unless given)."""
    count, n = len(causes), run.pieces
    if np.ndim(pieces) < 2 and bends is None:
        causes[...] = np.reshape(pieces, (-1, 1))
        return
    causes[:, :n] = states_first(pieces, (count, n, 1))[:, :, 0]
    if bends is None:
        before = run.plan.bend_piece
        causes[:, n:] = 0.5 * (causes[:, before] + causes[:, before + 1])
    else:
        causes[:, n:] = states_first(bends, (count, run.bends, 1))[:, :, 0]


def influence(run: Run) -> Influence:
    """Solve a run of one row for unit causes.

    Raises
    ------
    InputError
        More than one row.
    UnstableLayoutError
        As `linear`.
    """
    refuse(InputError, (run.rows != 1, Fault("rows", run.rows, "one design at a time")))
    return of_holds(run, holds(run, elements(run, slice(0, 1))), 0)


def of_holds(run: Run, held: Holds, moving: int) -> Influence:
    """The same with holds of one's own, of which the last are moved: one more cause each."""
    made, plan = elements(run, slice(0, 1)), run.plan
    member = members(made, run)
    n, per = len(plan.bend), run.pieces + run.bends
    cause = np.where(plan.bend < 0, plan.piece, run.pieces + plan.bend)
    first = 2 * per + 13
    count = first + moving
    free, every = np.zeros((count, 6, n, 1)), np.arange(n)
    free[cause, :3, every] = member.chord.swapaxes(0, 1)
    free[per + cause, :, every] = member.bow.swapaxes(0, 1)
    loads, jumps = np.zeros((count, 6, n, 1)), np.zeros((count, 6, n + 1, 1))
    free[2 * per], loads[2 * per] = member.sag, member.load
    jumps[2 * per] = point_wrenches(run, made)
    moved = np.zeros((2, count, 6, 1))
    moved[0, 2 * per + 1 : 2 * per + 7, :, 0] = moved[1, 2 * per + 7 : first, :, 0] = np.eye(6)
    target = np.zeros((count, len(held.station), 1))
    target[first + np.arange(moving), len(held.station) - moving + np.arange(moving)] = 1.0
    wrench, force, *rest = sweep(run, made, member, held, free, loads, jumps, moved[0], moved[1], target)
    fields = (wrench, force, on_supports(run, held, force), *rest)
    table = np.concatenate([field.reshape(count, -1) for field in fields], axis=1)
    ends = np.cumsum([field[0].size for field in fields]).tolist()
    places = tuple((slice(end - field[0].size, end), field.shape[1:]) for end, field in zip(ends, fields, strict=True))
    return Influence(run, table, places)

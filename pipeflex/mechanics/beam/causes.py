"""What the states do to the elements of a run before any force acts on them: growth, bow, weight, moved ends."""

from collections.abc import Callable

import numpy as np

from pipeflex.mechanics.beam.compliance import UP, Array, Member, cross, yielding
from pipeflex.mechanics.beam.elements import Elements, state_strains, station_points
from pipeflex.mechanics.beam.parts import States, states_first
from pipeflex.mechanics.beam.run import Run


def own_twists(
    run: Run, states: States, made: Elements, member: Member, spread: Callable[[Array], Array] = lambda values: values
) -> Array:
    """Twist of each element's far end against its near end by growth, bow and own weight, (state, 6, element, row).

    spread : from the rows of the run to those of `member`.
    """
    count = states.count()
    strain, bow = state_strains(run, states, count, made.rows)
    strain = spread(strain)
    free = np.zeros((count, 6, *strain.shape[1:]))
    for i in member.live:
        np.multiply(strain, member.chord[i], out=free[:, i])
    if bow is not None:
        free += spread(bow)[:, None] * member.bow
    factor = weighing(states)
    if factor.any() and run.weight.any():
        free += factor * member.sag
    return free


def weighing(states: States) -> Array:
    """Factor on all weights, (state, 1, 1, 1)."""
    return np.broadcast_to(np.asarray(states.weight, dtype=float), (states.count(),))[:, None, None, None]


def free_twists(
    run: Run, states: States, made: Elements, member: Member
) -> tuple[Array, Array | None, Array | None, Array, Array]:
    """What the states put into the sweep: `free`, `loads`, `jumps`, `moved_a` and `moved_b` of `sweep`."""
    count, rows, factor = states.count(), made.rows, weighing(states)
    heavy = bool(factor.any())
    loads = factor * member.load if heavy and run.weight.any() else None
    jumps = factor * point_wrenches(run, made) if heavy and run.weights else None
    moved = [
        np.zeros((count, 6, made.end.shape[1])) if m is None else states_first(m, (count, 6, run.rows))[:, :, rows]
        for m in (states.movement_a, states.movement_b)
    ]
    return own_twists(run, states, made, member), loads, jumps, moved[0], moved[1]


def twists(member: Member, free: Array, wrench: Array, start: Array) -> Array:
    """Twist about O at every station, (state, 6, station, row)."""
    first = start[:, :, None]
    return np.concatenate([first, first + np.cumsum(free + yielding(member, wrench), axis=2)], axis=2)


def point_wrenches(run: Run, made: Elements) -> Array:
    """Wrench about O of the concentrated weights at each station, (6, station, row)."""
    jumps = np.zeros((6, len(made.shape.length) + 1, made.end.shape[1]))
    for weight, station in zip(run.weights, run.plan.weight_station, strict=True):
        force = np.zeros((3, made.end.shape[1]))
        force[UP] = -(weight.force if np.ndim(weight.force) == 0 else weight.force[made.rows])  # type: ignore[index]
        point = station_points(made, np.array([station]))[:, 0]
        jumps[:, station] += np.concatenate([force, cross(point, force)])
    return jumps

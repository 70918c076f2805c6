"""What really happens to a single design along a history.

Gaps close, rests lift, friction holds, slips and locks in.

References
----------
J. J. Moreau, Evolution problem associated with a moving convex set, J. Differ. Equ. 26 (1977) 347: the quasi-static
history of dry friction as the limit of implicit steps.
"""

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.typing import NDArray

from pipeflex.errors import Fault, InputError, refuse
from pipeflex.mechanics.beam.compliance import Array, Indices, cross
from pipeflex.mechanics.beam.contact import Balance, Contacts, Laws
from pipeflex.mechanics.beam.elements import (
    Elements,
    Holds,
    elements,
    holds,
    members,
    station_points,
    support_axes,
)
from pipeflex.mechanics.beam.parts import States
from pipeflex.mechanics.beam.run import Run
from pipeflex.mechanics.beam.sweep import Answer, free_twists, on_supports, sweep

_LIMIT_ROUNDS = 60
_DAMPED_AFTER = 12
_LIMIT_EXACT = 1e-8
_PARALLEL = 0.999
_OWN_WAY = 0.05


@dataclass(frozen=True, slots=True, eq=False)
class Settled:
    """The states of a history, in order.

    answer : forces; `hold_force`, `support_force` and the ends with contact and friction.
    friction : (state, support) [N], size of the friction force at each support.
    normal : (state, support) [N], what presses on each support.
    slides, lifted : (state, support): friction is at its limit; all that can lift or has a gap there is clear.
    converged : (state,); left : (state,) [N], force not in balance, or by which a friction limit is missed.
    iterations : (state,), Newton steps.
    """

    answer: Answer
    friction: Array
    normal: Array
    slides: NDArray[np.bool_]
    lifted: NDArray[np.bool_]
    converged: NDArray[np.bool_]
    left: Array
    iterations: Indices


@dataclass(frozen=True, slots=True, eq=False)
class _Model:
    """The contacts of a run.

    plain : holds that stay as they are; ways : every direction in which a contact acts, as rigid holds after the
    plain ones; laws : what acts in them; hold, support : per law, index of its hold (-1 for friction) and support.
    """

    plain: Indices
    held: Holds
    laws: Laws
    hold: Indices
    support: Indices
    friction: Array


def settle(run: Run, states: States, steps: int = 8) -> Settled:
    """Follow a history: states in their order, each reached from the one before in equal steps.

    The first state is the run as laid: contacts act, friction is still zero.  Heating up, cooling down and heating
    up again are four states.  Friction acts against the movement at each support, at most its coefficient times all
    that presses there, vertical forces being shared out anew in every step.

    Parameters
    ----------
    run : one row.
    states : the history.
    steps : steps from one state to the next; matters where a movement turns on the way.

    Raises
    ------
    InputError
        More than one row, no step, a negative gap or coefficient of friction.
    UnstableLayoutError
        The run floats even with all its contacts closed, or two holds are one.
    """
    refuse(
        InputError,
        (run.rows != 1, Fault("rows", run.rows, "one design at a time")),
        (steps < 1, Fault("steps", steps, "1 or more")),
    )
    made = elements(run, slice(0, 1))
    model = _model(run, made, holds(run, made))
    count = states.count()
    parts = _closed(run, states, made, model)
    first = len(model.plain)
    force = -parts[1][..., 0]
    closed, stiffness = force[:count, first:], force[count:, first:]
    stiffness = 0.5 * (stiffness + stiffness.T)
    by_state, by_u = force[:count, :first], force[count:, :first]

    def normal(state: int, one: Balance, share: float = 1.0) -> Array:
        before = max(state - 1, 0)
        plain = (1.0 - share) * by_state[before] + share * by_state[state] + one.u @ by_u
        return _pressing(model, plain, one.force)

    laws = model.laws
    contacts = Contacts(laws, stiffness)
    now = Balance(np.zeros(len(stiffness)), np.zeros(len(laws.dof)), 0.0, 0, True)
    slid = np.zeros(len(laws.dof))
    found: list[Balance] = []
    for state in range(count):
        iterations, left, exact = 0, 0.0, True
        for share in np.linspace(0.0, 1.0, steps + 1)[1:] if state else [1.0]:
            before = max(state - 1, 0)
            here = (1.0 - share) * closed[before] + share * closed[state]
            friction = model.friction if state else np.zeros_like(model.friction)
            now = _step(model, contacts, here, slid, partial(normal, state, share=share), friction, now)
            slid = np.where(laws.frictional, now.u[laws.dof], 0.0)
            iterations, left, exact = iterations + now.iterations, max(left, now.left), exact and now.exact
        found.append(Balance(now.u, now.force, left, iterations, exact))
    return _settled(run, states, model, parts, normal, found)


def _pressing(model: _Model, plain: Array, force: Array) -> Array:
    """What presses on each support: its plain holds and its contacts [N]."""
    size = len(model.friction)
    pressing = np.zeros(size)
    pressing += np.bincount(model.held.support[: len(plain)], np.abs(plain), minlength=size)
    pressing += np.bincount(model.support, np.where(model.hold >= 0, np.abs(force), 0.0), minlength=size)
    return pressing


def _step(
    model: _Model,
    contacts: Contacts,
    closed: Array,
    slid: Array,
    normal: Callable[[Balance], Array],
    friction: Array,
    start: Balance,
) -> Balance:
    """One step: friction limits and contact forces until they agree."""
    now, used = start, 0
    limit = (friction * normal(now))[model.support]
    for round_ in range(_LIMIT_ROUNDS):
        now = contacts.balance(closed, slid, limit, now)
        used += now.iterations
        wanted = (friction * normal(now))[model.support]
        miss = float(np.abs(wanted - limit).max(initial=0.0))
        if miss <= _LIMIT_EXACT * float(np.abs(now.force).max(initial=0.0)):
            return Balance(now.u, now.force, now.left, used, now.exact)
        limit = wanted if round_ < _DAMPED_AFTER else 0.5 * (wanted + limit)
    return Balance(now.u, now.force, max(now.left, miss), used, False)


def _model(run: Run, made: Elements, held: Holds) -> _Model:
    """Sort the holds into plain ones and contacts, and add the directions of friction."""
    given = [hold for support in run.supports for hold in support.holds]
    friction = np.array([s.friction for s in run.supports])
    gap = np.array([h.gap for h in given])
    lifts = np.array([h.lifts for h in given], dtype=bool)
    refuse(
        InputError,
        *((not f >= 0, Fault(f"supports[{i}].friction", f, "0 or more", "ratio")) for i, f in enumerate(friction)),
        *(
            (not g >= 0, Fault(f"supports[{held.support[i]}].gap", g, "0 or more", "movement"))
            for i, g in enumerate(gap)
        ),
    )
    exists = np.isfinite(held.softness[:, 0])
    contact = exists & (lifts | (gap > 0))
    hold = np.flatnonzero(contact).tolist()
    units = [held.unit[:, i, 0] for i in hold]
    support = held.support[hold].tolist()
    dof, partner = list(range(len(hold))), list(range(len(hold)))
    along, lateral = support_axes(run, made)
    for i in np.flatnonzero(friction > 0):
        mine = np.flatnonzero(exists & (held.support == i)).tolist()
        fixed = [held.unit[:, j, 0] for j in mine if gap[j] == 0.0]
        shared = [hold.index(j) for j in mine if gap[j] > 0.0]
        flat = lateral[:, i, 0]
        ways = [units[j] for j in shared] + [along[:, i, 0]] + ([flat] if flat.any() else list(np.eye(3)[:2]))
        chosen: list[int] = []
        for n, way in enumerate(ways):
            for other in fixed:
                way = way - (way @ other) * other
            size = np.sqrt(way @ way)
            if size < _OWN_WAY or len(chosen) == 2:
                continue
            fixed.append(way / size)
            if n < len(shared) and size > _PARALLEL:
                chosen.append(shared[n])
            else:
                chosen.append(len(units))
                units.append(way / size)
        first = len(dof)
        dof += chosen
        support += [int(i)] * len(chosen)
        partner += [first + 1, first] if len(chosen) == 2 else [first] * len(chosen)
    plain = np.flatnonzero(exists & ~contact)
    laws, rubbing = len(dof), len(dof) - len(hold)
    of = np.array(support, dtype=np.intp)
    where = np.zeros(len(units), dtype=np.intp)
    where[dof] = of
    unit = np.array(units).reshape(-1, 3).T
    station = run.plan.support_station[where]
    line = np.concatenate([unit, cross(station_points(made, station)[..., 0], unit)])[..., None]
    zero = np.zeros(rubbing)
    return _Model(
        plain=plain,
        held=Holds(
            np.concatenate([held.line[:, plain], line], axis=1),
            np.concatenate([held.unit[:, plain], unit[..., None]], axis=1),
            np.concatenate([held.softness[plain], np.zeros((len(units), 1))]),
            np.concatenate([held.station[plain], station]),
            np.concatenate([held.support[plain], where]),
        ),
        laws=Laws(
            dof=np.array(dof, dtype=np.intp),
            gap=np.concatenate([gap[hold], zero]),
            give=np.concatenate([held.softness[hold, 0], zero]),
            pushes=np.concatenate([lifts[hold], zero > 0]),
            frictional=np.arange(laws) >= len(hold),
            partner=np.array(partner, dtype=np.intp),
        ),
        hold=np.concatenate([hold, np.full(rubbing, -1)]).astype(np.intp),
        support=of,
        friction=friction,
    )


def _closed(run: Run, states: States, made: Elements, model: _Model) -> tuple[Array, ...]:
    """Answers with every contact closed: of the states, then of a unit movement at each contact."""
    member = members(made, run)
    count = states.count()
    free, loads, jumps, moved_a, moved_b = free_twists(run, states, made, member)
    plain, m = len(model.plain), len(model.held.station) - len(model.plain)

    def padded(values: Array) -> Array:
        return np.concatenate([values, np.zeros((m, *values.shape[1:]))])

    target = np.zeros((count + m, plain + m, 1))
    target[count + np.arange(m), plain + np.arange(m)] = 1.0
    return sweep(
        run,
        made,
        member,
        model.held,
        padded(free),
        None if loads is None else padded(loads),
        None if jumps is None else padded(jumps),
        padded(moved_a),
        padded(moved_b),
        target,
    )


def _gathered(values: Array, index: Indices, size: int) -> Array:
    """Columns of `values` summed where `index` sends them."""
    sums = np.zeros((len(values), size))
    for column, i in enumerate(index.tolist()):
        sums[:, i] += values[:, column]
    return sums


def _settled(
    run: Run,
    states: States,
    model: _Model,
    parts: tuple[Array, ...],
    normal: Callable[[int, Balance], Array],
    found: list[Balance],
) -> Settled:
    count = len(found)
    u = np.array([one.u for one in found])
    force = np.array([one.force for one in found])
    wrench, closed, end_a, end_b, start = (p[:count] + np.tensordot(u, p[count:], axes=(1, 0)) for p in parts)
    first = len(model.plain)
    supports, given = len(run.supports), sum(len(s.holds) for s in run.supports)
    hold_force = np.zeros((count, given, 1))
    hold_force[:, model.plain] = closed[:, :first]
    is_hold = model.hold >= 0
    hold_force[:, model.hold[is_hold], 0] = -force[:, is_hold]
    closed[:, first:, 0] = -_gathered(force, model.laws.dof, closed.shape[1] - first)
    squares = _gathered(force[:, ~is_hold] ** 2, model.support[~is_hold], supports)
    pressed = _gathered(np.abs(force[:, is_hold]), model.support[is_hold], supports)
    friction = np.sqrt(squares)
    pressing = np.array([normal(s, one) for s, one in enumerate(found)]).reshape(count, supports)
    return Settled(
        answer=Answer(run, states, wrench, hold_force, on_supports(run, model.held, closed), end_a, end_b, start),
        friction=friction,
        normal=pressing,
        slides=(friction > 0) & (friction >= (1.0 - 1e-6) * model.friction * pressing),
        lifted=np.isin(np.arange(supports), model.support[is_hold]) & (pressed == 0.0),
        converged=np.array([one.exact for one in found]),
        left=np.array([one.left for one in found]),
        iterations=np.array([one.iterations for one in found]),
    )

"""What really happens to a single design along a history.

Gaps close, rests lift, friction holds, slips and locks in.

References
----------
J. J. Moreau, Evolution problem associated with a moving convex set, J. Differ. Equ. 26 (1977) 347: the quasi-static
history of dry friction as the limit of implicit steps.
"""

from dataclasses import dataclass, replace
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from pipeflex.errors import Fault, InputError, refuse
from pipeflex.mechanics.beam.compliance import Array, Indices, cross
from pipeflex.mechanics.beam.contact import Balance, Contacts, Laws
from pipeflex.mechanics.beam.elements import Elements, Holds, elements, holds, station_points, support_axes
from pipeflex.mechanics.beam.influence import Influence, of_holds
from pipeflex.mechanics.beam.parts import States
from pipeflex.mechanics.beam.run import Run
from pipeflex.mechanics.beam.sweep import Answer, on_supports

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


class _Prepared(NamedTuple):
    """What a run has whatever its history.

    table : answers with every contact held fast or moved; unit : (dof, plain), plain holds' force on the pipe by a
    unit movement of each contact; pressing : (support, plain and law), which forces press there.
    """

    model: _Model
    table: Influence
    contacts: Contacts
    unit: Array
    pressing: Array


def settle(run: Run, states: States, steps: int = 8, *, rubbing: bool = True) -> Settled:
    """Follow a history: states in their order, each reached from the one before in equal steps.

    The first state is the run as laid: contacts act, friction is still zero.  Heating up, cooling down and heating
    up again are four states.  Friction acts against the movement at each support, at most its coefficient times all
    that presses there, vertical forces being shared out anew in every step.

    Parameters
    ----------
    run : one row.
    states : the history.
    steps : steps from one state to the next; matters where a movement turns on the way.
    rubbing : False leaves friction out.

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
    if "contacts" not in run.cache:
        run.cache["contacts"] = _prepared(run)
    ready: _Prepared = run.cache["contacts"]  # type: ignore[assignment]
    model, laws = ready.model, ready.model.laws
    first, none = len(model.plain), np.zeros_like(model.friction)
    force = -ready.table.answer(states).hold_force[..., 0]
    now = Balance(np.zeros(len(ready.unit)), np.zeros(len(laws.dof)), 0.0, 0, True)
    slid, ahead = np.zeros(len(laws.dof)), np.zeros(len(ready.unit))
    found: list[Balance] = []
    pressing = []
    before = force[0]
    for state, here in enumerate(force):
        iterations, left, exact = 0, 0.0, True
        friction = model.friction if rubbing and state else none
        for share in np.linspace(0.0, 1.0, steps + 1)[1:] if state else [1.0]:
            at = (1.0 - share) * before + share * here
            last = now
            now = _step(ready, at[first:], slid, at[:first], friction, last, ahead)
            ahead = now.u - last.u
            slid = np.where(laws.frictional, now.u[laws.dof], 0.0)
            iterations, left, exact = iterations + now.iterations, max(left, now.left), exact and now.exact
        found.append(Balance(now.u, now.force, left, iterations, exact))
        pressing.append(_pressing(ready, here[:first], now))
        before, ahead = here, np.zeros_like(ahead)
    return _settled(ready, states, np.array(pressing), found, model.friction if rubbing else none)


def _prepared(run: Run) -> _Prepared:
    made = elements(run, slice(0, 1))
    model = _model(run, made, holds(run, made))
    first, moving = len(model.plain), len(model.held.station) - len(model.plain)
    table = of_holds(run, model.held, moving)
    by_u = -table.table[len(table.table) - moving :, table.places[1][0]]
    stiffness = by_u[:, first:]
    pressing = np.zeros((len(model.friction), first + len(model.hold)))
    pressing[model.held.support[:first], np.arange(first)] = 1.0
    pressing[model.support, first + np.arange(len(model.hold))] = model.hold >= 0
    return _Prepared(model, table, Contacts(model.laws, 0.5 * (stiffness + stiffness.T)), by_u[:, :first], pressing)


def _pressing(ready: _Prepared, plain: Array, now: Balance) -> Array:
    """What presses on each support: its plain holds and its contacts [N]."""
    pressing: Array = ready.pressing @ np.abs(np.concatenate([plain + now.u @ ready.unit, now.force]))
    return pressing


def _step(
    ready: _Prepared, closed: Array, slid: Array, plain: Array, friction: Array, start: Balance, ahead: Array
) -> Balance:
    """One step: friction limits and contact forces until they agree.

    plain : forces of the plain holds on the pipe with every contact held fast, (plain,) [N].
    """
    now, used, support = start, 0, ready.model.support
    limit = (friction * _pressing(ready, plain, now))[support]
    for round_ in range(_LIMIT_ROUNDS):
        now = ready.contacts.balance(closed, slid, limit, now, 0.0 if round_ else ahead)
        used += now.iterations
        wanted = (friction * _pressing(ready, plain, now))[support]
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


def _gathered(values: Array, index: Indices, size: int) -> Array:
    """Columns of `values` summed where `index` sends them."""
    sums = np.zeros((len(values), size))
    for column, i in enumerate(index.tolist()):
        sums[:, i] += values[:, column]
    return sums


def _settled(
    ready: _Prepared, states: States, pressing: Array, found: list[Balance], friction_factor: Array
) -> Settled:
    model = ready.model
    u = np.array([one.u for one in found])
    force = np.array([one.force for one in found])
    answer = ready.table.answer(states, u)
    run, count, first = answer.run, len(found), len(model.plain)
    supports, given = len(run.supports), sum(len(s.holds) for s in run.supports)
    closed, is_hold = answer.hold_force, model.hold >= 0
    closed[:, first:, 0] = -_gathered(force, model.laws.dof, closed.shape[1] - first)
    hold_force = np.zeros((count, given, 1))
    hold_force[:, model.plain] = closed[:, :first]
    hold_force[:, model.hold[is_hold], 0] = -force[:, is_hold]
    squares = _gathered(force[:, ~is_hold] ** 2, model.support[~is_hold], supports)
    pressed = _gathered(np.abs(force[:, is_hold]), model.support[is_hold], supports)
    friction = np.sqrt(squares)
    return Settled(
        answer=replace(answer, hold_force=hold_force, support_force=on_supports(run, model.held, closed)),
        friction=friction,
        normal=pressing,
        slides=(friction > 0) & (friction >= (1.0 - 1e-6) * friction_factor * pressing),
        lifted=np.isin(np.arange(supports), model.support[is_hold]) & (pressed == 0.0),
        converged=np.array([one.exact for one in found]),
        left=np.array([one.left for one in found]),
        iterations=np.array([one.iterations for one in found]),
    )

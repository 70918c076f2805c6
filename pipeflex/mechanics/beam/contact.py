"""Contact and dry friction of a single design: one strictly convex problem a step, so that it cannot cycle.

Let u be the movements of the pipe at its contacts and ``R + K u`` the forces that it takes to hold it there.  In a
step u minimises ``u'K u/2 + R'u`` plus the work of what the contacts give: a rest that can lift only pushes, a gap
gives nothing until it is closed, friction gives at most mu N (a disc in plan, a box where one direction is left).

Newton's method on the conditions themselves mostly ends in a few steps.  It may cycle: then the method of multipliers
takes a round, whose inner problem is smooth and strictly convex, so that Newton's method with a line search on its
energy ends at its one minimum, whatever the start.

References
----------
R. T. Rockafellar, Math. Oper. Res. 1 (1976) 97 (method of multipliers as a proximal-point algorithm);
L. Qi, J. Sun, Math. Program. 58 (1993) 353 (Newton's method for semismooth gradients);
P. Alart, A. Curnier, Comput. Methods Appl. Mech. Eng. 92 (1991) 353 (the conditions of contact and friction as one
semismooth equation in movements and forces);
A. Klarbring, Ing.-Arch. 56 (1986) 529 (incremental friction problem with given normal forces).
"""

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from pipeflex.mechanics.beam.compliance import Array, Indices

_SHARP = 12
_NEWTON = 30
_MULTIPLIER = 200
_SOFT = 1e-3
_SOFTER, _SOFTEST = 10.0, 1e6
_LOOSE = 1e3
_AT_LIMIT = 1.0 - 1e-14
_STRAIGHT = 1.0 - 1e-6
_EXACT = 1e-10
_ROUNDING = 1e-13
_GOOD = 1e-7
_STALLED = 1e-14
_TINY = 1e-300

Mask = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class Laws:
    """What the contacts can give.

    dof : (law,), the movement it acts on; several may act on one.
    gap : clearance [m]; give : own softness [m/N]; pushes : it gives no pull; frictional : limited by friction.
    partner : (law,), for friction in a disc the index of the law of its other direction, else its own index.
    """

    dof: Indices
    gap: Array
    give: Array
    pushes: Mask
    frictional: Mask
    partner: Indices


@dataclass(frozen=True, slots=True, eq=False)
class Balance:
    """Movements u (dof,) [m] and forces on the pipe (law,) [N] of a step; `left` [N] is not in balance."""

    u: Array
    force: Array
    left: float
    iterations: int
    exact: bool


class _Step(NamedTuple):
    """What a step asks: forces R, where friction last let go, its limits (infinite for holds)."""

    closed: Array
    slid: Array
    limit: Array


class _Softness(NamedTuple):
    """Softness lent to every law [m/N], that with its own, and the force at which its gap is closed [N]."""

    lent: Array
    whole: Array
    dead: Array


class Contacts:
    """The contacts of a run along its history.

    Parameters
    ----------
    laws : what the contacts can give.
    stiffness : K, (dof, dof) [N/m].
    """

    def __init__(self, laws: Laws, stiffness: Array) -> None:
        count = len(laws.dof)
        self.laws, self.stiffness, self.size = laws, stiffness, np.abs(stiffness)
        self.paired = laws.partner != np.arange(count)
        self.discs = np.flatnonzero(self.paired)
        self.pairs = np.eye(count)
        self.pairs[self.discs, laws.partner[self.discs]] = 1.0
        self.sums = np.zeros((len(stiffness), count))
        self.sums[laws.dof, np.arange(count)] = 1.0
        self.diagonal = np.arange(len(stiffness))
        self.floor = np.where(laws.pushes, 0.0, -np.inf)
        self.shared = len(np.unique(laws.dof)) < count
        self.rigid = laws.give == 0.0
        self.springs = np.where(self.rigid, 0.0, 1.0 / np.where(self.rigid, 1.0, laws.give))
        diagonal = stiffness.diagonal()[laws.dof]
        self.pipe = 1.0 / np.maximum(diagonal, diagonal[laws.partner])
        self.loose, self.even = self._softness(_LOOSE), self._softness(1.0)

    def balance(self, closed: Array, slid: Array, limit: Array, start: Balance, ahead: Array | float = 0.0) -> Balance:
        """Solve one step.

        Parameters
        ----------
        closed : R, (dof,) [N].
        slid : (law,), where friction last let go [m]; 0 for holds.
        limit : (law,), greatest friction [N]; read where frictional.
        start : where to begin; the answer does not depend on it.
        ahead : movement to expect from there [m]; nor on this.
        """
        if not len(closed):
            return Balance(closed, closed, 0.0, 0, True)
        # counted from where the step begins: what sticks has not moved at all, and its stiff law loses no digits
        step = _Step(
            closed + self.stiffness @ start.u,
            slid - start.u[self.laws.dof],
            np.where(self.laws.frictional, limit, np.inf),
        )
        u, force, total, share = ahead + np.zeros_like(start.u), start.force, 0, _SOFT
        for _ in range(_MULTIPLIER):
            sharp = self._sharp(step, u, force)
            if sharp is not None:
                return Balance(start.u + sharp.u, sharp.force, sharp.left, total + sharp.iterations, True)
            soft = self._softness(share)
            u, left, used = self._minimum(step, soft, u, force)
            total += _SHARP + used
            share = min(share * _SOFTER, _SOFTEST) if used == _NEWTON else max(share / _SOFTER, _SOFT)
            previous, force = force, self._given(step, soft, self._trial(step, soft, u, force))
            change = float(np.abs(force - previous).max())
            accuracy = self._accuracy(u, force)
            if change <= accuracy and used < _NEWTON:
                break
        left = max(left, change)
        enough = 10.0 * accuracy + _GOOD * float(np.abs(force).max())
        return Balance(start.u + u, force, left, total, left <= enough)

    def _softness(self, share: float) -> _Softness:
        """A share of what the pipe itself gives at every law, all else held."""
        whole = share * self.pipe + self.laws.give
        return _Softness(share * self.pipe, whole, self.laws.gap / whole)

    def _accuracy(self, u: Array, force: Array) -> float:
        """What rounding and the wanted digits leave [N]."""
        return float(_ROUNDING * (self.size @ np.abs(u)).max() + _EXACT * max(np.abs(force).max(), 1e-9))

    def _trial(self, step: _Step, soft: _Softness, u: Array, last: Array) -> Array:
        trial: Array = (soft.lent * last - (u[self.laws.dof] - step.slid)) / soft.whole
        return trial

    def _product(self, a: Array, b: Array) -> Array:
        """Scalar product of what the laws have in their directions: of both for a disc."""
        product: Array = a * b
        return self.pairs @ product if len(self.discs) else product

    def _sizes(self, soft: _Softness, trial: Array) -> tuple[Array, Mask]:
        """Size of the trial, and which laws give anything at all."""
        size = np.sqrt(self._product(trial, trial))
        return size, (size > soft.dead) & (trial > self.floor)

    def _given(self, step: _Step, soft: _Softness, trial: Array) -> Array:
        size, acts = self._sizes(soft, trial)
        over = np.where(acts, size - soft.dead, 0.0)
        return np.minimum(over, step.limit) / np.maximum(size, _TINY) * trial

    def _stiffened(self, own: Array, discs: Indices, way: Array) -> Array:
        """K with what the laws add, (dof, dof): `own` along each, for the `discs` only across their way."""
        laws, whole = self.laws, self.stiffness.copy()
        if len(discs):
            own, other = own.copy(), laws.partner[discs]
            along = own[discs] * way[discs]
            own[discs] -= along * way[discs]
            whole[laws.dof[discs], laws.dof[other]] -= along * way[other]
        whole[self.diagonal, self.diagonal] += self.sums @ own
        return whole

    def _sharp(self, step: _Step, u: Array, force: Array) -> Balance | None:
        """Newton's method on the conditions themselves; None where it does not end."""
        laws, dof = self.laws, self.laws.dof
        limit = np.where(laws.frictional, step.limit, 0.0)
        at_limit = _AT_LIMIT * step.limit
        for used in range(1, _SHARP + 1):
            trial = self._trial(step, self.loose, u, force)
            size, acts = self._sizes(self.loose, trial)
            # what turns round sticks first
            slides = acts & (size >= at_limit) & (self._product(trial, force) >= 0.0)
            sticks = acts & ~slides
            rigid = np.flatnonzero(sticks & self.rigid)
            fixed = dof[rigid]
            if self.shared and len(set(fixed.tolist())) < len(fixed):
                return None
            # force of a law = push - own (u - edge), for a disc that slides only across its way
            way = trial / np.maximum(size, _TINY)
            push = np.where(slides, limit, 0.0) * way
            own = np.where(sticks, self.springs, 0.0)
            edge = step.slid - laws.gap * way
            discs = self.discs[slides[self.discs]]
            part = np.minimum(step.limit[discs] / size[discs], _STRAIGHT)
            own[discs] = part / (1.0 - part) / self.loose.lent[discs]
            crossing = np.zeros_like(trial)
            crossing[discs] = own[discs] * way[discs]
            whole = self._stiffened(own, discs, way)
            right = self.sums @ (push + own * edge - crossing * self._product(way, edge)) - step.closed
            right -= whole[:, fixed] @ edge[rigid]
            whole[fixed] = whole[:, fixed] = 0.0
            whole[fixed, fixed], right[fixed] = 1.0, edge[rigid]
            try:
                u = np.asarray(np.linalg.solve(whole, right))
            except np.linalg.LinAlgError:
                return None
            gone = u[dof] - edge
            force = push - own * gone + crossing * self._product(way, gone)
            held = step.closed + self.stiffness @ u
            force[rigid] = (held - self.sums @ force)[fixed]
            given = self._given(step, self.even, self._trial(step, self.even, u, force))
            left = float(np.abs(np.concatenate([given - force, held - self.sums @ given])).max())
            if left <= self._accuracy(u, given):
                return Balance(u, given, left, used, True)
        return None

    def _minimum(self, step: _Step, soft: _Softness, u: Array, last: Array) -> tuple[Array, float, int]:
        """Least energy with laws of some softness that act from their last force; also force left, number of steps."""
        held = step.closed + self.stiffness @ u
        trial = self._trial(step, soft, u, last)
        gradient = held - self.sums @ self._given(step, soft, trial)
        for used in range(_NEWTON):
            left = float(np.abs(gradient).max())
            if left <= 0.3 * self._accuracy(u, last):
                return u, left, used
            size, acts = self._sizes(soft, trial)
            slides = acts & (size > step.limit)
            own = np.where(acts & ~(slides & ~self.paired), 1.0 / soft.whole, 0.0)
            discs = self.discs[slides[self.discs]]
            own[discs] *= step.limit[discs] / size[discs]
            stiffness = self._stiffened(own, discs, trial / np.maximum(size, _TINY))
            way = -np.linalg.solve(stiffness, gradient)
            if np.abs(way).max() <= _STALLED * np.abs(u).max():
                return u, left, used
            resisted = self.stiffness @ way
            length, steep = 1.0, -float(way @ gradient)
            low, high, at_low, at_high = 0.0, 1.0, -steep, 0.0
            for _ in range(30):
                trial = self._trial(step, soft, u + length * way, last)
                gradient = held + length * resisted - self.sums @ self._given(step, soft, trial)
                slope = float(way @ gradient)
                if abs(slope) <= 0.5 * steep or (length == 1.0 and slope <= 0.0):
                    break
                if slope < 0.0:
                    low, at_low = length, slope
                else:
                    high, at_high = length, slope
                secant = at_low / (at_low - at_high)
                length = low + (high - low) * min(max(secant, 0.1), 0.9)
            u, held = u + length * way, held + length * resisted
        return u, float(np.abs(gradient).max()), _NEWTON

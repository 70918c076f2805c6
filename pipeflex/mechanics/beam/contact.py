"""Contact and dry friction of a single design: one strictly convex problem a step, so that it cannot cycle.

Let u be the movements of the pipe at its contacts and ``R + K u`` the forces that it takes to hold it there.  In a
step u minimises ``u'K u/2 + R'u`` plus the work of what the contacts give: a rest that can lift only pushes, a gap
gives nothing until it is closed, friction gives at most mu N (a disc in plan, a box where one direction is left).
The problem is solved by the method of multipliers; each inner problem is smooth and strictly convex, so Newton's
method with a line search on its energy ends at its one minimum, whatever the start.

References
----------
R. T. Rockafellar, Math. Oper. Res. 1 (1976) 97 (method of multipliers as a proximal-point algorithm);
L. Qi, J. Sun, Math. Program. 58 (1993) 353 (Newton's method for semismooth gradients);
A. Klarbring, Ing.-Arch. 56 (1986) 529 (incremental friction problem with given normal forces).
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pipeflex.mechanics.beam.compliance import Array, Indices

_NEWTON = 30
_MULTIPLIER = 200
_SOFT = 1e-3
_SOFTER, _SOFTEST = 10.0, 1e6
_EXACT = 1e-10
_ROUNDING = 1e-13
_GOOD = 1e-7
_STALLED = 1e-14


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
    pushes: NDArray[np.bool_]
    frictional: NDArray[np.bool_]
    partner: Indices


@dataclass(frozen=True, slots=True, eq=False)
class Balance:
    """Movements u (dof,) [m] and forces on the pipe (law,) [N] of a step; `left` [N] is not in balance."""

    u: Array
    force: Array
    left: float
    iterations: int
    exact: bool


def balance(laws: Laws, stiffness: Array, closed: Array, slid: Array, limit: Array, start: Balance) -> Balance:
    """Solve one step.

    Parameters
    ----------
    laws : what the contacts can give.
    stiffness : K, (dof, dof) [N/m]; closed : R, (dof,) [N].
    slid : (law,), where friction last let go [m]; 0 for holds.
    limit : (law,), greatest friction [N]; read where frictional.
    start : where to begin; the answer does not depend on it.
    """
    if not len(closed):
        return Balance(closed, closed, 0.0, 0, True)
    # counted from where the step begins: what sticks has not moved at all, and its stiff law loses no digits
    inner = _Inner(laws, stiffness, closed + stiffness @ start.u, slid - start.u[laws.dof], limit)
    u, force, total, soft = np.zeros_like(start.u), start.force, 0, _SOFT
    for _ in range(_MULTIPLIER):
        u, left, used = inner.minimum(u, force)
        total += used
        soft = min(soft * _SOFTER, _SOFTEST) if used == _NEWTON else max(soft / _SOFTER, _SOFT)
        previous, force = force, inner.force(u, force)
        change = float(np.abs(force - previous).max())
        accuracy = inner.accuracy(u, force)
        if change <= accuracy and used < _NEWTON:
            break
        inner.soften(soft)
    left = max(left, change)
    enough = 10.0 * accuracy + _GOOD * float(np.abs(force).max())
    return Balance(start.u + u, force, left, total, left <= enough)


class _Inner:
    """The smooth problem of one round: every law has some softness, and acts from its force of the last round."""

    def __init__(self, laws: Laws, stiffness: Array, closed: Array, slid: Array, limit: Array) -> None:
        self.laws, self.stiffness, self.closed, self.slid = laws, stiffness, closed, slid
        self.size = np.abs(stiffness)
        self.limit = np.where(laws.frictional, limit, np.inf)
        self.paired = laws.partner != np.arange(len(laws.dof))
        self.sums = np.zeros((len(closed), len(laws.dof)))
        self.sums[laws.dof, np.arange(len(laws.dof))] = 1.0
        self.soften(_SOFT)

    def soften(self, share: float) -> None:
        """Give every law a softness: a share of what the pipe itself gives there, all else held."""
        diagonal = self.stiffness.diagonal()[self.laws.dof]
        self.soft = share / np.maximum(diagonal, diagonal[self.laws.partner])
        self.whole = self.soft + self.laws.give
        self.dead = self.laws.gap / self.whole

    def accuracy(self, u: Array, force: Array) -> float:
        """What rounding and the wanted digits leave [N]."""
        return float(_ROUNDING * (self.size @ np.abs(u)).max() + _EXACT * max(np.abs(force).max(), 1e-9))

    def trial(self, u: Array, last: Array) -> Array:
        trial: Array = (self.soft * last - (u[self.laws.dof] - self.slid)) / self.whole
        return trial

    def force(self, u: Array, last: Array) -> Array:
        return self._given(self.trial(u, last))

    def _sizes(self, trial: Array) -> Array:
        if not self.paired.any():
            return np.abs(trial)
        return np.where(self.paired, np.hypot(trial, trial[self.laws.partner]), np.abs(trial))

    def _given(self, trial: Array) -> Array:
        size = self._sizes(trial)
        with np.errstate(divide="ignore", invalid="ignore"):
            kept = np.where(size > self.limit, self.limit / size, 1.0 - self.dead / size)
        kept = np.where((size <= self.dead) | (self.laws.pushes & (trial <= 0.0)), 0.0, kept)
        return kept * trial

    def _added(self, trial: Array) -> Array:
        """Stiffness that the laws add, (dof, dof)."""
        size = self._sizes(trial)
        full = (size > self.dead) & ~(self.laws.pushes & (trial <= 0.0)) & (size <= self.limit)
        added = np.diag(self.sums @ (full / self.whole))
        for i in np.flatnonzero(self.paired & (size > self.limit) & (self.limit > 0.0)):
            j = self.laws.partner[i]
            share = self.limit[i] / size[i] / self.whole[i]
            a, b = self.laws.dof[i], self.laws.dof[j]
            added[a, a] += share * (1.0 - (trial[i] / size[i]) ** 2)
            added[a, b] -= share * trial[i] * trial[j] / size[i] ** 2
        return added

    def minimum(self, u: Array, last: Array) -> tuple[Array, float, int]:
        """Newton's method from u; also the force left and the number of steps."""
        held = self.closed + self.stiffness @ u
        trial = self.trial(u, last)
        gradient = held - self.sums @ self._given(trial)
        for used in range(_NEWTON):
            left = float(np.abs(gradient).max())
            if left <= 0.3 * self.accuracy(u, last):
                return u, left, used
            step = -np.linalg.solve(self.stiffness + self._added(trial), gradient)
            if np.abs(step).max() <= _STALLED * np.abs(u).max():
                return u, left, used
            resisted = self.stiffness @ step
            length, steep = 1.0, -float(step @ gradient)
            low, high, at_low, at_high = 0.0, 1.0, -steep, 0.0
            for _ in range(30):
                trial = self.trial(u + length * step, last)
                gradient = held + length * resisted - self.sums @ self._given(trial)
                slope = float(step @ gradient)
                if abs(slope) <= 0.5 * steep or (length == 1.0 and slope <= 0.0):
                    break
                if slope < 0.0:
                    low, at_low = length, slope
                else:
                    high, at_high = length, slope
                secant = at_low / (at_low - at_high)
                length = low + (high - low) * min(max(secant, 0.1), 0.9)
            u, held = u + length * step, held + length * resisted
        return u, float(np.abs(gradient).max()), _NEWTON

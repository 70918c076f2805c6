"""Flexibility of one unbranched run in space between two ends: exact bends, supports, contact and friction.

run = assemble(corners, section, modulus=..., ...)     build and check, one design or a column of them
linear(run, states)                                    forces with every hold closed, all rows at once
influence(run).answer(states)                          the same for one run whose states alone change
settle(run, states)                                    gaps, lift-off and friction along a history, one design
moments(answer), movements(answer), residual(answer)   what follows from the forces

Everything is SI; z points up; axes are (state, component, item, row) with those that do not apply left out.
"""

from pipeflex.mechanics.beam.history import Settled, settle
from pipeflex.mechanics.beam.influence import Influence, influence
from pipeflex.mechanics.beam.parts import Break, End, Hold, PointWeight, Section, States, Support
from pipeflex.mechanics.beam.recover import (
    Moments,
    Movements,
    moments,
    movements,
    residual,
    support_movements,
)
from pipeflex.mechanics.beam.run import Run, assemble
from pipeflex.mechanics.beam.sweep import Answer, linear

__all__ = [
    "Answer",
    "Break",
    "End",
    "Hold",
    "Influence",
    "Moments",
    "Movements",
    "PointWeight",
    "Run",
    "Section",
    "Settled",
    "States",
    "Support",
    "assemble",
    "influence",
    "linear",
    "moments",
    "movements",
    "residual",
    "settle",
    "support_movements",
]

"""What a drawing shows of a beam answer: the hot and the cold shape, and quantities along the run."""

from typing import Final

import numpy as np

from pipeflex.mechanics.beam import Answer, linear, movements
from pipeflex.methods.basis import Basis
from pipeflex.methods.beam_model import Model, case_states
from pipeflex.methods.beam_stress import Range, Sections
from pipeflex.model.design import Design
from pipeflex.model.outcome import Along, Shape

FRACTIONS: Final = tuple(float(v) for v in np.linspace(0.0, 1.0, 9))
"""Where along every element the shape is taken."""


def shapes_of(design: Design, basis: Basis, model: Model, answer: Answer) -> tuple[Shape, ...]:
    """Movement along the run in every case, from the tie-in day that makes it greatest."""
    legs = tuple(int(leg) for leg in np.repeat(model.run.plan.leg, len(FRACTIONS)))
    if model.uniform:
        moved = movements(answer, FRACTIONS)
        each = [moved.movement[0] * g for g in basis.case_growth]
    else:
        states, _ = case_states(design, basis)
        moved = movements(linear(model.run, states), FRACTIONS)
        both = moved.movement.reshape(len(design.duty.cases), 2, *moved.movement.shape[1:])
        size = np.abs(both).max(axis=(2, 3, 4))
        each = [pair[int(s.argmax())] for pair, s in zip(both, size, strict=True)]
    return tuple(
        Shape(
            state=case.name,
            points=moved.position,
            movement=movement,
            leg=legs,
        )
        for case, movement in zip(design.duty.cases, each, strict=True)
    )


def stress_along(model: Model, sections: Sections, found: Range) -> tuple[Along, ...]:
    """S_E/S_A and the resultant moment at the start, middle and end of every element."""
    plan, run = model.run.plan, model.run
    count = len(plan.leg)
    bent = plan.bend >= 0
    length = np.empty((count, run.rows))
    length[~bent] = (run.cuts[plan.last] - run.cuts[plan.first])[~bent]
    length[bent] = (plan.part[:, None] * run.radius[plan.bend] * run.angle[plan.bend])[bent]
    start = np.concatenate([np.zeros((1, run.rows)), np.cumsum(length, axis=0)[:-1]])
    distance = np.stack([start, start + length / 2, start + length], axis=1).reshape(-1, run.rows)

    def along(values: np.ndarray) -> np.ndarray:
        return values.transpose(1, 0, 2).reshape(-1, run.rows)

    m = found.all_moments
    resultant = np.sqrt(m["M_i"] ** 2 + m["M_o"] ** 2 + m["M_t"] ** 2)
    return (
        Along(key="ratio", title="S_E / S_A", kind="ratio", distance=distance, value=along(found.every / sections.S_A)),
        Along(key="moment", title="resultant moment, range", kind="moment", distance=distance, value=along(resultant)),
    )

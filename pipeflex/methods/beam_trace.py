"""The beam solution as a checker can follow it: flexibility of the run, free growth, forces that close the gap."""

import numpy as np

from pipeflex.mechanics.beam import Answer
from pipeflex.mechanics.beam.compliance import yielding
from pipeflex.mechanics.beam.elements import chunks, elements, holds, members
from pipeflex.methods.basis import Basis
from pipeflex.methods.beam_model import Model
from pipeflex.model.design import Design
from pipeflex.trace import Calc, Matrix

_NOTHING = 1e-11
"""Part of the greatest entry below which an entry is what rounding left of nothing."""
_WORDS = ("force along", "force across", "force up", "moment about along", "moment about across", "moment about up")


def show_solution(design: Design, basis: Basis, model: Model, answer: Answer, calc: Calc) -> None:
    """Ledger of the solution: X = solve(D, u), with every entry of D and u.

    D_ij is the movement at restraint i by a unit force at restraint j with the first end held, u_i the movement there
    by the free growth of the range. Shown where the ends are rigid and every state is one shape times its growth.
    """
    if not calc.tracing or not model.uniform:
        return
    run = model.run
    if any(np.isfinite(np.asarray(s, float)).any() for end in run.ends for s in end.stiffness):
        return
    made = elements(run, chunks(run)[0])
    member = members(made, run)
    one = np.broadcast_to(np.eye(6)[:, :, None, None], (6, 6, len(run.plan.leg), 1))
    each = yielding(member, one)[..., 0].swapaxes(0, 1)
    C = np.concatenate([np.zeros((6, 6, 1)), np.cumsum(each, axis=2)], axis=2)
    grown = made.shape.start[..., 0] - made.shape.start[:, :1, 0]
    grown = np.concatenate([grown, made.end], axis=1)
    held = holds(run, made)
    last = C.shape[2] - 1
    lines = [held.line[:, i, 0] for i in range(held.line.shape[1])] + list(_at_end(made.end[:, 0]))
    stations = [*held.station.tolist(), *([last] * 6)]
    soft = [*held.softness[:, 0].tolist(), *([0.0] * 6)]
    names = [run.supports[s].tag for s in held.support.tolist()] + [f"last end, {w}" for w in _WORDS]
    alive = [i for i, s in enumerate(soft) if np.isfinite(s)]
    D = np.array([
        [lines[i] @ C[:, :, min(stations[i], stations[j])] @ lines[j] + (soft[i] if i == j else 0.0) for j in alive]
        for i in alive
    ])  # fmt: skip
    u = np.array([lines[i][:3] @ grown[:, stations[i]] for i in alive]) * float(basis.e[0])
    X = np.linalg.solve(D, u)
    D, u, X = (np.where(np.abs(v) > _NOTHING * np.abs(v).max(), v, 0.0) for v in (D, u, X))
    labels = [names[i] for i in alive]
    heads = tuple(f"D_{j + 1}" for j in range(len(alive)))
    calc.say("Flexibility of the run with its first end held; guides and line stops closed, no friction")
    calc.show(
        Matrix(
            words="flexibility D of the run at its restraints, in SI units",
            equation="D_ij = h_i·C·h_j, C summed from the first end to the nearer of the two",
            ref="unit-load method; bends as curved beams with flexibility factor k", heads=heads,
            kinds=(None,) * len(heads), rows=tuple((n, tuple(map(float, r))) for n, r in zip(labels, D, strict=True)),
        )
    )  # fmt: skip
    calc.show(
        Matrix(
            words="free movement u at the restraints over the whole range, and the forces X of the pipe there (SI)",
            equation="X = solve(D, u)", ref="compatibility at every restraint", heads=("u", "X"), kinds=(None, None),
            rows=tuple((n, (float(a), float(b))) for n, a, b in zip(labels, u, X, strict=True)),
        )
    )  # fmt: skip


def _at_end(point: np.ndarray) -> np.ndarray:
    """Unit wrenches of the six directions at the last end about the first corner, (6, 6)."""
    lines = np.zeros((6, 6))
    lines[:3, :3] = np.eye(3)
    lines[3:, 3:] = np.eye(3)
    lines[:3, 3:] = np.cross(point, np.eye(3))
    return lines

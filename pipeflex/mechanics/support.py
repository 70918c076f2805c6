"""What supports and anchors feel: friction, least design loads, the room that a hot line takes."""

from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from pipeflex.trace import formula


@formula("F_mu = mu*(w*L_mu + W_c)", ref="Coulomb friction of the weight on its supports")
def friction_force(mu: Any, w: Any, L_mu: Any, W_c: Any = 0.0) -> Any:
    """Friction [N] of a length L_mu [m] of line that slides on its supports, with weights W_c [N] on it."""
    return mu * (w * L_mu + W_c)


@formula("F_a = F_th + F_mu", ref="equilibrium: friction opposes the movement, the anchor takes both")
def anchor_force(F_th: Any, F_mu: Any) -> Any:
    """Force [N] of the pipe on the anchor."""
    return F_th + F_mu


@formula("F_min = max(F_least, 0.1*w*L)", ref="common practice: 2 kN, or 10 % of the weight of the line")
def least_anchor_load(F_least: Any, w: Any, L: Any) -> Any:
    """Least design load [N] of an anchor of a line of weight w [N/m] and length L [m]."""
    return np.maximum(F_least, 0.1 * w * L)


@formula(
    "H = l*(1 + e) + D_o/2 + t_ins + t_clad",
    ref="geometry: from the line's centre to the outside of the insulation",
)
def room_taken(l: Any, e: Any, D_o: Any, t_ins: Any, t_clad: Any) -> Any:
    """How far [m] a leg of length l [m] reaches beside the line's centre, hot and insulated."""
    return l * (1 + e) + D_o / 2 + t_ins + t_clad


_STEPS: Final = ((10e3, 0.5e3), (50e3, 1e3), (np.inf, 5e3))


def rounded_up(load: Any) -> NDArray[np.float64]:
    """Anchor load [N] rounded up in size to 0.5 kN below 10 kN, 1 kN below 50 kN, 5 kN above (common practice)."""
    size = np.abs(load)
    step = np.select([size < _STEPS[0][0], size < _STEPS[1][0]], [_STEPS[0][1], _STEPS[1][1]], _STEPS[2][1])
    rounded: NDArray[np.float64] = np.copysign(np.ceil(np.round(size / step, 9)) * step, load)
    return rounded

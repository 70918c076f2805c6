"""The guided cantilever, and the developed-length rule that shares its constant.

Right-angled legs only. All legs square to a movement share it: the force along it is the same in each, so each
takes the part l^3/sum(l^3).
"""

from typing import Any

import numpy as np

from pipeflex.trace import formula

_KELLOGG = "guided cantilever: M. W. Kellogg Co., Design of Piping Systems, 2nd ed. (1956), from memory, confirm"


@formula("delta = y*l**3/c_3", ref="equal force in all parallel legs, each as stiff as 12 E I/l³")
def shared_movement(y: Any, l: Any, c_3: Any) -> Any:
    """Part [m] of the movement y [m] that a leg of length l [m] takes; c_3 is the sum of l^3 over all of them."""
    return y * l**3 / c_3


@formula("S = 3*E_a*D_o*delta/l**2", ref=_KELLOGG)
def cantilever_stress(E_a: Any, D_o: Any, delta: Any, l: Any) -> Any:
    """Bending stress [Pa] of a leg whose ends are kept parallel while one moves square to it by delta [m]."""
    return 3 * E_a * D_o * delta / l**2


@formula("F = R_E*12*E_a*I*delta/l**3", ref=_KELLOGG)
def cantilever_force(R_E: Any, E_a: Any, I: Any, delta: Any, l: Any) -> Any:
    """Force [N] that moves the guided end; R_E brings the modulus at 21 degC to that of the state."""
    return R_E * 12 * E_a * I * delta / l**3


@formula("M_leg = F*l/2", ref=_KELLOGG)
def cantilever_moment(F: Any, l: Any) -> Any:
    """Moment [N m] at each end of the leg."""
    return F * l / 2


@formula("l_req = sqrt(3*E_a*D_o*delta/S_A)", ref=_KELLOGG)
def leg_needed(E_a: Any, D_o: Any, delta: Any, S_A: Any) -> Any:
    """Leg [m] at which the stress of the guided cantilever reaches S_A [Pa]."""
    return np.sqrt(3 * E_a * D_o * delta / S_A)


@formula(
    "g_req = 1.5*sqrt(3*E_a*D_o*e*l/S_A)",
    ref="limit of the rule for an L or Z, fitted to exact beam solutions; l is the leg square to the guided one",
)
def guide_distance_needed(E_a: Any, D_o: Any, e: Any, l: Any, S_A: Any) -> Any:
    """Least distance [m] from corner to first guide at which the rule may be trusted for an L or Z."""
    return 1.5 * np.sqrt(3 * E_a * D_o * e * l / S_A)


@formula(
    "L_req = sqrt(3*E_a*D_o*delta_tot/S_rule)",
    ref="developed-length rule of copper and heating handbooks (Copper Tube Handbook, expansion loops and offsets)",
)
def developed_length(E_a: Any, D_o: Any, delta_tot: Any, S_rule: Any) -> Any:
    """Developed length [m] of a loop (two legs and the width) by the handbook rule; safe only at its low stress."""
    return np.sqrt(3 * E_a * D_o * delta_tot / S_rule)


@formula("L_dev = 2*l + L_2", ref="two legs and the width of the loop")
def loop_developed(l: Any, L_2: Any) -> Any:
    """Developed length [m] of a loop of leg l and width L_2 [m]."""
    return 2 * l + L_2

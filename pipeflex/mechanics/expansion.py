"""Growth of a run between two temperatures, and what happens to a run that cannot grow."""

from typing import Any

import numpy as np

from pipeflex.trace import formula

_HOOKE = "Hooke's law, axial stress with the hoop stress of the pressure"


@formula("e = e_hot - e_cold", ref="ASME B31.3 para. 319.2.3: the whole range, coldest to hottest")
def range_strain(e_hot: Any, e_cold: Any) -> Any:
    """Growth per length between coldest and hottest [-], both counted from the table's reference temperature."""
    return e_hot - e_cold


@formula(
    "e = e_hot - e_cold + e_P", ref="ASME B31.3 para. 319.2.3, with the pressure elongation on top: an upper bound"
)
def range_strain_under_pressure(e_hot: Any, e_cold: Any, e_P: Any) -> Any:
    """Growth per length between coldest and hottest [-], the greatest pressure elongation added."""
    return e_hot - e_cold + e_P


@formula("e = e_1 - e_0", ref="growth counted from the installed temperature")
def state_strain(e_1: Any, e_0: Any) -> Any:
    """Growth per length from the installed temperature to that of a state [-]; negative for a colder state."""
    return e_1 - e_0


@formula("delta_tot = e*X", ref="definition of the growth per length")
def free_growth(e: Any, X: Any) -> Any:
    """Growth [m] of a run of length X [m]."""
    return e * X


@formula("e_P = P*D_i**2*(1 - 2*nu)/(E_a*(D_o**2 - D_i**2))", ref="Lamé's thick cylinder with closed ends")
def pressure_elongation(P: Any, D_i: Any, nu: Any, E_a: Any, D_o: Any) -> Any:
    """Growth per length by internal gauge pressure [-], the ends closed and free to move."""
    return P * D_i**2 * (1 - 2 * nu) / (E_a * (D_o**2 - D_i**2))


@formula("S_H = P*D_o/(2*T_w)", ref="hoop stress by the outside diameter, thin wall")
def hoop_stress(P: Any, D_o: Any, T_w: Any) -> Any:
    """Hoop stress [Pa] of internal gauge pressure."""
    return P * D_o / (2 * T_w)


@formula("S_x = nu*S_H - E_m*e", ref=_HOOKE)
def held_stress(nu: Any, S_H: Any, E_m: Any, e: Any) -> Any:
    """Axial stress [Pa] of a run held rigidly at both ends, tension positive."""
    return nu * S_H - E_m * e


@formula("F_r = A*S_x", ref="definition of stress")
def held_thrust(A: Any, S_x: Any) -> Any:
    """Axial force [N] of the metal of a run held rigidly, tension positive."""
    return A * S_x


@formula("S_eq = sqrt(S_H**2 - S_H*S_x + S_x**2)", ref="von Mises, two principal stresses")
def equivalent_stress(S_H: Any, S_x: Any) -> Any:
    """Equivalent stress [Pa] of hoop and axial stress."""
    return np.sqrt(S_H**2 - S_H * S_x + S_x**2)


@formula("F_cr = pi**2*E_m*I/L_g**2", ref="Euler's column, pinned at the guides")
def column_buckling(E_m: Any, I: Any, L_g: Any) -> Any:
    """Thrust [N] at which a straight run would buckle between guides L_g [m] apart; no crookedness counted."""
    return np.pi**2 * E_m * I / L_g**2

"""Section and weight of a pipe. Nominal dimensions (ASME B31.3 para. 319.3.5)."""

from typing import Any

import numpy as np

from pipeflex.trace import formula

STANDARD_GRAVITY = 9.80665
"""Standard acceleration of gravity [m/s2], 3rd CGPM (1901)."""

_GEOMETRY = "geometry of the annulus"
_MASS = "geometry and density"


@formula("D_i = D_o - 2*T_w", ref=_GEOMETRY)
def inside_diameter(D_o: Any, T_w: Any) -> Any:
    """Inside diameter [m] of a pipe of outside diameter and wall [m]."""
    return D_o - 2 * T_w


@formula("A = pi/4*(D_o**2 - D_i**2)", ref=_GEOMETRY)
def metal_area(D_o: Any, D_i: Any) -> Any:
    """Metal area [m2]."""
    return np.pi / 4 * (D_o**2 - D_i**2)


@formula("I = pi/64*(D_o**4 - D_i**4)", ref=_GEOMETRY)
def second_moment(D_o: Any, D_i: Any) -> Any:
    """Second moment of area [m4]."""
    return np.pi / 64 * (D_o**4 - D_i**4)


@formula("Z = 2*I/D_o", ref=_GEOMETRY)
def section_modulus(I: Any, D_o: Any) -> Any:
    """Section modulus [m3]."""
    return 2 * I / D_o


@formula("m_p = rho*A", ref=_MASS)
def metal_mass(rho: Any, A: Any) -> Any:
    """Mass of the metal per length [kg/m]."""
    return rho * A


@formula("m_c = rho_c*pi/4*D_i**2", ref=_MASS)
def contents_mass(rho_c: Any, D_i: Any) -> Any:
    """Mass of the contents per length [kg/m]."""
    return rho_c * np.pi / 4 * D_i**2


@formula("m_ins = pi*t_ins*(D_o + t_ins)*rho_ins + pi*t_clad*(D_o + 2*t_ins + t_clad)*rho_clad", ref=_MASS)
def covering_mass(t_ins: Any, D_o: Any, rho_ins: Any, t_clad: Any, rho_clad: Any) -> Any:
    """Mass of insulation and cladding per length [kg/m]; a bare pipe has a cladding of no thickness."""
    return np.pi * t_ins * (D_o + t_ins) * rho_ins + np.pi * t_clad * (D_o + 2 * t_ins + t_clad) * rho_clad


@formula("w = (m_p + m_c + m_ins)*g", ref="standard gravity, 3rd CGPM (1901)")
def line_weight(m_p: Any, m_c: Any, m_ins: Any, g: Any = STANDARD_GRAVITY) -> Any:
    """Weight per length [N/m]."""
    return (m_p + m_c + m_ins) * g

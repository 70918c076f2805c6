"""ASME B31.3 Process Piping: displacement stress range, cycles, screening.

Texts from memory, confirm against the licensed standard; where a clause was read, its test says so.
"""

import dataclasses
from functools import cache
from typing import Any, Final

import numpy as np

from pipeflex.codes.b31_3_flexibility import BEND_FACTORS, COLD_SPRING, EXPANSION_STRESS, FIXED, SUSTAINED_STRESS
from pipeflex.model.duty import PipingCode
from pipeflex.model.fields import FrozenMap
from pipeflex.trace import Choice, formula

_2018: Final = "ASME B31.3-2018 para. 302.3.5(d)"
_2022: Final = "ASME B31.3-2022 para. 302.3.5(d)"
_BOTH: Final = "ASME B31.3-2018 and 2022, para. 302.3.5(d)"
_SCREEN: Final = "ASME B31.3-2018 and 2022, para. 319.4.1(c)"

LEAST_F: Final = 0.15
"""Least stress range factor."""

S_CAP: Final = 138e6
"""Greatest S_c and S_h where f exceeds 1 [Pa]: 20 ksi, printed 138 MPa."""

SCREENING_CONSTANT: Final = 0.208
"""208 000 (mm/m)2, printed in millimetres and metres; the U.S. form has 30 (in/ft)2."""


@formula("f = max(f_min, min(f_m, 6.0*N**-0.2))", ref=f"{_2018} eq. (1c)")
def range_factor_2018(N: Any, f_m: Any, f_min: Any = LEAST_F) -> Any:
    """Stress range factor, editions 2004 to 2020.

    N : equivalent full cycles, at least 1. f_m : 1.0, or 1.2 where para. 302.3.5(d) permits.
    """
    return np.maximum(f_min, np.minimum(f_m, 6.0 * np.asarray(N) ** -0.2))


@formula("f = max(f_min, min(f_m, 20*N**-0.333))", ref=f"{_2022} eq. (1c), the exponent as printed")
def range_factor_2022(N: Any, f_m: Any, f_min: Any = LEAST_F) -> Any:
    """Stress range factor of the 2022 edition."""
    return np.maximum(f_min, np.minimum(f_m, 20 * np.asarray(N) ** -0.333))


@formula("S_c_used = min(S_c, S_cap)", ref=f"{_BOTH}: at most 138 MPa (20 ksi) where f exceeds 1")
def cold_allowable_capped(S_c: Any, S_cap: Any = S_CAP) -> Any:
    """S_c [Pa] as used where f exceeds 1."""
    return np.minimum(S_c, S_cap)


@formula("S_c_used = S_c", ref=_BOTH)
def cold_allowable(S_c: Any) -> Any:
    """S_c [Pa] as used where f does not exceed 1."""
    return S_c


@formula("S_h_used = min(S_h, S_cap)", ref=f"{_BOTH}: at most 138 MPa (20 ksi) where f exceeds 1")
def hot_allowable_capped(S_h: Any, S_cap: Any = S_CAP) -> Any:
    """S_h [Pa] as used where f exceeds 1."""
    return np.minimum(S_h, S_cap)


@formula("S_h_used = S_h", ref=_BOTH)
def hot_allowable(S_h: Any) -> Any:
    """S_h [Pa] as used where f does not exceed 1."""
    return S_h


@formula("S_A = f*(1.25*S_c_used + 0.25*S_h_used)", ref=f"{_BOTH} eq. (1a)")
def allowable_range(f: Any, S_c_used: Any, S_h_used: Any) -> Any:
    """Allowable displacement stress range [Pa]."""
    return f * (1.25 * S_c_used + 0.25 * S_h_used)


@formula("S_Ab = S_A", ref=f"{_BOTH}: eq. (1a) stays where S_L is not below S_h")
def range_without_unused(S_A: Any) -> Any:
    """Allowable range [Pa] where no sustained stress is left unused."""
    return S_A


@formula("S_Ab = f*(1.25*(S_c_used + S_h_used) - S_L)", ref=f"{_BOTH} eq. (1b)")
def range_with_unused_sustained(f: Any, S_c_used: Any, S_h_used: Any, S_L: Any) -> Any:
    """Allowable displacement stress range [Pa] with the unused sustained stress added.

    S_L [Pa] : sustained stress at the same point in the worst support state, not above S_h.
    """
    return f * (1.25 * (S_c_used + S_h_used) - S_L)


@formula("N = N_E + r_i**5*N_i", ref="ASME B31.3-2018 para. 302.3.5(d) eq. (1d)")
def equivalent_cycles_2018(N_E: Any, r_i: Any, N_i: Any) -> Any:
    """Equivalent full cycles of N_E full ones and N_i of the part r_i of the range, editions 2004 to 2020."""
    return N_E + r_i**5 * N_i


@formula("N = N_E + r_i**3*N_i", ref="ASME B31.3-2022 para. 302.3.5(d) eq. (1d)")
def equivalent_cycles_2022(N_E: Any, r_i: Any, N_i: Any) -> Any:
    """Equivalent full cycles by the slope of the 2022 edition."""
    return N_E + r_i**3 * N_i


@formula("q = D_o*y/(L_dev - U_a)**2", ref=f"{_SCREEN} eq. (16)")
def screening_value(D_o: Any, y: Any, L_dev: Any, U_a: Any) -> Any:
    """Screening value of one run of one size between two anchors, nothing between them.

    y : resultant growth to be absorbed [m]. L_dev : developed length [m]. U_a : distance of the anchors [m].
    """
    return D_o * y / (L_dev - U_a) ** 2


@formula("K_1 = K_code*S_A/E_a", ref=f"{_SCREEN}: 208 000 S_A/E_a (mm/m)2")
def greatest_screening_value(S_A: Any, E_a: Any, K_code: Any = SCREENING_CONSTANT) -> Any:
    """Greatest screening value at which no formal analysis is asked."""
    return K_code * S_A / E_a


def severe_cyclic(S_E: Any, S_A: Any, N: Any) -> Any:
    """Whether cyclic conditions are severe: S_E above 0.8 S_A and N above 7000 (ASME B31.3-2018 para. 300.2)."""
    return (S_E > 0.8 * S_A) & (np.asarray(N) > 7000)


_CAPS: Final = (
    Choice("f > 1", cold_allowable_capped, cold_allowable),
    Choice("f > 1", hot_allowable_capped, hot_allowable),
)
_CONFIRM: Final = "Clauses from memory: confirm against the licensed {}."


@cache
def editions() -> tuple[PipingCode, ...]:
    """The editions held here."""
    with_sustained = Choice("S_h > S_L", range_with_unused_sustained, range_without_unused)
    b31_3_2018 = PipingCode(
        key="B31.3-2018",
        title="ASME B31.3 Process Piping",
        edition="2018",
        stress_tables=("stress/asme_b31_3_2018", "stress/asme_b31_3_2008", "stress/copper_tube_handbook"),
        cycles_exponent=5.0,
        allowable_range=(range_factor_2018, *_CAPS, allowable_range),
        allowable_range_with_sustained=(with_sustained,),
        screening=(screening_value, greatest_screening_value),
        bend_factors=FrozenMap(BEND_FACTORS),
        expansion_stress=EXPANSION_STRESS,
        sustained_stress=SUSTAINED_STRESS,
        cold_spring=COLD_SPRING,
        severe_cyclic=severe_cyclic,
        remarks=(_CONFIRM.format("ASME B31.3-2018"),),
        options=FrozenMap(
            {
                "ferrous_strength": 517.2e6,
                "ferrous_temperature": 371 + 273.15,
                **{f"i {kind}": i for kind, i in FIXED.items()},
            }
        ),
    )
    b31_3_2022 = dataclasses.replace(
        b31_3_2018,
        key="B31.3-2022",
        edition="2022",
        stress_tables=("stress/asme_b31_3_2022", *b31_3_2018.stress_tables),
        cycles_exponent=3.0,
        allowable_range=(range_factor_2022, *_CAPS, allowable_range),
        remarks=(_CONFIRM.format("ASME B31.3-2022"),),
    )
    return b31_3_2018, b31_3_2022

"""Range factor, equivalent cycles, allowable range, screening, moduli and allowable stresses of process piping.

ASME B31.3, Process Piping: para. 302.3.5(d) with Fig. 302.3.5 and eqs. (1a) to (1d), editions 2004 to 2020 (read)
and 2022 (from memory); para. 319.4.1(c) (from memory); Table C-6 of 2010 (read); Tables A-1 and C-1 (from memory).
The tests named `transcription` compare two recollections of the same page: they guard against slips of the
keyboard and are no check from outside.
"""

import pytest

from pipeflex.codes import code
from pipeflex.codes.b31_3 import (
    equivalent_cycles_2018,
    equivalent_cycles_2022,
    greatest_screening_value,
    range_factor_2018,
    range_factor_2022,
    range_with_unused_sustained,
)
from pipeflex.data import lookup
from pipeflex.present import shown
from pipeflex.trace import PLAIN, follow

from .ask import KSI, MSI, curve_value, strain


def test_sr_equivalent_cycles():
    """Eqs. (1c) and (1d): 5000 full cycles and 20 000 of 0.6 of the range, f_m 1.2: N = 6555.2, f = 1.0347."""
    N = equivalent_cycles_2018(N_E=5000, r_i=0.6, N_i=20000)
    assert pytest.approx(6555.2, rel=1e-9) == N
    assert range_factor_2018(N=N, f_m=1.2) == pytest.approx(1.03474673, rel=1e-8)


def test_sr_fm_gate_a106():
    """A106 B at 500 degF, 2000 cycles: f = 1.2, S_c and S_h at most 20 ksi, S_A = 35.7 ksi by eq. (1a)."""
    pool = {"N": 2000.0, "f_m": 1.2, "S_c": 20.0 * KSI, "S_h": 19.0 * KSI}
    allowable = follow(code("B31.3-2018").allowable_range, pool, PLAIN)
    assert pool["f"] == 1.2
    assert allowable == pytest.approx(35.7 * KSI, abs=0.01 * KSI)


def test_sr_eq_1b_transcription():
    """Eq. (1b): 1.25 (20 + 17.9) - 6 = 41.375 ksi."""
    allowable = range_with_unused_sustained(f=1.0, S_c_used=20 * KSI, S_h_used=17.9 * KSI, S_L=6 * KSI)
    assert allowable == pytest.approx(41.375 * KSI, abs=0.001 * KSI)


def test_sr_cycles_2018_transcription():
    """1000 full cycles and a million of half the range: N = 32 250, f = 0.752."""
    N = equivalent_cycles_2018(N_E=1000, r_i=0.5, N_i=1e6)
    assert pytest.approx(32250) == N
    assert range_factor_2018(N=N, f_m=1.0) == pytest.approx(0.752, abs=0.0005)


def test_sr_cycles_2022_transcription():
    """The same by the slope of 2022: N = 126 000, f = 0.400."""
    N = equivalent_cycles_2022(N_E=1000, r_i=0.5, N_i=1e6)
    assert pytest.approx(126000) == N
    assert range_factor_2022(N=N, f_m=1.0) == pytest.approx(0.400, abs=0.002)


@pytest.mark.parametrize("key", ["B31.3-2018", "B31.3-2022"])
def test_cycles_go_with_the_slope_of_f(key):
    """Equivalent damage: N cycles of range r count as r**n N full ones where f falls as N**(-1/n)."""
    factor, n = {"B31.3-2018": (range_factor_2018, 5), "B31.3-2022": (range_factor_2022, 3)}[key]
    assert code(key).cycles_exponent == n
    assert factor(N=1e5, f_m=1.0) / factor(N=1e4, f_m=1.0) == pytest.approx(10 ** (-1 / n), rel=0.001)


def test_screen_K1_transcription():
    """208 000 S_A/E_a in (mm/m)2, 30 S_A/E_a in (in/ft)2: S_A/E_a = 0.001; the two agree to 0.2 %."""
    K_1 = greatest_screening_value(S_A=29.0 * KSI, E_a=29000.0 * KSI)
    assert shown(K_1, "screening value") == pytest.approx(208.0, rel=1e-9)
    assert shown(K_1, "screening value", "us") == pytest.approx(0.03, rel=0.002)


@pytest.mark.parametrize(("at", "msi"), [("500 degF", 25.8), ("1000 degF", 22.8)])
@pytest.mark.parametrize("key", ["TP304", "TP316L"])
def test_modulus_austenitic_c6(key, at, msi):
    """Table C-6, austenitic steels; ASME B31.1-1995 agrees."""
    assert curve_value(lookup.modulus, key, at, expansion="older") == pytest.approx(msi * MSI, abs=0.05 * MSI)


@pytest.mark.parametrize(
    ("at", "ksi"), [("400 degF", 19.9), ("500 degF", 19.0), ("600 degF", 17.9), ("700 degF", 16.7)]
)
def test_allow_a106b_b313_transcription(at, ksi):
    """Table A-1, A106 B, 2012 to 2020."""
    allowable = lookup.allowable(code("B31.3-2018").stress_tables, heated_joint=True)
    assert curve_value(allowable, "A106-B", at) == pytest.approx(ksi * KSI, abs=0.05 * KSI)


@pytest.mark.parametrize(("at", "ksi"), [("500 degF", 18.9), ("600 degF", 17.3), ("650 degF", 17.0)])
def test_allow_a106b_older_transcription(at, ksi):
    """Table A-1, A106 B, to about 2008."""
    allowable = lookup.allowable(("stress/asme_b31_3_2008",), heated_joint=True)
    assert curve_value(allowable, "A106-B", at) == pytest.approx(ksi * KSI, abs=0.05 * KSI)


@pytest.mark.parametrize(
    ("material", "to", "inches"), [("A106-B", "500 degF", 3.62), ("TP304", "-325 degF", -3.85)],
    ids=["cs-500F", "ss-m325F"],
)  # fmt: skip
def test_growth_older_table_transcription(material, to, inches):
    """Table C-1 to 2012, total expansion from 70 degF in inches per 100 ft."""
    e = strain(material, "70 degF", to, expansion="older")
    assert shown(e, "strain", "us") == pytest.approx(inches, abs=0.005)

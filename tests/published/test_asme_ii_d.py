"""Expansion and modulus of the ASME material tables.

ASME Boiler and Pressure Vessel Code, Section II, Materials, Part D, Properties: Customary edition of 2001 and
Metric edition of the 2010 era, Table TE-1 (thermal expansion of ferrous materials), Table TM-1 (moduli of
elasticity of ferrous materials). Read.
"""

import numpy as np
import pytest

from pipeflex.data import lookup
from pipeflex.data.tables import table
from pipeflex.mechanics.expansion import free_growth
from pipeflex.units import si

from .ask import FT, IN, curve_value, growth, strain

LAST_DIGIT = 0.06 * IN  # totals in inches per 100 ft are printed to one decimal, coefficients to two figures


def test_growth_te1_g1_400F():
    """TE-1 group 1, 100 ft from 70 to 400 degF: 2.8 in, mean coefficient 7.1e-6/degF."""
    assert growth("A106-B", "100 ft", "70 degF", "400 degF") == pytest.approx(2.8 * IN, abs=LAST_DIGIT)
    assert strain("A106-B", "70 degF", "400 degF") / 330 == pytest.approx(7.1e-6, abs=0.05e-6)


def test_growth_te1_9cr_600F():
    """TE-1, 9Cr-1Mo, 100 ft from 70 to 600 degF: 4.1 in, mean coefficient 6.5e-6/degF."""
    assert growth("P91", "100 ft", "70 degF", "600 degF") == pytest.approx(4.1 * IN, abs=LAST_DIGIT)
    assert strain("P91", "70 degF", "600 degF") / 530 == pytest.approx(6.5e-6, abs=0.05e-6)


def test_growth_te1_g2_500F():
    """TE-1 group 2, 100 ft from 70 to 500 degF: 4.0 in, mean coefficient 7.7e-6/degF."""
    held = table("expansion/asme_te1_us")
    alpha = np.interp(si("500 degF", "temperature"), *held.curve("group_2"))
    assert alpha * 5 / 9 == pytest.approx(7.7e-6, abs=0.05e-6)
    e = alpha * (si("500 degF", "temperature") - held.reference_temperature)
    assert free_growth(e=e, X=100 * FT) == pytest.approx(4.0 * IN, abs=LAST_DIGIT)


def test_growth_si_cs_50m_200C():
    """TE-1 metric, carbon steel, 50 m from 20 to 200 degC: mean coefficient 12.7e-6/K, 114.3 mm."""
    assert strain("A106-B", "20 degC", "200 degC") / 180 == pytest.approx(12.7e-6, abs=0.05e-6)
    assert growth("A106-B", "50 m", "20 degC", "200 degC") == pytest.approx(0.1143, abs=0.6e-3)


def test_growth_us_si_consistency():
    """TE-1 group 1 at 392 degF: the customary and the metric column agree on 12.7e-6/K."""
    columns = [table(f"expansion/asme_te1_{c}").curve("group_1") for c in ("us", "metric")]
    for t, alpha in columns:
        assert np.interp(si("392 degF", "temperature"), t, alpha) == pytest.approx(12.7e-6, abs=0.1e-6)


@pytest.mark.parametrize(("at", "gpa"), [("25 degC", 202), ("200 degC", 192), ("300 degC", 185), ("400 degC", 171)])
def test_modulus_cs_si(at, gpa):
    """TM-1 metric, carbon steel with at most 0.30 % carbon."""
    assert curve_value(lookup.modulus, "A106-B", at) == pytest.approx(gpa * 1e9, abs=0.5e9)


def test_modulus_cs_interp():
    """TM-1 metric at 225 degC, half way between 192 and 189 GPa."""
    assert curve_value(lookup.modulus, "A106-B", "225 degC") == pytest.approx(190.5e9, abs=0.5e9)

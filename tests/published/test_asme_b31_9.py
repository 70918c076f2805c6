"""Growth and modulus of building services piping, and the screening rule in its two unit systems.

ASME B31.9, Building Services Piping, Table 919.3.1 (thermal expansion data) and para. 919.4.1. Read.
"""

import math

import pytest

from pipeflex.codes.b31_3 import screening_value
from pipeflex.data.tables import table
from pipeflex.mechanics.expansion import free_growth
from pipeflex.present import shown
from pipeflex.units import si

from .ask import FT, IN, growth, growth_by

LAST_DIGIT = 0.013 * IN  # printed to 0.01 in; the coefficient is a mean over the table's whole range


def test_growth_b319_copper_125F():
    """Copper C12200, 100 ft from 70 to 125 degF: 0.63 in, by the current coefficients."""
    assert growth("copper annealed", "100 ft", "70 degF", "125 degF") == pytest.approx(0.63 * IN, abs=LAST_DIGIT)


@pytest.mark.parametrize(
    ("key", "to", "inches"),
    [("PVC 1220", "50 degF", -0.84), ("PE 3406", "100 degF", 2.16), ("PP 1110", "100 degF", 1.73)],
    ids=["pvc1220-50F", "pe3406-100F", "pp1110-100F"],
)
def test_growth_b319_plastics(key, to, inches):
    """100 ft of plastic pipe from 70 degF."""
    held = table("plastics/asme_b31_9")
    alpha = held.numbers("mean_coefficient")[held.find(key=key)]
    e = alpha * (si(to, "temperature") - si("70 degF", "temperature"))
    assert free_growth(e=e, X=100 * FT) == pytest.approx(inches * IN, abs=LAST_DIGIT)


@pytest.mark.parametrize(
    ("coefficient", "to", "inches"),
    [
        ("9.5 uin/(in*degF)", "125 degF", 0.63),
        ("10.4 uin/(in*degF)", "0 degF", -0.87),
        ("5.97 uin/(in*degF)", "125 degF", 0.39),
        ("12.69 uin/(in*degF)", "125 degF", 0.85),
    ],
    ids=["copper-125F", "redbrass-0F", "ductile-125F", "al-125F"],
)
def test_growth_b319_by_the_coefficient(coefficient, to, inches):
    """100 ft from 70 degF, by the mean coefficient that the table prints beside the totals."""
    assert growth_by(coefficient, "100 ft", "70 degF", to) == pytest.approx(inches * IN, abs=LAST_DIGIT)


def test_modulus_cpvc():
    """CPVC 4120: 0.42 Msi, which is 2.896 GPa."""
    held = table("plastics/asme_b31_9")
    modulus = held.numbers("modulus")[held.find(key="CPVC 4120")]
    assert modulus == pytest.approx(2.896e9, rel=0.0005)
    assert shown(modulus, "modulus", "us") == pytest.approx(0.42, rel=1e-9)


def test_screen_units():
    """Para. 919.4.1 prints its limit as 0.03 (in*in/ft2) and as 208.3 (mm*mm/m2)."""
    limit = si("0.03 in^2/ft^2", "screening value")
    assert shown(limit, "screening value") == pytest.approx(208.3, abs=0.05)


def test_screen_L_20x30_nps8():
    """L of 20 and 30 ft, NPS 8, unit expansion 0.027 in/ft: 0.0432, above 0.03 (arithmetic on the rule)."""
    apart = math.hypot(20, 30) * FT
    y = free_growth(e=0.027 * IN / FT, X=apart)
    q = screening_value(D_o=8.625 * IN, y=y, L_dev=50 * FT, U_a=apart)
    assert shown(q, "screening value", "us") == pytest.approx(0.0431806768, rel=1e-6)
    assert q > si("0.03 in^2/ft^2", "screening value")

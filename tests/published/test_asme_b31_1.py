"""Modulus of an older edition, and the suggested spans of supports.

ASME B31.1, Power Piping: table of moduli of elasticity of 1995; Table 121.5 of 2016 (suggested pipe support
spacing). Read.
"""

import pytest

from pipeflex.data import lookup
from pipeflex.data.tables import table

from .ask import FT, MSI, curve_value


def test_modulus_cs_b311_1995_400F():
    """Carbon steel at 400 degF: 27.7 Msi by the older table; the current one has 27.9."""
    assert curve_value(lookup.modulus, "A106-B", "400 degF", expansion="older") == pytest.approx(
        27.7 * MSI, abs=0.05 * MSI
    )


def test_span_table_nps8():
    """NPS 8: 19 ft (5.8 m) with water, 24 ft (7.3 m) with steam, gas or air."""
    held = table("support_span/asme_b31_1")
    row = held.find(nps="8")
    for service, feet, metres in (("water", 19, 5.8), ("gas", 24, 7.3)):
        assert held.numbers(f"{service}_ft")[row] == pytest.approx(feet * FT, rel=1e-9)
        assert held.numbers(f"{service}_m")[row] == pytest.approx(metres, rel=1e-9)

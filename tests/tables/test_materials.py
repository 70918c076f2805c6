"""Expansion, modulus, stress and materials against other editions and against the codes' own basis."""

from math import pi

import numpy as np
import pytest

from pipeflex.data.tables import table, tables

ZERO_C = 273.15
KSI = 6894757.293
STRESS = tuple(id for id in tables() if id.startswith("stress/"))
MATERIALS = table("material/materials")
KEYS = MATERIALS.texts("key")


def of(key, column):
    return MATERIALS.texts(column)[MATERIALS.find(key=key)]


@pytest.mark.parametrize("group", ["group_1", "group_3"])
def test_metric_and_customary_expansion_agree(group):
    """ASME II-D TE-1: half a printed unit of each column, 0.05e-6/K and 0.05e-6/degF, at all shared rows."""
    t, customary = table("expansion/asme_te1_us").curve(group)
    metric = np.interp(t, *table("expansion/asme_te1_metric").curve(group))
    assert np.abs(metric - customary).max() <= 0.05e-6 + 1.8 * 0.05e-6


def test_growth_to_the_totals_printed_beside_the_coefficients():
    """ASME II-D 2001 (customary) Table TE-1 column C, in/100 ft, printed to one decimal."""
    held = table("expansion/asme_te1_us")
    totals = {
        "group_1": {200: 1.0, 300: 1.9, 400: 2.8, 500: 3.7, 600: 4.7, 800: 6.8, 1000: 9.0, 1300: 12.4},
        "group_2": {200: 1.1, 400: 3.0, 500: 4.0, 800: 7.1, 1200: 11.4},
        "cr_5": {200: 1.1, 400: 2.8, 600: 4.6, 800: 6.4, 1300: 11.4},
        "cr_9": {200: 0.9, 400: 2.5, 600: 4.1, 700: 5.0, 750: 5.4},
    }
    for group, printed in totals.items():
        t, alpha = held.curve(group)
        for fahrenheit, total in printed.items():
            row = np.argmin(np.abs(t - (fahrenheit + 459.67) / 1.8))
            growth = alpha[row] * (t[row] - held.reference_temperature) * 1200
            half_a_unit = 0.05 + 0.05e-6 * (fahrenheit - 70) * 1200
            assert growth == pytest.approx(total, abs=half_a_unit), (group, fahrenheit)


@pytest.mark.parametrize("group", ["carbon", "austenitic"])
def test_metric_and_customary_modulus_agree(group):
    """ASME II-D TM-1: half a printed unit of each column, 0.5 GPa and 0.05 Msi, within the metric range."""
    t_metric, metric = table("modulus/asme_tm1_metric").curve(group)
    t, customary = table("modulus/asme_tm1_us").curve(group)
    inside = t <= t_metric[-1]
    assert inside.sum() >= 10
    off = np.interp(t, t_metric, metric) - customary
    assert np.abs(off[inside]).max() <= 0.5e9 + 0.05e3 * KSI


def test_a106_against_the_a350_row_that_was_read():
    """ASME B31.3-2014 Table A-1M, A350 LF2 (yield 36 ksi), read; A106 B has a yield of 35 ksi.

    While yield governs, A106 B is 35/36 of it.
    From 750 degF creep and tensile strength govern and the two differ by more.
    """
    read_c = np.array([40, 65, 100, 150, 200, 250, 300, 325, 350, 375])
    read_mpa = np.array([161, 156, 151, 146, 142, 136, 129, 125, 122, 118])
    t, held = table("stress/asme_b31_3_2018").curve("A106-B")
    t, held = t[:8], held[:8]
    assert t[-1] == pytest.approx((700 + 459.67) / 1.8)
    third_of_tensile = 60 * KSI / 3
    expected = np.minimum(third_of_tensile, np.interp(t, read_c + ZERO_C, read_mpa * 1e6) * 35 / 36)
    assert held == pytest.approx(expected, rel=0.01)


@pytest.mark.parametrize(
    ("id", "over", "least"),
    [
        ("stress/asme_b31_3_2018", 3, 10),  # para. 302.3.2(d)
        ("stress/asme_b31_3_2008", 3, 5),
        ("stress/asme_b31_1_2018", 3.5, 10),  # para. 102.3.1; ASME II-D Appendix 1
        ("stress/copper_tube_handbook", 3.5, 2),
    ],
)
def test_allowable_when_cold_is_the_code_basis(id, over, least):
    """The lesser of the tensile strength over 3 (or 3.5) and two thirds of the yield strength."""
    held = table(id)
    keys = [key for key in KEYS if key in held.columns]
    assert len(keys) >= least
    assert set(held.columns) == {"temperature", *keys}
    for key in keys:
        row = MATERIALS.find(key=key)
        basis = min(MATERIALS.numbers("tensile")[row] / over, MATERIALS.numbers("yield")[row] * 2 / 3)
        assert held.numbers(key)[0] == pytest.approx(basis, abs=0.0501 * KSI), key


@pytest.mark.parametrize("id", STRESS)
def test_allowable_never_rises_with_temperature(id):
    held = table(id)
    for key in held.columns:
        if key != "temperature":
            assert np.all(np.diff(held.curve(key)[1]) <= 0)
            assert held.columns[key].edition


@pytest.mark.parametrize("key", KEYS)
@pytest.mark.parametrize("edition", ["current", "older"])
def test_every_material_resolves_over_a_useful_span(key, edition):
    """From room temperature or colder, at least 100 K in expansion, modulus and each stress table.

    A modulus may be continued 60 K below its first row, as its table says.
    """
    spans = []
    for what, continued in (("expansion", 0), ("modulus", 60)):
        id, _, column = of(key, f"{what}_{edition}").partition(":")
        t, _ = table(id).curve(column)
        spans.append((t[0] - continued, t[-1]))
    stress = [id for id in STRESS if key in table(id).columns]
    assert stress
    for id in stress:
        t, _ = table(id).curve(key)
        low = max(s[0] for s in spans)
        high = min(t[-1], *(s[1] for s in spans))
        assert low <= 25 + ZERO_C
        assert high - low >= 100


@pytest.mark.parametrize("key", KEYS)
def test_material_row(key):
    row = MATERIALS.find(key=key)
    number = {c: MATERIALS.numbers(c)[row] for c in MATERIALS.columns if MATERIALS.columns[c].unit}
    assert of(key, "kind") == "ductile metal"
    assert of(key, "ferrous") in ("yes", "no")
    assert number["tensile_mpa"] == pytest.approx(number["tensile"], abs=0.51e6)
    assert number["yield"] < number["tensile"]
    assert number["poisson"] == 0.3  # ASME B31.3 para. 319.3.3
    assert 0 < number["minimum_temperature"] < ZERO_C


def test_joining_leaves_drawn_copper_annealed():
    """Copper Tube Handbook, footnote to Table 3c; all others keep their own allowable."""
    assert {key: of(key, "joined_as") for key in KEYS if of(key, "joined_as") != key} == {
        "copper drawn": "copper annealed"
    }


def test_density_of_steel_is_that_of_the_mass_formula():
    """ASME B36.10M: kg/m = 0.0246615 (D - t) t, in millimetres."""
    steel = MATERIALS.numbers("density")[MATERIALS.find(key="A106-B")]
    assert pi * steel * 1e-6 == pytest.approx(0.0246615, rel=1e-5)


def test_density_of_water():
    """IAPWS-95 by the general-purpose library iapws."""
    iapws95 = pytest.importorskip("iapws").IAPWS95
    held = table("contents/densities")
    density = held.numbers("density")
    assert density[held.find(key="water")] == pytest.approx(iapws95(T=293.15, P=0.101325).rho, abs=0.5)
    assert density[held.find(key="condensate")] == pytest.approx(iapws95(T=373.15, x=0).rho, abs=0.5)

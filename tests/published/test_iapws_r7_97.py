"""Saturated steam against its published verification values.

IAPWS R7-97(2012), Revised Release on the IAPWS Industrial Formulation 1997 for the Thermodynamic Properties of
Water and Steam: Table 35 (saturation pressure), Table 36 (saturation temperature), eqs. (30) and (31).
Beside them the general-purpose library `iapws`, an independent implementation of the same release.
"""

import numpy as np
import pytest

from pipeflex.errors import InputError
from pipeflex.steam import ATMOSPHERE, PRESSURES, TEMPERATURES, saturation_pressure, saturation_temperature
from pipeflex.units import parse


@pytest.mark.parametrize(("mpa", "kelvin"), [(0.1, 372.755919), (1.0, 453.035632), (10.0, 584.149488)])
def test_table_36_saturation_temperature(mpa, kelvin):
    assert saturation_temperature(mpa * 1e6) == pytest.approx(kelvin, rel=0, abs=5e-7)


@pytest.mark.parametrize(("kelvin", "mpa"), [(300.0, 0.353658941e-2), (500.0, 0.263889776e1), (600.0, 0.123443146e2)])
def test_table_35_saturation_pressure(kelvin, mpa):
    assert saturation_pressure(kelvin) == pytest.approx(mpa * 1e6, rel=2e-9)


def test_the_library_agrees_over_the_whole_line():
    iapws97 = pytest.importorskip("iapws.iapws97")
    p = np.geomspace(612.0, PRESSURES[1] * (1 - 1e-9), 400)
    library = np.array([iapws97._TSat_P(x / 1e6) for x in p])
    np.testing.assert_allclose(saturation_temperature(p), library, rtol=1e-12)
    t = np.linspace(273.16, 647.0, 400)
    library = np.array([iapws97._PSat_T(x) for x in t])
    np.testing.assert_allclose(saturation_pressure(t) / 1e6, library, rtol=1e-11)


def test_there_and_back_over_the_whole_line():
    t = np.linspace(*TEMPERATURES, 1001)
    np.testing.assert_allclose(saturation_temperature(saturation_pressure(t)[1:-1]), t[1:-1], rtol=1e-10)
    assert saturation_pressure(TEMPERATURES[0]) == pytest.approx(PRESSURES[0], rel=2e-7)
    assert saturation_pressure(TEMPERATURES[1]) == pytest.approx(PRESSURES[1], rel=1e-7)


def test_one_pressure_and_a_column_of_it_give_the_same_bits():
    p = np.geomspace(1e3, 2e7, 257)
    assert saturation_temperature(p).tolist() == [float(saturation_temperature(x)) for x in p]
    assert saturation_temperature(p.reshape(1, -1)).shape == (1, 257)


@pytest.mark.parametrize(
    ("typed", "celsius"),
    # computed with iapws 1.5.5 and standard atmosphere 14.69595 psi, printed to 1e-3
    [
        ("0 psig sat", 99.974),
        ("10 psig sat", 115.198),
        ("400 psig sat", 231.208),
        ("600 psig sat", 253.811),
        ("1 bar a sat", 99.606),
        ("10 bar a sat", 179.886),
        ("100 bar a sat", 310.999),
    ],
)
def test_steam_as_it_is_typed(typed, celsius):
    assert parse(typed, "temperature") - 273.15 == pytest.approx(celsius, rel=0, abs=6e-4)


def test_gauge_and_absolute_stand_one_atmosphere_apart():
    assert ATMOSPHERE == 101325.0
    assert parse("33 bar g sat", "temperature") == parse("34.01325 bar a sat", "temperature")
    assert parse("33 bar g sat", "temperature") == float(saturation_temperature(33e5 + ATMOSPHERE))


@pytest.mark.parametrize("pascal", [0.0, 600.0, 22.07e6, -1.0, float("nan"), float("inf")])
def test_off_the_line_is_refused(pascal):
    with pytest.raises(InputError, match="saturated steam"):
        saturation_temperature(pascal)


def test_rows_off_the_line_are_named():
    with pytest.raises(InputError) as caught:
        saturation_pressure([300.0, 200.0, 400.0, 700.0])
    (fault,) = caught.value.faults
    assert fault.rows == (1, 3)
    assert fault.given == 200.0
    assert "373.9\u00a0°C" in str(caught.value)

"""Numbers as they are printed."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from pipeflex.present import DISPLAY, UNIT_SYSTEMS, display, number, percent, shown, span, text
from pipeflex.quantities import KINDS

THIN, HARD, MINUS = "\u2009", "\u00a0", "\u2212"


def test_every_kind_has_its_units_of_display():
    assert DISPLAY.keys() == KINDS.keys()


def test_the_units_are_those_of_the_definitions():
    # International Yard and Pound Agreement, 1959; standard gravity 9.80665 m/s2 (CGPM 1901); NIST SP 811, B.8
    assert display("pipe dimension", "us").factor * 10**4 == 254
    assert display("mass", "us").factor * 10**8 == 45359237
    assert float(display("force", "us").factor) == 4.4482216152605
    assert float(display("pressure", "us").factor) == pytest.approx(6.894757e3, rel=1e-7)
    assert float(display("moment", "us").factor) == pytest.approx(1.355818, rel=1e-6)
    assert float(display("density", "us").factor) == pytest.approx(16.01846, rel=1e-6)


@pytest.mark.parametrize(
    ("value", "kind", "units", "printed"),
    [
        (0.219075, "pipe dimension", "metric", f"219.07{HARD}mm"),  # the float lies below the half
        (0.219075, "pipe dimension", "us", f"8.625{HARD}in"),
        (5.1, "length", "metric", f"5.10{HARD}m"),
        (513.15, "temperature", "metric", f"240.0{HARD}°C"),
        (513.15, "temperature", "us", f"464.0{HARD}°F"),
        (233.15, "temperature", "us", f"{MINUS}40.0{HARD}°F"),
        (20.0, "temperature change", "us", f"36.0{HARD}°F diff."),
        (math.pi / 2, "angle", "metric", "90.00°"),
        (7000.0, "count", "metric", "7000"),
        (0.3, "ratio", "metric", "0.300"),
        (12345.0, "force", "metric", f"12.35{HARD}kN"),
        (208000e-6, "screening value", "metric", f"208{THIN}000.0{HARD}mm²/m²"),
        (math.inf, "stiffness", "metric", "unlimited"),
    ],
)
def test_number_and_unit(value, kind, units, printed):
    assert text(value, kind, units) == printed


def test_thousands_are_set_apart_from_five_digits_on():
    assert number(9999.0, "count") == "9999"
    assert number(10000.0, "count") == f"10{THIN}000"
    assert number(-1234567.0, "count") == f"{MINUS}1{THIN}234{THIN}567"
    assert number(12345.678, "length", decimals=3) == f"12{THIN}345.678"


def test_small_numbers_keep_three_figures():
    assert number(0.00012345, "length") == "0.000123"
    assert number(0.5, "length") == "0.500"
    assert number(1.0, "length") == "1.00"
    assert number(0.4, "count") == "0"


def test_zero_has_no_sign():
    assert number(-0.0, "length") == "0.00"
    assert number(-1e-13, "temperature change", decimals=1) == "0.0"
    assert number(-0.4, "count") == "0"


def test_span_has_one_unit_at_the_end():
    assert span(288.15, 308.15, "temperature") == f"15.0 .. 35.0{HARD}°C"
    assert span(278.15, 308.15, "temperature", "us") == f"41.0 .. 95.0{HARD}°F"
    assert span(5.0, 5.0, "length") == f"5.00{HARD}m"
    assert span(0.1, 0.4, "ratio") == "0.100 .. 0.400"


@pytest.mark.parametrize(
    ("ratio", "limit", "printed"),
    [
        (0.98, 1.0, "98"),
        (1.0, 1.0, "100"),
        (0.996, 1.0, "99.6"),
        (0.9996, 1.0, "99.96"),
        (1.00004, 1.0, "100.004"),
        (1.4, 1.0, "140"),
        (0.0, 1.0, "0"),
        (0.8996, 0.9, "89.96"),
    ],
)
def test_a_percentage_and_its_word_agree(ratio, limit, printed):
    assert percent(ratio, limit) == f"{printed}{HARD}%"


@given(st.floats(0, 10), st.sampled_from([1.0, 0.9, 0.5]))
def test_a_percentage_stands_on_the_side_of_its_ratio(ratio, limit):
    if 0 < abs(ratio - limit) < 1e-12:
        return
    printed = float(percent(ratio, limit).removesuffix(f"{HARD}%")) / 100
    assert (printed > limit, printed < limit) == (ratio > limit, ratio < limit)


@given(st.floats(-1e9, 1e9), st.sampled_from([*KINDS]), st.sampled_from(UNIT_SYSTEMS))
def test_printing_loses_no_more_than_half_a_digit(value, kind, units):
    body = number(value, kind, units).replace(THIN, "").replace(MINUS, "-")
    decimals = len(body.partition(".")[2])
    amount = shown(value, kind, units)
    assert abs(float(body) - amount) <= 0.5 * 10.0**-decimals * (1 + 1e-9) + 1e-15 * abs(amount)
    assert decimals >= display(kind, units).decimals

"""Look-ups in the tables: nearest names, ranges, what holds below a first row, confirmed values, origins."""

import numpy as np
import pytest

from pipeflex.codes import code, codes
from pipeflex.data import lookup
from pipeflex.data.materials import EXPANSION_SETS, material, material_keys, offered, stress_curve
from pipeflex.data.pipes import dimensions, elbow, pipe, sizes, walls
from pipeflex.errors import InputError, ScopeError, TableError
from pipeflex.mechanics.section import inside_diameter
from pipeflex.methods import solve
from pipeflex.model.duty import Confirmed
from pipeflex.model.pipe import Pipe
from pipeflex.units import si

TABLES_2018 = code("B31.3-2018").stress_tables


def at(text):
    return np.array([si(text, "temperature")])


def value(one, curve, text):
    made = Pipe(outside_diameter=0.1, wall=0.005, materials=(one,))
    return float(lookup.values_at(made, curve, at(text), "t")[0])


@pytest.mark.parametrize(
    ("ask", "field", "near"),
    [
        (lambda: dimensions("DN 210", "40"), "pipe.size", "DN 200"),
        (lambda: dimensions("NPS 7", "40"), "pipe.size", "NPS"),
        (lambda: dimensions("eight inch", "40"), "pipe.size", "DN"),
        (lambda: dimensions("DN 200", "41"), "pipe.schedule", "40"),
        (lambda: dimensions("7 in", "L"), "pipe.size", "in"),
        (lambda: elbow("DN 210"), "corner.radius", ""),
        (lambda: material("A106B"), "pipe.material", "A106-B"),
        (lambda: material("copper"), "pipe.material", "copper drawn"),
        (lambda: code("B31.3-2019"), "code.key", "B31.3-2018"),
    ],
)
def test_what_is_not_there_names_what_is_near(ask, field, near):
    with pytest.raises(TableError) as caught:
        ask()
    (fault,) = caught.value.faults
    assert fault.field == field
    assert any(near in name for name in fault.near)


@pytest.mark.parametrize(
    ("one", "other"),
    [
        (("DN 200", "40"), ("NPS 8", "Sch 40")),
        (("8 in", "STD"), ("8in", "std")),
        (("2-1/2 in", "40"), ("DN 65", "schedule 40")),
        (("2 1/2 in", "40"), ('2.5"', "40")),
        (("NPS 1/2", "80"), ("DN 15", "XS")),
        (("1 in", "L"), ("1 in", "type L")),
    ],
)
def test_sizes_as_engineers_write_them(one, other):
    found, same = dimensions(*one), dimensions(*other)
    assert (found.outside_diameter, found.wall) == (same.outside_diameter, same.wall)


def test_every_size_and_wall_of_the_list_makes_a_pipe():
    count = 0
    for nps, dn in sizes():
        assert walls(f"NPS {nps}") == walls(f"DN {dn}")
        for schedule in walls(f"NPS {nps}"):
            made = pipe("A106-B", f"NPS {nps}", schedule)
            assert 0 < inside_diameter(D_o=made.outside_diameter, T_w=made.wall) < made.outside_diameter
            count += 1
    assert count > 300


@pytest.mark.parametrize("key", material_keys())
@pytest.mark.parametrize("expansion", EXPANSION_SETS)
@pytest.mark.parametrize("edition", sorted(codes()))
def test_a_line_tied_in_at_minus_15_answers(key, expansion, edition, line):
    """Every material, both sets of expansion data, every edition: a frosty tie-in day is answered."""
    design = line(
        material=key, expansion=expansion, code_key=edition, hot="90 degC", cold="-15 degC",
        duty={"install_low": "-15 degC", "install_high": "10 degC"},
    )  # fmt: skip
    outcome = solve(design, "guided_cantilever")
    e = value(design.pipe.material, lookup.expansion, "90 degC")
    assert outcome.results["e"] > e  # more than from the reference temperature on
    below = design.pipe.material.expansion
    if below.temperature[below.own] > design.coldest()[0]:
        assert any("below the first row" in r.words() for r in outcome.remarks)


def test_growth_below_the_first_row_is_the_older_table_shifted():
    """Current steel begins at 20 degC; colder it has the differences of the older table, and meets it at 70 degF."""
    for key in ("A106-B", "TP304"):
        current, older = material(key).expansion, material(key, "older").expansion
        assert current.own > 0
        below = current.temperature[: current.own]
        new, old = (np.interp(below, c.temperature, c.value) for c in (current, older))
        seventy = si("70 degF", "temperature")
        meet = [float(np.interp(seventy, c.temperature, c.value)) for c in (current, older)]
        assert np.allclose(new - meet[0], old - meet[1], rtol=0, atol=1e-15)
        assert np.all(np.diff(current.value) > 0)
        assert "shifted to agree at 70 °F" in lookup.origin_words(current, float(below[0]))
        assert "shifted" not in lookup.origin_words(current, si("100 degC", "temperature"))


@pytest.mark.parametrize(("key", "expansion"), [("copper drawn", "older"), ("P91", "current"), ("P91", "older")])
def test_a_table_with_nothing_older_goes_on_by_its_first_coefficient(key, expansion):
    """Below the first row, the slope of the first rows: an upper bound of the contraction."""
    curve = material(key, expansion).expansion
    assert curve.own == 1
    slope = np.diff(curve.value) / np.diff(curve.temperature)
    assert slope[0] == pytest.approx(slope[1], rel=0.05)
    assert curve.temperature[0] <= si("-15 degC", "temperature")
    assert "upper bound" in lookup.origin_words(curve, float(curve.temperature[0]))


def test_a_modulus_goes_on_by_60_K_and_an_allowable_is_one_value_when_cold():
    steel = material("A106-B")
    modulus = steel.modulus
    assert modulus.temperature[1] - modulus.temperature[0] == pytest.approx(60.0)
    slope = np.diff(modulus.value) / np.diff(modulus.temperature)
    assert slope[0] == pytest.approx(slope[1])
    stress = stress_curve(steel, TABLES_2018)
    assert stress.temperature[0] == steel.minimum_temperature
    assert stress.value[0] == stress.value[1]
    allowable = lookup.allowable(TABLES_2018, True)
    assert value(steel, allowable, "-20 degF") == value(steel, allowable, "100 degF") == pytest.approx(20 * 6894757.293)


@pytest.mark.parametrize(
    ("curve", "too_far", "words"),
    [
        (lookup.expansion, "900 degC", ("TE-1", "825.0")),
        (lookup.expansion, "-250 degC", ("TE-1", "−198.3")),
        (lookup.modulus, "600 degC", ("TM-1", "550.0")),
        (lookup.allowable(TABLES_2018, True), "650 degC", ("Table A-1", "593.3")),
        (lookup.allowable(TABLES_2018, True), "-40 degC", ("Table A-1", "−28.9")),
    ],
)
def test_a_temperature_outside_names_the_table_and_its_range(curve, too_far, words):
    with pytest.raises(InputError) as caught:
        value(material("A106-B"), curve, too_far)
    said = str(caught.value)
    assert all(word in said for word in words), said


def test_rows_outside_are_named_with_the_first_value():
    made = Pipe(outside_diameter=0.1, wall=0.005, materials=(material("A106-B"), material("TP304")),
                material_row=np.array([0, 1, 0, 1]))  # fmt: skip
    t = np.array([[300.0, 300.0, 300.0, 300.0], [300.0, 800.0, 900.0, 300.0], [300.0, 300.0, 950.0, 900.0]])
    with pytest.raises(InputError) as caught:
        lookup.values_at(made, lookup.modulus, t, "duty.cases.hot.temperature")
    (fault,) = caught.value.faults
    assert fault.field == "duty.cases.hot.temperature"
    assert fault.rows == (2,)
    assert fault.given == 900.0


def test_a_mixed_column_reads_each_row_from_its_own_curve():
    rng = np.random.default_rng(2)
    ones = tuple(material(k) for k in ("A106-B", "TP304", "P91", "copper drawn"))
    row = rng.integers(0, 4, 200)
    made = Pipe(outside_diameter=0.1, wall=0.005, materials=ones, material_row=row)
    t = rng.uniform(280, 420, (3, 200))
    found = lookup.values_at(made, lookup.expansion, t, "t")
    for i in range(200):
        curve = ones[row[i]].expansion
        assert np.array_equal(found[:, i], np.interp(t[:, i], curve.temperature, curve.value))


def test_points_used_are_those_between_which_a_temperature_lies():
    curve = material("A106-B").modulus
    t = curve.temperature
    assert lookup.points_used(curve, float(t[3])) == (3,)
    assert lookup.points_used(curve, float((t[3] + t[4]) / 2)) == (3, 4)
    assert lookup.points_used(curve, float(t[-1])) == (len(t) - 1,)
    assert lookup.points_used(curve, float(t[0])) == (0,)


def confirmed(**fields):
    given = {"table": "stress/asme_b31_3_2018", "row": "A106-B", "temperature": "400 degF", "kind": "stress",
             "value": "19.8 ksi", "by": "AB", "date": "2026-03-01"}  # fmt: skip
    return Confirmed(**{**given, **fields})


def test_a_confirmed_value_takes_the_place_of_the_recalled_one():
    plain, sure = material("A106-B"), material("A106-B", confirmed=(confirmed(),))
    allowable = lookup.allowable(TABLES_2018, True)
    assert value(plain, allowable, "400 degF") == pytest.approx(19.9 * 6894757.293)
    assert value(sure, allowable, "400 degF") == si("19.8 ksi", "stress")
    assert value(sure, allowable, "500 degF") == value(plain, allowable, "500 degF")
    curve = stress_curve(sure, TABLES_2018)
    assert lookup.origin_words(curve, si("400 degF", "temperature")).endswith("(confirmed by AB on 2026-03-01)")
    assert "from memory, confirm" in lookup.origin_words(curve, si("500 degF", "temperature"))
    assert sure != plain


@pytest.mark.parametrize(
    ("wrong", "words"),
    [({"temperature": "401 degF"}, "a row of stress"), ({"kind": "modulus", "value": "200 GPa"}, "permitted: stress")],
)
def test_a_confirmed_value_that_fits_no_cell_is_refused(wrong, words):
    with pytest.raises(InputError, match=words):
        material("A106-B", confirmed=(confirmed(**wrong),))


def test_an_unknown_set_of_expansion_data():
    with pytest.raises(InputError, match="current, older"):
        material("A106-B", "oldest")


@pytest.mark.parametrize("edition", sorted(codes()))
def test_materials_on_offer_share_a_span_of_100_K(edition):
    found = offered(code(edition).stress_tables)
    assert {o.key for o in found} == set(material_keys())
    for one in found:
        assert one.high - one.low >= 100
        assert one.low <= si("-15 degC", "temperature")
        assert one.stress_from


def test_brittle_and_plastic_pipe_has_no_allowable():
    import dataclasses

    iron = dataclasses.replace(material("A106-B"), kind="brittle")
    with pytest.raises(ScopeError, match="ductile metal"):
        value(iron, lookup.allowable(TABLES_2018, True), "20 degC")
    with pytest.raises(ScopeError, match="allowable stress"):
        value(material("A106-B"), lookup.allowable(("stress/none",), True), "20 degC")

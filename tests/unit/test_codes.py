"""Editions of the code: clauses that find their symbols, factors at their ends, and what an option changes."""

import dataclasses

import numpy as np
import pytest

from pipeflex.codes import b31_3, code, codes
from pipeflex.formulas import Choice, StepTable, formula_of, pick
from pipeflex.methods import solve
from pipeflex.trace import PLAIN, follow

EDITIONS = sorted(codes())
POOL = {"N": 7000.0, "f_m": 1.0, "S_c": 137.9e6, "S_h": 130e6, "S_L": 40e6}


@pytest.mark.parametrize("key", EDITIONS)
def test_an_edition_is_whole(key):
    edition = code(key)
    assert edition.key == key
    assert key.endswith(edition.edition)
    assert edition.title
    assert edition.remarks
    pool = dict(POOL)
    assert follow(edition.allowable_range, pool, PLAIN) == pool["S_A"]
    assert follow(edition.allowable_range_with_sustained, pool, PLAIN) == pool["S_Ab"]
    value, greatest = edition.screening
    pool = {"D_o": 0.2, "y": 0.1, "L_dev": 40.0, "U_a": 30.0, "S_A": 200e6, "E_a": 203e9}
    assert value(**pick(value, pool)) == pytest.approx(0.2 * 0.1 / 100)
    assert greatest(**pick(greatest, pool)) == pytest.approx(0.208 * 200e6 / 203e9)


@pytest.mark.parametrize("key", EDITIONS)
def test_eq_1b_only_where_it_may(key):
    """It needs S_L not above S_h, and is never less than eq. (1a)."""
    edition = code(key)
    for S_L in (0.0, 40e6, 129e6, 130e6, 131e6, 300e6):
        pool = POOL | {"S_L": S_L}
        plain = follow(edition.allowable_range, pool, PLAIN)
        added = follow(edition.allowable_range_with_sustained, pool, PLAIN)
        assert added >= plain
        assert (added > plain) == (POOL["S_h"] > S_L)


def clauses(rule):
    if isinstance(rule, Choice):
        return [*clauses(rule.yes), *clauses(rule.no)]
    return [] if isinstance(rule, StepTable) else [rule]


@pytest.mark.parametrize("key", EDITIONS)
def test_every_clause_cites_a_paragraph(key):
    edition = code(key)
    for rule in (*edition.allowable_range, *edition.allowable_range_with_sustained, *edition.screening):
        for clause in clauses(rule):
            assert "ASME B31.3-" in formula_of(clause).ref
            assert "para." in formula_of(clause).ref


@pytest.mark.parametrize(
    ("factor", "cycles", "f_m", "expected"),
    [
        (b31_3.range_factor_2018, 1, 1.0, 1.0),
        (b31_3.range_factor_2018, 1, 1.2, 1.2),
        (b31_3.range_factor_2018, 3125, 1.2, 1.2),  # 6*3125**-0.2 = 6/5
        (b31_3.range_factor_2018, 7776, 1.2, 1.0),  # 6*7776**-0.2 = 6/6
        (b31_3.range_factor_2018, 100_000, 1.2, 0.6),  # 6/10
        (b31_3.range_factor_2018, 1e12, 1.0, 0.15),
        (b31_3.range_factor_2022, 1, 1.0, 1.0),
        (b31_3.range_factor_2022, 8000, 1.2, 1.0030),  # 20*8000**-0.333, near 20/20
        (b31_3.range_factor_2022, 1e6, 1.2, 0.2009),  # near 20/100
        (b31_3.range_factor_2022, 1e12, 1.0, 0.15),
    ],
)
def test_range_factor(factor, cycles, f_m, expected):
    assert factor(N=cycles, f_m=f_m) == pytest.approx(expected, abs=1e-4)


def test_range_factor_never_rises_with_cycles():
    cycles = np.logspace(0, 12, 500)
    for factor in (b31_3.range_factor_2018, b31_3.range_factor_2022):
        assert np.all(np.diff(factor(N=cycles, f_m=1.2)) <= 0)


@pytest.mark.parametrize(
    ("material", "hot", "permitted"),
    [("A106-B", "200 degC", True), ("A106-B", "370 degC", True), ("A106-B", "372 degC", False),
     ("P91", "200 degC", False), ("TP304", "200 degC", True), ("copper drawn", "100 degC", False)],
)  # fmt: skip
def test_a_factor_above_1_is_for_mild_ferrous_steel_below_371_degC(material, hot, permitted, line):
    """Tensile strength at most 517 MPa, ferrous, metal temperature at most 371 degC."""
    outcome = solve(line(material=material, hot=hot, duty={"greatest_range_factor": 1.2, "cycles": 1000}),
                    "guided_cantilever")  # fmt: skip
    assert outcome.results["f"] == (1.2 if permitted else 1.0)
    assert any("the code permits 1.0" in r.words() for r in outcome.remarks) is not permitted


@pytest.mark.parametrize("key", EDITIONS)
@pytest.mark.parametrize(("f_m", "expected"), [(1.0, 1.25 * 190e6 + 0.25 * 180e6), (1.2, 1.2 * 1.5 * 138e6)])
def test_allowables_are_capped_only_where_f_exceeds_1(key, f_m, expected):
    """A strong steel at f = 1 keeps its S_c and S_h; above, both are at most 138 MPa."""
    pool = {"N": 1000.0, "f_m": f_m, "S_c": 190e6, "S_h": 180e6}
    assert follow(code(key).allowable_range, pool, PLAIN) == pytest.approx(expected)


def test_no_greater_factor_unless_asked(line):
    assert solve(line(duty={"cycles": 1000}), "guided_cantilever").results["f"] == 1.0


@pytest.mark.parametrize(
    ("S_E", "N", "severe"), [(161.0, 7001, True), (160.0, 7001, False), (161.0, 7000, False), (10.0, 1e9, False)]
)
def test_severe_cyclic(S_E, N, severe):
    assert b31_3.severe_cyclic(S_E, 200.0, N) == severe


def test_the_edition_changes_the_factor_and_the_fingerprint(line):
    old, new = (line(code_key=k, duty={"cycles": 100_000}) for k in EDITIONS)
    ranges = [solve(d, "guided_cantilever").results for d in (old, new)]
    assert ranges[0]["f"] == pytest.approx(0.6)
    assert ranges[1]["f"] == pytest.approx(20 * 1e5**-0.333)
    assert old.fingerprint != new.fingerprint


def test_a_companys_rule_is_one_move(line):
    """A greatest factor of 0.9, under a key of its own."""

    def company_factor(N, f_m):
        return np.minimum(0.9, b31_3.range_factor_2018(N, f_m))

    from pipeflex.formulas import FORMULAS, OF_FUNCTION, formula

    rule = formula("f = min(0.9, max(0.15, min(f_m, 6.0*N**-0.2)))", ref="company rule 7")(company_factor)
    try:
        own = code("B31.3-2018")
        own = dataclasses.replace(own, key="house rule", allowable_range=(rule, *own.allowable_range[1:]))
        design = dataclasses.replace(line(), code=own)
        assert solve(design, "guided_cantilever").results["f"] == 0.9
        assert design.fingerprint != line().fingerprint
    finally:
        FORMULAS.pop(OF_FUNCTION.pop(rule).name)

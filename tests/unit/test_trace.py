"""The two ways to run formulas: the same numbers, and the steps of a sheet."""

import numpy as np
import pytest

from pipeflex.codes.b31_3 import (
    allowable_range,
    cold_allowable,
    cold_allowable_capped,
    range_factor_2018,
)
from pipeflex.errors import MissingInput
from pipeflex.formulas import FORMULAS, Choice, StepTable, formula_of, pick
from pipeflex.mechanics.cantilever import cantilever_stress, leg_needed
from pipeflex.mechanics.section import line_weight
from pipeflex.trace import PLAIN, Given, Said, Stepped, Tabled, Trace, Worked, follow

CAP = Choice("f > 1", cold_allowable_capped, cold_allowable)
STEPS = StepTable("f", "N", limits=(7000, 14000, 22000), values=(1.0, 0.9, 0.8, 0.7), ref="a step table")


def one(**values):
    return {k: np.array([v]) for k, v in values.items()}


def test_a_formula_is_the_function_itself():
    assert cantilever_stress(E_a=2.0, D_o=3.0, delta=5.0, l=3.0) == 10.0
    entry = formula_of(cantilever_stress)
    assert entry.symbol == "S"
    assert entry.parameters == ("E_a", "D_o", "delta", "l")
    assert FORMULAS["pipeflex.mechanics.cantilever.cantilever_stress"] is entry


def test_trace_and_plain_give_the_same_bits():
    values = one(E_a=203e9, D_o=0.219075, delta=0.07, S_A=2.0e8)
    trace = Trace()
    assert trace(leg_needed, **values) == PLAIN(leg_needed, **values)
    (step,) = trace.steps
    assert isinstance(step, Worked)
    assert step.value == PLAIN(leg_needed, **values)[0]
    assert step.args == tuple((p, p, float(values[p][0])) for p in ("E_a", "D_o", "delta", "S_A"))


def test_a_number_of_the_code_is_printed_and_not_asked_for():
    trace = Trace()
    trace(line_weight, m_p=np.array([42.0]), m_c=np.array([32.0]), m_ins=np.array([0.0]))
    assert trace.steps[0].args[-1] == ("g", "g", 9.80665)


def test_a_symbol_has_one_value_in_a_trace():
    trace = Trace()
    trace.given("N", np.array([7000.0]), "given")
    trace.given("N", np.array([7000.0]), "given")
    with pytest.raises(AssertionError, match="N has two values"):
        trace.given("N", np.array([7001.0]), "given")
    trace(range_factor_2018, N=np.array([1e4]), f_m=np.array([1.0]))
    with pytest.raises(AssertionError, match="f has two values"):
        trace(range_factor_2018, N=np.array([1e6]), f_m=np.array([1.0]))


@pytest.mark.parametrize(("f", "holds", "expected"), [(1.2, True, 138e6), (1.0, False, 190e6)])
def test_a_choice_keeps_its_condition_and_the_branch_that_ran(f, holds, expected):
    trace = Trace()
    symbol, value = trace.rule(CAP, one(f=f, S_c=190e6))
    assert (symbol, value[0]) == ("S_c_used", expected)
    (step,) = trace.steps
    assert step.condition.holds is holds
    assert step.condition.args == (("f", f),)
    assert step.formula is formula_of(cold_allowable_capped if holds else cold_allowable)


def test_a_choice_goes_row_by_row_in_a_column():
    """Capped only where f exceeds 1, and as each row alone."""
    pool = {"f": np.array([1.0, 1.2, 0.9]), "S_c": np.array([190e6, 190e6, 120e6])}
    _, column = PLAIN.rule(CAP, pool)
    assert column.tolist() == [190e6, 138e6, 120e6]
    for i in range(3):
        assert Trace().rule(CAP, {k: v[i : i + 1] for k, v in pool.items()})[1][0] == column[i]


def test_a_step_table_holds_its_value_up_to_the_limit():
    cycles = np.array([1, 7000, 7001, 14000, 14001, 22000, 22001, 1e9])
    assert STEPS(cycles).tolist() == [1.0, 1.0, 0.9, 0.9, 0.8, 0.8, 0.7, 0.7]
    trace = Trace()
    assert trace.rule(STEPS, one(N=7001.0)) == ("f", 0.9)
    (step,) = trace.steps
    assert isinstance(step, Stepped)
    assert (step.symbol, step.of, step.value) == ("f", 7001.0, 0.9)


def test_worst_keeps_a_table_and_puts_the_governing_numbers_in():
    legs = np.array([[6.0], [4.0], [5.0]])
    args = {**one(E_a=203e9, D_o=0.2), "delta": np.array([[0.01], [0.02], [0.03]]), "l": legs}
    trace, names = Trace(), ("leg 1", "leg 2", "leg 3")
    value, index = trace.worst(cantilever_stress, over="leg", names=names, **args)
    by_hand = [3 * 203e9 * 0.2 * d / l**2 for d, l in ((0.01, 6.0), (0.02, 4.0), (0.03, 5.0))]
    assert (value[0], index[0]) == (pytest.approx(by_hand[1]), 1)
    table, worked = trace.steps
    assert isinstance(table, Tabled)
    assert (table.names, table.governs) == (names, 1)
    assert [symbol for symbol, _ in table.columns] == ["delta", "l", "S"]
    assert table.columns[-1][1] == pytest.approx(by_hand)
    assert worked.where == "leg 2"
    assert {p: v for p, _, v in worked.args}["l"] == 4.0
    assert PLAIN.worst(cantilever_stress, over="leg", names=names, **args)[0] == value


def test_worst_takes_the_governing_leg_of_every_row():
    args = {"E_a": 1.0, "D_o": 1.0, "delta": np.array([[1.0, 2.0], [2.0, 1.0]]), "l": np.ones((2, 2))}
    values, index = PLAIN.worst(cantilever_stress, over="leg", names=("a", "b"), **args)
    assert (values.tolist(), index.tolist()) == ([6.0, 6.0], [1, 0])


def test_each_keeps_one_table():
    trace = Trace()
    values = trace.each(cantilever_stress, over="leg", names=("a", "b"), **one(E_a=1.0, D_o=1.0, delta=1.0),
                        l=np.array([[1.0], [2.0]]))  # fmt: skip
    assert values.ravel().tolist() == [3.0, 0.75]
    assert trace.steps[0].governs is None


def test_steps_stand_in_the_order_of_the_calls():
    trace = Trace()
    trace.say("Allowable range", heading=True)
    trace.given("N", np.array([1.0]), "given")
    trace(range_factor_2018, N=np.array([1.0]), f_m=np.array([1.0]))
    assert [type(s) for s in trace.steps] == [Said, Given, Worked]


def test_a_chain_adds_each_symbol_to_the_pool():
    pool = one(N=1.0, f_m=1.0, S_c_used=100e6, S_h_used=80e6)
    assert follow((range_factor_2018, allowable_range), pool, Trace())[0] == 145e6
    assert pool["f"][0] == 1.0


def test_a_clause_without_its_symbol_says_what_is_missing():
    with pytest.raises(MissingInput) as caught:
        pick(allowable_range, {"f": 1.0, "S_c_used": 1.0})
    assert "S_h as used in the range" in str(caught.value)

"""What is wrong, told at once and in the trade's words."""

import pickle

import numpy as np
import pytest

from pipeflex import errors
from pipeflex.errors import (
    Fault,
    InputError,
    MissingInput,
    PipeflexError,
    ScopeError,
    TableError,
    UnitError,
    UnstableLayoutError,
    refuse,
    refuse_all,
)

WALL = Fault("pipe.wall", 0.001, kind="pipe dimension", low=0.002, high=0.05)


def test_the_tree_of_the_docstring_is_the_tree():
    own = {name for name, thing in vars(errors).items() if isinstance(thing, type) and issubclass(thing, Exception)}
    assert {name for name in own if name not in (errors.__doc__ or "")} == set()
    assert issubclass(UnitError, InputError)
    assert issubclass(MissingInput, InputError)
    for error, builtin in [
        (InputError, ValueError),
        (TableError, LookupError),
        (UnstableLayoutError, ArithmeticError),
        (ScopeError, PipeflexError),
    ]:
        assert issubclass(error, builtin)
        assert issubclass(error, PipeflexError)


def test_a_fault_names_field_value_and_range():
    assert WALL.text() == "pipe.wall: 1.00\u00a0mm; permitted: 2.00 .. 50.00\u00a0mm"
    assert WALL.text("us") == "pipe.wall: 0.0394\u00a0in; permitted: 0.0787 .. 1.969\u00a0in"
    assert "at least 2.00\u00a0mm" in Fault("w", 0.0, kind="pipe dimension", low=0.002).text()
    assert "at most 2.00\u00a0mm" in Fault("w", 1.0, kind="pipe dimension", high=0.002).text()


@pytest.mark.parametrize(
    ("given", "kind", "words"),
    [
        ("5 kg", "length", "'5 kg'"),
        (None, "length", "nothing"),
        (True, "length", "True"),
        (float("nan"), "length", "nan"),
        (float("inf"), "length", "inf"),
        (np.float64(5), "length", "5.00\u00a0m"),
        (5, None, "5"),
        ("<b>" * 1000, None, "'" + "<b>" * 20 + "…'"),
    ],
)
def test_what_was_given_is_shown_as_given_and_short(given, kind, words):
    assert Fault("f", given, kind=kind).given_text() == words


def test_line_breaks_in_a_given_text_stay_in_one_line():
    assert "\n" not in Fault("f", "5\nm", "a length").text()


def test_nearest_entries_and_rows_are_named():
    fault = Fault("size", "DN 201", "a size of the table", near=("DN 200", "DN 250"), rows=(3,))
    assert fault.text() == "size: 'DN 201'; permitted: a size of the table; nearest: DN 200, DN 250 (row 3)"
    assert Fault("f", 1, rows=tuple(range(8))).text().endswith("(rows 0, 1, 2, 3, 4 and 3 more)")


def test_a_prefix_names_the_record_above():
    error = UnitError(WALL, Fault("", "x", "a length")).prefixed("design")
    assert type(error) is UnitError
    assert [fault.field for fault in error.faults] == ["design.pipe.wall", "design"]


def test_refuse_says_nothing_where_nothing_is_wrong():
    refuse(InputError)
    refuse(InputError, (False, WALL), (np.array([False, False]), WALL), (np.array([], dtype=bool), WALL))


def test_refuse_tells_all_that_is_wrong_at_once():
    with pytest.raises(ScopeError) as caught:
        refuse(ScopeError, (True, WALL), (False, Fault("b")), (np.array([False, True]), Fault("c", 2)))
    assert [fault.field for fault in caught.value.faults] == ["pipe.wall", "c"]
    assert str(caught.value).count("\n") == 1


def test_refuse_names_rows_and_the_first_value_at_fault():
    legs = np.array([5.0, -1.0, 6.0, -2.0])
    with pytest.raises(InputError, match=r"leg: −1\.00\sm; permitted: at least 0\.00\sm \(rows 1, 3\)") as caught:
        refuse(InputError, (legs < 0, Fault("leg", legs, kind="length", low=0.0)))
    assert caught.value.faults[0].rows == (1, 3)
    assert caught.value.faults[0].given == -1.0


def test_a_column_of_one_row_names_no_row():
    with pytest.raises(InputError) as caught:
        refuse(InputError, (np.array([True]), Fault("leg", np.array([-1.0]), kind="length")))
    assert caught.value.faults[0].rows == ()
    assert caught.value.faults[0].given == -1.0


def test_one_limit_for_many_rows_is_given_as_one():
    with pytest.raises(InputError) as caught:
        refuse(InputError, (np.array([False, True]), Fault("leg", 3.0, kind="length")))
    assert caught.value.faults[0].given == 3.0


def test_refuse_all_gathers_and_keeps_the_common_type():
    refuse_all([])
    with pytest.raises(TableError) as caught:
        refuse_all([TableError(Fault("a")), TableError(Fault("b"), Fault("c"))])
    assert [fault.field for fault in caught.value.faults] == ["a", "b", "c"]
    with pytest.raises(InputError) as mixed:
        refuse_all([TableError(Fault("a")), UnitError(Fault("b"))])
    assert type(mixed.value) is InputError


def test_errors_can_be_sent_to_another_process():
    error = pickle.loads(pickle.dumps(UnitError(WALL)))
    assert type(error) is UnitError
    assert error.faults == (WALL,)

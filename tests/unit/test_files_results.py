"""Answers as JSON: units beside the numbers, whose force on whom, nothing that is not a number."""

import dataclasses
import json
import math

import numpy as np
import pytest

from pipeflex.files.results import LOADS_ARE, si_unit, to_json
from pipeflex.methods import ladder, solve
from pipeflex.quantities import KINDS
from pipeflex.units import parse


@pytest.fixture(scope="module")
def design(line):
    return line()


@pytest.fixture(scope="module")
def outcome(design):
    return solve(design)


def strict(text):
    return json.loads(text, parse_constant=lambda name: pytest.fail(f"{name} is no JSON"))


@pytest.mark.parametrize("kind", KINDS)
def test_every_kind_has_an_si_unit_of_factor_one(kind):
    unit = si_unit(kind)
    if kind not in ("ratio", "count", "strain", "screening value"):
        assert parse(f"2 {unit.replace(' ', '*')}", kind) == 2.0


def test_the_answer_as_it_was_computed(outcome, design):
    said = strict(to_json(outcome, ladder(design), "Flexible enough."))
    assert said["pipeflex_results"] == 1
    assert said["fingerprint"] == design.fingerprint
    assert said["verdict"] == str(outcome.verdict)
    assert said["headline"] == "Flexible enough."
    assert said["method"]["key"] == outcome.method
    for told, check in zip(said["checks"], outcome.checks, strict=True):
        assert told["demand"] == check.demand
        assert told["unit"] == si_unit(check.kind)
        assert told["judgement"] == str(check.judgement)
    assert [rung["key"] for rung in said["ladder"]] == [rung.key for rung in ladder(design).rungs]
    assert said["results"]["S_A"] == {
        "meaning": "allowable displacement stress range",
        "unit": "Pa",
        "value": outcome.results["S_A"],
    }


def test_every_load_says_whose_it_is_and_where_to(outcome):
    loads = strict(to_json(outcome))["loads"]
    assert loads["are"] == LOADS_ARE == "working loads, unfactored, of the pipe on the steel (or equipment)"
    assert loads["friction_factor"] == 0.3
    for told, load in zip(loads["at"], outcome.loads, strict=True):
        assert [state["state"] for state in told["states"]] == list(load.states)
        for state in told["states"]:
            assert state["total"] == state["thermal"] + state["friction"]
            assert state["toward"] == (load.positive if state["total"] >= 0 else load.negative)
        greatest = max(told["states"], key=lambda state: abs(state["total"]))
        assert abs(told["greatest"]["total"]) == abs(greatest["total"])


def test_a_limit_that_is_not_given_is_null_with_the_reason(outcome):
    said = strict(to_json(outcome))
    without = [c for c in said["checks"] if c["limit"] is None]
    assert without, "the line gives no room"
    assert all(c["ratio"] is None and c["judgement"] == "not judged" and c["reason"] for c in without)


def test_what_is_not_finite_is_null(outcome, design):
    odd = dataclasses.replace(outcome, results={"S_A": np.float64(math.nan), "I": np.array([1.0, math.inf])})
    said = strict(to_json(odd))
    assert said["results"]["S_A"]["value"] is None
    assert said["results"]["I"]["value"] == [1.0, None]
    assert any(rung["anchor"]["value"] is None for rung in strict(to_json(outcome, ladder(design)))["ladder"])


def test_the_same_outcome_gives_the_same_ascii(outcome, design):
    assert to_json(outcome) == to_json(solve(dataclasses.replace(design)))
    assert to_json(outcome).isascii()


def test_texts_of_the_user_are_data(line):
    nasty = '</script>" \u2028 \\ 漢'
    design = dataclasses.replace(line(), title=dataclasses.replace(line().title, line=nasty))
    assert strict(to_json(solve(design)))["line"] == nasty

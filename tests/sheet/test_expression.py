"""Printed formulas mean what the formulas mean: the substituted line is read back and worked out."""

import math
import re

import numpy as np
import pytest

import pipeflex.codes.b31_3  # registers the formulas of the codes
import pipeflex.methods  # noqa: F401  and all others
from pipeflex import present
from pipeflex.formulas import FORMULAS, Choice, Formula, formula_of
from pipeflex.mechanics import cantilever
from pipeflex.quantities import SYMBOLS
from pipeflex.sheet import expression
from pipeflex.trace import Condition

_PLAIN = str.maketrans({"\u00a0": " ", "\u2009": "", "\u2212": "-", "×": "*", "√": "sqrt", "π": "pi", "·": "*"})
_RAISED = re.compile("([⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+)")
_DIGITS = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")
_NAMES = {"sqrt": math.sqrt, "min": min, "max": max, "abs": abs, "tan": math.tan, "pi": math.pi, "__builtins__": {}}
_BY_LENGTH = sorted(present.DISPLAY, key=lambda kind: -len(present.display(kind).unit))


def numbers(formula: Formula, seed: int) -> dict[str, float]:
    """A value for each parameter that its display holds exactly."""
    rng = np.random.default_rng(seed)
    values = {}
    for name in formula.parameters:
        unit = present.display(SYMBOLS[name].kind)
        low = 2.0 if unit.unit in ("", "°") else 10.0
        amount = round(float(rng.uniform(low, 5 * low)), min(1, unit.decimals))
        values[name] = amount * float(unit.factor) + float(unit.offset)
    return values


def worked_out(text: str, units: present.UnitSystem) -> float:
    """A line with numbers and units as the number that it says."""
    for kind in _BY_LENGTH:
        unit = present.display(kind, units)
        if unit.unit and kind != "angle":
            number = r"(\u2212?[\d\u2009]+(?:\.\d+)?)\u00a0" + re.escape(unit.unit) + r"(?![\w/·²³⁴.])"
            si = (
                f"(\\1*{float(unit.factor)!r}+{float(unit.offset)!r})"
                if unit.offset
                else f"(\\1*{float(unit.factor)!r})"
            )
            text = re.sub(number, lambda m, s=si: s.replace("\\1", m[1].replace("\u2009", "")), text)
    text = re.sub(r"([\d.]+)°", lambda m: f"({m[1]}*{math.pi / 180!r})", text)
    text = _RAISED.sub(lambda m: f"**({m[1].translate(_DIGITS)})", text)
    text = re.sub(r"\|([^|]*)\|", r"abs(\1)", text.translate(_PLAIN)).replace("^", "**")
    return float(eval(text, _NAMES))


@pytest.mark.parametrize("name", sorted(FORMULAS))
def test_substituted_line_gives_the_value_of_the_formula(name):
    formula = FORMULAS[name]
    for seed in range(3):
        values = numbers(formula, seed)
        text = expression.substituted(formula, [(p, p, v) for p, v in values.items()]).text
        with np.errstate(invalid="ignore"):
            expected = float(formula.evaluate(**values))
        if math.isfinite(expected):
            assert worked_out(text, "metric") == pytest.approx(expected, rel=1e-9), text


@pytest.mark.parametrize("name", sorted(FORMULAS))
@pytest.mark.parametrize("units", present.UNIT_SYSTEMS)
def test_every_substituted_number_has_its_unit(name, units):
    formula = FORMULAS[name]
    values = numbers(formula, 0)
    text = expression.substituted(formula, [(p, p, v) for p, v in values.items()], units).text
    for p, v in values.items():
        assert present.text(v, SYMBOLS[p].kind, units) in text
        unit = present.display(SYMBOLS[p].kind, units).unit
        assert not unit or unit in text


@pytest.mark.parametrize("name", sorted(FORMULAS))
def test_symbols_of_every_formula_print_as_their_glyphs(name):
    formula = FORMULAS[name]
    printed = expression.symbolic(formula)
    used = {n for n in formula.parameters if re.search(rf"\b{n}\b", formula.text)}
    for p in used:
        assert expression.glyph(p).text in printed.text
        assert expression.glyph(p).html in printed.html
    assert "None" not in printed.text
    assert "*" not in printed.text


def test_a_substituted_line_drawn_by_hand():
    formula = formula_of(cantilever.cantilever_stress)
    args = [("E_a", "E_a", 203e9), ("D_o", "D_o", 0.2191), ("delta", "delta", 0.057), ("l", "l", 5.1)]
    said = expression.substituted(formula, args).text.replace("\u00a0", " ")
    assert said == "3 × 203.0 GPa × 219.10 mm × 57.0 mm / (5.10 m)²"
    assert expression.symbolic(formula, {"delta": "delta_tot"}).text == "3·E_a·D·Δ/l²"
    assert '<span class="un"><i>l</i><sup>2</sup></span>' in expression.symbolic(formula).html


def condition(text: str, holds: bool, **values: float) -> tuple[str, str]:
    asked = Condition(Choice(text, cantilever.leg_needed, cantilever.leg_needed), tuple(values.items()), holds)
    symbols, said = expression.condition(asked)
    return symbols.text, said.text.replace("\u00a0", " ")


def test_a_condition_that_failed_prints_as_its_opposite():
    assert condition("S_h > S_L", True, S_h=137e6, S_L=20e6) == ("S_h > S_L", "137.0 MPa > 20.0 MPa")
    assert condition("S_h > S_L", False, S_h=10e6, S_L=20e6) == ("S_h ≤ S_L", "10.0 MPa ≤ 20.0 MPa")


def test_decimals_are_added_until_numbers_differ_as_they_do():
    assert condition("S_h > S_L", True, S_h=137.001e6, S_L=137e6)[1] == "137.001 MPa > 137.000 MPa"
    assert condition("f > 1", True, f=1.00004)[1] == "1.00004 > 1"


def test_the_label_of_an_expression_is_its_plain_form():
    printed = expression.glyph("S_A")
    assert printed.math == '<span class="math" role="math" aria-label="S_A"><i>S</i><sub>A</sub></span>'


def test_an_equation_of_matrices():
    assert expression.written("X = solve(C, X_d)").html == "<i>X</i> = solve(<i>C</i>, <i>X</i><sub>d</sub>)"


def test_heads_of_columns():
    assert expression.head("D_12").html == "<i>D</i><sub>12</sub>"
    assert expression.head("last end, force up").html == "last end, force up"

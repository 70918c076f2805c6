"""Two tests over the registry of all formulas: the printed text is the function, and dimensions are those declared.

Both are tested themselves: a constant off by 1e-4, or a symbol of another dimension, must be found in every formula.
"""

import ast
import dataclasses
import importlib
import pkgutil

import numpy as np
import pytest

import pipeflex.codes
import pipeflex.mechanics
from pipeflex.formulas import FORMULAS, Formula
from pipeflex.quantities import KINDS, SYMBOLS

for package in (pipeflex.mechanics, pipeflex.codes):
    for found in pkgutil.walk_packages(package.__path__, f"{package.__name__}."):
        importlib.import_module(found.name)

ALL = sorted(FORMULAS)
ROWS = 4000
SAME = 1e-12
RANGES = {  # SI, from small to large of what occurs in piping, so that every branch of min and max is taken
    "ratio": (0.02, 4.0),
    "count": (1.0, 1e10),
    "angle": (0.05, 0.7),
    "length": (0.3, 300.0),
    "pipe dimension": (1e-3, 2.0),
    "movement": (1e-4, 1.0),
    "area": (1e-4, 0.1),
    "section modulus": (1e-6, 1e-2),
    "volume": (1.0, 1e4),
    "second moment": (1e-8, 1e-2),
    "mass": (1.0, 1e4),
    "mass per length": (1.0, 1e3),
    "density": (10.0, 1e4),
    "force": (10.0, 1e6),
    "weight per length": (10.0, 1e4),
    "moment": (10.0, 1e6),
    "stress": (1e6, 1e9),
    "modulus": (1e10, 3e11),
    "pressure": (1e5, 5e7),
    "stiffness": (1e3, 1e9),
    "rotational stiffness": (1e3, 1e9),
    "temperature": (100.0, 1200.0),
    "temperature change": (1.0, 800.0),
    "strain": (1e-5, 1e-1),
    "expansion coefficient": (1e-6, 1e-4),
    "acceleration": (1.0, 20.0),
    "screening value": (1e-6, 1e-2),
    "bending stiffness": (1e3, 1e8),
}
NARROWER = {"n_f": (0.5, 2.0)}  # flanged ends of a bend


def columns(entry: Formula, seed: int = 0) -> dict[str, np.ndarray]:
    """A random column for every parameter, dimensioned defaults included."""
    rng = np.random.default_rng([seed, *entry.name.encode()])
    ends = {p: NARROWER.get(p, RANGES[SYMBOLS[p].kind]) for p in entry.parameters}
    return {p: np.exp(rng.uniform(np.log(low), np.log(high), ROWS)) for p, (low, high) in ends.items()}


def off(one, other):
    """Greatest relative difference, row by row; endless where a number is none."""
    one, other = np.broadcast_arrays(np.asarray(one, float), np.asarray(other, float))
    if not (np.isfinite(one).all() and np.isfinite(other).all()):
        return np.inf
    size = np.maximum(np.abs(one), np.abs(other))
    return float(np.max(np.abs(one - other) / np.where(size > 0, size, 1.0)))


def text_off(entry: Formula) -> float:
    """How far the printed text is from the function."""
    values = columns(entry)
    return off(entry.evaluate(**values), entry.function(**values))


def dimension_off(entry: Formula, dimensions: dict[str, tuple[int, ...]]) -> float:
    """How far the answer is from scaling by its dimension when the base units are scaled at random."""
    rng = np.random.default_rng(7)
    units = np.exp(rng.uniform(-1, 1, (4, ROWS)))
    values = columns(entry)

    def factor(dimension):
        return np.prod([unit**power for unit, power in zip(units, dimension, strict=True)], axis=0)

    scaled = {p: v * factor(dimensions[p]) for p, v in values.items()}
    return off(entry.function(**scaled), entry.function(**values) * factor(dimensions[entry.symbol]))


def declared(entry: Formula) -> dict[str, tuple[int, ...]]:
    return {name: SYMBOLS[name].dimension for name in (*entry.parameters, entry.symbol)}


def drifted(entry: Formula) -> list[str]:
    """The text with one of its numbers off by 1e-4, for each number in turn."""
    numbers = [node for node in ast.walk(entry.tree) if isinstance(node, ast.Constant)]
    texts = []
    for i in range(len(numbers)):
        tree = ast.parse(entry.text, mode="eval")
        node = [n for n in ast.walk(tree) if isinstance(n, ast.Constant)][i]
        node.value = node.value * (1 + 1e-4) or 1e-4
        texts.append(ast.unparse(tree))
    return texts


def test_kinds_have_ranges():
    assert RANGES.keys() == KINDS.keys()


def test_the_registry_holds_mechanics_and_codes():
    modules = {name.rpartition(".")[0] for name in ALL}
    assert {f"pipeflex.mechanics.{m}" for m in ("section", "expansion", "cantilever", "support")} <= modules
    assert "pipeflex.codes.b31_3" in modules
    assert len(ALL) >= 45


@pytest.mark.parametrize("name", ALL)
def test_text_is_the_function(name):
    entry = FORMULAS[name]
    assert text_off(entry) <= SAME
    values = columns(entry, seed=1)
    asked = {p: v for p, v in values.items() if p not in entry.defaults}
    assert off(entry.evaluate(**asked), entry.function(**asked)) <= SAME


@pytest.mark.parametrize("name", ALL)
def test_every_branch_is_tried(name):
    """Each side of a min or max wins in some row, so that a slip in none of them can hide."""
    entry = FORMULAS[name]
    values = columns(entry)
    for node in ast.walk(entry.tree):
        if isinstance(node, ast.Call) and node.func.id in ("min", "max"):
            sides = [dataclasses.replace(entry, text=ast.unparse(a)).evaluate(**values) for a in node.args]
            first = np.broadcast_arrays(*sides)
            assert np.any(first[0] < first[1])
            assert np.any(first[0] > first[1])


@pytest.mark.parametrize("name", ALL)
def test_dimensions_are_those_declared(name):
    entry = FORMULAS[name]
    assert dimension_off(entry, declared(entry)) <= 1e-9


@pytest.mark.parametrize("name", [n for n in ALL if drifted(FORMULAS[n])])
def test_a_drift_of_any_number_in_a_text_is_found(name):
    entry = FORMULAS[name]
    for text in drifted(entry):
        with np.errstate(invalid="ignore"):
            assert text_off(dataclasses.replace(entry, text=text)) > 1e-6, text


@pytest.mark.parametrize("name", ALL)
def test_a_wrong_dimension_of_any_symbol_is_found(name):
    entry = FORMULAS[name]
    right = declared(entry)
    for symbol, (m, kg, s, kelvin) in right.items():
        for wrong in ((m + 1, kg, s, kelvin), (m, kg, s - 1, kelvin)):
            assert dimension_off(entry, right | {symbol: wrong}) > 1e-3, symbol

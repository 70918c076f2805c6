"""Formulas that carry their own text: one line of evaluable text beside each function, in its own parameter names."""

import ast
import inspect
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, Final, TypeVar

import numpy as np

from pipeflex.errors import Fault, MissingInput
from pipeflex.quantities import SYMBOLS

Values = Any
"""A float, or an array whose last axis is the rows of a column."""

FUNCTIONS: Final[dict[str, Any]] = {
    "sqrt": np.sqrt,
    "min": np.minimum,
    "max": np.maximum,
    "abs": np.abs,
    "tan": np.tan,
    "pi": np.pi,
}
"""What a formula's text may use beside its parameters, + - * / ** and numbers."""


@dataclass(frozen=True)
class Formula:
    """One formula: the symbol it gives, its text, its source and the function beside it.

    `symbol = text`; `ref` cites the published source; `words` say what the line is.
    """

    name: str
    symbol: str
    text: str
    ref: str
    words: str
    function: Callable[..., Values] = field(compare=False)
    parameters: tuple[str, ...]
    defaults: Mapping[str, float] = field(compare=False)

    @cached_property
    def tree(self) -> ast.expr:
        return ast.parse(self.text, mode="eval").body

    @cached_property
    def code(self) -> Any:
        return compile(ast.Expression(self.tree), self.name, "eval")

    def evaluate(self, **values: Values) -> Values:
        """The text itself, evaluated: what the printed line says, to compare with the function."""
        return eval(self.code, {"__builtins__": {}, **FUNCTIONS}, {**self.defaults, **values})


FORMULAS: Final[dict[str, Formula]] = {}
"""All formulas by module-qualified name, filled as their modules are imported."""

OF_FUNCTION: Final[dict[Callable[..., Values], Formula]] = {}


F = TypeVar("F", bound=Callable[..., Values])


def formula(equation: str, *, ref: str, words: str = "") -> Callable[[F], F]:
    """Register a function as the formula `equation` ("S_A = f*(1.25*S_c + 0.25*S_h)") and return it unchanged.

    Parameters
    ----------
    equation : result symbol, "=", and text in the function's own parameter names.
    ref : published source with edition and clause.
    words : what the line is, if the meaning of the result symbol does not say it well.
    """
    symbol, _, body = (part.strip() for part in equation.partition("="))

    def register(function: F) -> F:
        parameters = inspect.signature(function).parameters
        entry = Formula(
            name=f"{function.__module__}.{function.__qualname__}",
            symbol=symbol,
            text=body,
            ref=ref,
            words=words or SYMBOLS[symbol].meaning,
            function=function,
            parameters=tuple(parameters),
            defaults={name: p.default for name, p in parameters.items() if p.default is not inspect.Parameter.empty},
        )
        FORMULAS[entry.name] = OF_FUNCTION[function] = entry
        return function

    return register


def formula_of(function: Callable[..., Values]) -> Formula:
    """The formula that stands beside a function."""
    return OF_FUNCTION[function]


@dataclass(frozen=True)
class Choice:
    """A rule with a condition: in a column `np.where`, in a trace the condition with its numbers, then the branch.

    `condition` is text as in a formula ("S_h > S_L"); `parameters` are the symbols it reads.
    """

    condition: str
    yes: "Rule"
    no: "Rule"

    @cached_property
    def tree(self) -> ast.expr:
        return ast.parse(self.condition, mode="eval").body

    @cached_property
    def parameters(self) -> tuple[str, ...]:
        names = (node.id for node in ast.walk(self.tree) if isinstance(node, ast.Name))
        return tuple(dict.fromkeys(name for name in names if name not in FUNCTIONS))

    @cached_property
    def code(self) -> Any:
        return compile(ast.Expression(self.tree), self.condition, "eval")

    def test(self, pool: Mapping[str, Values]) -> Values:
        return eval(self.code, {"__builtins__": {}, **FUNCTIONS}, picked(self.parameters, pool))


@dataclass(frozen=True)
class StepTable:
    """A factor given in steps: `values[i]` up to `limits[i]` of the variable, the last value above all limits."""

    symbol: str
    of: str
    limits: tuple[float, ...]
    values: tuple[float, ...]
    ref: str

    @property
    def parameters(self) -> tuple[str, ...]:
        return (self.of,)

    def __call__(self, x: Values) -> Values:
        return np.asarray(self.values)[np.searchsorted(self.limits, x, side="left")]


Rule = Callable[..., Values] | Choice | StepTable


def picked(parameters: Iterable[str], pool: Mapping[str, Values], optional: Iterable[str] = ()) -> dict[str, Values]:
    """The symbols that a rule declares, taken from the pool under their own name or that of the same meaning."""
    found: dict[str, Values] = {}
    missing = []
    for name in parameters:
        for key in (name, SYMBOLS[name].same_as):
            if key is not None and key in pool:
                found[name] = pool[key]
                break
        else:
            if name not in optional:
                missing.append(name)
    if missing:
        raise MissingInput(*(Fault(SYMBOLS[m].meaning, None, allowed="a value for this clause") for m in missing))
    return found


def pick(rule: Callable[..., Values], pool: Mapping[str, Values]) -> dict[str, Values]:
    """The arguments of a formula out of the pool; what the code fixes itself stays at its default."""
    entry = formula_of(rule)
    return picked(entry.parameters, pool, entry.defaults)

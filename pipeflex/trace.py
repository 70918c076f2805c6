"""Formulas that carry their own text, and the two ways to run them: plainly, or with a trace.

A formula is a function with one line of evaluable text in its own parameter names. A method calls it through
`calc`, which is `PLAIN` for a column of many designs and a `Trace` for a column of one: the numbers are the
same, the trace keeps the steps from which a calc sheet is printed.
"""

import ast
import inspect
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, Final, Protocol, TypeVar

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
        return eval(self.code, {"__builtins__": {}, **FUNCTIONS}, {**self.defaults, **values})  # noqa: S307


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
            defaults={
                name: p.default for name, p in parameters.items() if p.default is not inspect.Parameter.empty
            },
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
        return eval(self.code, {"__builtins__": {}, **FUNCTIONS}, picked(self.parameters, pool))  # noqa: S307


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


def picked(
    parameters: Iterable[str], pool: Mapping[str, Values], optional: Iterable[str] = ()
) -> dict[str, Values]:
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


def follow(chain: Sequence[Rule], pool: dict[str, Values], calc: "Calc") -> Values:
    """Run a chain of rules, each adding its symbol to the pool; the last value is the answer."""
    value: Values = None
    for rule in chain:
        symbol, value = calc.rule(rule, pool)
        pool[symbol] = value
    return value


# --- steps ---------------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class Given:
    """An input or a looked-up value, with where it comes from."""

    symbol: str
    value: float
    origin: str
    words: str


@dataclass(frozen=True, slots=True)
class Condition:
    """The condition of a choice with its numbers, and which way it went."""

    choice: Choice
    args: tuple[tuple[str, float], ...]
    holds: bool


@dataclass(frozen=True, slots=True)
class Worked:
    """One formula with its numbers. `args`: parameter, symbol shown for it, number."""

    symbol: str
    formula: Formula
    args: tuple[tuple[str, str, float], ...]
    value: float
    words: str
    condition: Condition | None = None
    where: str = ""


@dataclass(frozen=True, slots=True)
class Stepped:
    """A value out of a step table."""

    symbol: str
    table: StepTable
    of: float
    value: float


@dataclass(frozen=True, slots=True)
class Tabled:
    """One formula over several legs, points or states; `governs` is the row that is substituted next, if any.

    `columns`: symbol and its numbers; the result column comes last.
    """

    words: str
    formula: Formula
    over: str
    names: tuple[str, ...]
    columns: tuple[tuple[str, tuple[float, ...]], ...]
    governs: int | None


@dataclass(frozen=True, slots=True)
class Matrix:
    """A matrix solution, X = solve(C, X_d) and the like, with its numbers as a table.

    `heads`: column heads; `rows`: row label and SI numbers; `kinds`: kind of each column (or None for plain numbers).
    """

    words: str
    equation: str
    ref: str
    heads: tuple[str, ...]
    kinds: tuple[str | None, ...]
    rows: tuple[tuple[str, tuple[float, ...]], ...]


@dataclass(frozen=True, slots=True)
class Said:
    """A sentence of the derivation; with `heading`, the title of what follows."""

    text: str
    heading: bool = False


Step = Given | Worked | Stepped | Tabled | Matrix | Said


# --- the two ways to run ---------------------------------------------------------------------------


class Calc(Protocol):
    """What a method calls: the same numbers with `PLAIN` and with a `Trace`."""

    tracing: bool

    def __call__(
        self,
        function: Callable[..., Values],
        *,
        symbol: str | None = None,
        shown: Mapping[str, str] | None = None,
        words: str = "",
        **args: Values,
    ) -> Values: ...

    def given(self, symbol: str, value: Values, origin: str, words: str = "") -> Values: ...

    def each(
        self, function: Callable[..., Values], *, over: str, names: Sequence[str], words: str = "", **args: Values
    ) -> Values: ...

    def worst(
        self, function: Callable[..., Values], *, over: str, names: Sequence[str], words: str = "", **args: Values
    ) -> tuple[Values, Values]: ...

    def rule(self, rule: Rule, pool: Mapping[str, Values]) -> tuple[str, Values]: ...

    def say(self, text: str, heading: bool = False) -> None: ...

    def show(self, step: Step) -> None: ...


class Plain:
    """Runs formulas and keeps nothing."""

    tracing = False

    def __call__(
        self,
        function: Callable[..., Values],
        *,
        symbol: str | None = None,
        shown: Mapping[str, str] | None = None,
        words: str = "",
        **args: Values,
    ) -> Values:
        return function(**args)

    def given(self, symbol: str, value: Values, origin: str, words: str = "") -> Values:
        return value

    def each(
        self, function: Callable[..., Values], *, over: str, names: Sequence[str], words: str = "", **args: Values
    ) -> Values:
        return function(**args)

    def worst(
        self, function: Callable[..., Values], *, over: str, names: Sequence[str], words: str = "", **args: Values
    ) -> tuple[Values, Values]:
        """Greatest value over the first axis and its index, row by row."""
        values = np.asarray(function(**args))
        index = values.argmax(axis=0)
        return np.take_along_axis(values, index[None], axis=0)[0], index

    def rule(self, rule: Rule, pool: Mapping[str, Values]) -> tuple[str, Values]:
        """One rule of a chain: its symbol and value."""
        if isinstance(rule, Choice):
            symbol, yes = self.rule(rule.yes, pool)
            _, no = self.rule(rule.no, pool)
            return symbol, np.where(rule.test(pool), yes, no)
        if isinstance(rule, StepTable):
            return rule.symbol, rule(picked(rule.parameters, pool)[rule.of])
        return formula_of(rule).symbol, rule(**pick(rule, pool))

    def say(self, text: str, heading: bool = False) -> None:
        return None

    def show(self, step: Step) -> None:
        return None


PLAIN: Final = Plain()


def _one(value: Values) -> float:
    """The number of a column of one row."""
    return float(value) if np.ndim(value) == 0 else float(np.asarray(value).item())


class Trace(Plain):
    """Runs formulas on a column of one row and keeps every step in the order of the calls.

    In one trace a symbol has one value: a second, different one is a mistake of the method's author.
    """

    tracing = True

    def __init__(self) -> None:
        self.steps: list[Step] = []
        self.values: dict[str, float] = {}

    def _bind(self, symbol: str, value: float) -> None:
        known = self.values.setdefault(symbol, value)
        if known != value:
            raise AssertionError(f"{symbol} has two values in one trace: {known!r} and {value!r}")

    def __call__(
        self,
        function: Callable[..., Values],
        *,
        symbol: str | None = None,
        shown: Mapping[str, str] | None = None,
        words: str = "",
        **args: Values,
    ) -> Values:
        value = function(**args)
        self._worked(formula_of(function), args, value, symbol, shown or {}, words)
        return value

    def _worked(
        self,
        entry: Formula,
        args: Mapping[str, Values],
        value: Values,
        symbol: str | None = None,
        shown: Mapping[str, str] | None = None,
        words: str = "",
        condition: Condition | None = None,
        where: str = "",
    ) -> None:
        shown = shown or {}
        given = {**entry.defaults, **args}
        number = _one(value)
        self._bind(symbol or entry.symbol, number)
        self.steps.append(
            Worked(
                symbol or entry.symbol,
                entry,
                tuple((p, shown.get(p, p), _one(given[p])) for p in entry.parameters),
                number,
                words or (SYMBOLS[symbol].meaning if symbol else entry.words),
                condition,
                where,
            )
        )

    def given(self, symbol: str, value: Values, origin: str, words: str = "") -> Values:
        number = _one(value)
        self._bind(symbol, number)
        self.steps.append(Given(symbol, number, origin, words or SYMBOLS[symbol].meaning))
        return value

    def _tabled(
        self,
        function: Callable[..., Values],
        over: str,
        names: Sequence[str],
        words: str,
        args: Mapping[str, Values],
        values: Values,
        governs: int | None,
    ) -> None:
        entry = formula_of(function)
        count = len(names)

        def column(value: Values) -> tuple[float, ...]:
            return tuple(float(v) for v in np.broadcast_to(np.asarray(value, float), (count, 1))[:, 0])

        varying = tuple((p, column(v)) for p, v in args.items() if np.ndim(v) > 1)
        self.steps.append(
            Tabled(
                words or entry.words,
                entry,
                over,
                tuple(names),
                (*varying, (entry.symbol, column(values))),
                governs,
            )
        )

    def each(
        self, function: Callable[..., Values], *, over: str, names: Sequence[str], words: str = "", **args: Values
    ) -> Values:
        values = function(**args)
        self._tabled(function, over, names, words, args, values, None)
        return values

    def worst(
        self, function: Callable[..., Values], *, over: str, names: Sequence[str], words: str = "", **args: Values
    ) -> tuple[Values, Values]:
        values, index = super().worst(function, over=over, names=names, **args)
        at = int(index[0])
        if len(names) > 1:
            self._tabled(function, over, names, words, args, function(**args), at)
        governing = {p: np.asarray(v)[at] if np.ndim(v) > 1 else v for p, v in args.items()}
        self._worked(formula_of(function), governing, values, words=words, where=names[at])
        return values, index

    def rule(self, rule: Rule, pool: Mapping[str, Values]) -> tuple[str, Values]:
        condition: Condition | None = None
        while isinstance(rule, Choice):
            holds = bool(_one(rule.test(pool)))
            args = tuple((p, _one(v)) for p, v in picked(rule.parameters, pool).items())
            condition = Condition(rule, args, holds)
            rule = rule.yes if holds else rule.no
        if isinstance(rule, StepTable):
            of = picked(rule.parameters, pool)[rule.of]
            value = rule(of)
            self._bind(rule.symbol, _one(value))
            self.steps.append(Stepped(rule.symbol, rule, _one(of), _one(value)))
            return rule.symbol, value
        args_of = pick(rule, pool)
        value = rule(**args_of)
        self._worked(formula_of(rule), args_of, value, condition=condition)
        return formula_of(rule).symbol, value

    def say(self, text: str, heading: bool = False) -> None:
        self.steps.append(Said(text, heading))

    def show(self, step: Step) -> None:
        """Keep a step that the method has made itself (a matrix solution)."""
        self.steps.append(step)

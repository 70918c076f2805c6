"""Two ways to run formulas: plainly, or with a trace that keeps the steps of the derivation.

A method calls every formula through `calc`, which is `PLAIN` for a column of many designs and a `Trace` for a column
of one: the numbers are the same, the trace keeps the steps from which a calc sheet is printed.
"""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Final, Protocol

import numpy as np

from pipeflex.formulas import FORMULAS, Choice, Formula, Rule, StepTable, Values, formula, formula_of, pick, picked
from pipeflex.quantities import SYMBOLS

__all__ = [
    "FORMULAS", "PLAIN", "Calc", "Choice", "Condition", "Formula", "Given", "Matrix", "Plain", "Rule", "Said", "Step",
    "StepTable", "Stepped", "Tabled", "Trace", "Values", "Worked", "follow", "formula", "formula_of", "pick", "picked",
]  # fmt: skip


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
    return float(value.item() if isinstance(value, np.ndarray) else value)


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

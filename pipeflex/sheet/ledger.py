"""The ledger: the steps of a derivation as numbered lines."""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace
from typing import Literal

from pipeflex import present
from pipeflex.present import UnitSystem
from pipeflex.quantities import SYMBOLS
from pipeflex.sheet import expression
from pipeflex.sheet.expression import Expression
from pipeflex.sheet.numbers import alike
from pipeflex.trace import Given, Matrix, Said, Step, Stepped, Tabled, Worked

_WIDEST, _BETWEEN = 110, 3
"""Letters beside each other that paper takes, and those left between columns."""

Form = Literal["heading", "sentence", "value", "worked", "table", "matrix"]


@dataclass(frozen=True, slots=True)
class Grid:
    """A small table inside the ledger. `marked`: the row that governs, if one does."""

    heads: tuple[Expression, ...]
    rows: tuple[tuple[str, ...], ...]
    marked: int | None = None

    def parts(self, widest: int = _WIDEST) -> "Iterator[Grid]":
        """The grid cut between columns, each part with the first column and at most so many letters wide."""
        columns = list(zip(*([h.text for h in self.heads], *self.rows), strict=True))
        widths = [max(map(len, column)) + _BETWEEN for column in columns]
        start = 1
        while start < len(columns):
            end, taken = start + 1, widths[0] + widths[start]
            while end < len(columns) and taken + widths[end] <= widest:
                taken += widths[end]
                end += 1
            chosen = (0, *range(start, end))
            rows = tuple(tuple(row[i] for i in chosen) for row in self.rows)
            yield Grid(tuple(self.heads[i] for i in chosen), rows, self.marked)
            start = end


@dataclass(frozen=True, slots=True)
class Line:
    """One line of the ledger, for one unit system.

    number : counted from 1; None for headings and sentences. words : what the line is, or the sentence.
    symbol, formula, numbers, result : `symbol = formula = numbers = result`, absent parts None or empty.
    reason, reason_numbers : the condition that chose this formula. where : the leg, point or state it is for.
    """

    form: Form
    words: str
    number: int | None = None
    symbol: Expression | None = None
    formula: Expression | None = None
    numbers: Expression | None = None
    result: str = ""
    source: str = ""
    reason: Expression | None = None
    reason_numbers: Expression | None = None
    where: str = ""
    grid: Grid | None = None

    @property
    def equation(self) -> Expression | None:
        """Symbol and formula as one expression."""
        if self.symbol is None:
            return self.formula
        return self.symbol if self.formula is None else Expression.joined(" = ", (self.symbol, self.formula))


def ledger(steps: Iterable[Step], units: UnitSystem = "metric") -> tuple[Line, ...]:
    """The lines of a derivation, numbered in order."""
    return tuple(_numbered(_line(step, units) for step in steps))


def _numbered(lines: Iterable[Line]) -> Iterator[Line]:
    count = 0
    for line in lines:
        if line.form in ("heading", "sentence"):
            yield line
        else:
            count += 1
            yield replace(line, number=count)


def _line(step: Step, units: UnitSystem) -> Line:
    match step:
        case Said(text, heading):
            return Line("heading" if heading else "sentence", text)
        case Given():
            return Line(
                "value",
                step.words,
                symbol=expression.glyph(step.symbol),
                result=_text(step.value, step.symbol, units),
                source=step.origin,
            )
        case Worked():
            return _worked(step, units)
        case Stepped():
            return _stepped(step, units)
        case Tabled():
            return _tabled(step, units)
        case Matrix():
            return _matrix(step, units)


def _text(value: float, symbol: str, units: UnitSystem) -> str:
    return present.text(value, SYMBOLS[symbol].kind, units)


def _worked(step: Worked, units: UnitSystem) -> Line:
    reason = expression.condition(step.condition, units) if step.condition else (None, None)
    return Line(
        "worked",
        step.words,
        symbol=expression.glyph(step.symbol),
        formula=expression.symbolic(step.formula, {p: s for p, s, _ in step.args}),
        numbers=expression.substituted(step.formula, step.args, units),
        result=_text(step.value, step.symbol, units),
        source=step.formula.ref,
        reason=reason[0],
        reason_numbers=reason[1],
        where=step.where,
    )


def _stepped(step: Stepped, units: UnitSystem) -> Line:
    """A value out of steps: the whole table, the step that was taken marked."""
    table = step.table
    limits = [f"up to {_text(limit, table.of, units)}" for limit in table.limits] + ["above"]
    values = [_text(value, table.symbol, units) for value in table.values]
    taken = sum(step.of > limit for limit in table.limits)
    symbol, of = expression.glyph(table.symbol), expression.glyph(table.of)
    return Line(
        "table",
        SYMBOLS[step.symbol].meaning,
        symbol=expression.glyph(step.symbol),
        formula=Expression(f"{symbol.text}({of.text})", f"{symbol.html}({of.html})"),
        numbers=Expression.joined(" = ", (of, expression.quantity(step.of, table.of, units))),
        result=_text(step.value, step.symbol, units),
        source=table.ref,
        grid=Grid((of, symbol), tuple(zip(limits, values, strict=True)), taken),
    )


def _tabled(step: Tabled, units: UnitSystem) -> Line:
    columns = [alike(values, SYMBOLS[symbol].kind, units) for symbol, values in step.columns]
    return Line(
        "table",
        step.words,
        symbol=expression.glyph(step.columns[-1][0]),
        formula=expression.symbolic(step.formula),
        source=step.formula.ref,
        grid=Grid(
            (Expression.plain(step.over), *(expression.glyph(s) for s, _ in step.columns)),
            tuple(zip(step.names, *columns, strict=True)),
            step.governs,
        ),
    )


def _matrix(step: Matrix, units: UnitSystem) -> Line:
    columns = [
        [f"{v:.4g}".replace("-", "\u2212") for v in values] if kind is None else alike(values, kind, units)
        for kind, values in zip(step.kinds, zip(*(row for _, row in step.rows), strict=True), strict=True)
    ]
    names = [name for name, _ in step.rows]
    return Line(
        "matrix",
        step.words,
        formula=expression.written(step.equation),
        source=step.ref,
        grid=Grid(
            (Expression.plain(""), *map(expression.head, step.heads)),
            tuple(zip(names, *columns, strict=True)),
        ),
    )

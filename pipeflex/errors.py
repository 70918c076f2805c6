"""Every exception of the package.

PipeflexError
├── InputError (ValueError)              something given is wrong: a desk marks that field
│   ├── UnitError                        text that is no quantity of the wanted kind
│   └── MissingInput                     something that must be given is absent
├── TableError (LookupError)             no such entry in a table: the nearest ones are named
├── ScopeError                           the answer would mean nothing outside the method's or code's limits
└── UnstableLayoutError (ArithmeticError)  the run floats or its supports contradict each other

Each carries `faults`; `refuse` is the one way to raise for conditions on numbers.
"""

from collections.abc import Iterable
from dataclasses import dataclass, replace
from typing import Any, Never

import numpy as np

from pipeflex.present import UnitSystem, number, text

_ROWS_NAMED = 5
_TEXT_SHOWN = 60


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing that is wrong.

    field : dotted path of the field in trade words ("pipe.wall").
    given : the value as given: text, or an SI number of `kind`.
    kind : kind of quantity of `given`, for its unit.
    allowed : what is permitted, in words; numbers in it are formatted from `low` and `high` if those are given.
    rows : rows of a column at fault; empty for a single design.
    near : nearest entries of a table, or the readings of an ambiguous text.
    """

    field: str
    given: object = None
    allowed: str = ""
    kind: str | None = None
    low: float | None = None
    high: float | None = None
    rows: tuple[int, ...] = ()
    near: tuple[str, ...] = ()

    def prefixed(self, path: str) -> "Fault":
        return replace(self, field=f"{path}.{self.field}" if self.field else path)

    def given_text(self, units: UnitSystem = "metric") -> str:
        if isinstance(self.given, str):
            body = self.given if len(self.given) <= _TEXT_SHOWN else self.given[:_TEXT_SHOWN] + "…"
            return repr(body)
        if isinstance(self.given, (int, float, np.floating, np.integer)) and not isinstance(self.given, bool):
            value = float(self.given)
            if not np.isfinite(value) or self.kind is None:
                return f"{value:g}"
            return text(value, self.kind, units)
        return "nothing" if self.given is None else str(self.given)[:_TEXT_SHOWN]

    def allowed_text(self, units: UnitSystem = "metric") -> str:
        parts = [self.allowed] if self.allowed else []
        if self.kind is not None:
            if self.low is not None and self.high is not None:
                low, high = number(self.low, self.kind, units), text(self.high, self.kind, units)
                parts.append(f"{low} .. {high}")
            elif self.low is not None:
                parts.append(f"at least {text(self.low, self.kind, units)}")
            elif self.high is not None:
                parts.append(f"at most {text(self.high, self.kind, units)}")
        return ", ".join(parts)

    def text(self, units: UnitSystem = "metric") -> str:
        """The fault in one line, numbers in the given unit system."""
        line = f"{self.field}: {self.given_text(units)}" if self.field else self.given_text(units)
        if allowed := self.allowed_text(units):
            line += f"; permitted: {allowed}"
        if self.near:
            line += f"; nearest: {', '.join(self.near)}"
        if self.rows:
            more = len(self.rows) - _ROWS_NAMED
            rows = ", ".join(str(r) for r in self.rows[:_ROWS_NAMED])
            line += f" (row{'s' if len(self.rows) > 1 else ''} {rows}{f' and {more} more' if more > 0 else ''})"
        return line


class PipeflexError(Exception):
    """Root of the package's errors; `faults` holds everything that is wrong at once."""

    def __init__(self, *faults: Fault) -> None:
        super().__init__(*faults)
        self.faults: tuple[Fault, ...] = faults

    def __str__(self) -> str:
        return self.text()

    def text(self, units: UnitSystem = "metric") -> str:
        return "\n".join(fault.text(units) for fault in self.faults)

    def prefixed(self, path: str) -> "PipeflexError":
        return type(self)(*(fault.prefixed(path) for fault in self.faults))


class InputError(PipeflexError, ValueError):
    """Something given is wrong."""


class UnitError(InputError):
    """Text that is no quantity of the wanted kind."""


class MissingInput(InputError):
    """Something that must be given is absent."""


class TableError(PipeflexError, LookupError):
    """No such entry in a table."""


class ScopeError(PipeflexError):
    """The answer would mean nothing outside the limits of the method or code."""


class UnstableLayoutError(PipeflexError, ArithmeticError):
    """The run floats, or its supports contradict each other."""


Bad = tuple[Any, Fault]
"""A condition that is true where it is wrong (a bool, or an array of one bool a row), and its fault."""


def refuse(error: type[PipeflexError], *checks: Bad) -> None:
    """Raise `error` once for all checks that fail in any row; return if none does.

    A fault whose `given` is an array gets the value of the first row at fault.
    """
    faults = []
    for bad, fault in checks:
        if not np.any(bad):
            continue
        if np.ndim(bad):
            bad = np.asarray(bad)
            rows = tuple(int(r) for r in np.flatnonzero(bad))
            given = fault.given
            if isinstance(given, np.ndarray) and given.ndim:
                given = np.broadcast_to(np.asarray(given), bad.shape).ravel()[rows[0]]
            fault = replace(fault, given=given, rows=rows if bad.size > 1 else ())
        faults.append(fault)
    if faults:
        raise error(*faults)


def refuse_all(errors: Iterable[PipeflexError]) -> None:
    """Raise one error for several: its type is theirs if they agree, `InputError` otherwise."""
    errors = list(errors)
    if not errors:
        return
    kinds = {type(e) for e in errors}
    kind = kinds.pop() if len(kinds) == 1 else InputError
    _raise(kind, [fault for e in errors for fault in e.faults])


def _raise(kind: type[PipeflexError], faults: Iterable[Fault]) -> Never:
    raise kind(*faults) from None

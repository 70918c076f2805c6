"""The design: the whole input of one line, or of a column of lines of one skeleton."""

import hashlib
from dataclasses import field
from typing import Any, Self

import numpy as np

from pipeflex.errors import Fault, InputError, refuse
from pipeflex.model.duty import Confirmed, Duty, Limits, PipingCode, Title
from pipeflex.model.fields import many, names, sub
from pipeflex.model.layout import Layout
from pipeflex.model.pipe import Pipe
from pipeflex.model.record import Record, record, rows_of


@record
class Design(Record):
    """Everything that an answer depends on.

    `confirmed` : table values as read in the licensed copy. `demo` : paths of demonstration values that nobody
    has touched yet.
    """

    pipe: Pipe = sub(lambda: Pipe)
    layout: Layout = sub(lambda: Layout)
    duty: Duty = sub(lambda: Duty)
    code: PipingCode = sub(lambda: PipingCode)
    limits: Limits = sub(lambda: Limits, factory=Limits)
    title: Title = sub(lambda: Title, factory=Title)
    confirmed: tuple[Confirmed, ...] = many(lambda: Confirmed, columnar=False)
    demo: tuple[str, ...] = names(default=())
    rows: int | None = field(init=False, default=None, repr=False)
    """Rows of a column; None for a single design."""

    def check(self) -> None:
        object.__setattr__(self, "rows", rows_of(self))
        hottest, coldest = self.hottest(), self.coldest()
        refuse(
            InputError,
            (
                hottest <= coldest,
                Fault(
                    "duty.cases", hottest, "a hottest temperature above the coldest", "temperature",
                    low=float(np.ravel(coldest)[0]),
                ),
            ),
        )  # fmt: skip

    def temperatures(self) -> np.ndarray:
        """Metal temperatures of the cases, (cases, rows) [K]."""
        return np.stack(np.broadcast_arrays(*(np.atleast_1d(c.temperature) for c in self.duty.cases)))

    def hottest(self) -> np.ndarray:
        """Hottest metal temperature ever reached, tie-in days included, (rows,) [K]."""
        found: np.ndarray = np.maximum(self.temperatures().max(axis=0), self.duty.install_high)
        return found

    def coldest(self) -> np.ndarray:
        """Coldest metal temperature ever reached, tie-in days included, (rows,) [K]."""
        found: np.ndarray = np.minimum(self.temperatures().min(axis=0), self.duty.install_low)
        return found

    def column(self) -> Self:
        """The same design with a row axis on every number; a single design becomes a column of one row."""
        rows = self.rows or 1

        def widen(value: Any) -> Any:
            if isinstance(value, np.ndarray):
                return value
            return np.array([value]) if rows == 1 else np.broadcast_to(value, (rows,))

        return self.mapped(widen).with_raw(rows=rows)

    def row(self, i: int) -> Self:
        """One row of a column as a single design."""
        rows = self.rows or 1
        refuse(InputError, (not -rows <= i < rows, Fault("row", i, allowed=f"0 to {rows - 1}")))

        def pick(value: Any) -> Any:
            return value[i].item() if np.ndim(value) else value

        return self.mapped(pick).with_raw(rows=None)

    def taken(self, rows: np.ndarray) -> Self:
        """The given rows of a column, in that order."""
        return self.mapped(lambda v: v[rows] if np.ndim(v) else v).with_raw(rows=len(rows))

    @property
    def fingerprint(self) -> str:
        """Eight characters that change with any input, table value or clause of the design."""
        content = tuple(getattr(self, name) for name, _ in self.specs() if name != "demo")
        parts = tuple(v.content() if isinstance(v, Record) else tuple(c.content() for c in v) for v in content)
        return hashlib.sha256(repr(parts).encode()).hexdigest()[:8]

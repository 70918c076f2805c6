"""Fields of the records: each declares its kind and limits once; validation, files and desks read that."""

import math
from collections.abc import Callable, Iterator, Mapping
from dataclasses import MISSING, dataclass, field, fields
from enum import StrEnum
from typing import Any, Final

import numpy as np

from pipeflex.errors import Fault, InputError, MissingInput, PipeflexError, refuse
from pipeflex.formulas import OF_FUNCTION, Choice, StepTable
from pipeflex.quantities import KINDS
from pipeflex.units import si

SPEC: Final = "spec"
_MAX_TEXT = 20_000


@dataclass(frozen=True, slots=True)
class Limits:
    """Permitted range of a number; `above` and `below` exclude the end itself."""

    above: float | None = None
    at_least: float | None = None
    at_most: float | None = None
    below: float | None = None

    def broken(self, value: Any) -> Any:
        bad = np.zeros(np.shape(value), bool)
        if self.above is not None:
            bad = bad | (value <= self.above)
        if self.at_least is not None:
            bad = bad | (value < self.at_least)
        if self.at_most is not None:
            bad = bad | (value > self.at_most)
        if self.below is not None:
            bad = bad | (value >= self.below)
        return bad

    @property
    def words(self) -> str:
        parts = []
        if self.above is not None:
            parts.append("above the lower end")
        if self.below is not None:
            parts.append("below the upper end")
        return ", ".join(parts)


@dataclass(frozen=True, slots=True)
class Number:
    """A number field: an SI float, or an array of one float a row."""

    kind: str
    limits: Limits = Limits()
    optional: bool = False
    unlimited: bool = False
    label: str = ""
    help: str = ""
    basis: str = ""
    """Why the default is what it is ("common practice", a code clause)."""

    def take(self, value: Any, name: str) -> Any:
        if value is None:
            if self.optional:
                return None
            raise MissingInput(Fault(name, None, allowed=f"a {self.kind}"))
        number = si(value, self.kind, field=name)
        bad = np.isnan(number) if self.unlimited else ~np.isfinite(number)
        fault = Fault(name, number, self._allowed(), self.kind, *self._ends())
        refuse(InputError, (bad | (~bad & self.limits.broken(number)), fault))
        if np.ndim(number):
            number = np.array(number, float)
            if number.ndim != 1:
                raise InputError(Fault(name, f"an array of {number.ndim} axes", allowed="one number a row"))
            number.flags.writeable = False
        return number

    def _ends(self) -> tuple[float | None, float | None]:
        low = self.limits.at_least if self.limits.at_least is not None else self.limits.above
        high = self.limits.at_most if self.limits.at_most is not None else self.limits.below
        return low, high

    def _allowed(self) -> str:
        words = self.limits.words or "a finite number"
        return words if not self.unlimited else f"{words} or unlimited"


@dataclass(frozen=True, slots=True)
class Text:
    """A text field: data, never markup."""

    label: str = ""
    help: str = ""
    longest: int = 200
    required: bool = False

    def take(self, value: Any, name: str) -> str:
        if not isinstance(value, str):
            raise InputError(Fault(name, str(value)[:60], allowed="text"))
        if len(value) > self.longest:
            raise InputError(Fault(name, value, allowed=f"at most {self.longest} characters, given {len(value)}"))
        if any(ord(c) < 32 and c not in "\n\t" for c in value):
            raise InputError(Fault(name, value, allowed="printable characters"))
        if self.required and not value.strip():
            raise MissingInput(Fault(name, value, allowed="some text"))
        return value


@dataclass(frozen=True, slots=True)
class Pick:
    """One of a few words."""

    options: tuple[str, ...]
    label: str = ""
    help: str = ""

    def take(self, value: Any, name: str) -> str:
        if value not in self.options:
            raise InputError(Fault(name, str(value), allowed="one of " + ", ".join(self.options)))
        return str(value)


@dataclass(frozen=True, slots=True)
class Flag:
    """Yes or no."""

    label: str = ""
    help: str = ""

    def take(self, value: Any, name: str) -> bool:
        if not isinstance(value, (bool, np.bool_)):
            raise InputError(Fault(name, str(value), allowed="true or false"))
        return bool(value)


@dataclass(frozen=True, slots=True)
class Whole:
    """A whole number (a leg, a corner); with `columnar` also an array of one a row (a member of a list)."""

    at_least: int = 0
    label: str = ""
    optional: bool = False
    columnar: bool = False

    def take(self, value: Any, name: str) -> Any:
        if value is None and self.optional:
            return None
        number = np.asarray(value)
        if isinstance(value, bool) or number.dtype.kind not in "iu" or (number.ndim and not self.columnar):
            raise InputError(Fault(name, str(value)[:60], allowed="a whole number"))
        refuse(InputError, (number < self.at_least, Fault(name, number, f"at least {self.at_least}")))
        if number.ndim == 0:
            return int(number)
        number = number.copy()
        number.flags.writeable = False
        return number


@dataclass(frozen=True, slots=True)
class Sub:
    """A record, or several of one kind."""

    kind: Callable[[], type]
    many: bool = False
    optional: bool = False
    columnar: bool = True
    """Whether the numbers inside get a row axis in a column."""

    def take(self, value: Any, name: str) -> Any:
        kind = self.kind()
        if value is None and self.optional:
            return None
        if self.many:
            if isinstance(value, kind):
                value = (value,)
            if not isinstance(value, (tuple, list)) or not all(isinstance(v, kind) for v in value):
                raise InputError(Fault(name, str(value)[:60], allowed=f"records of kind {kind.__name__}"))
            return tuple(value)
        if not isinstance(value, kind):
            raise InputError(Fault(name, str(value)[:60], allowed=f"a {kind.__name__}"))
        return value


@dataclass(frozen=True, slots=True)
class Names:
    """A list of words."""

    label: str = ""

    def take(self, value: Any, name: str) -> tuple[str, ...]:
        if isinstance(value, str) or not all(isinstance(v, str) for v in value):
            raise InputError(Fault(name, str(value)[:60], allowed="a list of texts"))
        return tuple(value)


@dataclass(frozen=True, slots=True)
class Numbers:
    """Named numbers of one kind (the sizes of a shape)."""

    kind: str
    limits: Limits = Limits()
    label: str = ""

    def take(self, value: Any, name: str) -> "FrozenMap":
        one, taken, errors = Number(self.kind, self.limits), {}, []
        for key, number in dict(value).items():
            try:
                taken[str(key)] = one.take(number, f"{name}.{key}")
            except PipeflexError as error:
                errors.append(error)
        if errors:
            raise InputError(*(fault for e in errors for fault in e.faults))
        return FrozenMap(taken)


@dataclass(frozen=True, slots=True)
class Vector:
    """Several numbers of one kind in fixed order (three stiffnesses, three forces)."""

    kind: str
    size: int
    limits: Limits = Limits()
    unlimited: bool = False
    label: str = ""

    def take(self, value: Any, name: str) -> tuple[Any, ...]:
        if isinstance(value, (str, float, int)):
            value = (value,) * self.size
        if len(value) != self.size:
            raise InputError(Fault(name, f"{len(value)} numbers", allowed=f"{self.size} numbers"))
        one = Number(self.kind, self.limits, unlimited=self.unlimited)
        return tuple(one.take(v, f"{name}.{i + 1}") for i, v in enumerate(value))


@dataclass(frozen=True, slots=True)
class Anything:
    """Held as it is (clauses of a code, a curve's arrays): checked by the record that has it."""

    def take(self, value: Any, name: str) -> Any:
        return value


class FrozenMap(Mapping[str, Any]):
    """A small mapping that cannot change; it compares and hashes by content, in any order."""

    __slots__ = ("_items",)
    _items: dict[str, Any]

    def __init__(self, items: Mapping[str, Any] | None = None) -> None:
        object.__setattr__(self, "_items", dict(items or {}))

    def __getitem__(self, key: str) -> Any:
        return self._items[key]

    def __iter__(self) -> Iterator[str]:
        return iter(self._items)

    def __len__(self) -> int:
        return len(self._items)

    def __setattr__(self, name: str, value: Any) -> None:
        raise AttributeError("a FrozenMap cannot change")

    def __reduce__(self) -> tuple[Any, ...]:
        return FrozenMap, (self._items,)

    def __hash__(self) -> int:
        return hash(content(self))

    def __eq__(self, other: object) -> bool:
        return isinstance(other, FrozenMap) and content(self) == content(other)

    def __repr__(self) -> str:
        return f"FrozenMap({self._items!r})"


def content(value: Any) -> Any:
    """Hashable content of a field: arrays by shape and bytes, functions by their name."""
    if isinstance(value, np.ndarray):
        return (value.shape, value.tobytes())
    if isinstance(value, FrozenMap):
        return tuple(sorted((k, content(v)) for k, v in value.items()))
    if isinstance(value, tuple):
        return tuple(content(v) for v in value)
    if isinstance(value, StrEnum):
        return str(value)
    if isinstance(value, (Choice, StepTable)):
        return (type(value).__name__, *(content(getattr(value, f.name)) for f in fields(value)))
    if callable(value) and hasattr(value, "__qualname__"):
        known = OF_FUNCTION.get(value)
        return f"{value.__module__}.{value.__qualname__}" + (f": {known.text}" if known else "")
    if isinstance(value, float):
        return float(value) + 0.0  # a negative zero is a zero
    return value


def _field(spec: Any, default: Any, factory: Any = MISSING) -> Any:
    if factory is not MISSING:
        return field(default_factory=factory, metadata={SPEC: spec})
    return field(default=default, metadata={SPEC: spec})


def number(
    kind: str,
    *,
    above: float | None = None,
    at_least: float | None = None,
    at_most: float | None = None,
    below: float | None = None,
    default: Any = MISSING,
    optional: bool = False,
    unlimited: bool = False,
    label: str = "",
    help: str = "",
    basis: str = "",
) -> Any:
    """Declare a number field of a kind of `KINDS`; text and quantities given for it are parsed."""
    assert kind in KINDS
    if optional and default is MISSING:
        default = None
    if unlimited and default is MISSING:
        default = math.inf
    limits = Limits(above, at_least, at_most, below)
    return _field(Number(kind, limits, optional, unlimited, label, help, basis), default)


def text(*, default: Any = "", label: str = "", help: str = "", longest: int = 200, required: bool = False) -> Any:
    """Declare a text field."""
    return _field(Text(label, help, longest, required), MISSING if required else default)


def pick_of(*options: str, default: Any = MISSING, label: str = "", help: str = "") -> Any:
    """Declare a field that holds one of a few words."""
    return _field(Pick(options, label, help), default)


def flag(*, default: Any = False, label: str = "", help: str = "") -> Any:
    """Declare a yes-or-no field."""
    return _field(Flag(label, help), default)


def whole(
    *, at_least: int = 0, default: Any = MISSING, label: str = "", optional: bool = False, columnar: bool = False
) -> Any:
    """Declare a field for whole numbers: one for all rows, or with `columnar` one a row."""
    return _field(Whole(at_least, label, optional, columnar), None if optional and default is MISSING else default)


def sub(kind: Callable[[], type], *, optional: bool = False, factory: Any = MISSING) -> Any:
    """Declare a field that holds another record; `kind` is called for its class."""
    return _field(Sub(kind, optional=optional), None if optional else MISSING, factory)


def many(kind: Callable[[], type], *, factory: Any = tuple, columnar: bool = True) -> Any:
    """Declare a field that holds several records of one class."""
    return _field(Sub(kind, many=True, columnar=columnar), MISSING, factory)


def names(*, default: Any = (), label: str = "") -> Any:
    """Declare a field that holds a list of words."""
    return _field(Names(label), default)


def numbers(kind: str, *, at_least: float | None = None, at_most: float | None = None, label: str = "") -> Any:
    """Declare a field that holds named numbers."""
    return _field(Numbers(kind, Limits(at_least=at_least, at_most=at_most), label), MISSING, FrozenMap)


def vector(
    kind: str,
    size: int,
    *,
    default: Any,
    at_least: float | None = None,
    unlimited: bool = False,
    label: str = "",
) -> Any:
    """Declare a field that holds a few numbers in fixed order."""
    return _field(Vector(kind, size, Limits(at_least=at_least), unlimited, label), default)


def anything(*, default: Any = MISSING) -> Any:
    """Declare a field that is held as it is."""
    return _field(Anything(), default)

"""Records <-> plain tables, by the fields that the records declare.

A field that is nothing unless given (no text, no number, zero, unlimited, an empty list) is left out of a table
where it is nothing. Every other one is written, default or not, so that a file says all that its answer
depends on. Where the trade writes a record in another way than its fields stand, it has a `Form`.
"""

import datetime
import math
import re
from collections.abc import Callable, Collection, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import MISSING, dataclass, fields, replace
from decimal import Decimal
from difflib import get_close_matches
from typing import Any, Final, TypeVar

from pipeflex.errors import Fault, InputError, MissingInput, PipeflexError, UnitError, refuse_all
from pipeflex.model.fields import Flag, Names, Number, Numbers, Pick, Sub, Text, Vector, Whole
from pipeflex.model.record import Record
from pipeflex.notation import ascii_unit
from pipeflex.present import UNIT_SYSTEMS, display
from pipeflex.unit_names import permitted
from pipeflex.units import spelled

R = TypeVar("R", bound=Record)
Table = dict[str, Any]

_WHOLE = re.compile(r"-?\d+", re.ASCII)
_NUMBER = re.compile(r"-?(0|[1-9]\d*)(\.\d+)?(e[+-]?\d+)?")
_BARE: Final = ("ratio", "count")
"""Kinds whose numbers need no unit."""


class Faults(list[PipeflexError]):
    """Errors gathered while the rest is tried; `tell` raises once for all of them."""

    @contextmanager
    def at(self, path: str = "") -> Iterator[None]:
        """Keep an error that is raised within, with the path of the entry put before it."""
        try:
            yield
        except PipeflexError as error:
            self.append(error.prefixed(path) if path else error)

    @contextmanager
    def of(self, *entries: str) -> Iterator[None]:
        """Keep an error of a table look-up, under the name of the entry that asked for it."""
        try:
            yield
        except PipeflexError as error:
            self.append(type(error)(*(_under(entries, fault) for fault in error.faults)))

    def tell(self) -> None:
        refuse_all(self)


def _under(entries: tuple[str, ...], fault: Fault) -> Fault:
    name = fault.field.rpartition(".")[2]
    if name in entries:
        return replace(fault, field=name)
    return replace(fault, field=entries[0], allowed=f"for {fault.field}, {fault.allowed}")


@dataclass(frozen=True, slots=True)
class Form:
    """How one kind of record is written where the trade has a shorter way than its fields.

    fold : record, its table by the fields -> the table as the trade writes it.
    unfold : table, faults -> the fields that the trade's entries say; a fault is kept for each that they do not.
    keys : entries of the table beyond the fields. hidden : fields that have no entry of their own.
    """

    fold: Callable[[Any, Table], Table]
    unfold: Callable[[Table, Faults], Mapping[str, Any]]
    keys: tuple[str, ...] = ()
    hidden: tuple[str, ...] = ()


Forms = Mapping[type[Record], Form]


# ---------------------------------------------------------------------------------------------- writing


def table(record: Record, forms: Forms) -> Table:
    """The record as a table of texts, lists and tables."""
    form = forms.get(type(record))
    made = {}
    for name, spec in record.specs():
        value = getattr(record, name)
        if not (form and name in form.hidden) and not _left_out(value, _default(type(record), name)):
            made[name] = _entry(value, spec, forms)
    return form.fold(record, made) if form else made


def entry(value: float, kind: str) -> str | int | Decimal:
    """A number as it stands in a file: bare where the kind allows it, elsewhere as text with its unit."""
    text = spelled(value, kind)
    if kind not in _BARE or not _NUMBER.fullmatch(text):
        return text
    return int(text) if _WHOLE.fullmatch(text) else Decimal(text)


def _entry(value: Any, spec: Any, forms: Forms) -> Any:
    match spec:
        case Number():
            return entry(value, spec.kind)
        case Numbers():
            return {name: entry(number, spec.kind) for name, number in value.items()}
        case Vector():
            return [entry(number, spec.kind) for number in value]
        case Sub():
            return [table(one, forms) for one in value] if spec.many else table(value, forms)
        case Names():
            return list(value)
        case _:
            return value


def _left_out(value: Any, default: Any) -> bool:
    """Whether a field needs no entry: it is nothing, and would be if it were not given."""
    members = default if isinstance(default, tuple) else (default,)
    return all(m in (None, "", 0.0, math.inf) for m in members) and bool(value == default)


def _default(cls: type[Record], name: str) -> Any:
    field = next(f for f in fields(cls) if f.name == name)  # type: ignore[arg-type]
    return field.default if field.default_factory is MISSING else field.default_factory()


# ---------------------------------------------------------------------------------------------- reading


def built(cls: type[R], given: Any, forms: Forms, **known: Any) -> R:
    """The record that a table describes; `known` fields are given from elsewhere and have no entry.

    Raises
    ------
    PipeflexError
        Once, for everything that is wrong in the table, with the path of each entry within it.
    """
    if not isinstance(given, dict):
        raise InputError(Fault("", said(given), allowed="a table"))
    form, faults = forms.get(cls), Faults()
    out_of_sight = (*known, *(form.hidden if form else ()))
    specs = {name: spec for name, spec in cls.specs() if name not in out_of_sight}
    with faults.at():
        only_known(given, (*specs, *(form.keys if form else ())))
    values = {**known, **(form.unfold(given, faults) if form else {})}
    for name, spec in specs.items():
        if name in values:
            continue
        with faults.at():
            if name in given:
                values[name] = taken(given[name], spec, name, forms)
            elif _default(cls, name) is MISSING:
                raise MissingInput(Fault(name, None, allowed=_wanted(spec)))
    faults.tell()
    return cls(**values)


def only_known(given: Table, known: Collection[str]) -> None:
    """Refuse entries that a table does not have, and name the nearest that it has."""
    faults = [
        Fault(key, said(value), "an entry of this table", near=tuple(get_close_matches(key, known, 2) or known))
        for key, value in given.items()
        if key not in known
    ]
    if faults:
        raise InputError(*faults)


def taken(given: Any, spec: Any, name: str, forms: Forms) -> Any:
    """The value of one field from its entry, checked by what the field declares."""
    match spec:
        case Number():
            return _number(given, spec, name)
        case Numbers():
            return _numbers(given, spec, name)
        case Vector() if isinstance(given, list) and len(given) == spec.size:
            one = Number(spec.kind, spec.limits, unlimited=spec.unlimited)
            return _each(given, name, lambda g, at: _number(g, one, at), first=1)
        case Sub() if spec.many and isinstance(given, list):
            return _each(given, name, lambda g, at: _record(g, spec, at, forms))
        case Sub() if not spec.many:
            return _record(given, spec, name, forms)
        case Names() if isinstance(given, list):
            return spec.take(given, name)
        case Whole() if isinstance(given, int):
            return spec.take(given, name)
        case Pick() | Flag():
            return spec.take(given, name)
        case Text():
            plain = isinstance(given, (int, datetime.date)) and not isinstance(given, bool)
            return spec.take(str(given) if plain else given, name)
        case _:
            raise InputError(Fault(name, said(given), allowed=_wanted(spec)))


def said(given: Any) -> str:
    """What an entry is, in a few words."""
    if isinstance(given, bool):
        return str(given).lower()
    if isinstance(given, (dict, list)):
        return "a table" if isinstance(given, dict) else "a list"
    return str(given)


def _record(given: Any, spec: Sub, name: str, forms: Forms) -> Record:
    try:
        return built(spec.kind(), given, forms)
    except PipeflexError as error:
        raise error.prefixed(name) from None


def _each(given: list[Any], name: str, take: Callable[[Any, str], Any], first: int = 0) -> tuple[Any, ...]:
    faults, made = Faults(), []
    for i, one in enumerate(given, first):
        with faults.at():
            made.append(take(one, f"{name}.{i}"))
    faults.tell()
    return tuple(made)


def _numbers(given: Any, spec: Numbers, name: str) -> dict[str, float]:
    if not isinstance(given, dict):
        raise InputError(Fault(name, said(given), allowed=_wanted(spec)))
    one = Number(spec.kind, spec.limits)
    made = _each(list(given), name, lambda key, _: _number(given[key], one, f"{name}.{key}"))
    return dict(zip(given, made, strict=True))


def _number(given: Any, spec: Number, name: str) -> Any:
    if isinstance(given, str):
        return spec.take(given, name)
    if isinstance(given, bool) or not isinstance(given, (int, float)):
        raise UnitError(Fault(name, said(given), allowed=_wanted(spec)))
    if spec.kind not in _BARE:
        near = tuple(f'"{given} {ascii_unit(display(spec.kind, system).unit)}"' for system in UNIT_SYSTEMS)
        raise UnitError(Fault(name, said(given), allowed="a number with its unit, as text", near=near))
    try:
        return spec.take(float(given), name)
    except OverflowError:
        raise UnitError(Fault(name, said(given), allowed=_wanted(spec))) from None


def _wanted(spec: Any) -> str:
    """What a field takes, in words."""
    match spec:
        case Number():
            return permitted(spec.kind)
        case Numbers():
            return f"a table of names, each with a {spec.kind}"
        case Vector():
            return f"a list of {spec.size} numbers"
        case Sub():
            return "a list of tables" if spec.many else "a table"
        case Names():
            return "a list of texts"
        case Whole():
            return f"a whole number of at least {spec.at_least}"
        case Pick():
            return "one of " + ", ".join(spec.options)
    return "some text"

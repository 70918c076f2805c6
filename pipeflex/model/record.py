"""The frozen record: validated once, equal and hashed by content, one row or a column of rows."""

from collections.abc import Callable, Iterator
from dataclasses import dataclass, fields
from typing import Any, Final, Self, TypeVar, dataclass_transform

import numpy as np

from pipeflex.errors import Fault, InputError, PipeflexError, refuse_all
from pipeflex.model.fields import (
    SPEC,
    FrozenMap,
    Number,
    Numbers,
    Sub,
    Vector,
    Whole,
    anything,
    content,
    flag,
    many,
    names,
    number,
    numbers,
    pick_of,
    sub,
    text,
    vector,
    whole,
)

T = TypeVar("T")


class Record:
    """Base of the records of a design. Use `record` as decorator, and the field declarers for fields."""

    __slots__ = ()

    def __post_init__(self) -> None:
        errors = []
        for name, spec in self.specs():
            try:
                object.__setattr__(self, name, spec.take(getattr(self, name), name))
            except PipeflexError as error:
                errors.append(error)
        refuse_all(errors)
        self.check()

    def check(self) -> None:
        """Conditions between fields; a record that has some overrides this."""

    @classmethod
    def specs(cls) -> tuple[tuple[str, Any], ...]:
        """Names of the fields and their declarations."""
        return _known(cls)[1]

    @classmethod
    def default(cls, name: str) -> Any:
        """Declared default of a field (`dataclasses.MISSING` if it must be given)."""
        return next(f.default for f in fields(cls) if f.name == name)  # type: ignore[arg-type]

    def content(self) -> Any:
        return (
            type(self).__name__,
            *(
                content(v.content() if isinstance(v, Record) else _sub_content(v))
                for v in (getattr(self, name) for name, _ in self.specs())
            ),
        )

    def __eq__(self, other: object) -> bool:
        return self is other or (type(self) is type(other) and self.content() == other.content())

    def __hash__(self) -> int:
        return hash(self.content())

    def with_raw(self, **changes: Any) -> Self:
        """A copy with fields changed and nothing validated: for numbers that were validated before."""
        new = object.__new__(type(self))
        for name in _known(type(self))[0]:
            object.__setattr__(new, name, changes[name] if name in changes else getattr(self, name))
        return new

    def mapped(self, change: Callable[[Any], Any]) -> Self:
        """A copy with `change` applied to every number in it, at any depth; absent numbers stay absent."""
        changes: dict[str, Any] = {}
        for name, spec in self.specs():
            value = getattr(self, name)
            if isinstance(spec, (Number, Numbers, Vector)) or (isinstance(spec, Whole) and spec.columnar):
                changes[name] = _map_value(change, value)
            elif isinstance(spec, Sub) and spec.columnar and value is not None:
                changes[name] = (
                    tuple(v.mapped(change) for v in value) if isinstance(value, tuple) else value.mapped(change)
                )
        return self.with_raw(**changes)

    def all_numbers(self) -> Iterator[Any]:
        """Every number in the record, at any depth."""
        found: list[Any] = []
        self.mapped(lambda v: found.append(v) or v)  # type: ignore[func-returns-value]
        return iter(found)


_KNOWN: Final[dict[type, tuple[tuple[str, ...], tuple[tuple[str, Any], ...]]]] = {}


def _known(cls: type) -> tuple[tuple[str, ...], tuple[tuple[str, Any], ...]]:
    """Names of all fields, and the declared ones with their declarations; found once a class."""
    if cls not in _KNOWN:
        found = fields(cls)
        declared = tuple((f.name, f.metadata[SPEC]) for f in found if SPEC in f.metadata)
        _KNOWN[cls] = (tuple(f.name for f in found), declared)
    return _KNOWN[cls]


def _sub_content(value: Any) -> Any:
    if isinstance(value, tuple):
        return tuple(v.content() if isinstance(v, Record) else content(v) for v in value)
    return value


def _map_value(change: Callable[[Any], Any], value: Any) -> Any:
    if value is None:
        return None
    if isinstance(value, FrozenMap):
        return FrozenMap({k: change(v) for k, v in value.items()})
    if isinstance(value, tuple):
        return tuple(change(v) for v in value)
    return change(value)


@dataclass_transform(
    kw_only_default=True,
    frozen_default=True,
    eq_default=False,
    field_specifiers=(
        number, text, pick_of, flag, whole, sub, many, names, numbers, vector, anything,
    ),
)  # fmt: skip
def record(cls: type[T]) -> type[T]:
    """Make a frozen, slotted, keyword-only record of a class with declared fields."""
    return dataclass(frozen=True, kw_only=True, slots=True, eq=False)(cls)


# --- paths: "layout.sizes.leg", "duty.cases.operating.temperature", "pipe.wall" -----------------------


def at(root: Any, path: str) -> Any:
    """The value at a dotted path: fields, keys of named numbers, members of a list by name or number."""
    value = root
    for part in path.split("."):
        value = _child(value, part, path)
    return value


def _index(members: tuple[Any, ...], part: str, path: str) -> int:
    for i, member in enumerate(members):
        if getattr(member, "name", None) == part:
            return i
    if part.isdigit() and int(part) < len(members):
        return int(part)
    named = tuple(str(getattr(m, "name", i)) for i, m in enumerate(members))
    raise InputError(Fault(path, part, allowed="the name or number of a member", near=named))


def _child(value: Any, part: str, path: str) -> Any:
    if isinstance(value, FrozenMap) and part in value:
        return value[part]
    if isinstance(value, tuple):
        return value[_index(value, part, path)]
    if isinstance(value, Record) and part in dict(value.specs()):
        return getattr(value, part)
    known = tuple(value) if isinstance(value, FrozenMap) else ()
    if isinstance(value, Record):
        known = tuple(name for name, _ in value.specs())
    raise InputError(Fault(path, part, allowed="a field of the design", near=known))


def put(root: T, path: str, new: Any) -> T:
    """A copy of a record with the value at a dotted path replaced, validated as when it was made."""
    try:
        changed: T = _put(root, path.split("."), new, path)
    except InputError as error:
        known = [f if f.field.startswith(path) else f.prefixed(path.rpartition(".")[0]) for f in error.faults]
        raise type(error)(*known) from None
    return changed


def _put(value: Any, parts: list[str], new: Any, path: str) -> Any:
    if not parts:
        return new
    head, rest = parts[0], parts[1:]
    child = _put(_child(value, head, path), rest, new, path)
    if isinstance(value, FrozenMap):
        return FrozenMap({**value, head: child})
    if isinstance(value, tuple):
        i = _index(value, head, path)
        return (*value[:i], child, *value[i + 1 :])
    values = {name: getattr(value, name) for name, _ in value.specs()}
    return type(value)(**{**values, head: child})


def rows_of(record_: Record, path: str = "") -> int | None:
    """Rows of a column, or None for a record whose numbers are all single."""
    sizes = {np.shape(v)[0] for v in record_.all_numbers() if np.ndim(v)}
    if len(sizes) > 1:
        listed = " and ".join(str(s) for s in sorted(sizes))
        raise InputError(Fault(path or "rows", f"{listed} rows", allowed="the same number of rows in every field"))
    return sizes.pop() if sizes else None

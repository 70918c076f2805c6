"""Tables as printed -> SI columns with their provenance.

A table is a pair of files: `<topic>/<name>.csv` holds a header and the numbers in the printed unit, the
`.toml` beside it says what they are and where they come from. Number text and unit factor are exact fractions
and are rounded once. Nothing is read before the first look-up.
"""

import csv
import hashlib
import os
import re
import tomllib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from difflib import get_close_matches
from fractions import Fraction as Q
from functools import cache
from pathlib import Path
from types import MappingProxyType
from typing import Any, Final, NamedTuple

import numpy as np
from numpy.typing import NDArray

from pipeflex.errors import Fault, InputError, TableError
from pipeflex.quantities import KINDS, Dimension

Floats = NDArray[np.float64]

TEXT: Final = "text"
"""Kind of a column that holds words."""

PROVENANCES: Final = ("read", "library", "derived", "memory")
"""How a value was come by, the surest first: read in the source, taken from a general-purpose library,
worked out from values read, recalled."""

SHIPPED: Final = "pipeflex"
USER: Final = "user table"

_PACKAGE: Final = Path(__file__).parents[1]
_NAME = re.compile(r"[\w-]+/[\w-]+", re.ASCII)
_NUMBER = re.compile(r"[+-]?(\d+(\.\d*)?|\.\d+)", re.ASCII)
_LONGEST_NUMBER = 30
_LARGEST_FILE = 5_000_000
_NEAR = 5


class Unit(NamedTuple):
    """`si = number*factor + offset`, exactly."""

    factor: Q
    dimension: Dimension
    offset: Q = Q(0)


_INCH, _DEG_F, _LBF = Q("0.0254"), Q(5, 9), Q("0.45359237") * Q("9.80665")
_PSI = _LBF / _INCH**2
_LENGTH, _STRESS, _PURE = KINDS["length"], KINDS["stress"], KINDS["ratio"]
_TEMPERATURE, _PER_KELVIN = KINDS["temperature"], KINDS["expansion coefficient"]

UNITS: Final[dict[str, Unit]] = {
    "1": Unit(Q(1), _PURE),
    "in/100ft": Unit(Q(1, 1200), _PURE),
    "mm": Unit(Q(1, 1000), _LENGTH),
    "m": Unit(Q(1), _LENGTH),
    "in": Unit(_INCH, _LENGTH),
    "ft": Unit(12 * _INCH, _LENGTH),
    "kg/m3": Unit(Q(1), KINDS["density"]),
    "MPa": Unit(Q(10**6), _STRESS),
    "GPa": Unit(Q(10**9), _STRESS),
    "psi": Unit(_PSI, _STRESS),
    "ksi": Unit(10**3 * _PSI, _STRESS),
    "Msi": Unit(10**6 * _PSI, _STRESS),
    "degC": Unit(Q(1), _TEMPERATURE, Q("273.15")),
    "degF": Unit(_DEG_F, _TEMPERATURE, Q("459.67") * _DEG_F),
    "1e-6/K": Unit(Q(1, 10**6), _PER_KELVIN),
    "1e-6/degF": Unit(Q(1, 10**6) / _DEG_F, _PER_KELVIN),
}
"""The units that tables are printed in (inch, pound and standard gravity by definition; NIST SP 811)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """What one column holds: `unit` as printed (empty for words), `kind` of quantity (`TEXT` for words).

    `provenance` and `edition` are empty where those of the table hold.
    """

    name: str
    meaning: str
    kind: str
    unit: str = ""
    provenance: str = ""
    edition: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """One table; equal to another of the same id and the same bytes.

    rows : the cells as printed. `numbers` gives a column in SI, `texts` as printed.
    index : name of the column that the others are read against, with `interpolation` between its rows and
        `below` and `above` saying what holds outside.
    reference_temperature : where the growth is zero [K].
    confirm : True if a value is from memory and must be confirmed in the licensed standard.
    """

    id: str
    fingerprint: str
    origin: str = field(compare=False)
    title: str = field(compare=False)
    document: str = field(compare=False)
    edition: str = field(compare=False)
    part: str = field(compare=False)
    provenance: str = field(compare=False)
    confirm: bool = field(compare=False)
    note: str = field(compare=False)
    index: str | None = field(compare=False)
    interpolation: str = field(compare=False)
    below: str = field(compare=False)
    above: str = field(compare=False)
    reference_temperature: float | None = field(compare=False)
    columns: Mapping[str, Column] = field(compare=False, repr=False)
    rows: tuple[tuple[str, ...], ...] = field(compare=False, repr=False)
    _numbers: Mapping[str, Floats] = field(compare=False, repr=False)

    @property
    def source(self) -> str:
        """Document, edition and part of it, in one line."""
        return self._source(f"{self.document} ({self.edition})" if self.edition else self.document)

    def source_of(self, column: str) -> str:
        """Source of one column, where its edition may be an earlier one than the table's."""
        edition = self._column(column).edition
        return self._source(edition) if edition else self.source

    def provenance_of(self, column: str) -> str:
        """The least sure provenance of the values of one column."""
        if own := self._column(column).provenance:
            return own
        if "provenance" not in self.columns:
            return self.provenance
        cells = zip(self.texts(column), self.texts("provenance"), strict=True)
        return max((of for cell, of in cells if cell), key=PROVENANCES.index, default=self.provenance)

    def texts(self, column: str) -> tuple[str, ...]:
        """One column as printed."""
        place = list(self.columns).index(self._column(column).name)
        return tuple(row[place] for row in self.rows)

    def numbers(self, column: str) -> Floats:
        """One column in SI, shape (rows,), read-only; not a number where the cell is blank.

        Raises
        ------
        TableError
            No such column, or it holds words.
        """
        self._column(column)
        if column not in self._numbers:
            raise TableError(Fault(self.id, column, allowed="a column of numbers", near=tuple(self._numbers)))
        return self._numbers[column]

    def curve(self, column: str) -> tuple[Floats, Floats]:
        """Index and one column in SI, without the rows blank in it: two arrays of shape (points,)."""
        values = self.numbers(column)
        if self.index is None:
            raise TableError(Fault(self.id, column, allowed="a table with an index column"))
        held = ~np.isnan(values)
        return self.numbers(self.index)[held], values[held]

    def find(self, **entries: str) -> int:
        """The first row with the given cells, as printed; columns are narrowed in the order given.

        Raises
        ------
        TableError
            No such row; names the nearest entries of the first column without a match.
        """
        rows = list(range(len(self.rows)))
        for column, wanted in entries.items():
            cells = self.texts(column)
            matching = [row for row in rows if cells[row] == wanted]
            if not matching:
                raise TableError(Fault(f"{self.id}: {column}", wanted, near=near(wanted, [cells[r] for r in rows])))
            rows = matching
        return rows[0]

    def _column(self, name: str) -> Column:
        if name not in self.columns:
            raise TableError(Fault(self.id, name, allowed="a column of the table", near=near(name, self.columns)))
        return self.columns[name]

    def _source(self, document: str) -> str:
        return f"{document}, {self.part}" if self.part else document


def table(id: str) -> Table:
    """The table with the given id ("stress/asme_b31_3_2018"), read once.

    Raises
    ------
    TableError
        No such table; names the nearest.
    InputError
        A table of the user's that cannot be read; names the table and the cell.
    """
    places = [(root / f"{id}.csv", origin) for root, origin in _roots()] if _NAME.fullmatch(id) else []
    found = [(path, origin) for path, origin in places if path.is_file()]
    if not found:
        raise TableError(Fault("table", id, near=near(id, tables())))
    if len(found) > 1:
        raise InputError(Fault("table", id, allowed="another name: pipeflex has a table of this name"))
    path, origin = found[0]
    return _read(id, path, origin, path.stat().st_mtime_ns)


def tables() -> tuple[str, ...]:
    """Ids of all tables, the user's among them, in order."""
    paths = ((root, path) for root, _ in _roots() for path in root.glob("*/*.csv"))
    return tuple(sorted({path.relative_to(root).with_suffix("").as_posix() for root, path in paths}))


def _roots() -> list[tuple[Path, str]]:
    shipped = _PACKAGE / "tables"
    roots = [(shipped if shipped.is_dir() else _PACKAGE.parent / "tables", SHIPPED)]
    if home := os.environ.get("PIPEFLEX_HOME"):
        roots.append((Path(home) / "tables", USER))
    return roots


def near(wanted: str, entries: Iterable[str]) -> tuple[str, ...]:
    """The entries that are spelled most like the wanted one, the nearest first."""
    return tuple(get_close_matches(wanted, sorted({e for e in entries if e}), n=_NEAR, cutoff=0.0))


@cache
def _read(id: str, path: Path, origin: str, _changed: int) -> Table:
    data, about = _bytes(id, path), _bytes(id, path.with_suffix(".toml"))
    try:
        said = tomllib.loads(about.decode())
        head, *rows = csv.reader(data.decode().splitlines())
    except (ValueError, csv.Error) as error:
        raise InputError(Fault(id, str(error), allowed="a csv file and a toml file in UTF-8")) from None
    source = _entry(id, said, "source", dict)
    columns = {name: _column(id, name, of) for name, of in _entry(id, said, "columns", dict).items()}
    _check_shape(id, columns, head, rows)
    index = _entry(id, said, "index", default="") or None
    made = Table(
        id=id,
        fingerprint=hashlib.sha256(data + about).hexdigest(),
        origin=origin,
        title=_entry(id, said, "title"),
        document=_entry(id, source, "document"),
        edition=_entry(id, source, "edition"),
        part=_entry(id, source, "table"),
        provenance=_provenance(id, _entry(id, said, "provenance")),
        confirm=_entry(id, said, "confirm", bool, False),
        note=_entry(id, said, "note", default="").strip(),
        index=index,
        interpolation=_entry(id, said, "interpolation", default="none"),
        below=_entry(id, said, "below", default=""),
        above=_entry(id, said, "above", default=""),
        reference_temperature=_reference(id, _entry(id, said, "reference_temperature", default="")),
        columns=MappingProxyType(columns),
        rows=tuple(map(tuple, rows)),
        _numbers=MappingProxyType(
            {c.name: _si(id, c, [row[place] for row in rows]) for place, c in enumerate(columns.values()) if c.unit}
        ),
    )
    if index is not None and not np.all(np.diff(made.numbers(index)) > 0):
        raise InputError(Fault(f"{id}: {index}", "the rows out of order", allowed="rising numbers, none blank"))
    return made


def _bytes(id: str, path: Path) -> bytes:
    try:
        if path.stat().st_size > _LARGEST_FILE:
            raise InputError(Fault(id, path.name, allowed=f"a file of at most {_LARGEST_FILE} bytes"))
        return path.read_bytes()
    except OSError as error:
        raise InputError(Fault(id, path.name, allowed="a file that can be read")) from error


def _entry(id: str, said: Mapping[str, Any], name: str, kind: type = str, default: Any = None) -> Any:
    value = said.get(name, default)
    if not isinstance(value, kind):
        wanted = {str: "text", bool: "true or false", dict: "a section"}[kind]
        raise InputError(Fault(f"{id}.toml: {name}", value, allowed=wanted))
    return value


def _column(id: str, name: str, of: object) -> Column:
    if not isinstance(of, dict):
        raise InputError(Fault(f"{id}.toml: columns.{name}", str(of), allowed="a section"))
    kind, unit = _entry(id, of, "kind"), _entry(id, of, "unit", default="")
    if unit:
        fits = (
            unit in UNITS
            and UNITS[unit].dimension == KINDS.get(kind)
            and bool(UNITS[unit].offset) == (kind == "temperature")
        )
        near = tuple(u for u, of_unit in UNITS.items() if of_unit.dimension == KINDS.get(kind))
    else:
        fits, near = kind == TEXT, (TEXT,)
    if not fits:
        raise InputError(Fault(f"{id}.toml: columns.{name}", f"{kind} in {unit or 'words'}", near=near))
    provenance = _entry(id, of, "provenance", default="")
    return Column(
        name=name,
        meaning=_entry(id, of, "meaning"),
        kind=kind,
        unit=unit,
        provenance=_provenance(id, provenance) if provenance else "",
        edition=_entry(id, of, "edition", default=""),
    )


def _provenance(id: str, word: str) -> str:
    if word not in PROVENANCES:
        raise InputError(Fault(f"{id}.toml: provenance", word, allowed=", ".join(PROVENANCES)))
    return word


def _check_shape(id: str, columns: Mapping[str, Column], head: list[str], rows: list[list[str]]) -> None:
    if head != list(columns):
        raise InputError(Fault(f"{id}.csv", ", ".join(head), allowed=", ".join(columns)))
    for place, row in enumerate(rows, 2):
        if len(row) != len(head):
            raise InputError(Fault(f"{id}.csv, line {place}", ", ".join(row), allowed=f"{len(head)} cells"))
    if "provenance" in columns:
        for row in rows:
            _provenance(id, row[head.index("provenance")])


def _si(id: str, column: Column, cells: list[str]) -> Floats:
    unit = UNITS[column.unit]
    values = np.full(len(cells), np.nan)
    for row, cell in enumerate(cells):
        if not cell:
            continue
        if len(cell) > _LONGEST_NUMBER or not _NUMBER.fullmatch(cell):
            raise InputError(Fault(f"{id}.csv, line {row + 2}: {column.name}", cell, allowed="a number"))
        values[row] = float(Q(cell) * unit.factor + unit.offset)
    values.flags.writeable = False
    return values


def _reference(id: str, text: str) -> float | None:
    if not text:
        return None
    number, _, name = text.partition(" ")
    if name not in ("degC", "degF") or not _NUMBER.fullmatch(number):
        raise InputError(Fault(f"{id}.toml: reference_temperature", text, allowed='such as "20 degC" or "70 degF"'))
    return float(Q(number) * UNITS[name].factor + UNITS[name].offset)

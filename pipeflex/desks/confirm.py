"""Table values that a design takes from memory, for the engineer to confirm out of the licensed copy."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final

from pipeflex import present
from pipeflex.data.materials import MATERIALS
from pipeflex.data.tables import table
from pipeflex.desks.bound import plain_text
from pipeflex.desks.entry import Button, EntryField, Note, Part, Row
from pipeflex.desks.trade import with_material
from pipeflex.errors import Fault, InputError, MissingInput, PipeflexError
from pipeflex.files import user_folder
from pipeflex.methods.basis import table_values
from pipeflex.model.design import Design
from pipeflex.model.duty import Confirmed
from pipeflex.model.pipe import Curve
from pipeflex.model.words import Origin
from pipeflex.notation import ascii_unit
from pipeflex.present import UnitSystem
from pipeflex.units import parse

if TYPE_CHECKING:
    from pipeflex.desks.screen import Screen


_WORDS: Final = (
    "Type each value as the licensed copy has it. The design keeps it, the sheet says who confirmed it,"
    " and your folder proposes it next time."
)


@dataclass(frozen=True, slots=True)
class Asked:
    """One value from memory: table, column and temperature of its row; kind and value as the table has it."""

    table: str
    row: str
    temperature: float
    kind: str
    value: float
    title: str

    @property
    def key(self) -> tuple[str, str, float]:
        return self.table, self.row, round(self.temperature, 3)

    def words(self, units: UnitSystem) -> str:
        """Which value it is, for the reader of the licensed copy."""
        at = present.text(self.temperature, "temperature", units)
        return f"{self.row}, {at}: {present.text(self.value, self.kind, units)} from memory"


def asked(design: Design) -> tuple[Asked, ...]:
    """The values from memory that a single design uses, each once, with the row of the table behind it."""
    found = (one for curve, i in table_values(design) if curve.origin[i] == Origin.MEMORY
             for one in _rows(design, curve, i))  # fmt: skip
    return tuple({one.key: one for one in found}.values())


def _rows(design: Design, curve: Curve, i: int) -> Iterator[Asked]:
    """The rows of tables behind a point of a curve; one ahead of its own table comes from others."""
    if i >= curve.own:
        yield from _row(curve.table, curve.row, float(curve.temperature[i]))
        return
    source = table(MATERIALS)
    older, _, column = source.texts("expansion_older")[source.find(key=design.pipe.material.key)].partition(":")
    found = list(_row(older, column, float(curve.temperature[i]))) if curve is design.pipe.material.expansion else []
    yield from found
    ahead = (curve.own, curve.own + 1) if curve.kind == "modulus" else (curve.own,)
    for k in ahead if not found else ():
        yield from _row(curve.table, curve.row, float(curve.temperature[k]))


def _row(id_: str, column: str, temperature: float) -> Iterator[Asked]:
    source = table(id_)
    for t, value in zip(*source.curve(column), strict=True):
        if abs(float(t) - temperature) < 0.01:
            kind = source.columns[column].kind
            yield Asked(id_, column, float(t), kind, float(value), source.source_of(column))


class ConfirmBand:
    """The band: initials and date once, then a line for each value."""

    def __init__(self, desk: Screen) -> None:
        self.desk = desk
        self.by, self.date = "", ""
        self.parts: tuple[Part, ...] = ()
        self._shown: tuple[object, ...] = ()

    def fill(self) -> None:
        """Show the values that the design uses now."""
        design = self.desk.design
        wanted = asked(design) if design is not None else ()
        units = self.desk.look.units
        if self._shown != (wanted, units):
            self._shown = (wanted, units)
            self.parts = self._lines(wanted, units)
        self.desk.arrange_foot()

    def _lines(self, wanted: tuple[Asked, ...], units: UnitSystem) -> tuple[Part, ...]:
        if not wanted:
            return (Note("Every table value that this design uses was read or confirmed."),)
        known = {(c.table, c.row, round(c.temperature, 3)): c for c in user_folder.proposed()}
        who = Row(
            EntryField("Initials", self.by, self._keep("by")),
            EntryField("Date", self.date, self._keep("date"), help="as it shall stand on the sheet"),
        )
        lines: list[Part] = [Note(_WORDS), who]
        title = ""
        for one in wanted:
            if one.title != title:
                lines.append(Note(one.title))
                title = one.title
            lines.append(self._line(one, known.get(one.key), units))
        return tuple(lines)

    def _line(self, one: Asked, known: Confirmed | None, units: UnitSystem) -> Part:
        unit = ascii_unit(present.display(one.kind, units).unit)
        words = one.words(units)
        entry = EntryField(words, "", lambda text: self._confirm(one, text), unit=unit, help="as printed", bare=True)
        if known is None:
            return Row(Note(words), entry)
        said = f"{plain_text(known.value, known.kind, units)} by {known.by} on {known.date}"
        return Row(Note(words), entry, Button(f"Take {said}", lambda: self._take(known)))

    def _keep(self, name: str):  # type: ignore[no-untyped-def]
        def keep(text: str) -> tuple[bool, str, str]:
            setattr(self, name, text.strip())
            return True, "", ""

        return keep

    def _confirm(self, one: Asked, text: str) -> tuple[bool, str, str]:
        units = self.desk.look.units
        try:
            if not (self.by and self.date):
                raise MissingInput(Fault("", None, allowed="initials and date first"))
            value = parse(text, one.kind, bare=units)
            if one.kind != "strain" and value <= 0:
                raise InputError(Fault("", text, allowed="above zero"))
            self._take(Confirmed(table=one.table, row=one.row, temperature=one.temperature, kind=one.kind,
                                 value=float(value), by=self.by, date=self.date), remember=True)  # fmt: skip
        except PipeflexError as error:
            return False, "", error.text(units)
        return True, f"confirmed by {self.by} on {self.date}", ""

    def _take(self, one: Confirmed, *, remember: bool = False) -> None:
        design = self.desk.design
        assert design is not None
        kept = [c for c in design.confirmed if (c.table, c.row, c.temperature) != (one.table, one.row, one.temperature)]
        said = replace(design, confirmed=(*kept, one))
        self.desk.adopt(with_material(said, design.pipe.material.key))
        if remember:
            user_folder.remember(one)

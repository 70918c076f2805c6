"""The foot of a desk: the sheet is written, another design is opened, and when the file was saved."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pipeflex.desks.documents import proposed
from pipeflex.desks.entry import Button, EntryField, Note, Part, Row
from pipeflex.errors import Fault, InputError, PipeflexError
from pipeflex.sheet import sheet

if TYPE_CHECKING:
    from pipeflex.desks.core import Desk


class Handing:
    """Buttons, names and links below the picture of a desk."""

    def __init__(self, desk: Desk) -> None:
        self.desk = desk
        self.saved = Note(link_text="open it")
        self.name = EntryField("File of the sheet", self._proposed(), self._named, bare=True)
        self.replace = Button("Replace it", lambda: self.write(overwrite=True), hidden=True)
        self.written = Note(announced=True, hidden=True, link_text="open it")
        self.other = EntryField("Design file", desk.file.path.name, self._opened, hidden=True)

    def rows(self) -> tuple[Part, ...]:
        """The parts, row by row."""
        write = Button("Write the sheet", self.write, help="beside the design file, under the name at the right")
        opener = Button("Open a design", self._ask, help="another design file of the same folder")
        return Row(write, self.name, self.replace, opener, self.other, self.saved), self.written

    def show(self, wrong: tuple[str, ...]) -> None:
        """When the file was saved."""
        name = self.desk.file.path.name
        self.saved.set(text=self.desk.saved or f"bound to {name}")
        if wrong:
            self.replace.hidden = True

    def write(self, *, overwrite: bool = False) -> None:
        """Write the sheet under the name that is proposed or typed; never over a file without being told."""
        desk = self.desk
        if desk.wrong:
            self._say(f"No sheet while an entry is not taken: {', '.join(desk.wrong)}.")
            return
        if desk.design is None or desk.answer is None:
            self._say("No sheet: there is no answer.")
            return
        units = desk.look.units
        place = desk.file.path.parent / self.name.text.strip()
        try:
            self._checked(self.name.text)
            made = sheet(desk.design, units, paper="A4" if units == "metric" else "Letter")
            made.write(place, overwrite=overwrite)
        except PipeflexError as error:
            taken = place.exists() and not overwrite
            self.replace.hidden = not taken
            self._say(f"{place} is there already." if taken else error.text(units))
            return
        self.replace.hidden = True
        self.written.set(text=f"Sheet written: {place}", link=f"files:{place.name}", hidden=False)
        self.name.put(self._proposed())

    def _say(self, text: str) -> None:
        self.written.set(text=text, link="", hidden=False)

    def _proposed(self) -> str:
        path = self.desk.file.path
        return proposed(path.stem, path.parent)

    def _named(self, text: str) -> tuple[bool, str, str]:
        try:
            self._checked(text)
        except InputError as error:
            return False, "", error.text()
        self.replace.hidden = True
        return True, "", ""

    def _checked(self, text: str) -> None:
        name = text.strip()
        if not name.endswith(".html") or name in (".html",) or any(c in name for c in '/\\:*?"<>|\0\n'):
            raise InputError(Fault("", text, allowed="a file name that ends in .html"))

    def _ask(self) -> None:
        self.other.hidden = not self.other.hidden
        self.other.put(self.desk.file.path.name)

    def _opened(self, text: str) -> tuple[bool, str, str]:
        try:
            self.desk.open(text)
        except PipeflexError as error:
            return False, "", error.text(self.desk.look.units)
        return True, "", ""

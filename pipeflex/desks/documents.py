"""The design file that a desk is bound to: read, written whole, and never over another hand's changes."""

import os
from pathlib import Path

from pipeflex.errors import Fault, InputError
from pipeflex.files import design_file
from pipeflex.files.text_file import read_text, write_text
from pipeflex.model.design import Design


class Document:
    """One design file.

    Parameters
    ----------
    path : where it is.
    """

    def __init__(self, path: str | os.PathLike[str]) -> None:
        self.path = Path(os.path.abspath(path))
        self.notes: tuple[str, ...] = ()
        self._text = ""

    @property
    def key(self) -> str:
        """The same for every spelling of the path."""
        return os.path.realpath(self.path)

    def read(self) -> Design:
        """The design as the file has it now. Raises as `design_file.opened`."""
        if not self.path.is_file():
            here = tuple(sorted(p.name for p in self.path.parent.glob("*.toml")))
            raise InputError(Fault(str(self.path.name), "no such file", allowed="a design file", near=here[:8]))
        text = read_text(self.path)
        found = design_file.read_opened(text, self.path.name)
        self.notes, self._text = found.notes, text
        return found.design

    def write(self, design: Design, *, over: bool = False) -> None:
        """Write the design whole.

        Raises
        ------
        InputError
            Where the file cannot be written, or was changed by another hand since it was last read or written
            here, unless it is to be written `over`.
        """
        if not over and self.path.exists() and read_text(self.path) != self._text:
            raise InputError(Fault(self.path.name, "changed by another hand meanwhile", allowed="to read it again"))
        text = design_file.write_design(design)
        write_text(self.path, text)
        self._text = text

    @property
    def is_changed_elsewhere(self) -> bool:
        """Whether the file is no longer as it was last read or written here."""
        return self.path.exists() and read_text(self.path) != self._text


def proposed(stem: str, folder: Path, suffix: str = ".html") -> str:
    """A file name that is free in a folder: the stem, or the stem with the first free number."""
    name, count = f"{stem}{suffix}", 1
    while os.path.lexists(folder / name):
        count += 1
        name = f"{stem}-{count}{suffix}"
    return name

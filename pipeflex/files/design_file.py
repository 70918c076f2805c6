"""Design <-> TOML: the whole input of one line in the trade's words, with a unit in every number.

Materials, codes and sizes stand in a file by their key and are looked up when it is read. The fingerprint that
the design had when it was written tells whether a table or clause behind a key has changed since.
"""

import os
from dataclasses import dataclass
from typing import Any, Final

from pipeflex.errors import Fault, InputError, MissingInput
from pipeflex.files.record_form import Faults, built, said, table, taken
from pipeflex.files.text_file import LARGEST, read_text, write_text
from pipeflex.files.toml_text import document, toml
from pipeflex.files.trade_forms import forms_for, forms_in
from pipeflex.model.design import Design
from pipeflex.model.fields import Text

FORM: Final = 1
"""Version of the file's form."""

_SIZE: Final = ("outside_diameter", "wall", "dimensions_from")
_RADIUS: Final = ("radius", "radius_from")


@dataclass(frozen=True, slots=True)
class Opened:
    """A design as read from a file, and what is to be said about the file."""

    design: Design
    notes: tuple[str, ...] = ()


def load(path: str | os.PathLike[str]) -> Design:
    """The design of a file. Raises as `opened`."""
    return opened(path).design


def opened(path: str | os.PathLike[str]) -> Opened:
    """The design of a file, with a note where its fingerprint is no longer that of the file.

    Raises
    ------
    PipeflexError
        Once, for everything that is wrong in the file.
    """
    return read_opened(read_text(path), os.path.basename(os.fspath(path)))


def save(design: Design, path: str | os.PathLike[str]) -> None:
    """Write a design file whole. Raises `InputError` where it cannot be written."""
    write_text(path, write_design(design))


def read_design(text: str, origin: str = "") -> Design:
    """The design of a text; `origin` names it in errors. Raises as `opened`."""
    return read_opened(text, origin).design


def read_opened(text: str, origin: str = "") -> Opened:
    """The design of a text, with a note where its fingerprint is no longer that of the text."""
    if len(text) > LARGEST:
        raise InputError(Fault(origin or "design", None, allowed=f"a text of at most {LARGEST:,} characters"))
    given, faults = document(text, origin), Faults()
    with faults.at():
        _this_form(given.pop("pipeflex", None))
    written = ""
    with faults.at():
        written = taken(given.pop("fingerprint", ""), Text(), "fingerprint", {})
    design = None
    with faults.at():
        design = built(Design, given, forms_in(given))
    faults.tell()
    assert design is not None
    if written in ("", design.fingerprint):
        return Opened(design)
    note = (
        f"The file says fingerprint {written}; the design now has {design.fingerprint}. Either the file was edited, "
        "or a table value or clause that it uses has changed since it was written."
    )
    return Opened(design, (note,))


def write_design(design: Design) -> str:
    """The design as TOML; the same design always gives the same text.

    Raises
    ------
    InputError
        For a column of several rows; for a material or code that is not the one of its key.
    """
    if design.rows is not None:
        raise InputError(Fault("design", f"a column of {design.rows} rows", allowed="a single design"))
    made = table(design, forms_for(design))
    front = {"pipeflex": FORM, "fingerprint": design.fingerprint}
    front |= {key: made.pop(key) for key in ("demo", "title") if key in made}
    return toml({**front, **made})


def _this_form(given: Any) -> None:
    if given is None:
        raise MissingInput(Fault("pipeflex", None, allowed=f"the version of the file's form: {FORM}"))
    if isinstance(given, bool) or given != FORM:
        later = isinstance(given, int) and given > FORM
        allowed = f"{FORM}; the file was written by a later version" if later else str(FORM)
        raise InputError(Fault("pipeflex", said(given), allowed=allowed))

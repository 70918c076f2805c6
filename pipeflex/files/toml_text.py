"""A document of tables, lists, texts and numbers as TOML, the same bytes each time; and back, with clear errors."""

import re
import tomllib
from typing import Any

import tomli_w

from pipeflex.errors import Fault, InputError

_PART = r"(?:[\w-]++|\"[^\"\n]*+\"|'[^'\n]*+')"
_LONG_PATH = re.compile(rf"(?<![\w-]){_PART}(?:[ \t]*\.[ \t]*{_PART}){{30}}")
"""A dotted key that no design has; the time to read one grows with the square of its length."""
_PLACE = re.compile(r" \(at (?:line (\d+), column (\d+)|end of document)\)$")


def toml(document: dict[str, Any]) -> str:
    """The document as TOML, in the order given; a `Decimal` stands as its text, without quotes."""
    return tomli_w.dumps(document, multiline_strings=True)


def document(text: str, origin: str = "") -> dict[str, Any]:
    """A TOML text as tables.

    Raises
    ------
    InputError
        Where the text is no TOML, with line and column; where tables are nested beyond reason.
    """
    if long := _LONG_PATH.search(text):
        raise InputError(Fault(origin or "file", long[0], allowed="dotted keys of a few parts"))
    try:
        return tomllib.loads(text)
    except RecursionError:
        raise InputError(Fault(origin or "file", None, allowed="tables nested a few deep")) from None
    except ValueError as error:
        raise InputError(_fault(text, str(error), origin)) from None


def _fault(text: str, message: str, origin: str) -> Fault:
    place = _PLACE.search(message)
    if not place:
        return Fault(origin or "file", None, allowed=f"TOML ({message})")
    lines = text.splitlines() or [""]
    number, column = (int(place[1]), int(place[2])) if place[1] else (len(lines), len(lines[-1]) + 1)
    where = ", ".join(filter(None, (origin, f"line {number}, column {column}")))
    return Fault(where, lines[min(number, len(lines)) - 1], allowed=f"TOML ({message[: place.start()].lower()})")

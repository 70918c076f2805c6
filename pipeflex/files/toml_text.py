"""A document of tables, lists, texts and numbers as TOML, the same bytes each time; and back, with clear errors."""

import json
import re
import tomllib
from typing import Any, Final

from pipeflex.errors import Fault, InputError

_LINE: Final = 100
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")
_PART = r"(?:[\w-]++|\"[^\"\n]*+\"|'[^'\n]*+')"
_LONG_PATH = re.compile(rf"(?<![\w-]){_PART}(?:[ \t]*\.[ \t]*{_PART}){{30}}")
"""A dotted key that no design has; the time to read one grows with the square of its length."""
_PLACE = re.compile(r" \(at (?:line (\d+), column (\d+)|end of document)\)$")


class Plain(str):
    """Text of a number as it is to stand in the file, without quotes."""

    __slots__ = ()


def toml(document: dict[str, Any]) -> str:
    """The document as TOML: plain entries first, then the tables, in the order given."""
    return "\n".join(_table(document, ())).lstrip("\n") + "\n"


def _table(table: dict[str, Any], path: tuple[str, ...]) -> list[str]:
    lines, tables = [], []
    for key, value in table.items():
        if isinstance(value, dict):
            tables += _headed("[{}]", value, (*path, key))
        elif isinstance(value, list) and value and isinstance(value[0], dict):
            for member in value:
                tables += _headed("[[{}]]", member, (*path, key))
        else:
            lines.append(f"{_key(key)} = {_value(value)}")
    return lines + tables


def _headed(head: str, table: dict[str, Any], path: tuple[str, ...]) -> list[str]:
    lines = _table(table, path)
    only_tables = bool(lines) and not lines[0]
    return lines if only_tables else ["", head.format(".".join(map(_key, path))), *lines]


def _key(key: str) -> str:
    return key if _BARE_KEY.fullmatch(key) else _quoted(key)


def _value(value: Any) -> str:
    if isinstance(value, Plain):
        return value
    if isinstance(value, str):
        return _quoted(value)
    if isinstance(value, list):
        members = [_value(v) for v in value]
        line = f"[{', '.join(members)}]"
        return line if len(line) <= _LINE else "[\n" + "".join(f"    {m},\n" for m in members) + "]"
    return json.dumps(value)


def _quoted(text: str) -> str:
    if "\n" in text:
        lines = (json.dumps(line, ensure_ascii=False)[1:-1] for line in text.split("\n"))
        body = '"""\n' + "\n".join(lines) + '"""'
    else:
        body = json.dumps(text, ensure_ascii=False)
    return body.replace("\x7f", "\\u007f")


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

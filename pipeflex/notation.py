"""How quantities are written: glyphs, numbers, feet and inches, products of units.

Syntax only; what a unit is worth is the business of `units`. Everything is read by regular expressions over
a short text of few characters, so that no text can be run or run long.
"""

import re
from fractions import Fraction as Q
from typing import Final, NamedTuple

LONGEST: Final = 80
"""Characters that a quantity may take."""

_LARGEST_EXPONENT: Final = 400

_GLYPHS: Final = str.maketrans(
    {"°": "deg", "℃": "degC", "℉": "degF", "µ": "u", "μ": "u", "·": "*", "⋅": "*", "−": "-", "…": ".."}
    | dict.fromkeys("’′", "'")
    | dict.fromkeys("”″", '"')
)
_POWERS: Final = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")
_STRANGE: Final = re.compile(r"[^A-Za-z0-9 .,+\-*/^()'\"%_]")

_WHOLE = r"(?:\d{1,3}(?: \d{3})+|\d+)"
_DECIMAL = rf"(?:{_WHOLE}(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?"
_FRACTION = r"(?:\d+[ -])?\d+/\d+"
_AMOUNT = rf"(?:{_FRACTION}|{_DECIMAL})(?![\d.])"
_QUANTITY: Final = re.compile(rf"(([+-]?) ?({_AMOUNT})) ?(.*)")
_FEET: Final = re.compile(rf"(([+-]?) ?({_AMOUNT}) ?(?:ft|foot|feet)[ -]*({_AMOUNT})) ?(?:inches|inch|in)")

_TOKEN: Final = re.compile(
    r" ?(?:(?P<name>delta_deg[CF]|deg[CF] diff\.?|[A-Za-z]+|%)(?:(?:\^|\*\*)?(?P<power>-?[1-9])(?!\d))?"
    r"|10(?:\^|\*\*)(?P<order>-?[1-9])(?!\d)"
    r"|(?P<number>10{0,3})(?!\d)"
    r"|(?P<sign>[*/()]|-(?=[A-Za-z])))"
)


class Amount(NamedTuple):
    """A number with its unit: the exact value, the number as written, the unit as written (may be empty)."""

    value: Q
    written: str
    unit: str


class Product(NamedTuple):
    """A unit taken apart: a number, and names with their powers."""

    number: Q
    powers: tuple[tuple[str, int], ...]


def plain(text: str) -> str:
    """Text in ASCII as far as its glyphs have an ASCII meaning, with single spaces: `5 kN*m` for `5 kN·m`."""
    text = re.sub(r"[⁻⁰¹²³⁴-⁹]+", lambda power: "^" + power[0].translate(_POWERS), text)
    return re.sub(r"\bdeg ([CF])\b", r"deg\1", " ".join(text.translate(_GLYPHS).split()))


def strange(text: str) -> str | None:
    """The first character of plain text that no quantity contains."""
    found = _STRANGE.search(text)
    return found[0] if found else None


def ascii_unit(unit: str) -> str:
    """A printed unit in ASCII: `um/(m*K)` for `µm/(m·K)`, `mm2` for `mm²`."""
    return re.sub(r"(?<=[A-Za-z])(?:\^|\*\*)(?=-?\d)", "", plain(unit))


def amount(text: str) -> Amount | None:
    """The number and unit of plain text; None if it does not begin with a number.

    Feet and inches are inches: `17'-2 1/2"` has the value 206.5 and the unit "in".

    Raises
    ------
    ArithmeticError
        Where the number has no value, or none that can be calculated with.
    """
    text = text.replace("''", '"').replace("'", "ft").replace('"', "in")
    if feet := _FEET.fullmatch(text):
        written, sign, whole, rest = feet.groups()
        value, unit = _value(whole) * 12 + _value(rest), "in"
    elif quantity := _QUANTITY.fullmatch(text):
        written, sign, whole, unit = quantity.groups()
        value = _value(whole)
    else:
        return None
    return Amount(-value if sign == "-" else value, written, unit)


def _value(written: str) -> Q:
    """The exact value of `1 234.5`, `1.2e-5`, `2-1/2` or `3/4`."""
    if "/" in written:
        whole, _, broken = written.replace("-", " ").rpartition(" ")
        over, under = map(int, broken.split("/"))
        if not under:
            raise ArithmeticError(f"{broken} has no value")
        return Q(whole or 0) + Q(over, under)
    digits, _, order = written.replace(" ", "").lower().partition("e")
    if abs(int(order or 0)) > _LARGEST_EXPONENT:
        raise ArithmeticError(f"{written} is beyond calculation")
    return Q(digits) * Q(10) ** int(order or 0)


def product(unit: str) -> Product | None:
    """A unit in plain text, taken apart; None if it is malformed.

    A stroke divides by what follows at once: a name (`N/mm`), a number and a name (`in/100 ft`), a bracket
    (`um/(m*K)`). A power is one digit, a number is 1, 10, 100, 1000 or a power of ten.
    """
    number, powers = Q(1), dict[str, int]()
    sides, side, last, position = [1], 1, "start", 0  # sides: the stroke before each open bracket
    while position < len(unit):
        token = _TOKEN.match(unit, position)
        if token is None:
            return None
        position = token.end()
        sign, name = token["sign"], token["name"]
        if sign == "(":
            sides.append(sides[-1] * side)
            side = 1
        elif sign == ")":
            if len(sides) == 1 or last not in ("name", ")"):
                return None
            sides.pop()
            side = 1
        elif sign:
            if last not in ("name", ")", "number") and (sign, last) != ("/", "start"):
                return None
            side = -1 if sign == "/" else 1
        elif name:
            name = name.rstrip(".")
            powers[name] = powers.get(name, 0) + sides[-1] * side * int(token["power"] or 1)
            side = 1
        else:
            if last not in ("start", "/", "("):
                return None
            value = Q(10) ** int(token["order"]) if token["order"] else Q(token["number"])
            number *= value ** (sides[-1] * side)  # the stroke still holds for the name that follows
        last = sign or ("name" if name else "number")
    if last not in ("name", ")") or len(sides) > 1:
        return None
    return Product(number, tuple(powers.items()))

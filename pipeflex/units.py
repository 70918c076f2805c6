"""Text or quantity -> SI float, and back to the shortest text: the one border where units are read.

The number as text and the factor of its unit are exact fractions and are rounded once, so that 8.625 in,
219.075 mm and 0.219075 m are one float. Unit names are read by a grammar of products, quotients and small
powers over a fixed list of names; pint gives the exact factor of each name and is imported when the first
name beyond the display units is met. Text never reaches pint.
"""

import re
from collections.abc import Iterator, Mapping
from dataclasses import replace
from decimal import Context, Decimal
from difflib import get_close_matches
from fractions import Fraction as Q
from functools import cache, lru_cache
from itertools import count
from typing import Any, Final, Never, Self

import numpy as np
from numpy.typing import NDArray

from pipeflex.errors import Fault, InputError, MissingInput, PipeflexError, UnitError, refuse
from pipeflex.present import DISPLAY, UnitSystem, display
from pipeflex.quantities import KINDS
from pipeflex.steam import ATMOSPHERE, saturation_temperature

Exact = tuple[Q, tuple[int, ...]]
"""Factor of a unit and its exponents of metre, kilogram, second, kelvin, radian."""

_BASE: Final = ("meter", "kilogram", "second", "kelvin", "radian")
_ANGLES: Final[dict[str, tuple[int, ...]]] = {"angle": (1,), "rotational stiffness": (-1, 0)}
"""Exponents of the radian that a kind may have: the usual one first; all other kinds have none."""

_LONGEST = 80
_LARGEST_EXPONENT = 400

_NAMES: Final[dict[str, str]] = {
    **{name: name for name in "m mm cm um km kg g s K rad deg N kN MN lbf kip".split()},
    **{name: name for name in "Pa kPa MPa GPa bar mbar psi ksi".split()},
    **dict.fromkeys(("in", "inch", "inches"), "inch"),
    **dict.fromkeys(("ft", "foot", "feet"), "foot"),
    **dict.fromkeys(("lb", "lbs", "lbm"), "pound"),
    **dict.fromkeys(("C", "degC", "degC diff.", "delta_degC"), "delta_degC"),
    **dict.fromkeys(("F", "degF", "degF diff.", "delta_degF"), "delta_degF"),
    "t": "tonne",
    "kips": "kip",
    "Msi": "Mpsi",
    "uin": "microinch",
    "%": "percent",
}
_SCALES: Final[dict[str, UnitSystem]] = {"C": "metric", "degC": "metric", "F": "us", "degF": "us"}
"""Names that alone mean a point on a scale of temperature, with the unit system whose scale it is."""

_PINT_SCALES: Final[dict[str, UnitSystem]] = {"degree_Celsius": "metric", "degree_Fahrenheit": "us"}

_UNLIMITED: Final = {"length", "movement", "force", "moment", "stiffness", "rotational stiffness"}

_ALSO: Final[dict[str, tuple[str, ...]]] = {
    "length": ("mm", "in"),
    "pipe dimension": ("cm", "m", "ft"),
    "movement": ("cm", "m", "ft"),
    "mass": ("t",),
    "density": ("g/cm3",),
    "force": ("N", "kip"),
    "weight per length": ("kN/m", "kip/ft"),
    "moment": ("N*m", "in*lbf"),
    "stress": ("N/mm2", "psi"),
    "modulus": ("MPa", "ksi"),
    "pressure": ("bar g", "bar a", "kPa", "MPa", "psig", "psia"),
    "stiffness": ("kN/m", "kip/in"),
    "temperature": ("K", "bar g sat", "psig sat"),
    "temperature change": ("degC diff.",),
    "expansion coefficient": ("1/K", "1/degF"),
    "angle": ("rad",),
    "ratio": ("%",),
    "strain": ("um/m", "in/in"),
}

_GLYPHS: Final = str.maketrans(
    {"°": "deg", "℃": "degC", "℉": "degF", "µ": "u", "μ": "u", "·": "*", "⋅": "*", "−": "-"}
    | dict.fromkeys("’′", "'")
    | dict.fromkeys("”″", '"')
)
_POWERS: Final = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")
_STRANGE = re.compile(r"[^A-Za-z0-9 .,+\-*/^()'\"%_…]")

_WHOLE = r"(?:\d{1,3}(?: \d{3})+(?!\d)|\d+)"
_DECIMAL = rf"(?:{_WHOLE}(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?"
_FRACTION = r"(?:(?:\d+[ -])?\d+/\d+)"
_AMOUNT = rf"(?:{_FRACTION}|{_DECIMAL})(?![\d.])"
_QUANTITY = re.compile(rf"([+-]?) ?({_AMOUNT}) ?(.*)")
_FEET = re.compile(rf"([+-]?) ?({_AMOUNT}) ?(?:ft|foot|feet)[ -]*({_AMOUNT}) ?(?:inches|inch|in)")
_SIDE = re.compile(r"(.*?) ?([ga]|\([ga]\))")
_SATURATED = re.compile(r"(.*\S) sat\.?")
_RANGE = re.compile(r" ?(?:\.\.+|…| to ) ?")
_TOKEN = re.compile(
    r" ?(?:(?P<name>delta_deg[CF]|deg[CF] diff\.?|[A-Za-z]+|%)(?:(?:\^|\*\*)?(?P<power>-?[1-9])(?!\d))?"
    r"|(?P<ten>10)(?:\^|\*\*)(?P<order>-?[1-9])(?!\d)|(?P<number>10{0,3})(?!\d)"
    r"|(?P<sign>[*/()]|-(?=[A-Za-z])))"
)


class Typed(float):
    """A float that remembers the text it was typed as.

    It compares, hashes and calculates as a float; what is calculated from it is a plain float.
    """

    __slots__ = ("text",)
    text: str

    def __new__(cls, value: float, text: str) -> Self:
        self = super().__new__(cls, value)
        self.text = text
        return self

    def __getnewargs__(self) -> tuple[float, str]:  # type: ignore[override]
        return float(self), self.text


def parse(text: str, kind: str, *, field: str = "", bare: UnitSystem | None = None) -> Typed:
    """One quantity as text -> SI float.

    Parameters
    ----------
    text : number and unit as an engineer types them: `240 degC`, `17'-2 1/2"`, `33 bar g sat`.
    kind : key of `KINDS`. A pressure is gauge unless its unit says otherwise (`bar a`, `psia`).
    field : path of the field, named by errors.
    bare : unit system whose display unit a bare number takes; without it a bare number is an error.

    Raises
    ------
    UnitError
        Where the text is no quantity of the kind.
    InputError
        Where it is one, but below absolute zero, a vacuum beyond the full, or off the saturation line.
    MissingInput
        Where nothing is given.
    """
    try:
        return _parsed(_tidy(text), kind, bare)
    except PipeflexError as error:
        raise error.prefixed(field) from None


def parse_range(
    text: str, kind: str, *, field: str = "", bare: UnitSystem | None = None
) -> tuple[Typed, Typed]:
    """A range as text -> its two ends in SI: `5 .. 35 degC`, `5 degC to 95 degF`; one value is both ends.

    The unit at the end serves both numbers. Raises as `parse`, and `InputError` where the higher comes first.
    """
    try:
        tidy = _tidy(text)
        ends = _RANGE.split(tidy)
        if len(ends) == 1:
            value = _parsed(tidy, kind, bare)
            return value, value
        if len(ends) > 2 or not all(ends):
            _refuse(tidy, kind, "two values, such as 5 .. 35 with one unit at the end")
        low, high = (_parsed(end, kind, bare) for end in _with_unit(tidy, ends[0], ends[1], kind))
        if low > high:
            reverse = f"{high.text} .. {low.text}"
            raise InputError(Fault("", tidy, "the lower value first", kind=kind, near=(reverse,)))
        return low, high
    except PipeflexError as error:
        raise error.prefixed(field) from None


def si(value: Any, kind: str, *, field: str = "") -> float | NDArray[np.float64]:
    """Anything that may stand for a quantity -> SI: float, or array of floats.

    Numbers, arrays and sequences of numbers are SI already. Text is read by `parse`. A quantity with
    `magnitude` and `units` as pint has them, of any registry, is converted exactly; one of pressure is gauge.

    Raises
    ------
    UnitError
        Where the value is no quantity of the kind.
    MissingInput
        Where it is None.
    """
    if isinstance(value, str):
        return parse(value, kind, field=field)
    try:
        if value is None:
            raise MissingInput(Fault("", None, _permitted(kind), kind=kind))
        if hasattr(value, "magnitude") and hasattr(value, "units"):
            return _converted(value, kind)
        if isinstance(value, Typed):
            return value
        return _numbers(value, kind)
    except PipeflexError as error:
        raise error.prefixed(field) from None


def spelled(value: float, kind: str, units: UnitSystem = "metric") -> str:
    """The shortest text, with an ASCII unit, that parses back to the very same float.

    A value that was typed is written as it was typed if that says the same without its surroundings.

    Raises
    ------
    InputError
        For NaN, and for infinity where the kind has no "unlimited".
    """
    if isinstance(value, Typed):
        try:
            if parse(value.text, kind) == value:
                return value.text
        except InputError:
            pass  # typed as a bare number, or for another kind
    if value == float("inf") and kind in _UNLIMITED:
        return "unlimited"
    refuse(InputError, (not np.isfinite(value), Fault("", float(value), "a finite number", kind=kind)))
    unit = display(kind, units)
    amount = (Q(float(value)) - unit.offset) / unit.factor
    body = next(d for d in _shorter_first(amount) if float(Q(d) * unit.factor + unit.offset) == value)
    plain = f"{body:f}" if -5 <= body.adjusted() <= 15 else f"{body:e}"
    return f"{plain} {ascii_unit(unit.unit)}".rstrip()


def ascii_unit(unit: str) -> str:
    """A printed unit in ASCII, as `parse` reads it: `um/(m*K)` for `µm/(m·K)`."""
    return re.sub(r"(?<=[A-Za-z])\^(?=\d)", "", _plain(unit))


# ---------------------------------------------------------------------------------------------- reading


def _plain(text: str) -> str:
    """Text with single spaces and in ASCII, as far as the glyphs have an ASCII meaning."""
    text = re.sub(r"[⁻⁰¹²³⁴-⁹]+", lambda m: "^" + m[0].translate(_POWERS), text)
    return re.sub(r"\bdeg ([CF])\b", r"deg\1", " ".join(text.translate(_GLYPHS).split()))


def _tidy(text: str) -> str:
    if not isinstance(text, str):
        raise UnitError(Fault("", text, "a quantity as text"))
    if len(text) > _LONGEST:
        raise UnitError(Fault("", text[: _LONGEST + 1], f"a quantity of at most {_LONGEST} characters"))
    return " ".join(text.split())


@lru_cache(maxsize=4096)
def _parsed(text: str, kind: str, bare: UnitSystem | None) -> Typed:
    """The value of tidy text. Errors are not kept."""
    if not text:
        raise MissingInput(Fault("", None, _permitted(kind), kind=kind))
    plain = _plain(text)
    if strange := _STRANGE.search(plain):
        _refuse(text, kind, f"{_permitted(kind)}, without {strange[0]!r}")
    if plain == "unlimited" and kind in _UNLIMITED:
        return Typed(float("inf"), text)
    if "," in plain:
        _refuse(text, kind, "a point before the decimals and no comma", _readings(text, kind, bare))
    saturated = _SATURATED.fullmatch(plain) if kind == "temperature" else None
    if saturated:
        return Typed(_saturation(saturated[1], text), text)
    return Typed(_possible(_exact(plain, text, kind, bare), text, kind), text)


def _exact(plain: str, text: str, kind: str, bare: UnitSystem | None) -> Q:
    """The exact SI value of a number with its unit."""
    inches = plain.replace("''", '"').replace("'", "ft").replace('"', "in")
    if feet := _FEET.fullmatch(inches):
        sign, whole, rest = feet.groups()
        amount, unit = _fraction(whole, text, kind) * 12 + _fraction(rest, text, kind), "in"
    elif quantity := _QUANTITY.fullmatch(inches):
        sign, body, unit = quantity.groups()
        amount = _fraction(body, text, kind)
    else:
        _refuse(text, kind, _permitted(kind))
    if sign == "-":
        amount = -amount
    if not unit:
        if kind in ("ratio", "count"):
            return amount
        if bare is None:
            _refuse(text, kind, f"{_permitted(kind)}: the number needs its unit")
        return amount * display(kind, bare).factor + display(kind, bare).offset
    return _scaled(amount, unit, text, kind)


def _scaled(amount: Q, unit: str, text: str, kind: str) -> Q:
    if kind == "temperature" and unit in _SCALES:
        scale = display(kind, _SCALES[unit])
        return amount * scale.factor + scale.offset
    offset = Q(0)
    found = _unit(unit)
    if kind == "pressure" and not (found and _fits(found[1], kind)):
        side = _SIDE.fullmatch(unit)
        if side and (pressure := _unit(side[1])):
            found = pressure
            offset = -Q(ATMOSPHERE) if side[2].strip("()") == "a" else offset
    if found is None:
        _refuse(text, kind, f"{_permitted(kind)}: {unit!r} is no unit known here", _nearest(unit, text, kind))
    slipped = unit in _SCALES if kind == "temperature change" else kind == "temperature" and unit != "K"
    if slipped or not _fits(found[1], kind):
        meant = _meaning(unit, found[1])
        _refuse(text, kind, f"{_permitted(kind)}: {unit} is {meant}", _nearest(unit, text, kind))
    return amount * found[0] + offset


def _fraction(body: str, text: str, kind: str) -> Q:
    """The exact value of `1 234.5`, `1.2e-5`, `2-1/2` or `3/4`."""
    whole, _, broken = body.replace("-", " ").rpartition(" ") if "/" in body else (body, "", "0")
    over, _, under = broken.partition("/")
    if under and not int(under):
        _refuse(text, kind, f"{_permitted(kind)}: a fraction of {broken} has no value")
    digits, _, order = whole.replace(" ", "").lower().partition("e")
    if abs(int(order or 0)) > _LARGEST_EXPONENT:
        _refuse(text, kind, f"{_permitted(kind)}, of a size that can be calculated with")
    return Q(digits or 0) * Q(10) ** int(order or 0) + Q(int(over), int(under or 1))


def _possible(exact: Q, text: str, kind: str) -> float:
    """The nearest float, of a value that can be."""
    if kind == "temperature" and exact < 0:
        raise InputError(Fault("", text, "a temperature above absolute zero", kind=kind))
    if kind == "pressure" and exact < -Q(ATMOSPHERE):
        raise InputError(Fault("", text, "a gauge pressure no lower than full vacuum", kind=kind))
    try:
        value = float(exact)
    except OverflowError:
        value = float("inf")
    if np.isinf(value) or (exact and not value):
        _refuse(text, kind, f"{_permitted(kind)}, of a size that can be calculated with")
    return value


def _saturation(pressure: str, text: str) -> float:
    """Temperature of steam saturated at a pressure, which must say whether it is gauge or absolute."""
    permitted = "a saturation pressure such as 33 bar g sat, 450 psig sat or 34 bar a sat"
    quantity = _QUANTITY.fullmatch(pressure)
    unit = quantity and _unit(quantity[3])
    if unit and _fits(unit[1], "pressure"):
        near = tuple(f"{pressure} {side} sat" for side in "ga")
        _refuse(text, "temperature", f"{permitted}: gauge or absolute?", near)
    try:
        gauge = _exact(pressure, text, "pressure", None)
    except UnitError:
        _refuse(text, "temperature", permitted)
    try:
        return float(saturation_temperature(float(gauge + Q(ATMOSPHERE))))
    except InputError as error:
        raise InputError(*(replace(fault, field="", given=text) for fault in error.faults)) from None


def _with_unit(text: str, low: str, high: str, kind: str) -> tuple[str, str]:
    """Both ends of a range, the first with the unit of the second if it has none of its own."""
    first, second = (_QUANTITY.fullmatch(_plain(end)) for end in (low, high))
    if first and second and first[3] and not second[3] and kind not in ("ratio", "count"):
        _refuse(text, kind, "a range with its unit at the end", (f"{low} .. {high} {first[3]}",))
    if first and not first[3] and second and second[3]:
        if _FEET.fullmatch(_plain(high).replace("'", "ft").replace('"', "in")):
            _refuse(text, kind, "a range in feet and inches with the unit at both numbers")
        low = f"{low} {second[3]}"
    return low, high


def _readings(text: str, kind: str, bare: UnitSystem | None) -> tuple[str, ...]:
    """What a text with commas may have meant."""
    readings = []
    for reading in dict.fromkeys((text.replace(",", "."), text.replace(",", ""))):
        try:
            readings.append(_parsed(reading, kind, bare).text)
        except InputError:
            continue
    return tuple(readings)


# ------------------------------------------------------------------------------------------------ units


@cache
def _registry() -> Any:
    import pint

    return pint.UnitRegistry(non_int_type=Q)


@cache
def _base(name: str) -> Exact | None:
    """Factor and dimension of a unit by its name in pint, offsets aside; None if it has none of ours."""
    if name in ("deg", "degree"):
        # Pi is no fraction: the display's serves, by which 180 degrees are the float pi exactly.
        return display("angle").factor, (0, 0, 0, 0, 1)
    import pint

    registry = _registry()
    try:
        factor, units = registry.get_base_units(registry.UnitsContainer({name: 1}))
    except pint.UndefinedUnitError:
        return None
    powers = dict(registry.Quantity(1, units).unit_items())
    if not powers.keys() <= set(_BASE):
        return None
    return Q(factor), tuple(int(powers.get(base, 0)) for base in _BASE)


@cache
def _display_units() -> dict[str, Exact]:
    """The units of display, which need no pint."""
    return {
        ascii_unit(unit.unit): (unit.factor, (*KINDS[kind], _ANGLES.get(kind, (0,))[0]))
        for kind, pair in DISPLAY.items()
        for unit in pair
        if unit.unit
    }


@lru_cache(maxsize=1024)
def _unit(text: str) -> Exact | None:
    """Factor and dimension of a unit as typed; None if it is none."""
    return _display_units().get(text.replace("**", "").replace("^", "")) or _product(text)


def _product(text: str) -> Exact | None:
    """The same by the grammar: a stroke divides by the next name, the number before it, or the bracket."""
    total: Exact = (Q(1), (0,) * len(_BASE))
    outer: list[tuple[Exact, int]] = []
    side, last, position = 1, "start", 0
    while position < len(text):
        token = _TOKEN.match(text, position)
        if token is None:
            return None
        position = token.end()
        sign, name = token["sign"], token["name"]
        operand = last in ("name", ")")
        if sign == "(":
            outer.append((total, side))
            total, side = (Q(1), (0,) * len(_BASE)), 1
        elif sign == ")":
            if not (outer and operand):
                return None
            inner = total
            total, side = outer.pop()
            total, side = _times(total, inner, side), 1
        elif sign:
            if not (operand or last == "number" or (sign == "/" and last == "start")):
                return None
            side = -1 if sign == "/" else 1
        elif name:
            known = _NAMES.get(name.replace("diff", "diff.").replace("..", "."))
            base = _base(known) if known else None
            if base is None:
                return None
            total, side = _times(total, base, side * int(token["power"] or 1)), 1
        else:
            if last not in ("start", "/", "("):
                return None
            number = Q(10) ** int(token["order"]) if token["ten"] else Q(token["number"])
            total = total[0] * number**side, total[1]  # the side stays: in/100 ft
        last = sign or ("name" if name else "number")
    return total if last in ("name", ")") and not outer else None


def _times(one: Exact, other: Exact, power: int) -> Exact:
    return one[0] * other[0] ** power, tuple(a + power * b for a, b in zip(one[1], other[1], strict=True))


def _fits(dimension: tuple[int, ...], kind: str) -> bool:
    """Whether a unit measures the kind; a count has no unit, an angle is not just any ratio."""
    *rest, angle = dimension
    return kind != "count" and tuple(rest) == KINDS[kind] and angle in _ANGLES.get(kind, (0,))


# -------------------------------------------------------------------------------- numbers and quantities


def _numbers(value: Any, kind: str) -> float | NDArray[np.float64]:
    try:
        array = np.asarray(float(value) if type(value) is int else value)
    except (ValueError, OverflowError):  # ragged, or an integer beyond every float
        array = np.asarray(None)
    if array.dtype.kind not in "iuf":
        given = "a very large integer" if type(value) is int else repr(value)[:_LONGEST]
        raise UnitError(Fault("", given, _permitted(kind), kind=kind))
    floats = array.astype(float)
    refuse(UnitError, (np.isnan(floats), Fault("", floats, f"{_permitted(kind)}, not NaN", kind=kind)))
    return floats if floats.ndim else float(floats)


def _converted(value: Any, kind: str) -> float | NDArray[np.float64]:
    """A quantity with magnitude and units; a magnitude stands for its shortest decimal."""
    given = f"{str(value.magnitude)[:_LONGEST]} {value.units}"
    factor, offset, dimension = Q(1), Q(0), (0,) * len(_BASE)
    names = dict(value.unit_items())
    for name, power in names.items():
        base = _base(name)
        if base is None or power != int(power):
            _refuse(given, kind, f"{_permitted(kind)}: {name} is no unit known here")
        factor, dimension = _times((factor, dimension), base, int(power))
    scale = _PINT_SCALES.get(next(iter(names), "")) if list(names.values()) == [1] else None
    if scale and kind == "temperature":
        offset = display(kind, scale).offset
    slipped = kind == "temperature change" if scale else kind == "temperature" and _is_difference(names)
    if slipped or not _fits(dimension, kind):
        meant = _meaning(str(value.units), dimension)
        _refuse(given, kind, f"{_permitted(kind)}: {value.units} is {meant}")

    def exactly(number: Any) -> float:
        if isinstance(number, (float, np.number)) and not np.isfinite(number):
            if number > 0 and kind in _UNLIMITED:
                return float("inf")
            _refuse(given, kind, f"{_permitted(kind)}, finite")
        plain = Q(repr(float(number))) if isinstance(number, (float, np.floating)) else Q(number)
        return _possible(plain * factor + offset, given, kind)

    if np.ndim(value.magnitude):
        array = np.asarray(value.magnitude)
        return np.array([exactly(number) for number in array.ravel().tolist()]).reshape(array.shape)
    return exactly(value.magnitude)


def _is_difference(names: Mapping[str, Any]) -> bool:
    return any(name.startswith("delta_") for name in names)


# -------------------------------------------------------------------------------------- words of errors


def _refuse(text: str, kind: str, allowed: str, near: tuple[str, ...] = ()) -> Never:
    raise UnitError(Fault("", text, allowed, kind=kind, near=near))


def _a(kind: str) -> str:
    return f"{'an' if kind[0] in 'aeiou' else 'a'} {kind}"


def _would_do(kind: str) -> list[str]:
    """The units to name for a kind, those of display first."""
    shown = (ascii_unit(unit.unit) for unit in DISPLAY[kind])
    return [unit for unit in dict.fromkeys((*shown, *_ALSO.get(kind, ()))) if unit]


def _permitted(kind: str) -> str:
    units = _would_do(kind)
    named = " or ".join(filter(None, (", ".join(units[:-1]), units[-1]))) if units else ""
    if kind in ("ratio", "count"):
        return f"{_a(kind)} as a plain number" + (f" or in {named}" if named else "")
    return f"{_a(kind)} in {named}"


def _meaning(unit: str, dimension: tuple[int, ...]) -> str:
    if unit in _SCALES or unit in ("degree_Celsius", "degree_Fahrenheit"):
        return "a temperature"
    if "diff" in unit or "delta" in unit:
        return "a temperature change" if dimension[:4] == KINDS["temperature change"] else "a rate per change"
    kinds = [kind for kind in KINDS if _fits(dimension, kind)]
    return _a(kinds[0]) if kinds else "something else"


def _nearest(unit: str, text: str, kind: str) -> tuple[str, ...]:
    """The text with the nearest spellings of a unit that would do."""
    spellings = {spelling.lower(): spelling for spelling in _would_do(kind)}
    head = f"{text.removesuffix(unit).rstrip()} " if text.endswith(unit) else ""
    return tuple(head + spellings[near] for near in get_close_matches(unit.lower(), spellings, 2, 0.5))


def _shorter_first(amount: Q) -> Iterator[Decimal]:
    """Decimals ever nearer to an amount; 17 digits do, and more only beside a much larger offset."""
    yield Decimal(0)
    numerator, denominator = Decimal(amount.numerator), Decimal(amount.denominator)
    for digits in count(1):
        context = Context(prec=digits)
        yield context.normalize(context.divide(numerator, denominator))

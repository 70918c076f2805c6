"""Text or quantity -> SI float, and back to the shortest text: the one border where units are read.

The number as text and the factor of its unit are exact fractions and are rounded once, so that 8.625 in,
219.075 mm and 0.219075 m are one float.
"""

import math
from collections.abc import Iterator
from dataclasses import replace
from decimal import Context, Decimal
from fractions import Fraction as Q
from functools import lru_cache
from itertools import count
from re import compile as pattern
from typing import Any, Final, Never, Self

import numpy as np
from numpy.typing import NDArray

from pipeflex.errors import Fault, InputError, MissingInput, PipeflexError, UnitError, refuse
from pipeflex.notation import LONGEST, Amount, amount, ascii_unit, plain, strange
from pipeflex.present import UnitSystem, display
from pipeflex.steam import ATMOSPHERE, saturation_temperature
from pipeflex.unit_names import SCALES, Exact, combined, fits, known_unit, meaning, nearest, permitted

__all__ = ["Typed", "ascii_unit", "parse", "parse_range", "si", "spelled"]

_UNLIMITED: Final = {"length", "movement", "force", "moment", "stiffness", "rotational stiffness"}
"""Kinds that may be infinite: a room without limit, an anchor that does not give."""

_RANGE: Final = pattern(r" ?(?:\.\.+|…| to ) ?")
_SIDE: Final = pattern(r"(.*?) ?([ga]|\([ga]\))")
_SATURATED: Final = pattern(r"(.*\S) sat")


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


def parse_range(text: str, kind: str, *, field: str = "", bare: UnitSystem | None = None) -> tuple[Typed, Typed]:
    """A range as text -> its two ends in SI: `5 .. 35 degC`, `5 degC to 95 degF`; one value is both ends.

    The unit at the end serves both numbers. Raises as `parse`, and `InputError` where the higher comes first.
    """
    try:
        tidy = _tidy(text)
        match _RANGE.split(tidy):
            case [_]:
                low = high = _parsed(tidy, kind, bare)
            case [first, second] if first and second:
                low, high = (_parsed(end, kind, bare) for end in _with_unit(tidy, first, second, kind))
            case _:
                _refuse(tidy, kind, "two values, such as 5 .. 35 with one unit at the end")
        if low > high:
            near = (f"{high.text} .. {low.text}",)
            raise InputError(Fault("", tidy, "the lower value first", kind=kind, near=near))
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
    InputError
        Where it cannot be, as for `parse`.
    MissingInput
        Where it is None.
    """
    if isinstance(value, str):
        return parse(value, kind, field=field)
    try:
        if value is None:
            raise MissingInput(Fault("", None, permitted(kind), kind=kind))
        if hasattr(value, "magnitude") and hasattr(value, "units"):
            return _converted(value, kind)
        return value if isinstance(value, Typed) else _numbers(value, kind)
    except PipeflexError as error:
        raise error.prefixed(field) from None


def spelled(value: float, kind: str, units: UnitSystem = "metric") -> str:
    """The shortest text, with an ASCII unit, that parses back to the very same float.

    A value that was typed is written as it was typed, if that text carries its unit.

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
            pass  # typed as a bare number
    if value == math.inf and kind in _UNLIMITED:
        return "unlimited"
    refuse(InputError, (not math.isfinite(value), Fault("", float(value), "a finite number", kind=kind)))
    unit = display(kind, units)
    exact = (Q(float(value)) - unit.offset) / unit.factor
    body = next(body for body in _ever_nearer(exact) if float(Q(body) * unit.factor + unit.offset) == value)
    written = f"{body:f}" if -5 <= body.adjusted() <= 15 else f"{body:e}"
    return f"{written} {ascii_unit(unit.unit)}".rstrip()


def _ever_nearer(exact: Q) -> Iterator[Decimal]:
    """Decimals of more and more digits; 17 tell any two floats apart, unless beside a much larger offset."""
    yield Decimal(0)
    over, under = Decimal(exact.numerator), Decimal(exact.denominator)
    for digits in count(1):
        context = Context(prec=digits)
        yield context.normalize(context.divide(over, under))


# ----------------------------------------------------------------------------------------- text to number


def _tidy(text: str) -> str:
    if not isinstance(text, str):
        raise UnitError(Fault("", repr(text)[:LONGEST], "a quantity as text"))
    if len(text) > LONGEST:
        raise UnitError(Fault("", text[:LONGEST], f"a quantity of at most {LONGEST} characters"))
    return " ".join(text.split())


@lru_cache(maxsize=4096)
def _parsed(text: str, kind: str, bare: UnitSystem | None) -> Typed:
    """The value of tidy text."""
    if not text:
        raise MissingInput(Fault("", None, permitted(kind), kind=kind))
    ascii_text = plain(text)
    if foreign := strange(ascii_text):
        _refuse(text, kind, f"{permitted(kind)}; no quantity contains {foreign!r}")
    if "," in ascii_text:
        _refuse(text, kind, "a point before the decimals and no comma", _readings(text, kind, bare))
    if ascii_text == "unlimited" and kind in _UNLIMITED:
        return Typed(math.inf, text)
    if kind == "temperature" and (saturated := _SATURATED.fullmatch(ascii_text)):
        return Typed(_saturation(saturated[1], text), text)
    return Typed(_possible(_exact(ascii_text, text, kind, bare), text, kind), text)


def _exact(ascii_text: str, text: str, kind: str, bare: UnitSystem | None) -> Q:
    """The exact SI value of a number with its unit."""
    try:
        found = amount(ascii_text)
    except ArithmeticError as error:
        _refuse(text, kind, f"{permitted(kind)}; {error}")
    if found is None:
        _refuse(text, kind, permitted(kind))
    if found.unit:
        return _scaled(found, text, kind)
    if kind in ("ratio", "count"):
        return found.value
    if bare is None:
        _refuse(text, kind, f"{permitted(kind)}; a number needs its unit")
    return found.value * display(kind, bare).factor + display(kind, bare).offset


def _scaled(found: Amount, text: str, kind: str) -> Q:
    value, written, unit = found
    if kind == "temperature" and unit in SCALES:
        scale = display(kind, SCALES[unit])
        return value * scale.factor + scale.offset
    exact, side = _sided(unit) if kind == "pressure" else (known_unit(unit), "")
    slipped = unit in SCALES if kind == "temperature change" else kind == "temperature" and unit != "K"
    if exact is None or slipped or not fits(exact[1], kind):
        reason = f"{unit} is {meaning(unit, exact[1])}" if exact else f"{unit!r} is no unit known here"
        near = tuple(f"{written} {spelling}" for spelling in nearest(unit, kind))
        _refuse(text, kind, f"{permitted(kind)}; {reason}", near)
    return value * exact[0] - (Q(ATMOSPHERE) if side == "a" else 0)


def _sided(unit: str) -> tuple[Exact | None, str]:
    """The unit of a pressure, and "g" for gauge, "a" for absolute or nothing where it does not say."""
    side = _SIDE.fullmatch(unit)
    if side and (exact := known_unit(side[1])):
        return exact, side[2].strip("()")
    return known_unit(unit), ""


def _possible(exact: Q, text: str, kind: str) -> float:
    """The nearest float of a value that can be."""
    if kind == "temperature" and exact < 0:
        raise InputError(Fault("", text, "a temperature above absolute zero", kind=kind))
    if kind == "pressure" and exact < -Q(ATMOSPHERE):
        raise InputError(Fault("", text, "a gauge pressure no lower than full vacuum", kind=kind))
    try:
        value = float(exact)
    except OverflowError:
        value = math.inf
    if math.isinf(value) or (exact and not value):
        _refuse(text, kind, f"{permitted(kind)}; this one is beyond calculation")
    return value


def _saturation(pressure: str, text: str) -> float:
    """Temperature of steam saturated at a pressure, which must say whether it is gauge or absolute."""
    wanted = "a saturation pressure such as 33 bar g sat, 450 psig sat or 34 bar a sat"
    try:
        gauge = _exact(pressure, text, "pressure", None)
    except UnitError:
        _refuse(text, "temperature", wanted)
    found = amount(pressure)
    if found and not _sided(found.unit)[1]:
        near = (f"{pressure} g sat", f"{pressure} a sat")
        _refuse(text, "temperature", f"{wanted}; gauge or absolute?", near)
    try:
        return float(saturation_temperature(float(gauge + Q(ATMOSPHERE))))
    except InputError as error:
        raise InputError(*(replace(fault, field="", given=text) for fault in error.faults)) from None


def _with_unit(text: str, low: str, high: str, kind: str) -> tuple[str, str]:
    """Both ends of a range, the first with the unit of the second if it has none of its own."""
    try:
        first, second = amount(plain(low)), amount(plain(high))
    except ArithmeticError:
        return low, high  # which is then refused by name
    if first is None or second is None or bool(first.unit) == bool(second.unit):
        return low, high
    if first.unit:
        _refuse(text, kind, "a range with its unit at the end", (f"{low} .. {high} {first.unit}",))
    if "f" in second.written:
        _refuse(text, kind, "a range in feet and inches with its units at both ends")
    return f"{low} {second.unit}", high


def _readings(text: str, kind: str, bare: UnitSystem | None) -> tuple[str, ...]:
    """What a text with commas may have meant."""
    readings = []
    for reading in dict.fromkeys((text.replace(",", "."), text.replace(",", ""))):
        try:
            readings.append(_parsed(reading, kind, bare).text)
        except InputError:
            continue
    return tuple(readings)


# --------------------------------------------------------------------------------- numbers and quantities


def _numbers(value: Any, kind: str) -> float | NDArray[np.float64]:
    try:
        array = np.asarray(float(value) if type(value) is int else value)
    except (ValueError, OverflowError):  # ragged, or an integer beyond every float
        array = np.asarray(None)
    if array.dtype.kind not in "iuf":
        given = "a very large integer" if type(value) is int else repr(value)[:LONGEST]
        raise UnitError(Fault("", given, permitted(kind), kind=kind))
    floats = array.astype(float)
    refuse(UnitError, (np.isnan(floats), Fault("", floats, f"{permitted(kind)}; not NaN", kind=kind)))
    return floats if floats.ndim else float(floats)


def _converted(value: Any, kind: str) -> float | NDArray[np.float64]:
    """A quantity with magnitude and units; a float magnitude stands for its shortest decimal."""
    given, unit = f"{str(value.magnitude)[:LONGEST]} {value.units}", str(value.units)
    powers = dict(value.unit_items())
    exact = combined(Q(1), powers.items())
    if exact is None:
        _refuse(given, kind, f"{permitted(kind)}; {unit!r} is no unit known here")
    scale = SCALES.get(unit)
    difference = any(name.startswith("delta_") for name in powers)
    slipped = kind == "temperature change" if scale else kind == "temperature" and difference
    if slipped or not fits(exact[1], kind):
        _refuse(given, kind, f"{permitted(kind)}; {unit} is {meaning(unit, exact[1])}")
    offset = display(kind, scale).offset if scale and kind == "temperature" else Q(0)

    def rounded(number: Any) -> float:
        if number == math.inf and kind in _UNLIMITED:
            return math.inf
        if not math.isfinite(number):
            _refuse(given, kind, f"{permitted(kind)}; finite")
        shortest = Q(repr(float(number))) if isinstance(number, (float, np.floating)) else Q(number)
        return _possible(shortest * exact[0] + offset, given, kind)

    magnitude = value.magnitude
    if np.ndim(magnitude):
        array = np.asarray(magnitude)
        return np.array([rounded(number) for number in array.ravel().tolist()]).reshape(array.shape)
    return rounded(magnitude)


def _refuse(text: str, kind: str, allowed: str, near: tuple[str, ...] = ()) -> Never:
    raise UnitError(Fault("", text, allowed, kind=kind, near=near))

"""Number + kind + unit system -> text: the one owner of formatting.

Serves sheet, errors, desks and command line. The factors are exact fractions of the definitions
(inch 25.4 mm, pound 0.45359237 kg, standard gravity 9.80665 m/s2; the International Yard and Pound Agreement
of 1959 and NIST SP 811); a test compares each with pint. Displaying never changes an answer.
"""

import math
from dataclasses import dataclass
from fractions import Fraction as Q
from typing import Final, Literal

UnitSystem = Literal["metric", "us"]
UNIT_SYSTEMS: Final = ("metric", "us")

_INCH = Q(254, 10000)
_FOOT = 12 * _INCH
_POUND = Q(45359237, 100000000)
_LBF = _POUND * Q(980665, 100000)
_PSI = _LBF / _INCH**2
_DEG_F = Q(5, 9)


@dataclass(frozen=True, slots=True)
class Display:
    """One unit of display: `si = number*factor + offset`, printed with `decimals`, as pint spells it."""

    unit: str
    factor: Q
    decimals: int
    pint: str
    offset: Q = Q(0)


def _d(unit: str, factor: Q | int, decimals: int, pint: str, offset: Q = Q(0)) -> Display:
    return Display(unit, Q(factor), decimals, pint, offset)


_C, _F = Q(27315, 100), Q(27315, 100) - 32 * _DEG_F

DISPLAY: Final[dict[str, tuple[Display, Display]]] = {
    "ratio": (_d("", 1, 3, ""), _d("", 1, 3, "")),
    "count": (_d("", 1, 0, ""), _d("", 1, 0, "")),
    "angle": (_d("°", Q(math.pi) / 180, 2, "degree"), _d("°", Q(math.pi) / 180, 2, "degree")),
    "length": (_d("m", 1, 2, "m"), _d("ft", _FOOT, 2, "ft")),
    "pipe dimension": (_d("mm", Q(1, 1000), 2, "mm"), _d("in", _INCH, 3, "inch")),
    "movement": (_d("mm", Q(1, 1000), 1, "mm"), _d("in", _INCH, 2, "inch")),
    "area": (_d("mm²", Q(1, 10**6), 0, "mm**2"), _d("in²", _INCH**2, 3, "inch**2")),
    "section modulus": (_d("cm³", Q(1, 10**6), 1, "cm**3"), _d("in³", _INCH**3, 2, "inch**3")),
    "volume": (_d("m³", 1, 2, "m**3"), _d("ft³", _FOOT**3, 1, "ft**3")),
    "second moment": (_d("cm⁴", Q(1, 10**8), 0, "cm**4"), _d("in⁴", _INCH**4, 2, "inch**4")),
    "mass": (_d("kg", 1, 1, "kg"), _d("lb", _POUND, 1, "lb")),
    "mass per length": (_d("kg/m", 1, 2, "kg/m"), _d("lb/ft", _POUND / _FOOT, 2, "lb/ft")),
    "density": (_d("kg/m³", 1, 0, "kg/m**3"), _d("lb/ft³", _POUND / _FOOT**3, 1, "lb/ft**3")),
    "force": (_d("kN", 1000, 2, "kN"), _d("lbf", _LBF, 0, "lbf")),
    "weight per length": (_d("N/m", 1, 0, "N/m"), _d("lbf/ft", _LBF / _FOOT, 1, "lbf/ft")),
    "moment": (_d("kN·m", 1000, 2, "kN*m"), _d("ft·lbf", _LBF * _FOOT, 0, "ft*lbf")),
    "stress": (_d("MPa", 10**6, 1, "MPa"), _d("ksi", 1000 * _PSI, 2, "ksi")),
    "modulus": (_d("GPa", 10**9, 1, "GPa"), _d("Msi", 10**6 * _PSI, 2, "Mpsi")),
    "pressure": (_d("bar", 10**5, 2, "bar"), _d("psi", _PSI, 1, "psi")),
    "stiffness": (_d("N/mm", 1000, 0, "N/mm"), _d("lbf/in", _LBF / _INCH, 0, "lbf/inch")),
    "rotational stiffness": (
        _d("kN·m/rad", 1000, 1, "kN*m/rad"),
        _d("ft·lbf/rad", _LBF * _FOOT, 0, "ft*lbf/rad"),
    ),
    "temperature": (_d("°C", 1, 1, "degC", _C), _d("°F", _DEG_F, 1, "degF", _F)),
    "temperature change": (_d("K", 1, 1, "delta_degC"), _d("°F diff.", _DEG_F, 1, "delta_degF")),
    "strain": (_d("mm/m", Q(1, 1000), 4, "mm/m"), _d("in/100 ft", Q(1, 1200), 3, "inch/(100*ft)")),
    "expansion coefficient": (
        _d("µm/(m·K)", Q(1, 10**6), 2, "1e-6/delta_degC"),
        _d("µin/(in·°F)", Q(1, 10**6) / _DEG_F, 2, "1e-6/delta_degF"),
    ),
    "screening value": (
        _d("mm²/m²", Q(1, 10**6), 1, "mm**2/m**2"),
        _d("in²/ft²", Q(1, 144), 5, "inch**2/ft**2"),
    ),
    "bending stiffness": (_d("kN·m²", 1000, 0, "kN*m**2"), _d("lbf·ft²", _LBF * _FOOT**2, 0, "lbf*ft**2")),
    "acceleration": (_d("m/s²", 1, 5, "m/s**2"), _d("ft/s²", _FOOT, 4, "ft/s**2")),
}
_MOST_DECIMALS: Final = 9
_PAIR: Final = {"metric": 0, "us": 1}


def display(kind: str, units: UnitSystem = "metric") -> Display:
    """The unit in which a kind is printed."""
    return DISPLAY[kind][_PAIR[units]]


def shown(value: float, kind: str, units: UnitSystem = "metric") -> float:
    """An SI number in the display unit."""
    unit = display(kind, units)
    return (value - float(unit.offset)) / float(unit.factor)


def number(value: float, kind: str, units: UnitSystem = "metric", decimals: int | None = None) -> str:
    """An SI number as text in the display unit, without the unit.

    The usual decimals of the kind, and three figures where those would hide the number (a temperature keeps its
    decimals: its zero is no nothing); thousands are set apart by thin spaces from five digits on.
    """
    amount = shown(value, kind, units)
    if math.isinf(amount):
        return "unlimited" if amount > 0 else "-unlimited"
    if decimals is None:
        decimals = display(kind, units).decimals
        if amount and abs(amount) < 10.0 ** (2 - decimals) and kind not in ("count", "temperature"):
            decimals = max(decimals, 2 - math.floor(math.log10(abs(amount))))
            if decimals > _MOST_DECIMALS:
                return f"{amount:.2e}".replace("-", "\u2212")
    text = f"{amount:.{decimals}f}"
    if not float(text):
        text = text.lstrip("-")
    whole, point, rest = text.partition(".")
    if len(whole.lstrip("-")) > 4:
        whole = f"{int(whole):,}".replace(",", "\u2009")
    return (whole + point + rest).replace("-", "\u2212")


def text(value: float, kind: str, units: UnitSystem = "metric", decimals: int | None = None) -> str:
    """An SI number as text with its unit."""
    unit = display(kind, units).unit
    body = number(value, kind, units, decimals)
    if body.endswith("unlimited") or not unit:
        return body
    return body + ("" if unit == "°" else "\u00a0") + unit


def span(low: float, high: float, kind: str, units: UnitSystem = "metric") -> str:
    """A range as text: `5 .. 35 °C`, with one unit at the end."""
    unit = display(kind, units).unit
    if low == high:
        return text(low, kind, units)
    return f"{number(low, kind, units)} .. {number(high, kind, units)}" + (f"\u00a0{unit}" if unit else "")


def percent(ratio: float, limit: float = 1.0) -> str:
    """A ratio as a percentage whose digits are added until it stands on the same side of the limit."""
    for decimals in range(12):
        body = f"{100 * ratio:.{decimals}f}"
        printed = float(body) / 100
        if (printed > limit) == (ratio > limit) and (printed < limit) == (ratio < limit):
            return f"{body}\u00a0%"
    return f"{100 * ratio:.12f}\u00a0%"

"""What a unit is worth and what it measures: names -> exact factor and dimension, and the words for errors.

The only module that imports pint, and only when a unit other than those of display is met: pint gives the
exact factor of each name of a fixed list. Text that was typed never reaches it.
"""

from collections.abc import Iterable
from difflib import get_close_matches
from fractions import Fraction as Q
from functools import cache, lru_cache
from typing import Any, Final

from pipeflex.notation import ascii_unit, product
from pipeflex.present import DISPLAY, UnitSystem, display
from pipeflex.quantities import KINDS

Exact = tuple[Q, tuple[int, ...]]
"""Factor of a unit, and its exponents of the base units."""


_BASE: Final = ("meter", "kilogram", "second", "kelvin", "radian")
_ANGLES: Final[dict[str, tuple[int, ...]]] = {"angle": (1,), "rotational stiffness": (-1, 0)}
"""Exponents of the radian that a kind may have, the usual one first; all other kinds have none."""

_NAMES: Final[dict[str, str]] = {
    **{name: name for name in ("m", "mm", "cm", "um", "km", "kg", "g", "s", "K", "rad", "deg")},
    **{name: name for name in ("N", "kN", "MN", "lbf", "kip", "Pa", "kPa", "MPa", "GPa", "bar", "mbar")},
    **{name: name for name in ("psi", "ksi")},
    **dict.fromkeys(("in", "inch", "inches"), "inch"),
    **dict.fromkeys(("ft", "foot", "feet"), "foot"),
    **dict.fromkeys(("lb", "lbs", "lbm"), "pound"),
    **dict.fromkeys(("C", "degC", "degC diff", "delta_degC"), "delta_degC"),
    **dict.fromkeys(("F", "degF", "degF diff", "delta_degF"), "delta_degF"),
    "t": "tonne",
    "kips": "kip",
    "Msi": "Mpsi",
    "uin": "microinch",
    "%": "percent",
}
"""Names as they are typed, and in pint."""

SCALES: Final[dict[str, UnitSystem]] = {
    **dict.fromkeys(("C", "degC", "degree_Celsius"), "metric"),
    **dict.fromkeys(("F", "degF", "degree_Fahrenheit"), "us"),
}
"""Names that alone mean a point on a scale of temperature, with the unit system whose scale it is."""

_ALSO: Final[dict[str, tuple[str, ...]]] = {
    "ratio": ("%",),
    "angle": ("rad",),
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
    "strain": ("um/m", "in/in"),
    "expansion coefficient": ("1/K", "1/degF"),
}
"""Units named in errors after those of display."""


@cache
def _registry() -> Any:
    import pint

    return pint.UnitRegistry(non_int_type=Q)


@cache
def _base(name: str) -> Exact | None:
    """Factor and dimension of a unit by its name in pint, offset aside; None if it has none of ours."""
    if name in ("deg", "degree"):
        # Pi is no fraction: the one of display serves, by which 180 degrees are the float pi exactly.
        return display("angle").factor, (0, 0, 0, 0, 1)
    registry = _registry()
    try:
        factor, units = registry.get_base_units(registry.UnitsContainer({name: 1}))
    except AttributeError:  # what pint raises for a name that it does not know
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
def known_unit(unit: str) -> Exact | None:
    """Factor and dimension of a unit in plain text, a temperature scale as a difference; None for no unit."""
    if exact := _display_units().get(ascii_unit(unit)):
        return exact
    taken_apart = product(unit)
    if taken_apart is None or not all(name in _NAMES for name, _ in taken_apart.powers):
        return None
    number, powers = taken_apart
    return combined(number, ((_NAMES[name], power) for name, power in powers))


def combined(number: Q, powers: Iterable[tuple[str, int]]) -> Exact | None:
    """Factor and dimension of a product of units by their names in pint."""
    dimension = (0,) * len(_BASE)
    for name, power in powers:
        base = _base(name)
        if base is None or power != int(power):
            return None
        number *= base[0] ** int(power)
        dimension = tuple(a + int(power) * b for a, b in zip(dimension, base[1], strict=True))
    return number, dimension


def fits(dimension: tuple[int, ...], kind: str) -> bool:
    """Whether a unit measures the kind; a count has no unit, an angle is not just any ratio."""
    *rest, angle = dimension
    return kind != "count" and tuple(rest) == KINDS[kind] and angle in _ANGLES.get(kind, (0,))


def _a(kind: str) -> str:
    return f"{'an' if kind[0] in 'aeiou' else 'a'} {kind}"


def _would_do(kind: str) -> list[str]:
    """The units to name for a kind, those of display first."""
    shown = (ascii_unit(unit.unit) for unit in DISPLAY[kind])
    return [unit for unit in dict.fromkeys((*shown, *_ALSO.get(kind, ()))) if unit]


def permitted(kind: str) -> str:
    """What may be typed for a kind of quantity, in words."""
    units = _would_do(kind)
    named = " or ".join(filter(None, (", ".join(units[:-1]), *units[-1:])))
    if kind in ("ratio", "count"):
        return f"{_a(kind)} as a plain number" + (f" or in {named}" if named else "")
    return f"{_a(kind)} in {named}"


def meaning(unit: str, dimension: tuple[int, ...]) -> str:
    """What kind of quantity a unit measures, in words."""
    if ("diff" in unit or "delta" in unit) and fits(dimension, "temperature change"):
        return "a temperature change"
    return next((_a(kind) for kind in KINDS if fits(dimension, kind)), "something else")


def nearest(unit: str, kind: str) -> list[str]:
    """The nearest spellings of a unit that would do."""
    spellings = {spelling.lower(): spelling for spelling in _would_do(kind)}
    return [spellings[near] for near in get_close_matches(unit.lower(), spellings, 2, 0.5)]

"""A run as a route in words, one leg a line, or as pasted coordinates -> corner points."""

import re
from typing import Final

from pipeflex.errors import Fault, InputError, refuse_all
from pipeflex.model.layout import MOST_LEGS, Point
from pipeflex.present import UnitSystem
from pipeflex.units import parse

_WAYS: Final[dict[str, tuple[float, float, float]]] = {
    "east": (1, 0, 0),
    "west": (-1, 0, 0),
    "north": (0, 1, 0),
    "south": (0, -1, 0),
    "up": (0, 0, 1),
    "down": (0, 0, -1),
}
_LEG = re.compile(r"\s*(?P<way>[^\W\d]+)\s+(?P<length>\S.*?)\s*")
_APART = re.compile(r"[;\t ]+")
_LONGEST: Final = 20_000


def _lines(text: str, field: str) -> list[str]:
    if len(text) > _LONGEST:
        raise InputError(Fault(field, text, allowed=f"at most {_LONGEST} characters"))
    lines = [line.strip() for line in re.split(r"[\n;]" if field == "route" else r"\n", text)]
    kept = [line for line in lines if line and not line.startswith("#")]
    if not kept or len(kept) > MOST_LEGS:
        raise InputError(Fault(field, f"{len(kept)} lines", allowed=f"1 to {MOST_LEGS} lines"))
    return kept


def route(text: str, bare: UnitSystem | None = None) -> tuple[Point, ...]:
    """Corner points of a route in words.

    Parameters
    ----------
    text : one leg a line (or set apart by semicolons), such as `east 24 m`, `up 3 m`; east is along the run, north
        across it.
    bare : unit system whose unit of length a bare number takes; without one every length needs its unit.

    Raises
    ------
    InputError
        Every line that cannot be read, at once, by its number.
    """
    place, points, errors = [0.0, 0.0, 0.0], [Point()], []
    for i, line in enumerate(_lines(text, "route"), 1):
        field = f"route, line {i}"
        match = _LEG.fullmatch(line)
        way = match["way"].lower() if match else ""
        if match is None or way not in _WAYS:
            errors.append(InputError(Fault(field, line, allowed="a direction and a length", near=tuple(_WAYS))))
            continue
        try:
            length = float(parse(match["length"], "length", field=field, bare=bare))
        except InputError as error:
            errors.append(error)
            continue
        if length <= 0:
            errors.append(InputError(Fault(field, length, "above zero", "length")))
            continue
        place = [p + length * w for p, w in zip(place, _WAYS[way], strict=True)]
        points.append(Point(along=place[0], across=place[1], up=place[2]))
    refuse_all(errors)
    return tuple(points)


def coordinates(text: str, unit: str = "m") -> tuple[Point, ...]:
    """Corner points of pasted coordinates: three numbers a line, set apart by blanks, tabs or semicolons.

    Parameters
    ----------
    unit : of all numbers.

    Raises
    ------
    InputError
        Every line that cannot be read, at once, by its number.
    """
    points, errors = [], []
    for i, line in enumerate(_lines(text, "coordinates"), 1):
        field = f"coordinates, line {i}"
        numbers = [n for n in _APART.split(line) if n]
        if len(numbers) != 3:
            errors.append(InputError(Fault(field, line, allowed="three numbers: along, across, up")))
            continue
        try:
            along, across, up = (float(parse(f"{n} {unit}", "length", field=field)) for n in numbers)
        except InputError as error:
            errors.append(error)
            continue
        points.append(Point(along=along, across=across, up=up))
    refuse_all(errors)
    return tuple(points)

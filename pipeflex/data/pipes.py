"""Sizes of pipe, tube and elbows out of the tables. Inch numbers are computed with, as the standards print them."""

import re
from typing import Any, Final, NamedTuple

from pipeflex.data.materials import material
from pipeflex.data.tables import near, table
from pipeflex.errors import Fault, TableError
from pipeflex.model.layout import Corner
from pipeflex.model.pipe import Pipe

STEEL: Final = ("pipe/asme_b36_10m", "pipe/asme_b36_19m")
TUBE: Final = "tube/astm_b88"
B16_9: Final = "fittings/elbow_b16_9"
EN_10253: Final = "fittings/elbow_en_10253"
ELBOWS: Final = {
    "long radius": (B16_9, "long_in"),
    "short radius": (B16_9, "short_in"),
    "3D by B16.9": (B16_9, "r_3d_in"),
    "2D by EN 10253": (EN_10253, "r_2d_mm"),
    "3D by EN 10253": (EN_10253, "r_3d_mm"),
    "5D by EN 10253": (EN_10253, "r_5d_mm"),
}
_SIZE = re.compile(
    r"\s*(?P<system>DN|NPS)?\s*(?P<size>\d+(?:[ -]\d+/\d+)?|\d+/\d+|\d+\.\d+)\s*(?P<inch>in|\"|″)?\s*", re.I
)
_HALVES: Final = {"0.5": "1/2", "0.75": "3/4", "1.25": "1-1/4", "1.5": "1-1/2", "2.5": "2-1/2", "3.5": "3-1/2"}


class Dimensions(NamedTuple):
    """Outside diameter and wall [m] of a size, its trade name, and where they come from."""

    outside_diameter: float
    wall: float
    size: str
    schedule: str
    source: str


def size_key(size: str) -> tuple[str, str]:
    """Column ("nps" or "dn") and entry of a size as engineers write it: `DN 200`, `NPS 8`, `8 in`, `2-1/2"`."""
    match = _SIZE.fullmatch(size)
    if not match:
        known = near(size.strip().upper(), [f"DN {d}" for d in table(STEEL[0]).texts("dn")])
        raise TableError(Fault("pipe.size", size, allowed="a size such as DN 200, NPS 8 or 8 in", near=known))
    number = match["size"].replace(" ", "-")
    number = _HALVES.get(number, number)
    return ("dn" if (match["system"] or "").upper() == "DN" else "nps"), number


def _schedule_key(schedule: str) -> str:
    return re.sub(r"^\s*(sch(edule)?\.?|type)\s*", "", schedule, flags=re.I).strip().upper()


def dimensions(size: str, schedule: str) -> Dimensions:
    """Outside diameter and wall of a steel pipe or copper tube size.

    Parameters
    ----------
    size : `DN 200`, `NPS 8`, `8 in`.
    schedule : `40`, `Sch 40`, `STD`, `10S`, or a tube type `K`, `L`, `M`.

    Raises
    ------
    TableError
        No such size or wall; names the nearest.
    """
    column, number = size_key(size)
    wanted = _schedule_key(schedule)
    if wanted in ("K", "L", "M"):
        return _tube(number, wanted, size)
    walls: dict[str, Dimensions] = {}
    sizes: list[str] = []
    for id_ in STEEL:
        source = table(id_)
        names = [source.texts("schedule")]
        if "identification" in source.columns:
            names.insert(0, source.texts("identification"))
        for i, entry in enumerate(source.texts(column)):
            sizes.append(entry)
            if entry != number:
                continue
            found = Dimensions(
                float(source.numbers("od_in")[i]),
                float(source.numbers("wall_in")[i]),
                f"DN {source.texts('dn')[i]}" if column == "dn" else f"NPS {source.texts('nps')[i]}",
                wanted,
                source.source,
            )
            for name in (n for column_ in names for n in re.split(r"[ ,/]+", column_[i]) if n):
                walls.setdefault(name.upper(), found)
    if not walls:
        label = "DN" if column == "dn" else "NPS"
        close = tuple(f"{label} {s}" for s in near(number, sizes))
        raise TableError(Fault("pipe.size", size, allowed="a size of ASME B36.10M or B36.19M", near=close))
    if wanted not in walls:
        listed = tuple(walls)
        raise TableError(Fault("pipe.schedule", schedule, allowed=f"a wall of {size}", near=listed))
    return walls[wanted]


def _tube(number: str, kind: str, size: str) -> Dimensions:
    source = table(TUBE)
    nominal, types = source.texts("nominal"), source.texts("type")
    for i, (n, t) in enumerate(zip(nominal, types, strict=True)):
        if (n, t) == (number, kind):
            return Dimensions(
                float(source.numbers("od_in")[i]),
                float(source.numbers("wall_in")[i]),
                f"{number} in tube",
                f"type {kind}",
                source.source,
            )
    close = tuple(f"{n} in" for n in near(number, nominal))
    raise TableError(Fault("pipe.size", size, allowed=f"a tube size of ASTM B88 type {kind}", near=close))


def sizes() -> tuple[tuple[str, str], ...]:
    """Steel sizes as (nps, dn), in the order of the table."""
    source = table(STEEL[0])
    return tuple(dict.fromkeys(zip(source.texts("nps"), source.texts("dn"), strict=True)))


def walls(size: str) -> tuple[str, ...]:
    """Walls that the standards list for a steel size, by schedule and identification."""
    try:
        dimensions(size, "?")
    except TableError as error:
        if error.faults[0].field == "pipe.schedule":
            return error.faults[0].near
        raise
    return ()


def pipe(
    material_key: str,
    size: str = "",
    schedule: str = "",
    *,
    expansion: str = "current",
    confirmed: Any = (),
    **fields: Any,
) -> Pipe:
    """A pipe of a size and wall of the tables and a material of the tables.

    Other fields of `Pipe` may be given by name; `outside_diameter` and `wall` given so need no size.

    Examples
    --------
    >>> pipe("A106-B", "DN 200", "40").outside_diameter  # 8.625 in, ASME B36.10M
    0.219075
    """
    made: dict[str, Any] = {"materials": (material(material_key, expansion, confirmed),)}
    if "outside_diameter" in fields and "wall" in fields:
        return Pipe(**made, size=size, schedule=schedule, **fields)
    found = dimensions(size, schedule)
    return Pipe(
        **made,
        **{
            "outside_diameter": found.outside_diameter,
            "wall": found.wall,
            "size": size,
            "schedule": schedule,
            "dimensions_from": found.source,
            **fields,
        },
    )


def elbow(size: str, kind: str = "long radius") -> Corner:
    """A bend by the fitting tables: its centreline radius for a size.

    Raises
    ------
    TableError
        No such kind of elbow, or none of that size; names the nearest.
    """
    if kind not in ELBOWS:
        raise TableError(Fault("corner.radius", kind, allowed="a kind of elbow", near=tuple(ELBOWS)))
    id_, column = ELBOWS[kind]
    source = table(id_)
    by, number = size_key(size)
    entry = dict(zip(table(STEEL[0]).texts("nps"), table(STEEL[0]).texts("dn"), strict=True)).get(number, "")
    wanted = number if by == "dn" or by in source.columns else entry
    key = by if by in source.columns else "dn"
    cells = source.texts(key)
    for i, cell in enumerate(cells):
        if cell == wanted and source.texts(column)[i]:
            radius = float(source.numbers(column)[i])
            return Corner(kind="bend", radius=radius, radius_from=f"{kind}, {source.source}")
    raise TableError(Fault("corner.radius", f"{kind}, {size}", allowed=f"a size of {source.source}", near=cells[:5]))

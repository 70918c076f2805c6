"""Fields that the trade writes in its own way: size and wall, material, elbows, tie-in days, states, code."""

from contextlib import suppress
from dataclasses import replace
from functools import lru_cache
from typing import Any, Final

from pipeflex import present
from pipeflex.codes import code, codes
from pipeflex.data.materials import material, material_keys, offered
from pipeflex.data.pipes import ELBOWS, dimensions, elbow, size_key, sizes, walls
from pipeflex.desks.bound import Look, Quantity, Shown, Trade, plain_text, quantity_text, with_unit
from pipeflex.errors import Fault, InputError, PipeflexError, TableError
from pipeflex.model.design import Design
from pipeflex.model.duty import Case
from pipeflex.model.layout import Corner
from pipeflex.model.record import put
from pipeflex.present import UnitSystem
from pipeflex.units import parse, parse_range

_OWN: Final = "own"
"""Choice of a wall or radius that stands in no table."""
_TUBE: Final = ("K", "L", "M")
AMBIENT: Final = "minimum ambient"


# ----------------------------------------------------------------------------------------- size and wall


def _sized(design: Design, size: str, schedule: str) -> Design:
    """A design with another size: its elbows stay of their kind."""
    found = dimensions(size, schedule)
    pipe = replace(
        design.pipe, outside_diameter=found.outside_diameter, wall=found.wall, size=size, schedule=schedule,
        dimensions_from=found.source,
    )  # fmt: skip
    corners = tuple(_resized(c, design.pipe.size, size) for c in design.layout.corners)
    return replace(design, pipe=pipe, layout=replace(design.layout, corners=corners))


def _resized(corner: Corner, old: str, new: str) -> Corner:
    kind = elbow_kind(corner, old)
    return corner if kind is None else elbow(new, kind)


def elbow_kind(corner: Corner, size: str) -> str | None:
    """The kind of elbow that a corner is, for pipe of a size."""
    return next((kind for kind, found in _elbows(size).items() if found == corner), None)


@lru_cache(maxsize=64)
def _elbows(size: str) -> dict[str, Corner]:
    """The elbows that are made in a size, by kind."""
    found = {}
    for kind in ELBOWS:
        with suppress(TableError):
            found[kind] = elbow(size, kind)
    return found


@lru_cache(maxsize=64)
def _schedules(size: str) -> dict[tuple[float, float], str]:
    """Wall and diameter of a size -> its name in the standards, each once, the thinnest first."""
    found: dict[tuple[float, float], str] = {}
    try:
        listed = (*sorted(walls(size), key=lambda name: not name[0].isdigit()), *_TUBE)
    except PipeflexError:
        listed = _TUBE
    for name in listed:
        with suppress(TableError):
            one = dimensions(size, name)
            found.setdefault((one.wall, one.outside_diameter), name)
    return {key: found[key] for key in sorted(found)}


def _take_size(design: Design, text: str, units: UnitSystem) -> Design:
    size = text.strip()
    size_key(size)
    try:
        return _sized(design, size, design.pipe.schedule)
    except TableError as error:
        listed = _schedules(size)
        if error.faults[0].field != "pipe.schedule" or not listed:
            raise
    wall = float(design.pipe.wall)
    return _sized(design, size, listed[min(listed, key=lambda key: abs(key[0] - wall))])


def _next_size(design: Design, count: int) -> str | None:
    nps, dn = zip(*sizes(), strict=True)
    try:
        column, number = size_key(design.pipe.size)
    except TableError:
        return None
    listed, label = (dn, "DN") if column == "dn" else (nps, "NPS")
    place = listed.index(number) + count if number in listed else -1
    return f"{label} {listed[place]}" if 0 <= place < len(listed) else None


def _show_size(design: Design, look: Look) -> Shown:
    return Shown(design.pipe.size or "by its diameter")


def size_field(**how: Any) -> Trade:
    """`DN 200`, `NPS 8`, `8 in`; where the wall is not made in that size, the nearest that is."""
    words = "DN 200, NPS 8 or 8 in; where that size has no such wall, the nearest wall is taken"
    return Trade(
        path="pipe.size", also=("pipe.outside_diameter",), help=words, show=_show_size, take=_take_size,
        next=_next_size, **how,
    )  # fmt: skip


def _offer_walls(design: Design) -> list[tuple[str, str]]:
    pipe = design.pipe
    listed = _schedules(pipe.size).values() if pipe.size else ()
    found = [
        (name, f"Type {name}" if name in _TUBE else f"Sch {name}" if name[0].isdigit() else name) for name in listed
    ]
    if _show_wall(design, Look()).text == _OWN:
        found.append((_OWN, "own wall"))
    return found


def _show_wall(design: Design, look: Look) -> Shown:
    pipe = design.pipe
    return Shown(
        _schedules(pipe.size).get((float(pipe.wall), float(pipe.outside_diameter)), _OWN) if pipe.size else _OWN
    )


def _take_schedule(design: Design, text: str, units: UnitSystem) -> Design:
    return design if text == _OWN else _sized(design, design.pipe.size, text)


def schedule_field(**how: Any) -> Trade:
    """The wall by its name in the standards."""
    return Trade(
        path="pipe.schedule", label="Schedule", show=_show_wall, take=_take_schedule, offers=_offer_walls, **how
    )


def _take_wall(design: Design, text: str, units: UnitSystem) -> Design:
    value = with_unit(parse(text, "pipe dimension", field="pipe.wall", bare=units), "pipe dimension", units)
    if value == float(design.pipe.wall):
        return design
    pipe = put(design.pipe, "wall", value)
    return replace(design, pipe=replace(pipe, schedule="", dimensions_from="given"))


def wall_field(**how: Any) -> Trade:
    """A wall that stands in no standard, by its thickness."""
    return Trade(
        path="pipe.wall", label="Wall", help="nominal; a wall of its own takes the place of the schedule",
        show=lambda d, look: quantity_text(d.pipe.wall, "pipe dimension", look), take=_take_wall, **how,
    )  # fmt: skip


def anchor_field(design: Design, i: int) -> Quantity:
    """The greatest force that the first or the last anchor can take."""
    name = design.layout.ends[i].name
    return Quantity(
        path=f"layout.ends.{i}.anchor_limit", also=(f"layout.ends.{name}.anchor_limit",),
        label=f"Anchor {name or ('first', 'last')[i]}", help="greatest force along its leg that it can take",
    )  # fmt: skip


# ------------------------------------------------------------------------------------- material and elbows


def _offer_materials(design: Design) -> list[tuple[str, str]]:
    own = design.pipe.material
    keys = dict.fromkeys(o.key for o in offered(design.code.stress_tables, own.expansion_set))
    return [(key, key) for key in {**keys, own.key: None}]


def with_material(design: Design, key: str) -> Design:
    """A design of another material, or of its own with what was confirmed meanwhile."""
    found = material(key, design.pipe.material.expansion_set, design.confirmed)
    return replace(design, pipe=replace(design.pipe, materials=(found,), material_row=0))


def _take_material(design: Design, text: str, units: UnitSystem) -> Design:
    if text not in material_keys():
        raise InputError(Fault("pipe.materials", text, allowed="a material of the list"))
    return with_material(design, text)


def material_field(**how: Any) -> Trade:
    """A material whose tables hold growth, modulus and allowable stress for the code."""
    return Trade(
        path="pipe.materials", also=("pipe.material",), label="Material", show=lambda d, _: Shown(d.pipe.material.key),
        take=_take_material, offers=_offer_materials, **how,
    )  # fmt: skip


def _offer_elbows(design: Design) -> list[tuple[str, str]]:
    own = _show_elbow(design, Look()).text
    return [(kind, kind) for kind in {**_elbows(design.pipe.size), own: None}]


def _show_elbow(design: Design, look: Look) -> Shown:
    corner = design.layout.corners[0]
    kind = elbow_kind(corner, design.pipe.size) if len(design.layout.corners) == 1 else "one by one"
    if kind is None and corner.kind == "bend":
        return Shown(f"R {plain_text(float(corner.radius), 'pipe dimension', look.units)}")
    return Shown(kind or corner.kind)


def _take_elbow(design: Design, text: str, units: UnitSystem) -> Design:
    if text not in ELBOWS:
        return design
    return replace(design, layout=replace(design.layout, corners=(elbow(design.pipe.size, text),)))


def bend_field(**how: Any) -> Trade:
    """All corners as one kind of elbow."""
    return Trade(path="layout.corners", label="Bends", show=_show_elbow, take=_take_elbow, offers=_offer_elbows, **how)


# ------------------------------------------------------------------------------------------- temperatures


def _show_days(design: Design, look: Look) -> Shown:
    low, high = design.duty.install_low, design.duty.install_high
    first, last = (quantity_text(t, "temperature", look) for t in (low, high))
    if first.text == last.text:
        return last
    number, _, unit = first.text.rpartition(" ")
    same = number and last.text.endswith(f" {unit}")
    return Shown(f"{number if same else first.text} .. {last.text}")


def _take_days(design: Design, text: str, units: UnitSystem) -> Design:
    low, high = parse_range(text, "temperature", field="duty.installed", bare=units)
    low, high = (with_unit(t, "temperature", units) for t in (low, high))
    return replace(design, duty=replace(design.duty, install_low=low, install_high=high))


def days_field(**how: Any) -> Trade:
    """The tie-in days as a range: `5 .. 35 degC`."""
    return Trade(
        path="duty.installed", also=("duty.install_low", "duty.install_high"), label="Installed",
        help="coldest and hottest day on which the line may be tied in", show=_show_days, take=_take_days, **how,
    )  # fmt: skip


def hottest_case(design: Design) -> str:
    """Name of the case of the highest metal temperature."""
    return max(design.duty.cases, key=lambda c: float(c.temperature)).name


def coldest_case(design: Design) -> str | None:
    """Name of the case of the lowest metal temperature; None where there is one case only."""
    found = min(design.duty.cases, key=lambda c: float(c.temperature)).name
    return None if found == hottest_case(design) else found


def coldest_field(name: str, **how: Any) -> Trade:
    """The lowest metal temperature; typed where there is no such state yet, it makes one."""
    path = f"duty.cases.{name}.temperature"

    def held(design: Design) -> Case | None:
        return next((c for c in design.duty.cases if c.name == name), None)

    def show(design: Design, look: Look) -> Shown:
        case = held(design)
        return Shown("") if case is None else quantity_text(case.temperature, "temperature", look)

    def take(design: Design, text: str, units: UnitSystem) -> Design:
        if not text.strip() and held(design) is None:
            return design
        value = with_unit(parse(text, "temperature", field=path, bare=units), "temperature", units)
        if held(design) is not None:
            return put(design, path, value)
        case = Case(name=name, temperature=value, reason="shut down on the coldest night")
        return replace(design, duty=replace(design.duty, cases=(*design.duty.cases, case)))

    return Trade(path=path, show=show, take=take, kind="temperature", **how)


def in_order(design: Design, hottest: str, coldest: str, before: Design) -> None:
    """Refuse another state hotter than the hottest, or colder than the coldest.

    Raises
    ------
    InputError
        Names the temperature that was changed and the state that is beyond it.
    """
    known = {c.name: float(c.temperature) for c in design.duty.cases}
    earlier = {c.name: float(c.temperature) for c in before.duty.cases}
    top, bottom = hottest_case(design), coldest_case(design)
    ends, kind = ((hottest, top, f"above {top},"), (coldest, bottom or coldest, f"below {bottom},")), "temperature"
    faults = [
        Fault(f"duty.cases.{name}.temperature", known[name], f"{words} {present.text(known[beyond], kind)}", kind)
        for name, beyond, words in ends
        if name in known and beyond != name and known[name] != earlier.get(name)
    ]
    if faults:
        raise InputError(*faults)


# --------------------------------------------------------------------------------------------------- code


def _take_code(design: Design, text: str, units: UnitSystem) -> Design:
    return replace(design, code=code(text))


def code_field(**how: Any) -> Trade:
    """The edition of the code."""
    return Trade(
        path="code", show=lambda d, _: Shown(d.code.key), take=_take_code,
        offers=lambda _: [(key, key) for key in codes()], **how,
    )  # fmt: skip

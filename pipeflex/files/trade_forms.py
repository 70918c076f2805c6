"""The entries of a design file that are shorter in the trade's words than the fields they stand for.

A size and wall by their names, materials and code by their keys, an elbow by its kind, the tie-in days as a range,
the cases as tables under their own names.
"""

import re
from contextlib import suppress
from functools import partial
from typing import Any, Final

from pipeflex.codes import code
from pipeflex.data.materials import material
from pipeflex.data.pipes import ELBOWS, dimensions, elbow
from pipeflex.errors import Fault, InputError, MissingInput, PipeflexError, TableError, UnitError
from pipeflex.files.record_form import Faults, Form, Forms, Table, built, entry, only_known, said, table, taken
from pipeflex.model.design import Design
from pipeflex.model.duty import Case, Confirmed, Duty, PipingCode
from pipeflex.model.fields import Names, Number, Text
from pipeflex.model.layout import Corner, Layout, Segment
from pipeflex.model.pipe import Pipe
from pipeflex.units import parse_range

Said = tuple[Confirmed, ...]

_WORD = re.compile(r"\s*[A-Za-z]")


def forms_for(design: Design) -> Forms:
    """The forms to write a design with."""
    return _forms(design.pipe.size, design.confirmed)


def forms_in(given: Table) -> Forms:
    """The forms to read a design with; what they need of it is taken as far as it can be read."""
    pipe, confirmed = given.get("pipe"), ()
    with suppress(PipeflexError):
        confirmed = taken(given.get("confirmed", []), dict(Design.specs())["confirmed"], "", CONFIRMED)
    return _forms(_size_in(pipe) if isinstance(pipe, dict) else None, confirmed)


def _size_in(pipe: Table) -> str | None:
    """The size that a pipe is given by; None where the reading of the pipe itself tells that it is at fault."""
    size = str(pipe.get("size", ""))
    if "outside_diameter" in pipe or "wall" in pipe:
        return size
    try:
        dimensions(size, str(pipe.get("schedule", "")))
    except TableError as error:
        return None if error.faults[0].field == "pipe.size" else size
    return size


def _forms(size: str | None, confirmed: Said) -> Forms:
    return {
        Design: Form(_fold_design, _unfold_design, ("code",), ("code",)),
        Pipe: Form(
            partial(_fold_pipe, confirmed), partial(_unfold_pipe, confirmed), ("material", "expansion"), ("materials",)
        ),
        Layout: Form(_fold_layout, partial(_unfold_layout, size), ("corner",)),
        Corner: Form(partial(_fold_corner, size), partial(_unfold_corner, size)),
        Segment: Form(partial(_fold_segment, confirmed), partial(_unfold_segment, confirmed), ("pipe",), ("pipe",)),
        Duty: Form(_fold_duty, _unfold_duty, ("installed", "cases"), ("install_low", "install_high", "cases")),
        **CONFIRMED,
    }


# ----------------------------------------------------------------------------------------- confirmed, code


def _fold_confirmed(one: Confirmed, made: Table) -> Table:
    return {**made, "value": entry(one.value, one.kind)}


def _unfold_confirmed(given: Table, faults: Faults) -> Table:
    kind, value = str(given.get("kind")), None
    if kind in dict(Confirmed.specs())["kind"].options:
        with faults.at():
            value = taken(given.get("value", ""), Number(kind), "value", {})
    return {"value": value}


CONFIRMED: Final[Forms] = {Confirmed: Form(_fold_confirmed, _unfold_confirmed, ("value",), ("value",))}


def _fold_design(design: Design, made: Table) -> Table:
    _as_held(lambda: code(design.code.key), design.code, "code.key")
    return {**made, "code": {"key": design.code.key}}


def _unfold_design(given: Table, faults: Faults) -> Table:
    found = None
    with faults.at("code"):
        found = _code(given.get("code", {}))
    return {"code": found}


def _code(given: Any) -> PipingCode:
    if not isinstance(given, dict):
        raise InputError(Fault("", said(given), allowed="a table with a key"))
    faults, found = Faults(), None
    with faults.at():
        only_known(given, ("key",))
    with faults.of("key"):
        found = code(taken(given.get("key", ""), Text(), "key", {}))
    faults.tell()
    assert found is not None
    return found


def _as_held(look_up: Any, own: Any, path: str) -> None:
    """Refuse to write a key that would not bring back the same content."""
    held = None
    with suppress(TableError):
        held = look_up()
    if held != own:
        raise InputError(Fault(path, own.key, allowed="an entry of the tables and codes, just as it is held there"))


# ------------------------------------------------------------------------------------------ pipe, segment


def _fold_pipe(confirmed: Said, pipe: Pipe, made: Table) -> Table:
    keys, expansion = [one.key for one in pipe.materials], pipe.material.expansion_set
    for one in pipe.materials:
        _as_held(partial(material, one.key, expansion, confirmed), one, "pipe.material")
    own = (pipe.outside_diameter, pipe.wall, pipe.dimensions_from)
    with suppress(TableError):
        found = dimensions(pipe.size, pipe.schedule)
        if own == (found.outside_diameter, found.wall, found.source):
            for name in ("outside_diameter", "wall", "dimensions_from"):
                made.pop(name, None)
    names: Table = {name: made.pop(name) for name in ("size", "schedule") if name in made}
    return {**names, "material": keys if len(keys) > 1 else keys[0], "expansion": expansion, **made}


def _unfold_pipe(confirmed: Said, given: Table, faults: Faults) -> Table:
    values: Table = {"materials": ()}
    with faults.of("material", "expansion"):
        if "material" not in given:
            raise MissingInput(Fault("material", None, allowed="the key of a material of the tables"))
        several = isinstance(given["material"], list)
        keys = taken(given["material"], Names() if several else Text(), "material", {})
        expansion = taken(given.get("expansion", "current"), Text(), "expansion", {})
        values["materials"] = tuple(material(key, expansion, confirmed) for key in (keys if several else (keys,)))
    if "outside_diameter" in given or "wall" in given:
        return values
    values |= {"outside_diameter": None, "wall": None}
    with faults.of("size", "schedule"):
        size, schedule = (str(given.get(name, "")) for name in ("size", "schedule"))
        if not size:
            allowed = "a size such as DN 200 and its schedule, or outside_diameter and wall"
            raise MissingInput(Fault("size", None, allowed=allowed))
        found = dimensions(size, schedule)
        values |= {"outside_diameter": found.outside_diameter, "wall": found.wall}
        if "dimensions_from" not in given:
            values["dimensions_from"] = found.source
    return values


def _fold_segment(confirmed: Said, segment: Segment, made: Table) -> Table:
    return made if segment.pipe is None else {**made, "pipe": table(segment.pipe, _forms("", confirmed))}


def _unfold_segment(confirmed: Said, given: Table, faults: Faults) -> Table:
    pipe = None
    if "pipe" in given:
        with faults.at("pipe"):
            pipe = built(Pipe, given["pipe"], _forms("", confirmed))
    return {"pipe": pipe}


# ----------------------------------------------------------------------------------------- layout, corners


def _fold_layout(layout: Layout, made: Table) -> Table:
    if len(layout.corners) != 1:
        return made
    return {("corner" if key == "corners" else key): v for key, v in made.items()} | {"corner": made["corners"][0]}


def _unfold_layout(size: str | None, given: Table, faults: Faults) -> Table:
    if "corner" not in given:
        return {}
    corners: tuple[Corner, ...] = ()
    with faults.at("corner"):
        if "corners" in given:
            raise InputError(Fault("", said(given["corner"]), allowed="one corner for all, or corners, one each"))
        corners = (built(Corner, given["corner"], _forms(size, ())),)
    return {"corners": corners}


def _fold_corner(size: str | None, corner: Corner, made: Table) -> Table:
    for kind in ELBOWS:
        with suppress(TableError):
            found = elbow(size or "", kind)
            if (corner.radius, corner.radius_from) == (found.radius, found.radius_from):
                del made["radius_from"]
                return {**made, "radius": kind}
    return made


def _unfold_corner(size: str | None, given: Table, faults: Faults) -> Table:
    kind = given.get("radius")
    if not (isinstance(kind, str) and (kind in ELBOWS or _WORD.match(kind))):
        return {}
    values: Table = {"radius": 1.0}  # stands in where the fault is told, so that no other follows from it
    if size is None:
        return values
    with faults.of("radius"):
        if not size:
            raise InputError(Fault("radius", kind, allowed="a radius such as 305 mm: an elbow needs the pipe's size"))
        found = elbow(size, kind)
        values["radius"] = found.radius
        if "radius_from" not in given:
            values["radius_from"] = found.radius_from
    return values


# ---------------------------------------------------------------------------------------------------- duty


def _fold_duty(duty: Duty, made: Table) -> Table:
    cases = {case.name: table(case, {}) for case in duty.cases}
    for case in cases.values():
        del case["name"]
    return {"installed": _range(duty.install_low, duty.install_high), **made, "cases": cases}


def _range(low: float, high: float) -> str:
    """Two temperatures as one range, with one unit at the end where that says the same."""
    first, last = str(entry(low, "temperature")), str(entry(high, "temperature"))
    if low == high:
        return first
    short = f"{first.partition(' ')[0]} .. {last}"
    with suppress(InputError):
        if parse_range(short, "temperature") == (low, high):
            return short
    return f"{first} .. {last}"


def _unfold_duty(given: Table, faults: Faults) -> Table:
    values: Table = {"cases": ()}
    if "installed" in given:
        with faults.at():
            days = given["installed"]
            if not isinstance(days, str):
                near = ('"5 .. 35 degC"', '"40 .. 95 degF"')
                raise UnitError(Fault("installed", said(days), "a range of temperature as text", near=near))
            values["install_low"], values["install_high"] = parse_range(days, "temperature", field="installed")
    cases, made = given.get("cases", {}), []
    if not isinstance(cases, dict):
        faults.append(InputError(Fault("cases", said(cases), allowed="tables, each under the name of its case")))
        cases = {}
    for name, case in cases.items():
        with faults.at(f"cases.{name}"):
            made.append(built(Case, case, {}, name=name))
    return {**values, "cases": tuple(made)}

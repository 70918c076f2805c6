"""Every input of a design with where it comes from, read off the declared labels of its records."""

from collections.abc import Iterator
from dataclasses import MISSING, dataclass
from typing import Any

from pipeflex import present
from pipeflex.model.design import Design
from pipeflex.model.fields import Flag, Number, Numbers, Vector
from pipeflex.model.layout import SHAPES, SIZE_WORDS
from pipeflex.model.record import Record
from pipeflex.model.words import Origin
from pipeflex.present import UnitSystem
from pipeflex.sheet.numbers import exact
from pipeflex.units import Typed


@dataclass(frozen=True, slots=True)
class Entry:
    """One input: the group it stands in, its label, its value as text, and its origin in words."""

    group: str
    label: str
    value: str
    origin: str


def inputs(design: Design, units: UnitSystem = "metric") -> tuple[Entry, ...]:
    """All inputs of a single design, in reading order."""
    pipe, layout, duty = design.pipe, design.layout, design.duty
    known = {"pipe.outside_diameter": pipe.dimensions_from, "pipe.wall": pipe.dimensions_from}
    entries = [
        *_of_record(design, pipe, "pipe", "Pipe", units, known),
        Entry("Pipe", "Material", f"{pipe.material.key}, {pipe.material.title}".rstrip(", "), str(Origin.GIVEN)),
        *_of_record(design, layout, "layout", "Layout", units, known),
        *_derived_sizes(design, units),
        *_members(design, units),
        *_of_record(design, duty, "duty", "Duty", units, known),
        *(_case(design, i, units) for i in range(len(duty.cases))),
        Entry("Code", "Code", _code(design), str(Origin.GIVEN)),
        *_of_record(design, design.limits, "limits", "Limits", units, known),
    ]
    for c in design.confirmed:
        at = present.text(c.temperature, "temperature", units)
        value = exact(c.value, c.kind, units)
        entries.append(Entry("Confirmed", f"{c.table}, {c.row}, {at}", value, f"confirmed by {c.by} on {c.date}"))
    return tuple(entries)


def _value(spec: Any, value: Any, units: UnitSystem) -> str:
    if value is None:
        return "none"
    if isinstance(spec, Number):
        shown = exact(float(value), spec.kind, units)
        return f"{shown} (typed {value.text})" if isinstance(value, Typed) and _unlike(value.text, shown) else shown
    if isinstance(spec, Vector):
        return ", ".join(exact(float(v), spec.kind, units) for v in value)
    if isinstance(spec, Flag):
        return "yes" if value else "no"
    return str(value)


def _unlike(typed: str, shown: str) -> bool:
    """Whether what was typed says more than its number in the display unit."""
    plain = [t.replace("\u00a0", "").replace("\u2009", "").replace(" ", "") for t in (typed, shown)]
    return plain[0] != plain[1] and not plain[0].replace(".", "").isdecimal()


def _origin(design: Design, path: str, record: Record, name: str, spec: Any, known: dict[str, str]) -> str:
    if path in design.demo:
        return str(Origin.DEMO)
    if known.get(path):
        return known[path]
    default = record.default(name)
    if default is MISSING or getattr(record, name) != default:
        return str(Origin.GIVEN)
    basis = getattr(spec, "basis", "")
    return f"default, {basis}" if basis else "default"


def _of_record(
    design: Design, record: Record, path: str, group: str, units: UnitSystem, known: dict[str, str]
) -> Iterator[Entry]:
    labels: set[str] = set()
    for name, spec in record.specs():
        label, value = getattr(spec, "label", ""), getattr(record, name)
        if not label:
            continue
        label += ", as named" * (label in labels)
        labels.add(label)
        where = f"{path}.{name}"
        if isinstance(spec, Numbers):
            for key, one in value.items():
                origin = str(Origin.DEMO) if f"{where}.{key}" in design.demo else str(Origin.GIVEN)
                yield Entry(group, SIZE_WORDS.get(key, key), exact(float(one), spec.kind, units), origin)
        elif value != "":
            yield Entry(group, label, _value(spec, value, units), _origin(design, where, record, name, spec, known))


def _derived_sizes(design: Design, units: UnitSystem) -> Iterator[Entry]:
    layout = design.layout
    full = layout.full_sizes()
    for name, (why, _) in SHAPES[layout.shape].derived.items():
        if name not in layout.sizes:
            yield Entry("Layout", SIZE_WORDS[name], exact(float(full[name]), "length", units), f"default, {why}")


def _members(design: Design, units: UnitSystem) -> Iterator[Entry]:
    """Points, corners, ends, supports, weights and segments of the layout."""
    layout = design.layout

    def length(value: float) -> str:
        return exact(float(value), "length", units)

    for i, p in enumerate(layout.points):
        words = f"{length(p.along)} along, {length(p.across)} across, {length(p.up)} up"
        yield Entry("Layout", f"Point {i + 1}", words, str(Origin.GIVEN))
    names = ("all corners",) if len(layout.corners) == 1 else layout.corner_names()
    for name, c in zip(names, layout.corners, strict=False):
        words = c.kind
        if c.radius:
            words += f", R {exact(float(c.radius), 'pipe dimension', units)}"
        if c.flanges:
            words += f", {c.flanges} flanged end{'s' if c.flanges > 1 else ''}"
        yield Entry("Layout", f"Corners, {name}", words, c.radius_from or str(Origin.GIVEN))
    for i, end in enumerate(layout.ends):
        path = f"layout.ends.{end.name or i}"
        label = f"End {end.name}" + (f", {end.tag}" if end.tag else "")
        yield from _loose(design, end, path, label, units)
    for i, s in enumerate(layout.supports):
        words = f"leg {s.leg}, {length(s.distance)}"
        if s.gap:
            words += f", gap {exact(float(s.gap), 'movement', units)}"
        if s.friction is not None:
            words += f", friction {exact(float(s.friction), 'ratio', units)}"
        yield Entry("Layout", f"{s.kind} {s.name or i + 1}", words, str(Origin.GIVEN))
    for w in layout.weights:
        words = f"{exact(float(w.mass), 'mass', units)}, leg {w.leg}, {length(w.distance)}"
        yield Entry("Layout", f"weight {w.name}", words, str(Origin.GIVEN))
    for g in layout.segments:
        words = f"leg {g.leg}, {length(g.start)} to {length(g.end)}"
        if g.temperature_offset:
            words += f", {exact(float(g.temperature_offset), 'temperature change', units)} from the case"
        yield Entry("Layout", f"segment {g.name}", words, str(Origin.GIVEN))


def _loose(design: Design, record: Record, path: str, label: str, units: UnitSystem) -> Iterator[Entry]:
    """Numbers of a member that differ from their defaults, whether labelled or not."""
    parts = []
    for name, spec in record.specs():
        value = getattr(record, name)
        if isinstance(spec, (Number, Vector)) and value != record.default(name):
            parts.append(f"{(spec.label or name.replace('_', ' ')).lower()} {_value(spec, value, units)}")
    origin = Origin.DEMO if any(p.startswith(path) for p in design.demo) else Origin.GIVEN
    yield Entry("Layout", label, "; ".join(parts) or "rigid, no limit given", str(origin))


def _case(design: Design, i: int, units: UnitSystem) -> Entry:
    case = design.duty.cases[i]
    words = [_value(spec, getattr(case, name), units) for name, spec in case.specs() if name == "temperature"]
    spec = dict(case.specs())["pressure"]
    if case.pressure:
        words.append(_value(spec, case.pressure, units))
    for name, spec in case.specs():
        value = getattr(case, name)
        counted = isinstance(spec, (Number, Vector)) and name not in ("temperature", "pressure")
        if counted and value is not None and value != case.default(name):
            words.append(f"{name.replace('_', ' ')} {_value(spec, value, units)}")
    touched = f"duty.cases.{case.name}.temperature" not in design.demo
    origin = str(Origin.GIVEN if touched else Origin.DEMO)
    return Entry("Duty", f"Case {case.name}", ", ".join(words), f"{origin}; {case.reason}" if case.reason else origin)


def _code(design: Design) -> str:
    code = design.code
    return f"{code.key}: {code.title}, {code.edition}".rstrip(", ")

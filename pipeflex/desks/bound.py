"""Fields of a desk, bound to the records that they fill.

A binding names a path of the design; label, kind, limits and help are those that the record declares. It turns
the value at its path into text and a committed text into a new design, and knows no widget.
"""

import math
import re
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from typing import Any, Final, NamedTuple

from pipeflex import present
from pipeflex.errors import Fault, InputError
from pipeflex.model.design import Design
from pipeflex.model.fields import Flag, FrozenMap, Number, Numbers, Pick
from pipeflex.model.layout import SHAPES, SIZE_WORDS
from pipeflex.model.record import Record, at, put
from pipeflex.notation import ascii_unit
from pipeflex.present import UNIT_SYSTEMS, UnitSystem
from pipeflex.units import Typed, parse

INCH: Final = Fraction(254, 10_000)
_UNIT: Final = re.compile(r"[-+.\d\s]*(.*?)\s*")
_TELLING: Final = ("length", "temperature", "pipe dimension")
"""Kinds by whose units a design file is known as metric or U.S."""
_NUMBER: Final = re.compile(r"[-+]?[\d.]+(e[-+]?\d+)?")


class Look(NamedTuple):
    """In which units a desk shows its fields, and in which its file is written in the main."""

    units: UnitSystem = "metric"
    home: UnitSystem = "metric"


class Shown(NamedTuple):
    """A value as its field shows it: the text, and what it means in the desk's units where the text does not say."""

    text: str
    echo: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Bound:
    """One field: its path, and the paths whose faults and demo marks belong to it."""

    path: str
    label: str = ""
    help: str = ""
    also: tuple[str, ...] = ()

    @property
    def paths(self) -> tuple[str, ...]:
        return (self.path, *self.also)

    def named(self, design: Design) -> str:
        """Label in the trade's words: its own, or the one that the record declares."""
        return self.label or str(getattr(declared(design, self.path), "label", "")) or self.path

    def explained(self, design: Design, units: UnitSystem) -> str:
        """Help: its own words, then what the record declares."""
        spec = declared(design, self.path)
        basis = getattr(spec, "basis", "")
        words = (self.help or getattr(spec, "help", ""), _limits(spec, units), f"default: {basis}" if basis else "")
        return "; ".join(w for w in words if w)

    def unit(self, design: Design, units: UnitSystem) -> str:
        """The unit of a bare number."""
        return ""

    def shown(self, design: Design, look: Look) -> Shown:
        return Shown(str(at(design, self.path)))

    def read(self, design: Design, text: str, units: UnitSystem) -> Design:
        """The design with a committed text in it.

        Raises
        ------
        PipeflexError
            For a text that cannot be read, or a value that the design cannot have.
        """
        return put(design, self.path, text)

    def step(self, design: Design, count: int, units: UnitSystem) -> str | None:
        """The text so many steps on; None where there is no further one."""
        return None

    @property
    def steps(self) -> bool:
        return False

    def options(self, design: Design) -> list[tuple[str, str]] | None:
        """Value and text of each choice; None where a text is typed."""
        return None


class Words(Bound):
    """A text field."""

    __slots__ = ()

    def read(self, design: Design, text: str, units: UnitSystem) -> Design:
        return put(design, self.path, text.strip())


@dataclass(frozen=True, slots=True, kw_only=True)
class Quantity(Bound):
    """A number field. `by` : its step, metric and U.S., as text."""

    by: tuple[str, str] | None = None

    def unit(self, design: Design, units: UnitSystem) -> str:
        return ascii_unit(present.display(_number(design, self.path).kind, units).unit)

    def shown(self, design: Design, look: Look) -> Shown:
        return quantity_text(self._value(design), _number(design, self.path).kind, look)

    def read(self, design: Design, text: str, units: UnitSystem) -> Design:
        spec = _number(design, self.path)
        if not text.strip() and spec.optional:
            return self._put(design, None)
        if not text.strip() and spec.unlimited:
            return self._put(design, math.inf)
        value = with_unit(parse(text, spec.kind, field=self.path, bare=units), spec.kind, units)
        return self._put(design, value)

    @property
    def steps(self) -> bool:
        return self.by is not None

    def step(self, design: Design, count: int, units: UnitSystem) -> str | None:
        """The next whole multiple of the step."""
        value, spec = self._value(design), _number(design, self.path)
        if self.by is None or value is None or not math.isfinite(value):
            return None
        by = float(parse(self.by[UNIT_SYSTEMS.index(units)], spec.kind))
        nearest = round(value / by)
        whole = nearest if abs(value / by - nearest) < 1e-6 else math.floor(value / by) + (count < 0)
        return stepped_text((whole + count) * by, spec.kind, units) if whole + count > 0 else None

    def _value(self, design: Design) -> float | None:
        value: float | None = at(design, self.path)
        return value

    def _put(self, design: Design, value: float | None) -> Design:
        return put(design, self.path, value)


class Size(Quantity):
    """A size of the shape; one that is left out follows from the others, and says how."""

    __slots__ = ()

    @property
    def _name(self) -> str:
        return self.path.rpartition(".")[2]

    def named(self, design: Design) -> str:
        return self.label or SIZE_WORDS[self._name]

    def shown(self, design: Design, look: Look) -> Shown:
        if self._name in design.layout.sizes:
            return quantity_text(self._value(design), "length", look)
        return Shown("", f"= {present.text(self._value(design) or 0.0, 'length', look.units)}")

    def explained(self, design: Design, units: UnitSystem) -> str:
        derived = SHAPES[design.layout.shape].derived.get(self._name)
        return "; ".join(w for w in (self.help, f"left out: {derived[0]}" if derived else "") if w)

    def read(self, design: Design, text: str, units: UnitSystem) -> Design:
        if not text.strip() and self._name in SHAPES[design.layout.shape].derived:
            return self._put(design, None)
        value = with_unit(parse(text, "length", field=self.path, bare=units), "length", units)
        return self._put(design, value)

    def _value(self, design: Design) -> float | None:
        value: float | None = design.layout.full_sizes().get(self._name)
        return value

    def _put(self, design: Design, value: float | None) -> Design:
        sizes = {k: v for k, v in design.layout.sizes.items() if k != self._name}
        return put(design, "layout.sizes", FrozenMap(sizes if value is None else {**sizes, self._name: value}))


class Chosen(Bound):
    """One of the few words that the record permits."""

    __slots__ = ()

    def options(self, design: Design) -> list[tuple[str, str]]:
        return [(word, word) for word in declared(design, self.path).options]


@dataclass(frozen=True, slots=True, kw_only=True)
class Switch(Bound):
    """Yes or no, in words of its own. `words` : for no and yes."""

    words: tuple[str, str] = ("no", "yes")

    def shown(self, design: Design, look: Look) -> Shown:
        return Shown("yes" if at(design, self.path) else "no")

    def read(self, design: Design, text: str, units: UnitSystem) -> Design:
        return put(design, self.path, text == "yes")

    def options(self, design: Design) -> list[tuple[str, str]]:
        return list(zip(("no", "yes"), self.words, strict=True))


@dataclass(frozen=True, slots=True, kw_only=True)
class Trade(Bound):
    """What the trade writes in another way than the record holds it: a form of its own."""

    show: Callable[[Design, Look], Shown]
    take: Callable[[Design, str, UnitSystem], Design]
    offers: Callable[[Design], list[tuple[str, str]]] | None = None
    next: Callable[[Design, int], str | None] | None = None
    kind: str = ""
    """Kind of a quantity, for the unit of a bare number."""

    def unit(self, design: Design, units: UnitSystem) -> str:
        return ascii_unit(present.display(self.kind, units).unit) if self.kind else ""

    def shown(self, design: Design, look: Look) -> Shown:
        return self.show(design, look)

    def read(self, design: Design, text: str, units: UnitSystem) -> Design:
        return self.take(design, text, units)

    def options(self, design: Design) -> list[tuple[str, str]] | None:
        return self.offers(design) if self.offers else None

    @property
    def steps(self) -> bool:
        return self.next is not None

    def step(self, design: Design, count: int, units: UnitSystem) -> str | None:
        return self.next(design, count) if self.next else None


# ------------------------------------------------------------------------------------------- declarations


def declared(design: Design, path: str) -> Any:
    """What the record at a path declares of its field; None where it is no field of a record."""
    parent_path, _, name = path.rpartition(".")
    try:
        parent = at(design, parent_path) if parent_path else design
    except InputError:
        return None
    if isinstance(parent, Record):
        return dict(parent.specs()).get(name)
    if isinstance(parent, FrozenMap) and isinstance(spec := declared(design, parent_path), Numbers):
        return Number(spec.kind, spec.limits)
    return None


def _number(design: Design, path: str) -> Number:
    spec = declared(design, path)
    if not isinstance(spec, Number):
        raise InputError(Fault(path, None, allowed="a number of the design"))
    return spec


def _limits(spec: Any, units: UnitSystem) -> str:
    """The permitted range in words."""
    if isinstance(spec, (Flag, Pick)) or not isinstance(spec, Number):
        return ""
    limits = spec.limits
    ends = {"above": limits.above, "at least": limits.at_least, "at most": limits.at_most, "below": limits.below}
    words = [f"{word} {present.text(end, spec.kind, units)}" for word, end in ends.items() if end]
    return ", ".join(words)


# -------------------------------------------------------------------------------------------------- texts


def own_system(text: str, kind: str) -> UnitSystem | None:
    """The unit system whose unit of a kind ends a plain "number unit"; None for any other text."""
    unit = _UNIT.fullmatch(text)
    for system in UNIT_SYSTEMS:
        known = present.display(kind, system).unit
        if unit and unit[1] and unit[1] in (known, ascii_unit(known), known.lstrip("\u00b0")):
            return system
    return None


def home_of(design: Design) -> UnitSystem:
    """The unit system that most numbers of a design were typed in."""
    typed = [v.text for v in design.all_numbers() if isinstance(v, Typed)]
    found = [s for text in typed for kind in _TELLING if (s := own_system(text, kind))]
    return "us" if found.count("us") > found.count("metric") else "metric"


def quantity_text(value: float | None, kind: str, look: Look) -> Shown:
    """A number as its field shows it.

    As it was typed, with an echo where that is not in the desk's units; but where the desk shows other units than
    its file is written in, what was typed in the file's plain units is shown in the desk's.
    """
    if value is None:
        return Shown("")
    units, home = look
    if isinstance(value, Typed) and not math.isinf(value):
        own = own_system(value.text, kind)
        if own == units or _NUMBER.fullmatch(value.text):
            return Shown(value.text)
        if own is None or units == home:
            return Shown(value.text, f"= {present.text(float(value), kind, units)}")
    return Shown(plain_text(float(value), kind, units))


def plain_text(value: float, kind: str, units: UnitSystem) -> str:
    """A number with its unit as it would be typed."""
    if math.isinf(value):
        return "unlimited"
    decimals = 0 if kind == "count" else None
    body = present.number(value, kind, units, decimals).replace("\u2212", "-").replace("\u2009", "")
    if "." in body and kind != "length":
        body = body.rstrip("0").rstrip(".")
    return f"{body} {ascii_unit(present.display(kind, units).unit)}".rstrip()


def with_unit(value: Typed, kind: str, units: UnitSystem) -> Typed:
    """A value that was typed as a bare number, as if its unit had been typed too."""
    unit = ascii_unit(present.display(kind, units).unit)
    if unit and _NUMBER.fullmatch(value.text):
        return Typed(float(value), f"{value.text} {unit}")
    return value


def stepped_text(value: float, kind: str, units: UnitSystem) -> str:
    """A length on a whole step: in metres, or in feet and inches."""
    if units == "us" and kind == "length":
        inches = round(value / float(INCH))
        return f"{inches // 12}'-{inches % 12}\""
    return plain_text(value, kind, units)

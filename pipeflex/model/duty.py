"""What the line goes through, the code it is judged by, and the limits set by the site."""

from collections.abc import Callable
from typing import Any

import numpy as np

from pipeflex.errors import Fault, InputError, MissingInput, refuse
from pipeflex.model.fields import FrozenMap, anything, flag, many, number, pick_of, text, vector
from pipeflex.model.record import Record, record
from pipeflex.steam import ATMOSPHERE
from pipeflex.trace import Rule


@record
class Case(Record):
    """A named state of the line, with the reason why it is looked at."""

    name: str = text(required=True, longest=40)
    temperature: float = number("temperature", above=0, label="Metal temperature")
    pressure: float = number("pressure", at_least=-ATMOSPHERE, at_most=1e9, default=0.0, label="Pressure")
    reason: str = text(default="")
    contents_density: float | None = number("density", at_least=0, optional=True, default=None)
    first_end_movement: tuple[float, ...] = vector("movement", 3, default=(0.0,) * 3)
    last_end_movement: tuple[float, ...] = vector("movement", 3, default=(0.0,) * 3)
    first_end_rotation: tuple[float, ...] = vector("angle", 3, default=(0.0,) * 3)
    last_end_rotation: tuple[float, ...] = vector("angle", 3, default=(0.0,) * 3)
    top_to_bottom: float = number("temperature change", default=0.0, label="Top to bottom")
    top_to_bottom_form: str = pick_of("linear", "half and half", default="linear")
    """How the temperature falls over the section: evenly, or the upper half hot and the lower half not."""

    def check(self) -> None:
        refuse(MissingInput, ("." in self.name, Fault("name", self.name, allowed="a name without a point")))


@record
class Duty(Record):
    """Temperatures of tie-in, cycles, and the named cases.

    install_low, install_high [K] : the coldest and hottest day on which the line may be tied in.
    """

    install_low: float = number(
        "temperature", above=0, default=278.15, label="Installed, coldest day", basis="common practice"
    )
    install_high: float = number(
        "temperature", above=0, default=308.15, label="Installed, hottest day", basis="common practice"
    )
    cases: tuple[Case, ...] = many(lambda: Case)
    cycles: float = number("count", at_least=1, at_most=1e12, default=7000.0, label="Cycles", basis="common practice")
    cold_spring: float = number("ratio", at_least=0, at_most=1, default=0.0, label="Cold spring")
    greatest_range_factor: float = number(
        "ratio", at_least=1.0, at_most=1.2, default=1.0, label="Greatest f", basis="1.2 by choice only"
    )
    unused_sustained: bool = flag(label="eq. (1b), with the unused sustained stress added", default=False)
    pressure_elongation: bool = flag(label="Count pressure elongation", default=False)
    rule_stress: float | None = number(
        "stress", at_least=1e5, at_most=1e10, optional=True, label="Stress of the developed-length rule", default=None
    )

    def check(self) -> None:
        given = [c.name for c in self.cases]
        twice = {n for n in given if given.count(n) > 1}
        refuse(MissingInput, (not self.cases, Fault("cases", None, allowed="at least one named case")))
        low, high = np.asarray(self.install_low), np.asarray(self.install_high)
        refuse(
            InputError,
            (bool(twice), Fault("cases", ", ".join(sorted(twice)), allowed="a name of its own for each case")),
            (
                low > high,
                Fault(
                    "install_low", self.install_low, "not above the hottest tie-in day", "temperature",
                    high=float(np.ravel(high)[0]),
                ),
            ),
        )  # fmt: skip


@record
class Limits(Record):
    """What site and owner allow."""

    room: float = number("length", at_least=1e-3, unlimited=True, label="Room", default=np.inf)
    shoe_length: float = number("length", above=0, default=0.3, label="Shoe", basis="common practice")
    shoe_alarm: float = number("movement", at_least=1e-4, default=0.1, label="Movement alarm", basis="common practice")
    shoe_stop: float = number(
        "movement", at_least=1e-4, default=0.15, label="Greatest movement at a shoe", basis="common practice"
    )
    guide_limit: float = number("force", at_least=1, unlimited=True, label="Guide can take", default=np.inf)
    target: float = number("ratio", above=0, at_most=1, default=0.80, label="Target of a fit", basis="common practice")
    least_anchor: float = number("force", at_least=0, default=2000.0, basis="common practice")


@record
class Title(Record):
    """Title block: all of it is input, so that the same design gives the same bytes."""

    line: str = text(label="Line", default="")
    title: str = text(label="Title", default="")
    project: str = text(label="Project", default="")
    date: str = text(label="Date", longest=40, default="")
    revision: str = text(label="Revision", longest=20, default="")
    by: str = text(label="By", longest=40, default="")
    checked: str = text(label="Checked", longest=40, default="")
    notes: str = text(label="Notes", longest=4000, default="")


@record
class Confirmed(Record):
    """A table value as read in the licensed copy: which, what it says, who read it and when."""

    table: str = text(required=True)
    row: str = text(required=True)
    temperature: float = number("temperature", above=0)
    kind: str = pick_of("expansion coefficient", "strain", "modulus", "stress")
    value: float = anything()
    by: str = text(required=True, longest=40)
    date: str = text(required=True, longest=40)

    def check(self) -> None:
        taken = number(self.kind, at_least=None if self.kind == "strain" else 0.0)
        object.__setattr__(self, "value", taken.metadata["spec"].take(self.value, "value"))


Clauses = tuple[Rule, ...]


@record
class PipingCode(Record):
    """One edition of a piping code: a rule, or a chain of rules, in each field.

    A new edition is `dataclasses.replace(earlier, key=..., changed clauses)`; a company's rule is the same
    move under its own key. `stress_tables` : the edition's own first, then the nearest earlier ones.
    """

    key: str = text(required=True)
    title: str = text(longest=300, default="")
    edition: str = text(default="")
    stress_tables: tuple[str, ...] = anything()
    cycles_exponent: float = anything()
    """Power of r_i in the equivalent cycles: it belongs to the slope of f."""
    allowable_range: Clauses = anything()
    allowable_range_with_sustained: Clauses = anything(default=())
    """What follows `allowable_range` where the sustained stress is known and its unused part is to be added."""
    screening: Clauses = anything(default=())
    bend_factors: FrozenMap = anything(default=FrozenMap())
    """Rules of each kind of corner: flexibility and stress intensification."""
    expansion_stress: Clauses = anything(default=())
    sustained_stress: Clauses = anything(default=())
    cold_spring: Clauses = anything(default=())
    """Greatest reactions hot and cold of a cold-sprung run between two anchors with nothing between."""
    severe_cyclic: Callable[..., Any] | None = anything(default=None)
    modulus_for_range: str = pick_of("at 21 degC", "hot", default="at 21 degC")
    constants: str = pick_of("SI", "U.S.", default="SI")
    remarks: tuple[str, ...] = anything(default=())
    options: FrozenMap = anything(default=FrozenMap())

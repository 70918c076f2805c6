"""The loop desk: what leg a loop needs between two anchors, and what anchors and guides feel."""

from __future__ import annotations

from typing import ClassVar, Final

import ipywidgets

from pipeflex import present
from pipeflex.desks import trade
from pipeflex.desks.bound import INCH, Quantity, Size, Switch, Words, plain_text, quantity_text, stepped_text
from pipeflex.desks.entry import Button, Fold, Heading, Note, Panel, Row
from pipeflex.desks.screen import Screen
from pipeflex.errors import Fault, InputError
from pipeflex.methods import fit
from pipeflex.methods.search import LEG_STEP
from pipeflex.model.design import Design

LEG: Final = "layout.sizes.leg"
_STEP: Final = ("50 mm", "2 in")


class LoopDesk(Screen):
    """One loop between two anchors, bound to its design file.

    Parameters
    ----------
    path : the design file; it is written whole at each committed change.
    units : "metric" or "us"; by default those in which the file is written.

    Examples
    --------
    >>> desk = LoopDesk("line-1204.toml")  # in a notebook: display(desk)
    """

    title: ClassVar[str] = "Loop desk"

    def check(self, design: Design, before: Design | None) -> None:
        if not design.layout.shape.endswith("U"):
            raise InputError(Fault("layout.shape", design.layout.shape, allowed="a loop: U or raised U"))
        if before is not None:
            trade.in_order(design, self.hottest, self.coldest, before)

    def entries(self) -> Panel:
        f, design = self.field, self.held
        self.hottest = trade.hottest_case(design)
        self.coldest = trade.coldest_case(design) or trade.AMBIENT
        hot = f"duty.cases.{self.hottest}."
        raised = [f(Size(path="layout.sizes.rise", by=_STEP))] if "rise" in design.layout.sizes else []
        self.others = Note()
        fields = (
            Heading("Line"),
            f(Words(path="title.line")),
            Row(f(trade.size_field()), f(trade.schedule_field(), bare=True)),
            f(trade.material_field()),
            Heading("Heat"),
            f(Quantity(path=f"{hot}temperature", label="Hottest")),
            f(trade.coldest_field(self.coldest, label="Coldest")),
            f(trade.days_field()),
            self.others,
            Heading("Layout"),
            f(Size(path="layout.sizes.run")),
            Row(f(Size(path=LEG, by=_STEP)), Button("Fit", self.fit, help="the least leg that meets the target")),
            f(Size(path="layout.sizes.width", by=_STEP)),
            *raised,
            f(Quantity(path="layout.first_guide", by=_STEP)),
            f(Quantity(path="limits.room")),
        )
        layout = ipywidgets.Layout(width="304px", flex="none")
        return Panel(*fields, *self._folds(hot), problem=self.tell, layout=layout)

    def _folds(self, hot: str) -> tuple[Fold, ...]:
        f = self.field
        self.wall = Fold(
            "Wall, fluid, insulation",
            f(trade.wall_field()),
            f(Quantity(path="pipe.corrosion_allowance", label="Corrosion")),
            f(Quantity(path="pipe.mill_tolerance")),
            f(trade.bend_field()),
            f(Words(path="pipe.contents")),
            f(Quantity(path="pipe.contents_density", label="Its density")),
            f(Quantity(path=f"{hot}pressure")),
            f(Quantity(path="pipe.insulation_thickness")),
            f(Quantity(path="pipe.insulation_density", label="Its density")),
            f(Quantity(path="pipe.cladding_thickness")),
        )
        self.supports = Fold(
            "Supports",
            f(Quantity(path="layout.rest_spacing")),
            f(Quantity(path="layout.friction")),
            f(Quantity(path="layout.guide_gap", label="Guide gap")),
            f(Quantity(path="layout.guide_spacing")),
            *(f(trade.anchor_field(self.held, i)) for i in range(2)),
            f(Quantity(path="limits.guide_limit")),
            f(Quantity(path="limits.shoe_stop", label="Shoe can take")),
            f(Size(path="layout.sizes.before", label="Anchor to loop")),
        )
        self.rules = Fold(
            "Code",
            f(trade.code_field(label="Edition")),
            f(Quantity(path="duty.cycles")),
            f(Switch(path="duty.unused_sustained", label="Range", words=("eq. (1a)", "eq. (1b)"))),
            f(Quantity(path="duty.greatest_range_factor")),
            f(Switch(path="duty.pressure_elongation", label="Pressure", words=("not counted", "lengthens the run"))),
            f(Quantity(path="limits.target", label="Fit to")),
        )
        return self.wall, self.supports, self.rules

    def summaries(self) -> None:
        design, units = self.held, self.look.units
        pipe, layout, duty = design.pipe, design.layout, design.duty

        def text(value: float | None, kind: str) -> str:
            return quantity_text(value, kind, self.look).text or "none"

        pressure = next(c.pressure for c in duty.cases if c.name == self.hottest)
        wall, cover, lost = pipe.wall, pipe.insulation_thickness, pipe.corrosion_allowance
        thick = [text(v, "pipe dimension") for v in (wall, cover, lost)]
        self.wall.summary = f"{thick[0]}, {pipe.contents} {text(pressure, 'pressure')}, {thick[1]}, c {thick[2]}"
        rests = "no rests" if layout.rest_spacing is None else f"rest {text(layout.rest_spacing, 'length')}"
        anchors = " / ".join(dict.fromkeys(text(end.anchor_limit, "force") for end in layout.ends))
        self.supports.summary = f"{rests}, mu {present.number(float(layout.friction), 'ratio', units, 2)}, {anchors}"
        cycles, rule = text(duty.cycles, "count"), "1b" if duty.unused_sustained else "1a"
        self.rules.summary = f"{design.code.key}, {cycles} cycles, {rule}"
        more = [c for c in duty.cases if c.name not in (self.hottest, self.coldest)]
        words = ", ".join(f"{c.name} {plain_text(float(c.temperature), 'temperature', units)}" for c in more)
        self.others.set(text=f"also: {words}", hidden=not more)

    def fit(self) -> None:
        """The least leg that meets the target, on a whole step; where there is none, what would help."""
        units = self.look.units
        found = fit(self.held, LEG, step=LEG_STEP if units == "metric" else float(2 * INCH))
        if found.value is None:
            self.problem = f"{found.reason} {found.help}"
        else:
            text = stepped_text(found.value, "length", units)
            target = present.percent(float(self.held.limits.target))
            said = f"Fitted: a leg of {text}, for at most {target} of the range."
            self.problem = said if self.fields[LEG].take(text) else self.problem
        self.show()

"""The screen of a desk: headline, fields, picture, checks, foot and bands, one below the other.

A kind of desk says its fields (`entries`) and its fold lines (`summaries`); the rest is the same for all.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Final

import ipywidgets
from IPython.display import display

from pipeflex.desks import shown
from pipeflex.desks.bound import Words
from pipeflex.desks.confirm import ConfirmBand
from pipeflex.desks.core import Desk
from pipeflex.desks.entry import Button, Headline, Note, Panel, Row
from pipeflex.desks.figure import figure
from pipeflex.desks.handing import Handing
from pipeflex.desks.lid import Lid
from pipeflex.desks.shield import shielded
from pipeflex.desks.static import StaticCopy
from pipeflex.desks.view import PictureView
from pipeflex.model.outcome import Outcome
from pipeflex.model.words import Verdict
from pipeflex.sheet import Sheet, scene, svg
from pipeflex.sheet.headline import headline
from pipeflex.sheet.scene import VIEWS
from pipeflex.sheet.svg import COLOURS

_MARKS: Final = {Verdict.FLEXIBLE: "\u2713", Verdict.UNKNOWN: "?"}
_WAITING: Final = "\u2026"
_FAILING: Final = "\u2715"
_DIMENSIONED: Final = ("layout.sizes.", "layout.first_guide", "limits.room")
"""Fields that have a dimension on the drawing."""
_LOWEST: Final = 300
"""Height of the picture, so that the first screen is whole in a narrow page [px]."""
_HIGHEST: Final = 440
"""Height of a very wide picture, and of an isometric one [px]."""
_RISE: Final = 0.4
"""Height of a wider picture, as a part of its width."""
_WIDTH: Final = 522
"""Its width until the page tells its own [px]."""
_SCALE: Final = 3.6
"""Pixels a millimetre of its paper."""
_NARROWEST: Final = 110.0
"""Least paper of a drawing [mm]."""
_TITLES: Final = ("title", "project", "date", "revision", "by", "checked")


class Screen(Desk):
    """A desk with a picture of its line."""

    def entries(self) -> Panel:
        """The fields, in the order of the Tab key."""
        raise NotImplementedError

    def summaries(self) -> None:
        """Bring the fold lines up to date."""

    # --- how it stands -------------------------------------------------------------------------------

    def compose(self) -> Sequence[ipywidgets.Widget]:
        self.view, self.viewpoint, self._lit = "plan", 0, ""
        self.left_out: tuple[str, ...] = ()
        self.handing = Handing(self)
        self.picture = PictureView(height=_LOWEST, colours=dict(COLOURS), width=self._known_width())
        self.picture.observe(shielded(lambda _: self.draw(), self.tell), "width")
        self.checks = ipywidgets.HTML()
        right = ipywidgets.VBox(
            [self.picture, self.checks],
            layout=ipywidgets.Layout(flex="1 1 0", min_width="0", overflow="hidden"),
        )
        self.form = self.entries()
        body = ipywidgets.HBox([self.form, right], layout=ipywidgets.Layout(width="100%", grid_gap="12px"))
        return [self._top(), body, *self._bottom()]

    def _known_width(self) -> int:
        """Width of the picture in an earlier run of the cell: so it need not be drawn twice."""
        return self.before.picture.width if isinstance(self.before, Screen) and self.before.design is not None else 0

    def _top(self) -> Panel:
        self.head, self.memory, self.trouble = Headline(), Note(), Note(announced=True)
        self.metric = Button("metric", lambda: self.set_units("metric"))
        self.us = Button("U.S.", lambda: self.set_units("us"))
        self.back = Button("undo", self.undo, help="take the last change back")
        self.forth = Button("redo", self.redo, help="bring back what was taken back")
        self.ask = Button("confirm", self._ask, help="the table values from memory that this design uses")
        self.again = Button("Read it again", self.read_again, hidden=True)
        self.over = Button("Write over it", self.write_over, hidden=True)
        self.views = {name: Button(name, self._viewer(name), pressed=name == self.view) for name in VIEWS}
        self.turn = Button("turn", self._turn_view, help="the next of four viewpoints", hidden=True)
        looks = (*self.views.values(), self.turn, Note(), self.metric, self.us, self.back, self.forth)
        switches = Row(self.memory, self.ask, Note(), *looks)
        self.top = Panel(self.head, switches, Row(self.trouble, self.again, self.over), problem=self.tell)
        return self.top

    def _bottom(self) -> list[ipywidgets.Widget]:
        """The foot, and below it what the bands hold: few widgets, since each leaves something in the page."""
        self.confirm = ConfirmBand(self)
        self.results = {
            "ladder": Lid("Ladder", self._fill, summary="rule to beam"),
            "loads": Lid("Loads", self._fill),
            "ledger": Lid("Derivation", self._fill),
        }
        self.confirming = Lid("Confirm values", self.confirm.fill)
        self.block = Lid("Title block", self.arrange_foot)
        self._titles = [self.field(Words(path=f"title.{name}")) for name in _TITLES]
        self._fixed = (*self.handing.rows(), Row(*self.results.values(), self.confirming, self.block))
        self.foot, self.parts = Panel(problem=self.tell), ipywidgets.HTML()
        self.arrange_foot()
        return [self.foot, self.parts]

    def arrange_foot(self) -> None:
        """Stand the parts of the open bands below their lines."""
        titles = self._titles if self.block.open else ()
        self.foot.arrange(*self._fixed, *titles, *(self.confirm.parts if self.confirming.open else ()))

    # --- what is shown -------------------------------------------------------------------------------

    def draw(self) -> None:
        if self.answer is None:
            return
        self._lit = self.focus if self.focus.startswith(_DIMENSIONED) else ""
        width = self.picture.width or _WIDTH
        height = _HIGHEST if self.view == "isometric" else int(min(max(_LOWEST, _RISE * width), _HIGHEST))
        made = scene(
            self.answer.outcome,
            self.look.units,
            self.view,
            viewpoint=self.viewpoint,
            focus=self._lit,
            width=max(_NARROWEST, width / _SCALE),
            height=height / _SCALE,
        )
        with self.picture.hold_sync():
            self.picture.height = height
            self.picture.scene = figure(made, _SCALE)
            self.picture.description = made.description
        self.left_out = made.left_out

    def light(self) -> None:
        if (self.focus if self.focus.startswith(_DIMENSIONED) else "") != self._lit:
            self.draw()

    def show(self) -> None:
        with self.top.held(), self.form.held(), self.foot.held():
            self._show()

    def _show(self) -> None:
        wrong = self.wrong
        self.picture.stale = bool(wrong)
        self._show_headline(wrong)
        self.metric.pressed, self.us.pressed = self.look.units == "metric", self.look.units == "us"
        self.back.disabled, self.forth.disabled = not self.can(-1), not self.can(1)
        self.say()
        self.again.hidden = self.over.hidden = not self.conflict
        self.summaries()
        title = self.held.title
        self.block.summary = ", ".join(t for t in (title.revision, title.date, title.by) if t) or "empty"
        self.handing.show(wrong)
        if self.confirming.open:
            self.confirm.fill()
        if self.answer is None:
            return
        table = shown.checks_table(self.answer.outcome, self.look.units, self.left_out)
        self.checks.value = f'<div class="pf-last-good">{table}</div>' if wrong else table
        if self.answer.whole and not wrong:
            self._fill()
            self._show_copy()

    def say(self) -> None:
        self.trouble.set(text=self.problem, hidden=not self.problem)

    def _show_headline(self, wrong: tuple[str, ...]) -> None:
        if self.answer is None:
            detail, lines = "The design cannot be answered.", self.problem.splitlines()
            self.head.set(verdict=str(Verdict.UNKNOWN), mark="?", detail=detail, lines=lines)
            return
        said = headline(self.answer.outcome, self.look.units, self.answer.ladder, self.answer.turns)
        self.memory.text, self.ask.hidden = said.third.replace(": confirm", ""), not said.third
        if wrong:
            detail = f"{' and '.join(wrong)}: the entry is not taken; shown is the last good entry."
            self.head.set(verdict=str(Verdict.UNKNOWN), mark="?", detail=detail, aside=said.code)
            return
        detail = said.first.partition(". ")[2]
        lines = [said.second if self.answer.complete else f"{said.second} The other methods follow."]
        verdict, mark = str(said.verdict), _MARKS.get(said.verdict, _FAILING)
        if not self.sure:
            verdict, mark, detail = "", _WAITING, f"{detail} Loads follow."
        self.head.set(verdict=verdict, mark=mark, detail=detail, aside=said.code, lines=lines)

    def _fill(self) -> None:
        """What the open bands show of the sheet."""
        if self.answer is None or not self.answer.whole:
            return
        made = Sheet(
            outcome=self.answer.outcome,
            units=self.look.units,
            fingerprint="-",
            ladder=self.answer.ladder,
            turns=self.answer.turns,
        )
        self.parts.value = shown.parts(made, [part for part, lid in self.results.items() if lid.open])

    def _show_copy(self) -> None:
        """The picture that outlives the kernel, with its headline."""
        if self.copy is not None and self.answer is not None and self.answer.outcome is not self._copied:
            self._copied = self.answer.outcome
            made = scene(self.answer.outcome, self.look.units)
            self.copy.show(svg(made), f"{self.head.verdict}. {self.head.detail} {made.description}")

    copy: StaticCopy | None = None
    _copied: Outcome | None = None

    # --- what the buttons do -------------------------------------------------------------------------

    def _viewer(self, name: str) -> Callable[[], None]:
        def choose() -> None:
            self.view = name
            for other, button in self.views.items():
                button.pressed = other == name
            self.turn.hidden = name != "isometric"
            self.draw()

        return choose

    def _turn_view(self) -> None:
        self.viewpoint = (self.viewpoint + 1) % 4
        self.draw()

    def _ask(self) -> None:
        self.confirming.open = True

    # --- where it is shown ---------------------------------------------------------------------------

    def _ipython_display_(self) -> None:
        display(self.box)  # type: ignore[no-untyped-call]
        self.complete()
        self.copy = StaticCopy("Static copy of the picture, for readers without a kernel")
        self._show_copy()

    def __repr__(self) -> str:
        state = self.answer.outcome.verdict if self.answer is not None and self.sure else "no answer"
        return f"<{self.title} of {self.file.path.name}: {state}>"

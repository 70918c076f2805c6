"""A desk: fields of one design file, its answer, its picture, and nothing lost.

A desk is bound to a design file. Each committed entry makes a new design, which is answered, drawn and written
whole. An entry that cannot be read or answered changes nothing: its field is marked, the picture says that it shows
the last good entry, and no sheet is written meanwhile. A kind of desk says which fields it has and how they stand
(see `pipeflex.desks.loop`).
"""

from __future__ import annotations

import os
import time
from collections.abc import Sequence
from dataclasses import replace
from typing import Any, ClassVar

import ipywidgets

from pipeflex.desks.answer import Answer, first_answer, settled, whole_answer
from pipeflex.desks.bound import Bound, Look, home_of
from pipeflex.desks.documents import Document
from pipeflex.desks.entry import Button, ChoiceField, EntryField, Headline, Panel
from pipeflex.desks.following import Following
from pipeflex.desks.keys import DeskBox, close_tree
from pipeflex.desks.shield import shielded
from pipeflex.errors import Fault, InputError, PipeflexError
from pipeflex.methods import ladder, reserve
from pipeflex.model.design import Design
from pipeflex.model.words import Verdict
from pipeflex.present import UNIT_SYSTEMS, UnitSystem

IDLE: float = 0.25
"""How long the user must have been idle before the whole answer is worked out, and each step after it [s]."""

_OPEN: dict[str, Desk] = {}
"""The desk of each design file in this kernel: that of a cell that is run again takes over."""


class Desk:
    """What every desk does; a kind of desk adds `check`, `compose`, `draw` and `show`.

    Parameters
    ----------
    path : the design file.
    units : "metric" or "us"; by default those in which the file is written.
    """

    title: ClassVar[str]

    def __init__(self, path: str | os.PathLike[str], units: UnitSystem | None = None) -> None:
        if units not in (None, *UNIT_SYSTEMS):
            raise InputError(Fault("units", str(units), allowed="one of " + ", ".join(UNIT_SYSTEMS)))
        self.file = Document(path)
        self.design: Design | None = None
        self.answer: Answer | None = None
        self.problem = self.saved = self.focus = ""
        self.conflict = False
        self.fields: dict[str, EntryField | ChoiceField] = {}
        self._bound: dict[str, Bound] = {}
        self._wrong: dict[str, str] = {}
        self._past: list[Design] = []
        self._now = 0
        self._following, self._lights = Following(), Following()
        self._asked = units
        self.look = Look(units or "metric")
        self.box = DeskBox([], self.title)
        before = _OPEN.get(self.file.key)
        self.read_again()
        if before is not None:
            self._inherit(before)
            before.close()
        _OPEN[self.file.key] = self

    # --- what a kind of desk adds --------------------------------------------------------------------

    def check(self, design: Design, before: Design | None) -> None:
        """Refuse a design that is none for this desk; `before` : what it was changed from, None for a file."""

    def compose(self) -> Sequence[ipywidgets.Widget]:
        """The widgets for the design that is open; `field` makes the entries."""
        raise NotImplementedError

    def draw(self) -> None:
        """Draw the picture of the answer."""
        raise NotImplementedError

    def show(self) -> None:
        """Bring all but fields and picture up to date."""
        raise NotImplementedError

    def say(self) -> None:
        """Show the problem, or that there is none."""
        raise NotImplementedError

    # --- fields --------------------------------------------------------------------------------------

    def field(self, bound: Bound, **how: Any) -> EntryField | ChoiceField:
        """The entry or choice of a binding."""
        path = bound.path
        options = bound.options(self.held)
        shared: dict[str, Any] = {"on_focus": lambda on: self._point(path if on else ""), **how}

        def commit(text: str) -> tuple[bool, str, str]:
            return self.commit(path, text)

        made: EntryField | ChoiceField
        if options is None:
            step = (lambda n: bound.step(self.held, n, self.look.units)) if bound.steps else None
            made = EntryField("", "", commit, on_step=step, **shared)
        else:
            made = ChoiceField("", "", commit, options=options, **shared)
        self.fields[path], self._bound[path] = made, bound
        self._refresh(path)
        return made

    def commit(self, path: str, text: str) -> tuple[bool, str, str]:
        """Take a committed text: (True, echo, "") where it is read and answered, else (False, "", what is wrong)."""
        bound, design = self._bound[path], self.held
        waiting = self._wrong.pop(path, None)
        try:
            if text != bound.shown(design, self.look).text:
                design = bound.read(design, text, self.look.units)
            self.adopt(replace(design, demo=tuple(p for p in design.demo if p not in bound.paths)))
        except PipeflexError as error:
            self._refuse(path, error)
            return False, "", self._wrong[path]
        if waiting is not None:
            self.problem = ""
            self.show()
        return True, bound.shown(self.held, self.look).echo, ""

    def _refuse(self, path: str, error: PipeflexError) -> None:
        """Mark the field of an entry that is not taken; what other fields have to do with it is said as well."""
        words = []
        for fault in error.faults:
            owner = self._owner(fault.field)
            line = (fault if owner is None else replace(fault, field="")).text(self.look.units)
            words.append(line if owner in (path, None) else f"{self.fields[owner or path].label}: {line}")
        self._wrong[path] = "; ".join(words)
        own = any(self._owner(fault.field) == path for fault in error.faults)
        self.problem = "" if own else f"{self.fields[path].label}, {words[0]}"
        self.show()

    def _owner(self, field: str) -> str | None:
        """Path of the field to which a fault belongs."""
        for path, bound in self._bound.items():
            if any(field == p or field.startswith(p + ".") for p in bound.paths):
                return path
        return None

    @property
    def wrong(self) -> tuple[str, ...]:
        """Labels of the fields whose entry is not taken."""
        return tuple(self.fields[path].label for path in self._wrong)

    def _refresh(self, path: str) -> None:
        bound, part, design = self._bound[path], self.fields[path], self.held
        shown = bound.shown(design, self.look)
        if isinstance(part, ChoiceField):
            part.options = bound.options(design) or []
        part.set(
            label=bound.named(design),
            text=shown.text,
            good=shown.text,
            echo=shown.echo,
            error="",
            unit=bound.unit(design, self.look.units),
            help=bound.explained(design, self.look.units),
            demo=any(p in design.demo for p in bound.paths),
        )

    def refresh(self) -> None:
        """Bring all fields up to date, except those with an entry that was not taken."""
        for path in self.fields:
            if path not in self._wrong:
                self._refresh(path)

    def _point(self, path: str) -> None:
        """Light the dimension of the field that has the keyboard."""
        self.focus = path
        self._lights.start([(0.03, shielded(self.light, self.tell))])

    def light(self) -> None:
        """Draw again where the focus makes a difference to the picture."""

    # --- designs -------------------------------------------------------------------------------------

    @property
    def held(self) -> Design:
        """The design that is open."""
        if self.design is None:
            raise InputError(Fault(self.file.path.name, "not read", allowed="a design file that can be read"))
        return self.design

    def adopt(self, design: Design, *, remember: bool = True) -> None:
        """Show a design, once it is answered, and save it.

        Raises
        ------
        PipeflexError
            Where it cannot be answered; nothing has changed then.
        """
        self.check(design, self.design)
        old = self.design
        same = old is not None and design.with_raw(demo=()) == old.with_raw(demo=())
        if same and self.answer is not None and old is not None and design.demo == old.demo:
            return
        answer = self.answer if same and self.answer is not None else first_answer(design)
        if remember:
            self._past = [*self._past[: self._now + 1], design]
            self._now += 1
        self.design, self.answer, self.problem = design, answer, ""
        if not same:
            self.draw()
        self.show()
        self.refresh()
        self._save()
        if not same:
            self._follow()

    def undo(self) -> None:
        """Take back the entries that were not taken, or else the last change."""
        self._travel(-1)

    def redo(self) -> None:
        """Bring a change back that was taken back."""
        self._travel(1)

    def can(self, way: int) -> bool:
        """Whether there is a change to take back (-1) or to bring back (1)."""
        return 0 <= self._now + way < len(self._past) or (way < 0 and bool(self._wrong))

    def _travel(self, way: int) -> None:
        if self._wrong:
            self._wrong.clear()
            self.problem = ""
            self.refresh()
            self.show()
        elif self.can(way):
            self._now += way
            self.adopt(self._past[self._now], remember=False)

    def set_units(self, units: UnitSystem) -> None:
        """Show everything in a unit system; no number changes."""
        self.look = self.look._replace(units=units)
        self.refresh()
        if self.answer is not None:
            self.draw()
        self.show()

    # --- the answer that follows ----------------------------------------------------------------------

    def _follow(self) -> None:
        steps = (self._complete, self._climb, self._turn)
        self._following.start([(IDLE, shielded(step, self.tell)) for step in steps])

    def _complete(self) -> None:
        """The whole answer in place of the first."""
        try:
            self.answer = whole_answer(self.held)
        except PipeflexError:
            self._following.stop()
            raise
        self.show()

    def _climb(self) -> None:
        if self.answer is not None and self.answer.whole:
            self.answer = replace(self.answer, ladder=ladder(self.held))
            self.show()

    def _turn(self) -> None:
        if self.answer is not None and self.answer.whole:
            turns = reserve(self.held, key=self.answer.outcome.method)
            self.answer = replace(self.answer, turns=turns, complete=True)
            self.show()

    def finish(self) -> Answer | None:
        """Work out now what would follow."""
        self._following.stop()
        if self.answer is not None and not self.answer.complete:
            for step in (self._complete, self._climb, self._turn):
                step()
        return self.answer

    @property
    def sure(self) -> bool:
        """Whether the verdict can be shown: everything is read, and no check that follows can change it."""
        return self.answer is not None and not self._wrong and settled(self.answer)

    # --- the file ------------------------------------------------------------------------------------

    def open(self, path: str | os.PathLike[str]) -> None:
        """Show another design file, found from the folder of this one.

        Raises
        ------
        PipeflexError
            Where it cannot be read, or is none for this desk; the desk stays as it is then.
        """
        file = Document(self.file.path.parent / os.fspath(path).strip())
        design = file.read()
        self.check(design, None)
        other = _OPEN.get(file.key)
        if other is not None and other is not self:
            other.close()
        _OPEN.pop(self.file.key, None)
        self.file = file
        _OPEN[file.key] = self
        self.read_again()

    def read_again(self) -> None:
        """Show the file as it is now. What is wrong with it is shown in place of the desk."""
        self._following.stop()
        self._wrong.clear()
        self.answer, self.conflict, self.saved = None, False, ""
        try:
            design = self.file.read()
            self.check(design, None)
        except PipeflexError as error:
            self._stand(self._trouble(error))
            return
        self.problem = " ".join(self.file.notes)
        self.design, self._past, self._now = design, [design], 0
        home = home_of(design)
        self.look = Look(self._asked or home, home)
        self.fields, self._bound = {}, {}
        self._stand(self.compose())
        try:
            self.answer = first_answer(design)
        except PipeflexError as error:
            self._mark(error)
            return
        self.draw()
        self.show()
        self._follow()

    def _mark(self, error: PipeflexError) -> None:
        """A design that was read but cannot be answered: its fields are there to be put right."""
        self.problem = error.text(self.look.units)
        for fault in error.faults:
            if (path := self._owner(fault.field)) is not None:
                self.fields[path].error = replace(fault, field="").text(self.look.units)
        self.show()

    def _trouble(self, error: PipeflexError) -> list[ipywidgets.Widget]:
        lines = error.text(self.look.units).splitlines()
        head = Headline(verdict=str(Verdict.UNKNOWN), mark="?", detail=f"{self.file.path.name}:", lines=lines)
        return [Panel(head, Button("Read it again", self.read_again))]

    def _stand(self, widgets: Sequence[ipywidgets.Widget]) -> None:
        """Put widgets in the box in place of those before."""
        *old, guard = self.box.children
        self.box.children = (*widgets, guard)
        for widget in old:
            close_tree(widget)

    def _inherit(self, before: Desk) -> None:
        """What the desk of an earlier run of the cell knew and the file does not."""
        if self._asked is None and before.design is not None:
            self.set_units(before.look.units)
        if self.design is not None and before.design == self.design:
            self._past, self._now = before._past, before._now
            self.show()

    def _save(self, *, over: bool = False) -> None:
        try:
            self.file.write(self.held, over=over)
            self.saved, self.conflict = f"saved {time.strftime('%H:%M')} in {self.file.path.name}", False
        except PipeflexError as error:
            self.saved = f"not saved in {self.file.path.name}"
            self.problem, self.conflict = error.text(self.look.units), self.file.is_changed_elsewhere
        self.show()

    def write_over(self) -> None:
        """Save over what another hand has written."""
        self.problem = ""
        self._save(over=True)

    def tell(self, error: Exception) -> None:
        """Show an error that belongs to no field."""
        if isinstance(error, PipeflexError):
            self.problem = error.text(self.look.units)
        else:
            self.problem = f"Fault inside the desk ({type(error).__name__}: {error}). The log has the rest."
        self.say()

    def close(self) -> None:
        """Take the desk off the page; its file has everything."""
        self._following.stop()
        self._lights.stop()
        if _OPEN.get(self.file.key) is self:
            del _OPEN[self.file.key]
        self.box.close_all()

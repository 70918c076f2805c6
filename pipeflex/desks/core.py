"""A desk: fields of one design file, its answer, its picture, and nothing lost.

A desk is bound to a design file. Each committed entry makes a new design, which is answered, drawn and written
whole. An entry that cannot be read or answered changes nothing: its field is marked, the picture says that it shows
the last good entry, and no sheet is written meanwhile. A kind of desk says which fields it has and how they stand
(see `pipeflex.desks.loop`).
"""

from __future__ import annotations

import functools
import logging
import os
import threading
import time
from collections.abc import Callable, Sequence
from dataclasses import replace
from typing import Any, ClassVar, Concatenate, ParamSpec, TypeVar

import ipywidgets

from pipeflex.desks.answer import Answer, first_answer, settled, whole_answer
from pipeflex.desks.bound import Bound, Look, home_of
from pipeflex.desks.documents import Document
from pipeflex.desks.entries import Entries
from pipeflex.desks.entry import Button, ChoiceField, EntryField, Headline, Panel
from pipeflex.desks.following import Following, Step
from pipeflex.desks.keys import DeskBox, close_tree
from pipeflex.errors import Fault, InputError, PipeflexError
from pipeflex.methods import ladder, reserve
from pipeflex.model.design import Design
from pipeflex.model.words import Verdict
from pipeflex.present import UNIT_SYSTEMS, UnitSystem

IDLE: float = 0.25
"""How long the user must have been idle before the whole answer is worked out, and each step after it [s]."""

_STEADY: float = 2.0
"""Changes that follow each other sooner than this are steps of one search: what follows waits longer [s]."""
_GLANCE: float = 0.03
"""How long a field must have had the keyboard before its dimension is lit [s]."""
_LATE: float = 2.0
"""How long the widgets of a desk stay once another has taken over: what was typed last may still be on its way [s]."""

_OPEN: dict[str, Desk] = {}
"""The desk of each design file in this kernel: that of a cell that is run again takes over."""

_TURN = threading.RLock()
"""JupyterLab may run cells and the callbacks of widgets in two threads: desks do one thing at a time."""

logger = logging.getLogger(__name__)

P = ParamSpec("P")
R = TypeVar("R")
D = TypeVar("D", bound="Desk")


def in_turn(act: Callable[Concatenate[D, P], R]) -> Callable[Concatenate[D, P], R]:
    """A method of a desk that waits until no other is at work."""

    @functools.wraps(act)
    def waiting(self: D, *args: P.args, **kwargs: P.kwargs) -> R:
        with _TURN:
            return act(self, *args, **kwargs)

    return waiting  # type: ignore[return-value]


class Desk:
    """What every desk does; a kind of desk adds `check`, `compose`, `draw` and `show`.

    Parameters
    ----------
    path : the design file.
    units : "metric" or "us"; by default those in which the file is written.
    """

    title: ClassVar[str]

    @in_turn
    def __init__(self, path: str | os.PathLike[str], units: UnitSystem | None = None) -> None:
        if units not in (None, *UNIT_SYSTEMS):
            raise InputError(Fault("units", str(units), allowed="one of " + ", ".join(UNIT_SYSTEMS)))
        self.file = Document(path)
        self.design: Design | None = None
        self.answer: Answer | None = None
        self.problem = self.saved = self.focus = ""
        self.conflict = False
        self._entries = Entries(self)
        self._changed = 0.0
        self._past: list[Design] = []
        self._now = 0
        self._following, self._lights = Following(), Following()
        self._asked = units
        self.look = Look(units or "metric")
        self.box = DeskBox([], self.title)
        self._successor: Desk | None = None
        self.before = _OPEN.get(self.file.key)
        """The desk of an earlier run of the cell, while it is taken over."""
        self.read_again()
        _OPEN[self.file.key] = self
        if self.before is not None:
            self._inherit(self.before)
            self.before = None

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

    def fault(self, error: Exception) -> None:
        """Log and show an error of what was done beside the user's events."""
        logger.error("%s failed", self.title, exc_info=error)
        self.tell(error)

    def say(self) -> None:
        """Show the problem, or that there is none."""
        raise NotImplementedError

    # --- fields --------------------------------------------------------------------------------------

    def field(self, bound: Bound, **how: Any) -> EntryField | ChoiceField:
        """The entry or choice of a binding."""
        path = bound.path
        return self._entries.field(bound, self.commit, on_focus=lambda on: self._point(path if on else ""), **how)

    @property
    def fields(self) -> dict[str, EntryField | ChoiceField]:
        """Entries and choices by the paths that they fill."""
        return self._entries.fields

    @property
    def wrong(self) -> tuple[str, ...]:
        """Labels of the fields whose entry is not taken."""
        return self._entries.wrong

    @in_turn
    def commit(self, path: str, text: str) -> tuple[bool, str, str]:
        """Take a committed text: (True, echo, "") where it is read and answered, else (False, "", what is wrong)."""
        if self._successor is not None:
            later = self._successor.fields[path]
            return later.take(text), later.echo, later.error
        waiting = self._entries.forgive(path)
        try:
            self.adopt(self._entries.read(path, text))
        except PipeflexError as error:
            said = self._entries.refuse(path, error)
            self.problem = "" if self._entries.is_about(path, error) else f"{self.fields[path].label}, {said}"
            self.show()
            return False, "", said
        if waiting:
            self.problem = ""
            self.show()
        return True, self._entries.shown(path).echo, ""

    def _point(self, path: str) -> None:
        """Light the dimension of the field that has the keyboard."""
        self.focus = path
        self._lights.start([Step(_GLANCE, lambda: None, lambda _: self.light(), self.fault)])

    def light(self) -> None:
        """Draw again where the focus makes a difference to the picture."""

    # --- designs -------------------------------------------------------------------------------------

    @property
    def held(self) -> Design:
        """The design that is open."""
        if self.design is None:
            raise InputError(Fault(self.file.path.name, "not read", allowed="a design file that can be read"))
        return self.design

    @in_turn
    def adopt(self, design: Design, *, remember: bool = True) -> None:
        """Show a design, once it is answered, and save it.

        Raises
        ------
        PipeflexError
            Where it cannot be answered; nothing has changed then.
        """
        self.check(design, self.design)
        old = self.design
        same = old is not None and _alike(design, old)
        if same and self.answer is not None and old is not None and design.demo == old.demo:
            return
        answer = self.answer if same and self.answer is not None else first_answer(design)
        if remember:
            self._past = [*self._past[: self._now + 1], design]
            self._now += 1
        self.design, self.answer, self.problem = design, answer, ""
        if not same:
            self.draw()
        self._save()
        self._entries.refresh()
        self.show()
        if not same:
            self._follow()

    @in_turn
    def undo(self) -> None:
        """Take back the entries that were not taken, or else the last change."""
        self._travel(-1)

    @in_turn
    def redo(self) -> None:
        """Bring a change back that was taken back."""
        self._travel(1)

    def can(self, way: int) -> bool:
        """Whether there is a change to take back (-1) or to bring back (1)."""
        return 0 <= self._now + way < len(self._past) or (way < 0 and bool(self.wrong))

    def _travel(self, way: int) -> None:
        if self.wrong:
            self._entries.forgive()
            self.problem = ""
            self._entries.refresh()
            self.show()
        elif self.can(way):
            self._now += way
            self.adopt(self._past[self._now], remember=False)

    @in_turn
    def set_units(self, units: UnitSystem) -> None:
        """Show everything in a unit system; no number changes."""
        self.look = self.look._replace(units=units)
        self._entries.refresh()
        if self.answer is not None:
            self.draw()
        self.show()

    # --- the answer that follows ----------------------------------------------------------------------

    def _follow(self) -> None:
        design = self.held
        works: tuple[tuple[Callable[[], Any], Callable[[Answer, Any], Answer]], ...] = (
            (lambda: whole_answer(design), lambda _, whole: whole),
            (lambda: ladder(design), lambda answer, rungs: replace(answer, ladder=rungs)),
            (lambda: reserve(design), lambda answer, turns: replace(answer, turns=turns, complete=True)),
        )
        now = time.monotonic()
        idle, self._changed = IDLE * (3 if now - self._changed < _STEADY else 1), now
        steps = [Step(idle, work, functools.partial(self._add, design, join), self.fault) for work, join in works]
        self._following.start(steps)

    @in_turn
    def _add(self, design: Design, join: Callable[[Answer, Any], Answer], found: Any) -> None:
        """Add to the answer what was found for a design, if that is still the one that is shown."""
        if self.design is design and self.answer is not None:
            self.answer = join(self.answer, found)
            self.show()

    @in_turn
    def complete(self) -> None:
        """Work out now what a first answer leaves to follow."""
        if self.answer is not None and not self.answer.whole:
            self._add(self.held, lambda _, whole: whole, whole_answer(self.held))

    @property
    def sure(self) -> bool:
        """Whether the verdict can be shown: everything is read, and no check that follows can change it."""
        return self.answer is not None and not self.wrong and settled(self.answer)

    # --- the file ------------------------------------------------------------------------------------

    @in_turn
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

    @in_turn
    def read_again(self) -> None:
        """Show the file as it is now. What is wrong with it is shown in place of the desk."""
        self._following.stop()
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
        self._entries = Entries(self)
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
        self._entries.mark(error)
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
        """What the desk of an earlier run of the cell knew and the file does not; it hands on what still arrives."""
        before._following.stop()
        if self._asked is None and before.design is not None and before.look.units != self.look.units:
            self.set_units(before.look.units)
        if self.design is not None and before.design == self.design:
            self._past, self._now = before._past, before._now
            self.show()
        if before.fields.keys() == self.fields.keys():
            before._successor = self
            before._following.start([Step(_LATE, lambda: None, lambda _: before.close(), self.fault)])
        else:
            before.close()

    def _save(self, *, over: bool = False) -> None:
        try:
            self.file.write(self.held, over=over)
            self.saved, self.conflict = f"saved {time.strftime('%H:%M')} in {self.file.path.name}", False
        except PipeflexError as error:
            self.saved = f"not saved in {self.file.path.name}"
            self.problem, self.conflict = error.text(self.look.units), self.file.is_changed_elsewhere

    @in_turn
    def write_over(self) -> None:
        """Save over what another hand has written."""
        self.problem = ""
        self._save(over=True)
        self.show()

    def tell(self, error: Exception) -> None:
        """Show an error that belongs to no field."""
        if isinstance(error, PipeflexError):
            self.problem = error.text(self.look.units)
        else:
            self.problem = f"Fault inside the desk ({type(error).__name__}: {error}). The log has the rest."
        self.say()

    def close(self) -> None:
        """Take the desk off the page; its file has everything."""
        if self._successor is None:
            self._following.stop()
        self._lights.stop()
        if _OPEN.get(self.file.key) is self:
            del _OPEN[self.file.key]
        self.box.close_all()


def _alike(one: Design, other: Design) -> bool:
    """Whether two designs have the same answer; what they share is not looked at twice."""
    pairs = [(getattr(one, name), getattr(other, name)) for name, _ in one.specs() if name != "demo"]
    return all(a is b or a == b for a, b in pairs)

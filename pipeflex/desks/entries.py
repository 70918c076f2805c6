"""The fields of a desk: made of bindings, brought up to date, marked where an entry is not taken."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any, Protocol

from pipeflex.desks.bound import Bound, Look, Shown
from pipeflex.desks.entry import ChoiceField, EntryField
from pipeflex.errors import PipeflexError
from pipeflex.model.design import Design


class Holder(Protocol):
    """What fields need of their desk: the design that is open, and the units in which it is shown."""

    look: Look

    @property
    def held(self) -> Design: ...


class Entries:
    """Entries and choices by the paths that they fill."""

    def __init__(self, desk: Holder) -> None:
        self.fields: dict[str, EntryField | ChoiceField] = {}
        self._desk = desk
        self._bound: dict[str, Bound] = {}
        self._refused: set[str] = set()

    def field(
        self, bound: Bound, commit: Callable[[str, str], tuple[bool, str, str]], **how: Any
    ) -> EntryField | ChoiceField:
        """The entry or choice of a binding; `commit` takes its path and the committed text."""
        path, options = bound.path, bound.options(self._desk.held)

        def take(text: str) -> tuple[bool, str, str]:
            return commit(path, text)

        def step(count: int) -> str | None:
            return bound.step(self._desk.held, count, self._desk.look.units)

        made: EntryField | ChoiceField
        if options is None:
            made = EntryField("", "", take, on_step=step if bound.steps else None, **how)
        else:
            made = ChoiceField("", "", take, options=options, **how)
        self.fields[path], self._bound[path] = made, bound
        self._bring(path)
        return made

    def shown(self, path: str) -> Shown:
        """Text and echo of the value at a path."""
        return self._bound[path].shown(self._desk.held, self._desk.look)

    def read(self, path: str, text: str) -> Design:
        """The design with a committed text in it, which is no demo value from now on."""
        bound, design = self._bound[path], self._desk.held
        if text != self.shown(path).text:
            design = bound.read(design, text, self._desk.look.units)
        return replace(design, demo=tuple(p for p in design.demo if p not in bound.paths))

    # --- entries that are not taken --------------------------------------------------------------------

    @property
    def wrong(self) -> tuple[str, ...]:
        """Labels of the fields whose entry is not taken."""
        return tuple(part.label for path, part in self.fields.items() if path in self._refused)

    def refuse(self, path: str, error: PipeflexError) -> str:
        """Keep in mind that an entry is not taken; what is wrong with it, in words."""
        self._refused.add(path)
        words = []
        for fault in error.faults:
            owner = self._owner(fault.field)
            line = (fault if owner is None else replace(fault, field="")).text(self._desk.look.units)
            words.append(line if owner in (path, None) else f"{self.fields[owner or path].label}: {line}")
        return "; ".join(words)

    def is_about(self, path: str, error: PipeflexError) -> bool:
        """Whether an error names the field of that path."""
        return any(self._owner(fault.field) == path for fault in error.faults)

    def forgive(self, path: str | None = None) -> bool:
        """Forget that the entry of a field, or of all, was not taken; whether there was one."""
        gone = self._refused if path is None else self._refused & {path}
        self._refused = self._refused - gone
        return bool(gone)

    def mark(self, error: PipeflexError) -> None:
        """Mark the fields that an error names."""
        for fault in error.faults:
            if (path := self._owner(fault.field)) is not None:
                self.fields[path].error = replace(fault, field="").text(self._desk.look.units)

    def _owner(self, field: str) -> str | None:
        """Path of the field to which a fault belongs."""
        for path, bound in self._bound.items():
            if any(field == p or field.startswith(p + ".") for p in bound.paths):
                return path
        return None

    # --- bringing up to date ---------------------------------------------------------------------------

    def refresh(self) -> None:
        """Bring all fields up to date, except those with an entry that was not taken."""
        for path in self.fields:
            if path not in self._refused:
                self._bring(path)

    def _bring(self, path: str) -> None:
        bound, part, design, units = self._bound[path], self.fields[path], self._desk.held, self._desk.look.units
        shown = self.shown(path)
        if isinstance(part, ChoiceField):
            part.options = bound.options(design) or []
        part.set(
            label=bound.named(design),
            text=shown.text,
            good=shown.text,
            echo=shown.echo,
            error="",
            unit=bound.unit(design, units),
            help=bound.explained(design, units),
            demo=any(p in design.demo for p in bound.paths),
        )

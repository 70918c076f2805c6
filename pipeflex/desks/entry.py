"""Entries, choices, buttons, headline and folds of a desk.

Parts are plain objects that live in a `Panel`; a panel is one widget, whatever the number of its parts.
(Measured: a run of a cell anew leaves about 10 kB a widget model in the page, so thirty fields as thirty
widgets leak 0.4 MB a run, in one panel a tenth of it.)  Set a part's traits and the panel follows in place;
what has the keyboard keeps it.  Text is shown as text: nothing here makes HTML.

A field knows no units.  It hands what was typed to its ``commit`` and shows what comes back.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any, ClassVar, NamedTuple

import anywidget
import ipywidgets
from traitlets import Bool, HasTraits, List, Tuple, Unicode

from pipeflex.desks.shield import shielded

_ASSETS = Path(__file__).parent / "assets"
_keys = itertools.count(1)


class Reading(NamedTuple):
    """What a desk makes of a committed text."""

    ok: bool
    echo: str = ""
    """What was understood, if that differs from the text: "= 241 degC"."""
    error: str = ""
    """What is wrong, in the trade's words."""


class Part(HasTraits):
    """Something in a panel.  Traits tagged ``shown`` are what the page gets to see."""

    kind: ClassVar[str]
    parts: tuple[Part, ...] = ()
    hidden = Bool(help="not shown for now").tag(shown=True)

    def __init__(self, **values: Any) -> None:
        self.key = f"part-{next(_keys)}"
        self.panel: Panel | None = None
        super().__init__(**values)
        self.observe(self._changed, list(self.traits(shown=True)))

    def _changed(self, _: object) -> None:
        if self.panel is not None:
            self.panel.refresh()

    def set(self, **values: Any) -> None:
        """Set several traits as one change of the page."""
        with self.panel.held() if self.panel else self.hold_trait_notifications():
            for name, value in values.items():
                setattr(self, name, value)

    def spec(self) -> dict[str, Any]:
        """What the page draws."""
        shown = {name: getattr(self, name) for name in self.traits(shown=True)}
        inner = [part.spec() for part in self.parts]
        return {"key": self.key, "kind": self.kind, **shown, "parts": inner}

    def heard(self, event: str, content: dict[str, Any]) -> None:
        """Act on an event of the page."""


class _Field(Part):
    """What an entry and a choice share.

    Parameters
    ----------
    label : str
        In the trade's words.
    text : str
        The text to begin with; taken as good, and not committed.
    commit : callable
        Takes the committed text, returns a `Reading` or a plain tuple like one.
    on_focus : callable, optional
        Takes True when the field gets the keyboard and False when it loses it.
    values
        Other traits.
    """

    label = Unicode().tag(shown=True)
    text = Unicode(help="as typed").tag(shown=True)
    good = Unicode(help="the last text that was read").tag(shown=True)
    echo = Unicode(help="what was understood").tag(shown=True)
    error = Unicode(help="what is wrong with the text").tag(shown=True)
    unit = Unicode(help="unit of a bare number").tag(shown=True)
    help = Unicode().tag(shown=True)
    demo = Bool(help="a demo value that nobody has touched").tag(shown=True)
    bare = Bool(help="the label is for screen readers only").tag(shown=True)
    disabled = Bool().tag(shown=True)
    focused = Bool(help="has the keyboard")

    def __init__(
        self,
        label: str,
        text: str,
        commit: Callable[[str], tuple[bool, str, str]],
        *,
        on_focus: Callable[[bool], Any] | None = None,
        **values: Any,
    ) -> None:
        self._commit, self._on_focus = commit, on_focus
        super().__init__(label=label, text=text, good=text, **values)

    def put(self, text: str, echo: str = "") -> None:
        """Show a text that is good already, as undo or another field brings it; nothing is committed."""
        self.set(text=text, good=text, echo=echo, error="")

    def take(self, text: str) -> bool:
        """Commit a text as if it had been typed; whether it was read."""
        ok, echo, error = self._commit(text)
        if ok:
            self.set(text=text, good=text, echo=echo, error="", demo=False)
        else:
            self.set(text=text, echo="", error=error)
        return ok

    def heard(self, event: str, content: dict[str, Any]) -> None:
        if event == "commit":
            self.take(content["text"])
        elif event == "restore":
            self.take(self.good)
        elif event == "focus":
            self.focused = content["focused"]
            if self._on_focus is not None:
                self._on_focus(self.focused)


class EntryField(_Field):
    """A text entry: Enter or leaving commits, Up and Down step, Esc puts the last good text back.

    Parameters
    ----------
    on_step : callable, optional
        Takes a number of steps (negative: down; Shift makes ten), returns the new text, which is then
        committed, or None where there is no further step.
    """

    kind = "entry"
    steps = Bool(help="Up and Down step").tag(shown=True)

    def __init__(
        self,
        label: str,
        text: str,
        commit: Callable[[str], tuple[bool, str, str]],
        *,
        on_step: Callable[[int], str | None] | None = None,
        **values: Any,
    ) -> None:
        self._on_step = on_step
        super().__init__(label, text, commit, steps=on_step is not None, **values)

    def heard(self, event: str, content: dict[str, Any]) -> None:
        if event == "step" and self._on_step is not None:
            stepped = self._on_step(content["steps"])
            if stepped is not None:
                self.take(stepped)
        else:
            super().heard(event, content)


class ChoiceField(_Field):
    """A list to choose from; `text` is the value of the chosen option.

    Parameters
    ----------
    options : sequence of (value, text)
        Values are text too.
    """

    kind = "choice"
    options = List(Tuple(Unicode(), Unicode())).tag(shown=True)


class Button(Part):
    """A button; with `pressed` True or False it shows a state, with None (the default) it has none."""

    kind = "button"
    text = Unicode().tag(shown=True)
    label = Unicode(help="for screen readers, where the text alone does not say it").tag(shown=True)
    help = Unicode().tag(shown=True)
    pressed = Bool(None, allow_none=True).tag(shown=True)
    disabled = Bool(help="stays reachable, does nothing").tag(shown=True)

    def __init__(self, text: str, on_click: Callable[[], Any], **values: Any) -> None:
        self._on_click = on_click
        super().__init__(text=text, **values)

    def heard(self, event: str, content: dict[str, Any]) -> None:
        if event == "click" and not self.disabled:
            self._on_click()


class Headline(Part):
    """The answer: verdict, detail, and further lines.  A change of verdict is announced."""

    kind = "headline"
    verdict = Unicode().tag(shown=True)
    detail = Unicode(help="the rest of the first line").tag(shown=True)
    aside = Unicode(help="at the end of the first line").tag(shown=True)
    mark = Unicode(help="a sign before the verdict").tag(shown=True)
    lines = List(Unicode()).tag(shown=True)


class Heading(Part):
    """The name of a group of fields."""

    kind = "heading"
    text = Unicode().tag(shown=True)

    def __init__(self, text: str, **values: Any) -> None:
        super().__init__(text=text, **values)


class Note(Part):
    """A line of text, with a link that opens beside the notebook if one is given."""

    kind = "note"
    text = Unicode().tag(shown=True)
    link = Unicode(help="address relative to the page").tag(shown=True)
    link_text = Unicode().tag(shown=True)
    announced = Bool(help="changes are announced").tag(shown=True)

    def __init__(self, text: str = "", **values: Any) -> None:
        super().__init__(text=text, **values)


class Row(Part):
    """Parts side by side."""

    kind = "row"

    def __init__(self, *parts: Part, **values: Any) -> None:
        self.parts = parts
        super().__init__(**values)


class Fold(Part):
    """Parts under a line that opens and shuts, and says what is under it either way."""

    kind = "fold"
    title = Unicode().tag(shown=True)
    summary = Unicode().tag(shown=True)
    open = Bool().tag(shown=True)

    def __init__(self, title: str, *parts: Part, **values: Any) -> None:
        self.parts = parts
        super().__init__(title=title, **values)

    def heard(self, event: str, content: dict[str, Any]) -> None:
        if event == "toggle":
            self.open = content["open"]


class Band(Fold):
    """A fold line whose content is a widget, which stands elsewhere in the desk.

    Parameters
    ----------
    content : Widget
        Displayed while the band is open.
    fill : callable, optional
        Called each time the band has opened: what is costly is then made only for those who look.
    """

    kind = "band"

    def __init__(
        self,
        title: str,
        content: ipywidgets.DOMWidget,
        *,
        fill: Callable[[], Any] | None = None,
        **values: Any,
    ) -> None:
        self.content, self._fill = content, fill
        super().__init__(title, **values)
        self._show(None)
        self.observe(self._show, "open")

    def _show(self, _: object) -> None:
        self.content.layout.display = None if self.open else "none"
        if self.open and self._fill is not None:
            self._fill()


class Panel(anywidget.AnyWidget):
    """Parts from top to bottom, in the order of the Tab key.

    Parameters
    ----------
    parts : Part
        A part belongs to one panel.
    problem : callable, optional
        Takes an exception that a callback raised; by default the panel itself shows it, below its parts.
    """

    _esm = _ASSETS / "panel.js"
    _css = _ASSETS / "panel.css"
    tree: List[Any] = List().tag(sync=True)
    trouble = Unicode().tag(sync=True)

    def __init__(self, *parts: Part, problem: Callable[[Exception], Any] | None = None, **how: Any) -> None:
        super().__init__(**how)
        self._holds, self._due = 0, False
        self._react = shielded(self._hand_on, problem or self._show_trouble)
        self.arrange(*parts)
        self.on_msg(self._heard)

    def arrange(self, *parts: Part) -> None:
        """Show these parts from now on."""
        self._parts = parts
        self._by_key: dict[str, Part] = {}
        waiting = list(parts)
        while waiting:
            part = waiting.pop()
            part.panel = self
            self._by_key[part.key] = part
            waiting.extend(part.parts)
        self.refresh()

    @contextmanager
    def held(self) -> Iterator[None]:
        """Send what changes within as one message."""
        self._holds += 1
        try:
            yield
        finally:
            self._holds -= 1
            if self._due and not self._holds:
                self.refresh()

    def refresh(self) -> None:
        """Bring the page up to date, now or at the end of `held`."""
        self._due = self._holds > 0
        if not self._due:
            self.tree = [part.spec() for part in self._parts]

    def _show_trouble(self, error: Exception) -> None:
        self.trouble = f"Fault inside the desk ({type(error).__name__}: {error}). The log has the rest."

    def _hand_on(self, content: dict[str, Any]) -> None:
        part = self._by_key.get(content["part"])
        if part is not None:
            if content["event"] != "focus":
                self.trouble = ""
            with self.held():
                part.heard(content["event"], content)

    def _heard(self, _: object, content: Any, buffers: object) -> None:
        self._react(content)
        self.send({"done": content["part"]})

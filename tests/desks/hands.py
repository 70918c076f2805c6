"""What a user does at a desk, without a browser."""

from __future__ import annotations

from pipeflex.desks import LoopDesk
from pipeflex.desks.entry import ChoiceField, EntryField, Panel, Part


def field(desk: LoopDesk, label: str) -> EntryField | ChoiceField:
    return next(f for f in desk.fields.values() if f.label == label)


def put(desk: LoopDesk, label: str, text: str) -> EntryField | ChoiceField:
    """Commit a text as the page does."""
    part = field(desk, label)
    strike(part, "commit", text=text)
    return part


def strike(part: Part, event: str, **content: object) -> None:
    assert isinstance(part.panel, Panel)
    part.panel._handle_custom_msg({"part": part.key, "event": event, **content}, [])
    assert not part.panel.trouble

"""The box around a desk, which keeps the keyboard of what is inside it.

JupyterLab acts on single letters (``x`` cuts the cell, ``d d`` deletes it) wherever the focus is not in a
text box, hence also on a button or a list of a desk.  `DeskBox` carries a guard that hides every key struck
inside it from JupyterLab, except saving (Ctrl+S), and leaves it to the control that has the focus.
"""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import anywidget
import ipywidgets
import traitlets

DESK_CLASS = "pipeflex-desk"
_ASSETS = Path(__file__).parent / "assets"


class _Guard(anywidget.AnyWidget):
    _esm = _ASSETS / "keys.js"
    label = traitlets.Unicode().tag(sync=True)


class DeskBox(ipywidgets.VBox):  # type: ignore[misc]
    """A column of widgets within which the notebook's one-letter commands do not act.

    Parameters
    ----------
    children : sequence of Widget
        From top to bottom, which is also the order of the Tab key.
    label : str
        Name of the whole for screen readers, for example "Loop desk, line 1204".
    """

    def __init__(self, children: Sequence[ipywidgets.Widget], label: str, **how: Any) -> None:
        self._guard = _Guard(label=label)
        super().__init__([*children, self._guard], **how)
        self.add_class(DESK_CLASS)

    def close_all(self) -> None:
        """Close the box and every widget in it: what a desk does before its cell shows it anew."""
        close_tree(self)


def close_tree(widget: ipywidgets.Widget) -> None:
    """Close a widget, those in it, their layouts and styles; nothing of them stays in kernel or page."""
    for child in getattr(widget, "children", ()):
        close_tree(child)
    for trait in ("layout", "style"):
        if widget.has_trait(trait):
            getattr(widget, trait).close()
    widget.close()

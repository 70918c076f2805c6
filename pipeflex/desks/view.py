"""A live picture: a plain plotly figure, drawn anew at every change.

A scene is a dictionary ``{"data": [...], "layout": {...}}`` of plain lists, numbers and text, as plotly's
figure schema has it.  It travels whole, so that a picture never mixes an old state with a new one.  Wherever
the schema wants a colour, a scene may give a role of `COLOURS`, with an opacity if need be
(``"ribbon/0.3"``); the page resolves it for its own light or dark theme.  Text is best left in "ink":
"heat" and "ribbon" have the contrast of lines and areas, not that of small print.
"""

from __future__ import annotations

from functools import cache
from importlib.metadata import version
from importlib.util import find_spec
from pathlib import Path
from types import MappingProxyType
from typing import Any

import anywidget
import traitlets

from pipeflex.desks.shield import shielded

_ASSETS = Path(__file__).parent / "assets"

COLOURS = MappingProxyType(
    {
        "ink": ("#2B3440", "#E3E7EC"),
        "muted": ("#6B7480", "#9AA4B0"),
        "heat": ("#C77700", "#C77700"),
        "ribbon": ("#2A7F8E", "#2A7F8E"),
        "paper": ("#FFFFFF", "#111111"),
    }
)
"""Role of a colour -> (on light, on dark)."""


@cache
def _plotly_js() -> bytes:
    """plotly.js as the installed plotly package carries it; its Python classes are not imported."""
    spec = find_spec("plotly")
    if spec is None or spec.origin is None:
        raise ModuleNotFoundError("plotly is not installed: a desk draws with it")
    return (Path(spec.origin).parent / "package_data" / "plotly.min.js").read_bytes()


class PictureView(anywidget.AnyWidget):
    """One picture of a desk.

    It takes the width of what surrounds it and the light or dark theme of the page.  Where the reader
    clicked is in `clicked`: ``{"x", "y", "trace", "customdata", "count"}``, with x and y in the scene's own
    coordinates, the name and customdata of the mark that was hit (or None), and a running count so that two
    clicks on one spot are two changes.
    """

    _esm = _ASSETS / "view.js"
    _css = _ASSETS / "view.css"
    _plotly = traitlets.Unicode().tag(sync=True)

    scene = traitlets.Dict(help="plotly figure: data and layout").tag(sync=True)
    description = traitlets.Unicode(help="what the picture shows, for those who cannot see it").tag(sync=True)
    stale = traitlets.Bool(help="marked as showing the last good entry").tag(sync=True)
    stale_words = traitlets.Unicode("shows the last good entry").tag(sync=True)
    height = traitlets.Int(360, min=1, help="height on the screen [px]").tag(sync=True)
    width = traitlets.Int(0, help="width on the screen as the page tells it; 0 before that [px]").tag(sync=True)
    colours = traitlets.Dict(help="role -> (on light, on dark)").tag(sync=True)
    clicked = traitlets.Dict(help="where the reader clicked last").tag(sync=True)

    def __init__(self, **how: Any) -> None:
        super().__init__(_plotly=version("plotly"), **how)
        self.on_msg(shielded(self._answer, lambda error: self.send({"fault": str(error)})))

    @traitlets.default("colours")
    def _default_colours(self) -> dict[str, tuple[str, str]]:
        return dict(COLOURS)

    def _answer(self, _: object, content: Any, buffers: object) -> None:
        """Send plotly.js to a page that does not have it yet."""
        if content == {"wants": "plotly"}:
            self.send({"plotly": self._plotly}, [_plotly_js()])

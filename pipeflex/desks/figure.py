"""A drawing as a plain plotly figure: one trace for each look, labels as text, colours by their roles.

The page finds the colour of a role for its theme: the view must have the palette of `pipeflex.sheet.svg`.
"""

from itertools import groupby
from typing import Any, Final

from pipeflex.sheet.drawing.parts import XY, Area, Label, Scene, Stroke

_PLACE: Final = {"start": "middle right", "middle": "middle center", "end": "middle left"}
_ALIGN: Final = {"start": "left", "middle": "center", "end": "right"}


def figure(scene: Scene, scale: float) -> dict[str, Any]:
    """Data and layout of a scene.

    Parameters
    ----------
    scale : pixels a millimetre of paper, for letters and line weights.
    """
    data = [_trace(list(alike), scale) for _, alike in groupby(scene.shapes, key=_look)]
    level = [label for label in scene.labels if not label.turn]
    data += [_letters(list(alike), scale) for _, alike in groupby(sorted(level, key=_style), key=_style)]
    if scene.spots:
        data.append(_spots(scene))
    hidden = {"visible": False, "fixedrange": False}
    return {
        "data": data,
        "layout": {
            "margin": {"l": 0, "r": 0, "t": 0, "b": 0},
            "dragmode": "zoom",
            "xaxis": {**hidden, "range": [0, scene.width], "constrain": "domain"},
            "yaxis": {
                **hidden, "range": [scene.height, 0], "scaleanchor": "x", "constrain": "domain",
            },
            "annotations": [_turned(label, scale) for label in scene.labels if label.turn],
        },
    }  # fmt: skip


def _look(shape: Area | Stroke) -> tuple[object, ...]:
    if isinstance(shape, Area):
        return "area", shape.role, shape.opacity
    return "stroke", shape.role, shape.weight, shape.dash


def _colour(role: str, opacity: float = 1.0) -> str:
    return role + (f"/{opacity:g}" if opacity < 1 else "")


def _run(outlines: list[tuple[XY, ...]], closed: bool) -> tuple[list[float | None], list[float | None]]:
    """Points of several lines, with a gap after each."""
    x: list[float | None] = []
    y: list[float | None] = []
    for points in outlines:
        whole = (*points, points[0]) if closed else points
        x += [round(p[0], 2) for p in whole] + [None]
        y += [round(p[1], 2) for p in whole] + [None]
    return x[:-1], y[:-1]


def _trace(alike: list[Area | Stroke], scale: float) -> dict[str, Any]:
    first = alike[0]
    area = isinstance(first, Area)
    x, y = _run([shape.points for shape in alike], area)
    trace = {"type": "scatter", "x": x, "y": y, "mode": "lines", "hoverinfo": "skip"}
    if isinstance(first, Area):
        return {**trace, "fill": "toself", "fillcolor": _colour(first.role, first.opacity), "line": {"width": 0}}
    dash = ",".join(f"{d * scale:.1f}px" for d in first.dash) or "solid"
    line = {"color": _colour(first.role), "width": round(max(0.8, first.weight * scale), 2), "dash": dash}
    return {**trace, "line": {**line, "simplify": False}}


def _style(label: Label) -> tuple[Any, ...]:
    return label.role, label.size, label.anchor, label.bold


def _font(label: Label, scale: float) -> dict[str, Any]:
    weight = {"weight": "bold"} if label.bold else {}
    return {"size": round(label.size * scale, 1), "color": _colour(label.role), **weight}


def _letters(alike: list[Label], scale: float) -> dict[str, Any]:
    first = alike[0]
    return {
        "type": "scatter", "mode": "text", "hoverinfo": "skip", "cliponaxis": False,
        "x": [round(label.at[0], 2) for label in alike],
        "y": [round(label.at[1], 2) for label in alike],
        "text": [_plain(label.text) for label in alike],
        "textposition": _PLACE[first.anchor],
        "textfont": _font(first, scale),
    }  # fmt: skip


def _turned(label: Label, scale: float) -> dict[str, Any]:
    return {
        "x": round(label.at[0], 2), "y": round(label.at[1], 2), "text": _plain(label.text), "textangle": label.turn,
        "showarrow": False, "xanchor": _ALIGN[label.anchor], "yanchor": "middle", "borderpad": 0,
        "font": _font(label, scale),
    }  # fmt: skip


def _spots(scene: Scene) -> dict[str, Any]:
    """What the reader is told on pointing at a place."""
    return {
        "type": "scatter", "mode": "markers", "name": "places",
        "x": [round(spot.at[0], 2) for spot in scene.spots],
        "y": [round(spot.at[1], 2) for spot in scene.spots],
        "text": [_plain(spot.text) for spot in scene.spots],
        "customdata": [spot.path for spot in scene.spots],
        "hoverinfo": "text", "marker": {"size": 14, "color": "ink/0"}, "hoverlabel": {"bgcolor": "paper"},
    }  # fmt: skip


def _plain(text: str) -> str:
    """A text that plotly shows as it is: its labels know a little markup of their own."""
    return text.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")

"""A drawing as a plain plotly figure: one path for each look, labels as text, colours by their roles.

The page finds the colour of a role for its theme: the view must have the palette of `pipeflex.sheet.svg`.
"""

from collections.abc import Iterator, Sequence
from itertools import groupby
from typing import Any, Final

from pipeflex.sheet.drawing.parts import Area, Label, Scene, Stroke

_PLACE: Final = {"start": "middle right", "middle": "middle center", "end": "middle left"}
_THINNEST: Final = 0.8
"""Least weight of a line on the screen [px]."""
_ALIGN: Final = {"start": "left", "middle": "center", "end": "right"}


def figure(scene: Scene, scale: float) -> dict[str, Any]:
    """Data and layout of a scene: lines and areas as paths below, letters and places as marks above.

    Parameters
    ----------
    scale : pixels a millimetre of paper, for letters and line weights.
    """
    hidden = {"visible": False, "fixedrange": False, "constrain": "domain"}
    return {
        "data": [_letters([label for label in scene.labels if not label.turn], scale), _spots(scene)],
        "layout": {
            "margin": {"l": 0, "r": 0, "t": 0, "b": 0},
            "dragmode": "zoom",
            "xaxis": {**hidden, "range": [0, scene.width]},
            "yaxis": {**hidden, "range": [scene.height, 0], "scaleanchor": "x"},
            "shapes": [_shape(alike, scale) for alike in _alike(scene.shapes)],
            "annotations": [_turned(label, scale) for label in scene.labels if label.turn],
        },
    }


def _alike(shapes: Sequence[Area | Stroke]) -> Iterator[list[Area | Stroke]]:
    """Shapes of one look together, each at the place of the first; what is painted over stays below.

    A page takes its time a path, whatever is in it; a trace instead of a path takes it three times.
    """
    for covers, section in groupby(shapes, key=lambda shape: shape.role == "paper"):
        looks: dict[Any, list[Area | Stroke]] = {}
        for shape in section:
            looks.setdefault((covers, *_look(shape)), []).append(shape)
        yield from looks.values()


def _look(shape: Area | Stroke) -> tuple[object, ...]:
    if isinstance(shape, Area):
        return "area", shape.role, shape.opacity
    return "stroke", shape.role, shape.weight, shape.dash


def _colour(role: str, opacity: float = 1.0) -> str:
    return role + (f"/{opacity:g}" if opacity < 1 else "")


def _shape(alike: list[Area | Stroke], scale: float) -> dict[str, Any]:
    first = alike[0]
    closed = "Z" if isinstance(first, Area) else ""
    lines = ("L".join(f"{x:.2f},{y:.2f}" for x, y in shape.points) for shape in alike)
    path = {"type": "path", "layer": "below", "path": "".join(f"M{line}{closed}" for line in lines)}
    if isinstance(first, Area):
        return {**path, "fillcolor": _colour(first.role, first.opacity), "line": {"width": 0}}
    dash = ",".join(f"{d * scale:.1f}px" for d in first.dash) or "solid"
    weight = round(max(_THINNEST, first.weight * scale), 2)
    return {**path, "line": {"color": _colour(first.role), "width": weight, "dash": dash}}


def _font(label: Label, scale: float) -> dict[str, Any]:
    weight = "bold" if label.bold else "normal"
    return {"size": round(label.size * scale, 1), "color": _colour(label.role), "weight": weight}


def _letters(labels: list[Label], scale: float) -> dict[str, Any]:
    fonts = [_font(label, scale) for label in labels]
    return {
        "type": "scatter", "mode": "text", "hoverinfo": "skip", "cliponaxis": False,
        "x": [round(label.at[0], 2) for label in labels],
        "y": [round(label.at[1], 2) for label in labels],
        "text": [_plain(label.text) for label in labels],
        "textposition": [_PLACE[label.anchor] for label in labels],
        "textfont": {name: [font[name] for font in fonts] for name in ("size", "color", "weight")},
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

"""A scene as SVG: no script, no address, no id; the same scene gives the same text."""

from collections.abc import Sequence
from html import escape
from itertools import groupby
from typing import Final

from pipeflex.sheet.drawing.parts import XY, Area, Label, Role, Scene, Stroke

COLOURS: Final[dict[Role, tuple[str, str]]] = {
    "ink": ("#2B3440", "#E3E7EC"),
    "heat": ("#C77700", "#E39A2D"),
    "ribbon": ("#2A7F8E", "#4FA9B8"),
    "paper": ("#FFFFFF", "#111111"),
    "faint": ("#6B7480", "#9AA4B0"),
    "lit": ("#2A7F8E", "#4FA9B8"),
}
"""Role -> colour on light and on dark ground."""

FONT: Final = "Helvetica, Arial, 'Liberation Sans', 'DejaVu Sans', sans-serif"


def svg(scene: Scene, dark: bool = False) -> str:
    """The scene as one `<svg>` element, its size in millimetres.

    Each element also has a class, `d-` and its role, so that a style sheet may recolour it.
    """
    shade = int(dark)
    colours = {role: pair[shade] for role, pair in COLOURS.items()}
    body = []
    for _, shapes in groupby(scene.shapes, key=_look):
        alike = list(shapes)
        first = alike[0]
        body.append(_areas(alike, first, colours) if isinstance(first, Area) else _strokes(alike, first, colours))
    body += [_label(label, colours) for label in scene.labels]
    w, h = _n(scene.width), _n(scene.height)
    return (
        f'<svg xmlns="http://www.w3.org/2000/svg" class="drawing" role="img" aria-label="{escape(scene.description)}"'
        f' width="{w}mm" height="{h}mm" viewBox="0 0 {w} {h}" font-family="{escape(FONT)}">'
        f"<title>{escape(scene.title)}</title>" + "".join(body) + "</svg>"
    )


def _n(value: float) -> str:
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def _path(points: tuple[XY, ...]) -> str:
    return "M" + "L".join(f"{_n(x)} {_n(y)}" for x, y in points)


def _look(shape: Area | Stroke) -> tuple[object, ...]:
    if isinstance(shape, Area):
        return "area", shape.role, shape.opacity
    return "stroke", shape.role, shape.weight, shape.dash


def _areas(alike: Sequence[Area | Stroke], look: Area, colours: dict[Role, str]) -> str:
    opacity = f' fill-opacity="{_n(look.opacity)}"' if look.opacity < 1 else ""
    path = "".join(_path(a.points) + "Z" for a in alike)
    return f'<path class="d-{look.role} d-area" fill="{colours[look.role]}"{opacity} d="{path}"/>'


def _strokes(alike: Sequence[Area | Stroke], look: Stroke, colours: dict[Role, str]) -> str:
    dashes = f' stroke-dasharray="{" ".join(_n(d) for d in look.dash)}"' if look.dash else ""
    return (
        f'<path class="d-{look.role}" fill="none" stroke="{colours[look.role]}" stroke-width="{_n(look.weight)}"'
        f' stroke-linejoin="round"{dashes} d="{"".join(_path(s.points) for s in alike)}"/>'
    )


def _label(label: Label, colours: dict[Role, str]) -> str:
    x, y = label.at
    turn = f' transform="rotate({_n(label.turn)} {_n(x)} {_n(y)})"' if label.turn else ""
    anchor = f' text-anchor="{label.anchor}"' if label.anchor != "start" else ""
    weight = ' font-weight="bold"' if label.bold else ""
    return (
        f'<text class="d-{label.role} d-text" x="{_n(x)}" y="{_n(y + 0.36 * label.size)}"'
        f' font-size="{_n(label.size)}"{anchor}{weight}{turn} fill="{colours[label.role]}"'
        f' stroke="{colours["paper"]}" stroke-width=".7" stroke-linejoin="round" paint-order="stroke"'
        f">{escape(label.text)}</text>"
    )

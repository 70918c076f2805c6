"""The drawing of one outcome: a pure function to plain lists, which SVG and the desks render."""

import math
from collections.abc import Iterator
from dataclasses import replace
from itertools import pairwise

import numpy as np

from pipeflex import present
from pipeflex.model.layout import Layout
from pipeflex.model.outcome import Outcome
from pipeflex.present import UnitSystem
from pipeflex.sheet.drawing import marks, overlays
from pipeflex.sheet.drawing.board import Board, moved, square_to, unit_between
from pipeflex.sheet.drawing.describe import described, length_text
from pipeflex.sheet.drawing.dimensions import Dimension, place_dimensions
from pipeflex.sheet.drawing.parts import HEAVY, SMALL, THIN, XY, Scene, shortened, text_width
from pipeflex.sheet.drawing.run import VIEWS, DrawnRun, drawn_run, view_matrix
from pipeflex.sheet.drawing.standing import standing
from pipeflex.sheet.drawing.strip import strip

__all__ = ["VIEWS", "Scene", "scene"]

_LONGEST = 22
_COVER_SHOWN = (1.0, 4.5)
"""The outside of the insulation is drawn where it stands so far from the centreline on paper [mm]."""


def scene(
    outcome: Outcome,
    units: UnitSystem = "metric",
    view: str = "plan",
    *,
    viewpoint: int = 0,
    focus: str = "",
    width: float = 160.0,
    height: float = 110.0,
) -> Scene:
    """Draw a single row of an outcome.

    Parameters
    ----------
    view : "plan", "elevation" or "isometric". viewpoint : 0 to 3, of the isometric.
    focus : path of the field whose dimension is drawn strong ("layout.sizes.leg").
    width, height : of the paper [mm], at least 120 by 75.
    """
    if view not in VIEWS:
        raise ValueError(f"view {view!r}: one of {', '.join(VIEWS)}")
    layout = outcome.design.layout
    board = Board(width, height)
    run = _laid_out(outcome, units, view, viewpoint, width, height)
    pipe = outcome.design.pipe
    outer = pipe.outside_diameter / 2 + (
        pipe.insulation_thickness + pipe.cladding_thickness if pipe.insulation_thickness else 0.0
    )
    covered = run.on_paper(outer)
    if not _COVER_SHOWN[0] < covered < _COVER_SHOWN[1]:
        covered = 0.0
    clear = max(1.8, covered + 0.7)
    _pipe(board, run, covered)
    _ends(board, run)
    band = overlays.ribbon(board, run, outcome, clear - 0.4)
    _supports(board, run, layout, clear)
    times = overlays.hot_shape(board, run, outcome)
    room = _room(board, run, outcome, view)
    strip(board, run, outcome, units, view, times)
    _directions(board, run, layout)
    if band is not None:
        overlays.flags(board, *band)
    place_dimensions(board, _dimensions(run, outcome, units, view, focus, clear, room))
    overlays.growth_arrows(board, run, outcome, clear, units)
    _letters(board, run, layout, clear)
    _end_names(board, run, layout, clear)
    _support_names(board, run, layout, units, clear)
    return Scene(
        title=f"{view}, {run.scale_text}",
        width=width,
        height=height,
        scale=run.scale_text,
        shapes=tuple(board.shapes),
        labels=tuple(board.labels),
        spots=tuple(board.spots),
        description=described(outcome, units, view, run.scale_text),
        left_out=tuple(board.left_out),
    )


def _laid_out(outcome: Outcome, units: UnitSystem, view: str, viewpoint: int, width: float, height: float) -> DrawnRun:
    layout = outcome.design.layout
    inner = (18.0, 18.0, width - 36.0, height - 18.0 - 31.0)
    room = overlays.drawn_room(outcome)
    extra = None if room is None else np.array([[0.0, room, 0.0]])
    stub = 0.22 * width
    plan = drawn_run(layout, units, view_matrix("plan", 0), inner, stub, extra)
    if view == "plan":
        return plan
    return drawn_run(layout, units, view_matrix(view, viewpoint), inner, stub, coarser=plan.scale)


def _pipe(board: Board, run: DrawnRun, covered: float) -> None:
    """The pipe as one heavy line, and the outside of its insulation as thin ones where they stand clear."""
    for piece in run.centreline():
        points = [run.paper(p) for p in piece]
        if covered:
            for side in (covered, -covered):
                board.draw(_beside(points, side), "faint", THIN, keep="")
        board.draw(points, weight=HEAVY, keep="solid", clear=max(0.6, covered))
    for i, leg in enumerate(run.legs):
        u = run.direction(leg.unit)
        if leg.broken:
            marks.break_mark(board, run.paper(leg.start + leg.unit * leg.near), u)
        if u == (0.0, 0.0):
            marks.toward_reader(board, run.paper(run.corners[i]))


def _beside(points: list[XY], distance: float) -> list[XY]:
    """A line beside another, on its left as it runs."""
    ways = [u for a, b in pairwise(points) if (u := unit_between(a, b)) != (0.0, 0.0)]
    if not ways:
        return points
    places = [points[0]] + [b for a, b in pairwise(points) if math.dist(a, b) > 1e-9]
    out = []
    for p, u, v in zip(places, [ways[0], *ways], [*ways, ways[-1]], strict=True):
        n, m = square_to(u), square_to(v)
        scale = distance / max(0.3, (1 + n[0] * m[0] + n[1] * m[1]))
        out.append((p[0] + (n[0] + m[0]) * scale, p[1] + (n[1] + m[1]) * scale))
    return out


def _ends(board: Board, run: DrawnRun) -> None:
    for at, outward in _end_places(run):
        marks.anchor(board, at, outward)


def _end_places(run: DrawnRun) -> list[tuple[XY, XY]]:
    """Both ends on paper, with the direction away from the run."""
    first, last = run.legs[0].unit, run.legs[-1].unit
    return [
        (run.paper(run.corners[0]), run.direction(-first)),
        (run.paper(run.corners[-1]), run.direction(last)),
    ]


def _supports(board: Board, run: DrawnRun, layout: Layout, clear: float) -> None:
    """Marks of all supports that stand on a drawn part of the run, none upon another of its kind."""
    placed: list[tuple[str, XY]] = []
    for kind, name, leg, distance, _ in standing(layout):
        place = run.legs[leg].place(distance)
        u = run.direction(run.legs[leg].unit)
        if place is None or u == (0.0, 0.0):
            continue
        at = run.paper(place)
        if any(k == kind and math.dist(at, p) < 4.5 for k, p in placed):
            continue
        placed.append((kind, at))
        marks.MARKS[kind](board, at, u, clear)
        board.spot(at, name or kind)
    for w in layout.weights:
        place = run.legs[w.leg - 1].place(float(w.distance))
        if place is not None:
            marks.weight(board, run.paper(place))
            board.spot(run.paper(place), w.name or "weight")


def _room(board: Board, run: DrawnRun, outcome: Outcome, view: str) -> tuple[XY, XY] | None:
    room = overlays.drawn_room(outcome)
    return None if view != "plan" or room is None else overlays.room_edge(board, run, room)


def _directions(board: Board, run: DrawnRun, layout: Layout) -> None:
    """Directions in words, at the right above if it is free there."""
    words = [layout.along, layout.across, "up"]
    vectors = np.eye(3)
    arms = [
        (run.direction(v), "N" if w.lower() == "north" else shortened(w, 16))
        for v, w in zip(vectors, words, strict=True)
    ]
    arms = [(d, w) for d, w in arms if d != (0.0, 0.0)]
    across = [text_width(w, SMALL) for d, w in arms if abs(d[0]) > 0.4]
    side = 12.0 + max(across, default=0.0)
    columns = [board.width - side + i * (2 * side - board.width) / 8 for i in range(9)]
    marks.axes(board, ((x, y) for y in (14.0, 18.0, board.height - 22.0) for x in columns), arms)


def _letters(board: Board, run: DrawnRun, layout: Layout, clear: float) -> None:
    """Letters of the corners, outside the bends; corners that fall together share one label."""
    names: dict[XY, list[str]] = {}
    outside: dict[XY, XY] = {}
    for i, name in enumerate(layout.corner_names()):
        at = run.paper(run.corners[i + 1])
        u, v = run.direction(run.legs[i].unit), run.direction(run.legs[i + 1].unit)
        key = next((k for k in names if math.dist(k, at) < 2.0), at)
        names.setdefault(key, []).append(name)
        outside.setdefault(key, unit_between((0.0, 0.0), (u[0] - v[0], u[1] - v[1])))
    for at, listed in names.items():
        text = ", ".join(listed) if len(listed) < 4 else f"{listed[0]} … {listed[-1]}"
        board.beside(at, text, first=outside[at], distances=[clear + d for d in (2.0, 3.2, 4.7, 6.7, 9.5)], bold=True)


def _end_names(board: Board, run: DrawnRun, layout: Layout, clear: float) -> None:
    for (at, outward), end, word in zip(_end_places(run), layout.ends, ("first end", "last end"), strict=True):
        name = end.name or word
        text = shortened(f"{name}, {end.tag}" if end.tag else name, _LONGEST)
        base = moved(at, outward, 1.5)
        first = (0.0, -1.0) if abs(outward[1]) < 0.7 else (1.0, 0.0)
        board.beside(base, text, first=first, distances=(7.8, 9.5, 12.0, 15.0, 18.0))
        board.spot(at, f"anchor {name}", "layout.ends")


def _dimensions(
    run: DrawnRun,
    outcome: Outcome,
    units: UnitSystem,
    view: str,
    focus: str,
    clear: float,
    room: tuple[XY, XY] | None,
) -> Iterator[Dimension]:
    layout = outcome.design.layout
    on_paper = [run.paper(c) for c in run.corners]
    middle = tuple(sum(v) / len(on_paper) for v in zip(*on_paper, strict=True))

    def sides(a: XY, b: XY, unit: np.ndarray) -> tuple[XY, ...]:
        u = unit_between(a, b)
        if view == "isometric":
            axes = [run.direction(s * e) for e in np.eye(3) if abs(e @ unit) < 0.5 for s in (1.0, -1.0)]
        else:
            n = square_to(u)
            axes = [n, (-n[0], -n[1])]
        away = ((a[0] + b[0]) / 2 - middle[0], (a[1] + b[1]) / 2 - middle[1])
        return tuple(sorted(axes, key=lambda s: -(s[0] * away[0] + s[1] * away[1]) - 0.01 * s[1]))

    def dimension(a: XY, b: XY, metres: float, unit: np.ndarray, path: str, row: int = 0) -> Dimension:
        lit = bool(path) and path == focus
        return Dimension(a, b, length_text(metres, units), sides(a, b, unit), path, lit, clear, row)

    if layout.first_guide is not None and len(run.legs) > 1:
        leg = run.legs[0]
        place = leg.place(leg.length - float(layout.first_guide))
        if place is not None:
            yield dimension(run.paper(place), on_paper[1], float(layout.first_guide), leg.unit, "layout.first_guide")
    if room is not None:
        limit, path = float(outcome.design.limits.room), "limits.room"
        words = f"room {length_text(limit, units)}"
        yield Dimension(room[0], room[1], words, ((1.0, 0.0), (-1.0, 0.0)), path, focus == path, clear)
    paths = leg_paths(layout)
    lengths = [leg.length for leg in run.legs]
    outer = (0, len(lengths) - 1)
    for i in sorted(range(len(lengths)), key=lambda i: (i in outer and len(lengths) > 2, lengths[i])):
        if paths[i] is not None:
            yield dimension(on_paper[i], on_paper[i + 1], lengths[i], run.legs[i].unit, paths[i] or "")
    if "run" in layout.sizes and len(run.legs) > 2:
        east = np.array([1.0, 0.0, 0.0])
        across = run.corners[-1] - run.corners[0]
        far = run.corners[0] + east * across[0]
        whole = dimension(on_paper[0], run.paper(far), float(layout.sizes["run"]), east, "layout.sizes.run", row=1)
        yield replace(whole, foot=on_paper[-1])


def leg_paths(layout: Layout) -> list[str | None]:
    """The field behind the length of each leg: empty if there is none, None if its twin is dimensioned already."""
    size = "layout.sizes."
    known: dict[str, list[str | None]] = {
        "straight": [size + "run"],
        "L": [size + "run", size + "leg"],
        "Z": [size + "before", size + "leg", ""],
        "U": [size + "before", size + "leg", size + "width", None, ""],
        "raised U": [size + "before", size + "rise", size + "leg", size + "width", None, None, ""],
    }
    return known.get(layout.shape) or [f"layout.points.{i + 1}" for i in range(layout.leg_count)]


def _support_names(board: Board, run: DrawnRun, layout: Layout, units: UnitSystem, clear: float) -> None:
    """Names of supports, with the gap of those that have one."""
    for kind, name, leg, distance, gap in standing(layout):
        place = run.legs[leg].place(distance)
        u = run.direction(run.legs[leg].unit)
        if not name or place is None or u == (0.0, 0.0):
            continue
        said = f", gap {present.text(gap, 'movement', units)}" if gap > 0 and kind == "guide" else ""
        n = marks.under(u)
        board.beside(
            run.paper(place),
            shortened(name, 14) + said,
            first=(-n[0], -n[1]),
            size=SMALL,
            distances=[clear + d for d in (2.8, 4.7, 6.7, 9.2, 12.2)],
        )

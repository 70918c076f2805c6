"""What is laid over the pipe: ratio ribbon, hot shape, growth arrows, room."""

import math
from collections.abc import Sequence
from itertools import pairwise
from typing import Final

import numpy as np

from pipeflex import present
from pipeflex.model.outcome import Along, Movement, Outcome, Shape
from pipeflex.present import UnitSystem
from pipeflex.sheet.drawing.board import Board, moved, square_to, unit_between
from pipeflex.sheet.drawing.marks import under
from pipeflex.sheet.drawing.parts import MEDIUM, SMALL, TEXT, THIN, XY, Anchor, Label
from pipeflex.sheet.drawing.run import DrawnRun, Floats

RIBBON: Final = "ratio"
_STEP: Final = 1.2
"""Distance of the points at which a quantity along the run is drawn [mm]."""
_AT_ONE = 4.0
"""Thickness of the ribbon where the ratio is 1 [mm]."""
_MOST = 2.0
"""Thickness stops growing at this ratio; the flag says the number."""
_HOT_REACH = 9.0
_ROOM_SHOWN = 1.8
"""A room up to so many times the leg is drawn; a greater one is only named."""
_MAGNIFICATIONS = (1, 2, 5, 10, 20, 50, 100, 200, 500)


def _dense(run: DrawnRun, along: Along) -> tuple[Floats, Floats]:
    """Distances and values along the run, close enough to be drawn; a jump keeps both its values."""
    d, v = np.asarray(along.distance, float), np.asarray(along.value, float)
    step = _STEP * run.scale / 1000
    distance, value = [d[0]], [v[0]]
    for i in range(len(d) - 1):
        parts = np.linspace(0, 1, max(1, int(np.ceil((d[i + 1] - d[i]) / step))) + 1)[1:]
        distance += list(d[i] + parts * (d[i + 1] - d[i]))
        value += list(v[i] + parts * (v[i + 1] - v[i]))
    return np.array(distance), np.array(value)


def stretches(run: DrawnRun, places: Sequence[Floats | None]) -> list[list[tuple[int, XY]]]:
    """Neighbouring drawn points on paper with their indices; a break of the pipe parts two stretches."""
    out: list[list[tuple[int, XY]]] = [[]]
    for i, p in enumerate(places):
        if p is None:
            if out[-1]:
                out.append([])
            continue
        out[-1].append((i, run.paper(p)))
    return [s for s in out if len(s) > 1]


Feet = dict[int, tuple[XY, XY]]
"""Of each point along the run: where the ribbon begins on paper, and the direction of its thickness."""


def ribbon(board: Board, run: DrawnRun, outcome: Outcome, clear: float) -> tuple[str, Floats, Feet] | None:
    """A band beside the pipe as thick as the ratio; black and hatched where the ratio passes 1."""
    along = next((a for a in outcome.along if a.key == RIBBON), None)
    if along is None:
        return None
    distance, value = _dense(run, along)
    parts = stretches(run, [run.along(float(d)) for d in distance])
    if not parts:
        return None
    side = _outer_side(parts, value)
    feet: Feet = {}
    for part in parts:
        normals = _normals([p for _, p in part], side)
        for (i, p), n in zip(part, normals, strict=True):
            feet[i] = (moved(p, n, clear), n)
        for (i, _), (j, _) in pairwise(part):
            _slice(board, feet[i], feet[j], float(value[i]), float(value[j]))
        board.draw((moved(*feet[i], _AT_ONE) for i, _ in part), "ribbon", THIN, keep="thin")
    return along.title, value, feet


def _outer_side(parts: list[list[tuple[int, XY]]], value: Floats) -> int:
    """The side of the pipe on the outside of the bend nearest to the greatest ratio: 1 left of the run."""
    worst = max((i for part in parts for i, _ in part), key=lambda i: value[i])
    turn, nearest = 0.0, math.inf
    for part in parts:
        for (_, a), (i, b), (_, c) in zip(part, part[1:], part[2:], strict=False):
            u, v = unit_between(a, b), unit_between(b, c)
            cross = u[0] * v[1] - u[1] * v[0]
            if abs(cross) > 0.02 and abs(i - worst) < nearest:
                turn, nearest = cross, abs(i - worst)
    return 1 if turn >= 0 else -1


def _normals(points: list[XY], side: int) -> list[XY]:
    ways = [unit_between(a, b) for a, b in pairwise(points)]
    known = next((w for w in ways if w != (0.0, 0.0)), (1.0, 0.0))
    for i, w in enumerate(ways):
        known = ways[i] = known if w == (0.0, 0.0) else w
    out = []
    for before, after in zip([ways[0], *ways], [*ways, ways[-1]], strict=True):
        total = (before[0] + after[0], before[1] + after[1])
        u = unit_between((0.0, 0.0), total)
        n = square_to(u if u != (0.0, 0.0) else after)
        out.append((n[0] * side, n[1] * side))
    return out


def _thick(ratio: float) -> float:
    return _AT_ONE * min(max(ratio, 0.0), _MOST)


def _slice(board: Board, one: tuple[XY, XY], other: tuple[XY, XY], a: float, b: float) -> None:
    """The band between two points, cut where it passes 1."""
    if (a - 1) * (b - 1) < 0:
        t = (1 - a) / (b - a)
        middle = tuple((p[0] + t * (q[0] - p[0]), p[1] + t * (q[1] - p[1])) for p, q in zip(one, other, strict=True))
        _slice(board, one, middle, a, 1.0)  # type: ignore[arg-type]
        _slice(board, middle, other, 1.0, b)  # type: ignore[arg-type]
        return
    over = max(a, b) > 1
    (p, n), (q, m) = one, other
    if math.dist(p, q) < 1e-6:
        return
    outline = (p, moved(p, n, _thick(a)), moved(q, m, _thick(b)), q)
    board.fill(outline, "ink" if over else "ribbon", 0.3 if over else 0.45, keep="thin")
    if over:
        steps = max(1, round(math.dist(p, q) / 0.8))
        for i in range(steps):
            t, s = i / steps, min(1.0, (i + 0.8) / steps)
            foot = (p[0] + t * (q[0] - p[0]), p[1] + t * (q[1] - p[1]))
            head = (
                outline[1][0] + s * (outline[2][0] - outline[1][0]),
                outline[1][1] + s * (outline[2][1] - outline[1][1]),
            )
            board.draw((foot, head), "ink", THIN, keep="")


def flags(board: Board, title: str, value: Floats, feet: Feet) -> None:
    """The number at each peak that passes 1, and at the greatest ratio."""
    shown = sorted(feet)
    peaks = [
        i
        for k, i in enumerate(shown)
        if value[i] > 1 and value[i] >= max(value[shown[max(k - 1, 0)]], value[shown[min(k + 1, len(shown) - 1)]])
    ]
    greatest = max(shown, key=lambda i: value[i])
    placed: list[XY] = []
    for i in sorted({*peaks, greatest}, key=lambda i: -value[i])[:6]:
        foot, n = feet[i]
        top = moved(foot, n, _thick(float(value[i])))
        if any(math.dist(top, p) < 9 for p in placed):
            continue
        placed.append(top)
        text = present.percent(float(value[i]))
        if board.beside(top, text, first=n, distances=(3.4, 5.0, 7.0, 9.5, 12.5), bold=bool(value[i] > 1), spread=2):
            name = board.labels[-1].at
            reach = max(1.2, math.dist(top, name) - 0.8 * TEXT)
            board.draw((foot, top, moved(top, unit_between(top, name), reach)), keep="")
            board.spot(top, f"{title}: {text}")


def hot_shape(board: Board, run: DrawnRun, outcome: Outcome) -> int | None:
    """The deformed line of the hottest state, dashed; returns its magnification."""
    shape = hottest_shape(outcome)
    if shape is None:
        return None
    movement = np.asarray(shape.movement, float)
    most = float(np.abs(run.matrix @ movement).max()) * 1000 / run.scale
    if most <= 0:
        return None
    fitting = [m for m in _MAGNIFICATIONS if m * most <= _HOT_REACH]
    times = fitting[-1] if fitting else 1
    points, moves, legs = _dense_shape(run, shape)
    places = run.carried(points, legs)
    shifted = [None if p is None else p + times * moves[:, i] for i, p in enumerate(places)]
    for part in stretches(run, shifted):
        board.draw([p for _, p in part], "heat", MEDIUM, (2.2, 1.1), keep="thin", clear=0.2)
    return times


def _dense_shape(run: DrawnRun, shape: Shape) -> tuple[Floats, Floats, list[int]]:
    """Points, movements and legs of a shape, close enough that breaks of the pipe cut it where they are."""
    both = np.concatenate([np.asarray(shape.points, float), np.asarray(shape.movement, float)])
    step, columns, legs = 2 * _STEP * run.scale / 1000, [both[:, 0]], [shape.leg[0]]
    for i in range(both.shape[1] - 1):
        size = float(np.linalg.norm(both[:3, i + 1] - both[:3, i]))
        count = max(1, int(np.ceil(size / step))) if shape.leg[i] == shape.leg[i + 1] else 1
        for t in np.linspace(0, 1, count + 1)[1:]:
            columns.append(both[:, i] + t * (both[:, i + 1] - both[:, i]))
            legs.append(shape.leg[i + 1])
    dense = np.array(columns).T
    return dense[:3], dense[3:], legs


def hottest_shape(outcome: Outcome) -> Shape | None:
    """The shape of the hottest case, or the first there is."""
    hottest = _hottest_case(outcome)
    named = [s for s in outcome.shapes if s.state.startswith(hottest)]
    return next(iter(named or outcome.shapes), None)


def _hottest_case(outcome: Outcome) -> str:
    return max(outcome.design.duty.cases, key=lambda c: float(c.temperature)).name


def growth(outcome: Outcome) -> list[tuple[int, float]]:
    """Legs that end in an anchor, with how far their corner moves from it, installed to hottest [m]."""
    corners = outcome.design.layout.corner_names()
    if not corners:
        return []
    hottest = _hottest_case(outcome)
    found = []
    for leg, corner, way in ((0, corners[0], 1.0), (len(corners), corners[-1], -1.0)):
        vector = outcome.design.layout.leg_vectors()[:, leg, 0]
        axis = int(np.abs(vector).argmax())
        word = (outcome.design.layout.along, outcome.design.layout.across, "up")[axis]
        moves = [m for m in outcome.movements if m.point == f"corner {corner}" and m.positive == word]
        values = [v * float(np.sign(vector[axis])) for m in moves for v in _in_state(m, hottest)]
        values = values or _of_shape(outcome, leg, vector)
        if values:
            found.append((leg, max(values, key=abs) * way))
    return found


def _of_shape(outcome: Outcome, leg: int, vector: Floats) -> list[float]:
    """Movement of the inner end of an outer leg along that leg, by the hottest shape."""
    shape = hottest_shape(outcome)
    if shape is None:
        return []
    mine = [i for i, of in enumerate(shape.leg) if of == leg]
    at = mine[-1] if leg == 0 else mine[0]
    return [float(np.asarray(shape.movement)[:, at] @ vector / np.linalg.norm(vector))]


def _in_state(movement: Movement, state: str) -> list[float]:
    values = np.atleast_1d(movement.value)
    return [float(v) for name, v in zip(movement.states, values, strict=True) if name.startswith(state)]


def growth_arrows(board: Board, run: DrawnRun, outcome: Outcome, clear: float, units: UnitSystem) -> None:
    """Arrows beside the legs that grow from their anchors, with how far."""
    for leg, amount in growth(outcome):
        first = leg == 0
        u = run.direction(run.legs[leg].unit if first else -run.legs[leg].unit)
        if u == (0.0, 0.0):
            continue
        corner = run.paper(run.corners[1] if first else run.corners[-2])
        text = present.text(abs(amount), "movement", units)
        if not _growth_arrow(board, corner, u, amount >= 0, text, clear):
            board.left_out.append(text)


def _growth_arrow(board: Board, corner: XY, u: XY, grows: bool, text: str, clear: float) -> bool:
    low = under(u)
    for lift in (0.0, 3.5, 7.0):
        for side in (low, (-low[0], -low[1])):
            for back in (5.0, 9.0, 14.0, 19.0, 25.0, 32.0):
                tip = moved(moved(corner, u, -back), side, clear + 2.8 + lift)
                tail = moved(tip, u, -9.0)
                if not board.free_for_line(tail, tip, 1.0):
                    continue
                level = abs(u[0]) > 0.4
                anchor: Anchor = "middle" if not level else "end" if u[0] > 0 else "start"
                away = moved(tail, u, -1.2) if level else moved(moved(tail, u, 4.5), side, 2.0)
                if not level:
                    anchor = "start" if side[0] > 0 else "end"
                label = Label(away, text, "ink", SMALL + 0.2, anchor)
                if not board.free_for_letters(label):
                    continue
                board.draw((tail, tip), "heat", MEDIUM * 1.3, keep="solid")
                board.arrow_head(tip if grows else tail, u if grows else (-u[0], -u[1]), "heat", 3.4)
                board.write(label)
                board.spot(tip, f"growth {text}, installed to hottest")
                return True
    return False


def drawn_room(outcome: Outcome) -> float | None:
    """The room [m] if it is that of a loop and near enough to be drawn."""
    layout, room = outcome.design.layout, float(outcome.design.limits.room)
    if not layout.shape.endswith("U") or not room <= _ROOM_SHOWN * float(layout.sizes["leg"]):
        return None
    return room


def room_edge(board: Board, run: DrawnRun, room: float) -> tuple[XY, XY] | None:
    """The room of a loop in plan: a dashed line with hatch behind it; its foot and its end at the right."""
    foot, right = run.corners[1], run.corners[-2]
    up = np.array([0.0, room, 0.0])
    a, b = run.paper(foot + up), run.paper(right + up)
    left, end = min(a[0], b[0]) - 7.0, max(a[0], b[0]) + 12.0
    y = a[1]
    board.draw(((left, y), (end, y)), "ink", MEDIUM, (3.0, 1.2), keep="solid")
    out = -1.0 if run.direction(np.array([0.0, 1.0, 0.0]))[1] < 0 else 1.0
    x = left + 1.0
    while x < end - 1.5:
        board.draw(((x, y), (x + 1.6, y + out * 2.2)), "faint", THIN, keep="")
        x += 2.4
    board.hold(((left, y + out * 1.1), (end, y + out * 1.1)), "thin", 1.2)
    base = run.paper(right)
    return base, (base[0], y)

"""Marks on the pipe: ends, supports, breaks, and what stands in the corners of the drawing."""

import math
from collections.abc import Iterable, Sequence

from pipeflex.present import UnitSystem, display, number
from pipeflex.sheet.drawing.board import Board, moved, square_to
from pipeflex.sheet.drawing.parts import HEAVY, MEDIUM, SMALL, THIN, XY, Anchor, Label, text_width

_BAR = 5.0
_GROUND = 2.4
_ARM = 8.0


def anchor(board: Board, at: XY, outward: XY, half: float = _BAR) -> None:
    """A bar across the pipe with ground hatch behind it; `outward` points away from the run."""
    if outward == (0.0, 0.0):
        return _anchor_from_above(board, at)
    n = square_to(outward)
    top, foot = moved(at, n, half), moved(at, n, -half)
    board.draw((top, foot), weight=HEAVY, keep="solid")
    count = 7
    for i in range(count):
        start = moved(foot, n, 2 * half * (i + 0.5) / count)
        board.draw((start, moved(moved(start, outward, _GROUND), n, -1.5)), keep="")
    board.hold((moved(top, outward, _GROUND / 2), moved(foot, outward, _GROUND / 2)), "solid", _GROUND / 2 + 0.6)
    return None


def _anchor_from_above(board: Board, at: XY) -> None:
    """An end whose leg points at the reader: a hatched square."""
    x, y, r = *at, 2.6
    board.draw(((x - r, y - r), (x + r, y - r), (x + r, y + r), (x - r, y + r), (x - r, y - r)), weight=MEDIUM)
    for d in (-r, 0.0, r):
        board.draw(((x - r, y + min(r, r + d)), (x + min(r, r + d), y - r)), keep="")
    board.hold(((x - r / 2, y), (x + r / 2, y)), "solid", r + 0.6)


def toward_reader(board: Board, at: XY) -> None:
    """A leg that points at the reader: a ring about a point."""
    ring = [(at[0] + 1.5 * math.cos(a), at[1] + 1.5 * math.sin(a)) for a in (i * math.pi / 8 for i in range(17))]
    board.fill(ring[:-1], "paper")
    board.draw(ring, weight=MEDIUM, keep="")
    board.fill([(at[0] + (x - at[0]) * 0.3, at[1] + (y - at[1]) * 0.3) for x, y in ring[:-1]])
    board.hold(((at[0] - 0.8, at[1]), (at[0] + 0.8, at[1])), "solid", 1.4)


def guide(board: Board, at: XY, along: XY, clear: float) -> None:
    """Two short strokes beside the pipe."""
    n = square_to(along)
    for side in (1, -1):
        middle = moved(at, n, side * clear)
        board.draw((moved(middle, along, -2.0), moved(middle, along, 2.0)), weight=MEDIUM, keep="solid")


def under(along: XY) -> XY:
    """The side of a leg that is lower on paper, or to the right of an upright one."""
    n = square_to(along)
    return n if n[1] > 0.01 or (abs(n[1]) <= 0.01 and n[0] > 0) else (-n[0], -n[1])


def rest(board: Board, at: XY, along: XY, clear: float) -> None:
    """One stroke under the pipe."""
    middle = moved(at, under(along), clear)
    board.draw((moved(middle, along, -1.4), moved(middle, along, 1.4)), weight=MEDIUM, keep="solid")


def line_stop(board: Board, at: XY, along: XY, clear: float) -> None:
    """Two strokes across the pipe."""
    n = square_to(along)
    for d in (-0.8, 0.8):
        middle = moved(at, along, d)
        board.draw((moved(middle, n, clear + 0.8), moved(middle, n, -clear - 0.8)), weight=MEDIUM, keep="solid")


def spring(board: Board, at: XY, along: XY, clear: float) -> None:
    """A coil under the pipe."""
    down = under(along)
    start = moved(at, down, clear - 0.6)
    coil = [moved(moved(start, down, 0.5 * i), along, 1.0 * (i % 2 * 2 - 1) if 0 < i < 6 else 0) for i in range(7)]
    board.draw(coil, weight=THIN * 1.4, keep="solid")
    foot = coil[-1]
    board.draw((moved(foot, along, -1.4), moved(foot, along, 1.4)), weight=MEDIUM, keep="solid")


MARKS = {"guide": guide, "rest": rest, "line stop": line_stop, "spring": spring}


def weight(board: Board, at: XY) -> None:
    """A concentrated mass: two triangles tip to tip."""
    x, y = at
    for side in (-1, 1):
        board.fill(((x, y), (x + side * 2.0, y - 1.4), (x + side * 2.0, y + 1.4)))
    board.hold(((x - 1, y), (x + 1, y)), "solid", 1.6)


def break_mark(board: Board, at: XY, along: XY) -> None:
    """Two zigzag lines across a straight whose middle is left out."""
    n = square_to(along)
    gap = 1.0
    corners = ((-gap, -2.4), (gap, -2.4), (gap, 2.4), (-gap, 2.4))
    board.fill([moved(moved(at, along, s), n, t) for s, t in corners], "paper")
    for side in (-1, 1):
        middle = moved(at, along, side * gap)
        zig = [
            moved(middle, n, -3.4),
            moved(middle, n, -0.9),
            moved(moved(middle, n, -0.5), along, 0.8),
            moved(moved(middle, n, 0.5), along, -0.8),
            moved(middle, n, 0.9),
            moved(middle, n, 3.4),
        ]
        board.draw(zig, keep="")
    board.hold((moved(at, n, -3.4), moved(at, n, 3.4)), "solid", gap + 0.4)


def axes(board: Board, places: Iterable[XY], arms: Sequence[tuple[XY, str]]) -> None:
    """Directions in words: arrows from one point, at the first of the places where there is room."""
    for at in places:
        labels = [_axis_word(at, direction, word) for direction, word in arms]
        tips = [moved(at, direction, _ARM) for direction, _ in arms]
        if all(map(board.free_for_letters, labels)) and all(board.free_for_line(at, tip, 1.0) for tip in tips):
            for (direction, _), tip, label in zip(arms, tips, labels, strict=True):
                board.draw((at, tip), weight=THIN * 1.3, keep="solid")
                board.arrow_head(tip, direction, length=2.8)
                board.write(label)
            return
    board.left_out.append(", ".join(word for _, word in arms))


def _axis_word(at: XY, direction: XY, word: str) -> Label:
    end: Anchor = "middle" if abs(direction[0]) < 0.4 else "start" if direction[0] > 0 else "end"
    place = moved(at, direction, _ARM + (2.6 if end == "middle" else 1.2))
    return Label(place, word, size=SMALL, anchor=end, bold=word == "N")


def scale_bar(board: Board, left: XY, scale: int, units: UnitSystem) -> float:
    """A bar of a round length with its two halves; returns where its text ends."""
    factor = float(display("length", units).factor)
    most = 34.0 * scale / 1000 / factor
    step = 10.0 ** math.floor(math.log10(most))
    amount = next(m * step for m in (5.0, 2.0, 1.0) if m * step <= most)
    long = amount * factor * 1000 / scale
    x, y = left
    for i in range(2):
        ends = (x + i * long / 2, x + (i + 1) * long / 2)
        corners = ((ends[0], y - 0.6), (ends[1], y - 0.6), (ends[1], y + 0.6), (ends[0], y + 0.6))
        board.fill(corners, "ink" if i == 0 else "paper")
        board.draw((*corners, corners[0]), keep="")
    board.hold(((x, y), (x + long, y)), "solid", 1.0)
    unit = display("length", units).unit
    decimals = 0 if amount >= 1 else 1 if amount >= 0.1 else 2
    text = f"{number(amount * factor, 'length', units, decimals)} {unit}"
    board.write(Label((x + long + 1.5, y), text, size=SMALL, anchor="start"))
    return x + long + 1.5 + text_width(text, SMALL)

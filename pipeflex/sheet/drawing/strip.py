"""What stands above and below a drawing: title, marks used, scale bar, and what holds for the whole of it."""

import math
from collections.abc import Callable, Iterator

from pipeflex import present
from pipeflex.model.layout import Layout
from pipeflex.model.outcome import Outcome
from pipeflex.present import UnitSystem
from pipeflex.sheet.drawing import marks, overlays
from pipeflex.sheet.drawing.board import Board
from pipeflex.sheet.drawing.parts import HEAVY, MEDIUM, SMALL, TEXT, THIN, XY, Label, text_width
from pipeflex.sheet.drawing.run import DrawnRun
from pipeflex.sheet.drawing.standing import standing

_LEFT, _SIGN, _GAP = 2.0, 7.0, 3.5
_ROWS = (8.6, 2.9)
"""Heights of the two rows above the lower edge [mm]."""

Item = tuple[str, Callable[[Board, XY], None] | None]
"""Words of the legend, and what draws the sign before them, if there is one."""


def strip(board: Board, run: DrawnRun, outcome: Outcome, units: UnitSystem, view: str, times: int | None) -> None:
    """Draw the strips; `times` is the magnification of the hot shape. What has no room is noted as left out."""
    title = f"{view[0].upper()}{view[1:]}, {run.scale_text}"
    board.write(Label((_LEFT, 3.6), title, size=TEXT, anchor="start", bold=True))
    if any(leg.broken for leg in run.legs):
        x = _LEFT + text_width(title, TEXT) * 1.1 + 3.0
        board.write(Label((x, 3.6), "long straights broken", "ink", SMALL, "start"))
    end = marks.scale_bar(board, (_LEFT, board.height - _ROWS[1]), run.scale, units)
    free = [[_LEFT, board.height - _ROWS[0]], [end + 2 * _GAP, board.height - _ROWS[1]]]
    for words, sign in _items(run, outcome, units, times):
        width = (_SIGN + 1.5 if sign else 0.0) + text_width(words, SMALL)
        row = next((r for r in free if r[0] + width <= board.width - 1.5), None)
        if row is None:
            board.left_out.append(words)
            continue
        x, y = row
        if sign:
            sign(board, (x, y))
        board.write(Label((x + width - text_width(words, SMALL), y), words, "ink", SMALL, "start"))
        row[0] += width + _GAP


def _items(run: DrawnRun, outcome: Outcome, units: UnitSystem, times: int | None) -> Iterator[Item]:
    layout = outcome.design.layout
    for kind in dict.fromkeys(s.kind for s in standing(layout)):
        yield _with_gap(layout, kind, units), lambda board, at, kind=kind: _support(board, at, kind)  # type: ignore[misc]
    if times is not None:
        yield f"hot shape × {times}", _dashes
    if any(a.key == overlays.RIBBON for a in outcome.along):
        yield "S_E/S_A, line at 1", _ribbon
    yield f"lengths in {present.display('length', units).unit}", None
    radii = {round(r, 9) for r in run.radii if r > 0}
    if len(radii) == 1:
        decimals = 0 if units == "metric" else 1
        yield f"bends R {present.text(radii.pop(), 'pipe dimension', units, decimals)}", None
    if overlays.growth(outcome):
        yield "arrows: growth, installed to hottest", None
    room = float(outcome.design.limits.room)
    if math.isfinite(room) and overlays.drawn_room(outcome) is None and layout.shape.endswith("U"):
        yield f"room {present.text(room, 'length', units)}", None


def _with_gap(layout: Layout, kind: str, units: UnitSystem) -> str:
    """The kind of support, with the gap that all of it have."""
    gaps = {s.gap for s in standing(layout) if s.kind == kind}
    gap = gaps.pop()
    return kind if gaps or gap <= 0 else f"{kind}, gap {present.text(gap, 'movement', units)}"


def _support(board: Board, at: XY, kind: str) -> None:
    x, y = at
    board.draw(((x, y), (x + _SIGN - 1, y)), weight=HEAVY, keep="solid", clear=1.2)
    marks.MARKS[kind](board, (x + _SIGN / 2 - 0.5, y), (1.0, 0.0), 1.6)


def _dashes(board: Board, at: XY) -> None:
    x, y = at
    board.draw(((x, y), (x + _SIGN, y)), "heat", MEDIUM, (2.2, 1.1), keep="solid", clear=1.0)


def _ribbon(board: Board, at: XY) -> None:
    x, y = at
    board.fill(((x, y + 0.8), (x, y - 0.4), (x + _SIGN, y - 1.2), (x + _SIGN, y + 0.8)), "ribbon", 0.45, keep="solid")
    board.draw(((x, y - 0.8), (x + _SIGN, y - 0.8)), "ribbon", THIN, keep="")

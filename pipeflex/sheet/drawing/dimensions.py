"""Dimension lines as the trade draws them: extension lines, a line with slender heads, the length along it."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from pipeflex.sheet.drawing.board import Board, moved, readable, square_to, unit_between
from pipeflex.sheet.drawing.parts import THIN, XY, Label, Role, text_width

_FIRST, _STEP, _ROWS = 5.7, 5.4, 7
_TEXT = 3.0
_LIFT = 2.3
"""Distance of the letters' middle from their line."""


@dataclass(frozen=True, slots=True)
class Dimension:
    """A length between two points on paper.

    sides : unit vectors along which its line may be moved away, the preferred first. lit : drawn strong, because
    the reader is at its field. clear : half of what the pipe takes; row : the nearest row that is tried.
    """

    a: XY
    b: XY
    text: str
    sides: tuple[XY, ...]
    path: str = ""
    lit: bool = False
    clear: float = 0.0
    row: int = 0
    foot: XY | None = None
    """Where the extension line of `b` begins, if not at `b`."""


def place_dimensions(board: Board, wanted: Iterable[Dimension]) -> None:
    """Draw dimensions where there is room, nearest rows first; those without room are noted."""
    for dimension in wanted:
        if not _place(board, dimension):
            board.left_out.append(dimension.text)


def _place(board: Board, d: Dimension) -> bool:
    along = unit_between(d.a, d.b)
    if along == (0.0, 0.0):
        return True
    for row in range(d.row, _ROWS):
        for side in d.sides:
            offset = _FIRST + d.clear + row * _STEP
            a, b = moved(d.a, side, offset), moved(d.b, side, offset)
            beyond = moved(a, side, 1.6), moved(b, side, 1.6)
            if not board.inside(beyond) or not _open(board, a, b, along, d.clear):
                continue
            label = next((t for t in _letters(d, a, b, along, side) if board.free_for_letters(t)), None)
            if label is not None:
                _draw(board, d, a, b, along, side, label)
                return True
    return False


def _open(board: Board, a: XY, b: XY, along: XY, clear: float) -> bool:
    """Whether the line is free; its ends may rest on the pipe."""
    short = min(clear + 1.0, ((b[0] - a[0]) ** 2 + (b[1] - a[1]) ** 2) ** 0.5 / 3)
    return board.free_for_line(moved(a, along, short), moved(b, along, -short))


def _letters(d: Dimension, a: XY, b: XY, along: XY, side: XY) -> Sequence[Label]:
    """Places of the length: over the middle of its line, under it, or beyond either end."""
    turn = readable(along)
    middle = ((a[0] + b[0]) / 2, (a[1] + b[1]) / 2)
    up = square_to(along)
    if up[1] > 0.01 or (abs(up[1]) <= 0.01 and up[0] > 0):
        up = (-up[0], -up[1])
    width = text_width(d.text, _TEXT) * (1.08 if d.lit else 1)
    long = ((b[0] - a[0]) ** 2 + (b[1] - a[1]) ** 2) ** 0.5
    spare = max(0.0, long - width) / 2 - 2.6
    shifts = (0.0, spare / 2, -spare / 2, spare, -spare) if spare > 3 else (0.0,)
    inside = [moved(moved(middle, up, lift), along, s) for lift in (_LIFT, -_LIFT) for s in shifts]
    places = inside if width < long - 0.6 else []
    reach = (width + long) / 2 + 3.4
    places += [moved(middle, along, reach), moved(middle, along, -reach)]
    role: Role = "lit" if d.lit else "ink"
    return [Label(p, d.text, role, _TEXT, "middle", turn, d.lit) for p in places]


def _draw(board: Board, d: Dimension, a: XY, b: XY, along: XY, side: XY, label: Label) -> None:
    role: Role = "lit" if d.lit else "ink"
    weight = 3 * THIN if d.lit else THIN * 0.8
    for foot, end in ((d.a, a), (d.foot or d.b, b)):
        way = unit_between(foot, end)
        board.draw((moved(foot, way, 1.3), moved(end, side, 1.3)), role, weight, clear=0.2)
    back = (-along[0], -along[1])
    long = ((b[0] - a[0]) ** 2 + (b[1] - a[1]) ** 2) ** 0.5
    if long > 6.0:
        board.draw((a, b), role, weight, keep="solid", clear=0.4)
        board.arrow_head(a, back, role)
        board.arrow_head(b, along, role)
    else:
        board.draw((moved(a, back, 3.2), moved(b, along, 3.2)), role, weight, keep="solid", clear=0.4)
        board.arrow_head(a, along, role)
        board.arrow_head(b, back, role)
    board.write(label)
    board.spot(label.at, d.text, d.path)

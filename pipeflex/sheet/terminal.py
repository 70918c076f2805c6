"""The sheet as plain text."""

from collections.abc import Iterable, Iterator, Sequence
from textwrap import wrap
from typing import TYPE_CHECKING, Final

from pipeflex.sheet.ledger import Grid, Line
from pipeflex.sheet.results import LoadRow

if TYPE_CHECKING:
    from pipeflex.sheet.page import View

WIDTH: Final = 100


def as_text(view: "View") -> str:
    """All parts but the drawing's picture and the design text, at most `WIDTH` wide where the words allow."""
    title = ", ".join(f"{label.lower()} {value}" for row in view.title_rows for label, value in row)
    parts = [
        view.heading,
        *_wrapped(title),
        "",
        *_wrapped(view.question),
        "",
        *(line for text in view.headline.lines for line in _wrapped(text)),
        "",
        *(line for text in view.serious for line in _wrapped(f"! {text}", 2)),
        "",
        *_wrapped(view.scene.description),
        *_section("Inputs"),
        *_columns([(e.label, e.value, e.origin) for e in view.inputs], (34, 34, 30)),
        *_section("Checks"),
        *_columns(
            [(c.title, f"{c.demand} / {c.limit}" if c.demand else c.limit, c.ratio, str(c.judgement),
              "; ".join(t for t in (c.where, c.reason) if t)) for c in view.checks],
            (26, 22, 8, 12, 28),
        ),
        *(line for text in view.remarks for line in _wrapped(f"- {text}", 2)),
        *_section("Loads"),
        *_wrapped(view.load_terms),
        *_loads(view.loads),
        *_columns([(m.point, m.direction, m.state, f"{m.values[0]} ({m.values[1]})") for m in view.movements],
                  (24, 20, 26, 26)),
        *_ladder(view),
        *_section("Ledger"),
        *(text for line in view.ledger for text in _line(line)),
        *_section("Tables and literature"),
        *_columns([(f"{t.table}, {t.entry}", t.temperature, t.value, t.origin) for t in view.tables],
                  (52, 10, 14, 22)),
        *(line for ref in view.literature for line in _wrapped(f"- {ref}", 2)),
        *_section("Cautions"),
        *(line for caution in view.cautions for line in _wrapped(f"- {caution}", 2)),
    ]  # fmt: skip
    return "\n".join(part.rstrip() for part in parts) + "\n"


def _section(title: str) -> tuple[str, ...]:
    return ("", title.upper(), "-" * len(title))


def _wrapped(text: str, hang: int = 0, width: int = WIDTH) -> list[str]:
    lines = [wrap(t, width, subsequent_indent=" " * hang, break_on_hyphens=False) for t in text.splitlines()]
    return [line for group in lines for line in group] or [""]


def _columns(rows: Iterable[Sequence[str]], widths: tuple[int, ...]) -> Iterator[str]:
    """Rows of cells, each wrapped in its column."""
    for row in rows:
        cells = [wrap(cell, w, break_on_hyphens=False) or [""] for cell, w in zip(row, widths, strict=True)]
        for i in range(max(len(c) for c in cells)):
            line = [(c[i] if i < len(c) else "").ljust(w) for c, w in zip(cells, widths, strict=True)]
            yield " ".join(line)


def _loads(rows: Iterable[LoadRow]) -> Iterator[str]:
    for r in rows:
        for i, (thermal, friction, weight, total) in enumerate(r.parts):
            head = (r.point, r.direction, r.state) if i == 0 else ("", "", "")
            sum_ = f"{total} = thermal {thermal}, friction {friction}, weight {weight}"
            yield from _columns([(*head, sum_)], (18, 18, 20, 41))


def _ladder(view: "View") -> Iterator[str]:
    if view.rungs:
        yield from _section("Ladder: rule to beam")
        heads = ("method", "state", "ratio", "leg asked", "there", "anchor", "remark")
        rows = [(r.title, r.standing, r.ratio, r.leg, r.at_leg, r.anchor, r.remark) for r in view.rungs]
        yield from _columns([heads, *rows], (20, 12, 7, 9, 7, 10, 30))
    if view.turns:
        yield from _section("Where the answer turns")
        yield from _columns([(t[0], f"now {t[1]}", f"turns at {t[2]}") for t in view.turns], (34, 20, 24))


def _line(line: Line) -> Iterator[str]:
    if line.form == "heading":
        yield from ("", line.words)
        return
    if line.form == "sentence":
        yield from _wrapped("     " + line.words, 5)
        return
    symbol = f" {line.symbol}" if line.form == "value" else ""
    words = f"{line.number:>3}  {line.words}{symbol}" + (f", {line.where}" if line.where else "")
    tick = f"{line.result}  [ ]"
    yield words.ljust(WIDTH - len(tick) - 1) + " " + tick
    if line.reason is not None:
        yield f"       because {line.reason}: {line.reason_numbers}"
    if line.equation is not None and line.form != "value":
        yield f"       {line.equation}"
    if line.numbers is not None:
        yield f"       = {line.numbers}"
    if line.grid is not None:
        for part in line.grid.parts():
            yield from _grid(part)
    if line.source:
        yield from _wrapped(f"       {line.source}", 7)


def _grid(grid: Grid) -> Iterator[str]:
    rows = [[h.text for h in grid.heads], *grid.rows]
    widths = [max(len(row[i]) for row in rows) for i in range(len(grid.heads))]
    for k, row in enumerate(rows):
        cells = [row[0].ljust(widths[0])] + [c.rjust(w) for c, w in zip(row[1:], widths[1:], strict=True)]
        mark = "  governs" if grid.marked is not None and k - 1 == grid.marked else ""
        yield "         " + "  ".join(cells) + mark

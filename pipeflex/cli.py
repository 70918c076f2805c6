"""The command line: sheets, answers and notebooks of design files, materials and sizes of the tables.

Exit status: 0 computed, 1 a fault of the program or of the output, 2 bad input.
"""

import argparse
import codecs
import io
import os
import re
import sys
import unicodedata
from collections.abc import Sequence
from contextlib import suppress
from pathlib import Path
from typing import TYPE_CHECKING, Final

from pipeflex import __version__
from pipeflex.errors import Fault, InputError, PipeflexError
from pipeflex.present import UNIT_SYSTEMS, span, text

if TYPE_CHECKING:
    from pipeflex.files.design_file import Opened
    from pipeflex.sheet import Sheet

DEMO: Final = "line-1204.toml"
PAPERS: Final = ("A4", "Letter")
BAD_INPUT: Final = 2
INTERRUPTED, PIPE_CLOSED = 130, 141
"""As a shell reports the signals for them."""

_MOST_FAULTS: Final = 20
_ASCII: Final = {
    "°": "deg", "µ": "u", "·": "*", "×": "x", "−": "-", "–": "-", "—": "-", "→": "->", "←": "<-", "≤": "<=", "≥": ">=",
    "√": "sqrt", "ø": "o", "ß": "ss", "“": '"', "”": '"', "‘": "'", "’": "'", "│": "|", "─": "-", "═": "=",
}  # fmt: skip
_RAISED: Final = re.compile("[⁻⁰¹²³⁴-⁹]+")


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command; returns the exit status and never raises for what a user gave or did."""
    _encode_plainly()
    try:
        given = _parser().parse_args(argv)
        given.run(given)
        _flush()
        return 0
    except PipeflexError as error:
        return _refused(error)
    except KeyboardInterrupt:
        _say("stopped")
        return INTERRUPTED
    except BrokenPipeError:
        _drop_output()
        return PIPE_CLOSED
    except OSError as error:
        _drop_output()
        _say(f"{error.filename or 'output'}: {error.strerror or error}")
        return 1
    except Exception as error:
        _say(f"a fault of the program, not of the input: {type(error).__name__}: {error}")
        return 1


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="pipeflex", description="Thermal expansion of a pipe run: growth, leg, anchors, guides, calc sheet."
    )
    parser.add_argument("--version", action="version", version=f"pipeflex {__version__}")
    commands = parser.add_subparsers(required=True, metavar="COMMAND")

    sheet = commands.add_parser("sheet", help="write the calc sheet of a design file")
    sheet.add_argument("design", metavar="DESIGN.toml")
    sheet.add_argument("-o", "--output", metavar="OUT.html", required=True)
    sheet.add_argument("--overwrite", action="store_true", help="replace the file if there is one")
    _add_display(sheet)
    sheet.set_defaults(run=_sheet)

    solve = commands.add_parser("solve", help="print the answer of a design file")
    solve.add_argument("design", metavar="DESIGN.toml")
    solve.add_argument("--json", action="store_true", help="SI numbers for programs")
    solve.add_argument("--method", metavar="KEY", help="a method of the ladder; by default the highest that may answer")
    _add_display(solve)
    solve.set_defaults(run=_solve)

    demo = commands.add_parser("demo", help="copy an invented design, write its calc sheet, print its ledger")
    demo.add_argument("folder", metavar="FOLDER", nargs="?", default=".")
    demo.add_argument("--overwrite", action="store_true", help="replace the files if there are some")
    _add_display(demo)
    demo.set_defaults(run=_demo)

    opening = commands.add_parser("open", help="copy a notebook and its design here, and open it in JupyterLab")
    opening.add_argument("name", metavar="NAME", nargs="?", default="", help="of the notebook; the first by default")
    opening.add_argument("--folder", metavar="FOLDER", default=".", help="where to copy to; this one by default")
    opening.add_argument("--no-browser", action="store_true", help="print the address only")
    opening.set_defaults(run=_open)

    materials = commands.add_parser("materials", help="list the materials of the tables")
    materials.add_argument("--code", metavar="KEY", default="B31.3-2018", help="edition with the allowable stresses")
    _add_units(materials)
    materials.set_defaults(run=_materials)

    sizes = commands.add_parser("sizes", help="list pipe sizes, or the walls of one")
    sizes.add_argument("size", metavar="SIZE", nargs="*", help="such as DN 200, NPS 8 or 8 in")
    _add_units(sizes)
    sizes.set_defaults(run=_sizes)
    return parser


def _add_units(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("--units", choices=UNIT_SYSTEMS, default="metric", help="units shown (metric)")


def _add_display(parser: argparse.ArgumentParser) -> None:
    _add_units(parser)
    parser.add_argument("--paper", choices=PAPERS, default="A4", help="paper of the sheet (A4)")


# ------------------------------------------------------------------------------------------------ commands


def _sheet(given: argparse.Namespace) -> None:
    _free(given.output, given.overwrite, given.design)
    made = _sheet_of(_opened(given.design), given)
    print(made.write(given.output, overwrite=given.overwrite))


def _solve(given: argparse.Namespace) -> None:
    from pipeflex.files.results import to_json

    sheet = _sheet_of(_opened(given.design), given, given.method)
    if given.json:
        print(to_json(sheet.outcome, sheet.ladder, " ".join(sheet.headline().lines)), end="")
    else:
        print(sheet.text())


def _demo(given: argparse.Namespace) -> None:
    from pipeflex.files.design_file import read_opened
    from pipeflex.files.text_file import read_text, write_text

    folder = Path(given.folder)
    design, page = folder / DEMO, (folder / DEMO).with_suffix(".html")
    for path in (design, page):
        _free(path, given.overwrite)
    shipped = read_text(_shipped() / DEMO)
    made = _sheet_of(read_opened(shipped, DEMO), given)
    write_text(design, shipped, make_folder=True)
    made.write(page, overwrite=given.overwrite)
    print(made.text())
    print(
        f"\nAn invented line. Its design is in {design}, its calc sheet in {page}.\n"
        f"Open the sheet in a browser and print it from there. Change the design in any editor, then:\n"
        f'    pipeflex sheet "{design}" -o "{page}" --overwrite'
    )


def _open(given: argparse.Namespace) -> None:
    from pipeflex.desks import opening

    source = _shipped()
    name = opening.chosen(given.name, source)
    copied = opening.copy_into(name, source, Path(given.folder))
    for path, new in copied:
        print(f"{path}: {'copied' if new else 'is there already, left as it is'}")
    lab = opening.Lab(copied[0].path)
    browser = opening.has_screen() and not given.no_browser
    print(f"{'Opening' if browser else 'Open in a browser:'} {lab.address}\nCtrl+C here ends JupyterLab.", flush=True)
    if status := lab.run(browser):
        raise OSError(0, f"ended with status {status}", "JupyterLab")


def _materials(given: argparse.Namespace) -> None:
    from pipeflex.codes import code
    from pipeflex.data.materials import material, material_keys, offered

    edition = code(given.code)
    offers = offered(edition.stress_tables)
    print(f"Material, temperatures for which the tables hold growth, modulus and allowable stress ({edition.key})\n")
    _columns([(o.key, span(o.low, o.high, "temperature", given.units), o.title, o.stress_from) for o in offers])
    if others := [key for key in material_keys() if key not in {offer.key for offer in offers}]:
        print("\nWithout an allowable stress for this edition\n")
        _columns([(key, material(key).title) for key in others])


def _sizes(given: argparse.Namespace) -> None:
    from pipeflex.data.pipes import sizes

    if not given.size:
        _columns([("NPS", "DN"), *sizes()])
        return
    rows = [
        (", ".join(names), *(text(number, "pipe dimension", given.units) for number in pair), source)
        for (*pair, source), names in sorted(_walls(" ".join(given.size)).items(), key=lambda item: item[0])
    ]
    _columns([("wall", "outside diameter", "thickness", "source"), *rows])


def _walls(size: str) -> dict[tuple[float, float, str], list[str]]:
    """Names of each wall of a size, steel pipe first, then copper tube."""
    from pipeflex.data.pipes import dimensions, walls
    from pipeflex.errors import TableError

    found: dict[tuple[float, float, str], list[str]] = {}
    refused: list[TableError] = []
    names: list[str] = []
    try:
        names += walls(size)
    except TableError as error:
        refused.append(error)
    for name in (*names, "K", "L", "M"):
        with suppress(TableError):
            one = dimensions(size, name)
            found.setdefault((one.outside_diameter, one.wall, one.source), []).append(name)
    if not found:
        raise refused[0]
    return found


def _free(path: str | Path, overwrite: bool, source: str = "") -> None:
    """Refuse a place that holds something, unless it may be replaced; never replace what is read from."""
    if os.path.lexists(path) and not overwrite:
        raise InputError(Fault(str(path), "is there already", allowed="a new place, or --overwrite"))
    if source and os.path.realpath(path) == os.path.realpath(source):
        raise InputError(Fault(str(path), "the design itself", allowed="another place than that of the design"))


def _opened(path: str) -> "Opened":
    """The design of a file; what is to be said about the file goes to the error stream."""
    from pipeflex.files.design_file import opened

    found = opened(path)
    for note in found.notes:
        _say(f"{path}: {note}")
    return found


def _sheet_of(found: "Opened", given: argparse.Namespace, method: str | None = None) -> "Sheet":
    from pipeflex.sheet import sheet

    return sheet(found.design, given.units, method, given.paper)


def _shipped() -> Path:
    """Folder of the notebooks and their designs: in the package, or beside it in a checkout."""
    package = Path(__file__).parent
    inside = package / "notebooks"
    return inside if inside.is_dir() else package.parent / "notebooks"


# -------------------------------------------------------------------------------------------------- output


def _columns(rows: Sequence[tuple[str, ...]]) -> None:
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    for row in rows:
        print("  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)).rstrip())


def _refused(error: PipeflexError) -> int:
    lines = error.text().splitlines()
    more = len(lines) - _MOST_FAULTS
    if len(lines) == 1:
        _say(lines[0])
    else:
        _say(f"{len(lines)} faults")
        shown = lines[:_MOST_FAULTS] + ([f"and {more} more"] if more > 0 else [])
        print("\n".join(f"  {line}" for line in shown), file=sys.stderr)
    return BAD_INPUT


def _say(message: str) -> None:
    with suppress(OSError):
        print(f"pipeflex: {message}", file=sys.stderr)


def _flush() -> None:
    if sys.stdout is not None:
        sys.stdout.flush()


def _drop_output() -> None:
    """Nothing more can be written: let the closing of the stream at exit go nowhere."""
    with suppress(OSError, ValueError, AttributeError):
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def _encode_plainly() -> None:
    """Write what a terminal's encoding lacks in plain letters instead of failing."""
    codecs.register_error("pipeflex", _plain)
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="pipeflex")


def _plain(error: UnicodeError) -> tuple[str, int]:
    assert isinstance(error, UnicodeEncodeError)
    letters = _RAISED.sub(lambda raised: "^" + raised[0], error.object[error.start : error.end])
    return "".join(map(_plain_letter, letters)), error.end


def _plain_letter(letter: str) -> str:
    if letter.isascii() or letter in _ASCII:
        return _ASCII.get(letter, letter)
    script, _, name = unicodedata.name(letter, "").rpartition(" LETTER ")
    if script.startswith("GREEK"):
        return name.lower().capitalize() if script.endswith("CAPITAL") else name.lower()
    decomposed = unicodedata.normalize("NFKD", letter).replace("−", "-")
    if "⁄" in decomposed:  # a fraction after a whole number stays one
        decomposed = " " + decomposed.replace("⁄", "/")
    return decomposed.encode("ascii", "ignore").decode() or "?"


if __name__ == "__main__":
    raise SystemExit(main())

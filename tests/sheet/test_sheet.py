"""The sheet: same bytes, nothing to load, nothing that runs, the same lines wherever it is shown."""

import html as std_html
import re
import subprocess
import sys
from html.parser import HTMLParser

import numpy as np
import pytest

from pipeflex.errors import InputError
from pipeflex.methods import ladder, solve
from pipeflex.methods.basis import table_values
from pipeflex.model.duty import Title
from pipeflex.model.outcome import Turn
from pipeflex.model.words import Origin, Verdict
from pipeflex.sheet import Sheet, read_design
from pipeflex.sheet.expression import Expression
from pipeflex.sheet.headline import holding_side
from pipeflex.sheet.html import css_string
from pipeflex.sheet.inputs import inputs
from pipeflex.sheet.ledger import Grid
from pipeflex.sheet.numbers import alike, exact
from tests.sheet.lines import NASTY, SIZES, answered, line, sheet

DESIGN = "# ünï\n[title]\nnotes = '''</pre><b>&amp; &lt;\"'''\r\n\ttab, 33 bar g sat, 17'-2\"\n\n"


class Page(HTMLParser):
    """Tags, attributes, labels of expressions and plain text of a page."""

    def __init__(self, text):
        super().__init__()
        self.tags, self.attributes, self.maths, self.words = [], [], [], []
        self.feed(text)
        self.close()

    def handle_starttag(self, tag, attrs):
        self.tags.append(tag)
        self.attributes += attrs
        known = dict(attrs)
        if known.get("role") == "math":
            self.maths.append(known["aria-label"])

    def handle_data(self, data):
        self.words.append(data)


@pytest.fixture(scope="module")
def whole():
    return by_the_beam(line(first_guide=1.5, rest_spacing=7.0), design_text=DESIGN)


def by_the_beam(design, **options):
    return Sheet(outcome=solve(design, "beam_flexibility"), ladder=ladder(design), **options)


def test_same_outcome_gives_same_bytes(whole):
    again = by_the_beam(line(first_guide=1.5, rest_spacing=7.0), design_text=DESIGN)
    assert whole.html() == again.html()
    assert whole.text() == again.text()
    assert whole._repr_html_() == again._repr_html_()


@pytest.mark.parametrize("units", ["metric", "us"])
@pytest.mark.parametrize("shape", SIZES)
def test_pages_run_nothing_load_nothing_and_stay_small(shape, units):
    made = by_the_beam(line(shape, first_guide=1.2, rest_spacing=5.0), units=units, design_text=DESIGN)
    for text in (made.html(), made._repr_html_()):
        page = Page(text)
        assert not {"script", "link", "img", "iframe", "object", "embed", "form", "base"} & set(page.tags)
        assert not [name for name, _ in page.attributes if name.startswith("on") or name in ("src", "href", "style")]
        assert "url(" not in text
        assert "@import" not in text
        assert len(text.encode()) < 300_000
        assert not re.search(r"\b(nan|NaN|inf|None)\b", " ".join(page.words))
    assert "default-src 'none'; style-src 'unsafe-inline'; img-src data:" in made.html()
    assert not re.search(r"\b(nan|inf|None)\b", made.text())


def test_text_of_users_is_escaped_everywhere():
    title = Title(line=NASTY, title=NASTY, project=NASTY, revision="B}<", date="</style>", by="}</style>", notes=NASTY)
    made = sheet(line(title=title, tags=(NASTY, NASTY)), design_text=NASTY)
    for text in (made.html(), made._repr_html_()):
        assert "script" not in Page(text).tags
        assert "<script" not in text
        assert text.count("</style>") == 1
    assert read_design(made.html()) == NASTY
    css = made.html().partition("<style>")[2].partition("</style>")[0]
    assert "alert(" not in css


def test_css_strings_hold_letters_digits_and_escapes_only():
    said = css_string('a1"\\}</style>\n é\u2028')
    assert re.fullmatch(r"(?:[A-Za-z0-9]|\\[0-9a-f]{6} )*", said)
    back = re.sub(r"\\([0-9a-f]{6}) ", lambda m: chr(int(m[1], 16)), said)
    assert back == 'a1"\\}</style>\n é\u2028'


def test_page_fragment_and_terminal_show_the_same_ledger(whole):
    lines = whole.view.ledger
    assert [line.number for line in lines if line.number] == list(range(1, sum(bool(x.number) for x in lines) + 1))
    flat = " ".join(whole.text().split())
    for text in (whole.html(), whole._repr_html_()):
        page = Page(text)
        words = " ".join(" ".join(page.words).split())
        for step in lines:
            assert " ".join(step.words.split()) in words
            assert step.result.replace("\u00a0", " ").replace("\u2009", " ") in words.replace("\u2009", " ")
            for printed in (step.equation if step.form != "value" else step.symbol, step.numbers):
                assert printed is None or printed.text in page.maths
    for step in lines:
        assert " ".join(step.words.split()) in flat
        for printed in (step.formula, step.numbers):
            assert printed is None or " ".join(printed.text.split()) in flat


@pytest.mark.parametrize("units", ["metric", "us"])
def test_every_step_of_the_outcome_is_a_line(units):
    outcome = answered(line())
    lines = Sheet(outcome=outcome, units=units).view.ledger
    assert len(lines) == len(outcome.steps)
    assert {"heading", "value", "worked", "table"} <= {x.form for x in lines}


def test_pages_are_in_the_order_of_a_calculation(whole):
    heads = re.findall(r"<h2>(.*?)</h2>", whole.html())
    assert heads == [
        "Inputs and where they come from", "Checks", "Loads", "Ladder: rule to beam", "Ledger", "Tables and literature",
        "Cautions", "Design",
    ]  # fmt: skip
    body = whole.html().partition("<body")[2]
    assert body.index("verdict") < body.index("<svg") < body.index("<h2>")
    for margin_box in ("@top-left", "@top-right", "@bottom-left", "counter(page)", "counter(pages)"):
        assert margin_box in whole.html()


def test_loads_say_what_they_are_in_both_unit_systems(whole):
    for text in (whole.html(), whole.text()):
        plain = " ".join(text.split())
        assert "Working loads, unfactored, of the pipe on the steel (or equipment)" in plain
        assert "Friction factor 0.30" in plain
        assert "kN" in plain
        assert "lbf" in plain


def test_parts_of_a_load_add_up_along_its_direction():
    made = sheet(line(rest_spacing=7.0))
    load = next(v for v in made.outcome.loads if v.kind == "force")
    row = next(r for r in made.view.loads if r.point == load.point)
    thermal, friction, weight, total = (float(t.split("\u00a0")[0].replace("\u2212", "-")) for t in row.parts[0])
    assert thermal + friction + weight == pytest.approx(total, abs=0.02)
    assert total == pytest.approx(abs(float(load.greatest())) / 1e3, abs=0.006)
    assert row.direction == f"force, {load.toward(float(load.greatest()))}"


def test_design_text_comes_back_exactly(whole, tmp_path):
    assert read_design(whole.html()) == DESIGN
    raw = whole.html().partition('<pre id="design">')[2].partition("</pre>")[0]
    assert std_html.unescape(raw) == DESIGN
    path = whole.write(tmp_path / "sheet.html")
    assert read_design(path.read_bytes().decode()) == DESIGN


@pytest.mark.parametrize("text", ["", "<p>x</p>", '<pre id="other">x</pre>', '<pre id="design"> </pre>'])
def test_a_page_without_design_is_refused(text):
    with pytest.raises(InputError, match="page"):
        read_design(text)


def test_two_designs_in_a_page_are_refused():
    with pytest.raises(InputError, match="2 design texts"):
        read_design('<pre id="design">a</pre><pre id="design">b</pre>')


def test_writing_never_overwrites_silently_and_leaves_no_part(whole, tmp_path):
    path = tmp_path / "sheet.html"
    path.write_text("mine")
    with pytest.raises(InputError, match="overwrite=True"):
        whole.write(path)
    assert path.read_text() == "mine"
    whole.write(path, overwrite=True)
    assert path.read_text("utf-8") == whole.html()
    assert [p.name for p in tmp_path.iterdir()] == ["sheet.html"]
    with pytest.raises(InputError):
        whole.write(tmp_path / "absent" / "sheet.html")


@pytest.mark.parametrize(("field", "value"), [("units", "imperial"), ("paper", "A3")])
def test_unknown_units_and_paper_are_refused(field, value):
    with pytest.raises(InputError, match=field):
        Sheet(outcome=answered(line()), **{field: value})


def test_a_column_is_refused_unless_it_has_one_row():
    column = solve(line().column(), "guided_cantilever")
    assert Sheet(outcome=column).headline().lines[0] == Sheet(outcome=answered(line())).headline().lines[0]
    two = line(sizes={"run": 60.0, "leg": np.array([5.0, 6.0]), "width": 2.0})
    with pytest.raises(InputError, match="outcome"):
        Sheet(outcome=solve(two, "guided_cantilever"))


def test_headline_names_verdict_ratio_place_and_states():
    made = sheet(line()).headline()
    assert made.verdict is Verdict.STIFF
    worst = answered(line()).worst()
    assert (
        made.first
        == f"TOO STIFF. {100 * float(worst.ratio):.0f}\u00a0% of the allowable range, {worst.where}, {worst.states}."
    )
    assert made.second.startswith("By the rule.")
    assert made.code == "B31.3-2022"


def test_headline_counts_values_from_memory():
    design = line()
    count = sum(curve.origin[i] == Origin.MEMORY for curve, i in table_values(design))
    assert count > 1
    assert sheet(design).headline().third == f"{count} table values are from memory: confirm"


def test_headline_of_a_line_that_holds():
    made = sheet(line(hottest=330.0, sizes={"run": 20.0, "leg": 5.5, "width": 3.0}))
    assert made.headline().verdict is Verdict.FLEXIBLE
    assert made.headline().first.startswith("FLEXIBLE ENOUGH. ")


def test_headline_that_cannot_say_names_the_reason():
    made = Sheet(outcome=answered(line("L", {"run": 18.0, "leg": 5.0}, first_guide=0.4, hottest=330.0)))
    assert made.headline().verdict is Verdict.UNKNOWN
    assert made.headline().first.startswith("CANNOT SAY. The guided cantilever is outside its limits: ")


def test_where_the_answer_turns_is_rounded_to_the_side_that_holds():
    assert holding_side(5.0412, 5.10, "length", "metric", True) == "5.05\u00a0m"
    assert holding_side(5.2988, 5.10, "length", "metric", False) == "5.30\u00a0m"
    assert holding_side(516.83, 513.15, "temperature", "metric", True) == "243.6\u00a0°C"
    turn = Turn(path="layout.sizes.leg", label="Leg", kind="length", present=5.1, turns=7.8361)
    assert "It holds with leg 7.84\u00a0m." in sheet(line(), turns=(turn,)).headline().second


def test_inputs_say_where_they_come_from():
    found = {(e.group, e.label): e for e in inputs(line(demo=("layout.sizes.leg",)))}
    assert found["Layout", "Leg"].origin == "demo value"
    assert found["Layout", "Between anchors"].origin == "given"
    assert found["Layout", "Friction"].origin == "default, steel on steel, common practice"
    assert found["Limits", "Room"].value == "6.00\u00a0m"
    assert found["Duty", "Case operating"].value == "240.0\u00a0°C, 10.00\u00a0bar"
    assert "normal running" in found["Duty", "Case operating"].origin


def test_inputs_show_the_decimals_they_have():
    assert exact(0.219075, "pipe dimension", "metric") == "219.075\u00a0mm"
    assert exact(5.125, "length", "metric") == "5.125\u00a0m"
    assert exact(5.1, "length", "us") == "16.73\u00a0ft"


def test_numbers_beside_each_other_have_the_same_decimals():
    assert alike([13.4e3, 1e-9, -5e3], "force") == ["13.40\u00a0kN", "0.00\u00a0kN", "\u22125.00\u00a0kN"]
    assert alike([0.0123e3, 0.5], "force") == ["0.0123\u00a0kN", "0.0005\u00a0kN"]


def test_every_state_of_every_load_that_changes_is_on_the_sheet(whole):
    printed = {load.heading: load.states for load in whole.view.changing_loads}
    for load in whole.outcome.loads:
        total = np.asarray(load.total)
        heading = f"{load.point}, {load.name}, positive {load.positive}"
        if np.ptp(total) > 0.02 * np.abs(total).max() > 1.0:
            assert [row[0] for row in printed[heading]] == list(load.states)


def test_tables_of_the_sheet_name_every_value_read():
    made = sheet(line())
    assert len(made.view.tables) == len(table_values(line()))
    assert {t.origin for t in made.view.tables} <= {str(o) for o in Origin}
    for t in made.view.tables:
        assert t.value in made.html()


def test_cautions_and_literature_are_on_every_sheet(whole):
    for text in (whole.html(), whole._repr_html_(), whole.text()):
        plain = std_html.unescape(" ".join(text.split()))
        assert "qualified engineer" in plain
        assert "surge and steam hammer" in plain
        assert all(" ".join(ref.split()) in plain for ref in whole.view.literature)


def test_paper_sizes():
    assert "@page{size:Letter;" in sheet(line(), paper="Letter").html()
    assert "@page{size:A4;" in sheet(line()).html()


def test_parts_are_named(whole):
    assert "<table>" in whole.part("checks")
    with pytest.raises(InputError, match="part"):
        whole.part("script")


def test_wide_grids_are_cut_between_columns_and_keep_every_number():
    heads = tuple(Expression.plain(f"D_{i}") for i in range(21))
    grid = Grid(heads, tuple((f"row {i}", *(f"{i * 100 + j}.000000" for j in range(20))) for i in range(3)), marked=1)
    parts = list(grid.parts())
    assert len(parts) > 2
    assert all(part.rows[0][0] == "row 0" and part.marked == 1 for part in parts)
    for i, row in enumerate(grid.rows):
        assert [cell for part in parts for cell in part.rows[i][1:]] == list(row[1:])
    assert [h.text for part in parts for h in part.heads[1:]] == [h.text for h in heads[1:]]


def test_the_sheet_needs_neither_widgets_nor_plots():
    code = (
        "import sys, pipeflex.sheet; print(sorted({'plotly', 'ipywidgets', 'anywidget', 'IPython'} & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"

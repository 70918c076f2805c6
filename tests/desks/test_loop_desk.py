"""The loop desk: what is typed, what is answered, what is kept."""

from __future__ import annotations

import asyncio
import html
from collections.abc import Callable
from pathlib import Path

import ipywidgets
import pytest
from IPython.core.interactiveshell import InteractiveShell
from IPython.utils.capture import capture_output

from pipeflex.desks import LoopDesk, core
from pipeflex.desks.answer import FOLLOWS, first_answer, settled, whole_answer
from pipeflex.desks.bound import Look, home_of, quantity_text
from pipeflex.errors import InputError
from pipeflex.files import design_file
from pipeflex.methods import solve
from pipeflex.model.record import at
from pipeflex.model.words import Verdict
from pipeflex.units import Typed, parse

from .hands import field, put, strike

Desks = Callable[..., LoopDesk]


def saved(desk: LoopDesk, path: str) -> float:
    """The number at a path of the design as the file has it."""
    return float(at(design_file.load(desk.file.path), path))


# --- what the first screen says ---------------------------------------------------------------------


def test_headline_and_checks_are_those_of_the_answer(desk: LoopDesk) -> None:
    outcome = solve(desk.held)
    assert desk.answer is not None
    assert desk.answer.complete
    assert desk.head.verdict == outcome.verdict == Verdict.FLEXIBLE
    assert "98" in desk.head.detail
    assert desk.head.aside == desk.held.code.key
    assert desk.head.lines[0].startswith("By the beam.")
    assert "The rule would ask a leg of" in desk.head.lines[0]
    assert "urns at" in desk.head.lines[0]
    assert desk.memory.text == "4 table values are from memory"
    for check in outcome.checks:
        assert html.escape(check.title) in desk.checks.value
    assert "legs " in desk.checks.value
    assert " + friction " in desk.checks.value
    assert "no limit given" in desk.checks.value


def test_fold_lines_say_what_is_under_them(desk: LoopDesk) -> None:
    assert desk.wall.summary == "8.18 mm, steam 20 bar, 100 mm, c 1.5 mm"
    assert desk.supports.summary == "rest 7 m, mu 0.30, 40 kN"
    assert desk.rules.summary == "B31.3-2018, 7000 cycles, 1a"
    put(desk, "Friction", "0.15")
    put(desk, "Insulation", "80")
    assert "mu 0.15" in desk.supports.summary
    assert "80 mm" in desk.wall.summary


def test_labels_and_help_come_from_the_records(desk: LoopDesk) -> None:
    assert field(desk, "Friction").help == "at most 1.000; default: steel on steel, common practice"
    labels = [f.label for f in desk.fields.values()]
    assert all(labels)
    assert {"Hottest", "Coldest", "Installed", "Between anchors", "Leg", "Width", "First guide", "Room"} < set(labels)


# --- what engineers type ----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("label", "text", "path", "value", "echo"),
    [
        ("Leg", "5.25", "layout.sizes.leg", 5.25, ""),
        ("Leg", "17'-2\"", "layout.sizes.leg", 5.2324, "= 5.23\u00a0m"),  # 206 in of 25.4 mm
        ("Leg", "525 cm", "layout.sizes.leg", 5.25, "= 5.25\u00a0m"),
        ("Hottest", "464 F", "duty.cases.operating.temperature", 513.15, "= 240.0\u00a0°C"),
        ("Hottest", "230", "duty.cases.operating.temperature", 503.15, ""),
        ("Insulation", "80", "pipe.insulation_thickness", 0.08, ""),
        ("Room", "20 ft", "limits.room", 6.096, "= 6.10\u00a0m"),
    ],
)
def test_typed_forms(desk: LoopDesk, label: str, text: str, path: str, value: float, echo: str) -> None:
    part = put(desk, label, text)
    assert (part.error, part.echo) == ("", echo)
    assert at(desk.held, path) == value
    assert saved(desk, path) == value


def test_saturated_steam_echoes_its_temperature(desk: LoopDesk) -> None:
    part = put(desk, "Hottest", "33 bar g sat")
    # IAPWS-IF97: 34.01 bar saturates at 240.9 degC
    assert (part.text, part.echo) == ("33 bar g sat", "= 240.9\u00a0°C")
    assert 'temperature = "33 bar g sat"' in desk.file.path.read_text()


def test_tie_in_days_as_a_range(desk: LoopDesk) -> None:
    put(desk, "Installed", "0 .. 30 degC")
    assert (desk.held.duty.install_low, desk.held.duty.install_high) == (273.15, 303.15)
    put(desk, "Installed", "41 .. 95 F")
    assert (desk.held.duty.install_low, desk.held.duty.install_high) == pytest.approx((278.15, 308.15))
    part = put(desk, "Installed", "35 .. 5 degC")
    assert "the lower value first" in part.error


def test_sizes_and_walls(desk: LoopDesk) -> None:
    put(desk, "Size", "8 in")
    assert desk.held.pipe.outside_diameter == 0.219075
    put(desk, "Size", "DN 150")
    assert desk.held.pipe.outside_diameter == pytest.approx(0.168275)  # 6.625 in, ASME B36.10M
    assert desk.held.layout.corners[0].radius == pytest.approx(0.2286)  # 9 in, long radius, ASME B16.9
    put(desk, "Schedule", "80")
    assert desk.held.pipe.wall == pytest.approx(0.0109728)  # 0.432 in
    put(desk, "Wall", "7.1 mm")
    assert desk.held.pipe.wall == 0.0071
    assert field(desk, "Schedule").text == "own"
    strike(field(desk, "Size"), "step", steps=1)
    assert desk.held.pipe.size == "DN 200"
    part = put(desk, "Size", "DN 201")
    assert "nearest" in part.error


def test_material_bends_and_code(desk: LoopDesk) -> None:
    part = field(desk, "Material")
    other = next(key for key, _ in part.options if key != part.text)  # type: ignore[union-attr]
    put(desk, "Material", other)
    assert desk.held.pipe.material.key == other
    put(desk, "Bends", "short radius")
    assert desk.held.layout.corners[0].radius == pytest.approx(0.2032)  # 8 in, ASME B16.9
    edition = next(key for key, _ in field(desk, "Edition").options if key != desk.held.code.key)  # type: ignore[union-attr]
    put(desk, "Edition", edition)
    assert desk.held.code.key == edition == desk.head.aside


def test_a_size_that_is_left_out_follows_from_the_others(desk: LoopDesk) -> None:
    part = put(desk, "Width", "")
    assert (part.text, part.echo) == ("", "= 2.55\u00a0m")
    put(desk, "Leg", "5")
    assert field(desk, "Width").echo == "= 2.50\u00a0m"


def test_steps(desk: LoopDesk) -> None:
    part = field(desk, "Leg")
    strike(part, "step", steps=1)
    assert part.text == "5.15 m"
    put(desk, "Leg", "5.12")
    strike(part, "step", steps=1)
    assert part.text == "5.15 m"
    strike(part, "step", steps=-10)
    assert part.text == "4.65 m"
    desk.set_units("us")
    strike(part, "step", steps=1)
    assert part.text == "15'-4\""  # 4.65 m is 183.07 in: the next whole 2 in
    strike(part, "step", steps=-1000)
    assert part.text == "15'-4\""


# --- what is not taken ------------------------------------------------------------------------------


def test_a_comma_is_refused_with_both_readings(desk: LoopDesk) -> None:
    before, text = desk.held, desk.file.path.read_text()
    part = put(desk, "Leg", "2,5")
    assert "2.5, 25" in part.error
    assert part.text == "2,5"
    assert desk.held is before
    assert desk.file.path.read_text() == text
    assert desk.picture.stale
    assert desk.head.verdict == Verdict.UNKNOWN
    assert "Leg" in desk.head.detail
    desk.handing.write()
    assert "No sheet" in desk.handing.written.text
    assert not list(desk.file.path.parent.glob("*.html"))
    strike(part, "restore")
    assert not part.error
    assert not desk.picture.stale
    assert desk.head.verdict == Verdict.FLEXIBLE


def test_another_entry_is_taken_while_one_is_wrong(desk: LoopDesk) -> None:
    put(desk, "Leg", "five")
    put(desk, "Room", "7")
    assert desk.held.limits.room == 7
    assert field(desk, "Leg").text == "five"
    assert desk.picture.stale
    put(desk, "Leg", "5.5")
    assert not desk.picture.stale
    assert not desk.wrong


@pytest.mark.parametrize(
    ("label", "text", "said"),
    [
        ("Hottest", "900", "825"),  # end of the expansion table
        ("Hottest", "-20", "above"),
        ("Coldest", "300", "below"),
        ("Between anchors", "1", "than the run"),
        ("Friction", "2", "1.000"),
        ("Leg", "", "length"),
        ("Leg", "240 degC", "length"),
        ("Cycles", "0", "1 .. 1"),
        ("Material", "cheese", "material"),
        ("First guide", "40", "anchor"),
    ],
)
def test_what_the_design_cannot_have(desk: LoopDesk, label: str, text: str, said: str) -> None:
    before = desk.held
    part = put(desk, label, text)
    assert said in part.error + desk.problem
    assert part.error
    assert desk.held is before


def test_a_fault_of_no_field_stands_in_the_problem_line(desk: LoopDesk) -> None:
    part = put(desk, "Size", "DN 750")
    assert "leg 3" in part.error
    assert desk.problem.startswith("Size, leg 3")
    assert desk.trouble.text == desk.problem
    assert not desk.trouble.hidden
    desk.undo()
    assert (part.error, desk.problem, part.text) == ("", "", "DN 200")


@pytest.mark.parametrize(
    "text", ["<img src=x onerror=alert(1)>", "</td><script>alert(1)</script>", "${7*7} $x$ {0}", "a" * 201, "\x00"]
)
def test_hostile_text_is_data(desk: LoopDesk, text: str) -> None:
    part = put(desk, "Line", text)
    put(desk, "Leg", text)
    for band in desk.results.values():
        strike(band, "toggle", open=True)
    for shown in (desk.checks.value, desk.parts.value):
        assert "<img" not in shown
        assert "<script" not in shown
    if not part.error:
        assert design_file.load(desk.file.path).title.line == text


def test_names_from_the_file_are_data(line: Path, desks: Desks) -> None:
    line.write_text(
        line.read_text().replace('name = "west"', 'name = "<b>west</b>"').replace("layout.ends.west", "layout.ends.0")
    )
    desk = desks()
    assert "<b>west" not in desk.checks.value
    assert "&lt;b&gt;west" in desk.checks.value
    texts = [t for trace in desk.picture.scene["data"] for t in trace.get("text", ())]
    assert not any("<b>" in t for t in texts)
    put(desk, "Anchor <b>west</b>", "30")
    assert desk.held.layout.ends[0].anchor_limit == 30_000


# --- nothing is lost --------------------------------------------------------------------------------


def test_every_change_is_written_whole(desk: LoopDesk) -> None:
    for label, text, path, value in (("Leg", "5.3", "layout.sizes.leg", 5.3), ("Room", "6.5", "limits.room", 6.5)):
        put(desk, label, text)
        assert saved(desk, path) == value
        assert desk.handing.saved.text.startswith("saved ")
        assert desk.handing.saved.text.endswith("in line-1204.toml")


def test_opening_writes_nothing(line: Path, desks: Desks) -> None:
    before = line.read_text(), line.stat().st_mtime_ns
    desks()
    assert (line.read_text(), line.stat().st_mtime_ns) == before


def test_demo_values_until_touched(desk: LoopDesk) -> None:
    assert field(desk, "Leg").demo
    put(desk, "Leg", "5.10 m")  # Enter on the value as it is: now it is the user's
    assert not field(desk, "Leg").demo
    assert "layout.sizes.leg" not in design_file.load(desk.file.path).demo
    assert field(desk, "Width").demo
    put(desk, "Size", "DN 200")
    assert not field(desk, "Size").demo
    desk.undo()
    assert field(desk, "Size").demo


def test_undo_and_redo(desk: LoopDesk) -> None:
    assert desk.back.disabled
    put(desk, "Leg", "5.5")
    put(desk, "Leg", "5.6")
    assert not desk.back.disabled
    desk.undo()
    assert (desk.held.layout.sizes["leg"], saved(desk, "layout.sizes.leg")) == (5.5, 5.5)
    desk.undo()
    assert field(desk, "Leg").text == "5.10 m"
    assert desk.back.disabled
    desk.redo()
    assert field(desk, "Leg").text == "5.5 m"
    put(desk, "Leg", "5.7")
    assert desk.forth.disabled
    desk.redo()
    assert saved(desk, "layout.sizes.leg") == 5.7


def test_the_cell_run_again_takes_over(desk: LoopDesk, desks: Desks) -> None:
    put(desk, "Leg", "5.5")
    desk.set_units("us")
    before = len(ipywidgets.widgets.widget._instances)
    later = desks()
    assert len(ipywidgets.widgets.widget._instances) <= before
    assert later.held == desk.held
    assert later.look.units == "us"
    later.undo()
    assert later.held.layout.sizes["leg"] == 5.1


def test_another_hands_changes_are_not_written_over(desk: LoopDesk) -> None:
    path = desk.file.path
    path.write_text(path.read_text().replace('leg = "5.10 m"', 'leg = "5.45 m"'))
    put(desk, "Room", "6.5")
    assert "another hand" in desk.problem
    assert not desk.over.hidden
    assert saved(desk, "layout.sizes.leg") == 5.45
    strike(desk.over, "click")
    assert saved(desk, "limits.room") == 6.5
    assert saved(desk, "layout.sizes.leg") == 5.1
    path.write_text(path.read_text().replace('leg = "5.10 m"', 'leg = "5.45 m"'))
    put(desk, "Room", "6.6")
    strike(desk.again, "click")
    assert desk.held.layout.sizes["leg"] == 5.45
    assert field(desk, "Leg").text == "5.45 m"
    assert "fingerprint" in desk.problem, "a file that was edited says so"
    assert desk.again.hidden


def test_a_file_that_cannot_be_read_is_said_in_place_of_the_desk(line: Path, desks: Desks) -> None:
    good = line.read_text()
    line.write_text(good.replace('leg = "5.10 m"', "leg = 5.10"))
    desk = desks()
    panel = desk.box.children[0]
    assert "leg" in str(panel.tree)
    assert "Cannot say" in str(panel.tree)
    line.write_text(good)
    desk.read_again()
    assert desk.head.verdict == Verdict.FLEXIBLE
    assert "no such file" in str(desks(line.with_name("nothing.toml")).box.children[0].tree)


def test_a_design_that_cannot_be_answered_shows_its_fields(line: Path, desks: Desks) -> None:
    line.write_text(line.read_text().replace('"240 degC"', '"900 degC"'))
    desk = desks()
    assert desk.head.verdict == Verdict.UNKNOWN
    assert field(desk, "Hottest").error
    put(desk, "Hottest", "240")
    assert desk.head.verdict == Verdict.FLEXIBLE
    assert not field(desk, "Hottest").error


def test_other_shapes_are_refused(line: Path, desks: Desks) -> None:
    text = line.read_text().replace('shape = "U"', 'shape = "L"').replace('width = "2.00 m"', "")
    line.write_text(text)
    assert "a loop" in str(desks().box.children[0].tree)


def test_unit_systems(line: Path, desks: Desks) -> None:
    with pytest.raises(InputError, match="units"):
        desks(line, units="imperial")


# --- units ------------------------------------------------------------------------------------------


def test_switching_units_changes_what_is_shown_and_no_number(desk: LoopDesk) -> None:
    before, text = desk.held, desk.file.path.read_text()
    strike(desk.us, "click")
    assert desk.held is before
    assert field(desk, "Leg").text == "16.73 ft"
    assert field(desk, "Hottest").text == "464 degF"
    assert "ksi" in desk.checks.value
    assert "ft" in desk.head.lines[0]
    put(desk, "Leg", "16.73 ft")  # as it is shown: not a new value
    assert desk.held.layout.sizes["leg"] == 5.1
    assert 'leg = "5.10 m"' in desk.file.path.read_text()
    put(desk, "Leg", "17")
    assert desk.held.layout.sizes["leg"] == 5.1816
    strike(desk.metric, "click")
    assert (field(desk, "Leg").text, field(desk, "Leg").echo) == ("17 ft", "= 5.18\u00a0m")
    assert text != desk.file.path.read_text()


def test_a_file_in_us_units_opens_in_them(line: Path, desks: Desks) -> None:
    us = line.read_text()
    for metric, other in (('"60 m"', '"197 ft"'), ('"5.10 m"', "\"17'-2 1/2\\\"\""), ('"2.00 m"', '"6.5 ft"'),
                          ('"1.50 m"', '"5 ft"'), ('"7 m"', '"23 ft"'), ('"6.00 m"', '"20 ft"'),
                          ('"240 degC"', '"464 degF"'), ('"-10 degC"', '"14 degF"'),
                          ('"5 .. 35 degC"', '"41 .. 95 degF"'), ('"100 mm"', '"4 in"')):  # fmt: skip
        us = us.replace(metric, other)
    line.write_text(us)
    desk = desks()
    assert desk.look == Look("us", "us")
    assert field(desk, "Hottest").text == "464 degF"
    assert field(desk, "Leg").text == "17'-2 1/2\""


def test_texts_of_quantities() -> None:
    metric, away = Look("metric", "metric"), Look("us", "metric")
    assert quantity_text(parse("240 degC", "temperature"), "temperature", metric) == ("240 degC", "")
    assert quantity_text(parse("240 degC", "temperature"), "temperature", away) == ("464 degF", "")
    assert quantity_text(parse("464 F", "temperature"), "temperature", metric) == ("464 F", "= 240.0\u00a0°C")
    assert quantity_text(None, "length", metric) == ("", "")
    assert quantity_text(float("inf"), "length", metric) == ("unlimited", "")
    assert quantity_text(Typed(0.3, "0.3"), "ratio", metric) == ("0.3", "")


def test_home_of_a_design(desk: LoopDesk) -> None:
    assert home_of(desk.held) == "metric"


# --- buttons ----------------------------------------------------------------------------------------


def test_fit_finds_the_least_leg_or_says_what_would_help(desk: LoopDesk) -> None:
    put(desk, "Room", "7")
    desk.fit()
    assert desk.problem.startswith("Fitted")
    leg = desk.held.layout.sizes["leg"]
    assert leg / 0.05 == pytest.approx(round(leg / 0.05))
    ratio = float(solve(desk.held).leading.ratio)
    assert ratio <= 0.8
    put(desk, "Leg", f"{leg - 0.05:.2f}")
    assert float(solve(desk.held).leading.ratio) > 0.8
    put(desk, "Room", "4")
    desk.fit()
    assert desk.problem.startswith("No leg")
    assert "room" in desk.problem
    assert desk.held.layout.sizes["leg"] == pytest.approx(leg - 0.05)


def test_fit_in_us_units_steps_by_two_inches(desk: LoopDesk) -> None:
    put(desk, "Room", "7")
    desk.set_units("us")
    desk.fit()
    inches = desk.held.layout.sizes["leg"] / 0.0254
    assert inches == pytest.approx(2 * round(inches / 2))
    assert field(desk, "Leg").text.endswith('"')


def test_writing_the_sheet(desk: LoopDesk) -> None:
    folder = desk.file.path.parent
    assert desk.handing.name.text == "line-1204.html"
    desk.handing.write()
    page = folder / "line-1204.html"
    assert str(page) in desk.handing.written.text
    assert desk.handing.written.link == "files:line-1204.html"
    assert desk.held.fingerprint in page.read_text()
    assert desk.handing.name.text == "line-1204-2.html", "the next free name"
    first = page.read_text()
    strike(desk.handing.name, "commit", text="line-1204.html")
    put(desk, "Leg", "5.2")
    desk.handing.write()
    assert "is there already" in desk.handing.written.text
    assert page.read_text() == first
    strike(desk.handing.replace, "click")
    assert page.read_text() != first
    for name in ("../up.html", "x.txt", "", "a/b.html"):
        strike(desk.handing.name, "commit", text=name)
        assert desk.handing.name.error


def test_opening_another_design(desk: LoopDesk, line: Path) -> None:
    other = line.with_name("line-7.toml")
    other.write_text(line.read_text().replace('leg = "5.10 m"', 'leg = "4.00 m"').replace("operating", "running"))
    strike(desk.handing.other, "commit", text="line-8.toml")
    assert "line-7.toml" in desk.handing.other.error
    strike(desk.handing.other, "commit", text="line-7.toml")
    assert field(desk, "Leg").text == "4.00 m"
    assert desk.head.verdict == Verdict.STIFF
    put(desk, "Hottest", "100")
    assert saved(desk, "duty.cases.running.temperature") == pytest.approx(373.15)
    assert design_file.load(line).layout.sizes["leg"] == 5.1
    assert desk.back.disabled is False


def test_views_and_focus_change_the_picture(desk: LoopDesk) -> None:
    plan = desk.picture.scene
    strike(desk.views["isometric"], "click")
    assert desk.picture.scene != plan
    assert not desk.turn.hidden
    one = desk.picture.scene
    strike(desk.turn, "click")
    assert desk.picture.scene != one
    strike(desk.views["plan"], "click")
    assert desk.picture.scene == plan
    strike(field(desk, "Leg"), "focus", focused=True)
    lit = desk.picture.scene
    assert lit != plan
    strike(field(desk, "Leg"), "focus", focused=False)
    assert desk.picture.scene == plan
    strike(field(desk, "Hottest"), "focus", focused=True)
    assert desk.picture.scene == plan


def test_bands_show_the_sheet(desk: LoopDesk) -> None:
    assert desk.parts.value == ""
    for name, words in (("ladder", "guided cantilever"), ("loads", "unfactored"), ("ledger", "Allowable range")):
        assert words not in desk.parts.value
        strike(desk.results[name], "toggle", open=True)
        assert words in desk.parts.value
    before = desk.parts.value
    put(desk, "Friction", "0.1")
    assert desk.parts.value != before
    for name in desk.results:
        strike(desk.results[name], "toggle", open=False)
    assert desk.parts.value == ""
    assert field(desk, "By") not in desk.foot._parts
    strike(desk.block, "toggle", open=True)
    put(desk, "By", "N. Weaver")
    assert "N. Weaver" in desk.block.summary


def test_the_static_copy_follows_the_answer(line: Path, desks: Desks) -> None:
    InteractiveShell.instance()
    desk = desks()
    with capture_output() as captured:
        desk._ipython_display_()
        put(desk, "Leg", "4.5")
    copies = [out for out in captured.outputs if "text/html" in out.data]
    assert "Flexible enough" in copies[0].data["text/html"]
    assert "Too stiff" in copies[-1].data["text/html"]
    assert str(line.parent) not in copies[-1].data["text/html"]


# --- the answer in two strokes ----------------------------------------------------------------------


def test_the_first_stroke_is_the_whole_answer_without_its_loads(desk: LoopDesk) -> None:
    first, whole = first_answer(desk.held).outcome, whole_answer(desk.held).outcome
    for key in ("range", "room", "shoe"):
        assert float(first.check(key).demand) == pytest.approx(float(whole.check(key).demand), rel=1e-12)
        assert first.check(key).where == whole.check(key).where
    assert {c.key for c in first.checks if c.unjudged == FOLLOWS} == {"anchor 1", "anchor 2", "guide", "sustained"}
    assert [c.key for c in first.checks] == [c.key for c in whole.checks]
    for a, b in zip(first.along, whole.along, strict=True):
        assert a.value == pytest.approx(b.value, rel=1e-9, abs=1e-9)
    hot, hot_whole = first.shapes[0], whole.shapes[0]
    assert hot.movement == pytest.approx(hot_whole.movement, rel=1e-9, abs=1e-12)


def test_no_verdict_before_it_is_sure(line: Path, desks: Desks) -> None:
    """An anchor that takes next to nothing: the first stroke must not call the line flexible enough."""
    line.write_text(line.read_text().replace('"40 kN"', '"5 kN"'))
    design = design_file.load(line)
    first = first_answer(design)
    assert first.outcome.verdict is Verdict.FLEXIBLE
    assert not settled(first)
    assert whole_answer(design).outcome.verdict is Verdict.STIFF

    async def watched() -> list[tuple[str, str]]:
        desk = desks()
        seen = [(desk.head.verdict, desk.head.mark)]
        while desk.answer is not None and not desk.answer.complete:
            await asyncio.sleep(0.05)
        return [*seen, (desk.head.verdict, desk.head.mark)]

    assert asyncio.run(watched()) == [("", "\u2026"), ("Too stiff", "\u2715")]


def test_what_follows_gives_way_to_the_next_entry(desks: Desks, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(core, "IDLE", 0.05)
    solved: list[float] = []
    monkeypatch.setattr(core, "whole_answer", lambda d: (solved.append(d.layout.sizes["leg"]), whole_answer(d))[1])

    async def typed() -> None:
        desk = desks()
        for text in ("5.2", "5.3", "5.4"):
            put(desk, "Leg", text)
            assert desk.answer is not None
            assert not desk.answer.whole
        while desk.answer is not None and not desk.answer.complete:
            await asyncio.sleep(0.02)

    asyncio.run(typed())
    assert solved == [5.4]


def test_a_fault_in_what_follows_is_told(desk: LoopDesk, monkeypatch: pytest.MonkeyPatch) -> None:
    def fails(design: object) -> None:
        raise ZeroDivisionError("by nought")

    monkeypatch.setattr(core, "ladder", fails)
    put(desk, "Leg", "5.2")
    assert "ZeroDivisionError: by nought" in desk.problem
    assert "ZeroDivisionError" in desk.trouble.text
    assert desk.held.layout.sizes["leg"] == 5.2

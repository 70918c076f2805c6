"""The parts of a desk in real JupyterLab: keys, entries, picture, static copy, and what a re-run leaves."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path

import pytest

from .harness import BASELINE_CELLS, Lab, baseline_ms, write_notebook
from .toy import CLICKS_CELL, TOY_CELLS

Opener = Callable[..., Lab]

CONTROLS = {
    "entry": "Coldest",
    "stepped entry": "Leg",
    "choice": "Size",
    "button": "css:.pf-button",
    "button that may not act": "css:.pf-button[aria-disabled]",
    "fold line": "css:.pf-fold > summary",
    "band line": "css:.pf-band",
    "link": "css:.pf-note a[href]",
    "slider": "css:.noUi-handle",
}


@pytest.fixture
def toy(open_notebook: Opener, tmp_path: Path) -> Lab:
    return open_notebook(write_notebook(tmp_path / "toy.ipynb", *TOY_CELLS))


def log(lab: Lab, text: str) -> None:
    lab.expect(".pf-note", text)


def test_no_key_of_jupyterlab_acts_inside_a_desk(toy: Lab) -> None:
    """Every key that JupyterLab binds to the focused element, on every kind of control."""
    toy.click("Friction: mu 0.30")
    toy.expect(".pf-band[aria-expanded=true]", "Friction")
    before = toy.state()
    toy.commands()
    for kind, label in CONTROLS.items():
        toy.find(label).focus()
        bindings = toy.bindings()
        assert {"notebook:cut-cell", "notebook:delete-cell", "kernelmenu:restart"} <= bindings.keys() or (
            kind.endswith("entry")  # JupyterLab itself spares text boxes most of them
        )
        for command, keys in bindings.items():
            if command.startswith("docmanager:save"):
                continue
            toy.find(label).focus()
            for key in keys:
                toy.page.keyboard.press(key)
            inside = toy.page.evaluate("() => !!document.activeElement.closest('.pipeflex-desk')")
            assert inside, f"{keys} took the keyboard from the {kind}"
            assert toy.commands() == [], f"{keys} on the {kind}"
        for key in ("Delete", "Backspace", "Escape", "Home", "End", "Space", "Escape"):
            toy.press(label, key)
        assert toy.commands() == [], kind
    assert toy.state() == before
    # beside the controls the desk holds the keyboard as well
    toy.page.locator(".pf-heading").first.click()
    for key in "xdd00":
        toy.page.keyboard.press(key)
    toy.page.locator(".pf-picture").click()
    for key in "xdd00":
        toy.page.keyboard.press(key)
    assert toy.commands() == []
    assert len(toy.cells()) == 3


def test_outside_a_desk_the_keys_act_so_the_guard_is_what_stops_them(open_notebook: Opener, tmp_path: Path) -> None:
    bare = 'from pipeflex.desks.entry import Button, Panel\ndisplay(Panel(Button("bare", print)))'
    lab = open_notebook(write_notebook(tmp_path / "bare.ipynb", bare, "'end'"))
    lab.commands()
    lab.press("css:.pf-button", "x")
    lab.page.wait_for_timeout(300)
    assert "notebook:cut-cell" in lab.commands()
    assert len(lab.cells()) == 1


def test_saving_stays_jupyterlabs(toy: Lab) -> None:
    toy.commands()
    for label in ("Leg", "css:.pf-button"):
        toy.press(label, "Control+s")
        toy.saved()
        assert "docmanager:save" in toy.commands()
        toy.click("metric")
    assert "Toy desk" in toy.saved().read_text()


def test_entries_commit_step_and_restore(toy: Lab) -> None:
    leg = toy.find("Leg")
    assert toy.page.locator(".pf-demo").count() == 2
    toy.type("Leg", "4.5 m")
    log(toy, "leg 4.5")
    toy.expect(".pf-tail", "= 4500 mm")
    toy.expect("[role=status]", "Too stiff")
    assert toy.page.locator(".pf-demo").count() == 1, "touched, so a demo value no more"

    toy.press("Leg", "ArrowUp")
    log(toy, "leg 4.55")
    toy.press("Leg", "Shift+ArrowDown")
    log(toy, "leg 4.05")
    for _ in range(20):  # faster than the kernel: the steps add up, none is lost
        toy.page.keyboard.press("ArrowUp")
    log(toy, "leg 5.05")
    assert leg.input_value() == "5.05"

    toy.type("Leg", "2,5")
    toy.expect("[role=alert]", "'2,5' is not a length")
    assert leg.get_attribute("aria-invalid") == "true"
    toy.expect(".pf-stale-mark", "shows the last good entry")
    assert toy.page.locator(".pf-stale-mark").is_visible()
    assert leg.evaluate("e => document.activeElement === e"), "the reply left the keyboard where it was"
    toy.page.keyboard.press("Escape")
    log(toy, "leg 5.05")
    assert leg.input_value() == "5.05"
    toy.page.wait_for_function("() => !document.querySelector('[aria-invalid]')")
    assert not toy.page.locator(".pf-stale-mark").is_visible()

    toy.page.keyboard.type("9")  # typed, not committed: Esc forgets it without a word to the kernel
    toy.page.keyboard.press("Escape")
    assert leg.input_value() == "5.05"
    toy.type("Leg", "5.2", end="Tab")  # leaving commits
    log(toy, "leg 5.2")
    toy.type("Leg", "5.3", end="")
    toy.page.keyboard.press("ArrowUp")  # a step from what was typed
    log(toy, "leg 5.35")
    toy.click("undo")
    log(toy, "undone")
    assert leg.input_value() == "5.10"
    toy.page.locator(".pf-arrows:not([hidden]) button").first.click()
    log(toy, "leg 5.4")
    toy.pick("Size", "DN 150")
    log(toy, "size 150")


def test_everything_is_reached_in_reading_order(toy: Lab) -> None:
    toy.find("css:.pf-button").focus()
    names = toy.focus_path(18)
    assert names == [
        "U.S.", "undo", "redo", "Line", "Size", "Schedule", "Material", "Hottest", "Coldest", "Installed",
        "Between anchors", "Leg", "Fit", "Width", "First guide", "Room", "Wall: water test, 100 mm, c 1.5",
        "Supports: rest 7 m, mu 0.30",
    ]  # fmt: skip
    assert toy.focus_path(4) == ["Write the sheet", "line.toml", "Ladder: rule to beam", "Friction: mu 0.30"]


def test_buttons_folds_and_bands_by_keyboard(toy: Lab) -> None:
    metric = toy.page.get_by_role("button", name="metric", exact=True)
    assert metric.get_attribute("aria-pressed") == "true"
    metric.focus()
    toy.page.keyboard.press("Enter")
    log(toy, "1: metric")
    toy.page.keyboard.press("Space")
    log(toy, "2: metric")
    toy.press("css:.pf-button[aria-disabled]", "Enter", "Space")
    toy.press("css:.pf-fold > summary", "Enter")
    toy.type("Insulation", "80")
    log(toy, "3: insulation 80")
    toy.press("css:.pf-band", "Enter")
    toy.expect(".widget-html-content", "7.9 m")
    log(toy, "filled")
    toy.page.keyboard.press("Tab")
    toy.page.keyboard.press("Space")
    toy.find("css:.noUi-handle").wait_for()
    assert toy.page.locator(".pf-band[aria-expanded=true]").count() == 2, "several open at once"
    toy.press("css:.noUi-handle", "ArrowRight")  # a control that is not ours keeps its keys
    log(toy, "friction 0.4")
    toy.press("css:.pf-band", "Space")
    toy.page.wait_for_function("() => !document.querySelector('.widget-html-content').offsetParent")


def test_text_is_data(toy: Lab) -> None:
    assert toy.find("Line").input_value() == "<b>ST</b>-1204"
    toy.type("Line", "<img src=x onerror=alert(1)>")
    log(toy, "line <img src=x onerror=alert(1)>")
    toy.type("Leg", "<i>5</i>")
    toy.expect("[role=alert]", "'<i>5</i>' is not a length")
    assert toy.page.locator(".pf-panel img, .pf-panel i").count() == 0
    assert "<i>A106-C</i>" in toy.find("Material").locator("option").all_inner_texts()


def test_a_fault_in_a_callback_is_shown_and_logged(toy: Lab) -> None:
    toy.allowed = "a fault on purpose"
    toy.type("Leg", "700")
    toy.expect(".pf-trouble", "RuntimeError: a fault on purpose")
    assert any("stderr of a callback" in p for p in _unfiltered(toy))
    toy.press("Leg", "ArrowUp")  # the next event is served, and takes the message away
    log(toy, "leg 5.15")
    toy.page.wait_for_function("() => !document.querySelector('.pf-trouble').textContent")


def _unfiltered(lab: Lab) -> list[str]:
    allowed, lab.allowed = lab.allowed, ""
    try:
        return lab.problems()
    finally:
        lab.allowed = allowed


PLOT_JS = "() => document.querySelector('.pf-picture [role=img]')"


def test_picture_describes_itself_follows_theme_and_width_and_reports_clicks(
    open_notebook: Opener, tmp_path: Path
) -> None:
    lab = open_notebook(write_notebook(tmp_path / "picture.ipynb", *TOY_CELLS, CLICKS_CELL))
    picture = lab.page.locator(".pf-picture [role=img]")
    assert picture.get_attribute("aria-label") == "A loop with a leg of 5.10 m."
    assert lab.page.locator(".modebar, .modebar-btn").count() == 0, "no button that posts to a cloud"
    context = lab.page.evaluate(
        f"() => {{ const c = ({PLOT_JS})()._context; return [c.showSendToCloud, c.displaylogo]; }}"
    )
    assert context == [False, False]
    assert lab.page.evaluate("() => window.Plotly === undefined"), "no global is left behind"

    def line_colour() -> str:
        return str(lab.page.locator(".pf-picture .js-line").first.evaluate("e => getComputedStyle(e).stroke"))

    assert line_colour() == "rgb(43, 52, 64)"
    lab.page.evaluate("() => window.jupyterapp.commands.execute('apputils:change-theme', {theme: 'JupyterLab Dark'})")
    lab.page.wait_for_function(
        "() => getComputedStyle(document.querySelector('.pf-picture .js-line')).stroke === 'rgb(227, 231, 236)'"
    )

    lab.settle()
    box = picture.bounding_box()
    assert box is not None
    # the plot fills the picture: x from -1 to 3, y from -1 to 7
    lab.page.mouse.click(box["x"] + box["width"] * 0.25, box["y"] + box["height"] * (1 - 1 / 8))
    log(lab, "clicked 0.0 0.0 run A")
    lab.page.mouse.click(box["x"] + box["width"] * 0.75, box["y"] + box["height"] * 0.5)
    log(lab, "clicked 2.0 3.0 None None")

    lab.page.set_viewport_size({"width": 900, "height": 800})
    lab.page.wait_for_function(
        f"() => {{ const p = ({PLOT_JS})(), width = Math.floor(p.clientWidth);"
        " return width < 500 && p._fullLayout.width === width; }"
    )
    lab.type("Leg", "6")
    lab.expect(".pf-picture .annotation", "6.00 m")
    assert picture.get_attribute("aria-label") == "A loop with a leg of 6.00 m."


def test_the_first_screen_fits_beside_an_open_file_list(open_notebook: Opener, tmp_path: Path) -> None:
    lab = open_notebook(write_notebook(tmp_path / "toy.ipynb", *TOY_CELLS), viewport=(1024, 800))
    size = lab.page.locator(".pipeflex-desk").bounding_box()
    assert size is not None
    assert size["width"] <= 850
    assert size["height"] <= 560
    rows = lab.page.eval_on_selector_all(
        ".pf-field", "all => all.filter(e => e.checkVisibility()).map(e => e.getBoundingClientRect().height)"
    )
    assert len(rows) == 12
    assert max(rows) <= 26
    over = lab.page.evaluate(
        "() => [...document.querySelectorAll('.pf-panel *')].filter(e => e.scrollWidth > e.clientWidth + 1 && "
        "!e.matches('.pf-unseen, input') && getComputedStyle(e).display !== 'inline').map(e => e.className)"
    )
    assert over == [], "nothing is cut off"


def test_a_rerun_leaves_little_behind(toy: Lab) -> None:
    leak = toy.leak_mb()
    print(f"heap left by a run of the toy desk anew: {leak:.2f} MB")
    assert leak < 0.5
    assert toy.page.locator(".js-plotly-plot").count() == 1


def test_a_desk_comes_back_after_a_kernel_restart(toy: Lab) -> None:
    toy.run_all(restart=True)
    toy.type("Leg", "5.5")
    log(toy, "leg 5.5")
    toy.expect(".pf-picture .annotation", "5.50 m")


IMAGES_JS = """() => [...document.querySelectorAll('.jp-OutputArea details img')]
  .map(i => [i.alt, i.complete && i.naturalWidth, atob(i.src.split(',')[1]).match(/<title>(.*)<.title>/)[1]])"""


def test_static_copy_follows_and_outlives_the_kernel(toy: Lab, open_notebook: Opener, tmp_path: Path) -> None:
    assert toy.page.evaluate(IMAGES_JS) == [["A loop with a leg of 5.10 m.", 60, "5.1"]]
    toy.type("Leg", "6.25")
    toy.page.wait_for_function(f"() => ({IMAGES_JS})()[0][2] === '6.25'")
    notebook = json.loads(toy.save().read_text())
    notebook["cells"][0]["source"] = ["2 + 2"]  # another hand: the signature no longer fits, so not trusted
    other = tmp_path / "from-a-colleague.ipynb"
    other.write_text(json.dumps(notebook))
    reader = open_notebook(other, run=False)
    reader.allowed = "Error displaying widget|widget|model"
    reader.page.wait_for_function(f"() => ({IMAGES_JS})().length === 1")
    assert not reader.page.evaluate("() => window.jupyterapp.shell.currentWidget.content.widgets[1].model.trusted")
    assert reader.page.evaluate(IMAGES_JS) == [["A loop with a leg of 6.25 m.", 60, "6.25"]]


def test_time_to_paint_of_the_bare_stack(open_notebook: Opener, tmp_path: Path) -> None:
    lab = open_notebook(write_notebook(tmp_path / "bare.ipynb", *BASELINE_CELLS))
    bare = baseline_ms(lab)
    assert lab.page.locator(".pf-picture .js-line").count() == 1
    assert bare < 1000, "a median of a second would be a fault, whatever the machine"

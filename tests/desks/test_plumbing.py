"""The parts of a desk without a browser: what they hand on, what they send, what they leave behind."""

from __future__ import annotations

import logging
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import ipywidgets
import nbformat
import pytest
from IPython.core.interactiveshell import InteractiveShell
from IPython.utils.capture import capture_output
from nbconvert import HTMLExporter

from pipeflex.desks import entry, view
from pipeflex.desks.entry import Band, Button, ChoiceField, EntryField, Fold, Headline, Panel, Row
from pipeflex.desks.keys import DESK_CLASS, DeskBox, close_tree
from pipeflex.desks.shield import shielded
from pipeflex.desks.static import StaticCopy, folded_image
from pipeflex.desks.view import COLOURS, PictureView

ASSETS = Path(view.__file__).parent / "assets"


def read(text: str) -> tuple[bool, str, str]:
    """A toy reader: whole numbers are good."""
    return (True, f"= {text} whole", "") if text.isdigit() else (False, "", f"{text!r} is no whole number")


def strike(panel: Panel, part: entry.Part, event: str, **content: Any) -> None:
    """What the page sends when the user acts on a part."""
    panel._handle_custom_msg({"part": part.key, "event": event, **content}, [])


def test_a_good_text_is_kept_and_a_bad_one_is_shown_but_not_kept() -> None:
    field = EntryField("Count", "5", read, demo=True)
    panel = Panel(field)
    strike(panel, field, "commit", text="7")
    assert (field.text, field.good, field.echo, field.error, field.demo) == ("7", "7", "= 7 whole", "", False)
    strike(panel, field, "commit", text="2,5")
    assert (field.text, field.good, field.echo) == ("2,5", "7", "")
    assert field.error == "'2,5' is no whole number"
    strike(panel, field, "restore")
    assert (field.text, field.good, field.error) == ("7", "7", "")


def test_put_shows_without_committing() -> None:
    def never(text: str) -> tuple[bool, str, str]:
        raise AssertionError("committed")

    field = EntryField("Count", "5", never)
    Panel(field)
    field.error = "something"
    field.put("6", "= six")
    assert (field.text, field.good, field.echo, field.error) == ("6", "6", "= six", "")


def test_steps_are_computed_by_the_desk_and_committed() -> None:
    asked: list[int] = []

    def step(n: int) -> str | None:
        asked.append(n)
        return str(int(field.good) + n) if int(field.good) + n >= 0 else None

    field = EntryField("Count", "5", read, on_step=step)
    panel = Panel(field)
    assert field.steps
    strike(panel, field, "step", steps=10)
    assert (field.text, field.echo) == ("15", "= 15 whole")
    strike(panel, field, "step", steps=-20)
    assert field.text == "15", "no further step"
    assert asked == [10, -20]


def test_focus_choice_button_and_folds_report() -> None:
    told: list[object] = []
    field = EntryField("Count", "5", read, on_focus=told.append)
    choice = ChoiceField("Size", "200", lambda v: (told.append(v), (True, "", ""))[1], options=[("150", "DN 150")])
    button = Button("Write", lambda: told.append("click"), disabled=True)
    fold = Fold("Wall", field, summary="100 mm")
    panel = Panel(Row(choice, button), fold)
    strike(panel, field, "focus", focused=True)
    strike(panel, choice, "commit", text="150")
    strike(panel, button, "click")
    button.disabled = False
    strike(panel, button, "click")
    strike(panel, fold, "toggle", open=True)
    assert told == [True, "150", "click"]
    assert field.focused
    assert choice.good == "150"
    assert fold.open
    strike(panel, EntryField("Gone", "", read), "commit", text="1")  # a late event of a part taken away


def test_a_band_shows_its_content_and_fills_it_when_opened() -> None:
    filled: list[bool] = []
    content = ipywidgets.HTML()
    band = Band("Ladder", content, fill=lambda: filled.append(True))
    panel = Panel(band)
    assert content.layout.display == "none"
    assert not filled
    strike(panel, band, "toggle", open=True)
    assert content.layout.display is None
    strike(panel, band, "toggle", open=False)
    assert content.layout.display == "none"
    assert filled == [True]


def test_one_event_is_one_message(monkeypatch: pytest.MonkeyPatch) -> None:
    other = EntryField("Other", "1", read)

    def commit(text: str) -> tuple[bool, str, str]:
        other.put(text)
        other.unit = "m"
        return read(text)

    field = EntryField("Count", "5", commit)
    headline = Headline(verdict="Cannot say")
    panel = Panel(Fold("All", field, other), headline)
    sent: list[object] = []
    panel.observe(sent.append, "tree")
    strike(panel, field, "commit", text="9")
    assert len(sent) == 1
    headline.set(verdict="Too stiff", detail="104 %.", lines=["a", "b"])
    assert len(sent) == 2
    fold, head = panel.tree
    assert [part["text"] for part in fold["parts"]] == ["9", "9"]
    assert (head["kind"], head["verdict"], head["lines"]) == ("headline", "Too stiff", ["a", "b"])


def test_a_fault_is_logged_and_shown(caplog: pytest.LogCaptureFixture) -> None:
    def fail(text: str) -> tuple[bool, str, str]:
        raise ZeroDivisionError("by nought")

    field, button = EntryField("Count", "5", fail), Button("ok", lambda: None)
    panel = Panel(field, button)
    with caplog.at_level(logging.ERROR):
        strike(panel, field, "commit", text="7")
    assert "ZeroDivisionError: by nought" in panel.trouble
    assert caplog.records[0].exc_info
    strike(panel, field, "focus", focused=False)
    assert panel.trouble, "leaving the field does not take the message away"
    strike(panel, button, "click")
    assert not panel.trouble

    told: list[Exception] = []
    strike(Panel(field, problem=told.append), field, "commit", text="7")
    assert [type(error) for error in told] == [ZeroDivisionError]
    assert shielded(fail, told.append)("x") is None
    assert shielded(read, told.append)("1") == read("1")


def test_closing_a_desk_leaves_no_model() -> None:
    registry: Callable[[], int] = lambda: len(ipywidgets.widgets.widget._instances)  # noqa: E731
    before = registry()
    content = ipywidgets.HTML()
    panel = Panel(Button("ok", lambda: None), Band("Ladder", content))
    desk = DeskBox([panel, ipywidgets.HBox([PictureView(), content])], "a desk")
    assert DESK_CLASS in desk._dom_classes
    assert registry() > before
    desk.close_all()
    assert registry() == before
    close_tree(PictureView())
    assert registry() == before


def test_a_picture_loads_no_figure_classes() -> None:
    code = (
        "import sys, pipeflex.desks.view as v; v.PictureView(); "
        "print([m for m in sys.modules if m.split('.')[0] == 'plotly'])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_a_picture_sends_plotly_when_asked_and_tells_a_fault(monkeypatch: pytest.MonkeyPatch) -> None:
    picture = PictureView()
    sent: list[tuple[Any, Any]] = []
    monkeypatch.setattr(picture, "send", lambda content, buffers=None: sent.append((content, buffers)))
    picture._handle_custom_msg({"wants": "plotly"}, [])
    [(content, [code])] = sent
    assert content == {"plotly": picture._plotly}
    assert b"plotly.js v" in code[:200]
    monkeypatch.setattr(view, "find_spec", lambda name: None)
    view._plotly_js.cache_clear()
    picture._handle_custom_msg({"wants": "plotly"}, [])
    assert "plotly is not installed" in sent[-1][0]["fault"]


def test_panel_and_picture_have_one_palette() -> None:
    css = (ASSETS / "panel.css").read_text()
    for role, (light, dark) in COLOURS.items():
        assert f"--pf-{role}: {light}" in css
        assert light == dark or f"--pf-{role}: {dark}" in css


def test_the_page_makes_no_html_of_text() -> None:
    scripts = sorted(ASSETS.glob("*.js"))
    assert [s.name for s in scripts] == ["keys.js", "panel.js", "view.js"]
    for script in scripts:
        for maker in ("innerHTML", "outerHTML", "insertAdjacentHTML", "document.write", "eval("):
            assert maker not in script.read_text()


SVG = '<svg xmlns="http://www.w3.org/2000/svg" width="9" height="9"><title>\u00d8 200</title></svg>'


def test_static_copy_is_shown_once_and_then_replaced() -> None:
    InteractiveShell.instance()
    copy = StaticCopy("Copy")
    with capture_output() as captured:
        copy.show(SVG, "a < b")
        copy.show(SVG.replace("9", "8"), "c")
    first, second = captured.outputs
    assert first.data["text/plain"] == "a < b"
    assert 'alt="a &lt; b"' in first.data["text/html"]
    assert (first.update, second.update) == (False, True)
    assert first.transient == second.transient
    assert first.data["text/html"] != second.data["text/html"]


def test_static_copy_survives_export_and_escapes() -> None:
    html = folded_image(SVG, '"><script>alert(1)</script>', "<b>Copy</b>")
    assert "<script" not in html
    assert "<b>" not in html
    output = nbformat.v4.new_output("display_data", {"text/html": html, "text/plain": "alt"})
    cell = nbformat.v4.new_code_cell("desk", outputs=[output])
    page, _ = HTMLExporter().from_notebook_node(nbformat.v4.new_notebook(cells=[cell]))
    assert "<details><summary>&lt;b&gt;Copy&lt;/b&gt;</summary><img alt=" in page

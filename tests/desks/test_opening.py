"""`pipeflex open`: what is copied, what is left alone, how JupyterLab is started."""

from __future__ import annotations

import json
from pathlib import Path

import nbformat
import pytest

from pipeflex import cli
from pipeflex.desks import opening
from pipeflex.errors import InputError

SOURCE = cli._shipped()
NAME = "01_size_a_loop"


def test_a_name_or_its_beginning() -> None:
    assert opening.chosen("", SOURCE) == NAME
    assert opening.chosen("01", SOURCE) == NAME
    assert opening.chosen(f"{NAME}.ipynb", SOURCE) == NAME
    with pytest.raises(InputError, match=NAME):
        opening.chosen("99", SOURCE)


def test_copies_and_never_writes_over(tmp_path: Path) -> None:
    first = opening.copy_into(NAME, SOURCE, tmp_path / "work")
    assert [(c.path.name, c.new) for c in first] == [(f"{NAME}.ipynb", True), ("line-1204.toml", True)]
    mine = tmp_path / "work" / "line-1204.toml"
    mine.write_text("mine")
    again = opening.copy_into(NAME, SOURCE, tmp_path / "work")
    assert [c.new for c in again] == [False, False]
    assert mine.read_text() == "mine"
    with pytest.raises(InputError, match="folder"):
        opening.copy_into(NAME, SOURCE, mine / "below")


def test_the_command_line(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> None:
    started: list[tuple[list[str], str]] = []

    def run(lab: opening.Lab, browser: bool) -> int:
        started.append((lab.command(browser), lab.address))
        return 0

    monkeypatch.setattr(opening.Lab, "run", run)
    assert cli.main(["open", "--folder", str(tmp_path), "--no-browser"]) == 0
    [(command, address)] = started
    assert f"--ServerApp.root_dir={tmp_path}" in command
    assert f"--LabApp.default_url=/doc/tree/{NAME}.ipynb" in command
    assert "--ServerApp.open_browser=False" in command
    assert not any(address.partition("token=")[2] in part for part in command), "others can read a command line"
    out = capsys.readouterr().out
    assert f"Open in a browser: {address}" in out
    assert "copied" in out
    assert cli.main(["open", "nothing", "--folder", str(tmp_path)]) == 2
    monkeypatch.setattr(opening, "find_spec", lambda name: None)
    assert cli.main(["open", "--folder", str(tmp_path)]) == 2
    assert "pip install 'pipeflex[lab]'" in capsys.readouterr().err


def test_without_a_screen_no_browser_is_asked_for(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("sys.platform", "linux")
    monkeypatch.delenv("DISPLAY", raising=False)
    monkeypatch.delenv("WAYLAND_DISPLAY", raising=False)
    assert not opening.has_screen()
    monkeypatch.setenv("DISPLAY", ":0")
    assert opening.has_screen()


def test_the_shipped_notebook_carries_no_widget_state_and_no_place_of_a_machine() -> None:
    text = (SOURCE / f"{NAME}.ipynb").read_text("utf-8")
    notebook = nbformat.reads(text, as_version=4)
    nbformat.validate(notebook)
    assert "widgets" not in notebook.metadata
    assert "application/vnd.jupyter.widget" not in text
    for place in ("/home/", "/work/", "/tmp/", "/root/", "Users\\"):
        assert place not in text
    [cell] = [c for c in notebook.cells if c.cell_type == "code"]
    assert cell.metadata.jupyter.source_hidden
    [output] = cell.outputs
    assert output.data["text/html"].startswith("<details>")
    assert json.loads(text)["metadata"]["pipeflex"] == {"designs": ["line-1204.toml"]}

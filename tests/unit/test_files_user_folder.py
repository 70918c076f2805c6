"""The user's folder proposes what was confirmed before, and changes nothing by itself."""

import sys
from pathlib import Path

import pytest

from pipeflex.data.materials import material
from pipeflex.errors import InputError, PipeflexError
from pipeflex.files.user_folder import FILE, folder, proposed, remember
from pipeflex.model.duty import Confirmed


def said(temperature="100 degC", value="198 GPa", by="AB"):
    return Confirmed(table="modulus/asme_tm1_metric", row="carbon", temperature=temperature, kind="modulus",
                     value=value, by=by, date="2025-02-03")  # fmt: skip


def test_an_empty_folder_proposes_nothing():
    assert proposed() == ()
    assert list(folder().iterdir()) == []


def test_what_is_remembered_is_proposed():
    remember(said(), said("200 degC", "27.8 Msi"))
    assert proposed() == (said(), said("200 degC", "27.8 Msi"))


def test_a_value_said_again_replaces_the_earlier_one():
    remember(said(), said("200 degC"))
    remember(said(value="197 GPa", by="CD"))
    assert proposed() == (said(value="197 GPa", by="CD"), said("200 degC"))


def test_remembering_applies_nothing():
    before = material("A106-B")
    remember(said(value="150 GPa"))
    assert material("A106-B") == before


def test_a_folder_that_is_not_there_is_made(tmp_path, monkeypatch):
    monkeypatch.setenv("PIPEFLEX_HOME", str(tmp_path / "deep" / "down"))
    assert proposed() == ()
    remember(said())
    assert proposed() == (said(),)


@pytest.mark.parametrize(
    ("text", "path"),
    [
        ("confirmed = 5", "confirmed"),
        ("[[confirmed]]\nvalue = 3", "confirmed.0.table"),
        ("confirm = []", "confirm"),
        ("[[confirmed", "line 1"),
    ],
)
def test_a_broken_file_is_told_and_kept(text, path):
    file = folder() / FILE
    file.write_text(text)
    with pytest.raises(PipeflexError) as told:
        remember(said())
    assert any(fault.field.startswith(f"{file}.{path}") for fault in told.value.faults)
    assert file.read_text() == text


def test_a_folder_that_cannot_be_written_in(tmp_path, monkeypatch):
    (tmp_path / "file").write_text("")
    monkeypatch.setenv("PIPEFLEX_HOME", str(tmp_path / "file"))
    with pytest.raises(InputError, match="confirmed"):
        remember(said())


@pytest.mark.parametrize(
    ("platform", "setting", "expected"),
    [
        ("linux", {"XDG_CONFIG_HOME": "/set"}, "/set/pipeflex"),
        ("linux", {}, "{home}/.config/pipeflex"),
        ("darwin", {}, "{home}/Library/Application Support/pipeflex"),
        ("win32", {"APPDATA": "/roam"}, "/roam/pipeflex"),
        ("win32", {}, "{home}/AppData/Roaming/pipeflex"),
    ],
)
def test_the_folder_of_each_platform(monkeypatch, platform, setting, expected):
    for name in ("PIPEFLEX_HOME", "XDG_CONFIG_HOME", "APPDATA"):
        monkeypatch.delenv(name, raising=False)
    for name, value in setting.items():
        monkeypatch.setenv(name, value)
    monkeypatch.setattr(sys, "platform", platform)
    assert folder() == Path(expected.format(home=Path.home()))

"""The command line: exit status, one clear message and never a traceback, whatever it is given."""

import json
import os
import signal
import subprocess
import sys
from pathlib import Path

import pytest

import pipeflex
from pipeflex import cli
from pipeflex.files.design_file import load, read_design, save, write_design
from pipeflex.model.record import at

ROOT = Path(pipeflex.__file__).parents[1]
SHIPPED = ROOT / "notebooks" / cli.DEMO


def environment(**changed):
    return {**os.environ, "PYTHONPATH": str(ROOT), "PYTHONWARNINGS": "error", **changed}


def run(*arguments, cwd=None, **changed):
    command = [sys.executable, "-m", "pipeflex.cli", *map(str, arguments)]
    return subprocess.run(command, capture_output=True, cwd=cwd, env=environment(**changed), timeout=120)


def refused(done, *words, status=2):
    told = done.stderr.decode()
    assert done.returncode == status, told
    assert "Traceback" not in told
    assert told.startswith("pipeflex: ")
    assert all(word in told for word in words), told
    assert done.stdout == b""


@pytest.fixture
def design(line, tmp_path):
    path = tmp_path / "line.toml"
    save(line(), path)
    return path


# ---------------------------------------------------------------------------------------- the demo design


def test_the_shipped_design_reads_and_is_written_the_same():
    text = SHIPPED.read_text(encoding="utf-8")
    written = write_design(read_design(text)).splitlines()
    assert [row for row in written if not row.startswith("fingerprint")] == text.splitlines()


def test_every_demo_value_is_in_the_shipped_design():
    design = load(SHIPPED)
    assert "layout.sizes.leg" in design.demo
    for path in design.demo:
        at(design, path)


# ----------------------------------------------------------------------------------------------- computed


def test_solve_as_json(design):
    done = run("solve", design, "--json")
    assert done.returncode == 0
    assert done.stderr == b""
    said = json.loads(done.stdout)
    assert said["fingerprint"] == load(design).fingerprint
    assert said["ladder"]


def test_solve_by_a_method(design):
    said = json.loads(run("solve", design, "--json", "--method", "guided_cantilever").stdout)
    assert said["method"]["key"] == "guided_cantilever"


@pytest.mark.parametrize("units", ["metric", "us"])
def test_solve_prints_the_sheet(design, units):
    done = run("solve", design, "--units", units, PYTHONIOENCODING="utf-8")
    assert done.returncode == 0, done.stderr
    told = done.stdout.decode()
    assert load(design).fingerprint in told
    assert "S_A" in told
    assert ("ksi" in told) == (units == "us")
    assert "\x1b" not in told


@pytest.mark.parametrize("command", [("solve", SHIPPED), ("materials",), ("sizes", "DN 200")])
def test_a_terminal_that_knows_ascii_alone(command):
    done = run(*command, PYTHONIOENCODING="ascii")
    assert done.returncode == 0, done.stderr
    full = run(*command, PYTHONIOENCODING="utf-8").stdout.decode()
    assert not full.isascii()
    assert done.stdout.decode("ascii").count("?") == full.count("?")


def test_letters_that_a_terminal_lacks_are_written_plainly():
    cli._encode_plainly()
    text = "−10 °C, µm, m³, 10⁻⁶, √x ≤ 2½, δ, Σ, é, 漢"
    assert text.encode("ascii", "pipeflex").decode() == "-10 degC, um, m^3, 10^-6, sqrtx <= 2 1/2, delta, Sigma, e, ?"
    western = text.encode("cp1252", "pipeflex").decode("cp1252")
    assert western == "-10 °C, µm, m³, 10^-6, sqrtx <= 2½, delta, Sigma, é, ?"


def test_sheet_writes_a_page_and_never_over_another(design, tmp_path):
    page = tmp_path / "sheet.html"
    done = run("sheet", design, "-o", page, "--paper", "Letter", "--units", "us")
    assert done.returncode == 0, done.stderr
    assert str(page) in done.stdout.decode()
    first = page.read_text(encoding="utf-8")
    assert load(design).fingerprint in first
    refused(run("sheet", design, "-o", page), "sheet.html")
    assert page.read_text(encoding="utf-8") == first
    assert run("sheet", design, "-o", page, "--overwrite").returncode == 0
    assert page.read_text(encoding="utf-8") != first


def test_a_sheet_is_never_written_over_its_design(design):
    before = design.read_bytes()
    refused(run("sheet", design, "-o", design, "--overwrite"), "line.toml", "another place")
    assert design.read_bytes() == before


def test_a_sheet_gives_its_design_back(design, tmp_path):
    from pipeflex.sheet import read_design as text_in

    page = tmp_path / "sheet.html"
    assert run("sheet", design, "-o", page).returncode == 0
    assert read_design(text_in(page.read_text(encoding="utf-8"))) == load(design)


def test_demo_makes_two_files_and_says_where_to_go_next(tmp_path):
    done = run("demo", tmp_path / "new" / "folder", PYTHONIOENCODING="utf-8")
    assert done.returncode == 0, done.stderr
    folder = tmp_path / "new" / "folder"
    assert sorted(path.name for path in folder.iterdir()) == ["line-1204.html", "line-1204.toml"]
    assert load(folder / cli.DEMO) == load(SHIPPED)
    told = done.stdout.decode()
    assert "pipeflex sheet" in told
    assert "S_A" in told


@pytest.mark.parametrize("name", ["line-1204.toml", "line-1204.html"])
def test_demo_never_overwrites_silently(tmp_path, name):
    (tmp_path / name).write_text("mine")
    refused(run("demo", tmp_path), name, "--overwrite")
    assert [path.name for path in tmp_path.iterdir()] == [name]
    assert (tmp_path / name).read_text() == "mine"
    assert run("demo", tmp_path, "--overwrite").returncode == 0
    assert (tmp_path / name).read_text(encoding="utf-8") != "mine"


def test_materials_of_a_code():
    told = run("materials", "--units", "us", PYTHONIOENCODING="utf-8").stdout.decode()
    assert "A106-B" in told
    assert "°F" in told


def test_sizes_and_the_walls_of_one():
    assert "DN" in run("sizes").stdout.decode()
    told = run("sizes", "NPS", "8", "--units", "us").stdout.decode()
    row = next(row for row in told.splitlines() if row.startswith("STD"))
    assert "8.625" in row  # ASME B36.10M, NPS 8 STD: 8.625 in by 0.322 in
    assert "0.322" in row


def test_a_changed_design_is_noted_and_answered(design):
    text = design.read_text(encoding="utf-8")
    design.write_text(text.replace('leg = "6 m"', 'leg = "7 m"'), encoding="utf-8")
    done = run("solve", design, "--json")
    assert done.returncode == 0
    assert b"fingerprint" in done.stderr
    assert json.loads(done.stdout)["fingerprint"] == load(design).fingerprint


def test_version_and_help():
    assert run("--version").stdout.decode().split() == ["pipeflex", pipeflex.__version__]
    assert run("--help").returncode == 0


# ---------------------------------------------------------------------------------------------- bad input


def test_several_faults_are_listed_once(design):
    text = design.read_text(encoding="utf-8").replace('"240 degC"', "240").replace("guide_gap", "guidegap")
    design.write_text(text, encoding="utf-8")
    for command in (("solve", design), ("sheet", design, "-o", design.with_suffix(".html"))):
        refused(run(*command), "duty.cases.operating.temperature", "240 degC", "layout.guidegap", "guide_gap")
    assert not design.with_suffix(".html").exists()


def test_a_flood_of_faults_is_cut(design):
    text = design.read_text(encoding="utf-8")
    design.write_text(text.replace("[limits]", "[[layout.supports]]\n" * 500 + "[limits]"), encoding="utf-8")
    done = run("solve", design)
    refused(done, "1500 faults", "more")
    assert len(done.stderr.splitlines()) < 25


@pytest.mark.parametrize(
    ("command", "words"),
    [
        (("solve", "none.toml"), ("none.toml", "No such file")),
        (("solve", "."), ("directory",)),
        (("solve", "binary.toml"), ("binary.toml", "UTF-8")),
        (("solve", "syntax.toml"), ("line 2", "TOML")),
        (("solve", SHIPPED, "--method", "magic"), ("method", "guided_cantilever")),
        (("sheet", SHIPPED, "-o", "none/out.html"), ("none", "No such file")),
        (("sheet", SHIPPED, "-o", "."), (".",)),
        (("demo", "binary.toml"), ("binary.toml",)),
        (("sizes", "DN", "201"), ("pipe.size", "DN 200")),
        (("materials", "--code", "B31.3-1066"), ("code.key", "B31.3-2018")),
    ],
)
def test_bad_input_is_told_in_a_line(tmp_path, command, words):
    (tmp_path / "binary.toml").write_bytes(b"\xff\xfe\x00\x01")
    (tmp_path / "syntax.toml").write_text("pipeflex = 1\nleg = = 2\n")
    done = run(*command, cwd=tmp_path)
    refused(done, *words)
    assert len(done.stderr.splitlines()) == 1


@pytest.mark.skipif(not hasattr(os, "geteuid") or os.geteuid() == 0, reason="root may read everything")
def test_a_file_without_permission(design):
    design.chmod(0)
    refused(run("solve", design), "ermission")


@pytest.mark.parametrize("arguments", [(), ("magic",), ("solve",), ("solve", "a.toml", "--units", "imperial")])
def test_wrong_arguments_show_the_usage(arguments):
    done = run(*arguments)
    assert done.returncode == 2
    assert b"usage: pipeflex" in done.stderr
    assert b"Traceback" not in done.stderr


# --------------------------------------------------------------------------------- what a user may also do


def test_a_reader_that_closes_the_pipe(design):
    command = [sys.executable, "-m", "pipeflex.cli", "solve", str(design), "--json"]
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, env=environment()) as started:
        started.stdout.close()
        told = started.stderr.read()
    assert told == b""
    assert started.returncode == cli.PIPE_CLOSED


@pytest.mark.skipif(not os.path.exists("/dev/full"), reason="needs a device that is always full")
def test_a_full_disk(design):
    command = [sys.executable, "-m", "pipeflex.cli", "solve", str(design), "--json"]
    with open("/dev/full", "w") as full:
        done = subprocess.run(command, stdout=full, stderr=subprocess.PIPE, env=environment(), timeout=120)
    assert done.returncode == 1
    assert done.stderr.decode().startswith("pipeflex: output: No space left")
    assert len(done.stderr.splitlines()) == 1


def test_an_interrupt_says_so_and_nothing_more(monkeypatch, capsys):
    def interrupted(_):
        signal.raise_signal(signal.SIGINT)

    monkeypatch.setattr(cli, "_sizes", interrupted)
    assert cli.main(["sizes"]) == cli.INTERRUPTED
    assert capsys.readouterr() == ("", "pipeflex: stopped\n")


def test_a_fault_of_the_program_is_called_one(monkeypatch, capsys):
    monkeypatch.setattr(cli, "_sizes", lambda _: 1 / 0)
    assert cli.main(["sizes"]) == 1
    told = capsys.readouterr().err
    assert "a fault of the program" in told
    assert len(told.splitlines()) == 1

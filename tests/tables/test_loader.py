"""The reader of tables: exact, frozen, and plain about what is wrong."""

import subprocess
import sys

import numpy as np
import pint
import pytest

from pipeflex.data import tables as module
from pipeflex.data.tables import UNITS, table, tables
from pipeflex.errors import InputError, PipeflexError, TableError

TOML = """
title = "Sizes of Brackwater works"
provenance = "read"
[source]
document = "works standard"
edition = ""
table = "3"
[columns.nps]
kind = "text"
meaning = "nominal pipe size"
[columns.wall]
kind = "pipe dimension"
unit = "mm"
meaning = "wall"
"""


@pytest.fixture
def home(tmp_path, monkeypatch):
    (tmp_path / "tables" / "pipe").mkdir(parents=True)
    monkeypatch.setenv("PIPEFLEX_HOME", str(tmp_path))

    def write(csv="nps,wall\n6,7.1\n8,\n", toml=TOML, id="pipe/works"):
        path = tmp_path / "tables" / id
        path.with_suffix(".csv").write_text(csv, "utf-8")
        path.with_suffix(".toml").write_text(toml, "utf-8")

    return write


def test_units_are_those_of_pint():
    ureg = pint.UnitRegistry(non_int_type=float)
    spelt = {
        "1": "",
        "in/100ft": "inch/(100*foot)",
        "kg/m3": "kg/m**3",
        "Msi": "Mpsi",
        "1e-6/K": "1e-6/K",
        "1e-6/degF": "1e-6/delta_degF",
    }
    for name, unit in UNITS.items():
        if unit.offset:
            expected = [ureg.Quantity(t, name).to("K").magnitude for t in (0, 100)]
        else:
            one = ureg.Quantity(1, "") if name == "1" else 1 * ureg.parse_expression(spelt.get(name, name))
            expected = [0, 100 * one.to_base_units().magnitude]
        assert [float(t * unit.factor + unit.offset) for t in (0, 100)] == pytest.approx(expected, rel=1e-12)


def test_cells_are_rounded_once():
    held = table("pipe/asme_b36_10m")
    row = held.find(nps="8", schedule="40")
    assert held.numbers("od_in")[row] == 0.219075
    assert held.numbers("wall_in")[row] == 0.0081788
    assert table("expansion/asme_te1_us").reference_temperature == 29426111111111 / 1e11 + 1 / 9e11


def test_a_table_is_read_once_and_cannot_be_changed():
    held = table("stress/asme_b31_3_2018")
    assert table("stress/asme_b31_3_2018") is held
    with pytest.raises(ValueError, match="read-only"):
        held.numbers("A106-B")[0] = 0
    with pytest.raises(TypeError):
        held.columns["A106-B"] = None
    assert hash(held) != hash(table("stress/asme_b31_3_2008"))


def test_nothing_is_read_at_import():
    code = """if True:
        import sys
        from pipeflex.data import tables
        assert tables._read.cache_info().currsize == 0
        assert not {"pint", "plotly", "ipywidgets"} & set(sys.modules)
    """
    subprocess.run([sys.executable, "-c", code], check=True)


def test_blank_cells_are_left_out_of_a_curve():
    held = table("stress/asme_b31_3_2018")
    t, stress = held.curve("TP304L")
    assert len(t) == len(stress) == 10
    assert np.isfinite(stress).all()
    assert np.isnan(held.numbers("TP304L")).sum() == len(held.rows) - 10


def test_columns_of_another_edition_say_so():
    held = table("stress/asme_b31_3_2018")
    assert "2008" in held.source_of("P11")
    assert "2012" in held.source_of("A106-B")
    assert table("expansion/asme_te1_us").provenance_of("group_3") == "memory"
    assert table("expansion/asme_te1_us").provenance_of("group_1") == "read"
    assert table("pipe/asme_b36_10m").provenance_of("schedule") == "library"
    assert table("pipe/asme_b36_10m").provenance_of("wall_in") == "memory"


@pytest.mark.parametrize(
    ("ask", "words"),
    [
        (lambda: table("stress/asme_b31_3_2019"), ("'stress/asme_b31_3_2019'", "stress/asme_b31_3_2018")),
        (lambda: table("../../etc/passwd"), ("'../../etc/passwd'",)),
        (lambda: table("pipe"), ("pipe/asme_b36_10m",)),
        (lambda: table("pipe/asme_b36_10m").find(nps="6", schedule="41"), ("schedule: '41'", "40")),
        (lambda: table("pipe/asme_b36_10m").find(nps="7"), ("nps: '7'",)),
        (lambda: table("pipe/asme_b36_10m").numbers("wall"), ("'wall'", "wall_in")),
        (lambda: table("pipe/asme_b36_10m").numbers("nps"), ("'nps'", "a column of numbers")),
        (lambda: table("pipe/asme_b36_10m").curve("wall_in"), ("index",)),
    ],
)
def test_what_is_not_there_names_what_is_near(ask, words):
    with pytest.raises(TableError) as caught:
        ask()
    assert all(word in str(caught.value) for word in words)


def test_the_shipped_copy_comes_first(tmp_path, monkeypatch):
    monkeypatch.setattr(module, "_PACKAGE", tmp_path)
    (tmp_path / "tables").mkdir()
    assert tables() == ()


def test_a_user_may_add_a_table(home):
    home()
    held = table("pipe/works")
    assert held.origin == "user table"
    assert held.source == "works standard, 3"
    assert held.numbers("wall")[0] == 0.0071
    assert np.isnan(held.numbers("wall")[1])
    assert "pipe/works" in tables()
    assert table("pipe/asme_b36_10m").origin == "pipeflex"


def test_a_table_of_the_user_does_not_take_the_place_of_another(home):
    home(id="pipe/asme_b36_10m")
    with pytest.raises(InputError, match="another name"):
        table("pipe/asme_b36_10m")


@pytest.mark.parametrize(
    ("broken", "words"),
    [
        ({"csv": "nps,wall\n6,seven\n"}, "line 2: wall: 'seven'; permitted: a number"),
        ({"csv": "nps,wall\n6,1e999999999\n"}, "a number"),
        ({"csv": "nps,wall\n6,nan\n"}, "a number"),
        ({"csv": "nps,wall\n6\n"}, "line 2: '6'; permitted: 2 cells"),
        ({"csv": "nps,wand\n6,7.1\n"}, "permitted: nps, wall"),
        ({"csv": ""}, "pipe/works"),
        ({"toml": "title ="}, "pipe/works"),
        ({"toml": TOML.replace('"mm"', '"furlong"')}, "pipe dimension in furlong"),
        ({"toml": TOML.replace('"mm"', '"MPa"')}, "nearest: mm, m, in, ft"),
        ({"toml": TOML.replace('kind = "text"', "kind = 3")}, "kind: 3"),
        (
            {"toml": TOML.replace('"read"', '"hearsay"')},
            "'hearsay'; permitted: read, library, derived, memory",
        ),
        ({"toml": TOML.replace("[source]", "[sauce]")}, "source: nothing; permitted: a section"),
        ({"toml": 'index = "wall"\n' + TOML}, "rising numbers"),
        ({"toml": 'index = "size"\n' + TOML}, "'size'; permitted: a column of the table"),
        ({"toml": 'reference_temperature = "20"\n' + TOML}, "20 degC"),
    ],
)
def test_a_broken_table_is_told_in_one_line(home, broken, words):
    home(**broken)
    with pytest.raises(PipeflexError) as caught:
        table("pipe/works")
    assert words in str(caught.value)
    assert "\n" not in str(caught.value)

"""Every fault of a design file is told under its path, with what is permitted, and all of them at once."""

import os

import pytest

from pipeflex.errors import InputError, MissingInput, PipeflexError, TableError, UnitError
from pipeflex.files.design_file import load, read_design, save, write_design
from pipeflex.files.text_file import LARGEST


@pytest.fixture(scope="module")
def good(line):
    return write_design(line())


def faults(text):
    with pytest.raises(PipeflexError) as told:
        read_design(text, "line.toml")
    return told.value


def changed(text, old, new):
    assert old in text
    return text.replace(old, new, 1)


AXIS = "axis = [\n    1,\n    0,\n    0,\n]"
SUPPORT = '[[layout.supports]]\nkind = "{}"\nleg = {}\ndistance = "{}"\n\n[limits]'
CONFIRMED = (
    '[[confirmed]]\ntable = "modulus/asme_tm1_metric"\nrow = "carbon"\ntemperature = "{}"\nkind = "{}"\n'
    'value = {}\nby = "AB"\ndate = "2025-02-03"\n\n[code]'
)

ONE_FAULT = {
    "bare number": ('"240 degC"', "240", "duty.cases.operating.temperature", '"240 degC"'),
    "bare length": ('run = "40 m"', "run = 40.5", "layout.sizes.run", '"40.5 ft"'),
    "another kind": ('"240 degC"', '"240 mm"', "duty.cases.operating.temperature", "a temperature in degC"),
    "a list": ('"240 degC"', '["240 degC"]', "duty.cases.operating.temperature", "a temperature in degC"),
    "a table for a number": ('"240 degC"', "{ hot = 1 }", "duty.cases.operating.temperature", "a temperature in"),
    "a date for a number": ('"240 degC"', "2025-03-14", "duty.cases.operating.temperature", "a temperature in"),
    "below absolute zero": ('"240 degC"', '"-300 degC"', "duty.cases.operating.temperature", "absolute zero"),
    "gauge or absolute": ('"240 degC"', '"33 bar sat"', "duty.cases.operating.temperature", "33 bar g sat"),
    "comma": ('leg = "6 m"', 'leg = "6,5 m"', "layout.sizes.leg", "6.5 m"),
    "unknown field": ("guide_gap", "guidegap", "layout.guidegap", "guide_gap"),
    "unknown table": ("[limits]", "[limit]", "limit", "limits"),
    "unknown code entry": ('key = "B31', 'edition = "x"\nkey = "B31', "code.edition", "key"),
    "size": ('"DN 200"', '"DN 210"', "pipe.size", "DN 200"),
    "schedule": ('schedule = "40"', 'schedule = "45"', "pipe.schedule", "STD"),
    "material": ('"A106-B"', '"A106-C9"', "pipe.material", "A106-B"),
    "materials of two kinds": ('"A106-B"', '["A106-B", 5]', "pipe.material", "a list of texts"),
    "expansion": ('expansion = "current"', 'expansion = "newest"', "pipe.expansion", "current, older"),
    "no material": ('material = "A106-B"\n', "", "pipe.material", "the key of a material"),
    "wall without diameter": ('material = "A1', 'wall = "9 mm"\nmaterial = "A1', "pipe.outside_diameter", "mm"),
    "code": ('"B31.3-2018"', '"B31.3-2017"', "code.key", "B31.3-2018"),
    "no code": ('key = "B31.3-2018"', "", "code.key", "B31.3-2018"),
    "code as text": ('[code]\nkey = "B31.3-2018"', "", "code.key", "B31.3-2018"),
    "elbow": ('"long radius"', '"long radus"', "layout.corner.radius", "short radius"),
    "radius": ('"long radius"', '"-5 mm"', "layout.corner.radius", "at least 0.00"),
    "corner twice": ("[layout.corner]", '[[layout.corners]]\nkind = "square"\n\n[layout.corner]', "layout.corner",
                     "one corner for all"),
    "nan": ("friction = 0.3", "friction = nan", "layout.friction", "NaN"),
    "inf": ("friction = 0.3", "friction = inf", "layout.friction", "0.000 .. 1.000"),
    "out of range": ("friction = 0.3", "friction = -0.3", "layout.friction", "0.000 .. 1.000"),
    "true": ("friction = 0.3", "friction = true", "layout.friction", "a ratio as a plain number"),
    "great whole number": ("friction = 0.3", "friction = 1" + "0" * 400, "layout.friction", "a ratio"),
    "two numbers of three": (AXIS, "axis = [1, 0]", "layout.ends.0.axis", "a list of 3 numbers"),
    "a text among numbers": (AXIS, 'axis = [1, "x", 0]', "layout.ends.0.axis.2", "a ratio"),
    "a word of few": ('pockets = "yes"', 'pockets = "maybe"', "layout.pockets", "yes, no, drained"),
    "a shape": ('shape = "U"', 'shape = "W"', "layout.shape", "raised U"),
    "a missing size": ('leg = "6 m"\n', "", "layout.sizes.leg", "a length"),
    "a size of another shape": ('leg = "6 m"', 'leg = "6 m"\nrise = "1 m"', "layout.sizes.rise", "leg"),
    "sizes as a text": ('[layout.sizes]\nrun = "40 m"\nleg = "6 m"\nwidth = "3 m"', "", "layout.sizes", "a table"),
    "higher day first": ('"5 .. 35 degC"', '"35 .. 5 degC"', "duty.installed", "the lower value first"),
    "bare days": ('"5 .. 35 degC"', "5", "duty.installed", '"5 .. 35 degC"'),
    "unlimited heat": ('"240 degC"', '"unlimited"', "duty.cases.operating.temperature", "a temperature in"),
    "point in a case": ("cases.operating", 'cases."a.b"', "duty.cases.a.b.name", "a name without a point"),
    "a case as text": ('[duty.cases.operating]\ntemperature = "240 degC"\ntop_to_bottom_form = "linear"',
                       'cases.operating = "240 degC"',
                       "duty.cases.operating", "a table"),
    "a case named twice": ('temperature = "240 degC"', 'temperature = "240 degC"\nname = "hot"',
                           "duty.cases.operating.name", "temperature"),
    "support kind": ("[limits]", SUPPORT.format("gude", 1, "1 m"), "layout.supports.0.kind", "guide, rest"),
    "support leg": ("[limits]", SUPPORT.format("guide", 9, "1 m"), "layout.supports.0.leg", "1 to 5"),
    "support leg and a half": ("[limits]", SUPPORT.format("guide", 1.5, "1 m"), "layout.supports.0.leg", "whole"),
    "support off its leg": ("[limits]", SUPPORT.format("guide", 2, "99 m"), "layout.supports.0.distance", "6.00"),
    "a flag as text": ("cycles = 7000", 'cycles = 7000\nunused_sustained = "yes"', "duty.unused_sustained", "true"),
    "cycles": ("cycles = 7000", "cycles = 0", "duty.cycles", "1"),
    "confirmed, bare": ("[code]", CONFIRMED.format("100 degC", "modulus", "198"), "confirmed.0.value", '"198 GPa"'),
    "confirmed, kind": ("[code]", CONFIRMED.format("100 degC", "weight", '"1 N"'), "confirmed.0.kind", "modulus"),
    "confirmed, no row": ("[code]", CONFIRMED.format("101 degC", "modulus", '"198 GPa"'), "pipe.material",
                          "confirmed.temperature"),
    "control character": ('contents = "water"', 'contents = "a\\u0007"', "pipe.contents", "printable"),
    "too long a text": ("[title]", '[title]\nline = "' + "x" * 5000 + '"', "title.line", "at most 200"),
    "a number for a text": ("[title]", "[title]\nline = 1.5", "title.line", "text"),
    "fingerprint": ('fingerprint = "', 'fingerprint = ["', "line.toml, line ", "unclosed array"),
    "later version": ("pipeflex = 1", "pipeflex = 2", "pipeflex", "later version"),
    "no version": ("pipeflex = 1\n", "", "pipeflex", "1"),
    "true for a version": ("pipeflex = 1", "pipeflex = true", "pipeflex", "1"),
    "demo": ("[title]", "demo = 5\n\n[title]", "demo", "a list of texts"),
    "syntax": ("[limits]", "[limits]\nroom = = 5", "line.toml, line ", "TOML"),
    "twice the same": ("friction = 0.3", "friction = 0.3\nfriction = 0.4", "line.toml, line ", "TOML"),
    "end too early": ("[limits]", '[limits]\nroom = """', "line.toml, line ", "TOML"),
}  # fmt: skip


@pytest.mark.parametrize("name", ONE_FAULT)
def test_one_fault_is_told_under_its_path_with_what_is_permitted(good, name):
    old, new, path, permitted = ONE_FAULT[name]
    text = changed(good, old, new)
    if name == "code as text":
        text = 'code = "B31.3-2018"\n' + text
        permitted = "a table with a key"
        path = "code"
    if name == "sizes as a text":
        text = changed(text, 'shape = "U"', 'shape = "U"\nsizes = "40 m"')
    error = faults(text)
    assert len(error.faults) == 1, str(error)
    assert error.faults[0].field.startswith(path)
    assert permitted in str(error)
    assert "permitted" in str(error)


def test_several_faults_are_told_at_once(good):
    text = changed(good, '"240 degC"', "240")
    text = changed(text, 'run = "40 m"', 'run = "40 kg"')
    text = changed(text, "guide_gap", "guidegap")
    text = changed(text, '"A106-B"', '"A106-C9"')
    text = changed(text, '"B31.3-2018"', '"B31.3-2017"')
    error = faults(text)
    assert type(error) is InputError
    assert {fault.field for fault in error.faults} == {
        "duty.cases.operating.temperature",
        "layout.sizes.run",
        "layout.guidegap",
        "pipe.material",
        "code.key",
    }


@pytest.mark.parametrize(
    ("old", "new", "kind"),
    [
        ('"240 degC"', "240", UnitError),
        ('"A106-B"', '"A106-C9"', TableError),
        ("pipeflex = 1\n", "", MissingInput),
        ("friction = 0.3", "friction = 3", InputError),
    ],
)
def test_the_error_has_the_type_of_its_cause(good, old, new, kind):
    assert type(faults(changed(good, old, new))) is kind


def test_an_empty_text_says_all_that_is_missing():
    error = faults("")
    assert {fault.field for fault in error.faults} == {"pipeflex", "pipe", "layout", "duty", "code.key"}


def test_wrong_types_everywhere():
    text = "pipeflex = 1\npipe = 5\nlayout = []\nduty = 'x'\ncode = 1\nlimits = 1.5\nconfirmed = {}\ndemo = 3\n"
    error = faults(text + "title = [{}]\nfingerprint = 3.5\n")
    told = {fault.field for fault in error.faults}
    assert told == {"pipe", "layout", "duty", "code", "limits", "confirmed", "demo", "title", "fingerprint"}


@pytest.mark.parametrize(
    "text",
    [
        "x" * 2_000_000,
        "a = " + "[" * 100_000,
        "a = " + "{a = " * 50_000,
        "a = " + "[" * 300 + "]" * 300,
        "a" + ".a" * 400_000 + " = 1",
        "[" + "'a' . " * 100_000 + "a]",
        "a = " + "9" * 100_000,
        "\x00\x01",
        "pipeflex = 1e999999",
        "\n".join(f"[a.b{i}]" for i in range(20_000)),
    ],
    ids=["large", "lists", "tables", "nested", "dots", "quoted dots", "digits", "zeros", "exponent", "many"],
)
def test_hostile_texts_are_refused_in_little_time(text, capsys):
    error = faults(text)
    assert isinstance(error, InputError)
    assert len(str(error)) < 10_000_000


def test_many_bad_supports_are_told_each(good):
    text = changed(good, "[limits]", '[[layout.supports]]\nkind = "gude"\nleg = 1\n' * 50 + "\n[limits]")
    error = faults(text)
    assert len(error.faults) == 100
    assert error.faults[-1].field == "layout.supports.49.distance"


@pytest.mark.parametrize("content", [b"\xff\xfe\x00binary", b"\x89PNG\r\n\x1a\n\x00\x00"])
def test_a_file_that_is_no_text(tmp_path, content):
    path = tmp_path / "line.toml"
    path.write_bytes(content)
    with pytest.raises(InputError, match="UTF-8"):
        load(path)


def test_files_that_cannot_be_read(tmp_path):
    with pytest.raises(InputError, match="No such file"):
        load(tmp_path / "none.toml")
    with pytest.raises(InputError, match="directory"):
        load(tmp_path)
    with pytest.raises(InputError, match="null"):
        load("a\0b")
    large = tmp_path / "large.toml"
    large.write_bytes(b"#" * (LARGEST + 1))
    with pytest.raises(InputError, match="at most"):
        load(large)


@pytest.mark.skipif(not hasattr(os, "geteuid") or os.geteuid() == 0, reason="root may read everything")
def test_a_file_without_permission(tmp_path):
    path = tmp_path / "line.toml"
    path.write_text("")
    path.chmod(0)
    with pytest.raises(InputError, match="ermission"):
        load(path)


def test_a_place_that_cannot_be_written_keeps_what_it_had(line, tmp_path, monkeypatch):
    with pytest.raises(InputError, match="No such file"):
        save(line(), tmp_path / "none" / "line.toml")
    (tmp_path / "line.toml").mkdir()
    with pytest.raises(InputError, match=r"line\.toml"):
        save(line(), tmp_path / "line.toml")
    path = tmp_path / "kept.toml"
    save(line(), path)
    monkeypatch.setattr(os, "replace", lambda *_: (_ for _ in ()).throw(OSError(28, "No space left on device")))
    with pytest.raises(InputError, match="No space left"):
        save(line(hot="250 degC"), path)
    assert load(path) == line()
    assert sorted(p.name for p in tmp_path.iterdir()) == ["kept.toml", "line.toml"]

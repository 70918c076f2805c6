"""A design written and read is the same design, whatever its numbers and however they were typed."""

import dataclasses
import math
import os
import random
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

import pipeflex
from pipeflex.codes import code, codes
from pipeflex.data.materials import material
from pipeflex.data.pipes import ELBOWS, elbow, pipe
from pipeflex.errors import InputError, TableError
from pipeflex.files.design_file import load, opened, read_design, read_opened, save, write_design
from pipeflex.model.design import Design
from pipeflex.model.duty import Case, Confirmed, Duty, Limits, Title
from pipeflex.model.fields import Flag, Names, Number, Pick, Text, Vector
from pipeflex.model.layout import Corner, End, Layout, Point, Segment, Support, Weight
from pipeflex.model.pipe import Pipe
from pipeflex.model.record import put
from pipeflex.present import display
from pipeflex.units import parse

TYPED = {
    "length": ("17'-2 1/2\"", "60 m", "4500 mm", "12.25 ft"),
    "movement": ("3 mm", "1/8 in"),
    "temperature": ("33 bar g sat", "464 F", "240 degC", "513.15 K"),
    "pressure": ("450 psig", "34 bar a", "-0.3 bar"),
    "force": ("9000 lbf", "40 kN", "3 kip"),
    "ratio": ("35 %", "0.3", "1/4"),
    "pipe dimension": ("0.5 in", "1.5 mm"),
    "density": ("62.4 lb/ft^3", "850 kg/m3"),
}
WORDS = ("plain", 'with "quotes" and \\', "Überlauf, 漢字 ½ \x7f", "two\nlines\tand a tab", "[table] # = '''", " ")
CONFIRMED = tuple(
    Confirmed(table="modulus/asme_tm1_metric", row="carbon", temperature=parse(at, "temperature"), kind="modulus",
              value=value, by="AB", date="2025-02-03")
    for at, value in (("100 degC", parse("28.7 Msi", "modulus")), ("200 degC", 1.9e11 + math.pi))
)  # fmt: skip


def number(rng, spec):
    """A number within the limits of a field: raw, or as somebody types it."""
    if spec.unlimited and rng.random() < 0.3:
        return math.inf
    for text in rng.sample(TYPED.get(spec.kind, ()), len(TYPED.get(spec.kind, ()))):
        value = parse(text, spec.kind)
        if rng.random() < 0.5 and not spec.limits.broken(value):
            return value
    limits = spec.limits
    low = limits.above if limits.above is not None else limits.at_least
    high = limits.below if limits.below is not None else limits.at_most
    if low is None:
        low = -1.0
    if high is None:
        scale = display(spec.kind).factor
        return low + rng.uniform(1.0, 90.0) * float(scale)
    return low + (high - low) * rng.uniform(0.01, 0.99)


def drawn(rng, cls, **fixed):
    """A record of a class: every field that is not fixed is drawn by what it declares, or left to its default."""
    given = dict(fixed)
    for name, spec in cls.specs():
        if name in fixed or (cls.default(name) is not dataclasses.MISSING and rng.random() < 0.3):
            continue
        match spec:
            case Number():
                given[name] = number(rng, spec)
            case Vector():
                one = Number(spec.kind, spec.limits, unlimited=spec.unlimited)
                given[name] = tuple(number(rng, one) for _ in range(spec.size))
            case Text():
                given[name] = rng.choice(WORDS)[: spec.longest] if not spec.required else "some words"
            case Pick():
                given[name] = rng.choice(spec.options)
            case Flag():
                given[name] = rng.random() < 0.5
            case Names():
                given[name] = tuple(rng.sample(WORDS, 2))
    return cls(**given)


def some_pipe(rng, confirmed):
    fields = {"corrosion_allowance": rng.choice((0.0, parse("0.5 mm", "pipe dimension"))), "material_row": 0}
    key = rng.choice(("A106-B", "TP316"))
    if rng.random() < 0.5:
        own = material(key, rng.choice(("current", "older")), confirmed)
        return drawn(rng, Pipe, outside_diameter=0.3, wall=0.011, materials=(own,), **fields)
    size = rng.choice((("DN 200", "40"), ("NPS 8", "Sch 40"), ("8 in", "STD"), ("2-1/2 in", "80")))
    return pipe(key, *size, confirmed=confirmed, **fields)


def some_layout(rng, size, confirmed):
    shape = rng.choice(("U", "raised U", "Z", "L", "points"))
    sizes = {"run": parse("60 m", "length"), "leg": 5.1 + rng.random()}
    fixed = {"points": (), "rest_spacing": None, "first_guide": None}
    if shape == "points":
        sizes, legs = {}, 3
        fixed["points"] = tuple(Point(along=10.0 * i, across=rng.random(), up=float(i == 2)) for i in range(4))
    else:
        legs = {"U": 5, "raised U": 7, "Z": 3, "L": 2}[shape]
        if shape == "raised U":
            sizes["rise"] = parse("4 ft", "length")
        if shape in ("U", "raised U") and rng.random() < 0.5:
            sizes |= {"width": 2.0, "before": 21.0}
            fixed["first_guide"] = parse("1.50 m", "length")
    mitre = {"half_angle": rng.uniform(0.01, 0.39), "spacing": 0.2}
    by_table = elbow(size, rng.choice(("long radius", "3D by EN 10253")))
    corners = [by_table, drawn(rng, Corner, radius=0.4, flanges=2, **mitre)]
    corners = corners * legs
    count = rng.choice((1, legs - 1))
    leg = rng.randint(1, legs)
    return drawn(
        rng,
        Layout,
        shape=shape,
        sizes=sizes,
        corners=tuple(corners[:count]),
        ends=(drawn(rng, End, name="west"), drawn(rng, End, name="east")),
        supports=tuple(drawn(rng, Support, leg=leg, distance=0.1 * i) for i in range(3)),
        weights=(drawn(rng, Weight, leg=leg, distance=0.2),),
        segments=(
            drawn(rng, Segment, leg=leg, start=0.1, end=0.4, pipe=some_pipe(rng, confirmed)),
            drawn(rng, Segment, leg=leg, start=0.5, end=parse("2 ft", "length"), pipe=None),
        ),
        **fixed,
    )


def some_design(seed):
    rng = random.Random(seed)
    confirmed = CONFIRMED[: rng.randint(0, 2)]
    days = rng.choice((("5 degC", "35 degC"), ("41 F", "95 F"), ("40 F", "35 degC"), ("12 degC", "12 degC")))
    low, high = (parse(day, "temperature") for day in days)
    if rng.random() < 0.2:
        low, high = 280.0 + rng.random(), 300.0 + rng.random()
    cases = (
        drawn(rng, Case, name="operating", temperature=parse("33 bar g sat", "temperature")),
        drawn(rng, Case, name='water "test", 1', temperature=280.0 + rng.random()),
        drawn(rng, Case, name="Kälte", temperature=parse("-10 degC", "temperature")),
    )
    made = some_pipe(rng, confirmed)
    return Design(
        pipe=made,
        layout=some_layout(rng, made.size if is_size(made.size) else "DN 200", confirmed),
        duty=drawn(rng, Duty, install_low=low, install_high=high, cases=cases),
        code=code(rng.choice(list(codes()))),
        limits=drawn(rng, Limits),
        title=drawn(rng, Title),
        confirmed=confirmed,
        demo=("limits.room", "pipe.size"),
    )


def is_size(size):
    try:
        return bool(elbow(size))
    except TableError:
        return False


@pytest.mark.parametrize("seed", range(60))
def test_any_design_comes_back_the_same(seed):
    design = some_design(seed)
    text = write_design(design)
    back = read_opened(text)
    assert back.design == design
    assert back.notes == ()
    assert back.design.demo == design.demo
    assert write_design(back.design) == text


def test_the_pipe_of_a_segment_comes_back(line):
    other = pipe("TP316", "NPS 6", "40S", insulation_thickness="2 in")
    segment = Segment(name="reducer on", leg=1, start=0.5, end=2.0, pipe=other)
    back = read_design(write_design(line(segments=(segment,))))
    assert back.layout.segments[0].pipe == other


def test_numbers_keep_the_text_that_was_typed(line):
    design = line(hot="33 bar g sat", sizes={"run": "131'-2 3/4\"", "leg": "6.10 m", "width": "10 ft"})
    written = tomllib.loads(write_design(read_design(write_design(design))))
    assert written["duty"]["cases"]["operating"]["temperature"] == "33 bar g sat"
    assert written["layout"]["sizes"] == {"run": "131'-2 3/4\"", "leg": "6.10 m", "width": "10 ft"}


def test_numbers_that_were_not_typed_take_the_fewest_digits(line):
    design = put(line(), "layout.sizes.leg", 0.1 + 0.2)
    written = tomllib.loads(write_design(design))
    assert written["layout"]["sizes"]["leg"] == "0.30000000000000004 m"
    assert read_design(write_design(design)).layout.sizes["leg"] == 0.1 + 0.2
    assert tomllib.loads(write_design(put(line(), "layout.sizes.leg", 6.1)))["layout"]["sizes"]["leg"] == "6.1 m"


def test_sizes_materials_and_code_stand_by_their_names(line):
    written = tomllib.loads(write_design(line()))
    assert written["code"] == {"key": "B31.3-2018"}
    assert written["pipe"]["size"], written["pipe"]["schedule"] == ("DN 200", "40")
    assert written["pipe"]["material"] == "A106-B"
    assert "outside_diameter" not in written["pipe"]
    assert written["layout"]["corner"] == {"kind": "bend", "radius": "long radius"}
    assert written["duty"]["installed"] == "5 .. 35 degC"


@pytest.mark.parametrize("kind", ELBOWS)
def test_elbows_stand_by_their_kind(line, kind):
    corner = elbow("DN 200", kind)
    text = write_design(line(corners=corner))
    assert tomllib.loads(text)["layout"]["corner"]["radius"] == kind
    assert read_design(text).layout.corners == (corner,)


def test_a_wall_that_is_not_of_the_size_is_written_out(line):
    design = put(line(), "pipe.wall", parse("9 mm", "pipe dimension"))
    written = tomllib.loads(write_design(design))["pipe"]
    assert (written["size"], written["wall"], written["outside_diameter"]) == ("DN 200", "9 mm", "219.075 mm")
    assert read_design(write_design(design)) == design


def test_what_is_nothing_is_left_out_and_every_other_default_is_written(line):
    written = tomllib.loads(write_design(line()))
    assert written["pipe"]["mill_tolerance"] == 0.125
    assert written["duty"]["cycles"] == 7000
    assert "corrosion_allowance" not in written["pipe"]
    assert "room" not in written["limits"]
    assert "pressure" not in written["duty"]["cases"]["operating"]


def test_confirmed_values_are_put_into_the_material(line):
    said = Confirmed(table="stress/asme_b31_3_2018", row="A106-B", temperature="400 degF", kind="stress",
                     value="19.9 ksi", by="AB", date="2025-02-03")  # fmt: skip
    plain = line()
    design = dataclasses.replace(plain, pipe=pipe("A106-B", "DN 200", "40", confirmed=(said,)), confirmed=(said,))
    back = read_design(write_design(design))
    assert back == design
    assert back.confirmed == (said,)
    assert back.pipe.material != plain.pipe.material
    assert back.fingerprint != plain.fingerprint


def test_a_fingerprint_that_differs_is_told_and_is_no_error(line):
    text = write_design(line())
    changed = text.replace('leg = "6 m"', 'leg = "7 m"')
    found = read_opened(changed)
    assert found.design.layout.sizes["leg"] == 7.0
    assert len(found.notes) == 1
    assert line().fingerprint in found.notes[0]
    assert found.design.fingerprint in found.notes[0]
    without = "\n".join(row for row in text.splitlines() if not row.startswith("fingerprint"))
    assert read_opened(without).notes == ()


def test_the_fingerprint_is_the_same_in_every_process(line):
    program = "import sys, pipeflex.files.design_file as f; print(f.read_opened(sys.stdin.read()).notes)"
    root = str(Path(pipeflex.__file__).parents[1])
    for seed in ("1", "2"):
        environment = {**os.environ, "PYTHONPATH": root, "PYTHONHASHSEED": seed}
        done = subprocess.run([sys.executable, "-c", program], input=write_design(line()), capture_output=True,
                              text=True, encoding="utf-8", env=environment, timeout=120)  # fmt: skip
        assert done.stdout == "()\n", done.stdout + done.stderr


def test_a_column_has_no_file(line):
    with pytest.raises(InputError, match="a column of 2 rows"):
        write_design(put(line(), "layout.sizes.leg", [6.0, 7.0]))


def test_content_that_its_key_would_not_bring_back_is_not_written(line):
    design = line()
    own = dataclasses.replace(design.code, cycles_exponent=4.0)
    with pytest.raises(InputError, match=r"code\.key"):
        write_design(dataclasses.replace(design, code=own))
    changed = design.pipe.material.with_raw(density=1.0)
    with pytest.raises(InputError, match=r"pipe\.material"):
        write_design(dataclasses.replace(design, pipe=dataclasses.replace(design.pipe, materials=(changed,))))


def test_dates_schedules_and_revisions_need_no_quotes(line):
    text = write_design(dataclasses.replace(line(), title=Title(date="2025-03-14", revision="2")))
    loose = text.replace('"2025-03-14"', "2025-03-14").replace('revision = "2"', "revision = 2")
    loose = loose.replace('schedule = "40"', "schedule = 40")
    assert loose.count('"') == text.count('"') - 6
    assert read_design(loose) == read_design(text)


def test_a_file_is_written_whole_over_the_old_one(line, tmp_path):
    path = tmp_path / "line.toml"
    save(line(), path)
    save(line(hot="250 degC"), path)
    assert load(path) == line(hot="250 degC")
    assert opened(str(path)).notes == ()
    assert [p.name for p in tmp_path.iterdir()] == ["line.toml"]
    assert b"\r" not in path.read_bytes()


def test_a_file_behind_a_link_is_written_behind_the_link(line, tmp_path):
    real, link = tmp_path / "real.toml", tmp_path / "link.toml"
    save(line(), real)
    real.chmod(0o640)
    link.symlink_to(real)
    save(line(hot="250 degC"), link)
    assert link.is_symlink()
    assert load(real) == line(hot="250 degC")
    assert real.stat().st_mode & 0o777 == 0o640


def test_a_file_of_another_editor_is_read(line, tmp_path):
    path = tmp_path / "line.toml"
    path.write_bytes(b"\xef\xbb\xbf" + write_design(line()).replace("\n", "\r\n").encode())
    assert load(path) == line()

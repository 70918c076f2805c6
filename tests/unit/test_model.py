"""Records: validated once, frozen, equal by content, one row or a column; every bad input named."""

import dataclasses
import math
import pickle

import numpy as np
import pytest

from pipeflex.codes import code
from pipeflex.data.materials import material
from pipeflex.errors import InputError, MissingInput, PipeflexError, UnitError
from pipeflex.methods import vary
from pipeflex.model.design import Design
from pipeflex.model.duty import Case, Confirmed, Duty, Limits, Title
from pipeflex.model.fields import FrozenMap
from pipeflex.model.layout import SHAPES, Corner, End, Layout, Point, Segment, Support, Weight, letters
from pipeflex.model.outcome import Check, Load
from pipeflex.model.pipe import Curve, Pipe
from pipeflex.model.record import at, put
from pipeflex.model.words import Concern, Judgement

STEEL = (material("A106-B"),)
SQUARE = Corner(kind="square")
HOT = Case(name="hot", temperature="200 degC")


def pipe(**fields):
    return Pipe(**{"outside_diameter": "219.1 mm", "wall": "8.18 mm", "materials": STEEL, **fields})


def loop(**fields):
    sizes = fields.pop("sizes", {"run": "40 m", "leg": "5 m", "width": "2 m"})
    return Layout(**{"shape": "U", "sizes": sizes, "corners": SQUARE, **fields})


def rest(**fields):
    return Support(kind="rest", **fields)


def design(**fields):
    made = {"pipe": pipe(), "layout": loop(), "duty": Duty(cases=(HOT,)), "code": code("B31.3-2018")}
    return Design(**{**made, **fields})


BAD = {  # what is made, and what its error must name
    "zero length": (lambda: loop(sizes={"run": "40 m", "leg": "0 m"}), ("sizes.leg", "0.00")),
    "negative length": (lambda: loop(sizes={"run": "-40 m", "leg": "5 m"}), ("sizes.run", "−40")),
    "wall of the radius": (lambda: pipe(wall="109.55 mm"), ("wall", "109.55", "less than the radius", "109.55")),
    "wall beyond the radius": (lambda: pipe(wall="200 mm"), ("wall", "200.00", "at most")),
    "no wall": (lambda: pipe(wall="0 mm"), ("wall", "0.00")),
    "corrosion takes the wall": (lambda: pipe(corrosion_allowance="9 mm"), ("corrosion_allowance", "9.00", "8.18")),
    "wrong kind of unit": (lambda: pipe(wall="8 MPa"), ("wall", "'8 MPa'")),
    "bare number": (lambda: pipe(wall="8"), ("wall", "needs its unit")),
    "decimal comma": (lambda: pipe(wall="8,18 mm"), ("wall", "'8,18 mm'", "comma")),
    "not a number": (lambda: pipe(wall=math.nan), ("wall", "nan")),
    "endless": (lambda: pipe(wall=math.inf), ("wall", "inf")),
    "endless below": (lambda: Case(name="hot", temperature=-math.inf), ("temperature", "-inf")),
    "below absolute zero": (lambda: Case(name="hot", temperature="-300 degC"), ("'-300 degC'", "absolute zero")),
    "difference for a temperature": (lambda: Case(name="hot", temperature="20 delta_degC"), ("temperature",)),
    "install range reversed": (
        lambda: Duty(cases=(HOT,), install_low="30 degC", install_high="5 degC"),
        ("install_low", "30.0", "at most 5.0"),
    ),
    "cycles below one": (lambda: Duty(cases=(HOT,), cycles=0.5), ("cycles", "0", "1")),
    "no case": (lambda: Duty(cases=()), ("cases", "at least one")),
    "two cases of one name": (lambda: Duty(cases=(HOT, HOT)), ("cases", "hot", "name of its own")),
    "case without a name": (lambda: Case(name=" ", temperature="20 degC"), ("name", "some text")),
    "case name with a point": (lambda: Case(name="a.b", temperature="20 degC"), ("name", "without a point")),
    "hottest not above coldest": (
        lambda: design(duty=Duty(cases=(Case(name="on", temperature="20 degC"),), install_low="20 degC",
                                 install_high="20 degC")),
        ("duty.cases", "20.0", "above the coldest"),
    ),
    "greatest f beyond the code": (lambda: Duty(cases=(HOT,), greatest_range_factor=1.3), ("greatest_range_factor",)),
    "vacuum beyond the full": (lambda: Case(name="hot", temperature="20 degC", pressure=-2e5), ("pressure", "−2.00")),
    "unknown shape": (lambda: loop(shape="W"), ("shape", "'W'", "raised U")),
    "size of another shape": (lambda: loop(sizes={"run": 40, "leg": 5, "rise": 1}), ("sizes.rise", "width")),
    "size left out": (lambda: loop(sizes={"run": "40 m"}), ("sizes.leg", "nothing")),
    "loop wider than the run": (lambda: loop(sizes={"run": 2, "leg": 5, "width": 3}), ("sizes.width", "3.00")),
    "loop off the run": (
        lambda: loop(sizes={"run": 9, "leg": 5, "width": 3, "before": 7}), ("sizes.before", "0.00 .. 6.00")
    ),
    "no corner": (lambda: loop(corners=()), ("corners", "a kind of corner for all")),
    "bend without a radius": (lambda: Corner(kind="bend"), ("radius", "above zero for a bend")),
    "three flanged ends": (lambda: Corner(kind="bend", radius=0.3, flanges=3), ("flanges", "0, 1 or 2")),
    "three ends": (lambda: loop(ends=(End(), End(), End())), ("ends", "3 ends")),
    "two corners for four": (lambda: loop(corners=(SQUARE, SQUARE)), ("corners", "one each for 4")),
    "support on no leg": (lambda: loop(supports=(rest(leg=6, distance=1),)), ("supports.0.leg", "1 to 5")),
    "support beyond its leg": (
        lambda: loop(supports=(rest(leg=3, distance="2.5 m"),)), ("supports.0.distance", "2.50", "2.00")
    ),
    "weight beyond its leg": (lambda: loop(weights=(Weight(mass=50, leg=3, distance=9),)), ("weights.0.distance",)),
    "segment that ends before it starts": (lambda: Segment(leg=1, start=3, end=2), ("end", "beyond the start")),
    "first guide beyond the anchor": (lambda: loop(first_guide="30 m"), ("first_guide", "30.00", "19.00")),
    "one point": (lambda: Layout(shape="points", points=(Point(),), corners=SQUARE), ("points", "two points")),
    "the same point twice": (
        lambda: Layout(shape="points", points=(Point(), Point(along=2), Point(along=2)), corners=SQUARE),
        ("points.2", "away from the one before"),
    ),
    "friction below zero": (lambda: loop(friction=-0.1), ("friction", "−0.1")),
    "a megabyte of text": (lambda: Title(title="x" * 10**6), ("title", "at most 200 characters")),
    "a control character": (lambda: Title(title="a\x00b"), ("title", "printable")),
    "text that is none": (lambda: Title(title=3), ("title", "text")),
    "a flag that is none": (lambda: Duty(cases=(HOT,), unused_sustained="yes"), ("unused_sustained", "true or false")),
    "whole number that is none": (lambda: rest(leg=1.5, distance=1), ("leg", "whole number")),
    "leg of its own for each row": (lambda: rest(leg=np.array([1, 2]), distance=1), ("leg", "whole")),
    "two axes": (lambda: pipe(wall=np.full((2, 2), 0.008)), ("wall", "one number a row")),
    "material that is not there": (lambda: pipe(material_row=1), ("material_row", "below 1")),
    "no material": (lambda: pipe(materials=()), ("material",)),
    "no record": (lambda: design(pipe="a pipe"), ("pipe", "a Pipe")),
    "value of another kind confirmed": (
        lambda: Confirmed(table="a/b", row="c", temperature=300, kind="modulus", value="8 mm", by="AB", date="1"),
        ("value", "'8 mm'"),
    ),
    "curve out of order": (
        lambda: Curve(table="a/b", temperature=[2.0, 1.0], value=[1.0, 1.0], origin=("", "")), ("a/b", "rising")
    ),
}  # fmt: skip


@pytest.mark.parametrize("what", BAD)
def test_bad_input_is_named(what):
    make, words = BAD[what]
    with pytest.raises(InputError) as caught:
        make()
    said = str(caught.value)
    assert all(word in said for word in words), said
    assert "\n" not in said
    assert len(said) < 300


def test_kinds_of_error():
    for what, kind in (("wrong kind of unit", UnitError), ("size left out", MissingInput), ("no case", MissingInput)):
        with pytest.raises(kind):
            BAD[what][0]()


def test_several_at_once_are_told_at_once():
    with pytest.raises(InputError) as caught:
        pipe(outside_diameter="-1 m", wall="3 s", corrosion_allowance=math.nan, joint="glued", size=3)
    assert [f.field for f in caught.value.faults] == [
        "outside_diameter", "wall", "size", "corrosion_allowance", "joint"
    ]  # fmt: skip
    with pytest.raises(InputError) as caught:
        loop(sizes={"run": "0 m", "leg": "3 kg", "width": math.inf})
    assert [f.field for f in caught.value.faults] == ["sizes.run", "sizes.leg", "sizes.width"]


def test_rows_at_fault_are_named():
    with pytest.raises(InputError) as caught:
        pipe(wall=np.array([0.008, 0.2, 0.008, -1.0, 0.0]))
    (fault,) = caught.value.faults
    assert (fault.field, fault.rows) == ("wall", (3, 4))
    with pytest.raises(InputError) as caught:
        pipe(wall=np.array([0.008, 0.2, 0.008]))
    assert caught.value.faults[0].rows == (1,)
    assert caught.value.faults[0].given == 0.2
    with pytest.raises(InputError) as caught:
        pipe(wall=np.array([0.008, math.nan]))
    assert caught.value.faults[0].rows == (1,)
    with pytest.raises(InputError) as caught:
        vary(design(), "duty.cases.hot.temperature", [300.0, 400.0, -5.0])
    assert caught.value.faults[0].field == "duty.cases.hot.temperature"
    assert caught.value.faults[0].rows == (2,)
    with pytest.raises(InputError) as caught:
        Layout(shape="points", points=(Point(), Point(along=np.array([1.0, 0.0]))), corners=SQUARE)
    assert caught.value.faults[0].rows == (1,)


def test_columns_of_different_length_are_told():
    with pytest.raises(InputError, match="2 and 3 rows"):
        design(pipe=pipe(wall=np.full(2, 0.008)), layout=loop(friction=np.full(3, 0.3)))


def test_records_are_frozen_and_their_arrays_read_only():
    made = pipe(wall=np.array([0.008, 0.009]))
    with pytest.raises(dataclasses.FrozenInstanceError):
        made.wall = 1.0
    with pytest.raises(ValueError, match="read-only"):
        made.wall[0] = 1.0
    with pytest.raises(AttributeError):
        loop().sizes.leg = 3.0
    given = np.array([0.008, 0.009])
    kept = pipe(wall=given)
    given[0] = 1.0
    assert kept.wall[0] == 0.008


def test_equal_by_content_and_hashed_alike():
    assert design() == design()
    assert hash(design()) == hash(design())
    assert design() != design(layout=loop(friction=0.2))
    assert len({design(), design(), design(title=Title(line="A"))}) == 2
    assert FrozenMap({"a": 1.0, "b": 2.0}) == FrozenMap({"b": 2.0, "a": 1.0})
    assert pipe(wall="8.18 mm") == pipe(wall=0.00818)
    again = pickle.loads(pickle.dumps(design().layout))
    assert again == design().layout


def test_fingerprint_changes_with_every_number_text_and_clause():
    one = design()
    prints = {
        one.fingerprint,
        design(layout=loop(friction=0.31)).fingerprint,
        design(title=Title(line="A")).fingerprint,
        design(code=code("B31.3-2022")).fingerprint,
        design(pipe=pipe(materials=(material("A106-B", "older"),))).fingerprint,
        design(limits=Limits(room="4 m")).fingerprint,
        design(
            code=dataclasses.replace(code("B31.3-2018"), allowable_range=code("B31.3-2022").allowable_range)
        ).fingerprint,
    }
    assert len(prints) == 7
    assert all(len(p) == 8 for p in prints)
    assert design().fingerprint == one.fingerprint
    typed = design(pipe=pipe(wall="0.00818 m"))
    assert typed.fingerprint == one.fingerprint
    assert design(demo=("pipe.wall",)).fingerprint == one.fingerprint


def test_a_column_and_its_rows():
    column = vary(design(), "layout.sizes.leg", [4.0, 5.0, 6.0])
    assert column.rows == 3
    assert column.row(1) == design()
    assert column.row(-1).layout.sizes["leg"] == 6.0
    assert column.taken(np.array([2, 0])).layout.sizes["leg"].tolist() == [6.0, 4.0]
    single = design().column()
    assert (single.rows, single.pipe.wall.shape) == (1, (1,))
    assert single.row(0) == design()
    assert column.column().pipe.wall.shape == (3,)
    supported = design(layout=loop(supports=(rest(leg=1, distance=1.0),))).column()
    assert supported.layout.supports[0].leg == 1
    with pytest.raises(InputError, match="0 to 2"):
        column.row(3)


def test_paths():
    made = design()
    assert at(made, "layout.sizes.leg") == 5.0
    assert at(made, "duty.cases.hot.temperature") == 473.15
    assert at(made, "duty.cases.0.temperature") == 473.15
    assert put(made, "layout.ends.west.anchor_limit", "9 kN").layout.ends[0].anchor_limit == 9000.0
    for path, near in (("layout.sizes.lag", "leg"), ("duty.cases.cold.temperature", "hot"), ("pipe.walls", "wall")):
        with pytest.raises(InputError) as caught:
            at(made, path)
        assert near in caught.value.faults[0].near
    with pytest.raises(PipeflexError) as caught:
        put(made, "pipe.wall", "1 m")
    assert caught.value.faults[0].field == "pipe.wall"


def test_sizes_left_out_are_derived():
    full = Layout(shape="U", sizes={"run": 40.0, "leg": 4.0}, corners=SQUARE)
    assert full.full_sizes() == {"run": 40.0, "leg": 4.0, "width": 2.0, "before": 19.0}
    assert full.leg_lengths()[:, 0].tolist() == [19.0, 4.0, 2.0, 4.0, 19.0]
    assert Layout(shape="Z", sizes={"run": 12.0, "leg": 4.0}, corners=SQUARE).leg_lengths()[:, 0].tolist() == [6, 4, 6]


@pytest.mark.parametrize("shape", [s for s in SHAPES if s != "points"])
def test_shapes_close_on_their_sizes(shape):
    given = {"run": 20.0, "leg": 3.0, "rise": 1.5}
    made = Layout(shape=shape, sizes={k: given[k] for k in SHAPES[shape].needs}, corners=SQUARE)
    points = made.corner_points()
    assert points.shape == (3, made.leg_count + 1, 1)
    across = 3.0 if shape in ("L", "Z") else 0.0
    assert (points[:, -1] - points[:, 0])[:, 0].tolist() == [20.0, across, 0.0]
    assert np.allclose(made.leg_vectors().sum(axis=1), points[:, -1] - points[:, 0])
    assert len(made.corner_names()) == made.leg_count - 1


def test_letters():
    assert [letters(i) for i in (0, 25, 26, 27, 51, 52)] == ["A", "Z", "AA", "AB", "AZ", "BA"]


def check(demand, limit, **fields):
    return Check(key="k", title="t", concern=Concern.STRESS, kind="stress", demand=demand, limit=limit, **fields)


def test_judgements_of_a_check():
    assert check(99.0, 100.0).judgement == Judgement.HOLDS
    assert check(100.0, 100.0).judgement == Judgement.HOLDS
    assert check(-101.0, 100.0).judgement == Judgement.EXCEEDED
    assert check(99.0, math.inf).judgement == Judgement.NOT_JUDGED
    assert check(99.0, math.inf).reason == "no limit given"
    unknown = check(999.0, 100.0, unjudged="the rule does not know it")
    assert (unknown.judgement, unknown.reason) == (Judgement.NOT_JUDGED, "the rule does not know it")
    assert not unknown.exceeded


def test_the_greatest_of_a_load_keeps_its_sign():
    thermal = np.array([[3.0, 1.0], [-4.0, 2.0]])
    fields = {f.name for f in dataclasses.fields(Load)}
    nothing = {name: np.zeros((2, 2)) for name in ("friction", "weight") if name in fields}
    load = Load(point="p", name="force", positive="east", negative="west", kind="force", states=("hot", "cold"),
                thermal=thermal, **nothing)  # fmt: skip
    assert load.greatest().tolist() == [-4.0, 2.0]
    assert load.worst.tolist() == [1, 1]
    assert (load.toward(-4.0), load.toward(2.0)) == ("west", "east")

"""Nothing on a drawing overlaps or is cut off, for any size; what it says is true."""

import itertools
import math
import re

import numpy as np
import pytest

from pipeflex.methods import solve
from pipeflex.model.layout import Support
from pipeflex.sheet import scene, svg
from pipeflex.sheet.drawing.parts import HEAVY, Area, Stroke
from tests.sheet.lines import SPATIAL, answered, line, with_curves

VIEWS = [("plan", 0), ("elevation", 0), *(("isometric", i) for i in range(4))]


def lines():
    rng = np.random.default_rng(7)
    yield (
        "spatial",
        line("points", points=SPATIAL, supports=(Support(kind="line stop", name="LS 1", leg=3, distance=4),)),
    )
    for shape in ("L", "Z", "U", "raised U"):
        for i in range(5):
            run, leg = float(np.exp(rng.uniform(np.log(3), np.log(300)))), float(rng.uniform(0.5, 12))
            sizes = {"run": run, "leg": leg}
            if shape.endswith("U"):
                sizes["width"] = float(min(rng.uniform(0.3, 0.8) * leg, run / 3))
            if shape == "raised U":
                sizes["rise"] = float(rng.uniform(0.3, 3))
            radius = min(0.305, 0.3 * min(sizes.values()))
            guide = 0.1 * run if shape != "L" else 0.2 * min(run, leg)
            yield (
                f"{shape} {i}",
                line(shape, sizes, radius=radius, room=1.2 * leg, first_guide=guide, rest_spacing=max(3.0, run / 20)),
            )


LINES = dict(lines())


def grid(label):
    """Points inside the ink of a label, by the narrow estimate of half a letter height a letter."""
    half = 0.25 * label.size * len(label.text)
    shift = {"start": half, "middle": 0.0, "end": -half}[label.anchor]
    c, s = math.cos(math.radians(label.turn)), math.sin(math.radians(label.turn))
    for a, b in itertools.product(np.linspace(shift - half, shift + half, 9), (-0.35, 0.0, 0.35)):
        dy = b * label.size
        yield label.at[0] + a * c - dy * s, label.at[1] + a * s + dy * c


def inside(point, label):
    x, y = point[0] - label.at[0], point[1] - label.at[1]
    c, s = math.cos(math.radians(label.turn)), math.sin(math.radians(label.turn))
    u, v = x * c + y * s, -x * s + y * c
    half = 0.25 * label.size * len(label.text)
    shift = {"start": half, "middle": 0.0, "end": -half}[label.anchor]
    return abs(u - shift) <= half and abs(v) <= 0.35 * label.size


def far(one, other):
    """Whether two labels are so far apart that they cannot meet."""
    return math.dist(one.at, other.at) > 0.6 * (one.size * (len(one.text) + 2) + other.size * (len(other.text) + 2))


def clear(ink, points):
    """Least distance of points to a line."""
    a, b = np.array(points[:-1])[:, None], np.array(points[1:])[:, None]
    d = b - a
    t = np.clip(((ink - a) * d).sum(axis=2) / np.maximum((d * d).sum(axis=2), 1e-12), 0, 1)
    return np.linalg.norm(ink - a - t[..., None] * d, axis=2).min()


@pytest.mark.parametrize("name", LINES)
@pytest.mark.parametrize("units", ["metric", "us"])
def test_labels_neither_overlap_nor_leave_the_paper_nor_lie_on_the_pipe(name, units):
    outcome = answered(LINES[name])
    for view, viewpoint in VIEWS:
        drawn = scene(outcome, units, view, viewpoint=viewpoint)
        for one, other in itertools.combinations(drawn.labels, 2):
            if far(one, other):
                continue
            met = any(inside(p, other) for p in grid(one)) or any(inside(p, one) for p in grid(other))
            assert not met, (view, one, other)
        heavy = [s for s in drawn.shapes if isinstance(s, Stroke) and s.weight >= HEAVY]
        for label in drawn.labels:
            ink = np.array(list(grid(label)))
            assert ink.min() >= 0, (view, label)
            assert ink[:, 0].max() <= drawn.width, (view, label)
            assert ink[:, 1].max() <= drawn.height, (view, label)
            assert min(clear(ink, s.points) for s in heavy) > HEAVY / 2, (view, label)


@pytest.mark.parametrize("name", LINES)
def test_labels_stay_apart_on_small_paper(name):
    for view in ("plan", "isometric"):
        drawn = scene(answered(LINES[name]), view=view, width=125.0, height=82.0)
        for one, other in itertools.combinations(drawn.labels, 2):
            assert far(one, other) or not any(inside(p, other) for p in grid(one)), (view, one, other)
        for label in drawn.labels:
            assert all(0 <= x <= drawn.width and 0 <= y <= drawn.height for x, y in grid(label)), (view, label)


@pytest.mark.parametrize("name", LINES)
def test_everything_drawn_is_on_the_paper(name):
    for view, viewpoint in VIEWS:
        drawn = scene(answered(LINES[name]), view=view, viewpoint=viewpoint)
        for shape in drawn.shapes:
            for x, y in shape.points:
                assert -0.01 <= x <= drawn.width + 0.01, (view, shape)
                assert -0.01 <= y <= drawn.height + 0.01, (view, shape)


@pytest.mark.parametrize("name", [n for n in LINES if n != "spatial"])
def test_the_plan_leaves_out_no_dimension(name):
    drawn = scene(answered(LINES[name]))
    assert not [t for t in drawn.left_out if re.fullmatch(r"(room )?[\d.\u2009]+", t)]


def test_the_loop_is_to_scale():
    drawn = scene(answered(line()))
    assert drawn.scale == "1 : 100"
    pipe = [s for s in drawn.shapes if isinstance(s, Stroke) and s.weight == HEAVY and len(s.points) > 8]
    points = [p for s in pipe for p in s.points]
    assert max(y for _, y in points) - min(y for _, y in points) == pytest.approx(51.0, abs=0.01)
    loop = [x for x, y in points if y < min(y for _, y in points) + 20]
    assert max(loop) - min(loop) == pytest.approx(20.0, abs=0.01)


def test_dimensions_say_true_lengths_of_broken_straights():
    texts = {label.text for label in scene(answered(line(first_guide=1.5))).labels}
    assert {"60.00", "29.00", "5.10", "2.00", "1.50", "room 6.00", "A", "B", "C", "D"} <= texts
    assert "long straights broken" in texts


def test_growth_arrows_say_the_growth_from_installed_to_hottest():
    outcome = answered(line())
    moved = next(m for m in outcome.movements if m.point == "corner A")
    expected = f"{abs(float(moved.value[0])) * 1e3:.1f}\u00a0mm"
    assert [label.text for label in scene(outcome).labels].count(expected) == 2


def test_the_field_in_hand_lights_its_dimension():
    plain = scene(answered(line()))
    lit = scene(answered(line()), focus="layout.sizes.leg")
    assert [label.text for label in lit.labels if label.role == "lit"] == ["5.10"]
    assert all(label.bold for label in lit.labels if label.role == "lit")
    assert not [s for s in plain.shapes if s.role == "lit"]
    assert {s.path for s in plain.spots} >= {"layout.sizes.leg", "layout.sizes.run", "limits.room"}


def test_the_ribbon_is_black_and_flagged_only_where_it_passes_one():
    def ribbon(peak):
        return scene(with_curves(answered(line()), peak))

    def black(drawn):
        return [s for s in drawn.shapes if isinstance(s, Area) and s.role == "ink" and s.opacity < 1]

    assert not black(ribbon(0.97))
    assert "97\u00a0%" in [label.text for label in ribbon(0.97).labels]
    assert black(ribbon(1.3))
    assert {label.bold for label in ribbon(1.3).labels if label.text == "130\u00a0%"} == {True}


@pytest.mark.parametrize("shape", ["L", "Z", "U", "raised U"])
def test_ribbon_and_hot_shape_of_the_beam_follow_the_pipe(shape):
    drawn = scene(solve(line(shape, first_guide=1.2, rest_spacing=5.0), "beam_flexibility"))
    pipe = [s.points for s in drawn.shapes if isinstance(s, Stroke) and s.weight == HEAVY]
    near = [s.points for s in drawn.shapes if s.role in ("heat", "ribbon") and (isinstance(s, Area) or s.dash)]
    assert len(near) > 10
    for p in (p for points in near for p in points if p[1] < drawn.height - 11):
        assert min(clear(np.array([p]), points) for points in pipe) < 14, p


def test_without_curves_there_is_neither_ribbon_nor_hot_shape():
    drawn = scene(with_curves(answered(line())), view="elevation")
    bare = scene(answered(line()).__class__(**{**vars_of(answered(line())), "along": (), "shapes": ()}))
    assert any(s.role == "ribbon" for s in drawn.shapes)
    assert not any(s.role == "ribbon" for s in bare.shapes)
    assert not any("hot shape" in label.text for label in bare.labels)


def vars_of(record):
    return {name: getattr(record, name) for name in record.__dataclass_fields__}


def test_us_scales_are_of_feet_and_inches():
    drawn = scene(answered(line()), "us")
    assert drawn.scale in ('1/8" = 1\'-0"', '3/32" = 1\'-0"', "1\" = 10'")
    assert "16.73" in {label.text for label in drawn.labels}


def test_tags_are_data():
    text = svg(scene(answered(line(tags=("<b>&", "</svg><script>")))))
    assert "<script" not in text
    assert "&lt;b&gt;&amp;" in text


def test_svg_is_still_and_loads_nothing():
    text = svg(scene(answered(line())))
    assert text == svg(scene(answered(line())))
    assert "url(" not in text
    assert "href" not in text
    assert "id=" not in text
    assert "nan" not in text.lower().replace("naneous", "")
    assert len(text) < 60_000


def test_the_drawing_is_told_in_words():
    words = scene(answered(line(first_guide=1.5))).description
    for said in ("Plan", "1 : 100", "leg 5.10\u00a0m", "west", "first guide 1.50\u00a0m"):
        assert said in words

"""The beam answer of a design: its columns, its special runs, its friction, and where the rules stand beside it."""

import dataclasses

import numpy as np
import pytest

from pipeflex.data.pipes import elbow, pipe
from pipeflex.errors import InputError, UnstableLayoutError
from pipeflex.files.route import coordinates, route
from pipeflex.mechanics.cantilever import cantilever_stress
from pipeflex.methods import fit, ladder, solve, vary
from pipeflex.methods.search import replace_limits
from pipeflex.model.duty import Case
from pipeflex.model.layout import Corner, End, Layout, Segment, Support, Weight
from pipeflex.model.words import Judgement, Standing, Verdict

BEAM = "beam_flexibility"
SQUARE = Corner(kind="square")
STIFF_ENDS = (End(name="west"), End(name="east"))


def greatest(outcome, point, name, words):
    """Greatest load in size of one point and direction."""
    load = next(v for v in outcome.loads if v.point == point and v.name == name and words in (v.positive, v.negative))
    return abs(load.greatest())


@pytest.mark.parametrize("shape", ["L", "Z", "U"])
def test_a_row_of_a_column_is_its_single_solve(line, shape):
    """Frictionless answers come from the one sweep: 1e-12 of the greatest."""
    design = line(shape, first_guide="2 m")
    lengths = np.linspace(4.0, 9.0, 7)
    column = solve(vary(design, "layout.sizes.leg", lengths), BEAM)
    for i, length in enumerate(lengths):
        single = solve(dataclasses.replace(design, layout=dataclasses.replace(
            design.layout, sizes={**design.layout.sizes, "leg": float(length)})), BEAM)  # fmt: skip
        row = column.row(i)
        for one, other in zip(row.checks, single.checks, strict=True):
            if one.key == "shoe":  # a column takes the free growth of the outer legs, which the thrust shortens
                assert 0.9 * one.demand < other.demand <= one.demand
                continue
            assert one.demand == pytest.approx(other.demand, rel=1e-11), one.key
        assert row.leading.where == single.leading.where


def test_guides_at_a_spacing_are_the_same_in_a_column_of_unlike_runs(line):
    design = line("U", first_guide="2 m", guide_spacing="5 m")
    runs = np.array([24.0, 40.0, 63.0])
    column = solve(vary(design, "layout.sizes.run", runs), BEAM)
    for i, run in enumerate(runs):
        single = solve(vary(design, "layout.sizes.run", np.array([run])).row(0), BEAM)
        assert column.row(i).leading.demand == pytest.approx(single.leading.demand, rel=1e-9)


def test_a_segment_that_changes_nothing_changes_nothing(line):
    """The way by pairs of states gives what the way by one shape gives."""
    plain = line("Z")
    same = line("Z", segments=(Segment(leg=1, start="1 m", end="3 m", temperature_offset=0.0),))
    one, other = solve(plain, BEAM), solve(same, BEAM)
    assert other.leading.demand == pytest.approx(one.leading.demand, rel=1e-9)
    assert other.leading.where == one.leading.where


def test_a_hotter_segment_adds_to_the_range_and_a_rule_is_outside(line):
    plain = line("Z", hot="200 degC")
    hotter = line("Z", hot="200 degC", segments=(Segment(leg=1, start="0 m", end="5 m", temperature_offset="60 K"),))
    assert solve(hotter, BEAM).leading.demand > 1.02 * solve(plain, BEAM).leading.demand
    assert solve(hotter, "guided_cantilever").standing is Standing.OUTSIDE
    assert solve(hotter).method == BEAM


def test_a_wider_pipe_on_a_segment_is_stiffer(line):
    plain = line("L")
    wide = line("L", segments=(Segment(leg=2, start="3 m", end="6 m", pipe=pipe("A106-B", "DN 300", "40")),))
    assert solve(wide, BEAM).checks[0].demand != pytest.approx(solve(plain, BEAM).checks[0].demand, rel=0.01)


def test_an_end_that_moves_with_the_growth_relieves_the_run(line):
    """An end that moves by the run's own growth leaves an L of square corner unstressed along that leg."""
    still = line("Z", corners=SQUARE)
    strain = float(np.ptp(np.append(solve(still, BEAM).results["e"], 0.0)))
    growth = strain * 12.0
    cases = (
        Case(name="operating", temperature="240 degC", last_end_movement=(growth, strain * 7.0, 0.0)),
        Case(name="minimum ambient", temperature="-10 degC"),
    )
    duty = {"install_low": "-10 degC", "install_high": "-10 degC", "cases": cases}
    moved = solve(line("Z", corners=SQUARE, duty=duty), BEAM)
    assert moved.leading.demand < 1e-6 * solve(still, BEAM).leading.demand
    assert solve(line("Z", corners=SQUARE, duty=duty), "guided_cantilever").outside


def test_a_guided_leg_is_the_guided_cantilever(line):
    """A leg between two walls that cannot turn: a Z whose outer legs are held by guides at the corner is the rule's."""
    design = line("Z", sizes={"run": "12 m", "leg": "4 m", "before": "6 m"}, corners=SQUARE, first_guide="0.02 m",
                  guide_spacing="0.1 m")  # fmt: skip
    found = solve(design, BEAM)
    e, E_a = found.results["e"], found.results["E_a"]
    rule = cantilever_stress(E_a=E_a, D_o=0.219075, delta=e * 12.0, l=4.0)
    point = next(a for a in found.along if a.key == "moment")
    moment = float(np.max(point.value))
    assert 0.95 * rule < moment / found.results["Z"] < rule  # the pipe's stretch takes 1.2 %, the stubs turn a little


def test_ends_that_yield_lower_the_force(line):
    soft = (End(name="west", stiffness=(2e5, np.inf, np.inf)), End(name="east"))
    rigid, yielding = line("Z", ends=STIFF_ENDS), line("Z", ends=soft)
    assert greatest(solve(yielding, BEAM), "anchor west", "force", "east") < greatest(
        solve(rigid, BEAM), "anchor west", "force", "east"
    )


def test_a_run_that_floats_is_named(line):
    free = End(name="west", stiffness=(0.0,) * 3, rotational_stiffness=(0.0,) * 3)
    loose = End(name="east", stiffness=(0.0,) * 3, rotational_stiffness=(0.0,) * 3)
    with pytest.raises(UnstableLayoutError):
        solve(line("Z", ends=(free, loose)), BEAM)


def test_a_bend_larger_than_its_legs_is_named(line):
    with pytest.raises(InputError, match="leg 2"):
        solve(line("U", sizes={"run": "40 m", "leg": "0.5 m", "width": "3 m"}), BEAM)


def test_friction_never_helps(line):
    """No load of the design is below that without friction, and the sum of frictions bounds what it adds."""
    rough, smooth = line("U", rest_spacing="6 m", friction=0.4), line("U", rest_spacing="6 m", friction=0.0)
    one, other = solve(rough, BEAM), solve(smooth, BEAM)
    for key in ("anchor 1", "anchor 2"):
        assert one.check(key).demand >= other.check(key).demand
        weight = one.results["w"] * float(rough.layout.leg_lengths().sum())
        assert one.check(key).demand <= other.check(key).demand + 0.4 * weight
    assert one.leading.demand == pytest.approx(other.leading.demand, rel=1e-12)


def test_what_stays_locked_in_is_told(line):
    outcome = solve(line("U", rest_spacing="6 m"), BEAM)
    west = next(v for v in outcome.loads if v.point == "anchor west" and v.positive == "east")
    states = [s for s in west.states if s.startswith("installed again")]
    assert len(states) == 2
    locked = west.total[west.states.index(states[0])]
    assert 0 < abs(locked) <= abs(west.greatest())
    assert west.thermal[west.states.index(states[0])] == 0.0


def test_sustained_stress_rises_with_the_span_and_with_a_valve(line):
    def stress(**fields):
        return solve(line("U", **fields), BEAM).check("sustained").demand

    assert stress(rest_spacing="4 m") < stress(rest_spacing="8 m")
    valve = Weight(name="valve", mass="800 kg", leg=1, distance="8 m")
    assert stress(rest_spacing="6 m") < stress(rest_spacing="6 m", weights=(valve,))
    assert solve(line("U"), BEAM).check("sustained").judgement is Judgement.NOT_JUDGED


def test_eq_1b_adds_the_unused_sustained_stress(line):
    plain = solve(line("U", rest_spacing="6 m"), BEAM)
    added = solve(line("U", rest_spacing="6 m", duty={"unused_sustained": True}), BEAM)
    S_L, S_h = (getattr(added.check("sustained"), n) for n in ("demand", "limit"))
    assert added.leading.limit - plain.leading.limit == pytest.approx(S_h - S_L, rel=1e-9)
    unknown = solve(line("U", duty={"unused_sustained": True}), BEAM)
    assert unknown.leading.limit == pytest.approx(plain.leading.limit, rel=1e-12)


def test_end_limits_are_judged_in_the_nozzles_own_directions(line):
    """Turning the nozzle by a right angle exchanges the limits that its two level directions meet."""

    def ends(axis, limits):
        return (End(name="west"), End(name="pump", axis=axis, force_limits=limits, moment_limits=(5e3,) * 3))

    straight = solve(line("L", ends=ends((1, 0, 0), (1e3, 2e3, np.inf))), BEAM)
    turned = solve(line("L", ends=ends((0, 1, 0), (2e3, 1e3, np.inf))), BEAM)
    assert straight.check("end 2 force 1").demand == pytest.approx(turned.check("end 2 force 2").demand)
    assert straight.check("end 2 force 2").demand == pytest.approx(turned.check("end 2 force 1").demand)
    assert straight.check("end 2 force 1").ratio == pytest.approx(turned.check("end 2 force 2").ratio)
    assert straight.check("end 2 moment 3").judged
    assert straight.verdict is Verdict.STIFF


def test_cold_spring_by_the_code_only_with_nothing_between(line):
    sprung = solve(line("Z", duty={"cold_spring": 0.5}), BEAM)
    assert sprung.results["R_m"] > 0
    assert sprung.results["R_a"] > 0
    guided = solve(line("Z", first_guide="3 m", duty={"cold_spring": 0.5}), BEAM)
    assert "R_m" not in guided.results
    assert any("Cold spring is not counted" in r.words() for r in guided.remarks)


def test_a_hot_top_bows_a_line_by_its_form(line):
    def bowed(form):
        cases = (Case(name="half full", temperature="120 degC", top_to_bottom="60 K", top_to_bottom_form=form),
                 Case(name="minimum ambient", temperature="-10 degC"))  # fmt: skip
        return solve(line("L", duty={"cases": cases}), BEAM).leading.demand

    flat = solve(line("L", hot="120 degC"), BEAM).leading.demand
    assert flat < bowed("linear") < bowed("half and half")


def test_the_near_guide_of_an_l_is_told(line):
    """DN 150 Sch 40 at 180 degC, the guide five diameters from the corner: the rule's own leg is far too stiff."""
    near = dataclasses.replace(
        line("L", hot="180 degC", cold="0 degC", size="DN 150", sizes={"run": "10 m", "leg": "5 m"}),
        pipe=pipe("A106-B", "DN 150", "40"),
    )
    near = dataclasses.replace(
        near, layout=dataclasses.replace(near.layout, corners=(elbow("DN 150"),), first_guide=5 * 0.168275)
    )
    found = solve(near)
    assert found.verdict is Verdict.STIFF
    rungs = {r.key: r for r in ladder(near).rungs}
    assert rungs["guided_cantilever"].standing is Standing.OUTSIDE
    assert rungs["guided_cantilever"].at_leg > 2
    assert "Unsafe here" in rungs["guided_cantilever"].unsafe
    leg = fit(near)
    assert leg.value is None
    assert "guide is the lever" in leg.help
    guide = float(leg.help.split("first guide at ")[1].split("\N{NO-BREAK SPACE}")[0])
    wanted = float(leg.help.split("a leg of ")[1].split("\N{NO-BREAK SPACE}")[0])
    moved = dataclasses.replace(
        near,
        layout=dataclasses.replace(near.layout, first_guide=guide, sizes={"run": 10.0, "leg": wanted}),
    )
    assert solve(moved).verdict is Verdict.FLEXIBLE


def test_a_fit_of_the_guide_distance(line):
    design = replace_limits(line("Z", sizes={"run": "20 m", "leg": "7 m"}, first_guide="1 m"))
    found = fit(design, "layout.first_guide")
    assert found.value is not None
    assert solve(found.design).leading.ratio <= 0.80
    nearer = dataclasses.replace(design, layout=dataclasses.replace(design.layout, first_guide=found.value - 0.05))
    assert solve(nearer).leading.ratio > 0.80


def test_the_elastic_centre_of_square_corners_is_the_beam_without_stretch(line):
    """The two differ only by the stretch of the pipe, which is small for a long run."""
    design = line("U", corners=SQUARE)
    exact, centre = solve(design, BEAM), solve(design, "elastic_centre")
    one = greatest(exact, "anchor east", "force", "east")
    other = greatest(centre, "anchor east", "force", "east")
    assert other == pytest.approx(one, rel=0.02)
    assert solve(line("U", first_guide="2 m"), "elastic_centre").standing is Standing.OUTSIDE


def test_a_route_in_words_is_the_shape_in_sizes(line):
    shaped = line("U")
    points = route("east 18.5 m\nnorth 6 m; east 3 m\n# back\nsouth 6 m\neast 18.5 m")
    walked = dataclasses.replace(
        shaped, layout=Layout(shape="points", points=points, corners=elbow("DN 200"), sizes={})
    )
    assert solve(walked, BEAM).leading.demand == pytest.approx(solve(shaped, BEAM).leading.demand, rel=1e-12)
    pasted = coordinates("0 0 0\n18500 0 0\n18500\t6000\t0\n21500;6000;0\n21500 0 0\n40000 0 0", "mm")
    assert np.allclose([(p.along, p.across, p.up) for p in pasted], [(p.along, p.across, p.up) for p in points])


def test_a_route_tells_every_line_that_cannot_be_read():
    with pytest.raises(InputError) as caught:
        route("east 24 m\nleft 3 m\nup 3\nnorth -2 m\nsouth")
    fields = [f.field for f in caught.value.faults]
    assert fields == ["route, line 2", "route, line 3", "route, line 4", "route, line 5"]
    with pytest.raises(InputError, match="three numbers"):
        coordinates("0 0\n1 2 3")


def test_a_raised_loop_and_a_line_stop(line):
    raised = line("raised U", sizes={"run": "40 m", "leg": "6 m", "width": "3 m", "rise": "1.5 m"}, rest_spacing="6 m")
    found = solve(raised)
    assert found.method == BEAM
    assert 0 < found.leading.ratio < 2
    stop = line("U", supports=(Support(kind="line stop", leg=1, distance="3 m", name="stop"),))
    stopped = solve(stop, BEAM)
    assert greatest(stopped, "stop", "force", "east") > 0
    assert solve(stop, "guided_cantilever").standing is Standing.OUTSIDE


def test_no_number_of_an_answer_is_lost(line):
    outcome = solve(line("U", rest_spacing="6 m", first_guide="2 m"))
    for load in outcome.loads:
        assert np.isfinite(load.total).all()
    for along in outcome.along:
        assert np.all(np.diff(along.distance) >= -1e-9)
        assert np.isfinite(along.value).all()
    ratio = next(a for a in outcome.along if a.key == "ratio")
    assert float(np.max(ratio.value)) == pytest.approx(outcome.leading.ratio, rel=1e-12)
    assert outcome.results["residual"] < 1e-3

"""What must never read "holds": numbers that are none, limits unread, friction that helps, rules out of their depth."""

import dataclasses

import numpy as np
import pytest

import pipeflex.methods.beam_loads as beam_loads
from pipeflex.data.pipes import pipe
from pipeflex.errors import InputError
from pipeflex.methods import fit, ladder, reserve, solve, vary
from pipeflex.model.duty import Case, Limits
from pipeflex.model.layout import Corner, End, Point, Segment, Support, Weight
from pipeflex.model.outcome import Check
from pipeflex.model.words import Concern, Judgement, Standing, Verdict

BEAM, GUIDED = "beam_flexibility", "guided_cantilever"


def test_no_number_does_not_hold():
    check = Check(key="x", title="x", concern=Concern.STRESS, kind="stress", demand=float("nan"), limit=1.0)
    assert check.judgement is Judgement.EXCEEDED
    with pytest.raises(InputError, match="axis"):
        End(axis=(0, 0, 0))


@pytest.mark.parametrize(
    "fields",
    [{"kind": "widely spaced mitre"}, {"kind": "widely spaced mitre", "half_angle": "40 deg"},
     {"kind": "closely spaced mitre", "half_angle": "11.25 deg"}],
)  # fmt: skip
def test_mitres_without_their_sizes_are_refused(fields):
    with pytest.raises(InputError):
        Corner(**fields)


def test_close_mitres_are_close(line):
    corner = Corner(kind="closely spaced mitre", half_angle="11.25 deg", spacing="400 mm", radius="600 mm")
    with pytest.raises(InputError, match="spacing"):
        solve(line("L", corners=corner), BEAM)


def test_friction_that_relieves_is_not_counted_on(line):
    """No component of a load falls below that of a line without friction."""

    def loads(mu):
        outcome = solve(line("L", sizes={"run": "20 m", "leg": "6 m"}, rest_spacing="6 m", friction=mu), BEAM)
        return {
            (v.point, v.name, frozenset((v.positive, v.negative))): float(np.abs(v.total).max()) for v in outcome.loads
        }

    rough, smooth = loads(0.3), loads(0.0)
    for key, value in smooth.items():
        assert rough[key] >= value * (1 - 1e-9), key


def test_a_hot_top_bows_a_line_on_rests_too(line):
    def moment(difference, **layout):
        cases = (Case(name="half full", temperature="120 degC", top_to_bottom=difference),
                 Case(name="minimum ambient", temperature="-10 degC"))  # fmt: skip
        outcome = solve(line("L", sizes={"run": "20 m", "leg": "8 m"}, duty={"cases": cases}, **layout), BEAM)
        west = [v for v in outcome.loads if v.point == "anchor west" and v.name == "moment"]
        return max(float(np.abs(v.thermal).max()) for v in west)

    for layout in ({}, {"rest_spacing": "6 m"}):
        assert moment("60 K", **layout) > moment("0 K", **layout) + 1e3


def test_a_segment_is_judged_by_its_own_temperature_and_metal(line):
    """Hotter by 150 K, the allowable at the corner it holds falls; beyond the stress table it is refused."""

    def with_offset(kelvin):
        part = Segment(leg=2, start="0 m", end="6 m", temperature_offset=f"{kelvin} K")
        return line("L", hot="300 degC", segments=(part,), rest_spacing="5 m")

    plain = solve(line("L", hot="300 degC", rest_spacing="5 m"), BEAM)
    hotter = solve(with_offset(150), BEAM)
    assert hotter.leading.limit < plain.leading.limit
    assert hotter.leading.ratio > plain.leading.ratio
    with pytest.raises(InputError, match="within the table"):
        solve(with_offset(400), BEAM)
    with pytest.raises(InputError, match="stretches apart"):
        line("L", segments=(Segment(leg=1, start="0 m", end="5 m"), Segment(leg=1, start="3 m", end="8 m")))


def test_the_limit_of_a_support_is_read(line):
    weak = Support(kind="line stop", leg=1, distance="3 m", name="stop", limit="10 N")
    outcome = solve(line("U", supports=(weak,)), BEAM)
    assert outcome.check("support 1").judgement is Judgement.EXCEEDED
    assert outcome.verdict is Verdict.STIFF
    assert any("Limits of single supports" in r.words() for r in solve(line("U", supports=(weak,)), GUIDED).remarks)


@pytest.mark.parametrize(
    ("duty", "layout", "words"),
    [({"cases": (Case(name="hot", temperature="200 degC"),
                 Case(name="water test", temperature="10 degC", contents_density=1000.0))}, {}, "water test"),
     ({}, {"supports": (Support(kind="spring", leg=1, distance="3 m", load="5 kN", stiffness="100 N/mm"),)}, "spring"),
     ({}, {"supports": (Support(kind="guide", leg=1, distance="3 m", friction=0.2, name="G7"),)}, "G7")],
)  # fmt: skip
def test_what_is_not_computed_is_said(line, duty, layout, words):
    for key in (GUIDED, BEAM):
        assert any(
            words in r.words() and "not judged" in r.words() for r in solve(line("L", duty=duty, **layout), key).remarks
        )


def test_a_long_middle_leg_moves_on_its_shoes(line):
    points = tuple(Point(along=a, across=c) for a, c in ((0, 0), (5, 0), (5, 4), (105, 4), (105, 8), (110, 8)))
    chain = line("points", points=points, sizes={})
    assert solve(chain, BEAM).check("shoe").demand > 0.1
    assert solve(chain, GUIDED).check("shoe").judgement is Judgement.NOT_JUDGED
    moved = (Case(name="hot", temperature="200 degC", last_end_movement=("300 mm", 0, 0)),)
    assert solve(line("Z", duty={"cases": moved}), BEAM).check("shoe").demand > 0.25


@pytest.mark.parametrize("guides", [{"first_guide": "0.6 m"}, {"guide_spacing": "1 m"}])
def test_a_near_guide_puts_the_rule_outside_in_whatever_words(line, guides):
    points = (Point(), Point(along=10.0), Point(along=10.0, across=6.0))
    for design in (
        line("points", points=points, sizes={}, **guides),
        line("L", sizes={"run": 10.0, "leg": 6.0}, **guides),
    ):
        assert solve(design, GUIDED).standing is Standing.OUTSIDE


def test_supports_that_do_not_settle_leave_the_verdict_open(line, monkeypatch):
    settle = beam_loads.settle

    def unsettled(*args, **fields):
        found = settle(*args, **fields)
        return dataclasses.replace(found, converged=np.zeros_like(found.converged), left=found.left + 50e3)

    monkeypatch.setattr(beam_loads, "settle", unsettled)
    outcome = solve(
        line("U", rest_spacing="6 m", ends=(End(name="west", anchor_limit="40 kN"), End(name="east"))), BEAM
    )
    assert outcome.verdict is Verdict.UNKNOWN
    assert outcome.check("anchor 1").judgement is Judgement.NOT_JUDGED
    assert any("Not converged" in r.words() for r in outcome.remarks)


def test_a_fit_is_verified_with_its_rests(line):
    """Spans so long that the sustained stress governs: what a column of legs holds is tried as a design."""
    design = line("U", sizes={"run": "60 m", "leg": "6.1 m", "width": "2 m"}, rest_spacing="29 m")
    found = fit(design)
    assert found.value is None or found.outcome.verdict is Verdict.FLEXIBLE
    assert all(np.isnan(t.turns) for t in reserve(design)) or solve(design).verdict is Verdict.FLEXIBLE


def test_a_valve_rubs(line):
    valve = Weight(name="valve", mass=5000.0, leg=1, distance="5 m")
    for key in (GUIDED, BEAM):
        light, heavy = (solve(line("U", weights=w), key).check("anchor 1").demand for w in ((), (valve,)))
        assert heavy - light == pytest.approx(0.3 * 5000.0 * 9.80665, rel=1e-6)


def test_an_anchor_is_judged_by_its_level_force(line):
    outcome = solve(line("L", sizes={"run": 30.0, "leg": 8.0}), BEAM)
    east = [v for v in outcome.loads if v.point == "anchor east" and v.name == "force"]
    level = np.sqrt(sum(v.total**2 for v in east if v.positive in ("east", "north", "west", "south")))
    assert outcome.check("anchor 2").demand == pytest.approx(level.max(), rel=1e-12)


def test_cold_spring_reaches_the_anchors(line):
    sprung = solve(line("Z", duty={"cold_spring": 1.0}, friction=0.0), BEAM)
    anchor = sprung.check("anchor 1")
    assert anchor.demand >= max(sprung.results["R_a"], sprung.results["R_m"])
    assert "cold spring counted" in anchor.note


def test_a_raised_loop_is_fitted_without_a_traceback(line):
    raised = line("raised U", sizes={"run": "60 m", "leg": "6 m", "rise": "2.5 m"}, rest_spacing="6 m")
    found = fit(raised)
    assert found.value is not None or found.reason


def test_a_corner_fitting_intensifies_the_axial_stress(line):
    def ledger(kind):
        outcome = solve(line("Z", corners=Corner(kind=kind)), BEAM)
        return next({p: n for p, _, n in s.args}["i_a"] for s in outcome.steps
                    if getattr(s, "symbol", "") == "S_ax")  # fmt: skip

    assert ledger("threaded") == 2.3
    assert ledger("square") == 1.0


def test_pressure_is_counted_once_in_the_run_held_rigidly(line):
    cases = (Case(name="hot", temperature="240 degC", pressure="20 bar"), Case(name="cold", temperature="-10 degC"))
    with_, without = (
        solve(line("U", duty={"cases": cases, "pressure_elongation": p}), BEAM).results["S_x"] for p in (True, False)
    )
    assert with_ == pytest.approx(without, rel=1e-12)


def test_the_rule_asks_a_leg_only_where_the_leg_governs(line):
    turned = {r.key: r for r in ladder(line("L", sizes={"run": 4.0, "leg": 12.0})).rungs}
    assert np.isnan(turned[GUIDED].leg)
    usual = {r.key: r for r in ladder(line("L", sizes={"run": 9.0, "leg": 6.0})).rungs}
    assert usual[GUIDED].leg > 0


def test_a_thin_wall_is_remarked(line):
    thin = dataclasses.replace(line("U"), pipe=pipe("A106-B", outside_diameter="762 mm", wall="6.35 mm"))
    assert any("D/T is above 100" in r.words() for r in solve(thin).remarks)


def test_a_guide_is_fitted_short_of_the_anchor_not_of_the_room(line):
    design = line("L", sizes={"run": 9.0, "leg": 7.0}, first_guide="1 m", limits=Limits(room="2 m"))
    found = fit(design, "layout.first_guide")
    assert "room" not in found.reason
    column = solve(vary(design, "layout.first_guide", np.array([1.0, 3.0, 5.0])), BEAM)
    assert np.all(np.diff(column.leading.ratio) < 0)

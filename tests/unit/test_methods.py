"""The quick methods by hand, their limits, and the ways to ask: solve, ladder, fit, vary, sift, reserve."""

import numpy as np
import pytest

from pipeflex.data.pipes import pipe
from pipeflex.errors import InputError, MissingInput, ScopeError
from pipeflex.methods import METHODS, fit, ladder, reserve, sift, solve, vary
from pipeflex.model.duty import Case, Limits
from pipeflex.model.layout import Corner, End, Point, Segment, Support
from pipeflex.model.record import at, put
from pipeflex.model.words import Judgement, Standing, Verdict
from pipeflex.trace import Given, Tabled, Worked

GUIDED, SCREEN = "guided_cantilever", "screening"
KSI = 6894757.293168361
SQUARE = Corner(kind="square")


@pytest.fixture
def plain(line):
    """A bare line of NPS 8 Sch 40, tied in at 20 degC and warmed to 200 degC: e = 12.7e-6 * 180."""

    def make(shape, sizes, **fields):
        fields.setdefault("duty", {"install_low": "20 degC", "install_high": "20 degC",
                                   "cases": (Case(name="on", temperature="200 degC"),)})  # fmt: skip
        pipe_fields = {"contents_density": 0.0}
        return line(shape, sizes=sizes, size="NPS 8", pipe_fields=pipe_fields, corners=SQUARE, **fields)

    return make


STRAIN = 12.7e-6 * 180  # Table TE-1, metric: carbon steel, 20 to 200 degC
MODULUS = 202e9 + 7e9 * 4 / 100  # Table TM-1, metric: 209 GPa at -75 degC, 202 GPa at 25 degC
HOT = 192e9  # the same at 200 degC
OUTSIDE, WALL = 8.625 * 0.0254, 0.322 * 0.0254
SECOND = np.pi / 64 * (OUTSIDE**4 - (OUTSIDE - 2 * WALL) ** 4)
RANGE = (1.25 * 20.0 + 0.25 * (19.9 + 0.1 * 8 / 100)) * KSI  # Table A-1: 20.0 ksi at 300 degF, 19.9 ksi at 400 degF
STIFF = 3 * MODULUS * OUTSIDE


def test_basis_by_hand(plain):
    """The numbers that all methods start from, out of the printed tables."""
    found = solve(plain("L", {"run": 9.0, "leg": 6.0}), GUIDED).results
    assert found["e"] == pytest.approx(STRAIN, rel=1e-12)
    assert found["E_a"] == pytest.approx(MODULUS, rel=1e-12)
    assert found["I"] == pytest.approx(SECOND, rel=1e-12)
    assert found["S_A"] == pytest.approx(RANGE, rel=1e-9)
    assert found["f"] == 1.0
    steel = np.pi / 4 * (OUTSIDE**2 - (OUTSIDE - 2 * WALL) ** 2) * 7850 * 9.80665
    assert found["w"] == pytest.approx(steel, rel=1e-12)


def test_guided_cantilever_of_an_L(plain):
    """Each leg takes the growth of the other: 9 m and 6 m."""
    outcome = solve(plain("L", {"run": 9.0, "leg": 6.0}), GUIDED)
    assert outcome.leading.demand == pytest.approx(STIFF * STRAIN * 9.0 / 6.0**2, rel=1e-9)
    assert outcome.leading.where == "leg 2, A to east"
    assert outcome.results["l_req"] == pytest.approx(np.sqrt(STIFF * STRAIN * 9.0 / RANGE), rel=1e-9)
    turned = solve(plain("L", {"run": 5.0, "leg": 6.0}), GUIDED)
    assert turned.leading.demand == pytest.approx(STIFF * STRAIN * 6.0 / 5.0**2, rel=1e-9)
    assert turned.leading.where == "leg 1, west to A"


def test_guided_cantilever_of_a_Z(plain):
    """The offset takes both runs' growth; the runs share that of the offset by the cubes of 5 m and 7 m."""
    design = plain("Z", {"run": 12.0, "leg": 4.0, "before": 5.0})
    outcome = solve(design, GUIDED)
    offset = STIFF * STRAIN * 12.0 / 4.0**2
    longer = STIFF * STRAIN * 4.0 * 7.0 / (5.0**3 + 7.0**3)
    assert outcome.leading.demand == pytest.approx(offset, rel=1e-9)
    table = next(s for s in outcome.steps if isinstance(s, Tabled) and s.formula.symbol == "S")
    shown = dict(zip(table.names, dict(table.columns)["S"], strict=True))
    assert shown["leg 3, B to east"] == pytest.approx(longer, rel=1e-9)
    assert shown["leg 1, west to A"] == pytest.approx(longer * 5 / 7, rel=1e-9)
    assert table.names[table.governs] == "leg 2, A to B"


def test_guided_cantilever_of_a_U(plain):
    """The legs halve the growth of the run from anchor to anchor, loop width included."""
    outcome = solve(plain("U", {"run": 40.0, "leg": 6.0, "width": 3.0, "before": 10.0}), GUIDED)
    assert outcome.leading.demand == pytest.approx(STIFF * STRAIN * 20.0 / 6.0**2, rel=1e-9)
    assert outcome.results["l_req"] == pytest.approx(np.sqrt(STIFF * STRAIN * 20.0 / RANGE), rel=1e-9)


def test_guided_cantilever_of_unequal_legs(plain):
    """Legs of 4 m and 3 m share 30 m of run by 64 to 27; the three legs along share 1 m across."""
    points = [(0, 0), (10, 0), (10, 4), (13, 4), (13, 1), (30, 1)]
    design = plain("points", {}, points=tuple(Point(along=float(x), across=float(y)) for x, y in points))
    outcome = solve(design, GUIDED)
    four = STIFF * STRAIN * 30 * 4 / 91
    across = STIFF * STRAIN * 1 * 17 / (10**3 + 3**3 + 17**3)
    assert outcome.leading.demand == pytest.approx(max(four, across), rel=1e-9)
    assert outcome.leading.where == "leg 2, A to B"


def test_guided_cantilever_in_space(plain):
    """A rise takes growth along and across; both movements square to it add as vectors."""
    points = (Point(), Point(along=8.0), Point(along=8.0, up=5.0), Point(along=8.0, up=5.0, across=6.0))
    outcome = solve(plain("points", {}, points=points), GUIDED)
    # along 8 m: legs 5 (up) and 6 (across); across 6 m: legs 8 and 5; up 5 m: legs 8 and 6
    along = [8 * n**3 / (5**3 + 6**3) for n in (5, 6)]
    across = [6 * n**3 / (8**3 + 5**3) for n in (8, 5)]
    up = [5 * n**3 / (8**3 + 6**3) for n in (8, 6)]
    per_leg = {8: np.hypot(across[0], up[0]), 5: np.hypot(along[0], across[1]), 6: np.hypot(along[1], up[1])}
    worst = max(STIFF * STRAIN * y / l**2 for l, y in per_leg.items())
    assert outcome.leading.demand == pytest.approx(worst, rel=1e-9)


def test_anchor_of_a_U_by_hand(plain):
    """12 E_m I e X/(2 l3), friction of the own side to the middle of the loop, heating up and cooling down."""
    design = plain("U", {"run": 40.0, "leg": 6.0, "width": 3.0, "before": 10.0}, friction=0.3)
    outcome = solve(design, GUIDED)
    thrust = 12 * HOT * SECOND * STRAIN * 40.0 / (2 * 6.0**3)
    west = next(v for v in outcome.loads if v.point == "anchor west" and v.kind == "force")
    friction = 0.3 * outcome.results["w"] * (10.0 + (6.0 + 3.0 + 6.0) / 2)
    assert west.states == ("on, heating up", "on, cooling down")
    assert west.thermal.tolist() == pytest.approx([-thrust, -thrust], rel=1e-9)
    assert west.friction.tolist() == pytest.approx([-friction, friction], rel=1e-9)
    assert west.greatest() == pytest.approx(-thrust - friction, rel=1e-9)
    assert west.toward(west.greatest()) == "west"
    assert outcome.check("anchor 1").demand == pytest.approx(thrust + friction, rel=1e-9)
    east = next(v for v in outcome.loads if v.point == "anchor east" and v.kind == "force")
    assert east.toward(east.greatest()) == "east"
    assert abs(east.friction[0]) == pytest.approx(0.3 * outcome.results["w"] * (27.0 + 15.0 / 2), rel=1e-9)


def test_a_cold_line_pulls(plain):
    """A line tied in warm and then cooled pulls its anchors together, with the modulus of the cold."""
    duty = {"install_low": "30 degC", "install_high": "30 degC", "cases": (Case(name="off", temperature="0 degC"),)}
    outcome = solve(plain("U", {"run": 40.0, "leg": 6.0, "width": 3.0}, duty=duty, friction=0.0), GUIDED)
    west = next(v for v in outcome.loads if v.point == "anchor west")
    assert west.toward(west.greatest()) == "east"
    assert outcome.results["S"] > 0
    assert outcome.movements[0].value[0] < 0


def test_reactions_take_the_worse_tie_in_day_and_the_range_takes_neither(plain):
    """Hot case from the coldest day, cold case from the hottest; the stress range spans coldest to hottest."""
    cases = (Case(name="on", temperature="200 degC"), Case(name="off", temperature="0 degC"))
    sizes = {"run": 40.0, "leg": 6.0, "width": 3.0}
    ranges, thrusts = [], []
    for low, high in (("5 degC", "35 degC"), ("20 degC", "20 degC"), ("5 degC", "5 degC"), ("35 degC", "35 degC")):
        duty = {"install_low": low, "install_high": high, "cases": cases}
        outcome = solve(plain("U", sizes, duty=duty, friction=0.0), GUIDED)
        ranges.append(outcome.leading.demand)
        thrusts.append(np.abs(outcome.loads[0].total[[0, 2]]))
    assert ranges == [ranges[0]] * 4
    assert thrusts[0][0] == thrusts[2][0] > thrusts[1][0] > thrusts[3][0]
    assert thrusts[0][1] == thrusts[3][1] > thrusts[1][1] > thrusts[2][1]


def test_room_and_shoes_by_hand(plain):
    design = plain("U", {"run": 40.0, "leg": 6.0, "width": 3.0, "before": 12.0}, limits=Limits(room="6.1 m"))
    outcome = solve(design, GUIDED)
    room = outcome.check("room")
    assert room.demand == pytest.approx(6.0 * (1 + STRAIN) + OUTSIDE / 2, rel=1e-12)
    assert room.judgement == Judgement.EXCEEDED
    shoe = outcome.check("shoe")
    assert shoe.demand == pytest.approx(STRAIN * 25.0, rel=1e-9)
    assert shoe.where == "leg 5, D to east"


def test_verdicts(plain):
    U = {"run": 40.0, "leg": 6.0, "width": 3.0}
    assert solve(plain("U", U), GUIDED).verdict == Verdict.FLEXIBLE
    assert solve(plain("U", U | {"leg": 3.0}), GUIDED).verdict == Verdict.STIFF
    assert solve(plain("U", U, limits=Limits(room="6 m")), GUIDED).verdict == Verdict.NO_ROOM
    weak = (End(name="west", anchor_limit="2 kN"), End(name="east"))
    assert solve(plain("U", U, ends=weak), GUIDED).verdict == Verdict.STIFF


@pytest.mark.parametrize(
    ("shape", "sizes", "square"), [("L", {"run": 16.0, "leg": 15.0}, 15.0), ("Z", {"run": 40.0, "leg": 15.0}, 15.0)]
)
def test_a_near_guide_puts_an_L_or_Z_outside(shape, sizes, square, plain):
    """g = 1.5 sqrt(3 E D e l/S_A), l the leg square to the guided one; just short of it the rule cannot say."""
    needed = 1.5 * np.sqrt(STIFF * STRAIN * square / RANGE)
    if shape == "L":
        needed = max(needed, 1.5 * np.sqrt(STIFF * STRAIN * 16.0 / RANGE))
    far = solve(plain(shape, sizes, first_guide=needed * 1.0001), GUIDED)
    assert far.standing == Standing.INSIDE
    assert far.verdict == Verdict.FLEXIBLE
    near = solve(plain(shape, sizes, first_guide=needed * 0.9999), GUIDED)
    assert near.standing == Standing.OUTSIDE
    assert near.verdict == Verdict.UNKNOWN == "Cannot say"
    assert not near.adequate()
    assert "first guide on leg" in near.outside_reasons[0].words()
    assert near.leading.demand == far.leading.demand


def test_a_near_guide_does_not_put_a_U_outside(plain):
    outcome = solve(plain("U", {"run": 40.0, "leg": 6.0, "width": 3.0}, first_guide=0.2), GUIDED)
    assert outcome.standing == Standing.INSIDE
    assert outcome.verdict == Verdict.FLEXIBLE


def test_a_guide_given_as_a_support_counts_like_the_first_guide(plain):
    guide = (Support(kind="guide", leg=1, distance="15.5 m"),)
    outcome = solve(plain("L", {"run": 16.0, "leg": 15.0}, supports=guide), GUIDED)
    assert outcome.standing == Standing.OUTSIDE
    assert "0.50" in outcome.outside_reasons[0].words()


@pytest.mark.parametrize(
    "fields",
    [
        {"supports": (Support(kind="line stop", leg=1, distance=1.0),)},
        {"supports": (Support(kind="guide", leg=2, distance=1.0),)},
        {"segments": (Segment(leg=1, start=0.0, end=1.0, temperature_offset=10.0),)},
        {"duty": {"cases": (Case(name="on", temperature="200 degC", first_end_movement=(0.01, 0.0, 0.0)),)}},
    ],
    ids=["line stop", "guide between", "segment", "end movement"],
)
def test_what_the_rule_cannot_see_puts_it_outside(fields, plain):
    outcome = solve(plain("U", {"run": 40.0, "leg": 6.0, "width": 3.0}, **fields), GUIDED)
    assert outcome.standing == Standing.OUTSIDE
    assert outcome.verdict == Verdict.UNKNOWN
    words = "; ".join(r.words() for r in outcome.outside_reasons)
    assert words
    assert "[" not in words


@pytest.mark.parametrize("key", [GUIDED, SCREEN])
def test_a_run_that_no_rule_can_answer(key, line):
    straight = line("straight", sizes={"run": "30 m"}, corners=())
    with pytest.raises(ScopeError):
        solve(straight, key)


def test_a_leg_at_a_slant_is_named(plain):
    points = (Point(), Point(along=5.0), Point(along=8.0, across=4.0))
    with pytest.raises(ScopeError, match="leg 2"):
        solve(plain("points", {}, points=points), GUIDED)


def test_screening_by_hand(plain):
    """D y/(L - U)2 against 0.208 S_A/E_a: an L of 9 m and 6 m."""
    outcome = solve(plain("L", {"run": 9.0, "leg": 6.0}), SCREEN)
    apart = np.hypot(9.0, 6.0)
    assert outcome.leading.demand == pytest.approx(OUTSIDE * STRAIN * apart / (15.0 - apart) ** 2, rel=1e-9)
    assert outcome.leading.limit == pytest.approx(0.208 * RANGE / MODULUS, rel=1e-9)
    assert outcome.standing == Standing.INSIDE
    assert outcome.loads == ()


@pytest.mark.parametrize("fields", [{"first_guide": "5 m"}, {"guide_spacing": "6 m"},
                                    {"supports": (Support(kind="guide", leg=1, distance=2.0),)},
                                    {"supports": (Support(kind="line stop", leg=1, distance=2.0),)}])  # fmt: skip
def test_screening_is_outside_where_anything_restrains_between(fields, plain):
    outcome = solve(plain("L", {"run": 9.0, "leg": 6.0}, **fields), SCREEN)
    assert outcome.standing == Standing.OUTSIDE
    assert "Restraint between" in outcome.outside_reasons[0].words()
    assert outcome.verdict == Verdict.UNKNOWN


def test_methods_rise_in_rank():
    assert [m.rank for m in METHODS] == list(range(1, len(METHODS) + 1))
    assert [m.key for m in METHODS][:2] == [SCREEN, GUIDED]


def test_an_unknown_method_names_the_known(line):
    with pytest.raises(InputError) as caught:
        solve(line(), "crystal ball")
    assert caught.value.faults[0].near == tuple(m.key for m in METHODS)


def test_ladder(line):
    """All methods in order, the rule with a guide between outside; then the comparison, which has no standing."""
    design = line("U", first_guide="2 m", duty={"rule_stress": "40 MPa"})
    found = ladder(design)
    rungs = {r.key: r for r in found.rungs}
    assert [r.key for r in found.rungs[: len(METHODS)]] == [m.key for m in METHODS]
    assert rungs[SCREEN].standing == Standing.OUTSIDE
    assert "restraint between" in rungs[SCREEN].reason.lower()
    guided = solve(design, GUIDED)
    assert rungs[GUIDED].ratio == guided.leading.ratio
    assert rungs[GUIDED].leg == guided.results["l_req"]
    last = found.rungs[-1]
    assert last.reference
    assert "compar" in last.reason
    growth = guided.results["e"] * 40.0
    asked = np.sqrt(3 * guided.results["E_a"] * design.pipe.outside_diameter * growth / 40e6)
    assert last.ratio == pytest.approx((asked / 15.0) ** 2, rel=1e-9)
    assert last.leg == pytest.approx((asked - 3.0) / 2, rel=1e-9)
    assert found.best.method != "developed_length"
    assert not any(r.reference for r in ladder(line("L")).rungs)


def test_the_step_of_a_sheet_is_the_check(line):
    """What is worked out last for a symbol is what the checks and results say."""
    for key in (SCREEN, GUIDED):
        outcome = solve(line("U"), key)
        worked = {s.symbol: s.value for s in outcome.steps if isinstance(s, (Worked, Given))}
        for symbol, value in outcome.results.items():
            if symbol in worked:
                assert worked[symbol] == value
        assert outcome.leading.demand in worked.values()
        assert outcome.leading.limit in worked.values()


def test_vary_and_maps(line):
    legs = np.linspace(4, 8, 5)
    column = solve(vary(line(), "layout.sizes.leg", legs), GUIDED)
    singles = [solve(put(line(), "layout.sizes.leg", float(leg)), GUIDED).leading.demand for leg in legs]
    assert column.leading.demand.tolist() == singles
    both = vary(vary(line(), "layout.sizes.leg", legs), "layout.friction", np.linspace(0, 0.4, 5))
    assert both.rows == 5
    with pytest.raises(InputError, match="axes"):
        vary(line(), "layout.sizes.leg", np.ones((2, 2)))
    with pytest.raises(InputError):
        vary(line(), "layout.sizes.lag", legs)


def test_sift_drops_the_rows_at_fault_and_keeps_the_rest(line):
    t = [400.0, 2000.0, 450.0, 100.0, 500.0]
    column = vary(line(), "duty.cases.operating.temperature", t)
    outcome, kept, errors = sift(column, lambda d: solve(d, GUIDED))
    assert kept.tolist() == [0, 2, 4]
    assert {r for e in errors for f in e.faults for r in f.rows} >= {1}
    alone = [solve(put(line(), "duty.cases.operating.temperature", t[i]), GUIDED).leading.demand for i in kept]
    assert outcome.leading.demand.tolist() == alone
    nothing, kept, _ = sift(vary(line(), "duty.cases.operating.temperature", [2000.0]), lambda d: solve(d, GUIDED))
    assert nothing is None
    assert len(kept) == 0


@pytest.mark.parametrize("shape", ["L", "Z", "U"])
@pytest.mark.parametrize("hot", ["120 degC", "240 degC", "300 degC"])
def test_reserve_turns_where_it_says(shape, hot, line):
    """Solved just short of the turning value the answer is as now, at it the answer has changed."""
    design = line(shape, hot=hot)
    now = solve(design, GUIDED).adequate()
    turned = 0
    for turn in reserve(design, key=GUIDED):
        assert turn.present == at(design, turn.path)
        if np.isnan(turn.turns):
            continue
        turned += 1
        step = 1e-6 * (turn.turns - turn.present)
        before, after = (
            solve(put(design, turn.path, value), GUIDED).adequate() for value in (turn.turns - step, turn.turns)
        )
        assert (before, after) == (now, not now), turn.path
    assert turned >= 1


def test_reserve_needs_a_value_to_start_from(line):
    with pytest.raises(MissingInput):
        reserve(line(), ["layout.first_guide"], key=GUIDED)


def test_fit_says_when_nothing_holds_and_what_would_help(line):
    tight = line("U", limits=Limits(room="2 m"))
    found = fit(tight, key=GUIDED)
    assert (found.value, found.outcome, found.design) == (None, None, None)
    assert "2.00" in found.reason
    longer = fit(line("U"), key=GUIDED)
    assert f"{longer.value:.2f}" in found.help
    assert "room" in found.help
    near = fit(line("L", first_guide="1 m"), key=GUIDED)
    assert near.value is None
    assert "guide" in near.help
    weak = (End(name="west", anchor_limit="10 N"), End(name="east"))
    anchor = fit(line("U", ends=weak), key=GUIDED)
    assert anchor.value is None
    assert "anchor" in anchor.help.lower()


def test_fit_keeps_every_other_check(line):
    """Not the stress alone: the room bounds the leg, an anchor's limit lengthens it."""
    free = fit(line("U"), key=GUIDED)
    weak = (End(name="west", anchor_limit=0.9 * free.outcome.check("anchor 1").demand), End(name="east"))
    longer = fit(line("U", ends=weak, friction=0.0), key=GUIDED)
    assert longer.value >= free.value
    assert longer.outcome.adequate()
    assert fit(line("U"), step=0.5, key=GUIDED).value == pytest.approx(0.5 * np.ceil(free.value / 0.5))
    for bad in ({"step": 0.0}, {"step": float("nan")}):
        with pytest.raises(InputError):
            fit(line("U"), key=GUIDED, **bad)


def test_a_brazed_drawn_tube_is_judged_annealed(line):
    """The allowable of the annealed row, said in a remark; a soldered joint keeps the drawn row."""
    ranges = {}
    for joint in ("brazed", "soldered"):
        design = line(material="copper drawn", hot="90 degC", pipe_fields={"joint": joint})
        outcome = solve(design, GUIDED)
        ranges[joint] = outcome.results["S_A"]
        said = any("takes the allowable stress of copper annealed" in r.words() for r in outcome.remarks)
        assert said is (joint == "brazed")
    assert ranges["soldered"] > 1.5 * ranges["brazed"]


def test_an_edition_without_its_own_table_says_whose_it_takes(line):
    words = [r.words() for r in solve(line(code_key="B31.3-2022"), GUIDED).remarks]
    assert any("the nearest held for B31.3-2022" in w for w in words)
    own = [r.words() for r in solve(line(), GUIDED).remarks]
    assert not any("the nearest held" in w for w in own)


def test_pressure_elongation_only_where_asked(line):
    cases = (Case(name="on", temperature="200 degC", pressure="40 bar"), Case(name="off", temperature="0 degC"))
    without, counted = (
        solve(line("U", duty={"cases": cases, "pressure_elongation": asked}), GUIDED) for asked in (False, True)
    )
    steel = pipe("A106-B", "DN 200", "40")
    inside = steel.outside_diameter - 2 * steel.wall
    e_P = 40e5 * inside**2 * 0.4 / (without.results["E_a"] * (steel.outside_diameter**2 - inside**2))
    assert counted.results["e"] - without.results["e"] == pytest.approx(e_P, rel=1e-9)
    assert any("is not counted" in r.words() for r in without.remarks)
    assert any("is counted" in r.words() for r in counted.remarks)
    assert any(s.symbol == "e_P" for s in counted.steps if isinstance(s, Worked))


def test_forms_not_yet_computed_are_said(line):
    """Cold spring, elastic ends, limits of nozzles: never ignored in silence."""
    ends = (End(name="west", stiffness="10 kN/mm", force_limits="1 kN"), End(name="east"))
    words = " ".join(r.words() for r in solve(line(duty={"cold_spring": 0.5}, ends=ends), GUIDED).remarks)
    for word in ("Cold spring", "rigid", "limits of the ends", "sustained stress"):
        assert word in words

"""What must hold for any design: finite numbers or a named error, rows as their single solves, and plain physics."""

import warnings

import numpy as np
import pytest

from pipeflex.data import lookup
from pipeflex.data.materials import material, material_keys
from pipeflex.errors import PipeflexError, ScopeError
from pipeflex.mechanics.expansion import state_strain
from pipeflex.methods import fit, sift, solve, vary
from pipeflex.model.outcome import Outcome
from pipeflex.model.pipe import Pipe
from pipeflex.present import DISPLAY, shown
from pipeflex.trace import Given, Worked

from .designs import SHAPES, SQUARE, Maker, check_finite, named, numbers_of

QUICK = ("screening", "guided_cantilever")


@pytest.fixture(autouse=True)
def nothing_odd():
    """Every floating-point oddity and every warning is an error."""
    with np.errstate(all="raise", under="ignore"), warnings.catch_warnings():
        warnings.simplefilter("error")
        yield


def answered(maker: Maker, key: str) -> tuple[Outcome | None, int, int]:
    """Outcome of the rows that can be answered, how many they are, and how many were refused by name."""
    drawn = maker.rows
    design, _ = maker.sound()
    if design is None:
        return None, 0, drawn
    try:
        outcome, kept, errors = sift(design, lambda d: solve(d, key))
    except ScopeError as error:  # the skeleton is out of the method's scope
        named(error)
        return None, 0, drawn
    for error in errors:
        named(error)
    return outcome, len(kept), drawn - len(kept)


@pytest.mark.parametrize("key", QUICK)
@pytest.mark.parametrize(("share", "least"), [(0.0, 2500), (0.01, 800), (0.1, 20)], ids=["sensible", "some bad", "bad"])
def test_random_designs_give_finite_numbers_or_a_named_error(key, share, least):
    """Columns of mixed materials, sizes and temperatures; some or many of their numbers senseless."""
    right = wrong = 0
    for seed in range(40):
        outcome, kept, refused = answered(Maker(seed, 100, share), key)
        if outcome is not None:
            check_finite(outcome)
        right, wrong = right + kept, wrong + refused
    assert right + wrong == 4000
    assert right > least
    assert wrong > 0


@pytest.mark.parametrize("key", QUICK)
@pytest.mark.parametrize("share", [0.0, 0.05])
def test_random_single_designs(key, share):
    """One row each, as a desk asks: traced, in words, judged."""
    verdicts = set()
    for seed in range(150):
        design, _ = Maker(seed, 1, share).sound()
        if design is None:
            continue
        try:
            outcome = solve(design.row(0), key)
        except PipeflexError as error:
            named(error)
            continue
        check_finite(outcome)
        verdicts.add(str(outcome.verdict))
        for remark in (*outcome.remarks, *outcome.outside_reasons):
            words = remark.words("us")
            assert "nan" not in words.lower().split()
            assert "{" not in words
            assert "[" not in words
    assert len(verdicts) >= 2


def test_extremes_of_every_field_are_answered_or_refused(line):
    """One number at a time from next to nothing to next to endless."""
    design = line("U", duty={"rule_stress": "40 MPa", "pressure_elongation": True}, guide_spacing="3 m")
    paths = [
        *(f"pipe.{n}" for n in ("outside_diameter", "wall", "corrosion_allowance", "contents_density")),
        *("pipe.insulation_thickness", "pipe.insulation_density", "pipe.mill_tolerance"),
        *(f"layout.sizes.{n}" for n in ("run", "leg", "width")),
        *("layout.friction", "layout.guide_spacing", "layout.ends.0.anchor_limit"),
        *(f"duty.{n}" for n in ("install_low", "install_high", "cycles", "greatest_range_factor", "rule_stress")),
        *("duty.cases.operating.temperature", "duty.cases.operating.pressure"),
        *("limits.room", "limits.shoe_stop", "limits.guide_limit", "limits.least_anchor"),
    ]
    values = [*(10.0**p for p in range(-300, 301, 25)), 0.0, -1.0, -1e300, 1.0, 500.0, np.inf, -np.inf, np.nan]
    answers = 0
    for path in paths:
        for value in values:
            for key in QUICK:
                try:
                    check_finite(solve(vary(design, path, [value]), key))
                    answers += 1
                except PipeflexError as error:
                    named(error)
    assert answers > 200


@pytest.mark.parametrize("key", QUICK)
@pytest.mark.parametrize("seed", range(12))
def test_a_row_of_a_mixed_column_is_its_single_solve(seed, key):
    """To the bit: every check, load, movement, result and remark."""
    design, _ = Maker(seed, 12, shapes=SQUARE).sound()
    assert design is not None
    column = solve(design, key)
    for i in range(design.rows):
        row, single = column.row(i), solve(design.row(i), key)
        assert (row.verdict, row.outside) == (single.verdict, single.outside)
        assert [r.words() for r in row.remarks] == [r.words() for r in single.remarks]
        assert [r.words() for r in row.outside_reasons] == [r.words() for r in single.outside_reasons]
        ours, theirs = dict(numbers_of(row)), dict(numbers_of(single))
        assert ours.keys() == theirs.keys()
        for path, value in ours.items():
            assert value.tobytes() == theirs[path].tobytes(), path


@pytest.mark.parametrize("seed", range(6))
def test_a_trace_holds_one_value_a_symbol(seed):
    """What is printed for a symbol, given, worked out or put into a formula, is one number all through."""
    for key in QUICK:
        design, _ = Maker(seed, 8, shapes=SQUARE).sound()
        for i in range(design.rows):
            outcome = solve(design.row(i), key)
            bound = {s.symbol: s.value for s in outcome.steps if isinstance(s, (Given, Worked))}
            for step in outcome.steps:
                if isinstance(step, Worked):
                    for parameter, symbol, value in step.args:
                        if not step.where and symbol in bound:
                            assert value == bound[symbol], (key, step.symbol, parameter)


def test_growth_is_additive_odd_and_zero_at_equal_temperatures():
    rng = np.random.default_rng(3)
    for key in material_keys():
        for expansion in ("current", "older"):
            one = material(key, expansion)
            curve = one.expansion.temperature
            t = rng.uniform(curve[0], curve[-1], (3, 500))
            pipe = Pipe(outside_diameter=0.1, wall=0.005, materials=(one,))
            a, b, c = lookup.values_at(pipe, lookup.expansion, t, "temperature")
            assert np.all(state_strain(e_1=a, e_0=a) == 0)
            there, back = state_strain(e_1=b, e_0=a), state_strain(e_1=a, e_0=b)
            assert np.all(there == -back)
            onward, whole = state_strain(e_1=c, e_0=b), state_strain(e_1=c, e_0=a)
            assert np.allclose(there + onward, whole, rtol=0, atol=1e-17)
            hotter = t[1] > t[0]
            assert np.all((b - a)[hotter] > 0)


@pytest.mark.parametrize("seed", range(8))
def test_friction_never_helps_an_anchor(seed):
    """Greatest load of every anchor with friction is not below that without."""
    design, _ = Maker(seed, 50, shapes=SQUARE).sound()
    rough = solve(design, "guided_cantilever")
    smooth = solve(vary(design, "layout.friction", np.zeros(design.rows)), "guided_cantilever")
    more = 0
    for one, other in zip(rough.loads, smooth.loads, strict=True):
        assert np.all(np.abs(one.greatest()) >= np.abs(other.greatest()))
        more += np.sum(np.abs(one.greatest()) > np.abs(other.greatest()))
    assert more > 0
    assert np.array_equal(rough.check("range").demand, smooth.check("range").demand)


@pytest.mark.parametrize("shape", SQUARE)
def test_hotter_never_lowers_the_stress(shape, line):
    """Nor does it raise the allowable range, nor lower the share of it that is used."""
    for key in material_keys():
        for expansion in ("current", "older"):
            design = line(shape, material=key, expansion=expansion)
            last = min(c.temperature[-1] for c in (design.pipe.material.expansion, design.pipe.material.modulus,
                                                   *design.pipe.material.stresses.values()))  # fmt: skip
            t = np.linspace(310.0, last, 400)
            hot = solve(vary(design, "duty.cases.operating.temperature", t), "guided_cantilever")
            assert np.all(np.diff(hot.leading.demand) >= 0)
            assert np.all(np.diff(hot.results["S_A"]) <= 0)
            assert np.all(np.diff(hot.leading.ratio) >= 0)


def test_a_longer_run_never_lowers_the_stress_and_a_longer_leg_of_a_loop_never_raises_it(line):
    runs = solve(vary(line("U"), "layout.sizes.run", np.linspace(5, 200, 300)), "guided_cantilever")
    assert np.all(np.diff(runs.leading.demand) > 0)
    legs = solve(vary(line("U"), "layout.sizes.leg", np.linspace(0.5, 20, 300)), "guided_cantilever")
    assert np.all(np.diff(legs.leading.demand) < 0)


@pytest.mark.parametrize("shape", SQUARE)
def test_fit_then_solve_meets_the_target(shape, line):
    """The fitted leg meets the target, one step less does not (or lies before the peak of the stress)."""
    met = 0
    for hot in ("120 degC", "200 degC", "280 degC", "340 degC"):
        for target in (0.5, 0.8, 1.0):
            design = line(shape, hot=hot)
            found = fit(design, target=target, key="guided_cantilever")
            if found.value is None:
                assert found.reason
                assert found.help
                continue
            met += 1
            again = solve(found.design, "guided_cantilever")
            assert again.leading.ratio <= target
            assert again.adequate()
            assert found.outcome.leading.demand == again.leading.demand
            assert found.design.layout.sizes["leg"] == found.value
            assert found.value / 0.05 == pytest.approx(round(found.value / 0.05), abs=1e-9)
            if shape == "U":
                less = vary(design, "layout.sizes.leg", [found.value - 0.05])
                assert solve(less, "guided_cantilever").leading.ratio[0] > target
    assert met >= 6


@pytest.mark.parametrize("shape", SQUARE)
@pytest.mark.parametrize("key", QUICK)
def test_metric_and_customary_entry_give_the_same_answer(shape, key, line):
    """The same line typed in millimetres and degC, and in inches and degF with the digits those need."""
    rng = np.random.default_rng(11)

    def us(text, kind):
        number, _, unit = text.partition(" ")
        factor = {"m": 1.0, "mm": 1e-3, "bar": 1e5, "kg/m**3": 1.0, "degC": 1.0}[unit]
        si = float(number) * factor + (273.15 if unit == "degC" else 0.0)
        return f"{shown(si, kind, 'us'):.13g} {DISPLAY[kind][1].pint}"

    def typed(kind, low, high, unit):
        text = f"{rng.uniform(low, high):.4g} {unit}"
        return {"metric": text, "us": us(text, kind)}

    for _ in range(10):
        sizes = {"run": typed("length", 15, 60, "m"), "leg": typed("length", 2, 9, "m")}
        hot, cold = typed("temperature", 80, 370, "degC"), typed("temperature", -25, 0, "degC")
        fields = {
            "outside_diameter": typed("pipe dimension", 60, 600, "mm"),
            "wall": typed("pipe dimension", 4, 12, "mm"),
            "insulation_thickness": typed("pipe dimension", 20, 120, "mm"),
            "contents_density": typed("density", 100, 1000, "kg/m**3"),
        }
        low, high = typed("temperature", 1, 9, "degC"), typed("temperature", 20, 35, "degC")
        metric, customary = (
            solve(
                line(
                    shape,
                    hot=hot[units],
                    cold=cold[units],
                    pipe_fields={k: v[units] for k, v in fields.items()},
                    duty={"install_low": low[units], "install_high": high[units]},
                    sizes={k: v[units] for k, v in sizes.items()},
                ),
                key,
            )
            for units in ("metric", "us")
        )
        ours, theirs = dict(numbers_of(metric)), dict(numbers_of(customary))
        assert ours.keys() == theirs.keys()
        for path, value in ours.items():
            if path.endswith(".place"):  # of two equal legs either may govern
                continue
            assert value == pytest.approx(theirs[path], rel=1e-9, abs=1e-12), path


def test_shapes_of_the_tests_are_those_of_the_package():
    from pipeflex.model.layout import SHAPES as known

    assert set(SHAPES) == set(known)

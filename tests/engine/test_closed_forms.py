"""The beam engine against closed forms of ordinary beam theory.

The square-cornered frames are derived by unit-load integrals along the centre line (bending only); see S. Timoshenko,
D. H. Young, Theory of Structures, 2nd ed. 1965.  Figures "with stretch" come from the same integrals with axial terms.
"""

import numpy as np
import pytest

from pipeflex.mechanics.beam import (
    End,
    Hold,
    PointWeight,
    Section,
    States,
    Support,
    assemble,
    linear,
    moments,
    movements,
    residual,
    settle,
    support_movements,
)
from pipeflex.mechanics.elastic_centre import elastic_centre

INCH, LBF = 0.0254, 4.4482216152605
PSI = LBF / INCH**2
NO_STRETCH = 1e9
REST = Hold(direction="vertical", lifts=True)
FREE = End(stiffness=(0.0,) * 6)

E, A, I = 200e9, 4.8e-3, 28.0e-6
SECTION = Section(A, I)


def line(*points):
    return np.array(points, dtype=float).T


def nps6():
    outside, wall = 6.625, 0.280
    inside = outside - 2 * wall
    return np.pi / 4 * (outside**2 - inside**2) * INCH**2, np.pi / 64 * (outside**4 - inside**4) * INCH**4


FRAMES = {
    "square U": (
        [(0, 0), (540, 0), (540, 120), (660, 120), (660, 0), (1200, 0)],
        {
            "F": 1013.09644,
            "F_x": 1013.09644,
            "M_a": 20261.9288,
            "M_b": 20261.9288,
            "M_max": 101309.644,
            "stretch": 1010.4,
        },
    ),
    "unequal L": (
        [(0, 0), (360, 0), (360, 180)],
        {
            "F": 847.467792,
            "F_x": 810.477154,
            "M_a": 35120.6767,
            "M_b": 91854.0774,
            "M_max": 91854.0774,
            "stretch": 845.84,
        },
    ),
    "Z": (
        [(0, 0), (300, 0), (300, 120), (480, 120)],
        {
            "F": 1718.20084,
            "F_x": 1615.08027,
            "M_a": 70219.9084,
            "M_b": 17387.1475,
            "M_max": 105665.522,
            "stretch": 1711.4,
        },
    ),
}


@pytest.mark.parametrize("name", FRAMES)
def test_square_frame_in_bending_only(name):
    points, expected = FRAMES[name]
    area, inertia = nps6()
    corners = line(*((x * INCH, y * INCH, 0) for x, y in points))
    run = assemble(corners, Section(area * NO_STRETCH, inertia), modulus=29.5e6 * PSI)
    answer = linear(run, States(strain=0.002343))
    assert np.linalg.norm(answer.end_b[0, :3, 0]) / LBF == pytest.approx(expected["F"], rel=1e-8)
    assert answer.end_b[0, 0, 0] / LBF == pytest.approx(expected["F_x"], rel=1e-8)
    assert abs(answer.end_a[0, 5, 0]) / LBF / INCH == pytest.approx(expected["M_a"], rel=1e-8)
    assert abs(answer.end_b[0, 5, 0]) / LBF / INCH == pytest.approx(expected["M_b"], rel=1e-8)
    assert moments(answer).resultant().max() / LBF / INCH == pytest.approx(expected["M_max"], rel=1e-8)


@pytest.mark.parametrize("name", FRAMES)
def test_square_frame_with_stretch(name):
    points, expected = FRAMES[name]
    area, inertia = nps6()
    corners = line(*((x * INCH, y * INCH, 0) for x, y in points))
    run = assemble(corners, Section(area, inertia), modulus=29.5e6 * PSI)
    force = np.linalg.norm(linear(run, States(strain=0.002343)).end_b[0, :3, 0]) / LBF
    assert force == pytest.approx(expected["stretch"], abs=0.06)


@pytest.mark.parametrize("name", FRAMES)
def test_elastic_centre_of_square_frame(name):
    points, expected = FRAMES[name]
    _, inertia = nps6()
    corners = INCH * np.array(points, dtype=float).T
    found = elastic_centre(corners, 0.002343 * (corners[:, -1] - corners[:, 0]), 29.5e6 * PSI * inertia)
    assert np.hypot(*found.force[:, 0]) / LBF == pytest.approx(expected["F"], rel=1e-8)
    assert abs(found.moment_a[0]) / LBF / INCH == pytest.approx(expected["M_a"], rel=1e-8)
    assert abs(found.moment_b[0]) / LBF / INCH == pytest.approx(expected["M_b"], rel=1e-8)
    assert np.abs(found.moment).max() / LBF / INCH == pytest.approx(expected["M_max"], rel=1e-8)


def test_elastic_centre_of_square_u_lies_20_in_up():
    corners = INCH * np.array(FRAMES["square U"][0], dtype=float).T
    found = elastic_centre(corners, np.array([0.01, 0.0]), 1.0)
    assert found.centre[:, 0] / INCH == pytest.approx([600.0, 20.0])


def test_elastic_centre_with_bends_is_the_beam_without_stretch():
    rng = np.random.default_rng(4)
    rows = 7
    corners = np.array([[0, 9, 9, 13, 15, 22.0], [0, 0, 5, 6, 1, -2]])[:, :, None] + rng.uniform(
        -0.6, 0.6, (2, 6, rows)
    )
    factor = rng.uniform(1.0, 15.0, (4, rows))
    radius = rng.uniform(0.1, 0.6, (4, rows))
    end = rng.uniform(-0.02, 0.02, (2, rows))
    strain = 0.0021
    found = elastic_centre(corners, strain * (corners[:, -1] - corners[:, 0]) - end, E * I, radius, factor)
    space = np.concatenate([corners, np.zeros((1, 6, rows))])
    run = assemble(space, Section(1e6, I), modulus=E, radius=radius, bend_factor=factor)
    moved = np.zeros((1, 6, rows))
    moved[0, :2] = end
    answer = linear(run, States(strain=strain, movement_b=moved))
    scale = np.abs(found.moment).max()
    assert answer.end_b[0, :2] == pytest.approx(found.force, rel=1e-7, abs=1e-6)
    assert answer.end_a[0, 5] == pytest.approx(found.moment_a, rel=1e-7, abs=1e-7 * scale)
    assert answer.end_b[0, 5] == pytest.approx(found.moment_b, rel=1e-7, abs=1e-7 * scale)
    bends = moments(answer).in_plane[0][:, run.plan.bend >= 0]
    assert np.abs(bends).swapaxes(0, 1).reshape(-1, rows) == pytest.approx(
        np.abs(found.moment[1:-1]), rel=1e-6, abs=1e-7 * scale
    )


def test_guided_cantilever():
    """A fixed-guided beam moved sideways: F = 12 E I d/L3, M = 6 E I d/L2."""
    length, shift = 5.0, 0.03
    moved = np.zeros((1, 6, 1))
    moved[0, 1] = shift
    run = assemble(line((0, 0, 0), (length, 0, 0)), SECTION, modulus=E)
    answer = linear(run, States(strain=0.0, movement_b=moved))
    assert answer.end_b[0, 1, 0] == pytest.approx(-12 * E * I * shift / length**3)
    assert answer.end_a[0, 5, 0] == pytest.approx(6 * E * I * shift / length**2 * -1 * -1)
    assert movements(answer, (0.5,)).movement[0, 1, 0, 0] == pytest.approx(shift / 2)
    assert movements(answer, (0.25,)).movement[0, 1, 0, 0] == pytest.approx(shift * (3 / 16 - 2 / 64))


def test_imposed_rotation_of_an_end():
    """M = 4 E I theta/L at the turned end, 2 E I theta/L at the other; torsion G J theta/L about the axis."""
    length, turn = 4.0, 0.01
    moved = np.zeros((2, 6, 1))
    moved[0, 5] = moved[1, 3] = turn
    run = assemble(line((0, 0, 0), (length, 0, 0)), SECTION, modulus=E, poisson=0.3)
    answer = linear(run, States(strain=0.0, movement_a=moved))
    assert answer.end_a[0, 5, 0] == pytest.approx(-4 * E * I * turn / length)
    assert answer.end_b[0, 5, 0] == pytest.approx(-2 * E * I * turn / length)
    assert answer.end_a[1, 3, 0] == pytest.approx(-E / 2.6 * 2 * I * turn / length)


def test_restrained_straight():
    run = assemble(line((0, 0, 0), (30, 0, 0)), SECTION, modulus=E)
    answer = linear(run, States(strain=0.0012))
    assert answer.end_b[0, 0, 0] == pytest.approx(E * A * 0.0012)
    assert moments(answer).axial[0, :, 0, 0] == pytest.approx(-E * A * 0.0012)


def test_restrained_straight_on_elastic_ends():
    stiffness, length = 2e6, 30.0
    soft = End(stiffness=(stiffness, *(np.inf,) * 5))
    run = assemble(line((0, 0, 0), (length, 0, 0)), SECTION, modulus=E, ends=(soft, soft))
    answer = linear(run, States(strain=0.0012))
    force = 0.0012 * length / (2 / stiffness + length / E / A)
    assert answer.end_b[0, 0, 0] == pytest.approx(force)
    assert answer.start[0, 0, 0] == pytest.approx(-force / stiffness)


def test_two_pieces_of_different_pipe_and_temperature():
    """Bar of two lengths: F = (e1 L1 + e2 L2)/(L1/(E1 A1) + L2/(E2 A2))."""
    from pipeflex.mechanics.beam import Break

    run = assemble(
        line((0, 0, 0), (10, 0, 0)),
        Section(np.array([[A], [2 * A]]), np.array([[I], [2 * I]])),
        modulus=np.array([[E], [0.9 * E]]),
        breaks=[Break(leg=0, distance=4.0)],
    )
    answer = linear(run, States(strain=np.array([0.001, 0.002])[None, :, None]))
    assert answer.end_b[0, 0, 0] == pytest.approx(0.016 / (4 / E / A + 6 / (0.9 * E * 2 * A)))


def test_semicircle_between_anchors():
    """Half ring in two 90 degree bends, bending only: about the elastic centre 2R/pi, F = E I d/(R3 (pi/2 - 4/pi))."""
    radius, strain = 2.0, 0.0015
    corners = line((0, 0, 0), (0, radius, 0), (2 * radius, radius, 0), (2 * radius, 0, 0))
    run = assemble(corners, Section(NO_STRETCH, I), modulus=E, radius=radius)
    answer = linear(run, States(strain=strain))
    force = E * I * strain * 2 * radius / (radius**3 * (np.pi / 2 - 4 / np.pi))
    assert answer.end_b[0, 0, 0] == pytest.approx(force, rel=1e-9)
    assert abs(answer.end_b[0, 5, 0]) == pytest.approx(force * 2 * radius / np.pi, rel=1e-9)


def test_quarter_bend_tip_loaded():
    """Castigliano, quarter bend fixed at one end (Timoshenko, Strength of Materials I, art. 80): with k = 1, in plane
    u = pi P R3/(4 E I), and out of plane P R3 [pi/4 /(E I) + (3 pi/4 - 2)/(G J)]."""
    radius, pull = 1.5, 1000.0
    hang = PointWeight(leg=1, distance=radius, force=pull)
    for corners, in_plane in (
        (line((0, 0, 0), (0, 0, radius), (radius, 0, radius)), True),
        (line((0, 0, 0), (radius, 0, 0), (radius, radius, 0)), False),
    ):
        run = assemble(corners, Section(NO_STRETCH, I), modulus=E, radius=radius, weights=[hang], ends=(End(), FREE))
        drop = -movements(linear(run, States(strain=0.0, weight=1.0)), (1.0,)).movement[0, 2, -1, 0]
        soft = np.pi / 4 / (E * I)
        if not in_plane:
            soft += (3 * np.pi / 4 - 2) / (E / 2.6 * 2 * I)
        assert drop == pytest.approx(pull * radius**3 * soft, rel=1e-9)


@pytest.mark.parametrize(("ends", "sag", "moment"), [("fixed", 1 / 384, 1 / 24), ("simple", 5 / 384, 1 / 8)])
def test_sag_of_a_span(ends, sag, moment):
    length, weight = 8.0, 600.0
    pinned = End(stiffness=(np.inf,) * 4 + (0.0, 0.0))
    both = (End(), End()) if ends == "fixed" else (pinned, pinned)
    run = assemble(line((0, 0, 0), (length, 0, 0)), SECTION, modulus=E, weight=weight, ends=both)
    answer = linear(run, States(strain=0.0, weight=1.0))
    assert -movements(answer, (0.5,)).movement[0, 2, 0, 0] == pytest.approx(sag * weight * length**4 / (E * I))
    middle = moments(answer)
    assert middle.fraction[0, 0, 0] == pytest.approx(0.5)
    assert middle.resultant()[0, 1, 0, 0] == pytest.approx(moment * weight * length**2)


def test_propped_cantilever_peaks_at_five_eighths():
    length, weight = 8.0, 600.0
    prop = End(stiffness=(0, 0, np.inf, 0, 0, 0))
    run = assemble(line((0, 0, 0), (length, 0, 0)), SECTION, modulus=E, weight=weight, ends=(End(), prop))
    answer = linear(run, States(strain=0.0, weight=1.0))
    found = moments(answer)
    assert found.fraction[0, 0, 0] == pytest.approx(5 / 8)
    assert found.resultant()[0, 1, 0, 0] == pytest.approx(9 / 128 * weight * length**2)
    assert answer.end_b[0, 2, 0] == pytest.approx(-3 / 8 * weight * length)


def test_hot_top_lifts_the_middle():
    """Free curvature kappa of a simply supported span lifts its middle by kappa L2/8 without force."""
    length, bow = 12.0, 0.0004
    pinned = End(stiffness=(np.inf, np.inf, np.inf, np.inf, 0.0, 0.0))
    run = assemble(line((0, 0, 0), (length, 0, 0)), SECTION, modulus=E, ends=(pinned, pinned))
    answer = linear(run, States(strain=0.0, bow=bow))
    assert movements(answer, (0.5,)).movement[0, 2, 0, 0] == pytest.approx(bow * length**2 / 8)
    assert np.abs(answer.wrench).max() < 1e-6


def test_hot_top_between_anchors_bends_by_e_i_kappa():
    run = assemble(line((0, 0, 0), (12, 0, 0)), SECTION, modulus=E)
    answer = linear(run, States(strain=0.0, bow=0.0004))
    assert moments(answer).resultant()[0, :, 0, 0] == pytest.approx(E * I * 0.0004)


def test_bow_follows_a_level_bend():
    """A level quarter bend with constant bow about the radius: tip turns and lifts by the integral of the rotations."""
    radius, bow = 2.0, 0.001
    corners = line((0, 0, 0), (radius, 0, 0), (radius, radius, 0))
    run = assemble(corners, SECTION, modulus=E, radius=radius, ends=(End(), FREE))
    moved = movements(linear(run, States(strain=0.0, bow=bow)), (1.0,))
    a = np.linspace(0, np.pi / 2, 20001)
    turn = np.stack([-np.sin(a), np.cos(a), 0 * a]) * bow * radius
    arm = np.stack([radius - radius * np.sin(a), radius - (radius - radius * np.cos(a)), 0 * a])
    lift = np.trapezoid(turn[0] * arm[1] - turn[1] * arm[0], a)
    assert moved.movement[0, 2, 1, 0] == pytest.approx(lift, rel=1e-7)
    assert moved.rotation[0, :, 1, 0] == pytest.approx([-bow * radius, bow * radius, 0])


def test_axial_spring_shares_the_growth():
    """Anchor, free end and an axial spring: the spring takes e L/(1/k + L/(E A))."""
    spring = Support(leg=0, distance=10.0, holds=(Hold(direction="along", stiffness=1e6),))
    run = assemble(line((0, 0, 0), (15, 0, 0)), SECTION, modulus=E, supports=[spring], ends=(End(), FREE))
    answer = linear(run, States(strain=0.001))
    force = 0.01 / (1e-6 + 10 / (E * A))
    assert answer.hold_force[0, 0, 0] == pytest.approx(force)
    assert support_movements(answer).movement[0, 0, 0, 0] == pytest.approx(force / 1e6)


def test_line_stop_is_an_exact_zero():
    stop = Support(leg=0, distance=10.0, holds=(Hold(direction="along"),))
    run = assemble(line((0, 0, 0), (15, 0, 0), (15, 6, 0)), SECTION, modulus=E, radius=0.3, supports=[stop])
    answer = linear(run, States(strain=0.001))
    assert abs(support_movements(answer).movement[0, 0, 0, 0]) < 1e-15
    assert answer.hold_force[0, 0, 0] == pytest.approx(E * A * 0.001 - (-answer.wrench[0, 0, -1, 0]), rel=1e-9)


# contact and friction -------------------------------------------------------------------------------------------


def level_line(length, spacing, friction, last=FREE, **more):
    count = round(length / spacing)
    rests = [Support(leg=0, distance=spacing * (i + 1), holds=(REST,), friction=friction) for i in range(count)]
    return assemble(line((0, 0, 0), (length, 0, 0)), SECTION, modulus=E, supports=rests, ends=(End(), last), **more)


HISTORY = np.array([0.0, 1.0, 0.0, 1.0])


def test_friction_only_anchor_sums_mu_n():
    run = level_line(60.0, 6.0, 0.3, weight=500.0)
    found = settle(run, States(strain=0.001 * HISTORY, weight=1.0))
    assert found.converged.all()
    assert found.normal[1].sum() == pytest.approx(found.normal[0].sum(), rel=1e-9)
    pushed = 0.3 * found.normal[1].sum()
    assert found.answer.end_a[:, 0, 0] == pytest.approx([0.0, -pushed, pushed, -pushed], rel=1e-7)
    assert found.slides[1:].all()


def test_friction_only_anchor_is_capped_by_full_restraint():
    """A long line with strong friction: the force at the anchor cannot pass E A e."""
    strain = 2e-5
    run = level_line(600.0, 6.0, 0.4, weight=500.0)
    found = settle(run, States(strain=np.array([0.0, strain]), weight=1.0))
    full = E * A * strain
    assert 0.4 * found.normal[1].sum() > 2 * full
    assert -found.answer.end_a[1, 0, 0] == pytest.approx(full, rel=1e-6)
    assert not found.slides[1, :20].any()
    assert found.slides[1, -5:].all()


def test_two_rests_by_hand():
    """Anchor, rests at 6 m and 12 m, axial only (guided, so that vertical loads are w L at each).

    Heated by e the bar pushes mu N at each rest as long as both slide; cooled down, a rest slides back only when its
    force has turned from +mu N to -mu N: here the outer one does and the inner one does not.
    """
    weight, mu, length, strain = 500.0, 0.3, 6.0, 2e-5
    run = level_line(12.0, 6.0, mu, weight=weight)
    found = settle(run, States(strain=np.array([0.0, strain, 0.88 * strain]), weight=1.0), steps=4)
    normal = found.normal[0]
    soft = length / (E * A)
    # hot: by hand, outer rest slides first
    f2 = mu * normal[1]
    f1 = min((strain * length - soft * f2) / soft, mu * normal[0])
    assert found.friction[1] == pytest.approx([f1, f2], rel=1e-6)
    hot_1 = soft * -(f1 + f2) + strain * length
    hot_2 = hot_1 + soft * -f2 + strain * length
    moved = support_movements(found.answer).movement[:, 0, :, 0]
    assert moved[1] == pytest.approx([hot_1, hot_2], rel=1e-6, abs=1e-12)
    # cooled a little: stuck rests keep their place, or slide at the limit with the sign turned
    d = soft * np.array([[1.0, 1.0], [1.0, 2.0]])
    free = 0.88 * strain * length * np.array([1.0, 2.0])
    force = np.linalg.solve(d, np.array([hot_1, hot_2]) - free)
    bound = mu * normal
    assert abs(force[1]) > bound[1]
    force[1] = np.sign(force[1]) * bound[1]
    force[0] = (hot_1 - free[0] - d[0, 1] * force[1]) / d[0, 0]
    assert abs(force[0]) < bound[0]
    assert -found.answer.support_force[2, 0, :, 0] == pytest.approx(force, rel=1e-6)


def test_three_rests_lift_by_hand():
    """A simple beam over a middle rest; bowed up by more than its sag the middle rest carries nothing."""
    length, weight = 12.0, 100.0
    pinned = End(stiffness=(np.inf, np.inf, np.inf, np.inf, 0.0, 0.0))
    rest = Support(leg=0, distance=6.0, holds=(REST,))
    run = assemble(
        line((0, 0, 0), (length, 0, 0)),
        SECTION,
        modulus=E,
        weight=weight,
        supports=[rest],
        ends=(pinned, pinned),
    )
    sag = 5 * weight * length**4 / (384 * E * I)
    limit = 8 * sag / length**2
    found = settle(run, States(strain=0.0, bow=limit * np.array([0.0, 0.5, 2.0]), weight=1.0))
    assert found.answer.hold_force[0, 0, 0] == pytest.approx(-5 / 8 * weight * length, rel=1e-8)
    assert found.answer.hold_force[1, 0, 0] == pytest.approx(-5 / 16 * weight * length, rel=1e-8)
    assert found.answer.hold_force[2, 0, 0] == 0.0
    assert found.lifted[:, 0].tolist() == [False, False, True]
    assert support_movements(found.answer).movement[2, 2, 0, 0] == pytest.approx(sag, rel=1e-8)


def test_one_gap_closes():
    """Anchor, bar, stop with a gap: force 0 until e L passes the gap, then (e L - g) E A/L."""
    length, gap = 10.0, 0.004
    stop = Support(leg=0, distance=length, holds=(Hold(direction="along", gap=gap),))
    run = assemble(line((0, 0, 0), (length, 0, 0)), SECTION, modulus=E, supports=[stop], ends=(End(), FREE))
    found = settle(run, States(strain=np.array([0.0, 0.0003, 0.0010, -0.0010])))
    force = (0.010 - gap) * E * A / length
    assert found.answer.hold_force[:, 0, 0] == pytest.approx([0.0, 0.0, force, -force], rel=1e-7)
    assert found.lifted[:, 0].tolist() == [True, True, False, False]


def test_elastic_gap_closes():
    length, gap, stiffness = 10.0, 0.004, 3e7
    stop = Support(leg=0, distance=length, holds=(Hold(direction="along", gap=gap, stiffness=stiffness),))
    run = assemble(line((0, 0, 0), (length, 0, 0)), SECTION, modulus=E, supports=[stop], ends=(End(), FREE))
    found = settle(run, States(strain=np.array([0.0, 0.0010])))
    assert found.answer.hold_force[1, 0, 0] == pytest.approx((0.010 - gap) / (length / E / A + 1 / stiffness), rel=1e-7)


def test_unguided_rest_is_a_disc_and_a_guided_one_a_box():
    """Ends pushed by equal amounts along and across: the disc gives mu N in all, along the movement."""
    weight = 500.0
    rest = Support(leg=0, distance=3.0, holds=(REST,), friction=0.3)
    across = (np.inf,) * 6
    run = assemble(
        line((0, 0, 0), (6, 0, 0)),
        SECTION,
        modulus=E,
        weight=weight,
        supports=[rest],
        ends=(End(stiffness=across),) * 2,
    )
    moved = np.zeros((2, 6, 1))
    moved[1, :2, 0] = 0.05
    found = settle(run, States(strain=0.0, weight=1.0, movement_a=moved, movement_b=moved), steps=20)
    assert found.friction[1, 0] == pytest.approx(0.3 * found.normal[1, 0], rel=1e-7)
    assert found.answer.support_force[1, :2, 0, 0] == pytest.approx(
        found.friction[1, 0] / np.sqrt(2) * np.ones(2), rel=1e-3
    )
    guided = Support(leg=0, distance=3.0, holds=(REST, Hold()), friction=0.3)
    run = assemble(line((0, 0, 0), (6, 0, 0)), SECTION, modulus=E, weight=weight, supports=[guided])
    moved[1, 1] = 0.0
    found = settle(run, States(strain=0.0, weight=1.0, movement_a=moved, movement_b=moved))
    assert found.answer.support_force[1, 0, 0, 0] == pytest.approx(0.3 * found.normal[1, 0], rel=1e-7)


def test_guide_force_feeds_friction():
    """A guide pushed sideways through an offset end: friction along is mu times rest and guide force together."""
    guided = Support(leg=0, distance=3.0, holds=(REST, Hold()), friction=0.3)
    run = assemble(line((0, 0, 0), (6, 0, 0)), SECTION, modulus=E, weight=500.0, supports=[guided])
    moved = np.zeros((2, 6, 1))
    moved[1, :2, 0] = 0.02
    found = settle(run, States(strain=0.0, weight=1.0, movement_a=moved, movement_b=moved))
    on_it = found.answer.support_force[1, :, 0, 0]
    side = 192 * E * I / 6.0**3 * 0.02
    assert on_it[1] == pytest.approx(side, rel=1e-6)
    assert on_it[0] == pytest.approx(0.3 * (side + abs(on_it[2])), rel=1e-6)
    assert np.abs(residual(found.answer)).max() < 1e-6 * side


def test_lateral_is_level_and_square_to_a_skew_leg():
    """A guide on a sloping, skew leg: its force has no part along the pipe and none upwards."""
    corners = line((0, 0, 0), (6, 8, 2), (6, 15, 2))
    guide = Support(leg=0, distance=4.0, holds=(Hold(),))
    answer = linear(assemble(corners, SECTION, modulus=E, supports=[guide]), States(strain=0.002))
    force = answer.support_force[0, :, 0, 0]
    assert np.linalg.norm(force) > 1.0
    assert force @ corners[:, 1] == pytest.approx(0.0, abs=1e-9 * np.linalg.norm(force))
    assert force[2] == 0.0
    assert force == pytest.approx(answer.hold_force[0, 0, 0] * np.array([-0.8, 0.6, 0.0]))

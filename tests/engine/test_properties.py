"""What must hold for every run: equilibrium, reciprocity, invariance, scaling, and friction within its limits."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pipeflex.mechanics.beam import (
    Break,
    End,
    Hold,
    PointWeight,
    Section,
    States,
    Support,
    assemble,
    influence,
    linear,
    moments,
    movements,
    residual,
    settle,
    support_movements,
)
from pipeflex.mechanics.beam.contact import Balance, Contacts, Laws

FREE = End(stiffness=(0.0,) * 6)
REST = Hold(direction="vertical", lifts=True)
seeds = st.integers(0, 10**6)
few = settings(max_examples=25, derandomize=True, deadline=None)


def any_run(seed: int, turned=None, shift=0.0, modulus=200e9, ends=None, mirrored=False):
    """An invented run in space with supports at vectors, weights left out unless vertical stays vertical."""
    rng = np.random.default_rng(seed)
    legs = rng.integers(2, 7)
    steps = rng.normal(size=(3, legs))
    steps /= np.linalg.norm(steps, axis=0)
    for leg in range(1, legs):
        if steps[:, leg - 1] @ steps[:, leg] < -0.8:
            steps[:, leg] *= -1.0
    steps *= rng.uniform(4, 15, legs)
    corners = np.concatenate([np.zeros((3, 1)), np.cumsum(steps, axis=1)], axis=1)
    turned = np.eye(3) if turned is None else turned
    supports = []
    for leg in rng.integers(0, legs, rng.integers(0, 4)):
        size = np.linalg.norm(steps[:, leg])
        way = turned @ rng.normal(size=3)
        stiffness = np.inf if rng.random() < 0.5 else 10 ** rng.uniform(4, 8)
        distance = size * rng.uniform(0.4, 0.6)
        supports.append(Support(leg=int(leg), distance=distance, holds=(Hold(direction=way, stiffness=stiffness),)))
    run = assemble(
        turned @ corners + np.reshape(shift, (-1, 1)),
        Section(4e-3, 2e-5),
        modulus=modulus,
        radius=rng.uniform(0.1, 0.5, (legs - 1, 1)),
        bend_factor=rng.uniform(1, 15, (legs - 1, 1)),
        supports=supports,
        ends=ends,
    )
    moved = np.zeros((1, 6, 1))
    moved[0, :3, 0] = turned @ rng.normal(0, 0.02, 3)
    moved[0, 3:, 0] = (turned * np.linalg.det(turned)) @ rng.normal(0, 0.002, 3)
    return run, States(strain=rng.uniform(0, 0.003, (1, legs, 1)), movement_b=moved)


def a_turn(seed: int) -> np.ndarray:
    q, _ = np.linalg.qr(np.random.default_rng(seed + 7).normal(size=(3, 3)))
    return q * np.linalg.det(q)


@few
@given(seeds)
def test_equilibrium(seed):
    run, states = any_run(seed)
    answer = linear(run, states)
    scale = np.abs(answer.wrench).max()
    assert np.abs(residual(answer)).max() <= 1e-10 * scale


@few
@given(seeds)
def test_movements_fit_at_the_far_end_and_at_rigid_holds(seed):
    run, states = any_run(seed)
    answer = linear(run, states)
    found = movements(answer, (0.0, 0.3, 1.0))
    largest = np.abs(found.movement).max()
    assert found.movement[0, :, -1] == pytest.approx(states.movement_b[0, :3], abs=1e-10 * largest)
    assert found.rotation[0, :, -1] == pytest.approx(states.movement_b[0, 3:], abs=1e-10)
    assert found.movement[:, :, 2:-1:3] == pytest.approx(found.movement[:, :, 3::3], abs=1e-10 * largest)
    at = support_movements(answer)
    for i, support in enumerate(run.supports):
        hold = support.holds[0]
        way = hold.direction / np.linalg.norm(hold.direction)
        moved = way @ at.movement[0, :, i, 0]
        expected = 0.0 if np.isinf(hold.stiffness) else answer.hold_force[0, i, 0] / hold.stiffness
        assert moved == pytest.approx(expected, abs=1e-9 * largest)


@few
@given(seeds)
def test_reciprocity(seed):
    """Moving end A in one way and end B in another: each does the same work on the other's forces."""
    run, _states = any_run(seed)
    rng = np.random.default_rng(seed)
    one, other = rng.normal(size=(2, 2, 1, 6, 1))
    first = linear(run, States(strain=0.0, movement_a=one[0], movement_b=one[1]))
    second = linear(run, States(strain=0.0, movement_a=other[0], movement_b=other[1]))
    there = (first.end_a * other[0] + first.end_b * other[1]).sum()
    back = (second.end_a * one[0] + second.end_b * one[1]).sum()
    size = np.abs(first.end_a * other[0]).sum() + np.abs(first.end_b * other[1]).sum()
    assert there == pytest.approx(back, abs=1e-9 * size)


@few
@given(seeds)
def test_rotation_and_mirror(seed):
    run, states = any_run(seed)
    answer = linear(run, states)
    for turn in (a_turn(seed), a_turn(seed) @ np.diag([1.0, 1.0, -1.0])):
        other, turned_states = any_run(seed, turned=turn)
        turned = linear(other, turned_states)
        size = np.abs(answer.end_b).max()
        assert turned.end_b[0, :3, 0] == pytest.approx(turn @ answer.end_b[0, :3, 0], abs=1e-9 * size)
        assert turned.end_b[0, 3:, 0] == pytest.approx(
            np.linalg.det(turn) * turn @ answer.end_b[0, 3:, 0], abs=1e-9 * size
        )
        assert turned.hold_force == pytest.approx(answer.hold_force, abs=1e-9 * size)
        one, two = moments(answer), moments(turned)
        assert np.abs(two.in_plane) == pytest.approx(np.abs(one.in_plane), abs=1e-9 * size)
        assert np.abs(two.torsion) == pytest.approx(np.abs(one.torsion), abs=1e-9 * size)


@few
@given(seeds)
def test_origin_far_away_loses_no_digits(seed):
    run, states = any_run(seed)
    far, _ = any_run(seed, shift=(10_000.0, -10_000.0, 500.0))
    here, there = linear(run, states), linear(far, states)
    assert there.end_b == pytest.approx(here.end_b, abs=2e-10 * np.abs(here.end_b).max())
    assert movements(there).position[0, 0, 0] == 10_000.0


@few
@given(seeds)
def test_a_free_run_feels_nothing(seed):
    run, _ = any_run(seed, ends=(End(), FREE))
    if run.supports:
        return
    strain = 0.0021
    answer = linear(run, States(strain=strain))
    assert np.abs(answer.wrench).max() < 1e-6
    found = movements(answer, (0.0, 0.4, 1.0))
    assert found.movement[0] == pytest.approx(strain * found.position, abs=1e-12)
    assert np.abs(found.rotation).max() == 0.0


@few
@given(seeds)
def test_doubling_the_modulus_doubles_forces_and_leaves_movements(seed):
    run, states = any_run(seed)
    stiff, _ = any_run(seed, modulus=400e9)
    if any(np.isfinite(h.stiffness) for s in run.supports for h in s.holds):
        return
    one, two = linear(run, states), linear(stiff, states)
    assert two.end_a == pytest.approx(2 * one.end_a, rel=1e-9, abs=1e-9 * np.abs(one.end_a).max())
    assert movements(two).movement == pytest.approx(movements(one).movement, abs=1e-12)


@few
@given(seeds)
def test_reversing_the_run_swaps_its_ends(seed):
    """Legs counted from the other end, ends with springs and free axes: the same forces."""
    rng = np.random.default_rng(seed)
    corners = np.array([[0, 9, 9, 9, 16], [0, 0, 5, 5, 7], [0, 0, 0, 4, 4.0]]) + rng.uniform(-1, 1, (3, 5))
    stiff = np.where(rng.random(6) < 0.3, 0.0, np.where(rng.random(6) < 0.5, np.inf, 10 ** rng.uniform(4, 8, 6)))
    ends = (End(stiffness=stiff), End())
    lengths = np.linalg.norm(np.diff(corners, axis=1), axis=0)
    place, where, cut = rng.uniform(0.3, 0.7, 3)
    loose = Hold(direction=(0.3, 1.0, 0.2), stiffness=1e6)
    radius = rng.uniform(0.1, 0.4, (3, 1))
    area, weight = rng.uniform(3e-3, 5e-3, (5, 1)), rng.uniform(100, 500, (5, 1))
    strain, bow = rng.uniform(0, 0.003, (5, 1)), rng.uniform(0, 1e-4, (5, 1))

    def build(back):
        def at(leg, share):
            return {"leg": 3 - leg, "distance": (1 - share) * lengths[leg]} if back else {
                "leg": leg, "distance": share * lengths[leg]
            }  # fmt: skip

        flip = slice(None, None, -1 if back else 1)
        run = assemble(
            corners[:, flip],
            Section(area[flip], 2e-5),
            modulus=200e9,
            radius=radius[flip],
            weight=weight[flip],
            supports=[
                Support(**at(0, place), holds=(Hold(direction="vertical"), loose)),
                Support(bend=0 if back else 2, holds=(Hold(direction="vertical", stiffness=2e6),)),
            ],
            weights=[PointWeight(**at(3, where), force=3000.0)],
            breaks=[Break(**at(1, cut))],
            ends=ends[flip],
        )
        states = States(strain=strain[None, flip], bow=bow[None, flip], weight=np.array([0.0, 1.0]))
        return linear(run, states)

    # bends take section and weight of the piece before: the same on both sides of each, hence of all pieces
    area[:], weight[:] = area[0], weight[0]
    one, other = build(False), build(True)
    size = np.abs(one.wrench).max()
    assert other.end_b == pytest.approx(one.end_a, abs=1e-8 * size)
    assert other.end_a == pytest.approx(one.end_b, abs=1e-8 * size)
    assert other.hold_force == pytest.approx(one.hold_force, abs=1e-8 * size)


def test_rows_equal_their_single_solves():
    rng = np.random.default_rng(3)
    rows = 1500
    run_x, leg = rng.uniform(20, 40, rows), rng.uniform(2, 6, rows)
    zero, rise = np.zeros(rows), rng.uniform(0, 2, rows)

    def build(pick, lift):
        x, h, z, r = run_x[pick], leg[pick], zero[pick], lift * rise[pick]
        corners = np.array([[z, x, x, x + 3, x + 3, 2 * x], [z, z, h, h, z, z], [z, z, r, r, z, z]])
        guides = [
            Support(leg=0, distance=0.3 * x, holds=(Hold(),)),
            Support(leg=4, distance=0.2 * x, holds=(Hold(),)),
        ]
        return assemble(
            corners,
            Section(4e-3, 2e-5 * (1 + h)),
            modulus=2e11,
            radius=0.3,
            bend_factor=1 + h,
            supports=guides,
        )

    for lift in (0.0, 1.0):
        whole = linear(build(slice(None), lift), States(strain=0.002))
        line = moments(whole)
        for row in (0, 700, 1499):
            one = linear(build(slice(row, row + 1), lift), States(strain=0.002))
            assert whole.end_a[..., row] == pytest.approx(one.end_a[..., 0], rel=1e-12, abs=1e-8)
            assert line.in_plane[..., row] == pytest.approx(moments(one).in_plane[..., 0], rel=1e-11, abs=1e-7)


def test_plane_run_equals_the_same_run_tilted():
    """The two independent halves of a plane run against the whole problem, which a tilted run takes."""
    corners = np.array([[0, 12, 12, 15, 15, 28], [0, 0, 4, 4, 0, 0], [0, 0, 0, 0, 0, 0.0]])
    turn = a_turn(1)

    def build(by):
        guide = Support(leg=0, distance=6.0, holds=(Hold(direction=by @ [0, 1, 0]), Hold(direction=by @ [0, 0, 1])))
        stop = Support(leg=2, distance=1.5, holds=(Hold(direction=by @ [1, 0, 0], stiffness=1e5),))
        return assemble(
            by @ corners, Section(4e-3, 2e-5), modulus=2e11, radius=0.4, bend_factor=6, supports=[guide, stop]
        )

    moved = np.array([0.0, 0.01, 0.03, 0.001, 0.002, 0.0])
    there = np.concatenate([turn @ moved[:3], turn @ moved[3:]])
    plain = linear(build(np.eye(3)), States(strain=0.002, movement_a=moved[None, :, None]))
    tilted = linear(build(turn), States(strain=0.002, movement_a=there[None, :, None]))
    size = np.abs(plain.wrench).max()
    assert tilted.end_b[0, :3, 0] == pytest.approx(turn @ plain.end_b[0, :3, 0], abs=1e-10 * size)
    assert tilted.end_b[0, 3:, 0] == pytest.approx(turn @ plain.end_b[0, 3:, 0], abs=1e-10 * size)
    assert tilted.hold_force == pytest.approx(plain.hold_force, abs=1e-10 * size)


@few
@given(seeds)
def test_influence_equals_linear(seed):
    run, states = any_run(seed)
    rng = np.random.default_rng(seed)
    states = States(
        strain=states.strain,
        bend_strain=rng.uniform(0, 0.003, (1, run.bends, 1)),
        bow=rng.uniform(0, 1e-4, (1, run.pieces, 1)),
        movement_b=states.movement_b,
        movement_a=rng.normal(0, 0.01, (1, 6, 1)),
        weight=np.array([0.7]),
    )
    one, two = linear(run, states), influence(run).answer(states)
    size = np.abs(one.wrench).max()
    for name in ("wrench", "hold_force", "support_force", "end_a", "end_b", "start"):
        assert getattr(two, name) == pytest.approx(getattr(one, name), abs=1e-9 * size), name


def test_thousand_guides_keep_their_digits():
    """Guides every 6 m on a straight line pushed sideways at its end: only the last spans feel it."""
    count = 1000
    guides = [Support(leg=0, distance=6.0 * (i + 1), holds=(Hold(),)) for i in range(count)]
    corners = np.array([[0.0, 6.0 * count + 6.0], [0, 0], [0, 0]])
    moved = np.zeros((1, 6, 1))
    moved[0, 1] = 0.01
    run = assemble(corners, Section(4e-3, 2e-5), modulus=2e11, supports=guides)
    force = linear(run, States(strain=0.0, movement_b=moved)).hold_force[0, :, 0]
    short = assemble(corners - [[6.0 * 960], [0], [0]] * np.array([0.0, 1.0]), Section(4e-3, 2e-5), modulus=2e11,
                     supports=guides[:40])  # fmt: skip
    few_guides = linear(short, States(strain=0.0, movement_b=moved)).hold_force[0, :, 0]
    assert force[-20:] == pytest.approx(few_guides[-20:], rel=1e-7, abs=1e-6 * np.abs(force).max())
    assert np.abs(force[:900]).max() < 1e-6


# friction ---------------------------------------------------------------------------------------------------------


def rack(seed: int, guided=None):
    """Loops in series on a rack, rests and guides with friction, gaps, mixed heating."""
    rng = np.random.default_rng(seed)
    points, x = [(0.0, 0.0)], 0.0
    legs_with_rests = []
    for _ in range(rng.integers(1, 3)):
        run, leg, width = rng.uniform(15, 30), rng.uniform(2, 5), rng.uniform(2, 4)
        legs_with_rests.append((len(points) - 1, run))
        points += [(x + run, 0.0), (x + run, leg), (x + run + width, leg), (x + run + width, 0.0)]
        x += run + width
    run = rng.uniform(10, 30)
    legs_with_rests.append((len(points) - 1, run))
    points.append((x + run, 0.0))
    supports = []
    for leg, size in legs_with_rests:
        for distance in np.arange(3.0, size - 1.0, 6.0):
            holds = [REST]
            if guided or (guided is None and rng.random() < 0.5):
                holds.append(Hold(gap=0.003 if rng.random() < 0.5 else 0.0))
            supports.append(
                Support(
                    leg=leg,
                    distance=distance,
                    holds=tuple(holds),
                    friction=rng.uniform(0.1, 0.4),
                    tag=f"{leg}",
                )
            )
    corners = np.array([(x, y, 0.0) for x, y in points]).T
    run = assemble(
        corners,
        Section(4e-3, 2e-5),
        modulus=2e11,
        radius=0.3,
        bend_factor=5.0,
        weight=400.0,
        supports=supports,
    )
    heat = rng.uniform(0.0, 0.003, (run.pieces, 1))
    return run, States(strain=np.array([0.0, 1.0, 0.2, 1.0])[:, None, None] * heat, weight=1.0)


@pytest.mark.parametrize("rows", [1, 5000])
@pytest.mark.parametrize("axes", [(0, 1), (0, 2), (1, 2), (2, 1)])
@pytest.mark.parametrize("end", [End(), End(stiffness=(1e6, np.inf, 2e6, 0.0, 3e5, np.inf))])
def test_a_run_in_a_plane_is_a_run_in_space(axes, end, rows):
    """What is left out in a coordinate plane is exactly nothing: the same run with nothing left out."""
    rng = np.random.default_rng(sum(axes))
    legs = rng.uniform(3.0, 12.0, (5, rows))
    corners = np.zeros((3, 6, rows))
    for leg, (axis, sign) in enumerate(((0, 1), (1, 1), (0, 1), (1, -1), (0, 1))):
        corners[:, leg + 1] = corners[:, leg]
        corners[axes[axis], leg + 1] += sign * legs[leg]
    across, along = np.eye(3)[axes[1]], np.eye(3)[axes[0]]
    guides = [
        Support(leg=0, distance=1.5, holds=(Hold(direction=across),)),
        Support(
            leg=4, distance=1.9, holds=(Hold(direction=across, stiffness=1e6), Hold(direction=along, stiffness=1e5))
        ),
    ]
    made = [
        assemble(
            corners, Section(4e-3, 2e-5), modulus=2e11, radius=np.array([[0.3], [0.4], [0.5], [0.0]]), bend_factor=6.0,
            supports=guides, ends=(end, end),
        )
        for _ in range(2)
    ]  # fmt: skip
    made[1].cache["live"] = (0, 1, 2)
    states = States(strain=np.array([0.001, 0.003])[:, None, None] * rng.uniform(0.5, 1.0, (1, 5, rows)))
    plane, space = (linear(run, states) for run in made)
    for name in ("wrench", "hold_force", "support_force", "end_a", "end_b", "start"):
        one, other = getattr(plane, name), getattr(space, name)
        assert np.abs(one - other).max() <= 1e-12 * np.abs(other).max()
    plane, space = moments(plane), moments(space)
    greatest = np.abs(space.in_plane).max()
    for name in ("in_plane", "out_plane", "torsion", "axial"):
        assert np.abs(getattr(plane, name) - getattr(space, name)).max() <= 1e-12 * greatest
    assert not plane.out_plane.any()
    assert not plane.torsion.any()


@pytest.mark.parametrize("seed", range(6))
def test_friction_stays_within_mu_n_and_balances(seed):
    run, states = rack(seed)
    found = settle(run, states, steps=4)
    mu = np.array([s.friction for s in run.supports])
    assert found.converged.all()
    assert (found.friction <= mu * found.normal * (1 + 1e-6) + 1e-6).all()
    assert (found.friction[0] == 0.0).all()
    assert np.abs(residual(found.answer)).max() <= 1e-8 * np.abs(found.answer.wrench).max()


@pytest.mark.parametrize("seed", range(3))
def test_movements_of_a_settled_run_fit(seed):
    run, states = rack(seed)
    found = settle(run, states, steps=4)
    moved = movements(found.answer, (0.0, 1.0))
    assert np.abs(moved.movement[:, :, -1]).max() < 1e-9
    at = support_movements(found.answer).movement[:, :, :, 0]
    for i, support in enumerate(run.supports):
        assert (at[:, 2, i] >= -1e-9).all()
        for hold in support.holds[1:]:
            assert (np.abs(at[:, 1, i]) <= hold.gap + 1e-9).all()


def test_friction_opposes_the_movement():
    run, states = rack(2, guided=False)
    found = settle(run, states, steps=8)
    at = support_movements(found.answer).movement[:2, :, :, 0]
    work = (found.answer.support_force[1, :2, :, 0] * (at[1] - at[0])[:2]).sum(axis=0)
    assert (work[found.slides[1]] > 0).all()


def test_without_friction_and_gaps_settling_is_linear():
    run, states = rack(1, guided=True)
    supports = [
        Support(leg=s.leg, distance=s.distance, holds=tuple(Hold(direction=h.direction) for h in s.holds))
        for s in run.supports
    ]
    plain = assemble(
        run.corners,
        Section(4e-3, 2e-5),
        modulus=2e11,
        radius=0.3,
        bend_factor=5.0,
        weight=400.0,
        supports=supports,
    )
    one, two = settle(plain, states).answer, linear(plain, states)
    assert one.end_a == pytest.approx(two.end_a, abs=1e-9 * np.abs(two.wrench).max())


def test_thermal_answer_does_not_depend_on_steps_while_all_slides_one_way():
    rests = [Support(leg=0, distance=6.0 * (i + 1), holds=(REST,), friction=0.3) for i in range(8)]
    run = assemble(
        np.array([[0, 48.0], [0, 0], [0, 0]]), Section(4e-3, 2e-5), modulus=2e11, weight=400.0, supports=rests,
        ends=(End(), FREE),
    )  # fmt: skip
    states = States(strain=np.array([0, 0.002, 0.0, 0.002]), weight=1.0)
    one, two = settle(run, states, steps=1), settle(run, states, steps=16)
    assert one.answer.end_a == pytest.approx(two.answer.end_a, rel=1e-7, abs=1e-4)


@few
@given(seeds)
def test_a_step_does_not_depend_on_its_start(seed):
    rng = np.random.default_rng(seed)
    n = 12
    root = rng.normal(size=(n, n))
    stiffness = 1e6 * (root @ root.T + 0.01 * np.eye(n))
    pairs = np.arange(n)
    pairs[8:12] = [9, 8, 11, 10]
    laws = Laws(
        dof=np.arange(n),
        gap=np.where(pairs < 4, rng.uniform(0, 0.004, n), 0.0) * (np.arange(n) < 4),
        give=np.where(np.arange(n) == 1, 1e-7, 0.0),
        pushes=np.arange(n) < 2,
        frictional=np.arange(n) >= 6,
        partner=pairs,
    )
    closed, slid = rng.normal(0, 1e4, n), np.zeros(n)
    limit = np.repeat(rng.uniform(0, 2e4, n // 2), 2)
    contacts = Contacts(laws, stiffness)
    starts = [
        Balance(scale * rng.normal(0, 0.01, n), scale * rng.normal(0, 1e4, n), 0.0, 0, True)
        for scale in (0.0, 1.0, 30.0)
    ]
    found = [contacts.balance(closed, slid, limit, start) for start in starts]
    for one in found:
        assert one.exact
        assert one.u == pytest.approx(found[0].u, abs=1e-9)
        assert one.force == pytest.approx(found[0].force, abs=1e-4)
    held, force, u = stiffness @ found[0].u + closed, found[0].force, found[0].u
    assert held == pytest.approx(force, abs=1e-4)
    assert (force[:2] >= 0).all()
    assert (np.hypot(force[8:12:2], force[9:12:2]) <= limit[8:12:2] * (1 + 1e-9)).all()
    assert (np.abs(u[2:4]) <= laws.gap[2:4] + 1e-9).all()

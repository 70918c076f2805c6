"""Bad models are refused, and the message says which corner or support."""

import numpy as np
import pytest

from pipeflex.errors import InputError, UnstableLayoutError
from pipeflex.mechanics.beam import (
    Break,
    End,
    Hold,
    Section,
    States,
    Support,
    assemble,
    influence,
    linear,
    settle,
)
from pipeflex.mechanics.elastic_centre import elastic_centre

PIPE = Section(4e-3, 2e-5)
L_RUN = np.array([[0, 8, 8], [0, 0, 5], [0, 0, 0.0]])
HEAT = States(strain=0.001)


def build(corners=L_RUN, section=PIPE, **more):
    return assemble(corners, section, **{"modulus": 2e11, **more})


@pytest.mark.parametrize(
    ("corners", "words"),
    [
        (np.array([[0, 8, 8, 8], [0, 0, 0, 5], [0, 0, 0, 0.0]]), "leg 2"),
        (np.array([[0, 4, 8], [0, 0, 0], [0, 0, 0.0]]), "corner 1"),
        (np.array([[0, 8, 3], [0, 0, 0], [0, 0, 0.0]]), "corner 1"),
        (np.array([[0, np.nan, 8], [0, 0, 5], [0, 0, 0.0]]), "corners"),
        (np.zeros((3, 1)), "corners"),
        (np.zeros((2, 4)), "corners"),
    ],
)
def test_bad_corners(corners, words):
    with pytest.raises(InputError, match=words):
        build(corners)


def test_overlapping_tangents_name_leg_and_rows():
    corners = np.repeat(np.array([[0, 8, 8, 14], [0, 0, 2, 2], [0, 0, 0, 0.0]])[:, :, None], 4, axis=2)
    with pytest.raises(InputError, match=r"leg 2: 2\.00.m.*2\.2 m.*rows 1, 3"):
        build(corners, radius=np.array([0.5, 1.1, 0.9, 1.1]))


def test_radius_longer_than_the_end_leg():
    with pytest.raises(InputError, match="leg 2"):
        build(radius=6.0)


@pytest.mark.parametrize(
    ("more", "words"),
    [
        ({"modulus": 0.0}, "modulus"),
        ({"modulus": np.nan}, "modulus"),
        ({"section": Section(-1.0, 2e-5)}, "section.area"),
        ({"section": Section(4e-3, np.inf)}, "section.inertia"),
        ({"radius": -0.1}, "radius"),
        ({"bend_factor": 0.5}, "bend_factor"),
        ({"weight": -1.0}, "weight"),
        ({"weight": np.zeros((5, 1))}, "weight"),
        ({"supports": [Support(holds=(Hold(),), tag="G1")]}, "support G1"),
        ({"supports": [Support(leg=2, holds=(Hold(),), tag="G1")]}, r"support G1\.leg"),
        ({"supports": [Support(bend=1, holds=(Hold(),), tag="G1")]}, r"support G1\.bend"),
        (
            {"supports": [Support(leg=0, distance=7.9, holds=(Hold(),), tag="G1")], "radius": 0.3},
            r"support G1\.distance",
        ),
        ({"breaks": [Break(leg=0, distance=-1.0)]}, r"break\.distance"),
    ],
)
def test_bad_input(more, words):
    with pytest.raises(InputError, match=words):
        build(**more)


def test_supports_that_change_their_order_from_row_to_row():
    guides = [
        Support(leg=0, distance=np.array([2.0, 2.0]), holds=(Hold(),), tag="one"),
        Support(leg=0, distance=np.array([3.0, 1.0]), holds=(Hold(),), tag="two"),
    ]
    with pytest.raises(InputError, match=r"support one, support two.*row 1"):
        build(np.repeat(L_RUN[:, :, None], 2, axis=2), supports=guides)


def test_lateral_means_nothing_on_a_riser():
    riser = np.array([[0, 0, 8], [0, 0, 0], [0, 5, 5.0]])
    run = build(riser, supports=[Support(leg=0, distance=2.0, holds=(Hold(),), tag="G1")])
    with pytest.raises(InputError, match="support G1"):
        linear(run, HEAT)


@pytest.mark.parametrize("away", [0.0, 1e-13])
def test_two_rigid_holds_at_one_place_in_one_direction(away):
    guides = [Support(leg=0, distance=3.0 + d, holds=(Hold(),), tag=tag) for tag, d in (("G1", 0), ("G2", away))]
    with pytest.raises(UnstableLayoutError, match="support G2"):
        linear(build(supports=guides), HEAT)


def test_hold_on_a_rigid_end():
    with pytest.raises(UnstableLayoutError, match="support S"):
        linear(build(supports=[Support(leg=0, distance=0.0, holds=(Hold(),), tag="S")]), HEAT)


@pytest.mark.parametrize("free", range(6))
def test_a_run_that_floats(free):
    loose = [np.inf] * 6
    loose[free] = 0.0
    other = [0.0] * 6
    for axis in range(6):
        if axis != free and not (free >= 3 and axis < 3):
            other[axis] = np.inf
    ends = (End(stiffness=loose), End(stiffness=other))
    if free >= 3:
        ends = (End(stiffness=loose), End(stiffness=[0.0] * 6))
    with pytest.raises(UnstableLayoutError, match="floats"):
        linear(build(ends=ends), HEAT)


def test_single_designs_only():
    run = build(np.repeat(L_RUN[:, :, None], 2, axis=2))
    for ask in (lambda: settle(run, HEAT), lambda: influence(run)):
        with pytest.raises(InputError, match="rows"):
            ask()


@pytest.mark.parametrize(
    ("support", "words"),
    [
        ({"holds": (Hold(gap=-0.001),)}, "gap"),
        ({"holds": (Hold(),), "friction": -0.1}, "friction"),
        ({"holds": (Hold(),), "friction": np.nan}, "friction"),
    ],
)
def test_bad_contacts(support, words):
    with pytest.raises(InputError, match=words):
        settle(build(supports=[Support(leg=0, distance=3.0, **support)]), HEAT)


def test_elastic_centre_refuses_bad_corners():
    with pytest.raises(InputError, match="corner 1"):
        elastic_centre(np.array([[0, 4, 8], [0, 0, 0.0]]), np.array([0.01, 0]), 1e6)

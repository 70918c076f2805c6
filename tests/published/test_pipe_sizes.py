"""Sections and weights of steel pipe and copper tube.

Hydraulic Institute, Engineering Data Library (open data set of ASME B36.10M pipe and ASTM B88 tube; read), and the
general-purpose library fluids 1.3.1, `nearest_pipe`. Weight as in ASME B36.10M, 10.69 (D - t) t lb/ft in inches.
"""

import pytest

from pipeflex.data.pipes import dimensions, pipe
from pipeflex.mechanics import section
from pipeflex.present import shown

from .ask import IN


def printed(size, schedule):
    """Diameter, wall [in], area [in2], second moment [in4], section modulus [in3], mass [lb/ft]."""
    steel = pipe("A106-B", size, schedule)
    D_o, T_w = steel.outside_diameter, steel.wall
    D_i = section.inside_diameter(D_o=D_o, T_w=T_w)
    A = section.metal_area(D_o=D_o, D_i=D_i)
    I = section.second_moment(D_o=D_o, D_i=D_i)
    Z = section.section_modulus(I=I, D_o=D_o)
    mass = section.metal_mass(rho=steel.material.density, A=A)
    return (D_o / IN, T_w / IN, A / IN**2, I / IN**4, Z / IN**3, shown(mass, "mass per length", "us"))


@pytest.mark.parametrize(
    ("size", "schedule", "expected"),
    [
        ("NPS 6", "40", (6.625, 0.280, 5.58135351, 28.1421786, 8.49575202, 18.991854)),
        ("NPS 8", "40", (8.625, 0.322, 8.3992553, 72.4892406, 16.8090993, 28.5804205)),
        ("NPS 4", "40", (4.500, 0.237, 3.17404845, 7.23260025, 3.214489, 10.8004384)),
        ("NPS 2", "80", (2.375, 0.218, 1.47725855, 0.867921342, 0.73088113, 5.02671594)),
    ],
)
def test_pipe_section(size, schedule, expected):
    """Inch dimensions give area, I and Z exactly; the weight formula takes another density, 0.1 % off."""
    found = printed(size, schedule)
    assert found[:5] == pytest.approx(expected[:5], rel=1e-7)
    assert found[5] == pytest.approx(expected[5], rel=0.001)


@pytest.mark.parametrize(
    ("size", "I", "Z"), [("NPS 16", 562.08, None), ("NPS 24", 1942.3, 161.86)], ids=["nps16-std", "nps24-std"]
)
def test_pipe_nps16_24_std(size, I, Z):
    """Closed form from 16 x 0.375 and 24 x 0.375 in, to the last printed digit."""
    found = printed(size, "STD")
    assert found[3] == pytest.approx(I, rel=5e-5)
    if Z is not None:
        assert found[4] == pytest.approx(Z, rel=5e-5)


def test_pipe_nps12_std_is_not_sch_40():
    """NPS 12 (library): 323.8 mm, STD 9.53 mm, Sch 40 10.31 mm."""
    std, forty = dimensions("NPS 12", "STD"), dimensions("NPS 12", "40")
    assert (std.wall * 1e3, forty.wall * 1e3) == pytest.approx((9.53, 10.31), abs=0.006)
    assert std.outside_diameter * 1e3 == pytest.approx(323.8, abs=0.06)
    assert std.wall != forty.wall


def test_pipe_nps4_10s():
    """NPS 4 Sch 10S of ASME B36.19M (library): 114.3 x 3.05 mm."""
    found = dimensions("NPS 4", "10S")
    assert (found.outside_diameter * 1e3, found.wall * 1e3) == pytest.approx((114.3, 3.05), abs=0.006)


@pytest.mark.parametrize(
    ("nominal", "outside", "wall"), [("1", 1.125, 0.050), ("2", 2.125, 0.070), ("3-1/2", 3.625, 0.100)]
)
def test_tube_b88_type_L(nominal, outside, wall):
    """ASTM B88 type L; the outside diameter is the nominal size and 1/8 in."""
    found = dimensions(f"{nominal} in", "L")
    assert (found.outside_diameter / IN, found.wall / IN) == pytest.approx((outside, wall), abs=1e-9)

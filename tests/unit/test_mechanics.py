"""Formulas of section, growth, legs and supports: by hand, by columns, and against each other."""

import math

import numpy as np
import pytest

from pipeflex.mechanics import cantilever, expansion, section, support


def test_section_of_a_solid_bar_and_of_a_thin_ring():
    """No bore: pi D2/4 and pi D4/64. A thin wall: pi d t and pi r3 t."""
    assert section.metal_area(D_o=2.0, D_i=0.0) == pytest.approx(math.pi)
    assert section.second_moment(D_o=2.0, D_i=0.0) == pytest.approx(math.pi / 4)
    assert section.section_modulus(I=math.pi / 4, D_o=2.0) == pytest.approx(math.pi / 4)
    t, r = 1e-4, 0.5
    inside = section.inside_diameter(D_o=2 * r + t, T_w=t)
    assert section.metal_area(D_o=2 * r + t, D_i=inside) == pytest.approx(2 * math.pi * r * t, rel=1e-6)
    assert section.second_moment(D_o=2 * r + t, D_i=inside) == pytest.approx(math.pi * r**3 * t, rel=1e-6)


def test_weight_by_hand():
    """DN 200 with water and 100 mm of wool: 42.5 + 32.3 kg/m, 12.0 kg/m of wool and 2.8 kg/m of cladding."""
    D_o, T_w = 0.2191, 0.00818
    D_i = section.inside_diameter(D_o=D_o, T_w=T_w)
    metal = section.metal_mass(rho=7850, A=section.metal_area(D_o=D_o, D_i=D_i))
    water = section.contents_mass(rho_c=1000, D_i=D_i)
    wool = section.covering_mass(t_ins=0.1, D_o=D_o, rho_ins=120, t_clad=0.0, rho_clad=2700)
    both = section.covering_mass(t_ins=0.1, D_o=D_o, rho_ins=120, t_clad=0.0008, rho_clad=2700)
    assert (metal, water, wool, both - wool) == pytest.approx((42.55, 32.28, 12.03, 2.85), abs=0.01)
    assert section.line_weight(m_p=1.0, m_c=2.0, m_ins=3.0) == pytest.approx(6 * 9.80665)
    rings = math.pi / 4 * ((D_o + 0.2) ** 2 - D_o**2) * 120
    assert wool == pytest.approx(rings)


def test_leg_needed_is_the_leg_that_reaches_the_allowable():
    rng = np.random.default_rng(1)
    E_a, D_o, delta, S_A = (rng.uniform(a, b, 100) for a, b in ((1e11, 2e11), (0.05, 0.6), (1e-3, 0.2), (5e7, 2e8)))
    leg = cantilever.leg_needed(E_a=E_a, D_o=D_o, delta=delta, S_A=S_A)
    assert cantilever.cantilever_stress(E_a=E_a, D_o=D_o, delta=delta, l=leg) == pytest.approx(S_A)
    same = cantilever.developed_length(E_a=E_a, D_o=D_o, delta_tot=delta, S_rule=S_A)
    assert np.array_equal(same, leg)


def test_stress_is_moment_over_section_modulus():
    """Hooke and the beam: F l/2 over Z, with F = 12 E I delta/l3."""
    D_o, I, l, delta, E = 0.2, 3e-5, 5.0, 0.03, 2e11
    F = cantilever.cantilever_force(R_E=1.0, E_a=E, I=I, delta=delta, l=l)
    M = cantilever.cantilever_moment(F=F, l=l)
    S = cantilever.cantilever_stress(E_a=E, D_o=D_o, delta=delta, l=l)
    assert M / section.section_modulus(I=I, D_o=D_o) == pytest.approx(S)
    assert cantilever.cantilever_force(R_E=0.9, E_a=E, I=I, delta=delta, l=l) == pytest.approx(0.9 * F)


def test_shared_movements_add_up_and_the_forces_are_equal():
    legs = np.array([[3.0, 2.0], [4.0, 5.0], [1.0, 2.0]])
    parts = cantilever.shared_movement(y=0.1, l=legs, c_3=(legs**3).sum(axis=0))
    assert parts.sum(axis=0) == pytest.approx(0.1)
    forces = cantilever.cantilever_force(R_E=1.0, E_a=2e11, I=3e-5, delta=parts, l=legs)
    assert np.allclose(forces, forces[0])


def test_guide_distance_is_one_and_a_half_of_the_leg_that_the_growth_of_the_other_asks():
    given = {"E_a": 2e11, "D_o": 0.2, "S_A": 2e8}
    asked = cantilever.leg_needed(delta=0.002 * 9.0, **given)
    assert cantilever.guide_distance_needed(e=0.002, l=9.0, **given) == pytest.approx(1.5 * asked)


def test_anchor_by_hand():
    friction = support.friction_force(mu=0.3, w=700.0, L_mu=20.0)
    assert friction == pytest.approx(4200.0)
    assert support.anchor_force(F_th=-5000.0, F_mu=-friction) == pytest.approx(-9200.0)
    assert support.least_anchor_load(F_least=2000.0, w=700.0, L=20.0) == 2000.0
    assert support.least_anchor_load(F_least=2000.0, w=700.0, L=60.0) == pytest.approx(4200.0)


@pytest.mark.parametrize(
    ("load", "rounded"),
    [(0.0, 0.0), (1.0, 500.0), (500.0, 500.0), (9501.0, 10e3), (9999.0, 10e3), (10e3, 10e3), (10_001.0, 11e3),
     (49_001.0, 50e3), (50e3, 50e3), (50_001.0, 55e3), (-9200.0, -9500.0), (-101e3, -105e3)],
)  # fmt: skip
def test_anchor_loads_are_rounded_away_from_zero(load, rounded):
    """0.5 kN below 10 kN, 1 kN below 50 kN, 5 kN above (common practice)."""
    assert support.rounded_up(load) == rounded


def test_rounding_forgives_the_last_bit():
    assert support.rounded_up(0.1 * 3 * 5000.0) == 1500.0


def test_room_by_hand():
    """5 m leg, 0.2 % hot, 219.1 mm pipe, 100 mm insulation, 0.8 mm cladding: 5.01 + 0.10955 + 0.1008 m."""
    taken = support.room_taken(l=5.0, e=0.002, D_o=0.2191, t_ins=0.1, t_clad=0.0008)
    assert taken == pytest.approx(5.22035)


def test_held_run():
    assert expansion.held_stress(nu=0.3, S_H=0.0, E_m=2e11, e=-1e-3) == pytest.approx(2e8)
    assert expansion.equivalent_stress(S_H=0.0, S_x=-5.0) == 5.0
    assert expansion.equivalent_stress(S_H=5.0, S_x=5.0) == 5.0
    assert expansion.equivalent_stress(S_H=5.0, S_x=-5.0) == pytest.approx(5 * math.sqrt(3))


def test_pressure_elongation_is_that_of_a_closed_cylinder():
    """Hooke with axial P d2/(D2 - d2) and the mean of radial and hoop stress the same: e = (1 - 2 nu) axial/E."""
    D_o, D_i, P, E = 0.2, 0.18, 40e5, 2e11
    axial = P * D_i**2 / (D_o**2 - D_i**2)
    hoop_plus_radial = 2 * axial
    assert expansion.pressure_elongation(P=P, D_i=D_i, nu=0.3, E_a=E, D_o=D_o) == pytest.approx(
        (axial - 0.3 * hoop_plus_radial) / E
    )


def test_range_under_pressure_adds_the_elongation():
    assert expansion.range_strain(e_hot=3e-3, e_cold=-1e-4) == pytest.approx(3.1e-3)
    assert expansion.range_strain_under_pressure(e_hot=3e-3, e_cold=-1e-4, e_P=1e-4) == pytest.approx(3.2e-3)

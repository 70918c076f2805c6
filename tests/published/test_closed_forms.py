"""Closed forms of mechanics, with numbers worked out apart from this project.

S. P. Timoshenko, Strength of Materials (held bar, Euler's column, thick cylinder); Coulomb's law of friction with the
common practice of 0.3 for steel on steel and 0.1 for PTFE; a guide rule of half the pinned Euler length (recalled).
"""

import pytest

from pipeflex.mechanics import cantilever, expansion, section, support
from pipeflex.units import si

from .ask import FT, IN, LBF, PSI

ALPHA, RISE = si("6.5 uin/(in*degF)", "expansion coefficient"), si("100 degF diff.", "temperature change")


def annulus(outside, wall):
    """Area and second moment [SI] of a pipe in inches."""
    D_i = section.inside_diameter(D_o=outside * IN, T_w=wall * IN)
    return section.metal_area(D_o=outside * IN, D_i=D_i), section.second_moment(D_o=outside * IN, D_i=D_i)


def test_restrained_nps8_100F():
    """NPS 8 Sch 40, held, 100 degF warmer: 19 175 psi and 161 056 lbf of compression."""
    area, _ = annulus(8.625, 0.322)
    stress = expansion.held_stress(nu=0.3, S_H=0.0, E_m=29.5e6 * PSI, e=ALPHA * RISE)
    assert stress == pytest.approx(-19175 * PSI, rel=1e-6)
    assert expansion.held_thrust(A=area, S_x=stress) == pytest.approx(-161055.72 * LBF, rel=1e-6)


def test_restrained_pressure_poisson():
    """500 psi in the same pipe: hoop 6696.4 psi, axial 0.3 hoop - E alpha dT = -17 166 psi."""
    hoop = expansion.hoop_stress(P=500 * PSI, D_o=8.625 * IN, T_w=0.322 * IN)
    assert hoop == pytest.approx(6696.42857 * PSI, rel=1e-8)
    held = expansion.held_stress(nu=0.3, S_H=hoop, E_m=29.5e6 * PSI, e=ALPHA * RISE)
    assert held == pytest.approx(-17166.0714 * PSI, rel=1e-6)
    tresca = hoop - held
    assert 0.86 * tresca < expansion.equivalent_stress(S_H=hoop, S_x=held) < tresca


def test_friction_anchor_100ft():
    """100 ft of 50.2 lb/ft: 1506 lbf at 0.3, 502 lbf at 0.1."""
    weight = si("50.2 lbf/ft", "weight per length")
    for mu, pounds in ((0.3, 1506.0), (0.1, 502.0)):
        assert support.friction_force(mu=mu, w=weight, L_mu=100 * FT) == pytest.approx(pounds * LBF, rel=1e-9)


def test_frame_guided_vs_exact():
    """Square U of NPS 6 Sch 40, 100 ft between anchors, legs of 10 ft: 8104.8 lbf, 486 286 in lbf, 57 239 psi a leg."""
    _, second = annulus(6.625, 0.280)
    E, leg = 29.5e6 * PSI, 120 * IN
    growth = expansion.free_growth(e=0.002343, X=1200 * IN)
    delta = cantilever.shared_movement(y=growth, l=leg, c_3=2 * leg**3)
    force = cantilever.cantilever_force(R_E=1.0, E_a=E, I=second, delta=delta, l=leg)
    assert force == pytest.approx(8104.77154 * LBF, rel=1e-6)
    assert cantilever.cantilever_moment(F=force, l=leg) == pytest.approx(486286.292 * LBF * IN, rel=1e-6)
    stress = cantilever.cantilever_stress(E_a=E, D_o=6.625 * IN, delta=delta, l=leg)
    assert stress == pytest.approx(57238.7578 * PSI, rel=1e-6)


def test_guide_euler_load():
    """NPS 8 Sch 40 pinned over 40 ft: 90 051 lbf, which a rise of 56.877 degF sets up in a held run."""
    area, second = annulus(8.625, 0.322)
    buckling = expansion.column_buckling(E_m=29e6 * PSI, I=second, L_g=40 * FT)
    assert buckling == pytest.approx(90051.0578 * LBF, rel=1e-6)
    rise = si("56.8770001 degF diff.", "temperature change")
    held = expansion.held_stress(nu=0.3, S_H=0.0, E_m=29e6 * PSI, e=ALPHA * rise)
    assert -expansion.held_thrust(A=area, S_x=held) == pytest.approx(buckling, rel=1e-6)


def test_guide_euler_0131_transcription():
    """0.131 sqrt(E I/F) ft, 150 psi on 31.62 in2: at 54.34 ft the column carries four times that thrust."""
    carried = expansion.column_buckling(E_m=29e6 * PSI, I=28.14 * IN**4, L_g=54.3388127 * FT)
    assert carried / (150 * 31.619364295171952 * LBF) == pytest.approx(4.0, rel=0.004)


def test_pressure_strain_dn200():
    """219.1 x 8.18 mm at 40 bar, closed ends free to move: 0.0469 mm/m."""
    D_i = section.inside_diameter(D_o=0.2191, T_w=0.00818)
    e_P = expansion.pressure_elongation(P=40e5, D_i=D_i, nu=0.3, E_a=203e9, D_o=0.2191)
    assert e_P == pytest.approx(0.0469e-3, abs=0.00005e-3)

"""Rules and coefficients of textbooks and handbooks.

M. W. Kellogg Co., Design of Piping Systems, 2nd ed., 1956: the guided cantilever as it is taught, l = 66 sqrt(D delta)
with inches, E = 29 000 000 psi and S = 20 000 psi (read, in courses and articles that quote it).
ASHRAE Handbook, HVAC Systems and Equipment, chapter on pipes: 6.225 sqrt(D delta) ft, W = L/5, H = 2 W (from memory;
the 15 000 psi is inferred from the constant).
Textbook of building services, table of the growth of heating pipework: steel 11.34e-6/K, copper 16.92e-6/K (read).
W. D. Callister, Materials Science and Engineering, Appendix B, Table B.6: copper C11000 17.0e-6/K (read).
Common practice: a kilometre of steel warmed by 50 K grows 0.6 m; 36 cm of brass over 150 K about 1 mm.
"""

import pytest

from pipeflex.mechanics.cantilever import cantilever_stress, developed_length, leg_needed, loop_developed

from .ask import FT, IN, PSI, growth_by, strain


def test_gc_leg_66():
    """6.625 in pipe, 2 in of movement: 240.2 in; 66 is 65.95 rounded."""
    leg = leg_needed(E_a=29e6 * PSI, D_o=6.625 * IN, delta=2.0 * IN, S_A=20000 * PSI)
    assert leg == pytest.approx(240.243626 * IN, rel=0.002)
    assert leg_needed(E_a=29e6 * PSI, D_o=IN, delta=IN, S_A=20000 * PSI) == pytest.approx(66 * IN, abs=0.5 * IN)
    assert cantilever_stress(E_a=29e6 * PSI, D_o=6.625 * IN, delta=2.0 * IN, l=leg) == pytest.approx(20000 * PSI)


def test_loop_ashrae_const_transcription():
    """A53 B, E = 27 900 000 psi and 15 000 psi: 6.225 ft sqrt(D delta)."""
    one = developed_length(E_a=27.9e6 * PSI, D_o=IN, delta_tot=IN, S_rule=15000 * PSI)
    assert one == pytest.approx(6.225 * FT, abs=0.0005 * FT)


def test_loop_ashrae_8in_4in_transcription():
    """NPS 8, 4 in between anchors: L = 36.56 ft; W = L/5 = 7.31 ft and H = 2 W = 14.63 ft make that length."""
    length = developed_length(E_a=27.9e6 * PSI, D_o=8.625 * IN, delta_tot=4 * IN, S_rule=15000 * PSI)
    assert length == pytest.approx(36.56 * FT, abs=0.01 * FT)
    assert loop_developed(l=14.63 * FT, L_2=7.31 * FT) == pytest.approx(length, abs=0.015 * FT)


@pytest.mark.parametrize(
    ("coefficient", "mm"), [("11.34 um/(m*K)", 1.134), ("16.92 um/(m*K)", 1.692)], ids=["steel", "copper"]
)
def test_growth_hws_100K(coefficient, mm):
    """Millimetres a metre for 100 K, printed to three decimals."""
    assert growth_by(coefficient, "1 m", "0 degC", "100 degC") == pytest.approx(mm / 1e3, abs=0.0005e-3)


def test_growth_room_temperature_copper():
    """Copper: 17.0e-6/K at room temperature; 3 % covers alloy and table (C12200 is held, C11000 printed)."""
    for expansion in ("current", "older"):
        e = strain("copper annealed", "20 degC", "40 degC", expansion=expansion)
        assert e / 20 == pytest.approx(17.0e-6, rel=0.03)


def test_a_kilometre_of_steel_and_a_bar_of_brass():
    """Common practice: 12e-6/K; brass 18 to 20e-6/K."""
    assert growth_by("12 um/(m*K)", "1 km", "10 degC", "60 degC") == pytest.approx(0.6, rel=1e-12)
    assert growth_by("19 um/(m*K)", "36 cm", "20 degC", "170 degC") == pytest.approx(1.0e-3, abs=0.05e-3)

"""Kinds of quantity and the symbols of the formulas: the nomenclature that binds the whole package.

A *kind* says how a number may be typed and printed; a *symbol* is a parameter name of a formula.
Two tests read this file: every formula must scale by the dimensions given here, and every parameter of a
formula must be a key of `SYMBOLS`.
"""

from dataclasses import dataclass
from typing import Final

Dimension = tuple[int, int, int, int]
"""Exponents of metre, kilogram, second, kelvin. An angle has none."""

KINDS: Final[dict[str, Dimension]] = {
    "ratio": (0, 0, 0, 0),
    "count": (0, 0, 0, 0),
    "angle": (0, 0, 0, 0),
    "length": (1, 0, 0, 0),
    "pipe dimension": (1, 0, 0, 0),
    "movement": (1, 0, 0, 0),
    "area": (2, 0, 0, 0),
    "section modulus": (3, 0, 0, 0),
    "volume": (3, 0, 0, 0),
    "second moment": (4, 0, 0, 0),
    "mass": (0, 1, 0, 0),
    "mass per length": (-1, 1, 0, 0),
    "density": (-3, 1, 0, 0),
    "force": (1, 1, -2, 0),
    "weight per length": (0, 1, -2, 0),
    "moment": (2, 1, -2, 0),
    "stress": (-1, 1, -2, 0),
    "modulus": (-1, 1, -2, 0),
    "pressure": (-1, 1, -2, 0),
    "stiffness": (0, 1, -2, 0),
    "rotational stiffness": (2, 1, -2, 0),
    "temperature": (0, 0, 0, 1),
    "temperature change": (0, 0, 0, 1),
    "strain": (0, 0, 0, 0),
    "expansion coefficient": (0, 0, 0, -1),
    "acceleration": (1, 0, -2, 0),
    "screening value": (0, 0, 0, 0),
    "bending stiffness": (3, 1, -2, 0),
}


@dataclass(frozen=True, slots=True)
class Symbol:
    """Meaning, kind and printed glyph of one formula symbol.

    `glyph` is plain text with `_` before a subscript; `same_as` names the symbol of another code
    with the same meaning, so that a clause finds its arguments under either name.
    """

    meaning: str
    kind: str
    glyph: str
    same_as: str | None = None

    @property
    def dimension(self) -> Dimension:
        return KINDS[self.kind]


def _symbols(*rows: tuple[str, ...]) -> dict[str, Symbol]:
    return {key: Symbol(meaning, kind, *rest) for key, meaning, kind, *rest in rows}


SYMBOLS: Final[dict[str, Symbol]] = _symbols(
    # the pipe
    ("D_o", "outside diameter", "pipe dimension", "D"),
    ("D_i", "inside diameter", "pipe dimension", "d"),
    ("T_w", "nominal wall", "pipe dimension", "T"),
    ("c_a", "corrosion allowance", "pipe dimension", "c"),
    ("r_2", "mean radius of the wall", "pipe dimension", "r"),
    ("A", "metal area", "area", "A"),
    ("A_i", "inside area", "area", "A_i"),
    ("I", "second moment of area", "second moment", "I"),
    ("Z", "section modulus", "section modulus", "Z"),
    ("t_ins", "insulation thickness", "pipe dimension", "t_i"),
    ("t_clad", "cladding thickness", "pipe dimension", "t_k"),
    ("rho", "density of the pipe metal", "density", "ρ"),
    ("rho_c", "density of the contents", "density", "ρ_c"),
    ("rho_ins", "density of the insulation", "density", "ρ_i"),
    ("rho_clad", "density of the cladding", "density", "ρ_k"),
    ("m_p", "mass of the metal per length", "mass per length", "m_p"),
    ("m_c", "mass of the contents per length", "mass per length", "m_c"),
    ("M_leg", "moment at each end of the leg", "moment", "M"),
    ("m_ins", "mass of insulation and cladding per length", "mass per length", "m_i"),
    ("g", "standard gravity", "acceleration", "g"),
    ("w", "weight per length", "weight per length", "w"),
    # growth
    ("e", "growth per length between the two temperatures", "strain", "e"),
    ("e_hot", "growth per length from the reference temperature to the hottest", "strain", "e_hot"),
    ("e_cold", "growth per length from the reference temperature to the coldest", "strain", "e_cold"),
    ("e_0", "growth per length from the reference temperature to the installed one", "strain", "e_0"),
    ("e_1", "growth per length from the reference temperature to the state's", "strain", "e_1"),
    ("e_h", "growth per length from installed to hottest", "strain", "e_h"),
    ("e_w", "growth per length of the case that moves the line most", "strain", "e_w"),
    ("e_P", "pressure elongation per length", "strain", "e_P"),
    ("alpha", "mean coefficient of expansion", "expansion coefficient", "α"),
    ("t_hot", "hottest metal temperature", "temperature", "t_hot"),
    ("t_cold", "coldest metal temperature", "temperature", "t_cold"),
    ("t_0", "installed temperature", "temperature", "t_0"),
    ("t_ref", "reference temperature of the table", "temperature", "t_ref"),
    ("L", "length of the run between anchors", "length", "L"),
    ("L_1", "length of the leg", "length", "L_1"),
    ("L_2", "length of the leg square to it", "length", "L_2"),
    ("L_dev", "developed length between anchors", "length", "L_d"),
    ("U_a", "straight distance between anchors", "length", "U"),
    ("H", "room that the loop takes, hot, to the outside of the insulation", "length", "H"),
    ("X", "run that one loop serves, anchor to anchor", "length", "X"),
    ("delta", "movement that the leg must absorb", "movement", "δ"),
    ("delta_s", "movement of the leg in that case", "movement", "δ_s"),
    ("delta_tot", "growth of the whole run", "movement", "Δ"),
    ("y", "resultant growth that the run must absorb", "movement", "y"),
    # material and code
    ("E_a", "modulus at 21 °C", "modulus", "E_a"),
    ("E_m", "modulus at the metal temperature of the state", "modulus", "E_m"),
    ("E", "modulus of elasticity", "modulus", "E"),
    ("nu", "Poisson's ratio", "ratio", "ν"),
    ("S_c", "allowable stress at the coldest metal temperature", "stress", "S_c"),
    ("S_h", "allowable stress at the hottest metal temperature", "stress", "S_h"),
    ("S_cap", "greatest S_c and S_h where f exceeds 1", "stress", "S_cap"),
    ("S_c_used", "S_c as used in the range", "stress", "S_c,used"),
    ("S_h_used", "S_h as used in the range", "stress", "S_h,used"),
    ("S_L", "sustained stress", "stress", "S_L"),
    ("S_A", "allowable displacement stress range", "stress", "S_A"),
    ("S_Ab", "allowable displacement stress range with the unused sustained stress added", "stress", "S_A"),
    ("S_E", "computed displacement stress range", "stress", "S_E"),
    ("S", "bending stress of the guided leg", "stress", "S"),
    ("S_rule", "allowable stress entered with the rule", "stress", "S_r"),
    ("f", "stress range factor", "ratio", "f"),
    ("f_m", "greatest stress range factor", "ratio", "f_m"),
    ("f_min", "least stress range factor", "ratio", "f_min"),
    ("N", "equivalent full cycles", "count", "N"),
    ("N_E", "cycles of the greatest range", "count", "N_E"),
    ("N_i", "cycles of a smaller range", "count", "N_i"),
    ("r_i", "part of the greatest range", "ratio", "r_i"),
    ("K_1", "greatest screening value", "screening value", "K_1"),
    ("K_code", "constant of the screening rule", "screening value", "K"),
    ("q", "screening value", "screening value", "q"),
    # forces
    ("F", "thrust of one leg", "force", "F"),
    ("F_th", "thermal thrust of the run on its anchor", "force", "F_th"),
    ("F_mu", "friction of the supports on the anchor's side", "force", "F_μ"),
    ("F_a", "force of the pipe on the anchor", "force", "F_a"),
    ("F_1", "force on the anchor without friction", "force", "F_1"),
    ("F_min", "least design load of an anchor", "force", "F_min"),
    ("F_least", "least design load of any anchor", "force", "F_0"),
    ("F_des", "design load of the anchor", "force", "F_d"),
    ("mu", "friction factor", "ratio", "μ"),
    ("W_c", "concentrated weights on that length", "force", "W_c"),
    ("L_mu", "length whose friction reaches the anchor", "length", "L_μ"),
    ("l", "length of the leg", "length", "l"),
    ("c_3", "sum of the cubes of the parallel legs", "volume", "Σl³"),
    ("l_req", "length that the leg needs", "length", "l_req"),
    ("L_req", "developed length that the rule asks", "length", "L_req"),
    ("g_1", "distance of the first guide from the corner", "length", "g_1"),
    ("g_req", "least distance of the first guide from the corner", "length", "g_req"),
    ("n_legs", "legs that share the movement", "count", "n"),
    ("R_E", "ratio of the moduli E_m/E_a", "ratio", "E_m/E_a"),
    ("P", "internal gauge pressure", "pressure", "P"),
    # the run held rigidly
    ("S_th", "axial stress when growth is wholly prevented", "stress", "S_th"),
    ("S_H", "hoop stress", "stress", "S_H"),
    ("S_x", "axial stress of the run held rigidly", "stress", "S_x"),
    ("S_eq", "equivalent stress of the run held rigidly", "stress", "S_eq"),
    ("F_r", "thrust of the run held rigidly", "force", "F_r"),
    ("F_cr", "column buckling load between guides", "force", "F_cr"),
    ("L_g", "distance between guides", "length", "L_g"),
    # bends
    ("R", "bend radius of the centreline", "pipe dimension", "R"),
    ("theta", "half angle of the mitre", "angle", "θ"),
    ("s_m", "spacing of the mitres at the centreline", "pipe dimension", "s"),
    ("i_fix", "stress intensification fixed by the code for this corner", "ratio", "i"),
    ("c_f", "correction for flanged ends", "ratio", "c"),
    ("n_f", "flanged ends of the bend", "count", "n_f"),
    ("C_cs", "cold spring", "ratio", "C"),
    ("C_1", "part of the reaction left cold by yielding", "ratio", "C_1"),
    ("R_F", "greatest reaction range at the modulus E_a", "force", "R"),
    ("R_m", "greatest reaction hot, with cold spring", "force", "R_m"),
    ("R_a", "greatest reaction cold, with cold spring", "force", "R_a"),
    ("h", "flexibility characteristic", "ratio", "h"),
    ("k", "flexibility factor", "ratio", "k"),
    ("i_i", "in-plane stress intensification", "ratio", "i_i"),
    ("i_o", "out-of-plane stress intensification", "ratio", "i_o"),
    ("i_a", "axial stress intensification", "ratio", "i_a"),
    ("M_Li", "in-plane moment of the weight", "moment", "M_L,i"),
    ("M_Lo", "out-of-plane moment of the weight", "moment", "M_L,o"),
    ("M_Lt", "torsional moment of the weight", "moment", "M_L,t"),
    ("F_Lx", "axial force of the weight", "force", "F_L"),
    ("i_Li", "in-plane stress intensification where the sustained stress governs", "ratio", "i_i"),
    ("i_Lo", "out-of-plane stress intensification where the sustained stress governs", "ratio", "i_o"),
    ("I_i", "in-plane index of the sustained stress", "ratio", "I_i"),
    ("I_o", "out-of-plane index of the sustained stress", "ratio", "I_o"),
    ("Z_c", "section modulus, corroded", "section modulus", "Z_c"),
    ("A_c", "metal area, corroded", "area", "A_c"),
    ("S_la", "sustained axial stress", "stress", "S_la"),
    ("S_lb", "sustained bending stress", "stress", "S_lb"),
    ("S_lt", "sustained torsional stress", "stress", "S_lt"),
    ("i_t", "torsional stress intensification", "ratio", "i_t"),
    ("M_i", "in-plane bending moment", "moment", "M_i"),
    ("M_o", "out-of-plane bending moment", "moment", "M_o"),
    ("M_t", "torsional moment", "moment", "M_t"),
    ("F_x", "axial force", "force", "F_x"),
    ("S_b", "resultant bending stress", "stress", "S_b"),
    ("S_t", "torsional stress", "stress", "S_t"),
    ("S_ax", "axial stress", "stress", "S_a"),
)

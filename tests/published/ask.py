"""What the sources are compared with: pipeflex asked for one number, text in, printed unit out."""

import numpy as np

from pipeflex.data import lookup
from pipeflex.data.pipes import pipe
from pipeflex.mechanics.expansion import free_growth, range_strain
from pipeflex.units import si

IN, FT = 0.0254, 0.3048
LBF = 0.45359237 * 9.80665
PSI = LBF / IN**2
KSI, MSI = 1e3 * PSI, 1e6 * PSI


def curve_value(curve, material, temperature, **fields):
    """Value of a curve of a material at a temperature in words."""
    made = pipe(material, outside_diameter="100 mm", wall="5 mm", **fields)
    return float(lookup.values_at(made, curve, np.array([si(temperature, "temperature")]), "temperature")[0])


def strain(material, cold, hot, **fields):
    """Growth per length of a material between two temperatures in words."""
    e = [curve_value(lookup.expansion, material, t, **fields) for t in (cold, hot)]
    return range_strain(e_hot=e[1], e_cold=e[0])


def growth(material, length, cold, hot, **fields):
    """Growth [m] of a run between two temperatures in words."""
    return free_growth(e=strain(material, cold, hot, **fields), X=si(length, "length"))


def growth_by(coefficient, length, cold, hot):
    """Growth [m] of a run by a coefficient in words, counted from the cold end."""
    e = si(coefficient, "expansion coefficient") * (si(hot, "temperature") - si(cold, "temperature"))
    return free_growth(e=e, X=si(length, "length"))

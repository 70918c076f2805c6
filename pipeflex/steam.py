"""Saturated steam: temperature from absolute pressure and back.

References
----------
IAPWS R7-97(2012), Revised Release on the IAPWS Industrial Formulation 1997 for the Thermodynamic Properties
of Water and Steam, region 4: eqs. (29) to (31), Table 34.
"""

from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from pipeflex.errors import Fault, InputError, refuse

ATMOSPHERE: Final = 101_325.0
"""Standard atmosphere [Pa], the difference between absolute and gauge pressure (ISO 2533)."""

TEMPERATURES: Final = (273.15, 647.096)
"""Range of the saturation line [K], triple point (rounded, as in the release) to critical point."""

PRESSURES: Final = (611.2126, 22.064e6)
"""Range of the saturation line [Pa]; the release rounds the first to 611.213, just past its own value."""

_N: Final = (
    0.116_705_214_527_67e4,
    -0.724_213_167_032_06e6,
    -0.170_738_469_400_92e2,
    0.120_208_247_024_70e5,
    -0.323_255_503_223_33e7,
    0.149_151_086_135_30e2,
    -0.482_326_573_615_91e4,
    0.405_113_405_420_57e6,
    -0.238_555_575_678_49,
    0.650_175_348_447_98e3,
)


def saturation_temperature(pressure: ArrayLike) -> NDArray[np.float64]:
    """Temperature of saturated steam [K].

    Parameters
    ----------
    pressure : broadcast
        Absolute pressure [Pa].

    Raises
    ------
    InputError
        Where the pressure lies off the saturation line.

    References
    ----------
    IAPWS R7-97(2012), eq. (31).

    Examples
    --------
    Table 36 of the release gives 453.035632 K at 1 MPa:

    >>> round(float(saturation_temperature(1e6)), 6)
    453.035632
    """
    p = np.asarray(pressure, dtype=float)
    _within(p, PRESSURES, "pressure", "absolute pressure of saturated steam")
    n1, n2, n3, n4, n5, n6, n7, n8, n9, n10 = _N
    # The fourth root as two square roots, which are rounded alike on every machine; a power is not.
    beta = np.sqrt(np.sqrt(p / 1e6))
    e = beta * beta + n3 * beta + n6
    f = n1 * beta * beta + n4 * beta + n7
    g = n2 * beta * beta + n5 * beta + n8
    d = 2 * g / (-f - np.sqrt(f * f - 4 * e * g))
    s = n10 + d
    return np.asarray((s - np.sqrt(s * s - 4 * (n9 + n10 * d))) / 2)


def saturation_pressure(temperature: ArrayLike) -> NDArray[np.float64]:
    """Absolute pressure of saturated steam [Pa].

    Parameters
    ----------
    temperature : broadcast
        Temperature [K].

    Raises
    ------
    InputError
        Where the temperature lies off the saturation line.

    References
    ----------
    IAPWS R7-97(2012), eq. (30).

    Examples
    --------
    Table 35 of the release gives 2.63889776 MPa at 500 K:

    >>> round(float(saturation_pressure(500.0)), 2)
    2638897.76
    """
    t = np.asarray(temperature, dtype=float)
    _within(t, TEMPERATURES, "temperature", "temperature of saturated steam")
    n1, n2, n3, n4, n5, n6, n7, n8, n9, n10 = _N
    theta = t + n9 / (t - n10)
    a = theta * theta + n1 * theta + n2
    b = n3 * theta * theta + n4 * theta + n5
    c = n6 * theta * theta + n7 * theta + n8
    root = 2 * c / (-b + np.sqrt(b * b - 4 * a * c))
    return np.asarray(1e6 * root**2 * root**2)


def _within(value: NDArray[np.float64], limits: tuple[float, float], kind: str, allowed: str) -> None:
    low, high = limits
    bad = ~((value >= low) & (value <= high))
    refuse(InputError, (bad, Fault(kind, value, allowed, kind=kind, low=low, high=high)))

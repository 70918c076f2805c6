"""Numbers of a sheet beside each other, and inputs with all the decimals that they have."""

import math
from collections.abc import Sequence
from typing import Final

from pipeflex import present
from pipeflex.present import UnitSystem

_MORE_DECIMALS: Final = 3
_FIGURES: Final = 3


def exact(value: float, kind: str, units: UnitSystem = "metric") -> str:
    """A number with its unit, with more decimals than usual where it has them."""
    if not math.isfinite(value):
        return "none given"
    usual = present.display(kind, units).decimals
    amount = present.shown(value, kind, units)
    for decimals in range(usual, usual + _MORE_DECIMALS):
        if math.isclose(round(amount, decimals), amount, rel_tol=1e-9, abs_tol=1e-12):
            return present.text(value, kind, units, decimals)
    return present.text(value, kind, units)


def alike(values: Sequence[float], kind: str, units: UnitSystem = "metric") -> list[str]:
    """Numbers with their unit and the decimals that the greatest of them needs."""
    most = max((abs(present.shown(v, kind, units)) for v in values if math.isfinite(v)), default=0.0)
    decimals = present.display(kind, units).decimals
    if most:
        decimals = min(max(decimals, _FIGURES - 1 - math.floor(math.log10(most))), 9)
    return [present.text(v, kind, units, None if math.isinf(v) else decimals) for v in values]

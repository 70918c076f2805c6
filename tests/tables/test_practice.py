"""Handbook tables that serve as checks and comparisons."""

import numpy as np

from pipeflex.data.tables import table


def test_copper_offsets_follow_their_formula():
    """Copper Tube Handbook Table 8: L = 7.4 ft sqrt(D e), printed in whole inches; R = L/(2 pi).

    92 of the 104 cells are the formula rounded; the others are rounded down or worked with other digits.
    """
    held = table("copper_loop/copper_tube_handbook")
    od, expansion, radius, length = (
        np.array(held.texts(c), float) for c in ("od_in", "expansion_in", "radius_in", "length_in")
    )
    assert len(length) == 104
    formula = 7.4 * 12 * np.sqrt(od * expansion)
    assert np.abs(length - formula).max() <= 1.3
    assert np.sum(length == np.round(formula)) >= 92
    assert np.abs(radius - length / (2 * np.pi)).max() <= 0.6
    tube = table("tube/astm_b88")
    sizes = dict(zip(tube.texts("nominal"), tube.texts("od_in"), strict=True))
    assert all(sizes[n] == d for n, d in zip(held.texts("nominal"), held.texts("od_in"), strict=True))


def test_support_spans_agree_in_feet_and_metres():
    held = table("support_span/asme_b31_1")
    for service in ("water", "gas"):
        feet, metres = held.numbers(f"{service}_ft"), held.numbers(f"{service}_m")
        assert np.abs(feet - metres).max() <= 0.0501
        assert np.all(np.diff(feet) > 0)
    assert np.all(held.numbers("gas_ft") > held.numbers("water_ft"))


def test_friction_factors_are_bounds():
    held = table("friction/factors")
    assert np.all(held.numbers("low") > 0)
    assert np.all(held.numbers("low") <= held.numbers("high"))
    assert np.all(held.numbers("high") < 1)


def test_plastics_grow_as_the_totals_printed_beside_them():
    """ASME B31.9 Table 919.3.1: total expansion from 70 to 100 degF, in/100 ft to two decimals."""
    printed = {
        "CPVC 4120": 1.26,
        "PVC 1120": 1.08,
        "PVC 1220": 1.26,
        "PVC 2110": 1.80,
        "PVC 2120": 1.08,
        "PB 2110": 2.59,
        "PE 2306": 2.88,
        "PE 3306": 2.52,
        "PE 3406": 2.16,
        "PP 1110": 1.73,
        "PP 1208": 1.55,
        "PP 2105": 1.44,
    }
    held = table("plastics/asme_b31_9")
    growth = dict(zip(held.texts("key"), held.numbers("mean_coefficient") * 30 / 1.8 * 1200, strict=True))
    assert growth.keys() == printed.keys()
    assert all(abs(growth[key] - total) <= 0.0051 for key, total in printed.items())

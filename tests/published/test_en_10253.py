"""Centreline radii of elbows.

EN 10253-2 (type 3D; as DIN 2605), dimension tables. Read.
"""

import pytest

from pipeflex.data.pipes import elbow


@pytest.mark.parametrize(
    ("dn", "millimetres"),
    [
        *((15, 28), (20, 29), (25, 38), (32, 48), (40, 57), (50, 76), (65, 95), (80, 114)),
        *((100, 152), (125, 190), (150, 229), (200, 305), (250, 381), (300, 457)),
    ],
)
def test_bend_en10253_radii(dn, millimetres):
    """Type 3D, whole millimetres."""
    assert elbow(f"DN {dn}", "3D by EN 10253").radius == pytest.approx(millimetres / 1e3, abs=1e-9)

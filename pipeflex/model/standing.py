"""Where the supports of a row stand along a run: guides from a corner toward the anchor, rests along the line."""

from typing import Any, Final

import numpy as np

CLEAR: Final = 0.25
"""Part of the spacing that the last support of a row keeps from the anchor, common practice."""


def guide_count(length: Any, first: Any, spacing: Any) -> int:
    """Guides on an outer leg of that length, the first one at a distance from its corner; of the longest row."""
    if spacing is None:
        return 1
    return 1 + int(np.max(np.floor((length - first - CLEAR * spacing) / spacing), initial=0.0))


def rest_places(lengths: np.ndarray, spacing: float) -> list[float]:
    """Distances of rests along the whole run [m].

    Counted from both ends on the outer legs, evenly over what is between. lengths : (legs,) of one row.
    """
    total = float(lengths.sum())
    if len(lengths) == 1:
        count = int(np.ceil(total / spacing - 1e-9))
        return [total * i / count for i in range(1, count)]
    first, last = (
        [i * spacing for i in range(1, int((length - CLEAR * spacing) / spacing) + 1)]
        for length in (float(lengths[0]), float(lengths[-1]))
    )
    start, end = (first or [0.0])[-1], total - (last or [0.0])[-1]
    count = int(np.ceil((end - start) / spacing - 1e-9))
    between = [start + (end - start) * i / count for i in range(1, count)]
    return [*first, *between, *(total - d for d in reversed(last))]

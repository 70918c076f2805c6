"""Where supports stand that a layout gives by distances: the guides of its outer legs, rests along the run."""

from collections.abc import Iterator
from typing import Final, NamedTuple

import numpy as np

from pipeflex.model.layout import Layout
from pipeflex.model.standing import guide_count, rest_places

_MOST: Final = 3000


class Standing(NamedTuple):
    """One support: kind, name, leg counted from 0, distance along the leg [m], gap [m]."""

    kind: str
    name: str
    leg: int
    distance: float
    gap: float


def standing(layout: Layout) -> Iterator[Standing]:
    """All supports of a single layout: guides in rows, those given one by one, rests in rows."""
    lengths = layout.leg_lengths()[:, 0]
    if len(lengths) > 1:
        yield from _guides(layout, lengths)
    for s in layout.supports:
        yield Standing(s.kind, s.name, s.leg - 1, float(s.distance), float(s.gap))
    if layout.rest_spacing is not None:
        yield from _rests(layout, lengths, float(layout.rest_spacing))


def _guides(layout: Layout, lengths: np.ndarray) -> Iterator[Standing]:
    """From the outer corners toward the ends: the first guide, then the spacing."""
    first, spacing = layout.first_guide, layout.guide_spacing
    nearest = first if first is not None else spacing
    if nearest is None:
        return
    for leg in (0, len(lengths) - 1):
        length, off = float(lengths[leg]), float(nearest)
        for i in range(min(guide_count(length, off, spacing), _MOST)):
            away = off + i * float(spacing or 0.0)
            yield Standing("guide", "", leg, length - away if leg == 0 else away, float(layout.guide_gap))


def _rests(layout: Layout, lengths: np.ndarray, spacing: float) -> Iterator[Standing]:
    """Counted from both ends on the outer legs, evenly over what is between, on level legs only."""
    level = np.abs(layout.leg_vectors()[2, :, 0]) < 1e-6 * lengths
    before = np.concatenate([[0.0], np.cumsum(lengths)])
    for place in rest_places(lengths, spacing)[:_MOST]:
        leg = min(int(np.searchsorted(before, place, side="right")) - 1, len(lengths) - 1)
        if level[leg]:
            yield Standing("rest", "", leg, float(place - before[leg]), 0.0)

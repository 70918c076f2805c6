"""What a run is made of: sections, supports and what they hold, ends, concentrated weights, load states."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Number = float | Array

Direction = Literal["along", "lateral", "vertical"] | Sequence[float] | Array
"""`along` the pipe's axis, `lateral` (horizontal and square to the axis), `vertical` (up), or a vector (3,)."""


@dataclass(frozen=True, slots=True, eq=False)
class Section:
    """Cross-section of the pipe wall.

    Each field broadcasts to (piece, row); a piece is a leg, or a part of one between its breaks.

    area : metal area [m2]; inertia : second moment [m4]; torsion : torsion constant [m4], twice `inertia` unless given.
    """

    area: Number
    inertia: Number
    torsion: Number | None = None


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class Hold:
    """One direction in which a support holds the pipe.

    direction : see `Direction`.
    stiffness : [N/m], float or (row,); infinite is rigid, 0 holds nothing.
    gap : clearance before it holds [m], each way, or below the pipe if it lifts.
    lifts : it only pushes, towards +direction: the pipe may leave it.
    """

    direction: Direction = "lateral"
    stiffness: Number = np.inf
    gap: float = 0.0
    lifts: bool = False


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class Support:
    """A place on the run that holds the pipe: on a leg at a distance from its first corner, or on a bend's middle.

    leg : index of the leg, from 0.
    distance : from the corner where the leg begins [m], float or (row,).
    bend : index of the bend, from 0, instead of leg and distance.
    holds : what it holds; guide, rest and line stop are one `Hold` each.
    friction : coefficient at the pipe's shoe, float.
    tag : name used in messages.
    """

    holds: tuple[Hold, ...]
    leg: int | None = None
    distance: Number = 0.0
    bend: int | None = None
    friction: float = 0.0
    tag: str = ""


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class PointWeight:
    """A concentrated weight (valve, flanges): `force` [N] downwards, float or (row,)."""

    force: Number
    leg: int | None = None
    distance: Number = 0.0
    bend: int | None = None
    tag: str = ""


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class Break:
    """A place on a leg where section, material or temperature changes: the next piece begins."""

    leg: int
    distance: Number
    bend: None = None
    tag: str = ""


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class End:
    """An end of the run.

    stiffness : along x, y, z [N/m] and about x, y, z [N*m/rad], each float or (row,); infinite is rigid, 0 is free.
    tag : name used in messages.
    """

    stiffness: Sequence[Number] = (np.inf,) * 6
    tag: str = ""


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class States:
    """What happens to the run, several states at once.

    strain : free strain (alpha dT), (state, piece, row), each axis of size 1 or full; a one-dimensional array is one
        value a state, a float the same in all.
    bend_strain : (state, bend, row); the mean of the neighbouring pieces unless given.
    bow : curvature from the difference of temperature top to bottom [1/m], positive where the top is hotter,
        shaped like `strain`.  It acts with the horizontal part of a sloping leg, on straights and
        (mean of the neighbours) on bends.  Linear gradient: alpha dT/D; two halves each of one temperature:
        4/pi times that.
    weight : factor on all weights, float or (state,): 0 without, 1 with.
    movement_a, movement_b : imposed movement of the ends (state, 6, row): x, y, z [m] and rotations about them [rad].
    """

    strain: Number
    bend_strain: Number | None = None
    bow: Number | None = None
    weight: Number = 0.0
    movement_a: Number | None = None
    movement_b: Number | None = None

    def count(self) -> int:
        """Number of states."""
        fields = (self.strain, self.bend_strain, self.bow, self.weight, self.movement_a, self.movement_b)
        return max(f.shape[0] if isinstance(f, np.ndarray) and f.ndim else 1 for f in fields)


Placed = Support | PointWeight | Break


def states_first(value: Number, shape: tuple[int, int, int]) -> Array:
    """A field of `States` broadcast to (state, item, row)."""
    value = np.asarray(value, dtype=float)
    if value.ndim == 1:
        value = value[:, None, None]
    return np.broadcast_to(value, shape)

"""The pipe: its size, what covers and fills it, and what it is made of."""

from typing import Final

import numpy as np

from pipeflex.errors import Fault, InputError, refuse
from pipeflex.model.fields import FrozenMap, anything, flag, many, names, number, pick_of, text, whole
from pipeflex.model.record import Record, record

MATERIAL_KINDS: Final = ("ductile metal", "brittle", "nonmetal")
JOINTS: Final = ("welded", "brazed", "soldered", "threaded", "flanged")


@record
class Curve(Record):
    """One property over temperature, as a table gives it.

    temperature : (n,) [K], rising. value : (n,) SI of `kind`. origin : of each point, in words of `Origin`
    or "confirmed by AB on DATE". own : index of the first point of the table itself; earlier points come from
    `below`, which says so. reference : temperature at which growth is counted from zero [K].
    """

    table: str = text(default="")
    row: str = text(default="")
    title: str = text(longest=600, default="")
    kind: str = text(default="")
    temperature: np.ndarray = anything()
    value: np.ndarray = anything()
    origin: tuple[str, ...] = names(default=())
    own: int = whole(default=0)
    below: str = text(longest=400, default="")
    edition: str = text(longest=300, default="")
    reference: float | None = number("temperature", optional=True, default=None)

    def check(self) -> None:
        for name in ("temperature", "value"):
            values = np.array(getattr(self, name), float)
            values.flags.writeable = False
            object.__setattr__(self, name, values)
        bad = self.temperature.shape != self.value.shape or len(self.origin) != len(self.temperature)
        refuse(
            InputError,
            (bad, Fault(self.table, f"{len(self.value)} values", "one value and origin a temperature")),
            (np.any(np.diff(self.temperature) <= 0), Fault(self.table, "temperatures", allowed="rising ones")),
            (~np.all(np.isfinite(self.value)), Fault(self.table, "values", allowed="finite ones")),
        )


@record
class Material(Record):
    """A pipe material: its curves, and an allowable stress for each stress table."""

    key: str = text(required=True)
    title: str = text(default="")
    kind: str = pick_of(*MATERIAL_KINDS, default="ductile metal")
    density: float = number("density", above=0)
    poisson: float = number("ratio", above=0, below=0.5)
    tensile_strength: float | None = number("stress", above=0, optional=True, default=None)
    ferrous: bool = flag(default=True)
    minimum_temperature: float | None = number("temperature", above=0, optional=True, default=None)
    expansion_set: str = text(default="current")
    expansion: Curve = anything()
    modulus: Curve = anything()
    stresses: FrozenMap = anything()
    joined_as: str = text(default="")
    joined_stresses: FrozenMap = anything(default=FrozenMap())
    """Allowable stresses once welding or brazing has destroyed the temper, where that makes a difference."""
    stated: str = text(longest=600, default="")
    """Source and origin of density, Poisson's ratio, tensile strength and minimum temperature."""


@record
class Pipe(Record):
    """A pipe. All numbers may be columns; `material_row` says which of `materials` each row is of.

    outside_diameter, wall [m]: nominal. mill_tolerance: of the wall only, for what needs the least wall.
    contents_density [kg/m3]: of what is in the line when it works.
    """

    outside_diameter: float = number("pipe dimension", at_least=1e-3, at_most=5.0, label="Outside diameter")
    wall: float = number("pipe dimension", at_least=1e-5, label="Wall")
    materials: tuple[Material, ...] = many(lambda: Material, columnar=False)
    material_row: int = whole(default=0, columnar=True)
    size: str = text(label="Size", help="DN 200, NPS 8, 8 in, or a tube size", default="")
    schedule: str = text(label="Wall", help="Sch 40, STD, 10S, or a tube type", default="")
    dimensions_from: str = text(longest=300, default="")
    mill_tolerance: float = number(
        "ratio", at_least=0, below=0.5, default=0.125, label="Mill tolerance", basis="common practice"
    )
    corrosion_allowance: float = number(
        "pipe dimension", at_least=0, default=0.0, label="Corrosion allowance", basis="none taken"
    )
    contents: str = text(default="water", label="Contents")
    contents_density: float = number(
        "density", at_least=0, at_most=25000, default=1000.0, label="Density of the contents", basis="water"
    )
    insulation_thickness: float = number(
        "pipe dimension", at_least=0, at_most=1.0, default=0.0, label="Insulation", basis="none"
    )
    insulation_density: float = number(
        "density",
        at_least=0,
        at_most=3000,
        default=120.0,
        label="Density of the insulation",
        basis="mineral wool, common practice",
    )
    cladding_thickness: float = number(
        "pipe dimension", at_least=0, at_most=0.01, default=0.0008, label="Cladding", basis="common practice"
    )
    cladding_density: float = number(
        "density",
        at_least=0,
        at_most=12000,
        default=2700.0,
        label="Density of the cladding",
        basis="aluminium sheet, common practice",
    )
    joint: str = pick_of(*JOINTS, default="welded", label="Joints")

    def check(self) -> None:
        D, T, c = self.outside_diameter, self.wall, self.corrosion_allowance
        member = np.asarray(self.material_row)
        refuse(
            InputError,
            (
                np.asarray(T) >= np.asarray(D) / 2,
                Fault("wall", T, "less than the radius", "pipe dimension", high=_first(np.divide(D, 2))),
            ),
            (
                (np.asarray(c) >= np.asarray(T)) & (np.asarray(T) < np.asarray(D) / 2),
                Fault("corrosion_allowance", c, "less than the wall", "pipe dimension", high=_first(T)),
            ),
            (not self.materials, Fault("material", None, allowed="at least one material")),
            (
                (member >= max(len(self.materials), 1)),
                Fault("material_row", member, allowed=f"below {len(self.materials)}"),
            ),
        )

    @property
    def material(self) -> Material:
        """The material of a single pipe."""
        return self.materials[int(np.ravel(self.material_row)[0])]

    @property
    def heated_joint(self) -> bool:
        """Whether the joints destroy the temper of the metal."""
        return self.joint in ("welded", "brazed")


def _first(value: object) -> float:
    return float(np.ravel(np.asarray(value, float))[0])

"""Random designs, sensible and senseless, as columns of one skeleton; and every number of an answer."""

import dataclasses
import math
from collections.abc import Iterator

import numpy as np

from pipeflex.codes import code
from pipeflex.data.materials import material, material_keys
from pipeflex.data.tables import table
from pipeflex.errors import PipeflexError
from pipeflex.model.design import Design
from pipeflex.model.duty import Case, Duty, Limits
from pipeflex.model.layout import Corner, End, Layout, Point, Segment, Support, Weight
from pipeflex.model.outcome import Outcome
from pipeflex.model.pipe import Material, Pipe

SHAPES = ("L", "Z", "U", "raised U", "straight", "points")
SQUARE = ("L", "Z", "U")
STEEL = table("pipe/asme_b36_10m")


def named(error: PipeflexError) -> list[int]:
    """Rows of an error, which names every field that is wrong in a line of its own."""
    assert error.faults
    assert all(fault.field and fault.text() and "\n" not in fault.text() for fault in error.faults), error
    return sorted({row for fault in error.faults for row in fault.rows})


def spoilt(rng, values, share):
    """Some of the values senseless."""
    values = np.array(values, float)
    bad = rng.random(len(values)) < share
    return np.where(bad, rng.choice([0.0, -1.0, np.nan, np.inf, 1e9, 1e-12], len(values)), values)


def last_temperature(one: Material) -> float:
    """Where the first of the curves of a material ends [K]."""
    curves = (one.expansion, one.modulus, *one.stresses.values(), *one.joined_stresses.values())
    return min(float(c.temperature[-1]) for c in curves)


class Maker:
    """Draws the numbers of `rows` designs of one random skeleton; `share` of them are senseless."""

    def __init__(self, seed: int, rows: int, share: float = 0.0, shapes: tuple[str, ...] = SHAPES) -> None:
        self.rng = np.random.default_rng(seed)
        self.rows, self.share = rows, share
        rng = self.rng
        self.shape = str(rng.choice(shapes))
        self.numbers: dict[str, np.ndarray] = {}
        sizes = rng.integers(0, len(STEEL.rows), rows)
        self.put("outside_diameter", STEEL.numbers("od_in")[sizes])
        self.put("wall", STEEL.numbers("wall_in")[sizes])
        self.put("insulation_thickness", rng.choice([0.0, 0.05, 0.1], rows))
        self.put("contents_density", rng.uniform(0, 1200, rows))
        self.put("corrosion_allowance", rng.choice([0.0, 0.0, 1e-3], rows))
        wide = 0.2 if share else 0.0
        self.put("cold", rng.uniform(256 - 600 * wide, 275, rows))
        self.put("pressure", rng.uniform(-1e5, 100e5, rows))
        self.put("install_low", rng.uniform(270, 280, rows))
        self.put("install_high", rng.uniform(285, 310, rows))
        self.put("cycles", 10 ** rng.uniform(0, 7, rows))
        self.put("greatest_range_factor", rng.choice([1.0, 1.1, 1.2], rows))
        self.put("friction", rng.uniform(0, 0.5, rows))
        self.put("run", rng.uniform(5, 120, rows))
        self.put("leg", rng.uniform(0.5, 12, rows))
        self.put("width", rng.uniform(0.3, 4, rows))
        self.put("rise", rng.uniform(0.3, 3, rows))
        self.put("first_guide", rng.uniform(0.2, 20 if share else 2, rows))
        self.put("guide_spacing", rng.uniform(1, 12, rows))
        self.put("moved", rng.choice([0.0, 0.01], rows))
        self.put("room", rng.choice([3.0, 8.0, np.inf], rows), spoil=False)
        keys = rng.choice(material_keys(), 4, replace=False)
        sets = rng.choice(["current", "older"], 4)
        self.materials = tuple(material(str(k), str(e)) for k, e in zip(keys, sets, strict=True))
        self.numbers["material_row"] = rng.integers(0, 4, rows)
        last = np.array([last_temperature(one) for one in self.materials])[self.numbers["material_row"]]
        self.put("hot", rng.uniform(320 - 200 * wide, np.minimum(last, 640) + 800 * wide))
        self.flags = {k: bool(rng.random() < 0.4) for k in (
            "guide", "spacing", "stretch", "support", "weight", "segment", "moved", "sustained"
        )}  # fmt: skip
        self.code = code(str(rng.choice(["B31.3-2018", "B31.3-2022"])))
        self.joint = str(rng.choice(["welded", "soldered", "threaded"]))
        self.kind = str(rng.choice(["bend", "square", "socket welded"]))
        if not share:
            self.flags |= dict.fromkeys(("support", "segment", "moved"), False)

    def put(self, name: str, values: np.ndarray, spoil: bool = True) -> None:
        self.numbers[name] = spoilt(self.rng, values, self.share) if spoil and self.share else np.asarray(values)

    def kept(self, rows: np.ndarray) -> None:
        self.numbers = {k: v[rows] for k, v in self.numbers.items()}
        self.rows = len(rows)

    def layout(self) -> Layout:
        n = self.numbers
        needs = {
            "straight": ("run",), "L": ("run", "leg"), "Z": ("run", "leg"), "U": ("run", "leg", "width"),
            "raised U": ("run", "leg", "width", "rise"), "points": (),
        }[self.shape]  # fmt: skip
        points = ()
        if self.shape == "points":
            points = (
                Point(), Point(along=n["run"]), Point(along=n["run"], across=n["leg"]),
                Point(along=n["run"], across=n["leg"], up=n["width"]),
            )  # fmt: skip
        return Layout(
            shape=self.shape,
            sizes={k: n[k] for k in needs},
            points=points,
            corners=(Corner(kind=self.kind, radius=0.3),),
            ends=(End(name="west", anchor_limit="20 kN"), End(name="east")),
            first_guide=n["first_guide"] if self.flags["guide"] else None,
            guide_spacing=n["guide_spacing"] if self.flags["spacing"] else None,
            friction=n["friction"],
            supports=(Support(kind="guide", leg=1, distance=0.2),) if self.flags["support"] else (),
            weights=(Weight(name="valve", mass=80.0, leg=1, distance=0.1),) if self.flags["weight"] else (),
            segments=(Segment(leg=1, start=0.0, end=0.3, temperature_offset=5.0),) if self.flags["segment"] else (),
        )

    def design(self) -> Design:
        n = self.numbers
        moved = (n["moved"], 0.0, 0.0) if self.flags["moved"] else (0.0, 0.0, 0.0)
        return Design(
            pipe=Pipe(
                materials=self.materials,
                joint=self.joint,
                **{k: n[k] for k in (
                    "outside_diameter", "wall", "material_row", "insulation_thickness", "contents_density",
                    "corrosion_allowance",
                )},
            ),
            layout=self.layout(),
            duty=Duty(
                cases=(
                    Case(name="hot", temperature=n["hot"], pressure=n["pressure"], first_end_movement=moved),
                    Case(name="cold", temperature=n["cold"]),
                ),
                pressure_elongation=self.flags["stretch"],
                unused_sustained=self.flags["sustained"],
                **{k: n[k] for k in ("install_low", "install_high", "cycles", "greatest_range_factor")},
            ),
            code=self.code,
            limits=Limits(room=n["room"]),
        )  # fmt: skip

    def sound(self) -> tuple[Design | None, int]:
        """The design without the rows that it refuses, and how many it refused."""
        refused = 0
        while self.rows:
            try:
                return self.design(), refused
            except PipeflexError as error:
                bad = named(error) or list(range(self.rows))  # a fault of the skeleton, or of the only row
                refused += len(bad)
                self.kept(np.setdiff1d(np.arange(self.rows), bad))
        return None, refused


def numbers_of(value: object, path: str = "") -> Iterator[tuple[str, np.ndarray]]:
    """Every number of an answer with its path; designs, steps and texts are left out."""
    if isinstance(value, Outcome):
        for name in ("checks", "loads", "movements", "results", "remarks", "outside", "outside_reasons", "along"):
            yield from numbers_of(getattr(value, name), name)
    elif isinstance(value, (float, int, np.ndarray, np.generic)):
        yield path, np.asarray(value)
    elif isinstance(value, dict):
        for key, one in value.items():
            yield from numbers_of(one, f"{path}.{key}")
    elif isinstance(value, tuple):
        for i, one in enumerate(value):
            yield from numbers_of(one, f"{path}.{i}")
    elif dataclasses.is_dataclass(value):
        for field in dataclasses.fields(value):
            yield from numbers_of(getattr(value, field.name), f"{path}.{field.name}")


def check_finite(outcome: Outcome) -> None:
    """No number of an answer is none; only a limit may be unlimited."""
    for path, value in numbers_of(outcome):
        assert not np.isnan(value).any(), path
        assert path.endswith(".limit") or np.isfinite(value).all(), path
    for name in ("ratio", "adequate"):
        assert np.isfinite(np.asarray(getattr(outcome, name)(), float)).all(), name
    for check in outcome.checks:
        assert np.isfinite(check.ratio).all(), check.key


def same(one: float, other: float) -> bool:
    return one == other or (math.isnan(one) and math.isnan(other))

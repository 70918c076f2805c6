"""Materials out of the tables: curves over temperature with the origin of every point."""

from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache
from typing import Final

import numpy as np

from pipeflex.data.tables import USER, Table, near, table, tables
from pipeflex.errors import Fault, InputError, TableError
from pipeflex.model.duty import Confirmed
from pipeflex.model.fields import FrozenMap
from pipeflex.model.pipe import Curve, Material
from pipeflex.model.words import Origin

MATERIALS: Final = "material/materials"
EXPANSION_SETS: Final = ("current", "older")
AGREE: Final = 294.2611111111111
"""70 degF: where an older total-expansion table is shifted to agree with a current one [K]."""
MODULUS_REACH: Final = 60.0
"""How far a modulus may continue its first interval below its first row [K]."""
LEAST_SPAN: Final = 100.0
"""Shared span of expansion, modulus and allowable at which a material is offered [K]."""
_BOUND_REACH: Final = 100.0

_ORIGINS: Final = {
    "read": Origin.READ,
    "library": Origin.READ,
    "derived": Origin.READ,
    "memory": Origin.MEMORY,
}


def _origins(source: Table, column: str, held: np.ndarray, said: dict[float, Confirmed]) -> tuple[str, ...]:
    """Origin of each point of a column, in words."""
    known = source.columns[column].provenance
    if source.origin == USER:
        each = [str(Origin.USER)] * len(source.rows)
    elif known or "provenance" not in source.columns:
        each = [str(_ORIGINS[known or source.provenance])] * len(source.rows)
    else:
        each = [str(_ORIGINS[p]) for p in source.texts("provenance")]
    temperatures = source.numbers(source.index or "")
    for i, t in enumerate(temperatures):
        if (c := said.get(round(float(t), 3))) is not None:
            each[i] = f"confirmed by {c.by} on {c.date}"
    return tuple(o for o, keep in zip(each, held, strict=True) if keep)


def _points(entry: str, confirmed: Iterable[Confirmed]) -> tuple[Table, str, np.ndarray, np.ndarray, tuple[str, ...]]:
    """Temperatures, values and origins of "topic/table:column", confirmed values put in."""
    id_, _, column = entry.partition(":")
    source = table(id_)
    values = source.numbers(column).copy()
    temperatures = source.numbers(source.index or "")
    kind = source.columns[column].kind
    said: dict[float, Confirmed] = {}
    for c in confirmed:
        if (c.table, c.row) != (id_, column):
            continue
        match = np.flatnonzero(np.abs(temperatures - c.temperature) < 0.01)
        if not len(match) or np.isnan(values[match[0]]):
            rows = tuple(r[0] for r in source.rows)
            raise InputError(
                Fault("confirmed.temperature", c.temperature, f"a row of {id_}", "temperature", near=rows[:8])
            )
        if c.kind != kind:
            raise InputError(Fault("confirmed.kind", c.kind, allowed=kind))
        values[match[0]] = c.value
        said[round(float(temperatures[match[0]]), 3)] = c
    held = ~np.isnan(values)
    return source, column, temperatures[held], values[held], _origins(source, column, held, said)


def _curve(entry: str, confirmed: Iterable[Confirmed]) -> Curve:
    """A column of a table as it stands."""
    source, column, t, value, origin = _points(entry, confirmed)
    return Curve(
        table=source.id,
        row=column,
        title=source.source_of(column),
        kind=source.columns[column].kind,
        temperature=t,
        value=value,
        origin=origin,
        edition=source.columns[column].edition,
        reference=source.reference_temperature,
    )


def _before(curve: Curve, t: np.ndarray, value: np.ndarray, origin: tuple[str, ...], below: str) -> Curve:
    """A curve with points put before its first one."""
    return curve.with_raw(
        temperature=np.concatenate([t, curve.temperature]),
        value=np.concatenate([value, curve.value]),
        origin=(*origin, *curve.origin),
        own=len(t),
        below=below,
    )


def _expansion(entry: str, older: str, minimum: float | None, confirmed: Iterable[Confirmed]) -> Curve:
    """Growth per length from the reference temperature, continued below its first row by the older table."""
    curve = _curve(entry, confirmed)
    if curve.kind == "strain":
        slope = float((curve.value[1] - curve.value[0]) / (curve.temperature[1] - curve.temperature[0]))
        return _bounded(curve, slope, minimum)
    assert curve.reference is not None
    slope = float(curve.value[0])
    curve = curve.with_raw(kind="strain", value=curve.value * (curve.temperature - curve.reference))
    _, column, t, e, origin = _points(older, confirmed)
    cold = t < curve.temperature[0] - 0.5
    if cold.any():
        shift = float(np.interp(AGREE, curve.temperature, curve.value) - np.interp(AGREE, t, e))
        source = table(older.partition(":")[0]).source_of(column)
        words = f"{source}, shifted to agree at 70 °F"
        chosen = tuple(o for o, keep in zip(origin, cold, strict=True) if keep)
        return _before(curve, t[cold], e[cold] + shift, chosen, words)
    return _bounded(curve, slope, minimum)


def _bounded(curve: Curve, slope: float, minimum: float | None) -> Curve:
    """A curve continued to the minimum temperature by its first coefficient, which shrinks in the cold."""
    first = float(curve.temperature[0])
    reach = max(minimum or 0.0, first - _BOUND_REACH)
    if reach >= first:
        return curve
    value = curve.value[0] + slope * (reach - first)
    words = "the first coefficient of the table, an upper bound of the contraction"
    return _before(curve, np.array([reach]), np.array([value]), (curve.origin[0],), words)


def _modulus(entry: str, confirmed: Iterable[Confirmed]) -> Curve:
    curve = _curve(entry, confirmed)
    t, value = curve.temperature, curve.value
    start = t[0] - MODULUS_REACH
    ahead = value[0] + (value[1] - value[0]) / (t[1] - t[0]) * (start - t[0])
    words = "the first interval of the table, continued"
    return _before(curve, np.array([start]), np.array([ahead]), (curve.origin[0],), words)


def _stress(entry: str, minimum: float | None, confirmed: Iterable[Confirmed]) -> Curve:
    curve = _curve(entry, confirmed)
    if minimum is None or minimum >= curve.temperature[0]:
        return curve
    words = "one value from the minimum temperature to the first row"
    return _before(curve, np.array([minimum]), curve.value[:1], curve.origin[:1], words)


def _stress_columns(key: str) -> dict[str, str]:
    """Stress tables that have a column for a material."""
    ids = [i for i in tables() if i.startswith("stress/")]
    return {i: f"{i}:{key}" for i in ids if key in table(i).columns}


def material_keys() -> tuple[str, ...]:
    """Keys of all materials of the tables."""
    return table(MATERIALS).texts("key")


def material(key: str, expansion: str = "current", confirmed: Iterable[Confirmed] = ()) -> Material:
    """The material of that key, with one of the expansion data sets and the confirmed values put in.

    Parameters
    ----------
    key : such as "A106-B" or "copper annealed".
    expansion : "current" (coefficients of the current tables; below their first row the older one) or "older".
    confirmed : table values as read in the licensed copy.

    Raises
    ------
    TableError
        No such material; names the nearest.
    InputError
        No such data set, or a confirmed value that fits no row.
    """
    if expansion not in EXPANSION_SETS:
        raise InputError(Fault("pipe.expansion", expansion, allowed="one of " + ", ".join(EXPANSION_SETS)))
    if key not in (known := material_keys()):
        raise TableError(Fault("pipe.material", key, allowed="a material of the tables", near=near(key, known)))
    return _material(key, expansion, tuple(confirmed))


@lru_cache(maxsize=256)
def _material(key: str, expansion: str, confirmed: tuple[Confirmed, ...]) -> Material:
    source = table(MATERIALS)
    row = source.find(key=key)

    def word(column: str) -> str:
        return source.texts(column)[row]

    def value(column: str) -> float:
        return float(source.numbers(column)[row])

    minimum = value("minimum_temperature") if word("minimum_temperature") else None

    def stresses(of: str) -> FrozenMap:
        return FrozenMap({i: _stress(e, minimum, confirmed) for i, e in _stress_columns(of).items()})

    joined = word("joined_as")
    return Material(
        key=key,
        title=word("title"),
        kind=word("kind"),
        density=value("density"),
        poisson=value("poisson"),
        tensile_strength=value("tensile"),
        ferrous=word("ferrous") == "yes",
        minimum_temperature=minimum,
        expansion_set=expansion,
        expansion=_expansion(word(f"expansion_{expansion}"), word("expansion_older"), minimum, confirmed),
        modulus=_modulus(word(f"modulus_{expansion}"), confirmed),
        stresses=stresses(key),
        joined_as=joined,
        joined_stresses=FrozenMap() if joined == key else stresses(joined),
        stated=f"{source.source} ({_ORIGINS[source.provenance]})",
    )


def stress_curve(one: Material, stress_tables: Iterable[str], heated_joint: bool = True) -> Curve | None:
    """Allowable stress by the first of the tables that has the material; None where none has it."""
    held = one.joined_stresses if heated_joint and one.joined_stresses else one.stresses
    return next((held[i] for i in stress_tables if i in held), None)


@dataclass(frozen=True, slots=True)
class Offer:
    """A material as offered for a code: the span that its three curves share [K], and the edition of its stress."""

    key: str
    title: str
    low: float
    high: float
    stress_from: str


def offered(stress_tables: tuple[str, ...], expansion: str = "current") -> tuple[Offer, ...]:
    """Materials whose expansion, modulus and allowable stress share at least 100 K for these stress tables."""
    offers = []
    for key in material_keys():
        one = material(key, expansion)
        stress = stress_curve(one, stress_tables)
        if stress is None:
            continue
        curves = (one.expansion, one.modulus, stress)
        low = max(float(c.temperature[0]) for c in curves)
        high = min(float(c.temperature[-1]) for c in curves)
        if high - low >= LEAST_SPAN:
            offers.append(Offer(key, one.title, low, high, stress.edition or stress.title))
    return tuple(offers)

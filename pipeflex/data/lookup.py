"""Values of material curves at temperatures, for single pipes and mixed columns; never beyond a table."""

from collections.abc import Callable, Iterator
from typing import Any

import numpy as np

from pipeflex.data.materials import stress_curve
from pipeflex.errors import Fault, InputError, ScopeError, refuse
from pipeflex.model.pipe import Curve, Material, Pipe

CurveOf = Callable[[Material], Curve]


def expansion(one: Material) -> Curve:
    """Growth per length from the reference temperature."""
    return one.expansion


def modulus(one: Material) -> Curve:
    """Modulus of elasticity."""
    return one.modulus


def allowable(stress_tables: tuple[str, ...], heated_joint: bool) -> CurveOf:
    """Allowable stress by the first of the tables that has the material.

    The curve of a material without one raises ScopeError, and so does a material that is no ductile metal.
    """

    def curve(one: Material) -> Curve:
        if one.kind != "ductile metal":
            raise ScopeError(Fault("pipe.material", one.key, allowed="a ductile metal for a check by the code"))
        found = stress_curve(one, stress_tables, heated_joint)
        if found is None:
            raise ScopeError(Fault("pipe.material", one.key, allowed="a material with an allowable stress here"))
        return found

    return curve


def members(pipe: Pipe) -> Iterator[tuple[Material, Any]]:
    """Each material of a column with the mask of its rows (a slice where there is only one)."""
    row = np.asarray(pipe.material_row)
    if len(pipe.materials) == 1 or row.size == 1:
        yield pipe.materials[int(row.flat[0])], slice(None)
        return
    for i, one in enumerate(pipe.materials):
        mask = row == i
        if mask.any():
            yield one, mask


def values_at(pipe: Pipe, curve_of: CurveOf, temperature: Any, field: str) -> np.ndarray:
    """Values of a curve at temperatures (..., rows) [K], each row by its own material.

    Raises
    ------
    InputError
        A temperature outside a table: names the field, the table, its range and the rows.
    """
    temperature = np.asarray(temperature, float)
    out = np.empty(temperature.shape)
    outside = np.zeros(temperature.shape, bool)
    first: Curve | None = None
    for one, rows in members(pipe):
        curve = curve_of(one)
        t = temperature[..., rows]
        out[..., rows] = np.interp(t, curve.temperature, curve.value)
        if t.min() < curve.temperature[0] or t.max() > curve.temperature[-1]:
            outside[..., rows] = (t < curve.temperature[0]) | (t > curve.temperature[-1])
            first = first or curve
    if first is not None:
        faulty = outside if outside.ndim <= 1 else outside.any(axis=0)
        given = temperature if outside.ndim <= 1 else temperature[outside.argmax(axis=0), np.arange(faulty.size)]
        low, high = float(first.temperature[0]), float(first.temperature[-1])
        words = f"within the table {first.title}"
        refuse(InputError, (faulty, Fault(field, given, words, "temperature", low, high)))
    return out


def points_used(curve: Curve, temperature: float) -> tuple[int, ...]:
    """Indices of the points of a curve that an interpolation at a temperature reads."""
    i = int(np.searchsorted(curve.temperature, temperature, side="right")) - 1
    i = min(max(i, 0), len(curve.temperature) - 1)
    if curve.temperature[i] == temperature or i + 1 == len(curve.temperature):
        return (i,)
    return (i, i + 1)


def origin_words(curve: Curve, temperature: float) -> str:
    """Where a value at a temperature comes from: table, what holds below its first row, and origin."""
    used = points_used(curve, temperature)
    origins = "; ".join(dict.fromkeys(curve.origin[i] for i in used))
    source = curve.below if curve.below and used[0] < curve.own else curve.title
    if curve.below and used[0] < curve.own and source.startswith(("the first", "one value")):
        source = f"{curve.title}, {source}"
    return f"{source} ({origins})"

"""An answer as versioned JSON: SI numbers with their units, the same bytes for the same outcome, no NaN."""

import json
import math
from typing import Any, Final

import numpy as np

from pipeflex.model.outcome import Along, Check, Ladder, Load, Movement, Outcome, Rung, Shape
from pipeflex.quantities import KINDS, SYMBOLS, Dimension

FORM: Final = 1
"""Version of the form of these results."""

LOADS_ARE: Final = "working loads, unfactored, of the pipe on the steel (or equipment)"

_BY_DIMENSION: Final[dict[Dimension, str]] = {
    (0, 0, 0, 0): "1",
    (1, 0, 0, 0): "m",
    (2, 0, 0, 0): "m2",
    (3, 0, 0, 0): "m3",
    (4, 0, 0, 0): "m4",
    (0, 1, 0, 0): "kg",
    (-1, 1, 0, 0): "kg/m",
    (-3, 1, 0, 0): "kg/m3",
    (1, 1, -2, 0): "N",
    (0, 1, -2, 0): "N/m",
    (2, 1, -2, 0): "N m",
    (3, 1, -2, 0): "N m2",
    (-1, 1, -2, 0): "Pa",
    (0, 0, 0, 1): "K",
    (0, 0, 0, -1): "1/K",
    (1, 0, -2, 0): "m/s2",
}
_WITH_ANGLE: Final = {"angle": "rad", "rotational stiffness": "N m/rad"}


def si_unit(kind: str) -> str:
    """The SI unit in which numbers of a kind stand in the results."""
    return _WITH_ANGLE.get(kind) or _BY_DIMENSION[KINDS[kind]]


def to_json(outcome: Outcome, ladder: Ladder | None = None, headline: str | None = None) -> str:
    """The answer of a single design as JSON.

    Parameters
    ----------
    outcome : answer of one row.
    ladder : all methods for the same design, if they are to stand in it.
    headline : the headline in words, if it is to stand in it.

    Returns
    -------
    str
        ASCII. Every number is SI with its unit beside it; a limit that is not given and a number that a method
        does not know are null.
    """
    design = outcome.design
    worst = outcome.worst()
    said = {
        "pipeflex_results": FORM,
        "fingerprint": design.fingerprint,
        "line": design.title.line,
        "revision": design.title.revision,
        "date": design.title.date,
        "code": {"key": design.code.key, "title": design.code.title, "edition": design.code.edition},
        "verdict": str(outcome.verdict),
        "headline": headline,
        "worst": worst.key if worst else None,
        "method": {
            "key": outcome.method,
            "title": outcome.method_title,
            "standing": str(outcome.standing),
            "reasons": [reason.words() for reason in outcome.outside_reasons],
        },
        "checks": [_check(check) for check in outcome.checks],
        "loads": {
            "are": LOADS_ARE,
            "friction_factor": _finite(design.layout.friction),
            "at": [_load(load) for load in outcome.loads],
        },
        "movements": [_movement(movement) for movement in outcome.movements],
        "along": [_along(along) for along in outcome.along],
        "shapes": [_shape(shape) for shape in outcome.shapes],
        "results": {symbol: _result(symbol, value) for symbol, value in sorted(outcome.results.items())},
        "remarks": [remark.words() for remark in outcome.remarks],
        "ladder": None if ladder is None else [_rung(rung) for rung in ladder.rungs],
        "demo": list(design.demo),
        "confirmed": [
            {"table": c.table, "row": c.row, "temperature": _finite(c.temperature), "by": c.by, "date": c.date}
            for c in design.confirmed
        ],
    }
    return json.dumps(said, indent=2, allow_nan=False) + "\n"


def _finite(value: Any) -> Any:
    """A plain number, or a list of them; null for what is not finite."""
    if np.ndim(value):
        return [_finite(one) for one in value]
    number = float(value)
    return number if math.isfinite(number) else None


def _check(check: Check) -> dict[str, Any]:
    return {
        "key": check.key,
        "title": check.title,
        "concern": str(check.concern),
        "kind": check.kind,
        "unit": si_unit(check.kind),
        "demand": _finite(check.demand),
        "limit": _finite(check.limit),
        "ratio": _finite(check.ratio) if check.judged else None,
        "judgement": str(check.judgement),
        "reason": check.reason,
        "where": check.where,
        "states": check.states,
        "note": check.note,
    }


def _load(load: Load) -> dict[str, Any]:
    states = [
        {
            "state": state,
            "thermal": _finite(thermal),
            "friction": _finite(friction),
            "weight": _finite(weight),
            "total": _finite(total),
            "toward": load.toward(total),
        }
        for state, thermal, friction, weight, total in zip(
            load.states, load.thermal, load.friction, load.weight, load.total, strict=True
        )
    ]
    return {
        "point": load.point,
        "name": load.name,
        "kind": load.kind,
        "unit": si_unit(load.kind),
        "positive_toward": load.positive,
        "negative_toward": load.negative,
        "states": states,
        "greatest": states[int(load.worst)],
    }


def _movement(movement: Movement) -> dict[str, Any]:
    ways = movement.negative, movement.positive
    states = zip(movement.states, movement.value, strict=True)
    return {
        "point": movement.point,
        "name": movement.name,
        "unit": si_unit("movement"),
        "positive_toward": movement.positive,
        "negative_toward": movement.negative,
        "states": [{"state": name, "movement": _finite(m), "toward": ways[bool(m >= 0)]} for name, m in states],
    }


def _along(along: Along) -> dict[str, Any]:
    """A quantity at distances from the first end along the run."""
    return {
        "key": along.key,
        "title": along.title,
        "unit": si_unit(along.kind),
        "distance": {"unit": "m", "values": _finite(along.distance)},
        "values": _finite(along.value),
    }


def _shape(shape: Shape) -> dict[str, Any]:
    """Places along the run and how they move in one state: along, across and up."""
    return {
        "state": shape.state,
        "unit": "m",
        "directions": ["along", "across", "up"],
        "points": _finite(np.transpose(shape.points)),
        "movements": _finite(np.transpose(shape.movement)),
    }


def _result(symbol: str, value: Any) -> dict[str, Any]:
    about = SYMBOLS.get(symbol)
    return {
        "meaning": about.meaning if about else None,
        "unit": si_unit(about.kind) if about else None,
        "value": _finite(value),
    }


def _rung(rung: Rung) -> dict[str, Any]:
    return {
        "key": rung.key,
        "title": rung.title,
        "standing": str(rung.standing),
        "reason": rung.reason,
        "comparison_only": rung.reference,
        "ratio": _finite(rung.ratio),
        "leg": {"unit": "m", "value": _finite(rung.leg)},
        "anchor": {"unit": "N", "value": _finite(rung.anchor)},
        "ratio_to_reference": _finite(rung.to_best),
        "reference_at_its_leg": _finite(rung.at_leg),
        "unsafe": rung.unsafe,
    }

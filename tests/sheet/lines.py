"""Invented lines to print: the east yard of a works that does not exist."""

import dataclasses

import numpy as np

from pipeflex.codes import code
from pipeflex.data.materials import material
from pipeflex.methods import ladder, solve
from pipeflex.model.design import Design
from pipeflex.model.duty import Case, Duty, Limits, Title
from pipeflex.model.fields import FrozenMap
from pipeflex.model.layout import Corner, End, Layout, Point, Support
from pipeflex.model.outcome import Along, Outcome, Shape
from pipeflex.model.pipe import Pipe
from pipeflex.sheet import Sheet

NASTY = "</style><script>alert('é')</script> & \"x\\\" }"
SIZES = {
    "L": {"run": 18.0, "leg": 5.0},
    "Z": {"run": 40.0, "leg": 6.0},
    "U": {"run": 60.0, "leg": 5.1, "width": 2.0},
    "raised U": {"run": 80.0, "leg": 4.0, "rise": 1.5},
}
SPATIAL = (
    Point(),
    Point(along=12),
    Point(along=12, across=7),
    Point(along=20, across=7),
    Point(along=20, across=7, up=5),
)


def line(
    shape: str = "U",
    sizes: dict[str, float] | None = None,
    *,
    hottest: float = 513.15,
    insulation: float = 0.1,
    radius: float = 0.305,
    room: float = 6.0,
    title: Title | None = None,
    tags: tuple[str, str] = ("bent 12", "bent 21"),
    points: tuple[Point, ...] = (),
    demo: tuple[str, ...] = (),
    supports: tuple[Support, ...] = (),
    **layout: object,
) -> Design:
    """One steam line."""
    return Design(
        pipe=Pipe(
            outside_diameter=0.2191,
            wall=0.00818,
            materials=(material("A106-B"),),
            size="DN 200",
            insulation_thickness=insulation,
        ),
        layout=Layout(
            shape=shape,
            sizes=FrozenMap({} if points else sizes or SIZES[shape]),
            points=points,
            corners=(Corner(kind="bend", radius=radius),),
            ends=(End(name="west", tag=tags[0], anchor_limit=40e3), End(name="east", tag=tags[1])),
            supports=supports,
            **layout,
        ),
        duty=Duty(
            cases=(
                Case(name="operating", temperature=hottest, pressure=1e6, reason="normal running"),
                Case(name="winter", temperature=263.15, reason="standing, minimum ambient"),
            )
        ),
        code=code("B31.3-2022"),
        limits=Limits(room=room),
        title=title or Title(line="HS-310", title="Steam to the east yard", revision="B", date="2026-03-02", by="AB"),
        demo=demo,
    )


def answered(design: Design) -> Outcome:
    """Answer of the rule, with an invented ribbon and hot shape to draw."""
    return with_curves(solve(design, "guided_cantilever"))


def with_curves(outcome: Outcome, peak: float = 1.15) -> Outcome:
    """An outcome with a ratio that peaks at the corners and a shape that grows toward the middle."""
    layout = outcome.design.layout
    corners = layout.corner_points()[:, :, 0]
    lengths = layout.leg_lengths()[:, 0]
    along = np.linspace(0, 1, 12)
    points = np.concatenate(
        [a[:, None] + np.outer(b - a, along) for a, b in zip(corners.T, corners.T[1:], strict=False)], axis=1
    )
    legs = np.repeat(np.arange(len(lengths)), len(along))
    ends = np.concatenate([[0.0], np.cumsum(lengths)])
    distance = (ends[:-1, None] + lengths[:, None] * along).ravel()
    near = [np.exp(-(((distance - d) / 0.8) ** 2)) * (0.6 + 0.4 * (i % 2)) for i, d in enumerate(ends[1:-1])]
    value = 0.1 + sum(near, np.zeros_like(distance))
    chord = (corners[:, -1] - corners[:, 0]) / np.linalg.norm(corners[:, -1] - corners[:, 0])
    growth = np.minimum(distance, distance[-1] - distance) * np.sign(distance[-1] / 2 - distance) * 0.003
    return dataclasses.replace(
        outcome,
        shapes=(Shape(state="operating", points=points, movement=chord[:, None] * growth, leg=tuple(legs.tolist())),),
        along=(
            Along(key="ratio", title="S_E / S_A", kind="ratio", distance=distance, value=value * peak / value.max()),
        ),
    )


def sheet(design: Design | None = None, **options: object) -> Sheet:
    """A sheet of the rule's answer."""
    design = design or line()
    return Sheet(outcome=answered(design), ladder=ladder(design), **options)

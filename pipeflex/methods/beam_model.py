"""A design as a run of beams: corners, sections, supports and states for the flexibility engine."""

from collections.abc import Collection
from dataclasses import dataclass, replace
from typing import Any, Final

import numpy as np

from pipeflex.data import lookup
from pipeflex.mechanics import section
from pipeflex.mechanics.beam import Break, End, Hold, PointWeight, Run, Section, States, Support, assemble
from pipeflex.methods.basis import REFERENCE, Basis
from pipeflex.model.design import Design
from pipeflex.model.layout import Support as Standing
from pipeflex.model.pipe import Pipe
from pipeflex.model.standing import CLEAR, guide_count, rest_places

Rows = np.ndarray

_BOW: Final = {"linear": 1.0, "half and half": 4 / np.pi}
"""Curvature over that of an even fall of temperature (first moment of a thin ring, half of it hot)."""
_HAND: Final = 0.1
_LEVEL: Final = 1e-6


@dataclass(frozen=True, slots=True, kw_only=True)
class Model:
    """A run and what the method must know about it.

    guides, rests, stops : supports of each kind, indices into `run.supports`.
    uniform : all pieces grow alike and the ends stay, so that every state is one shape times its growth.
    piece_leg : leg of each piece, from 0.
    """

    run: Run
    guides: tuple[int, ...]
    rests: tuple[int, ...]
    stops: tuple[int, ...]
    uniform: bool
    piece_leg: tuple[int, ...]
    level: bool


@dataclass(slots=True)
class Piece:
    """A stretch of one leg: its pipe, temperature offset, and where it ends (None at the corner)."""

    leg: int
    pipe: Pipe
    offset: Any
    end: Any | None


def pieces_of(design: Design) -> list[Piece]:
    """The legs, parted where a segment begins or ends."""
    made: list[Piece] = []
    for leg in range(design.layout.leg_count):
        own = sorted((s for s in design.layout.segments if s.leg == leg + 1), key=lambda s: float(np.ravel(s.start)[0]))
        for s in own:
            if np.any(np.asarray(s.start) > 0):
                made.append(Piece(leg, design.pipe, 0.0, s.start))
            whole = bool(np.all(np.asarray(s.end) >= design.layout.leg_lengths()[leg]))
            made.append(Piece(leg, s.pipe or design.pipe, s.temperature_offset, None if whole else s.end))
        if not own or made[-1].end is not None:
            made.append(Piece(leg, design.pipe, 0.0, None))
    return made


def build(
    design: Design,
    basis: Basis,
    factors: list[Any],
    *,
    rests: bool,
    without: Collection[str] = (),
) -> Model:
    """The run of a column.

    Parameters
    ----------
    factors : flexibility factor k of each corner, (rows,).
    rests : whether the weight acts, on the rests under the line: they can lift, so only a single design knows them.
    without : tags of rests to leave out.

    Raises
    ------
    InputError, UnstableLayoutError
        A layout that cannot be built; names the corner or support.
    """
    layout, rows = design.layout, design.rows or 1
    pieces = pieces_of(design)
    pipes = {id(p.pipe): p.pipe for p in pieces}
    numbers = {key: (*_section(pipe, rows), _at_reference(pipe, design, basis)) for key, pipe in pipes.items()}
    area, inertia, weight, modulus = (np.stack(v) for v in zip(*(numbers[id(p.pipe)] for p in pieces), strict=True))
    breaks = [Break(leg=p.leg, distance=p.end) for p in pieces if p.end is not None]
    guides = _guides(design)
    stops = _given(design, "line stop")
    springs = _given(design, "spring")
    under = [s for s in _rests(design, basis) if s.tag not in without] if rests else []
    under = [_beside(s, (*guides, *stops, *springs)) for s in under]
    supports = (*guides, *stops, *springs, *under)
    corners = layout.corner_points()
    radius = np.stack([np.broadcast_to(layout.corner(i).radius, (rows,)) for i in range(layout.leg_count - 1)])
    run = assemble(
        corners,
        Section(area, inertia),
        modulus=modulus,
        poisson=basis.nu,
        radius=radius,
        bend_factor=np.stack([np.broadcast_to(k, (rows,)) for k in factors]),
        weight=weight if rests else 0.0,
        supports=supports,
        weights=[
            PointWeight(force=w.mass * section.STANDARD_GRAVITY, leg=w.leg - 1, distance=w.distance, tag=w.name)
            for w in layout.weights
            if rests
        ],
        breaks=breaks,
        ends=(_end(design, 0), _end(design, 1)),
    )
    n, m = len(guides), len(stops)
    return Model(
        run=run,
        guides=tuple(range(n)),
        stops=tuple(range(n, n + m)),
        rests=tuple(range(n + m + len(springs), len(supports))),
        uniform=_uniform(design),
        piece_leg=tuple(p.leg for p in pieces),
        level=bool(np.ptp(corners[2], axis=0).max() < _LEVEL),
    )


def _section(pipe: Pipe, rows: int) -> tuple[Rows, Rows, Rows]:
    """Metal area, second moment and weight per length."""
    D_o = np.broadcast_to(pipe.outside_diameter, (rows,))
    D_i = section.inside_diameter(D_o, pipe.wall)
    A = section.metal_area(D_o, D_i)
    rho = np.array([m.density for m in pipe.materials])[np.asarray(pipe.material_row)]
    t_clad = np.where(np.asarray(pipe.insulation_thickness) > 0, pipe.cladding_thickness, 0.0)
    covering = section.covering_mass(
        pipe.insulation_thickness, D_o, pipe.insulation_density, t_clad, pipe.cladding_density
    )
    w = section.line_weight(section.metal_mass(rho, A), section.contents_mass(pipe.contents_density, D_i), covering)
    return A, section.second_moment(D_o, D_i), np.broadcast_to(w, (rows,))


def _at_reference(pipe: Pipe, design: Design, basis: Basis) -> Rows:
    return basis.E_a if pipe is design.pipe else _modulus(pipe, np.full(design.rows or 1, REFERENCE))


def _modulus(pipe: Pipe, t: Rows) -> Rows:
    return lookup.values_at(pipe, lookup.modulus, t, "layout.segments.pipe.material")


def _uniform(design: Design) -> bool:
    moved = any(
        np.any(np.asarray(v) != 0)
        for c in design.duty.cases
        for v in (
            *c.first_end_movement, *c.last_end_movement, *c.first_end_rotation, *c.last_end_rotation, c.top_to_bottom,
        )
    )  # fmt: skip
    return not moved and not design.layout.segments


def _end(design: Design, i: int) -> End:
    end = design.layout.ends[i]
    return End(stiffness=(*end.stiffness, *end.rotational_stiffness), tag=end.name)


def support_tag(one: Standing) -> str:
    """Name of a support of the design: its own, or what and where it is."""
    return one.name or f"{one.kind} at {float(np.ravel(one.distance)[0]):.1f} m of leg {one.leg}"


def _given(design: Design, kind: str) -> list[Support]:
    """The design's own supports of one kind."""
    direction = {"guide": "lateral", "line stop": "along", "rest": "vertical", "spring": "vertical"}[kind]
    made = []
    for s in design.layout.supports:
        if s.kind != kind:
            continue
        gap = float(np.max(s.gap))
        hold = Hold(direction=direction, stiffness=s.stiffness, gap=gap, lifts=kind == "rest")  # type: ignore[arg-type]
        mu = design.layout.friction if s.friction is None else s.friction
        rubs = float(np.max(mu)) if kind == "rest" else 0.0
        tag = support_tag(s)
        made.append(Support(holds=(hold,), leg=s.leg - 1, distance=s.distance, friction=rubs, tag=tag))
    return made


def _guides(design: Design) -> list[Support]:
    """Guides: the first one on both sides of what bends, those that follow at the spacing, and the design's own."""
    layout, rows = design.layout, design.rows or 1
    made = _given(design, "guide")
    if (layout.first_guide is None and layout.guide_spacing is None) or layout.leg_count < 2:
        return made
    lengths = layout.leg_lengths()
    nearest = layout.first_guide if layout.first_guide is not None else layout.guide_spacing
    first = np.broadcast_to(np.asarray(nearest, float), (rows,))
    gap = float(np.max(layout.guide_gap))
    letters = layout.corner_names()
    for leg, side in ((0, f"before {letters[0]}"), (layout.leg_count - 1, f"after {letters[-1]}")):
        length = lengths[leg]
        spacing = None if layout.guide_spacing is None else np.broadcast_to(layout.guide_spacing, (rows,))
        count = guide_count(length, first, spacing)
        for i in range(count):
            off = first if spacing is None else first + i * spacing
            room = length - (0.0 if spacing is None or not i else CLEAR * spacing)
            exists = off <= room
            off = np.where(exists, off, room * (1 - 1e-6 * (count - i)))
            hold = Hold(direction="lateral", stiffness=np.where(exists, layout.guide_stiffness, 0.0), gap=gap)
            distance: Rows = length - off if leg == 0 else off
            made.append(Support(holds=(hold,), leg=leg, distance=distance, tag=f"guide {i + 1} {side}"))
    return made


def _rests(design: Design, basis: Basis) -> list[Support]:
    """Rests under a single design: its own, and those at the spacing along the level straights."""
    layout = design.layout
    made = _given(design, "rest")
    if layout.rest_spacing is None:
        return made
    spacing, mu = float(layout.rest_spacing[0]), float(np.max(layout.friction))  # type: ignore[index]
    lengths, up = basis.lengths[:, 0], basis.vectors[2, :, 0]
    tangents = _tangents(design, basis)
    before = np.concatenate([[0.0], np.cumsum(lengths)])
    for place in rest_places(lengths, spacing):
        leg = min(int(np.searchsorted(before, place, side="right")) - 1, len(lengths) - 1)
        if abs(up[leg]) > _LEVEL * lengths[leg]:
            continue
        distance = min(max(place - before[leg], tangents[leg]), lengths[leg] - tangents[leg + 1])
        hold = Hold(direction="vertical", lifts=True)
        tag = f"rest at {distance:.1f} m of leg {leg + 1}"
        made.append(Support(holds=(hold,), leg=leg, distance=distance, friction=mu, tag=tag))
    return made


def _tangents(design: Design, basis: Basis) -> list[float]:
    """Length of straight that each corner takes from its legs, with nothing at the ends [m]."""
    along = basis.vectors[:, :, 0] / basis.lengths[:, 0]
    taken = [0.0]
    for i in range(design.layout.leg_count - 1):
        cosine = float(np.clip(along[:, i] @ along[:, i + 1], -1, 1))
        taken.append(float(np.ravel(design.layout.corner(i).radius)[0]) * np.tan(np.arccos(cosine) / 2))
    return [*taken, 0.0]


def _beside(rest: Support, others: tuple[Support, ...]) -> Support:
    """A rest a hand's breadth from a support of another kind at the same bent, so that each keeps its own place."""
    place = float(np.ravel(rest.distance)[0])
    for other in others:
        if other.leg == rest.leg and abs(float(np.ravel(other.distance)[0]) - place) < _HAND / 2:
            return replace(rest, distance=place - _HAND if place > 2 * _HAND else place + _HAND)
    return rest


def modulus_ratio(design: Design, basis: Basis) -> Rows:
    """Modulus of each case over E_a, the greatest of all pieces, (cases, rows)."""
    best: Rows = basis.case_modulus / basis.E_a
    rows = design.rows or 1
    for p in pieces_of(design):
        if p.pipe is design.pipe and not np.any(p.offset):
            continue
        E_a = _at_reference(p.pipe, design, basis)
        hot = [_modulus(p.pipe, np.broadcast_to(c.temperature, (rows,)) + p.offset) for c in design.duty.cases]
        best = np.maximum(best, np.stack(hot) / E_a)
    return best


def strains(design: Design, basis: Basis) -> Rows:
    """Growth per length of every piece in every case and tie-in day from the reference, (cases + 2, piece, rows)."""
    rows, duty = design.rows or 1, design.duty
    whole = np.concatenate([basis.case_strain + basis.e_P, basis.install_strain])
    places = [c.temperature for c in duty.cases]
    fields = [f"duty.cases.{c.name}.temperature" for c in duty.cases]
    out = []
    for p in pieces_of(design):
        if p.pipe is design.pipe and not np.any(p.offset):
            out.append(whole)
            continue
        hot = [
            lookup.values_at(p.pipe, lookup.expansion, np.broadcast_to(t, (rows,)) + p.offset, f)
            for t, f in zip(places, fields, strict=True)
        ]
        ties = [
            lookup.values_at(p.pipe, lookup.expansion, np.broadcast_to(t, (rows,)), f)
            for t, f in ((duty.install_low, "duty.install_low"), (duty.install_high, "duty.install_high"))
        ]
        out.append(np.concatenate([np.stack(hot) + basis.e_P, np.stack(ties)]))
    return np.stack(out, axis=1)


def end_movements(design: Design) -> tuple[Rows, Rows]:
    """Imposed movement of both ends in every case, (cases, 6, rows)."""
    rows = design.rows or 1

    def stacked(names: tuple[str, str]) -> Rows:
        return np.stack([
            np.stack([np.broadcast_to(v, (rows,)) for n in names for v in getattr(c, n)]) for c in design.duty.cases
        ])  # fmt: skip

    return (
        stacked(("first_end_movement", "first_end_rotation")),
        stacked(("last_end_movement", "last_end_rotation")),
    )


def bows(design: Design) -> Rows | None:
    """Curvature by the top-to-bottom difference in every case, (cases, 1, rows); None where there is none."""
    rows, pipe = design.rows or 1, design.pipe
    if not any(np.any(np.asarray(c.top_to_bottom) != 0) for c in design.duty.cases):
        return None
    found = []
    for c in design.duty.cases:
        t = np.broadcast_to(c.temperature, (rows,))
        half = np.broadcast_to(c.top_to_bottom, (rows,)) / 2
        field = f"duty.cases.{c.name}.top_to_bottom"
        top, bottom = (lookup.values_at(pipe, lookup.expansion, t + s * half, field) for s in (1, -1))
        found.append((top - bottom) / pipe.outside_diameter * _BOW[c.top_to_bottom_form])
    return np.stack(found)[:, None]


def unit_states(rows: int) -> States:
    """One state of growth one, for uniform runs."""
    return States(strain=np.ones((1, 1, rows)))


def case_states(design: Design, basis: Basis, weight: float = 0.0) -> tuple[States, tuple[str, ...]]:
    """Every case from every tie-in day, and the names of these states."""
    every = strains(design, basis)
    cases, ties = every[:-2], every[-2:]
    move_a, move_b = end_movements(design)
    bow = bows(design)
    names = [f"{c.name}, tied in on the {day} day" for c in design.duty.cases for day in ("coldest", "hottest")]
    return (
        States(
            strain=np.concatenate([c[None] - ties for c in cases]),
            bow=None if bow is None else np.repeat(bow, 2, axis=0),
            movement_a=np.repeat(move_a, 2, axis=0),
            movement_b=np.repeat(move_b, 2, axis=0),
            weight=weight,
        ),
        tuple(names),
    )


def range_states(design: Design, basis: Basis) -> States:
    """Every case and both tie-in days, growth counted from the coldest tie-in day."""
    every = strains(design, basis)
    rows = design.rows or 1
    move_a, move_b = end_movements(design)
    still = np.zeros((2, 6, rows))
    bow = bows(design)
    if bow is not None:
        bow = np.concatenate([bow, np.zeros((2, 1, rows))])
    return States(
        strain=every - every[-2],
        bow=bow,
        movement_a=np.concatenate([move_a, still]),
        movement_b=np.concatenate([move_b, still]),
    )

"""Stress ranges and sustained stresses along a run of beams, by the clauses of the design's code."""

from dataclasses import dataclass
from typing import Any, Final

import numpy as np

from pipeflex.errors import Fault, InputError, ScopeError, refuse
from pipeflex.mechanics import section
from pipeflex.mechanics.beam import Answer, Moments, moments
from pipeflex.methods.basis import Basis, basis
from pipeflex.methods.beam_model import Model, Piece, pieces_of
from pipeflex.model.design import Design
from pipeflex.trace import PLAIN, Calc, Matrix, follow

Rows = np.ndarray


AXIAL_ONE: Final = ("bend", "square", "closely spaced mitre", "widely spaced mitre")
"""Corners whose axial stress intensification is 1 (ASME B31.3 para. 319.4.4); of others it is i_o."""


@dataclass(slots=True, kw_only=True)
class Sections:
    """Numbers of every element that stresses need, (element, rows); `i_i`, `i_o` (point, element, rows).

    places : name of each point of each element, in the order of a flattened (point, element).
    """

    Z: Rows
    A: Rows
    Z_c: Rows
    A_c: Rows
    A_i: Rows
    S_A: Rows
    S_h: Rows
    i_i: Rows
    i_o: Rows
    i_a: Rows
    places: tuple[str, ...]


def corner_factors(design: Design, basis: Basis, calc: Calc) -> list[dict[str, Any]]:
    """h, k and stress intensification of each corner, (rows,), by the code of the design."""
    layout = design.layout
    found: list[dict[str, Any]] = []
    for i in range(layout.leg_count - 1):
        corner = layout.corner(i)
        chain = design.code.bend_factors.get(corner.kind)
        if chain is None:
            raise ScopeError(Fault(f"layout.corners.{i}.kind", corner.kind, allowed=f"a corner of {design.code.key}"))
        pool = {
            "D_o": basis.D_o, "T_w": basis.T_w, "R": corner.radius, "n_f": corner.flanges, "theta": corner.half_angle,
            "s_m": corner.spacing, "i_fix": np.full_like(basis.D_o, design.code.options.get(f"i {corner.kind}", 1.0)),
        }  # fmt: skip
        close = corner.kind == "closely spaced mitre"
        r_2 = (basis.D_o - basis.T_w) / 2
        permitted = "below r (1 + tan of the half angle)"
        fault = Fault(f"layout.corners.{i}.spacing", corner.spacing, permitted, "pipe dimension")
        refuse(InputError, (close & (np.asarray(corner.spacing) >= r_2 * (1 + np.tan(corner.half_angle))), fault))
        same = i and all(corner is layout.corner(j) for j in range(i))
        if same:
            found.append(found[0])
            continue
        if not i:
            every = " and all others" if len(layout.corners) == 1 and layout.leg_count > 2 else ""
            calc.say(f"Corner A{every}: {corner.kind}")
            if calc.tracing and corner.kind == "bend":
                calc.given("R", corner.radius, corner.radius_from or "given")
        follow(chain, pool, calc if not i else PLAIN)
        found.append({"k": np.ones_like(basis.D_o), "h": np.full_like(basis.D_o, np.nan), **pool})
    if calc.tracing and any(f is not found[0] for f in found):
        names = layout.corner_names()
        calc.show(
            Matrix(
                words="flexibility and stress intensification of all corners", equation="as for corner A",
                ref=design.code.key, heads=("k", "i_i", "i_o"), kinds=("ratio",) * 3,
                rows=tuple((f"corner {n}", tuple(float(f[s][0]) for s in ("k", "i_i", "i_o")))
                           for n, f in zip(names, found, strict=True)),
            )
        )  # fmt: skip
    return found


def sections_of(design: Design, start: Basis, model: Model, factors: list[dict[str, Any]]) -> Sections:
    """What the stresses of every element need."""
    plan, rows = model.run.plan, design.rows or 1
    pieces = pieces_of(design)
    if design.layout.segments:
        each = [_piece_numbers(design, start, p) for p in pieces]
        numbers = [np.stack(v)[plan.piece] for v in zip(*each, strict=True)]
        bent = np.flatnonzero(plan.bend >= 0)
        for allowable in numbers[5:]:  # a bend is of both its neighbours: the weaker one counts
            allowable[bent] = np.minimum(allowable[bent], allowable[bent + 1])
    else:
        numbers = [np.broadcast_to(v, (len(plan.leg), rows)) for v in _piece_numbers(design, start, pieces[0])]
    Z, A, Z_c, A_c, A_i, S_A, S_h = numbers
    i_i, i_o, i_a = (np.ones((3, len(plan.leg), rows)) for _ in range(3))
    for e, bend in enumerate(plan.bend):
        if bend >= 0:
            i_i[:, e], i_o[:, e] = factors[bend]["i_i"], factors[bend]["i_o"]
    for corner, f in enumerate(factors):
        if (plan.bend == corner).any():
            continue
        last = np.flatnonzero(plan.leg == corner)[-1]
        if design.layout.corner(corner).kind not in AXIAL_ONE:
            i_a[2, last] = i_a[0, last + 1] = f["i_o"]
        i_i[2, last], i_o[2, last] = f["i_i"], f["i_o"]
        i_i[0, last + 1], i_o[0, last + 1] = f["i_i"], f["i_o"]
    return Sections(
        Z=Z, A=A, Z_c=Z_c, A_c=A_c, A_i=A_i, S_A=S_A, S_h=S_h, i_i=i_i, i_o=i_o, i_a=i_a,
        places=_places(design, model),
    )  # fmt: skip


def _piece_numbers(design: Design, start: Basis, piece: Piece) -> tuple[Rows, ...]:
    """Section and allowables of one piece, by its own metal and its own temperatures."""
    pipe = piece.pipe
    D_o, T_w, c = pipe.outside_diameter, pipe.wall, pipe.corrosion_allowance
    D_i = section.inside_diameter(D_o, T_w)
    D_c = D_i + 2 * c
    A, A_c = section.metal_area(D_o, D_i), section.metal_area(D_o, D_c)
    Z = section.section_modulus(section.second_moment(D_o, D_i), D_o)
    Z_c = section.section_modulus(section.second_moment(D_o, D_c), D_o)
    own = start if pipe is design.pipe and not np.any(piece.offset) else basis(_as_if_whole(design, piece), PLAIN)
    shape = (design.rows or 1,)
    values = (Z, A, Z_c, A_c, np.pi / 4 * D_c**2, own.S_A, own.S_h)
    return tuple(np.broadcast_to(v, shape) for v in values)


def _as_if_whole(design: Design, piece: Piece) -> Design:
    """The design with the pipe and the temperatures of one piece all along."""
    duty = design.duty
    cases = tuple(c.with_raw(temperature=c.temperature + piece.offset) for c in duty.cases)
    return design.with_raw(pipe=piece.pipe, duty=duty.with_raw(cases=cases))


def _places(design: Design, model: Model) -> tuple[str, ...]:
    """Names of the points of every element: start, middle, end."""
    plan, layout = model.run.plan, design.layout
    corners, ends = layout.corner_names(), layout.ends
    supports = {int(s): model.run.supports[i].tag for i, s in enumerate(plan.support_station)}
    count = len(plan.leg)

    def station(e: int) -> str:
        if e == 0:
            return f"anchor {ends[0].name or 'first'}"
        if e == count:
            return f"anchor {ends[1].name or 'last'}"
        if e in supports:
            return f"leg {plan.leg[e] + 1}, {supports[e]}"
        before, after = plan.bend[e - 1], plan.bend[e]
        if before >= 0:
            return f"bend {corners[before]}, end"
        if after >= 0:
            return f"bend {corners[after]}, start"
        if plan.leg[e] != plan.leg[e - 1]:
            return f"corner {corners[plan.leg[e - 1]]}"
        return f"leg {plan.leg[e] + 1}, where the section changes"

    starts = [station(e) for e in range(count)]
    ends_ = [station(e + 1) for e in range(count)]
    middles = [
        f"bend {corners[b]}, middle" if b >= 0 else f"leg {plan.leg[e] + 1}, along the straight"
        for e, b in enumerate(plan.bend)
    ]
    return (*starts, *middles, *ends_)


@dataclass(slots=True, kw_only=True)
class Range:
    """Stress range at every point, (point, element, rows), and where its ratio to S_A is greatest.

    place : index into `places`, (rows,); S_E, S_A : there. pool : its moments and factors by symbol, (rows,).
    """

    every: Rows
    place: Rows
    S_E: Rows
    S_A: Rows
    pool: dict[str, Rows]
    all_moments: dict[str, Rows]


def stress_range(design: Design, sections: Sections, answer: Answer, scale: Rows | None) -> Range:
    """Greatest range of all pairs of states.

    scale : (rows,), growth of a uniform run whose answer is for a growth of one; None for an answer of all states.
    """
    found = moments(answer)
    if scale is not None:
        one = _times(found, scale)
        every = _by_code(design, sections, one)
        return _governing(sections, every, one)
    count = found.axial.shape[0]
    best: tuple[Rows, dict[str, Rows]] | None = None
    for i in range(count):
        for j in range(i + 1, count):
            pair = _difference(found, i, j)
            every = _by_code(design, sections, pair)
            if best is None:
                best = (every, pair)
                continue
            more = every > best[0]
            best = (np.where(more, every, best[0]), {k: np.where(more, pair[k], best[1][k]) for k in pair})
    assert best is not None
    return _governing(sections, *best)


def _times(found: Moments, scale: Rows) -> dict[str, Rows]:
    return {"M_i": found.in_plane[0] * scale, "M_o": found.out_plane[0] * scale, "M_t": found.torsion[0] * scale,
            "F_x": found.axial[0] * scale}  # fmt: skip


def _difference(found: Moments, i: int, j: int) -> dict[str, Rows]:
    return {"M_i": found.in_plane[i] - found.in_plane[j], "M_o": found.out_plane[i] - found.out_plane[j],
            "M_t": found.torsion[i] - found.torsion[j], "F_x": found.axial[i] - found.axial[j]}  # fmt: skip


def _by_code(design: Design, s: Sections, m: dict[str, Rows]) -> Rows:
    pool = {**m, "i_i": s.i_i, "i_o": s.i_o, "i_t": 1.0, "i_a": s.i_a, "Z": s.Z, "A": s.A}
    return np.asarray(follow(design.code.expansion_stress, pool, PLAIN))


def _governing(s: Sections, every: Rows, m: dict[str, Rows]) -> Range:
    ratio = (every / s.S_A).reshape(-1, every.shape[-1])
    place = ratio.argmax(axis=0)
    at = (*np.divmod(place, every.shape[1]), np.arange(every.shape[-1]))
    numbers = {**m, "i_i": s.i_i, "i_o": s.i_o, "i_a": s.i_a, "Z": s.Z, "A": s.A}

    def there(values: Rows) -> Rows:
        return np.asarray(np.broadcast_to(values, every.shape)[at])

    pool = {k: there(v) for k, v in numbers.items()}
    return Range(every=every, place=place, S_E=there(every), S_A=there(s.S_A), pool=pool, all_moments=m)


def trace_range(design: Design, sections: Sections, found: Range, calc: Calc) -> None:
    """Ledger of the range: a table of all points, then the clauses with the numbers of the governing one."""
    if not calc.tracing:
        return
    names = ("M_i", "M_o", "M_t", "F_x")
    columns = [_clean(found.all_moments[n].reshape(-1)) for n in names]
    columns += [sections.i_i.reshape(-1), sections.i_o.reshape(-1), found.every.reshape(-1)]
    order = _along(len(sections.Z))
    seen: set[str] = set()
    rows = []
    for flat in order:
        place = sections.places[flat]
        key = place + f"{columns[4][flat]:.3f}"
        if key in seen:
            continue
        seen.add(key)
        rows.append((place, tuple(float(c[flat]) for c in columns)))
    calc.show(
        Matrix(
            words="moments, axial force and range at every point along the run, coldest to hottest",
            equation="moments of the beam solution at E_a", ref=design.code.key, heads=(*names, "i_i", "i_o", "S_E"),
            kinds=("moment", "moment", "moment", "force", "ratio", "ratio", "stress"), rows=tuple(rows),
        )
    )  # fmt: skip
    calc.say(f"Governing point: {sections.places[int(found.place[0])]}")
    for name in ("M_i", "M_o", "M_t", "F_x"):
        calc.given(name, np.abs(found.pool[name]), "beam solution, at the governing point")
    pool = {**found.pool, **{n: np.abs(found.pool[n]) for n in names}, "i_t": 1.0}
    follow(design.code.expansion_stress, pool, calc)


def _clean(values: Rows) -> Rows:
    """What rounding leaves of nothing is nothing, on paper."""
    return np.where(np.abs(values) > 1e-9 * np.abs(values).max(initial=0.0), values, 0.0)


def _along(elements: int) -> list[int]:
    """Flat indices of (point, element) in order along the run."""
    return [point * elements + e for e in range(elements) for point in range(3)]


@dataclass(slots=True, kw_only=True)
class Sustained:
    """Greatest ratio of S_L to S_h of one support state: values there, (rows,), and the numbers that give them."""

    S_L: Rows
    S_h: Rows
    place: Rows
    places: tuple[str, ...]
    pool: dict[str, Rows]


def sustained(design: Design, sections: Sections, found: Moments, pressure: Rows) -> Sustained:
    """Sustained stress of weight and pressure in the first state of a support state, at its worst point."""
    s = sections
    pool = {
        "M_Li": found.in_plane[0], "M_Lo": found.out_plane[0], "M_Lt": found.torsion[0], "F_Lx": found.axial[0],
        "i_Li": s.i_i, "i_Lo": s.i_o, "Z_c": s.Z_c, "A_c": s.A_c, "A_i": s.A_i, "P": pressure,
    }  # fmt: skip
    every = np.asarray(follow(design.code.sustained_stress, dict(pool), PLAIN))
    flat = (every / s.S_h).reshape(-1, every.shape[-1])
    place = flat.argmax(axis=0)

    def there(values: Rows) -> Rows:
        spread = np.broadcast_to(values, every.shape).reshape(flat.shape)
        return np.asarray(np.take_along_axis(spread, place[None], axis=0)[0])

    return Sustained(
        S_L=there(every), S_h=there(s.S_h), place=place, places=s.places, pool={k: there(v) for k, v in pool.items()}
    )


def trace_sustained(design: Design, found: Sustained, state: str, calc: Calc) -> None:
    """Ledger of the sustained stress at its governing point."""
    if not calc.tracing:
        return
    calc.say(f"Sustained stress, governing point: {found.places[int(found.place[0])]}, {state}")
    corner, corroded = "corner at that point, 1 on a straight", "wall less corrosion allowance"
    origins = {"P": "greatest of the cases", "Z_c": corroded, "A_c": corroded, "A_i": corroded, "i_Li": corner,
               "i_Lo": corner}  # fmt: skip
    beam = "beam solution of the weight on its rests, at that point"
    pool = {n: calc.given(n, v, origins.get(n, beam)) for n, v in found.pool.items()}
    follow(design.code.sustained_stress, pool, calc)

"""What every method starts from, worked out once: section, weight, growth, moduli, allowable range."""

import re
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any, Final

import numpy as np

from pipeflex.data import lookup
from pipeflex.data.materials import stress_curve
from pipeflex.mechanics import expansion, section
from pipeflex.model.design import Design
from pipeflex.model.outcome import Remark
from pipeflex.model.pipe import Curve, Material, Pipe
from pipeflex.trace import PLAIN, Calc, follow

REFERENCE: Final = 294.15
"""21 degC: where the reference modulus is taken [K] (ASME B31.3 para. 319.4.4)."""

Rows = np.ndarray


@dataclass(slots=True, kw_only=True)
class Basis:
    """SI numbers, (rows,) unless said. `pool` holds those that clauses may ask for, by symbol."""

    D_o: Rows
    T_w: Rows
    D_i: Rows
    A: Rows
    I: Rows
    Z: Rows
    w: Rows
    """Weight per length with contents."""
    t_clad: Rows
    nu: Rows
    E_a: Rows
    t_hot: Rows
    t_cold: Rows
    e: Rows
    """Growth per length over the whole range, coldest to hottest."""
    case_strain: Rows
    """Growth per length of each case from the reference temperature, (cases, rows)."""
    install_strain: Rows
    """The same of the coldest and the hottest tie-in day, (2, rows)."""
    case_modulus: Rows
    """Modulus of each case, (cases, rows)."""
    e_P: Rows
    """Pressure elongation of each case that is counted, (cases, rows)."""
    case_growth: Rows
    """Growth per length of each case from the tie-in day that makes it greatest, (cases, rows)."""
    S_c: Rows
    S_h: Rows
    f: Rows
    S_A: Rows
    vectors: Rows
    """Legs from corner to corner, (3, legs, rows)."""
    lengths: Rows
    """Their lengths, (legs, rows)."""
    apart: Rows
    """From the first end to the last, (3, rows)."""
    pool: dict[str, Any]
    remarks: list[Remark] = field(default_factory=list)


def remark(text: str, rows: Any = True, serious: bool = False, /, **values: tuple[Any, str]) -> Remark:
    """A remark for the rows of a mask; `values` are named numbers with their kinds."""
    shaped = {k: (np.atleast_1d(v), kind) for k, (v, kind) in values.items()}
    return Remark(text=text, values=shaped, rows=np.atleast_1d(rows), serious=serious)


def basis(design: Design, calc: Calc) -> Basis:
    """Work out the basis of a column.

    Raises
    ------
    InputError
        A temperature outside a table.
    ScopeError
        A material without an allowable stress for the code, or no ductile metal.
    """
    pipe, rows = design.pipe, design.rows or 1
    remarks: list[Remark] = []
    calc.say("Section and weight", heading=True)
    geometry = _section(pipe, calc)
    calc.say("Temperatures and growth", heading=True)
    growth = _growth(design, geometry, calc, remarks)
    calc.say("Allowable range", heading=True)
    pool: dict[str, Any] = {**geometry, **growth}
    _allowable(design, pool, calc, remarks)
    _not_judged(design, pool, remarks)
    vectors = design.layout.leg_vectors()
    pool |= {"vectors": vectors, "lengths": np.sqrt((vectors**2).sum(axis=0)), "apart": vectors.sum(axis=1)}
    taken = {name: pool[name] for name in Basis.__dataclass_fields__ if name in pool}
    made = Basis(**taken, pool=pool, remarks=remarks)
    for r in made.remarks:
        object.__setattr__(r, "rows", np.broadcast_to(r.rows, (rows,)))
    return made


def _per_row(pipe: Pipe, of: Callable[[Material], float]) -> Rows:
    values = np.array([of(m) for m in pipe.materials])
    taken: Rows = values[np.asarray(pipe.material_row)]
    return taken


def _section(pipe: Pipe, calc: Calc) -> dict[str, Any]:
    size = pipe.dimensions_from or "given"
    D_o = calc.given("D_o", pipe.outside_diameter, size)
    T_w = calc.given("T_w", pipe.wall, size)
    D_i = calc(section.inside_diameter, D_o=D_o, T_w=T_w)
    A = calc(section.metal_area, D_o=D_o, D_i=D_i)
    I = calc(section.second_moment, D_o=D_o, D_i=D_i)
    Z = calc(section.section_modulus, I=I, D_o=D_o)
    t_clad = np.where(np.asarray(pipe.insulation_thickness) > 0, pipe.cladding_thickness, 0.0)
    stated = pipe.materials[0].stated
    rho = calc.given("rho", _per_row(pipe, lambda m: m.density), stated)
    m_p = calc(section.metal_mass, rho=rho, A=A)
    m_c = calc(section.contents_mass, rho_c=pipe.contents_density, D_i=D_i)
    m_ins = calc(
        section.covering_mass,
        t_ins=pipe.insulation_thickness,
        D_o=D_o,
        rho_ins=pipe.insulation_density,
        t_clad=t_clad,
        rho_clad=pipe.cladding_density,
    )
    w = calc(section.line_weight, m_p=m_p, m_c=m_c, m_ins=m_ins)
    return {"D_o": D_o, "T_w": T_w, "D_i": D_i, "A": A, "I": I, "Z": Z, "w": w, "t_clad": t_clad}


def pipe_weight(pipe: Pipe) -> Rows:
    """Weight per length of a pipe of a column, (rows,) [N/m]."""
    return np.asarray(_section(pipe, PLAIN)["w"])


def _words(pipe: Pipe, curve_of: Callable[[Material], Curve], t: Rows, calc: Calc) -> str:
    if not calc.tracing:
        return ""
    return lookup.origin_words(curve_of(pipe.material), float(np.ravel(t)[0]))


def _growth(design: Design, g: dict[str, Any], calc: Calc, remarks: list[Remark]) -> dict[str, Any]:
    pipe, duty = design.pipe, design.duty
    shape = (design.rows or 1,)
    places = [(c.temperature, f"duty.cases.{c.name}.temperature") for c in duty.cases]
    ties = [(duty.install_low, "duty.install_low"), (duty.install_high, "duty.install_high")]

    def strains(which: list[tuple[Any, str]]) -> Rows:
        return np.stack([lookup.values_at(pipe, lookup.expansion, np.broadcast_to(t, shape), f) for t, f in which])

    case_strain, install_strain = strains(places), strains(ties)
    case_modulus = np.stack([lookup.values_at(pipe, lookup.modulus, np.broadcast_to(t, shape), f) for t, f in places])
    t_hot, t_cold = design.hottest(), design.coldest()
    both = np.concatenate([case_strain, install_strain])
    expand = lookup.expansion
    calc.given("t_hot", t_hot, "hottest of the cases and tie-in days")
    calc.given("t_cold", t_cold, "coldest of the cases and tie-in days")
    e_hot = calc.given("e_hot", both.max(axis=0), _words(pipe, expand, t_hot, calc))
    e_cold = calc.given("e_cold", both.min(axis=0), _words(pipe, expand, t_cold, calc))
    nu = _per_row(pipe, lambda m: m.poisson)
    E_a = lookup.values_at(pipe, lookup.modulus, np.full(shape, REFERENCE), "pipe.material")
    calc.given("E_a", E_a, _words(pipe, lookup.modulus, np.array([REFERENCE]), calc))
    # a vacuum shortens the run by next to nothing: not counted
    pressures = np.stack([np.broadcast_to(np.maximum(c.pressure, 0.0), shape) for c in duty.cases])
    stretch = {"P": pressures, "D_i": g["D_i"], "nu": nu, "E_a": E_a, "D_o": g["D_o"]}
    e_P = expansion.pressure_elongation(**stretch)
    under_pressure = pressures.max(axis=0) > 0
    most = (e_P.max(axis=0), "strain")
    if duty.pressure_elongation:
        greatest, _ = calc.worst(
            expansion.pressure_elongation, over="case", names=[c.name for c in duty.cases], **stretch
        )
        e = calc(expansion.range_strain_under_pressure, e_hot=e_hot, e_cold=e_cold, e_P=greatest)
        words = "Pressure elongation of at most {e_P} is counted in growth and range."
    else:
        e_P = np.zeros_like(case_strain)
        e = calc(expansion.range_strain, e_hot=e_hot, e_cold=e_cold)
        words = "Pressure elongation of at most {e_P} is not counted."
    remarks.append(remark(words, under_pressure, e_P=most))
    _remark_cold(design, t_cold, remarks)
    from_low, from_high = (case_strain + e_P - tie for tie in install_strain)
    case_growth = np.where(np.abs(from_low) >= np.abs(from_high), from_low, from_high)
    return {
        "nu": nu, "E_a": E_a, "t_hot": t_hot, "t_cold": t_cold, "e": e, "e_P": e_P,
        "case_strain": case_strain, "install_strain": install_strain, "case_modulus": case_modulus,
        "case_growth": case_growth,
    }  # fmt: skip


def _remark_cold(design: Design, t_cold: Rows, remarks: list[Remark]) -> None:
    """What holds below the first row of the expansion table, and whether a minimum ambient was given."""
    for one, rows in lookup.members(design.pipe):
        curve = one.expansion
        if not curve.below:
            continue
        mask = np.zeros(t_cold.shape, bool)
        mask[rows] = t_cold[rows] < curve.temperature[curve.own]
        if mask.any():
            text = f"Growth of {one.key} below the first row of its table: {curve.below}."
            remarks.append(remark(text, mask))
    ambient = design.temperatures().min(axis=0) < np.asarray(design.duty.install_low)
    remarks.append(
        remark("No case is colder than the coldest tie-in day {t}: give the minimum ambient if it can be.",
               ~ambient, True, t=(design.duty.install_low, "temperature"))
    )  # fmt: skip


def _allowable(design: Design, pool: dict[str, Any], calc: Calc, remarks: list[Remark]) -> None:
    pipe, duty, code = design.pipe, design.duty, design.code
    curve_of = lookup.allowable(code.stress_tables, pipe.heated_joint)
    S_c = lookup.values_at(pipe, curve_of, pool["t_cold"], "coldest metal temperature")
    S_h = lookup.values_at(pipe, curve_of, pool["t_hot"], "hottest metal temperature")
    pool["S_c"] = calc.given("S_c", S_c, _words(pipe, curve_of, pool["t_cold"], calc))
    pool["S_h"] = calc.given("S_h", S_h, _words(pipe, curve_of, pool["t_hot"], calc))
    pool["N"] = calc.given("N", duty.cycles, "given")
    ferrous = _per_row(pipe, lambda m: float(m.ferrous and (m.tensile_strength or np.inf) <= _strength(design)))
    permitted = (ferrous > 0) & (pool["t_hot"] <= code.options.get("ferrous_temperature", np.inf))
    f_m = np.where(permitted, duty.greatest_range_factor, 1.0)
    pool["f_m"] = calc.given("f_m", f_m, "1.0, or up to 1.2 by choice where the code permits")
    pool["S_A"] = follow(code.allowable_range, pool, calc)
    remarks.append(
        remark("A greatest f of {f_m} was asked; the code permits 1.0 for this material and temperature.",
               ~permitted & (np.asarray(duty.greatest_range_factor) > 1), f_m=(duty.greatest_range_factor, "ratio"))
    )  # fmt: skip
    for one, rows in lookup.members(pipe):
        _remark_stress(design, one, rows, remarks)
    remarks += [remark(text) for text in code.remarks]


def _not_judged(design: Design, pool: dict[str, Any], remarks: list[Remark]) -> None:
    """What no method here computes: said, never left out in silence."""
    layout = design.layout
    said = (
        ("Contents of their own in {names} are not judged: the weight is that of the line's contents.",
         [c.name for c in design.duty.cases if c.contents_density is not None]),
        ("The load of a spring is not judged: {names}.",
         [s.name or "spring" for s in layout.supports if s.kind == "spring" and np.any(np.asarray(s.load) > 0)]),
        ("Friction of guides and line stops is not judged: {names}.",
         [s.name or s.kind for s in layout.supports if s.friction is not None and s.kind in ("guide", "line stop")]),
    )  # fmt: skip
    remarks += [
        remark(text.replace("{names}", ", ".join(n)).replace("{", "(").replace("}", ")")) for text, n in said if n
    ]
    if layout.pockets == "no" and (np.abs(layout.leg_vectors()[2]) > 1e-6).any():
        remarks.append(
            remark("The line rises or falls and may not be pocketed: drains and slope are not judged.", True, True)
        )
    if layout.leg_count > 5 and (layout.first_guide is not None or layout.guide_spacing is not None):
        remarks.append(remark("Guides by distance stand on the two outer legs only; give others one by one."))
    slender = pool["D_o"] > 100 * pool["T_w"]
    remarks.append(remark("D/T is above 100: the published bend factors do not hold.", slender, True))


def _strength(design: Design) -> float:
    return float(design.code.options.get("ferrous_strength", np.inf))


def _remark_stress(design: Design, one: Material, rows: Any, remarks: list[Remark]) -> None:
    """Say so where the edition has no stress table of its own, or the joints take another row."""
    pipe, code = design.pipe, design.code
    curve = stress_curve(one, code.stress_tables, pipe.heated_joint)
    assert curve is not None
    mask = np.zeros(design.rows or 1, bool)
    mask[rows] = True
    if curve.table != code.stress_tables[0] or not _covers(curve.edition, code.edition):
        edition = curve.edition or curve.title
        remarks.append(remark(f"Allowable stress of {one.key}: {edition}, the nearest held for {code.key}.", mask))
    if pipe.heated_joint and one.joined_stresses:
        remarks.append(
            remark(f"Joints are {pipe.joint}: {one.key} takes the allowable stress of {one.joined_as}.", mask)
        )


def _covers(editions: str, edition: str) -> bool:
    """Whether "2012 to 2020" names the edition "2018"; no years cover all."""
    years = [int(y) for y in re.findall(r"\b(?:19|20)\d\d\b", editions)]
    if not years:
        return True
    return (min(years) if len(years) > 1 else 0) <= int(edition) <= max(years)


def table_values(design: Design) -> tuple[tuple[Curve, int], ...]:
    """Points of tables that a single design reads: curve and index of each, in order, without repetition."""
    pipe, code = design.pipe, design.code
    one = pipe.material
    stress = stress_curve(one, code.stress_tables, pipe.heated_joint)
    temperatures = [float(np.ravel(t)[0]) for t in design.temperatures()]
    ties = [float(np.ravel(t)[0]) for t in (design.duty.install_low, design.duty.install_high)]
    extremes = [float(design.coldest()[0]), float(design.hottest()[0])]
    wanted = [
        (one.expansion, [*temperatures, *ties]),
        (one.modulus, [*temperatures, REFERENCE]),
        *([(stress, extremes)] if stress is not None else []),
    ]
    found = [(curve, i) for curve, ts in wanted for t in sorted(ts) for i in lookup.points_used(curve, t)]
    return tuple({(id(curve), i): (curve, i) for curve, i in found}.values())

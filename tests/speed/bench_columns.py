"""A column of mixed lines by both quick methods against one flat numpy file: `python -m tests.speed.bench_columns`.

Prints medians and their ratio (wanted: at most 3), and whether the numbers agree; then one traced solve (wanted: under
2 ms). Times are those of the processor, so that other work on the machine matters less.
"""

import sys
import time
from statistics import median

import numpy as np

from pipeflex.codes import code
from pipeflex.data.materials import material, stress_curve
from pipeflex.data.tables import table
from pipeflex.methods import solve
from pipeflex.model.design import Design
from pipeflex.model.duty import Case, Duty
from pipeflex.model.layout import Corner, End, Layout
from pipeflex.model.pipe import Pipe

from . import flat

KEYS = ("A106-B", "P11", "P22", "TP304", "TP316L")
SHAPES = ("L", "Z", "U")
CODE = code("B31.3-2018")
METHODS = {"screening": flat.screening, "guided_cantilever": flat.guided_cantilever}


def columns(rows, rng):
    """Numbers of mixed lines, SI."""
    steel = table("pipe/asme_b36_10m")
    sizes = rng.integers(0, len(steel.rows), rows)
    return {
        "D": steel.numbers("od_in")[sizes], "T": steel.numbers("wall_in")[sizes],
        "member": rng.integers(0, len(KEYS), rows), "t_ins": rng.choice([0.0, 0.05, 0.1], rows),
        "rho_c": rng.uniform(0, 1000, rows), "hot": rng.uniform(330, 640, rows), "cold": rng.uniform(258, 274, rows),
        "low": rng.uniform(275, 280, rows), "high": rng.uniform(290, 308, rows), "P": rng.uniform(0, 40e5, rows),
        "cycles": 10 ** rng.uniform(1, 5, rows), "f_m": rng.choice([1.0, 1.2], rows), "mu": rng.uniform(0, 0.4, rows),
        "run": rng.uniform(15, 90, rows), "leg": rng.uniform(1.5, 9, rows), "width": rng.uniform(0.5, 4, rows),
    }  # fmt: skip


def numbers_of_materials():
    """Curves and numbers of the materials, as plain arrays."""
    ones = [material(k) for k in KEYS]
    allowable = [stress_curve(one, CODE.stress_tables) for one in ones]
    return {
        "density": np.array([one.density for one in ones]),
        "poisson": np.array([one.poisson for one in ones]),
        "mild": np.array([one.ferrous and one.tensile_strength <= 517.2e6 for one in ones]),
        "expansion": [(one.expansion.temperature, one.expansion.value) for one in ones],
        "modulus": [(one.modulus.temperature, one.modulus.value) for one in ones],
        "allowable": [(c.temperature, c.value) for c in allowable if c is not None],
    }


def design_of(shape, c):
    """The same lines as one column of designs."""
    sizes = {"run": c["run"], "leg": c["leg"]} | ({"width": c["width"]} if shape == "U" else {})
    return Design(
        pipe=Pipe(
            outside_diameter=c["D"], wall=c["T"], materials=tuple(material(k) for k in KEYS),
            material_row=c["member"], insulation_thickness=c["t_ins"], contents_density=c["rho_c"],
        ),
        layout=Layout(
            shape=shape, sizes=sizes, corners=(Corner(kind="square"),), friction=c["mu"],
            ends=(End(name="west"), End(name="east")),
        ),
        duty=Duty(
            cases=(Case(name="hot", temperature=c["hot"], pressure=c["P"]), Case(name="cold", temperature=c["cold"])),
            install_low=c["low"], install_high=c["high"], cycles=c["cycles"], greatest_range_factor=c["f_m"],
        ),
        code=CODE,
    )  # fmt: skip


def same(outcome, plain):
    """Greatest relative difference between the numbers of a column and those of the flat file."""
    results, check = outcome.results, outcome.check
    pairs = [(results[k], plain[k]) for k in ("w", "e", "E_a", "S_A", "f", "I", "Z")]
    if outcome.method == "screening":
        pairs += [(results["q"], plain["q"]), (results["K_1"], plain["K_1"])]
    else:
        pairs += [(results["l_req"], plain["l_req"]), (check("range").demand, plain["stress"])]
        pairs += [(results["F_r"], plain["F_r"]), (results["S_eq"], plain["S_eq"])]
        pairs += [(check("room").demand, plain["room"]), (check("shoe").demand, plain["shoe"])]
        pairs += [(m.value, v) for m, v in zip(outcome.movements, plain["corners"], strict=True)]
        forces = [v for v in outcome.loads if v.kind == "force"]
        listed = [v for (name, _), v in plain["loads"].items() if name.startswith("anchor")]
        pairs += [(one.greatest(), v) for one, v in zip(forces, listed, strict=True)]
        moments = [v for (name, _), v in plain["loads"].items() if name.startswith("moment")]
        pairs += [(one.thermal, v) for one, v in zip(outcome.loads[len(forces) :], moments, strict=True)]
    off = 0.0
    for one, other in pairs:
        one, other = np.abs(one), np.abs(other)
        off = max(off, float(np.max(np.abs(one - other) / np.maximum(np.maximum(one, other), 1e-9))))
    return off


def spent(work, times):
    """Median of the seconds that a piece of work takes."""
    taken = []
    for _ in range(times):
        start = time.process_time()
        work()
        taken.append(time.process_time() - start)
    return median(taken)


def main(rows=100_000, times=9):
    """Print the figures; the exit status is 1 where the numbers disagree."""
    rng, made = np.random.default_rng(5), numbers_of_materials()
    share = [len(part) for part in np.array_split(np.arange(rows), len(SHAPES))]
    parts = {shape: columns(n, rng) for shape, n in zip(SHAPES, share, strict=True)}
    making = spent(lambda: [design_of(shape, c) for shape, c in parts.items()], 3)
    designs = {shape: design_of(shape, c) for shape, c in parts.items()}
    print(f"{rows} mixed lines as {len(SHAPES)} columns; made and validated in {making * 1e3:.0f} ms")
    off, total = 0.0, {"pipeflex": 0.0, "flat": 0.0}
    for key, rule in METHODS.items():
        for shape in SHAPES:
            off = max(off, same(solve(designs[shape], key), rule(shape, parts[shape], made)))
        ours = spent(lambda key=key: [solve(d, key) for d in designs.values()], times)
        theirs = spent(lambda rule=rule: [rule(shape, c, made) for shape, c in parts.items()], times)
        total["pipeflex"] += ours
        total["flat"] += theirs
        print(f"{key:18} {ours * 1e3:7.1f} ms, flat {theirs * 1e3:7.1f} ms, ratio {ours / theirs:.2f}")
    print(f"{'both':18} ratio {total['pipeflex'] / total['flat']:.2f} (wanted: at most 3)")
    print(f"greatest relative difference {off:.1e} (wanted: at most 1e-12)")
    one = designs["U"].row(0)
    for key in METHODS:
        print(f"one traced solve, {key}: {spent(lambda key=key: solve(one, key), 100) * 1e3:.2f} ms (wanted: under 2)")
    return 0 if off <= 1e-12 else 1


if __name__ == "__main__":
    sys.exit(main())

"""Speed of the beam engine: medians and ratios of one run, printed, never asserted.

python -m tests.speed.engine_bench
"""

import time
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np

from pipeflex.files.design_file import load
from pipeflex.mechanics.beam import Hold, Run, Section, States, Support, assemble, influence, linear, moments, settle
from pipeflex.methods import solve
from pipeflex.model.layout import Corner
from tests.engine.chords import by_calfem, by_pynite, chord_model
from tests.speed.bench_columns import SHAPES, columns, design_of

REST = Hold(direction="vertical")


def median(work: Callable[[], Any], times: int) -> tuple[float, float]:
    """Median and best time [s]."""
    work()
    took = []
    for _ in range(times):
        begun = time.perf_counter()
        work()
        took.append(time.perf_counter() - begun)
    return float(np.median(took)), min(took)


def say(what: str, seconds: tuple[float, float], unit: str = "ms") -> None:
    factor = {"ms": 1e3, "us": 1e6, "s": 1.0}[unit]
    print(f"{what:64s} median {seconds[0] * factor:9.3g} {unit}   best {seconds[1] * factor:9.3g} {unit}")


def loops(rows: int, rise: float = 0.0) -> Run:
    """U loops of 4 bends and 5 straights with 4 guides; leg and width vary over the rows."""
    leg, width = (a.ravel() for a in np.meshgrid(*[np.linspace(2.0, 6.0, round(rows**0.5))] * 2))
    none, lift = np.zeros(leg.size), np.full(leg.size, rise)
    end = 30.0 + width
    corners = np.array(
        [
            [none, none + 15, none + 15, 15 + width, 15 + width, end],
            [none, none, leg, leg, none, none],
            [none, none, lift, lift, none, none],
        ]
    )
    guides = [Support(leg=at, distance=d, holds=(Hold(),)) for at, d in ((0, 4.0), (0, 10.0), (4, 5.0), (4, 11.0))]
    return assemble(corners, Section(4e-3, 2e-5), modulus=2e11, radius=0.23, bend_factor=6.0, supports=guides)


def one_design() -> None:
    hot = States(strain=0.0023)
    engine = median(lambda: linear(loops(1), hot), 400)
    say("one loop, 4 guides, built and solved", engine)
    piece = {"E": 2e11, "A": 4e-3, "I": 2e-5, "strain": 0.0023, "bow": 0.0, "weight": 0.0}
    rigid, still = np.full(6, np.inf), np.zeros(6)
    places = ((0, 4.0), (0, 10.0), (4, 5.0), (4, 11.0))
    case = {
        "corners": np.array([[0, 0, 0], [15, 0, 0], [15, 2, 0], [17, 2, 0], [17, 0, 0], [32.0, 0, 0]]),
        "radius": [0.23] * 4, "factor": [6.0] * 4, "pieces": [piece] * 5,
        "placed": [
            {"kind": "support", "name": f"{n}", "leg": leg, "distance": d, "holds": [(1, np.inf)]}
            for n, (leg, d) in enumerate(places)
        ],
        "end_a": rigid, "end_b": rigid, "moved_a": still, "moved_b": still,
    }  # fmt: skip
    for name, solver in (("CALFEM", by_calfem), ("Pynite", by_pynite)):
        for chords in (2, 8):
            other = median(lambda n=chords, by=solver: by(chord_model(case, n)), 5)
            say(f"  the same in {name}, {chords} chords a half bend", other)
            print(f"    ratio {other[0] / engine[0]:.1f}")


def maps() -> None:
    hot = States(strain=0.0023)
    for name, rise in (("plane", 0.0), ("space", 0.5)):
        say(f"3600 loops with moments, {name}", median(lambda r=rise: moments(linear(loops(3600, r), hot)), 9))


def mixed_lines(rows: int = 100_000) -> None:
    """A third each of L, Z and U, every line its own pipe, material, bends and temperatures."""
    rng = np.random.default_rng(1)
    shapes = []
    for shape in ("L", "Z", "U"):
        n = rows // 3
        none, a, b, c = np.zeros(n), *rng.uniform(8, 30, (2, n)), rng.uniform(3, 7, n)
        x, y = {
            "L": ([none, a, a], [none, none, b]),
            "Z": ([none, a, a, a + b], [none, none, c, c]),
            "U": ([none, a, a, a + c, a + c, a + b + c], [none, none, c, c, none, none]),
        }[shape]
        outside = rng.uniform(0.05, 0.6, n)
        wall = 0.02 * outside + 0.003
        area = np.pi * wall * (outside - wall)
        more = {
            "section": Section(area, area * ((outside - wall) ** 2 + wall**2) / 8),
            "modulus": rng.uniform(170e9, 210e9, n),
            "radius": 1.5 * outside,
            "bend_factor": rng.uniform(2, 15, n),
        }
        shapes.append((np.array([x, y, [none] * len(x)]), more, rng.uniform(0, 0.004, (1, len(x) - 1, n))))

    def work() -> None:
        for corners, more, strain in shapes:
            moments(linear(assemble(corners, **more), States(strain=strain))).resultant()

    say(f"{rows} mixed L, Z and U lines, force and moments", median(work, 3), "s")


def slider() -> None:
    prepared = influence(loops(1))
    say("temperature alone changed, prepared run", median(lambda: prepared.answer(States(strain=0.002)), 3000), "us")


def hard_friction(cases: int = 400) -> None:
    """Loops in series with friction at every guide, each leg heated its own way."""
    for name, guided, steps in (("axial, 1 step", True, 1), ("axial, 8 steps", True, 8), ("disc, 1 step", False, 1)):
        took, ended, left, supports = [], 0, 0.0, []
        for seed in range(cases if guided else cases // 4):
            run, states = series(seed, guided)
            begun = time.perf_counter()
            found = settle(run, states, steps=steps)
            took.append(time.perf_counter() - begun)
            ended += bool(found.converged.all())
            left = max(left, float(found.left.max()))
            supports.append(len(run.supports))
        say(f"{len(took)} friction cases, {name}", (float(np.median(took)), min(took)))
        print(
            f"    supports {min(supports)} .. {max(supports)}; converged {ended} of {len(took)};"
            f" worst {max(took) * 1e3:.3g} ms; most left {left:.2g} N"
        )


def series(seed: int, guided: bool) -> tuple[Run, States]:
    rng = np.random.default_rng(seed)
    points, x, straights = [(0.0, 0.0)], 0.0, []
    for _ in range(rng.integers(1, 4)):
        run, leg, width = rng.uniform(15, 30), rng.uniform(2, 5), rng.uniform(2, 4)
        straights.append((len(points) - 1, run))
        points += [(x + run, 0.0), (x + run, leg), (x + run + width, leg), (x + run + width, 0.0)]
        x += run + width
    straights.append((len(points) - 1, 20.0))
    points.append((x + 20.0, 0.0))
    holds = (REST, Hold()) if guided else (Hold(direction="vertical", lifts=True),)
    supports = [
        Support(leg=leg, distance=d, holds=holds, friction=rng.uniform(0.1, 0.5))
        for leg, size in straights
        for d in np.arange(3.0, size - 1.0, 6.0)
    ]
    corners = np.array([(x, y, 0.0) for x, y in points]).T
    run = assemble(
        corners, Section(4e-3, 2e-5), modulus=2e11, radius=0.3, bend_factor=5.0, weight=400.0, supports=supports
    )
    heat = rng.uniform(-0.001, 0.003, (run.pieces, 1))
    return run, States(strain=np.array([0.0, 1.0])[:, None, None] * heat, weight=1.0)


def many_supports() -> None:
    for count in (10, 100, 1000):
        guides = [Support(leg=0, distance=6.0 * (i + 1), holds=(Hold(), REST)) for i in range(count)]
        corners = np.array([[0.0, 6.0 * count + 6.0, 6.0 * count + 6.0], [0, 0, 8.0], [0, 0, 0]])

        def work(guides: list[Support] = guides, corners: np.ndarray = corners) -> None:
            run = assemble(corners, Section(4e-3, 2e-5), modulus=2e11, radius=0.3, weight=400.0, supports=guides)
            linear(run, States(strain=0.002, weight=1.0))

        took = median(work, 5 if count > 100 else 30)
        say(f"{count} guides", took)
        print(f"    {took[0] / count * 1e6:.3g} us a guide")


def traced() -> None:
    """The demo design with its ledger: with all friction states, and without rests."""
    design = load(Path(__file__).parents[2] / "notebooks" / "line-1204.toml")
    say("demo design solved with trace, all friction states", median(lambda: solve(design, "beam_flexibility"), 30))
    smooth = replace(design, layout=replace(design.layout, rest_spacing=None))
    say("  the same without rests", median(lambda: solve(smooth, "beam_flexibility"), 100))


def end_to_end(rows: int = 100_000) -> None:
    """Columns of L, Z and U lines, each line its own pipe, metal, bends and temperatures, from design to outcome."""
    rng, designs = np.random.default_rng(5), []
    for shape in SHAPES:
        c = columns(rows // 3, rng)
        c |= {"leg": c["leg"] + 4 * c["D"], "width": c["width"] + 4 * c["D"]}
        made = design_of(shape, c)
        bends = (Corner(kind="bend", radius=1.5 * c["D"]),)
        designs.append(replace(made, layout=replace(made.layout, corners=bends)))
    took = median(lambda: [solve(design, "beam_flexibility") for design in designs], 5)
    say(f"{rows} mixed L, Z and U lines, end to end", took, "s")


if __name__ == "__main__":
    one_design()
    traced()
    end_to_end()
    maps()
    mixed_lines()
    slider()
    hard_friction()
    many_supports()

"""Pipe, tube and elbow sizes against a general-purpose library and against weights recalled apart.

fluids 1.3.1 (Caleb Bell and contributors) holds the walls of ASME B36.10M-2004 and B36.19M-2004 in mm.
"""

import csv
from itertools import pairwise
from math import pi
from pathlib import Path

import numpy as np
import pytest
from fluids import nearest_pipe
from fluids.piping import schedule_lookup

from pipeflex.data.tables import table

from .conftest import inches

NUMBERED = ("5", "10", "20", "30", "40", "60", "80", "100", "120", "140", "160")
IDENTIFIED = ("STD", "XS", "XXS")
STAINLESS = ("5S", "10S", "40S", "80S")


def walls(id, column):
    """(NPS, schedule) -> outside diameter and wall as printed in millimetres."""
    held = table(id)
    cells = zip(*(held.texts(c) for c in ("nps", column, "od_mm", "wall_mm")), strict=True)
    return {(inches(nps), sch): (float(od), float(wall)) for nps, sch, od, wall in cells if sch}


@pytest.mark.parametrize(
    ("id", "column", "schedules"),
    [
        ("pipe/asme_b36_10m", "schedule", NUMBERED),
        ("pipe/asme_b36_10m", "identification", IDENTIFIED),
        ("pipe/asme_b36_19m", "schedule", STAINLESS),
    ],
)
def test_every_wall_of_the_library_and_no_other(id, column, schedules):
    ours = walls(id, column)
    theirs = {}
    for schedule in schedules:
        for nps in schedule_lookup[schedule][0]:
            if nps >= 0.5:
                _, _, od, wall = nearest_pipe(NPS=nps, schedule=schedule)
                theirs[float(nps), schedule] = (round(od * 1e3, 2), round(wall * 1e3, 2))
    assert ours == theirs


@pytest.mark.parametrize("id", ["pipe/asme_b36_10m", "pipe/asme_b36_19m"])
def test_inches_and_millimetres_agree_to_the_printed_digit(id):
    held = table(id)
    od_in, od_mm, wall_in, wall_mm = (held.numbers(c) for c in ("od_in", "od_mm", "wall_in", "wall_mm"))
    odd = np.array(held.texts("wall_mm")) == "10.15"  # NPS 1-1/2 XXS: 0.400 in is printed so
    assert np.abs(wall_in - wall_mm)[~odd].max() <= 0.00501e-3
    assert np.abs(wall_in - wall_mm)[odd].max(initial=0) <= 0.0101e-3
    small = od_in < 0.42
    assert np.abs(od_in - od_mm)[small].max() <= 0.0501e-3
    assert np.abs(od_in - od_mm)[~small].max() <= 0.5e-3
    assert np.all(wall_in < od_in / 2)


def test_walls_of_a_size_rise_and_none_is_listed_twice():
    held = table("pipe/asme_b36_10m")
    sizes = list(zip(held.texts("nps"), held.numbers("wall_in"), strict=True))
    assert all(b[1] > a[1] for a, b in pairwise(sizes) if a[0] == b[0])
    diameters = [float(cell) for cell in held.texts("od_in")]
    assert diameters == sorted(diameters)
    assert dict(zip(held.texts("nps"), held.texts("od_in"), strict=True))["48"] == "48.000"


def test_plain_end_weights():
    """Weights per foot of ASME B36.10M, recalled apart from the walls; W = 10.69 (D - t) t.

    The formula is the standard's. NPS 3/4 schedule 5 is recalled at 0.69 where the formula gives 0.684.
    """
    held = table("pipe/asme_b36_10m")
    with (Path(__file__).parent / "plain_end_lb_ft.csv").open(newline="") as file:
        _, *schedules = next(lines := csv.reader(file))
        recalled = [
            (nps, schedule, float(weight))
            for nps, *weights in lines
            for schedule, weight in zip(schedules, weights, strict=True)
            if weight
        ]
    assert len(recalled) > 250
    for nps, schedule, weight in recalled:
        column = "identification" if schedule in IDENTIFIED else "schedule"
        row = held.find(nps=nps, **{column: schedule})
        d, t = float(held.texts("od_in")[row]), float(held.texts("wall_in")[row])
        off = 0.01 if (nps, schedule) == ("3/4", "5") else 0.0051
        assert 10.69 * (d - t) * t == pytest.approx(weight, abs=off), (nps, schedule)


def test_copper_tube_is_an_eighth_over_its_nominal_size():
    held = table("tube/astm_b88")
    for nominal, od in zip(held.texts("nominal"), held.texts("od_in"), strict=True):
        assert float(od) == inches(nominal) + 0.125


COPPER_LB_FT = {
    "K": "1/4:.145 3/8:.269 1/2:.344 5/8:.418 3/4:.641 1:.839 1-1/4:1.04 1-1/2:1.36 2:2.06 2-1/2:2.93 3:4.00 "
    "3-1/2:5.12 4:6.51 5:9.67 6:13.9 8:25.9 10:40.3 12:57.8",
    "L": "1/4:.126 3/8:.198 1/2:.285 5/8:.362 3/4:.455 1:.655 1-1/4:.884 1-1/2:1.14 2:1.75 2-1/2:2.48 3:3.33 "
    "3-1/2:4.29 4:5.38 5:7.61 6:10.2 8:19.3 10:30.1 12:40.4",
    "M": "3/8:.145 1/2:.204 3/4:.328 1:.465 1-1/4:.682 1-1/2:.940 2:1.46 2-1/2:2.03 3:2.68 3-1/2:3.58 4:4.66 "
    "5:6.66 6:8.92 8:16.5 10:25.6 12:36.7",
}
"""Copper Tube Handbook Tables 2a to 2c, weight in lb/ft to three digits, recalled apart from the walls."""


@pytest.mark.parametrize("kind", COPPER_LB_FT)
def test_copper_tube_weights(kind):
    held = table("tube/astm_b88")
    listed = [n for n, t in zip(held.texts("nominal"), held.texts("type"), strict=True) if t == kind]
    recalled = dict(pair.split(":") for pair in COPPER_LB_FT[kind].split())
    assert listed == list(recalled)
    for nominal, weight in recalled.items():
        row = held.find(nominal=nominal, type=kind)
        d, t = float(held.texts("od_in")[row]), float(held.texts("wall_in")[row])
        assert pi * (d - t) * t * 12 * 0.323 == pytest.approx(float(weight), rel=0.006), nominal


def test_long_and_short_radius_elbows():
    """ASME B16.9 in inches: 1.5, 1.0 and 3 times NPS; in millimetres as EN 10253-2 prints the same elbows."""
    held = table("fittings/elbow_b16_9")
    nps = [inches(n) for n in held.texts("nps")]
    for column, times in (("long", 1.5), ("short", 1.0), ("r_3d", 3.0)):
        pairs = zip(nps, held.texts(f"{column}_in"), held.texts(f"{column}_mm"), strict=True)
        for size, inch, mm in pairs:
            if not inch:
                assert not mm
                continue
            assert abs(float(inch) * 25.4 - float(mm)) <= 0.65
            if not (column == "long" and size < 1):
                assert float(inch) == pytest.approx(times * size, abs=0.0051)
    en = table("fittings/elbow_en_10253")
    same = dict(zip(held.texts("dn"), held.texts("long_mm"), strict=True))
    differing = {dn for dn, mm in zip(en.texts("dn"), en.texts("r_3d_mm"), strict=True) if same[dn] != mm}
    assert differing == {"15", "20"}


def test_en_type_names_count_half_nominal_diameters():
    en = table("fittings/elbow_en_10253")
    dn = np.array([float(d) for d in en.texts("dn")])
    for column, times in (("r_2d_mm", 1.0), ("r_3d_mm", 1.5), ("r_5d_mm", 2.5)):
        radius = en.numbers(column) * 1e3
        large = (dn >= 100) & ~np.isnan(radius)
        assert np.abs(radius[large] / (times * dn[large]) - 1).max() < 0.085
    od = en.numbers("od_mm") * 1e3
    assert np.all(np.diff(od) > 0)
    assert od[en.find(dn="300")] == pytest.approx(323.9)

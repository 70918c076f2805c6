"""The beam engine against two general-purpose frame libraries, CALFEM for Python (Lund University) and Pynite.

The runs are invented; their sizes, materials and temperatures only span the range in which the engine is used.
"""

import numpy as np
import pytest

from pipeflex.mechanics.beam import (
    Break,
    End,
    Hold,
    PointWeight,
    Section,
    States,
    Support,
    assemble,
    linear,
    moments,
    movements,
    residual,
    support_movements,
)

from .chords import by_calfem, by_pynite, extrapolated

PIPES = [
    (0.0334, 0.0034),
    (0.0603, 0.0039),
    (0.1143, 0.006),
    (0.2191, 0.0082),
    (0.4064, 0.0095),
    (0.9144, 0.0127),
]
MODULI = {"carbon steel": 203e9, "stainless steel": 195e9, "copper": 117e9, "aluminium": 69e9}
SHAPES = {
    "L": [(0, 0, 0), (9, 0, 0), (9, 5, 0)],
    "Z": [(0, 0, 0), (8, 0, 0), (8, 4, 0), (14, 4, 0)],
    "U": [(0, 0, 0), (10, 0, 0), (10, 4, 0), (13, 4, 0), (13, 0, 0), (22, 0, 0)],
    "raised U": [
        (0, 0, 0),
        (10, 0, 0),
        (10, 0, 3),
        (10, 3, 3),
        (13, 3, 3),
        (13, 0, 3),
        (13, 0, 0),
        (20, 0, 0),
    ],
    "riser": [(0, 0, 0), (4, 0, 0), (4, 0, 9), (4, 5, 9)],
    "space Z": [(0, 0, 0), (7, 0, 0), (7, 5, 0), (7, 5, 6), (2, 5, 6)],
    "skew": [(0, 0, 0), (9, 0, 0), (14, 4, 1), (14, 12, 1), (21, 15, -2)],
    "straight": [(0, 0, 0), (12, 0, 0)],
}
RIGID = np.inf


def invented(seed: int) -> dict:
    """A case: shape, pipe, material, temperatures, supports, springs, weights, breaks, end movements."""
    rng = np.random.default_rng(seed)
    shape = list(SHAPES)[seed % len(SHAPES)]
    outside, wall = PIPES[(seed * 5) % len(PIPES)]
    modulus = list(MODULI.values())[seed % len(MODULI)]
    corners = np.array(SHAPES[shape], dtype=float) * (0.4 + 1.6 * outside**0.5)
    legs = len(corners) - 1
    inside = outside - 2 * wall
    square = seed % 6 == 5
    radius = [0.0 if square else outside * rng.choice([1.0, 1.5])] * (legs - 1)
    placed, aligned = [], []
    for leg in range(legs):
        run = corners[leg + 1] - corners[leg]
        if np.count_nonzero(run) == 1:
            aligned.append((leg, np.linalg.norm(run), int(np.flatnonzero(run)[0])))
    for n in range(rng.integers(0, 5)):
        leg, length, axis = aligned[rng.integers(len(aligned))]
        others = [a for a in range(3) if a != axis]
        holds = [(others[0], RIGID), (others[1], RIGID if rng.random() < 0.6 else 10 ** rng.uniform(4, 7))]
        if rng.random() < 0.25:
            holds = [(axis, 10 ** rng.uniform(5, 8))]
        distance = length * (0.3 + 0.08 * n)
        placed.append({"kind": "support", "name": f"{n}", "leg": leg, "distance": distance, "holds": holds})
    if seed % 3 == 0:
        leg, length, _ = aligned[-1]
        placed.append({"kind": "weight", "leg": leg, "distance": 0.71 * length, "force": 2e4 * outside})
    breaks = [rng.integers(legs)] if seed % 4 == 1 else []
    for leg in breaks:
        length = np.linalg.norm(corners[leg + 1] - corners[leg])
        placed.append({"kind": "break", "leg": int(leg), "distance": 0.27 * length})
    pieces = []
    for _ in range(legs + len(breaks)):
        bore = inside * (1.0 if seed % 4 != 1 else rng.uniform(0.97, 1.01))
        pieces.append(
            {
                "E": modulus * rng.uniform(0.85, 1.0),
                "A": np.pi / 4 * (outside**2 - bore**2),
                "I": np.pi / 64 * (outside**4 - bore**4),
                "strain": rng.uniform(-0.001, 0.004),
                "bow": rng.uniform(0, 0.0004) / outside if seed % 5 == 2 else 0.0,
                "weight": 3000 * outside**1.5 if seed % 2 else 0.0,
            }
        )
    end_a, end_b = [np.full(6, RIGID) for _ in range(2)]
    if seed % 4 == 2:
        end_a = 10 ** rng.uniform(5, 8, 6) * np.r_[1, 1, 1, outside, outside, outside]
    if seed % 7 == 3:
        end_b[3:] = 0.0
    moved_a, moved_b = np.zeros(6), np.zeros(6)
    if seed % 3 != 1:
        moved_b = np.r_[rng.uniform(-0.02, 0.02, 3), rng.uniform(-0.003, 0.003, 3)] * np.isinf(end_b)
        moved_a = np.r_[rng.uniform(-0.01, 0.01, 3), np.zeros(3)] * np.isinf(end_a)
    return {
        "corners": corners, "radius": radius, "factor": [rng.uniform(1, 20) for _ in radius], "placed": placed,
        "pieces": pieces, "end_a": end_a, "end_b": end_b, "moved_a": moved_a, "moved_b": moved_b,
    }  # fmt: skip


def by_engine(case: dict) -> tuple[dict[str, np.ndarray], np.ndarray]:
    pieces = case["pieces"]

    def column(name):
        return np.array([[piece[name]] for piece in pieces])

    placed = {kind: [t for t in case["placed"] if t["kind"] == kind] for kind in ("support", "weight", "break")}
    supports = [
        Support(
            leg=t["leg"],
            distance=t["distance"],
            holds=tuple(Hold(direction=np.eye(3)[axis], stiffness=k) for axis, k in t["holds"]),
        )
        for t in sorted(placed["support"], key=lambda t: t["name"])
    ]
    factor = np.array(case["factor"])[:, None]
    run = assemble(
        case["corners"].T,
        Section(column("A"), column("I")),
        modulus=column("E"),
        radius=np.array(case["radius"])[:, None],
        bend_factor=factor,
        weight=column("weight"),
        supports=supports,
        weights=[PointWeight(leg=t["leg"], distance=t["distance"], force=t["force"]) for t in placed["weight"]],
        breaks=[Break(leg=t["leg"], distance=t["distance"]) for t in placed["break"]],
        ends=(End(stiffness=case["end_a"]), End(stiffness=case["end_b"])),
    )
    states = States(
        strain=column("strain")[None],
        bow=column("bow")[None],
        weight=1.0,
        movement_a=case["moved_a"][None, :, None],
        movement_b=case["moved_b"][None, :, None],
    )
    answer = linear(run, states)
    line, moved, at = moments(answer).resultant()[0, :, :, 0], movements(answer), support_movements(answer)
    spot, turn = moved.movement[0, :, :, 0].T, moved.rotation[0, :, :, 0].T
    plan = run.plan
    last = np.flatnonzero(plan.bend < 0)[-1]
    resultant, position, rotation = [line[0, 0]], [spot[0]], [turn[0]]
    for bend in range(run.bends):
        if case["radius"][bend] > 0:
            (e,) = np.flatnonzero(plan.bend == bend)
            picks = [(0, e), (1, e), (2, e)]
        else:
            picks = [(2, np.flatnonzero((plan.leg == bend) & (plan.bend < 0))[-1])]
        resultant += [line[p, e] for p, e in picks]
        position += [spot[3 * e + p] for p, e in picks]
        rotation += [turn[3 * e + p] for p, e in picks]
    resultant.append(line[2, last])
    position.append(spot[3 * last + 2])
    rotation.append(turn[3 * last + 2])
    middle = np.zeros((len(resultant) - 2, 3))
    on_supports = answer.support_force[0, :, :, 0].T
    return {
        "force": np.vstack([answer.end_a[0, :3, 0], middle, answer.end_b[0, :3, 0], on_supports]),
        "moment": np.vstack([answer.end_a[0, 3:, 0], middle, answer.end_b[0, 3:, 0], 0 * on_supports]),
        "line": np.array(resultant),
        "movement": np.vstack([position, at.movement[0, :, :, 0].T]),
        "rotation": np.vstack([rotation, at.rotation[0, :, :, 0].T]),
    }, residual(answer)


@pytest.mark.parametrize("solver", [by_calfem, by_pynite])
@pytest.mark.parametrize("seed", range(24))
def test_agrees_with_frame_library(seed, solver):
    case = invented(seed)
    expected = extrapolated(case, solver)
    found, left = by_engine(case)
    expected["line"] = expected["line"][: len(found["line"])]
    for key, value in found.items():
        largest = np.abs(expected[key]).max()
        assert np.abs(value - expected[key]).max() <= 1e-5 * largest + 1e-12, key
    assert np.abs(left).max() <= 1e-9 * np.abs(found["force"]).max() * 20

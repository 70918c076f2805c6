"""A run of pipe for general-purpose frame libraries: bends as chords, free strain as nodal forces.

Built from its own description, not from the engine's: a plain list of nodes, bars, springs and fixed movements that
two independent libraries solve.  Differences between 8 and 16 chords per half bend are extrapolated (Richardson), the
error of a chord model being of second order.
"""

from dataclasses import dataclass, field

import calfem.core as calfem
import numpy as np
from Pynite import FEModel3D

AXES = ("DX", "DY", "DZ", "RX", "RY", "RZ")


@dataclass
class Bar:
    i: int
    j: int
    E: float
    G: float
    A: float
    I: float
    J: float
    strain: float
    bow: float
    weight: float


@dataclass
class Frame:
    nodes: list[np.ndarray] = field(default_factory=list)
    bars: list[Bar] = field(default_factory=list)
    fixed: dict[tuple[int, int], float] = field(default_factory=dict)
    springs: list[tuple[int, int, float]] = field(default_factory=list)
    loads: list[tuple[int, float]] = field(default_factory=list)
    marks: list[int] = field(default_factory=list)

    def forces(self, bar: Bar) -> tuple[np.ndarray, np.ndarray]:
        """Force and moment on the far node that stand for free strain and bow (the near node gets the opposite)."""
        axis = self.nodes[bar.j] - self.nodes[bar.i]
        axis = axis / np.linalg.norm(axis)
        return bar.E * bar.A * bar.strain * axis, bar.E * bar.I * bar.bow * np.array([-axis[1], axis[0], 0.0])


def chord_model(case: dict, chords: int) -> Frame:
    """Nodes and bars of a case; marks are the ends, the supports, and start, middle and end of every bend."""
    frame = Frame()
    corners = np.asarray(case["corners"], dtype=float)
    legs = len(corners) - 1
    along = np.diff(corners, axis=0)
    size = np.linalg.norm(along, axis=1)
    along /= size[:, None]
    turn = [np.arccos(along[b] @ along[b + 1]) for b in range(legs - 1)]
    tangent = [0.0, *(case["radius"][b] * np.tan(turn[b] / 2) for b in range(legs - 1)), 0.0]

    def bar_to(point: np.ndarray, piece: dict, bend: int | None = None) -> None:
        if np.linalg.norm(point - frame.nodes[-1]) < 1e-9:
            return
        frame.nodes.append(point)
        n = len(frame.nodes) - 1
        soft = 1.0 if bend is None else case["factor"][bend]
        frame.bars.append(
            Bar(
                n - 1, n, piece["E"], piece["E"] / 2.6, piece["A"], piece["I"] / soft, 2 * piece["I"],
                piece["strain"], piece["bow"], piece["weight"],
            )
        )  # fmt: skip

    frame.nodes.append(corners[0])
    frame.marks.append(0)
    supports = {}
    pieces = iter(case["pieces"])
    piece = next(pieces)
    for leg in range(legs):
        things = sorted([t for t in case["placed"] if t["leg"] == leg], key=lambda t: t["distance"])
        for thing in things:
            bar_to(corners[leg] + thing["distance"] * along[leg], piece)
            n = len(frame.nodes) - 1
            if thing["kind"] == "break":
                piece = next(pieces)
            elif thing["kind"] == "weight":
                frame.loads.append((n, thing["force"]))
            else:
                supports[thing["name"]] = n
                for axis, stiffness in thing["holds"]:
                    if np.isinf(stiffness):
                        frame.fixed[n, axis] = 0.0
                    else:
                        frame.springs.append((n, axis, stiffness))
        bar_to(corners[leg + 1] - tangent[leg + 1] * along[leg], piece)
        if leg == legs - 1:
            break
        frame.marks.append(len(frame.nodes) - 1)
        after = next(pieces)
        r, phi = case["radius"][leg], turn[leg]
        if r > 0:
            inward = (along[leg + 1] - np.cos(phi) * along[leg]) / np.sin(phi)
            start = frame.nodes[-1]
            mixed = {**piece, **{key: 0.5 * (piece[key] + after[key]) for key in ("strain", "bow")}}
            for n in range(1, 2 * chords + 1):
                a = phi * n / (2 * chords)
                bar_to(start + r * (np.sin(a) * along[leg] + (1 - np.cos(a)) * inward), mixed, leg)
                if n in (chords, 2 * chords):
                    frame.marks.append(len(frame.nodes) - 1)
        piece = after
    last = len(frame.nodes) - 1
    frame.marks.append(last)
    frame.marks += [supports[name] for name in sorted(supports)]
    for node, stiffness, moved in (
        (0, case["end_a"], case["moved_a"]),
        (last, case["end_b"], case["moved_b"]),
    ):
        for axis in range(6):
            if np.isinf(stiffness[axis]):
                frame.fixed[node, axis] = moved[axis]
            elif stiffness[axis] > 0:
                frame.springs.append((node, axis, stiffness[axis]))
    return frame


def _answers(frame: Frame, moved: np.ndarray, on_nodes: np.ndarray, moments: np.ndarray) -> dict[str, np.ndarray]:
    """What is compared: forces and moments on ends and supports, moments and movements at the marks."""
    reaction = np.zeros_like(moved)
    for (node, axis), _ in frame.fixed.items():
        reaction[node, axis] += on_nodes[node, axis]
    for node, axis, stiffness in frame.springs:
        reaction[node, axis] -= stiffness * moved[node, axis]
    marks = frame.marks
    held = -reaction[marks]
    return {
        "force": held[:, :3],
        "moment": held[:, 3:],
        "line": moments[marks],
        "movement": moved[marks][:, :3],
        "rotation": moved[marks][:, 3:],
    }


def by_calfem(frame: Frame) -> dict[str, np.ndarray]:
    """Solved with CALFEM for Python."""
    size = 6 * len(frame.nodes)
    stiff, load = np.zeros((size, size)), np.zeros((size, 1))
    kept = []
    for bar in frame.bars:
        ends = np.array([frame.nodes[bar.i], frame.nodes[bar.j]])
        axis = (ends[1] - ends[0]) / np.linalg.norm(ends[1] - ends[0])
        z = np.cross(axis, [0.0, 0.0, 1.0] if abs(axis[2]) < 0.9 else [1.0, 0.0, 0.0])
        z /= np.linalg.norm(z)
        local = np.array([axis, np.cross(z, axis), z])
        w = local @ np.array([0.0, 0.0, -bar.weight])
        ke, fe = calfem.beam3e(
            ends[:, 0], ends[:, 1], ends[:, 2], z, [bar.E, bar.G, bar.A, bar.I, bar.I, bar.J], [*w, 0.0]
        )
        ke, fe = np.asarray(ke), np.asarray(fe).ravel()
        dofs = np.r_[6 * bar.i : 6 * bar.i + 6, 6 * bar.j : 6 * bar.j + 6]
        force, moment = frame.forces(bar)
        whole = fe + np.concatenate([-force, -moment, force, moment])
        calfem.assem(dofs[None, :] + 1, stiff, ke, load, whole[:, None])
        kept.append((dofs, ke, whole))
    for node, force in frame.loads:
        load[6 * node + 2] -= force
    for node, axis, stiffness in frame.springs:
        stiff[6 * node + axis, 6 * node + axis] += stiffness
    dofs = np.array([6 * node + axis + 1 for node, axis in frame.fixed])
    a, r = calfem.solveq(stiff, load, dofs, np.array(list(frame.fixed.values())))
    a, r = np.asarray(a).ravel(), np.asarray(r).ravel()
    moments = np.zeros(len(frame.nodes))
    for bar, (dofs, ke, fe) in zip(frame.bars, kept, strict=True):
        ends = ke @ a[dofs] - fe
        moments[bar.j] = np.linalg.norm(ends[9:])
        if bar.i == 0:
            moments[0] = np.linalg.norm(ends[3:6])
    return _answers(frame, a.reshape(-1, 6), r.reshape(-1, 6), moments)


def by_pynite(frame: Frame) -> dict[str, np.ndarray]:
    """Solved with Pynite."""
    model = FEModel3D()
    for n, node in enumerate(frame.nodes):
        model.add_node(f"{n}", *map(float, node))
    for n, bar in enumerate(frame.bars):
        model.add_material(f"m{n}", bar.E, bar.G, 0.3, 0.0)
        model.add_section(f"s{n}", bar.A, bar.I, bar.I, bar.J)
        model.add_member(f"b{n}", f"{bar.i}", f"{bar.j}", f"m{n}", f"s{n}")
        if bar.weight:
            model.add_member_dist_load(f"b{n}", "FZ", -bar.weight, -bar.weight)
        force, moment = frame.forces(bar)
        for sign, node in ((-1.0, bar.i), (1.0, bar.j)):
            for axis in range(3):
                model.add_node_load(f"{node}", "F" + "XYZ"[axis], sign * float(force[axis]))
                if moment[axis]:
                    model.add_node_load(f"{node}", "M" + "XYZ"[axis], sign * float(moment[axis]))
    for node, force in frame.loads:
        model.add_node_load(f"{node}", "FZ", -force)
    for node in {node for node, _ in frame.fixed}:
        model.def_support(f"{node}", *((node, axis) in frame.fixed for axis in range(6)))
    for (node, axis), value in frame.fixed.items():
        if value:
            model.def_node_disp(f"{node}", AXES[axis], float(value))
    for node, axis, stiffness in frame.springs:
        model.def_support_spring(f"{node}", AXES[axis], float(stiffness))
    model.analyze_linear(check_stability=False)
    combo = "Combo 1"
    nodes = [model.nodes[f"{n}"] for n in range(len(frame.nodes))]
    moved = np.array([[getattr(node, axis)[combo] for axis in AXES] for node in nodes])
    names = ("RxnFX", "RxnFY", "RxnFZ", "RxnMX", "RxnMY", "RxnMZ")
    reaction = np.array([[getattr(node, name).get(combo, 0.0) for name in names] for node in nodes])
    moments = np.zeros(len(nodes))
    for n, bar in enumerate(frame.bars):
        ends = np.asarray(model.members[f"b{n}"].f(combo)).ravel()
        own_i, own_j = frame.forces(bar)[1] * -1.0, frame.forces(bar)[1]
        turn = np.asarray(model.members[f"b{n}"].T())[:3, :3]
        moments[bar.j] = np.linalg.norm(ends[9:] - turn @ own_j)
        if bar.i == 0:
            moments[0] = np.linalg.norm(ends[3:6] - turn @ own_i)
    return _answers(frame, moved, reaction, moments)


def extrapolated(case: dict, solver) -> dict[str, np.ndarray]:
    """The limit of ever finer chords from 8 and 16 chords a half bend.

    From 4 and 8 where the bends are so short that 16 chords lose digits in the libraries' stiffness matrices.
    """
    if not any(case["radius"]):
        return solver(chord_model(case, 1))
    length = np.linalg.norm(np.diff(case["corners"], axis=0), axis=1).sum()
    most = 16 if max(case["radius"]) > length / 300 else 8
    coarse, fine = solver(chord_model(case, most // 2)), solver(chord_model(case, most))
    return {key: fine[key] + (fine[key] - coarse[key]) / 3.0 for key in fine}

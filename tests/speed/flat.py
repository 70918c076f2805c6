"""One flat numpy file with the formulas and look-ups of the two quick methods, without records, validation or trace.

What a column of designs is measured against. It is written apart from the package and serves as a second opinion.
"""

import numpy as np

G = 9.80665
STATES = 2  # cases: hot and cold, in this order


def looked_up(curves, member, t):
    """Values of each row's own curve (temperature, value) at t (..., rows)."""
    out = np.empty(t.shape)
    for i, (x, y) in enumerate(curves):
        rows = member == i
        out[..., rows] = np.interp(t[..., rows], x, y)
    return out


def basis(c, m):
    """Section, weight, growth, moduli and allowable range of columns `c` with material numbers `m`."""
    D, T, member = c["D"], c["T"], c["member"]
    d = D - 2 * T
    A = np.pi / 4 * (D**2 - d**2)
    I = np.pi / 64 * (D**4 - d**4)
    t_ins = c["t_ins"]
    clad = np.where(t_ins > 0, 0.0008, 0.0)
    mass = m["density"][member] * A + c["rho_c"] * np.pi / 4 * d**2
    w = (mass + np.pi * t_ins * (D + t_ins) * 120.0 + np.pi * clad * (D + 2 * t_ins + clad) * 2700.0) * G
    cases = np.stack([c["hot"], c["cold"]])
    ties = np.stack([c["low"], c["high"]])
    every = np.concatenate([cases, ties])
    t_hot, t_cold = every.max(axis=0), every.min(axis=0)
    strain = looked_up(m["expansion"], member, every)
    e = strain.max(axis=0) - strain.min(axis=0)
    E_case = looked_up(m["modulus"], member, cases)
    E_a = looked_up(m["modulus"], member, np.full(len(D), 294.15))
    from_low, from_high = strain[:2] - strain[2], strain[:2] - strain[3]
    growth = np.where(np.abs(from_low) >= np.abs(from_high), from_low, from_high)
    S_c = looked_up(m["allowable"], member, t_cold)
    S_h = looked_up(m["allowable"], member, t_hot)
    permitted = m["mild"][member] & (t_hot <= 371 + 273.15)
    f_m = np.where(permitted, c["f_m"], 1.0)
    f = np.maximum(0.15, np.minimum(f_m, 6.0 * c["cycles"] ** -0.2))
    capped = f > 1
    S_c, S_h = (np.where(capped, np.minimum(S, 138e6), S) for S in (S_c, S_h))
    S_A = f * (1.25 * S_c + 0.25 * S_h)
    nu = m["poisson"][member]
    stretch = np.maximum(c["P"], 0.0) * d**2 * (1 - 2 * nu) / (E_a * (D**2 - d**2))
    return {
        "D": D, "T": T, "A": A, "I": I, "Z": 2 * I / D, "w": w, "e": e, "E_a": E_a, "E_case": E_case, "growth": growth,
        "f": f, "S_A": S_A, "nu": nu, "clad": clad, "stretch": stretch,
    }  # fmt: skip


def legs_of(shape, c):
    """Lengths of the legs, axis of each (0 along, 1 across), and how far apart the ends are in both directions."""
    run, leg = c["run"], c["leg"]
    if shape == "L":
        return np.stack([run, leg]), (0, 1), np.stack([run, leg])
    if shape == "Z":
        half = run / 2
        return np.stack([half, leg, run - half]), (0, 1, 0), np.stack([run, leg])
    before = (run - c["width"]) / 2
    after = run - (before + c["width"])
    return np.stack([before, leg, c["width"], leg, after]), (0, 1, 0, 1, 0), np.stack([run, np.zeros_like(run)])


def screening(shape, c, m):
    """Screening value and its greatest."""
    b = basis(c, m)
    lengths, _, apart = legs_of(shape, c)
    L, U = lengths.sum(axis=0), np.sqrt((apart**2).sum(axis=0))
    return {**b, "q": b["D"] * (b["e"] * U) / (L - U) ** 2, "K_1": 0.208 * b["S_A"] / b["E_a"]}


def guided_cantilever(shape, c, m):
    """Stress, leg needed, anchor loads, room, movements, and the run held rigidly."""
    b = basis(c, m)
    lengths, axis, apart = legs_of(shape, c)
    D, I, E_a, growth = b["D"], b["I"], b["E_a"], b["growth"]
    bent = [(leg, way) for way in (0, 1) for leg, own in enumerate(axis) if own != way and apart[way].any()]
    cubes = {way: sum(lengths[leg] ** 3 for leg, w in bent if w == way) for way in {w for _, w in bent}}
    delta = np.stack([b["e"] * apart[way] * lengths[leg] ** 3 / cubes[way] for leg, way in bent])
    each = 3 * E_a * D * delta / np.stack([lengths[leg] for leg, _ in bent]) ** 2
    worst = each.argmax(axis=0)
    stress = np.take_along_axis(each, worst[None], axis=0)[0]
    l_req = np.sqrt(3 * E_a * D * np.take_along_axis(delta, worst[None], axis=0)[0] / b["S_A"])
    R_E = b["E_case"] / E_a
    thrust = {way: R_E * 12 * E_a * I * (growth * apart[way]) / cubes[way] for way in cubes}
    if len(axis) == 2:
        reach = np.stack([lengths[0] + lengths[1] / 2, lengths[1] + lengths[0] / 2])
    else:
        reach = np.stack([lengths[0], lengths[-1]]) + lengths[1:-1].sum(axis=0) / 2
    friction = c["mu"] * b["w"] * reach
    loads = {}
    for end, (own_leg, sign) in enumerate(((0, -1.0), (len(axis) - 1, 1.0))):
        for way in cubes:
            outward = sign * np.sign(apart[way])
            thermal = np.repeat(outward * thrust[way], 2, axis=0)
            rub = np.zeros_like(thermal)
            if way == axis[own_leg]:
                rub[0::2], rub[1::2] = outward * friction[end], -outward * friction[end]
            total = thermal + rub
            at = np.abs(total).argmax(axis=0)
            loads[f"anchor {end + 1}", way] = np.take_along_axis(total, at[None], axis=0)[0]
            if way != axis[own_leg]:
                loads[f"moment {end + 1}", way] = np.repeat(np.abs(thrust[way]) * lengths[own_leg] / 2, 2, axis=0)
    hot = np.maximum(growth.max(axis=0), 0.0)
    room = c["leg"] * (1 + hot) + D / 2 + c["t_ins"] + b["clad"] if shape == "U" else np.zeros_like(D)
    moved = np.abs(growth).max(axis=0) * lengths[[0, -1]]
    index = np.abs(growth).argmax(axis=0)[None]
    P, e, E_m = (np.take_along_axis(v, index, axis=0)[0] for v in (
        np.stack([c["P"], np.zeros_like(D)]), growth, b["E_case"]
    ))  # fmt: skip
    hoop = P * D / (2 * b["T"])
    held = b["nu"] * hoop - E_m * e
    return {
        **b, "stress": stress, "worst": worst, "l_req": l_req, "room": room, "shoe": moved.max(axis=0), "loads": loads,
        "corners": (growth * lengths[0], growth * lengths[-1]),
        "severe": (stress > 0.8 * b["S_A"]) & (c["cycles"] > 7000),
        "F_r": b["A"] * held, "S_eq": np.sqrt(hoop**2 - hoop * held + held**2),
    }  # fmt: skip

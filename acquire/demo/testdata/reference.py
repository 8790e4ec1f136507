#!/usr/bin/python3
"""Writes reference.json: frequency responses of the demo's skid with its shakers, computed with
NumPy and SciPy from the figures below, which repeat those of skid.go and shaker.go on purpose.

    /usr/bin/python3 reference.py        (NumPy 1.24, SciPy 1.10)

Mode shapes come from roots found here and are normalised by numerical integration. The coupled
system is solved twice, as a first-order state space and as a dynamic stiffness matrix, and the two
must agree. (scipy.signal.freqresp is of no use here: it goes through a polynomial, which doubles
cannot hold at this order.) The small system at the end is discretised by scipy.signal."""

import json
import pathlib
import tomllib

import numpy as np
from scipy import integrate, optimize, signal

here = pathlib.Path(__file__).parent

LENGTH, WIDTH, MASS, TWIST = 2.4, 1.0, 80.0, 0.35

POINTS = {
    "1": (0.03, 0.00, 0.12), "2": (0.28, 0.00, 0.12), "3": (0.85, 0.00, 0.12), "4": (1.33, 0.00, 0.12),
    "5": (1.90, 0.00, 0.12), "6": (2.37, 0.00, 0.12), "7": (0.03, 1.00, 0.12), "8": (0.52, 1.00, 0.12),
    "9": (0.98, 1.00, 0.12), "10": (1.45, 1.00, 0.12), "11": (2.02, 1.00, 0.12), "12": (2.37, 1.00, 0.12),
    "13": (0.40, 0.45, 0.06), "14": (1.20, 0.55, 0.06), "15": (2.00, 0.40, 0.06), "16": (0.60, 0.30, 0.26),
    "17": (0.60, 0.70, 0.26), "18": (1.62, 0.30, 0.20), "19": (1.62, 0.70, 0.20), "20": (0.10, 0.50, 0.30),
}

MODES = [  # family, order along, order across, Hz, damping
    ("surge", 0, 0, 0.9, 0.06), ("sway", 0, 0, 1.0, 0.06), ("sway", 1, 0, 1.3, 0.06),
    ("plate", 0, 0, 2.1, 0.05), ("plate", 0, 1, 2.6, 0.05), ("plate", 1, 0, 2.9, 0.05),
    ("plate", 1, 1, 43.7, 0.028), ("plate", 2, 0, 71.2, 0.018), ("sway", 2, 0, 117.4, 0.012),
    ("plate", 2, 1, 152.9, 0.0095), ("plate", 3, 0, 196.5, 0.0080), ("plate", 0, 2, 248.0, 0.0070),
    ("plate", 3, 1, 252.6, 0.0070), ("sway", 3, 0, 318.2, 0.0060), ("plate", 4, 0, 447.8, 0.0055),
    ("plate", 4, 1, 622.6, 0.0050), ("sway", 4, 0, 731.9, 0.0055), ("sway", 5, 0, 904.2, 0.0050),
]

SHAKER = dict(force=25.0, mass=0.8, k_flexure=40e3, c_flexure=40.0, k_stinger=130e6, c_stinger=400.0)

FREQUENCIES = [1.25, 30.0, 43.75, 117.5, 205.625, 248.125, 250.625, 318.125, 433.75, 622.5, 800.0, 1000.0]


def beam(order):
    """The deflection and slope of a free-free beam of unit length as functions, unit mean square."""
    if order == 0:
        return lambda s: 1.0, lambda s: 0.0
    if order == 1:
        return lambda s: np.sqrt(3) * (2 * s - 1), lambda s: 2 * np.sqrt(3)
    guess = (order - 0.5) * np.pi
    b = optimize.brentq(lambda b: np.cos(b) - 1 / np.cosh(b), guess - 0.3, guess + 0.3, xtol=1e-15)
    # the part that grows is written with decaying exponentials from both ends
    r = (np.cosh(b) - np.cos(b)) / (np.sinh(b) - np.sin(b))
    shape = lambda s: (np.cos(b * s) - r * np.sin(b * s)
                       + 0.5 * (1 - r) * np.exp(b * s) + 0.5 * (1 + r) * np.exp(-b * s))
    slope = lambda s: b * (-np.sin(b * s) - r * np.cos(b * s)
                           + 0.5 * (1 - r) * np.exp(b * s) - 0.5 * (1 + r) * np.exp(-b * s))
    norm = np.sqrt(integrate.quad(lambda s: shape(s) ** 2, 0, 1, epsabs=1e-13)[0])
    return lambda s: shape(s) / norm, lambda s: slope(s) / norm


BEAMS = [beam(order) for order in range(6)]


def shape(mode, point):
    family, along, across = mode[:3]
    x, y, h = POINTS[point]
    fx, dfx = BEAMS[along][0](x / LENGTH), BEAMS[along][1](x / LENGTH) / LENGTH
    if family == "plate":
        fy, dfy = BEAMS[across][0](y / WIDTH), BEAMS[across][1](y / WIDTH) / WIDTH
        return np.array([-h * dfx * fy, -h * fx * dfy, fx * fy]) / np.sqrt(MASS)
    if family == "sway":
        tilt = BEAMS[1][0](y / WIDTH)
        return np.array([-(y - WIDTH / 2) * dfx, fx, TWIST * tilt * fx]) / np.sqrt(MASS * (1 + TWIST**2))
    assert family == "surge"
    return np.array([1.0, 0.0, 0.0]) / np.sqrt(MASS)


def shapes(channels):
    """Row per channel, column per mode, along positive axes."""
    return np.array([[shape(m, c["point"])["xyz".index(c["axis"][1])] for m in MODES] for c in channels])


def sign(c):
    return -1.0 if c["axis"][0] == "-" else 1.0


def state_space(forces, responses):
    """From currents to forces and accelerations, along positive axes."""
    n, q = len(MODES), len(forces)
    w = 2 * np.pi * np.array([m[3] for m in MODES])
    zeta = np.array([m[4] for m in MODES])
    pf, pr, s = shapes(forces), shapes(responses), SHAKER
    stiff, damp = np.zeros((n + q, n + q)), np.zeros((n + q, n + q))
    stiff[:n, :n], damp[:n, :n] = np.diag(w**2), np.diag(2 * zeta * w)
    spread = np.hstack([-pf, np.eye(q)])  # armature minus structure
    stiff += s["k_stinger"] * spread.T @ spread
    damp += s["c_stinger"] * spread.T @ spread
    stiff[n:, n:] += s["k_flexure"] * np.eye(q)
    damp[n:, n:] += s["c_flexure"] * np.eye(q)
    mass = np.concatenate([np.ones(n), s["mass"] * np.ones(q)])
    drive = np.vstack([np.zeros((n, q)), s["force"] * np.eye(q)])
    lower = -np.hstack([stiff, damp]) / mass[:, None]
    a = np.vstack([np.hstack([np.zeros((n + q, n + q)), np.eye(n + q)]), lower])
    b = np.vstack([np.zeros((n + q, q)), drive / mass[:, None]])
    c = np.vstack([np.hstack([s["k_stinger"] * spread, s["c_stinger"] * spread]), pr @ lower[:n]])
    return (a, b, c), (mass, damp, stiff, drive, spread, pr)


def main():
    with open(here.parent / "skid.toml", "rb") as f:
        rig = tomllib.load(f)
    forces, responses = rig["force"], rig["response"]
    q = len(forces)
    (a, b, c), (mass, damp, stiff, drive, spread, pr) = state_space(forces, responses)
    w = 2 * np.pi * np.array(FREQUENCIES)
    first_order = np.empty((len(w), len(c), q), complex)
    for k, x in enumerate(w):
        first_order[k] = c @ np.linalg.solve(1j * x * np.eye(len(a)) - a, b)
    for k, x in enumerate(w):
        motion = np.linalg.solve(-x * x * np.diag(mass) + 1j * x * damp + stiff, drive)
        force = (SHAKER["k_stinger"] + 1j * x * SHAKER["c_stinger"]) * spread @ motion
        second_order = np.vstack([force, -x * x * pr @ motion[:len(MODES)]])
        scale = np.abs(first_order[k]).max()
        assert np.abs(second_order - first_order[k]).max() < 1e-8 * scale, FREQUENCIES[k]
    ends = np.array([sign(ch) for ch in forces + responses])
    h = first_order[:, q:] @ np.linalg.inv(first_order[:, :q])
    h *= ends[q:, None] * ends[None, :q]
    first_order *= ends[:, None]

    # the triangle hold, on a small system whose modes are far apart
    small_a = np.array([[0.0, 1.0, 0.0], [-4000.0, -3.0, 20.0], [0.0, 500.0, -250.0]])
    small_b = np.array([[0.0, 0.0], [1.0, -2.0], [0.5, 30.0]])
    step = 0.004
    ad, bd, _, dd, _ = signal.cont2discrete((small_a, small_b, np.eye(3), np.zeros((3, 2))), step, "foh")

    def pairs(z):
        return [[[float(v.real), float(v.imag)] for v in row] for row in z]

    with open(here / "reference.json", "w") as f:
        json.dump({"frequency_hz": FREQUENCIES,
                   "current_to_output": [pairs(z) for z in first_order],
                   "accelerance": [pairs(z) for z in h],
                   "hold": {"a": small_a.tolist(), "b": small_b.tolist(), "step_s": step,
                            "ad": ad.tolist(), "bd": bd.tolist(), "dd": dd.tolist()}}, f)
        f.write("\n")


if __name__ == "__main__":
    main()

"""Writes reference.json, against which the tests check the decimator.

Run it with NumPy and SciPy (made with 1.24 and 1.10), which takes some minutes:

    python3 reference.py > reference.json

Nothing is taken from the Go code. The stages are designed with scipy.signal.firwin and its Kaiser
window, their order is searched for here too, the cascade is run as one filter at the source rate by
scipy.signal.upfirdn, and its response comes from scipy.signal.freqz. Frequencies are in units of the
analysis rate.
"""
import json
import math

import numpy as np
from scipy import signal

EDGE = 25 / 64  # 1/2.56, the end of the passband
STOP_DB = 107
GRID = 1024  # frequencies in one analysis rate; EDGE is one of them
FOLD_GRID = 64  # the same for fold_db
RUNS = [1, 2, 3, 18, 37, 256]
CHANNELS = 2


def window_half(k, rest):
    # kaiserord takes the width as a share of half the input rate, which is rest*k analysis rates
    taps, beta = signal.kaiserord(STOP_DB, (rest - 2 * EDGE) / (rest * k / 2))
    half = taps // 2  # on either side of the centre, so that the stage has no fewer taps
    return half, beta


def cheapest(d):
    """The factors of the stages with the fewest multiplications for one output, and those."""
    if d == 1:
        return [], 0
    plans = []
    for k in (k for k in range(2, d + 1) if d % k == 0):
        later, cost = cheapest(d // k)
        half, _ = window_half(k, d // k)
        plans.append(([k] + later, cost + d // k * (half - half // k + 1)))
    return min(plans, key=lambda p: p[1])


def cascade(d):
    """The factors and the impulse response of all stages at the source rate."""
    factors, _ = cheapest(d)
    h, rate, rest = np.ones(1), 1, d
    for k in factors:
        rest //= k
        half, beta = window_half(k, rest)
        stage = signal.firwin(2 * half + 1, 1 / k, window=("kaiser", beta))
        stage[np.abs(stage) < 1e-16] = 0  # every k-th but the centre
        spread = np.zeros((len(stage) - 1) * rate + 1)
        spread[::rate] = stage
        h = np.convolve(h, spread)
        rate *= k
    h = np.trim_zeros(h)
    return factors, h


def figures(d):
    factors, h = cascade(d)
    _, response = signal.freqz(h, worN=GRID * d, whole=True, include_nyquist=False)
    gain = np.abs(response)
    edge = round(EDGE * GRID)
    passband = gain[: edge + 1]
    offsets = np.arange(-edge, edge + 1)
    folds = gain[(np.arange(1, d)[:, None] * GRID + offsets) % (GRID * d)]
    on_grid = offsets % (GRID // FOLD_GRID) == 0
    return {
        "d": d,
        "factors": factors,
        "half": (len(h) - 1) // 2,
        "ripple_db": np.max(np.abs(20 * np.log10(passband))),
        "alias_db": 20 * np.log10(np.max(folds)),
        "fold_db": 10 * np.log10(np.max(np.sum(folds[:, on_grid] ** 2, axis=0))),
    }


def noise(seed, n):
    x = np.empty(n)
    for i in range(n):
        seed = (seed * 6364136223846793005 + 1442695040888963407) % 2**64
        x[i] = (seed >> 40) / 2**23 - 1
    return x


def run(d):
    frames = 50 * d + d // 2 + 3
    x = noise(d, frames * CHANNELS).reshape(frames, CHANNELS)
    _, h = cascade(d)
    half = (len(h) - 1) // 2
    # Output m of upfirdn is centred on frame m*d - half: zeros in front make half a multiple of d.
    lead = -half % d
    y = signal.upfirdn(h, np.vstack([np.zeros((lead, CHANNELS)), x]), up=1, down=d, axis=0)
    first = (half + lead) // d
    y = y[first : first + math.ceil(frames / d)]
    return {"d": d, "seed": d, "frames": frames, "channels": CHANNELS, "out": y.ravel().tolist()}


if __name__ == "__main__":
    print('{"figures": [')
    print(",\n".join(json.dumps(figures(d)) for d in range(2, 257)))
    print('], "runs": [')
    print(",\n".join(json.dumps(run(d)) for d in RUNS))
    print("]}")

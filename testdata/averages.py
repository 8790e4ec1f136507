"""From samples to averaged spectra, straight from the definitions.

L lines, q forces, p responses. A transform is (L, q + p), forces first, of one block.
"""

from dataclasses import dataclass

import numpy as np
from scipy import signal

# Two ways to the same spectra differ by rounding only.
SPECTRA_AGREE = 1e-12

# ISO 18431-2: 1 - 1.933 c1 + 1.286 c2 - 0.388 c3 + 0.0322 c4. general_cosine puts in the signs.
FLATTOP = [1.0, 1.933, 1.286, 0.388, 0.0322]


@dataclass
class Average:
    """Densities of an average, NaN without a block, and what it is worth."""
    gxx: np.ndarray      # (L, q, q) E[x_i x_j*]
    gyx: np.ndarray      # (L, p, q) E[y_o x_i*]
    gyy_full: np.ndarray  # (L, p, p) E[y_o y_n*]
    blocks: int          # M
    n_e: float           # independent averages

    @property
    def gyy(self):
        return np.einsum("loo->lo", self.gyy_full).real


def must_agree(what, a, b, tolerance):
    """Stops unless two arrays differ by no more than tolerance times their greatest value."""
    difference, greatest = np.max(np.abs(a - b)), np.max(np.abs(b))
    assert difference <= tolerance * greatest, \
        f"{what}: two ways differ by {difference:.3g}, greatest value {greatest:.3g}"


def window(name, n):
    """Periodic windows: sample m of n is taken at m/n."""
    if name == "flattop":
        return signal.windows.general_cosine(n, FLATTOP, sym=False)
    return signal.get_window({"hann": "hann", "rectangular": "boxcar"}[name], n, fftbins=True)


def effective_averages(w, starts, weights):
    """(sum of weights)² / sum over all pairs of blocks a, b of w_a w_b rho(s_a - s_b)²."""
    if len(starts) == 0:
        return 0.0
    n = len(w)
    total = 0.0
    for start_a, weight_a in zip(starts, weights):
        for start_b, weight_b in zip(starts, weights):
            lag = abs(start_a - start_b)
            rho = np.sum(w[:n - lag] * w[lag:]) / np.sum(w * w) if lag < n else 0.0
            total += weight_a * weight_b * rho ** 2
    return np.sum(weights) ** 2 / total


def block_weights(rig, count):
    """Weights of the averaged blocks in order, the newest 1, not normalised."""
    if rig.averaging == "linear":
        return np.ones(count)
    age = np.arange(count)[::-1]
    return (1 - 1 / rig.memory) ** age


def transforms(rig, values, starts):
    """The transforms of the listed blocks, (M, L, q + p). values is (frames, q + p)."""
    w = window(rig.window, rig.block)
    blocks = [np.fft.rfft(w[:, None] * values[start:start + rig.block], axis=0)[:rig.lines()]
              for start in starts]
    return np.array(blocks, complex).reshape(-1, rig.lines(), values.shape[1])


def density_scale(rig):
    """From |X|² to a one-sided density, (L)."""
    sides = np.full(rig.lines(), 2.0)
    sides[0] = 1.0  # no case reaches half the rate, the other line without the 2
    return sides / (rig.rate_hz * np.sum(window(rig.window, rig.block) ** 2))


def average(rig, transformed, weights, n_e):
    """The weighted mean of the products of transforms, as densities."""
    q, blocks = len(rig.forces), len(transformed)
    if blocks == 0:
        products = np.full((rig.lines(),) + 2 * (transformed.shape[2],), complex(np.nan, np.nan))
    else:
        products = np.zeros((rig.lines(),) + 2 * (transformed.shape[2],), complex)
        for v, weight in zip(transformed, weights):
            products += weight * v[:, :, None] * v[:, None, :].conj()
        products *= (density_scale(rig) / np.sum(weights))[:, None, None]
    return Average(products[:, :q, :q], products[:, q:, :q], products[:, q:, q:], blocks, n_e)


def check_with_scipy(rig, values, averaged):
    """Compares with scipy.signal.csd and welch, which average every block of the recording.

    csd(a, b) is the mean of conj(A) B, so E[y x*] is csd(x, y).
    """
    q, lines = len(rig.forces), rig.lines()
    options = dict(fs=rig.rate_hz, window=window(rig.window, rig.block), nperseg=rig.block,
                   noverlap=rig.block - rig.hop, detrend=False, scaling="density")
    x, y = values[:, :q].T, values[:, q:].T
    for i in range(q):
        for j in range(q):
            frequency, density = signal.csd(x[j], x[i], **options)
            must_agree("Gxx", averaged.gxx[:, i, j], density[:lines], SPECTRA_AGREE)
        for o in range(len(y)):
            _, density = signal.csd(x[i], y[o], **options)
            must_agree("Gyx", averaged.gyx[:, o, i], density[:lines], SPECTRA_AGREE)
    for o in range(len(y)):
        for n in range(len(y)):
            _, density = signal.csd(y[n], y[o], **options)
            must_agree("Gyy", averaged.gyy_full[:, o, n], density[:lines], SPECTRA_AGREE)
        _, density = signal.welch(y[o], **options)
        must_agree("Gyy", averaged.gyy[:, o], density[:lines], SPECTRA_AGREE)
    must_agree("frequency", np.arange(lines) * rig.spacing_hz(), frequency[:lines], SPECTRA_AGREE)


def check_values():
    """Published and hand-derived values; stops the run if one is not met.

    Noise bandwidth of Hann: Harris 1978, Proc. IEEE 66; of the flat top: 1 + half the sum of
    the squares of its other coefficients. Effective averages: Welch 1967,
    n / (1 + 2 sum (1 - j/n) rho_j²), worked out to four digits.
    """
    n = 4096
    for name, bandwidth in (("hann", 1.5), ("rectangular", 1.0), ("flattop", 3.7709)):
        w = window(name, n)
        assert abs(n * np.sum(w ** 2) / np.sum(w) ** 2 - bandwidth) < 5e-4, name
    hann = window("hann", n)
    assert hann[0] == 0 and hann[n // 2] == 1
    for hop, wanted in ((n // 2, {1: 1.0, 10: 9.524, 30: 28.47, 100: 94.79}),
                        (n // 4, {1: 1.0, 10: 5.475, 30: 15.86, 100: 52.22})):
        for count, value in wanted.items():
            got = effective_averages(hann, [k * hop for k in range(count)], np.ones(count))
            assert abs(got - value) < 6e-4 * value, (hop, count, got)

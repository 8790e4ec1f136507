"""Periodic random excitation: noise and distortion from the scatter between periods.

X_p is the transform of period p of K, forces and responses together, of one random block.
"""

import numpy as np
from scipy import stats

import averages
from averages import must_agree

# Two ways to the same residual: rounding times the share of the density that it is.
RESIDUAL_AGREE = 1e-8

# How many times its noise the weakest force of a case is. Two averages of two forces are told from
# noise with 99 % when above 9 times, F(2, 4; 0.99) / 2.
CLEAR_OF_NOISE = 20


def period_transforms(rig, values, starts):
    """(M, K, L, q + p): every kept period of every random block transformed by itself."""
    count = rig.periodic["keep_periods"]
    return np.stack([averages.transforms(rig, values, [s + p * rig.block for s in starts])
                     for p in range(count)], axis=1)


def averaged_periods(rig, values, starts):
    """(M, L, q + p): the kept periods averaged in time, then transformed."""
    count = rig.periodic["keep_periods"]
    blocks = [np.fft.rfft(values[s:s + count * rig.block].reshape(count, rig.block, -1)
                          .mean(axis=0), axis=0)[:rig.lines()] for s in starts]
    return np.array(blocks, complex).reshape(-1, rig.lines(), values.shape[1])


def outer(a, b):
    return a[..., :, None] * b[..., None, :].conj()


def noise_densities(rig, periods):
    """(L, q + p, q + p): (sum_p X_p X_p^H - K Xbar Xbar^H) / (K - 1), averaged over the blocks."""
    count = periods.shape[1]
    deviation = periods - periods.mean(axis=1, keepdims=True)
    noise = outer(deviation, deviation).sum(axis=1).mean(axis=0) / (count - 1)
    mean = periods.mean(axis=1)
    squares = outer(periods, periods).sum(axis=1)
    as_written = ((squares - count * outer(mean, mean)) / (count - 1)).mean(axis=0)
    largest = np.max(np.abs(squares))
    assert np.max(np.abs(noise - as_written)) < averages.SPECTRA_AGREE * largest
    return noise * averages.density_scale(rig)[:, None, None]


def different_periods(rig, periods):
    """(L, q + p, q + p): X_p X_r^H, r unlike p, averaged over such pairs and over the blocks."""
    count = periods.shape[1]
    total = np.zeros((rig.lines(),) + 2 * (periods.shape[3],), complex)
    for p in range(count):
        for r in range(count):
            if p != r:
                total += outer(periods[:, p], periods[:, r]).mean(axis=0)
    result = total / (count * (count - 1))
    everything = periods.sum(axis=1)
    in_sums = outer(everything, everything) - outer(periods, periods).sum(axis=1)
    must_agree("different periods", result, in_sums.mean(axis=0) / (count * (count - 1)),
               averages.SPECTRA_AGREE)
    return result * averages.density_scale(rig)[:, None, None]


def unexplained(h, gyy, gyx, gxx):
    """Density of y - H x: Gyy - 2 Re(H Gyx^H) + H Gxx H^H, (L, p)."""
    cross = np.einsum("loi,loi->lo", h, gyx.conj()).real
    return gyy - 2 * cross + np.einsum("loi,lij,loj->lo", h, gxx, h.conj()).real


def h_variance(rig, h, averaged, noise, cleared_gxx):
    """Complex variance of H from products of different periods, (L, p, q), NaN while n_e <= q.

    A residual r_p of period p, distortion and noise, and the forces X_l of another period l bring
    r_p X_l^H Gxx_c^-1 into H. All pairs of periods together have the variance
    S Gxx + N Nxx / (K² (K-1)) between the two Gxx_c^-1, over n_e: S the residual density of the
    averaged periods, times n_e/(n_e - q), and N that of the noise of one period.
    """
    q, count, n_e = len(rig.forces), rig.periodic["keep_periods"], averaged.n_e
    if n_e <= q:
        return np.full(h.shape, np.nan)
    diagonal = np.einsum("lii->li", noise).real
    s = unexplained(h, averaged.gyy, averaged.gyx, averaged.gxx) * n_e / (n_e - q)
    n = unexplained(h, diagonal[:, q:], noise[:, q:, :q], noise[:, :q, :q])
    inverse = np.linalg.inv(cleared_gxx)

    def gain(g):
        return np.einsum("lii->li", inverse @ g @ inverse).real[:, None, :]

    result = (s[:, :, None] * gain(averaged.gxx)
              + n[:, :, None] * gain(noise[:, :q, :q]) / (count ** 2 * (count - 1))) / n_e
    result[averaged.gyy == 0] = np.nan
    return result


def distortion(rig, h, averaged, noise, transformed, periods):
    """Residual density of the averaged periods less that of the noise over K, not below 0.

    And what it stays below on 99 of 100 lines without distortion: both are then estimates of the
    same density, from 2 (n_e - q) and 2 M (K - 1) values, and their ratio is F.
    """
    q, count = len(rig.forces), rig.periodic["keep_periods"]
    if averaged.blocks <= q:
        unknown = np.full(averaged.gyy.shape, np.nan)
        return unknown, unknown
    residual = unexplained(h, averaged.gyy, averaged.gyx, averaged.gxx)
    noise_diagonal = np.einsum("lii->li", noise).real
    of_noise = unexplained(h, noise_diagonal[:, q:], noise[:, q:, :q], noise[:, :q, :q])
    check_residuals(rig, h, residual, of_noise, transformed, periods)
    free = averaged.n_e - q
    ratio = stats.f.ppf(0.99, 2 * free, 2 * averaged.blocks * (count - 1))
    return (np.maximum(residual * averaged.n_e / free - of_noise / count, 0),
            of_noise / count * (ratio - 1))


def check_residuals(rig, h, residual, of_noise, transformed, periods):
    """The same two densities from y - H x of each transform."""
    q, count = len(rig.forces), rig.periodic["keep_periods"]
    scale = averages.density_scale(rig)[:, None]

    def remainder(v):
        return v[..., q:] - np.einsum("loi,...li->...lo", h, v[..., :q])

    directly = (np.abs(remainder(transformed)) ** 2).mean(axis=0) * scale
    deviation = remainder(periods - periods.mean(axis=1, keepdims=True))
    scatter = (np.abs(deviation) ** 2).sum(axis=1).mean(axis=0) / (count - 1) * scale
    known = np.isfinite(h).all(axis=2)
    if known.any():
        must_agree("residual", residual[known], directly[known], RESIDUAL_AGREE)
        must_agree("residual noise", of_noise[known], scatter[known], RESIDUAL_AGREE)


def check_cleared(rig, cleared, averaged, noise):
    """Products of different periods are those of the averaged periods less the noise over K.

    And every force acts on every line, in every direction: less even CLEAR_OF_NOISE times that
    noise, Gxx still has an inverse, so that no rule for telling forces from noise is put to the test.
    """
    q, count = len(rig.forces), rig.periodic["keep_periods"]
    above = averaged.gxx - CLEAR_OF_NOISE * noise[:, :q, :q] / count
    diagonal = np.sqrt(np.einsum("lii->li", averaged.gxx).real)
    smallest = np.linalg.eigvalsh(above / (diagonal[:, :, None] * diagonal[:, None, :]))[:, 0]
    assert np.min(smallest) > 0, "a force next to its noise: choose another seed"
    must_agree("Gxx of different periods", cleared[0],
               averaged.gxx - noise[:, :q, :q] / count, averages.SPECTRA_AGREE)
    must_agree("Gyx of different periods", cleared[1],
               averaged.gyx - noise[:, q:, :q] / count, averages.SPECTRA_AGREE)

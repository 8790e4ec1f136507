"""What follows from an average, by NumPy and SciPy, straight from the definitions.

Wherever a second way to a number exists both are computed and compared. Arrays have the names and
shapes of estimates.npz: L lines, q forces, p responses, K reciprocity pairs.
"""

import numpy as np

from averages import must_agree

# Smallest eigenvalue of the unit-diagonal Gxx above which a line counts as invertible.
INVERTIBLE = 1e-12

# Two ways to the same coherence: rounding times the condition of the matrices.
COHERENCE_AGREE = 1e-9


def hermitian(a):
    return np.conj(np.swapaxes(a, -1, -2))


def h1(gxx, gyx):
    """H Gxx = Gyx, solved as Gxx^H H^H = Gyx^H."""
    return hermitian(np.linalg.solve(hermitian(gxx), hermitian(gyx)))


def h2(gyx, gyy_full):
    """H Gxy = Gyy with Gxy = Gyx^H, solved as Gyx H^H = Gyy^H."""
    return hermitian(np.linalg.solve(gyx, hermitian(gyy_full)))


def hv(gxx, gyx, gyy):
    """-conj(u_i / u_0), u the eigenvector of the smallest eigenvalue of E[v v^H], v = [y; x]."""
    result = np.zeros_like(gyx)
    for line in range(gyx.shape[0]):
        for o in range(gyx.shape[1]):
            row = gyx[line, o][None, :]
            both = np.block([[np.array([[gyy[line, o]]]), row], [row.conj().T, gxx[line]]])
            _, vectors = np.linalg.eigh(both)
            u = vectors[:, 0]
            result[line, o] = -np.conj(u[1:] / u[0])
    return result


def multiple_coherence(gxx, gyx, gyy):
    """H1 Gxx H1^H / Gyy clamped to [0, 1], compared with 1 - det G[y,x] / (Gyy det Gxx)."""
    h = h1(gxx, gyx)
    explained = np.einsum("loi,lij,loj->lo", h, gxx, h.conj()).real
    with np.errstate(invalid="ignore"):
        g2 = explained / gyy
    lines, p, q = gyx.shape
    for o in range(p):
        if np.any(gyy[:, o] == 0):
            continue
        both = np.zeros((lines, q + 1, q + 1), complex)
        both[:, 0, 0] = gyy[:, o]
        both[:, 0, 1:] = gyx[:, o]
        both[:, 1:, 0] = gyx[:, o].conj()
        both[:, 1:, 1:] = gxx
        by_determinants = 1 - (np.linalg.det(both) / (gyy[:, o] * np.linalg.det(gxx))).real
        must_agree("multiple coherence", by_determinants, g2[:, o], COHERENCE_AGREE)
    return np.clip(g2, 0, 1)


def partial_coherence(gxx, gyx, gyy):
    """The coherence of response o and force i after the other forces are removed from both.

    What the others explain is taken off the densities (a Schur complement): Gab - Gaz Gzz^-1 Gzb.
    Compared with |H1|² / (|H1|² + Gyy (1 - g2) [Gxx^-1]_ii).
    """
    lines, p, q = gyx.shape
    result = np.zeros((lines, p, q))
    for i in range(q):
        z = [j for j in range(q) if j != i]
        gzz = gxx[:, z][:, :, z]
        x_by_z = np.linalg.solve(hermitian(gzz), hermitian(gxx[:, [i]][:, :, z]))  # (Giz Gzz^-1)^H
        gxx_rest = gxx[:, i, i].real - (gxx[:, [i]][:, :, z] @ x_by_z)[:, 0, 0].real
        for o in range(p):
            gyz = gyx[:, [o]][:, :, z]
            y_by_z = np.linalg.solve(hermitian(gzz), hermitian(gyz))
            gyy_rest = gyy[:, o] - (gyz @ y_by_z)[:, 0, 0].real
            gyx_rest = gyx[:, o, i] - (gyz @ x_by_z)[:, 0, 0]
            with np.errstate(invalid="ignore"):
                result[:, o, i] = np.abs(gyx_rest) ** 2 / (gxx_rest * gyy_rest)
    check_partial_coherence(result, gxx, gyx, gyy)
    return np.clip(result, 0, 1)


def check_partial_coherence(result, gxx, gyx, gyy):
    size = np.abs(h1(gxx, gyx)) ** 2
    inverse = np.einsum("lii->li", np.linalg.inv(gxx)).real
    unexplained = gyy * (1 - multiple_coherence(gxx, gyx, gyy))
    with np.errstate(invalid="ignore"):
        closed = size / (size + unexplained[:, :, None] * inverse[:, None, :])
    live = np.all(gyy > 0, axis=0)
    assert np.all(np.isnan(result[:, ~live]))
    if live.any():
        must_agree("partial coherence", result[:, live], closed[:, live], COHERENCE_AGREE)


def force_coherence(gxx):
    """1 - 1/(Gxx_ii [Gxx^-1]_ii), compared with the coherence of force i with the others."""
    lines, q, _ = gxx.shape
    if q == 1:
        return np.zeros((lines, 1))
    inverse = np.linalg.inv(gxx)
    result = np.zeros((lines, q))
    for i in range(q):
        result[:, i] = 1 - 1 / (gxx[:, i, i].real * inverse[:, i, i].real)
        others = [j for j in range(q) if j != i]
        rest = gxx[:, others][:, :, others]
        to_rest = gxx[:, [i]][:, :, others]
        explained = (to_rest @ np.linalg.solve(rest, hermitian(to_rest)))[:, 0, 0].real
        must_agree("force coherence", result[:, i], explained / gxx[:, i, i].real, COHERENCE_AGREE)
    return np.clip(result, 0, 1)


def reciprocity_error(rig, h, gyy):
    """|s_a H_ab - s_b H_ba| / (½ (|H_ab| + |H_ba|)), H_ab the response at a's point to force b."""
    points, pairs = rig.driving_points(), rig.reciprocity_pairs()
    signs = [None if o is None else f.sign() * rig.responses[o].sign()
             for f, o in zip(rig.forces, points)]
    result = np.full((len(h), len(pairs)), np.nan)
    for k, (a, b) in enumerate(pairs):
        h_ab, h_ba = h[:, points[a], b], h[:, points[b], a]
        known = (gyy[:, points[a]] > 0) & (gyy[:, points[b]] > 0)
        half_sum = 0.5 * (np.abs(h_ab) + np.abs(h_ba))
        difference = np.abs(signs[a] * h_ab - signs[b] * h_ba)
        result[known, k] = difference[known] / half_sum[known]
    return result


def invertible_lines(gxx):
    """Lines whose Gxx, scaled to a unit diagonal, has its smallest eigenvalue above 1e-12."""
    diagonal = np.einsum("lii->li", gxx).real
    result = np.zeros(len(gxx), bool)
    usable = np.all(diagonal > 0, axis=1)
    scaled = unit_diagonal(gxx[usable])
    result[usable] = np.linalg.eigvalsh(scaled)[:, 0] > INVERTIBLE
    return result


def unit_diagonal(gxx):
    root = np.sqrt(np.einsum("lii->li", gxx).real)
    return gxx / (root[:, :, None] * root[:, None, :])


def h_variance(gxx, gyy, g2, n_e):
    """Complex variance of H1, Gyy (1 - g2) [Gxx^-1]_ii / (n_e - q), (L, p, q)."""
    inverse = np.einsum("lii->li", np.linalg.inv(gxx)).real
    return (gyy * (1 - g2))[:, :, None] * inverse[:, None, :] / (n_e - gxx.shape[1])


def relative_error(variance, h):
    """Relative standard deviation of |H|, along which half of the complex variance lies."""
    with np.errstate(invalid="ignore"):
        return np.sqrt(0.5 * variance) / np.abs(h)


def h_by_h1(averaged):
    """H1 and its complex variance, NaN where unknown: what drift compares."""
    h = np.full_like(averaged.gyx, complex(np.nan, np.nan))
    variance = np.full(averaged.gyx.shape, np.nan)
    q = averaged.gxx.shape[1]
    if averaged.blocks < q:
        return h, variance
    ok = invertible_lines(averaged.gxx)
    gxx, gyx, gyy = averaged.gxx[ok], averaged.gyx[ok], averaged.gyy[ok]
    h[ok] = h1(gxx, gyx)
    if ok.any() and averaged.n_e > q:
        variance[ok] = h_variance(gxx, gyy, multiple_coherence(gxx, gyx, gyy), averaged.n_e)
    return h, variance


def frequency_responses(rig, averaged, cleared):
    """H by the estimator. cleared, if not None, are the Gxx and Gyx that H is to come from."""
    h = np.full_like(averaged.gyx, complex(np.nan, np.nan))
    if averaged.blocks < len(rig.forces):
        return h
    ok = invertible_lines(averaged.gxx)
    if cleared is not None:
        ok &= invertible_lines(cleared[0])
        h[ok] = h1(cleared[0][ok], cleared[1][ok])
    elif rig.estimator == "h1":
        h[ok] = h1(averaged.gxx[ok], averaged.gyx[ok])
    elif rig.estimator == "h2":
        h[ok] = h2(averaged.gyx[ok], averaged.gyy_full[ok])
    else:
        h[ok] = hv(averaged.gxx[ok], averaged.gyx[ok], averaged.gyy[ok])
    return h


def estimates(rig, averaged, confidence, cleared=None):
    """Every array that follows from one average, NaN where it cannot be known."""
    gxx, gyx, gyy = averaged.gxx, averaged.gyx, averaged.gyy
    lines, p, q = gyx.shape
    g2 = np.full((lines, p), np.nan)
    partial = np.full((lines, p, q), np.nan)
    error = np.full((lines, p, q), np.nan)
    radius = np.full((lines, p, q), np.nan)
    condition = np.full(lines, np.nan)
    condition_raw = np.full(lines, np.nan)
    coherence = np.full((lines, q), np.nan)
    principal = np.full((lines, q), np.nan)

    h = frequency_responses(rig, averaged, cleared)
    if averaged.blocks > 0:
        principal = np.linalg.eigvalsh(gxx)[:, ::-1]
    ok = invertible_lines(gxx) if averaged.blocks >= q else np.zeros(lines, bool)
    if ok.any():
        condition[ok] = np.linalg.cond(unit_diagonal(gxx[ok]))
        condition_raw[ok] = np.linalg.cond(gxx[ok])
        coherence[ok] = force_coherence(gxx[ok])
        if averaged.blocks > q:
            g2[ok] = multiple_coherence(gxx[ok], gyx[ok], gyy[ok])
            partial[ok] = partial_coherence(gxx[ok], gyx[ok], gyy[ok])
        if averaged.n_e > q:
            variance = h_variance(gxx[ok], gyy[ok], g2[ok], averaged.n_e)
            radius[ok] = np.sqrt(confidence.radius_squared(variance, q, averaged.n_e))
            error[ok] = relative_error(variance, h[ok])
    return {
        "H": h, "multiple_coherence": g2, "partial_coherence": partial, "random_error": error,
        "confidence_radius": radius, "force_condition": condition,
        "force_condition_raw": condition_raw, "force_coherence": coherence,
        "principal_forces": principal, "reciprocity_error": reciprocity_error(rig, h, gyy),
    }

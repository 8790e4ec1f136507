"""The reference results: what a rig file and a recording must give, by NumPy and SciPy alone.

Written to be plainly right rather than fast, straight from the definitions, and wherever a second
way to a number exists both are computed and compared. Arrays have the names and shapes of
estimates.npz: L lines, q forces, p responses, K reciprocity pairs.
"""

import json
import os

import numpy as np
from scipy import signal

import rigfile
import wavefile

# Smallest eigenvalue of the unit-diagonal Gxx above which a line counts as invertible.
INVERTIBLE = 1e-12

# Two ways to the same spectra differ by rounding only.
SPECTRA_AGREE = 1e-12

# Two ways to the same coherence: rounding times the condition of the matrices.
COHERENCE_AGREE = 1e-9

# ISO 18431-2: 1 - 1.933 c1 + 1.286 c2 - 0.388 c3 + 0.0322 c4. general_cosine puts in the signs.
FLATTOP = [1.0, 1.933, 1.286, 0.388, 0.0322]


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


def select_blocks(rig, digital):
    """Every block of the grid sorted into averaged ones and others, and the counts for summary.json.

    A lost frame has a sample that is no finite number in a channel in use. A block is averaged
    unless it holds a lost frame or a sample at the limit.
    """
    frames = len(digital)
    lost = np.zeros(frames, bool)
    for c in rig.channels():
        lost |= ~np.isfinite(digital[:, c.index])
    at_limit = np.zeros(frames, bool)
    for c in rig.channels():
        volts = np.abs(digital[:, c.index] * c.full_scale_v)
        at_limit |= ~lost & (volts >= c.limit_v * (1 - 2.0 ** -15))

    starts, seen, overranges = [], 0, 0
    for start in range(0, frames - rig.block + 1, rig.hop):
        inside = slice(start, start + rig.block)
        seen += 1
        assert not (lost[inside].any() and at_limit[inside].any()), "keep gaps and overranges apart"
        overranges += bool(at_limit[inside].any())
        if not lost[inside].any() and not at_limit[inside].any():
            starts.append(start)
    gaps = int(lost[0]) + int(np.sum(lost[1:] & ~lost[:-1]))
    counts = {"blocks_seen": seen, "blocks_averaged": len(starts),
              "blocks_set_aside": seen - len(starts), "gaps": gaps, "overranges": overranges}
    return starts, counts


def block_weights(rig, count):
    """Weights of the averaged blocks in order, the newest 1, not normalised."""
    if rig.averaging == "linear":
        return np.ones(count)
    age = np.arange(count)[::-1]
    return (1 - 1 / rig.memory) ** age


def spectra(rig, values, starts, weights):
    """Gxx, Gyx, Gyy of the listed blocks; NaN without a block. values is (frames, q + p)."""
    q, p, lines = len(rig.forces), len(rig.responses), rig.lines()
    if not starts:
        unknown = complex(np.nan, np.nan)
        return (np.full((lines, q, q), unknown), np.full((lines, p, q), unknown),
                np.full((lines, p), np.nan))
    w = window(rig.window, rig.block)
    sides = np.full(lines, 2.0)
    sides[0] = 1.0  # no case reaches half the rate, the other line without the 2
    scale = sides / (rig.rate_hz * np.sum(w ** 2) * np.sum(weights))
    gxx = np.zeros((lines, q, q), complex)
    gyx = np.zeros((lines, p, q), complex)
    gyy = np.zeros((lines, p))
    for start, weight in zip(starts, weights):
        block = values[start:start + rig.block]
        transformed = np.fft.rfft(w[:, None] * block, axis=0)[:lines]
        x, y = transformed[:, :q], transformed[:, q:]
        gxx += weight * x[:, :, None] * x[:, None, :].conj()
        gyx += weight * y[:, :, None] * x[:, None, :].conj()
        gyy += weight * np.abs(y) ** 2
    return (gxx * scale[:, None, None], gyx * scale[:, None, None], gyy * scale[:, None])


def must_agree(what, a, b, tolerance):
    """Stops unless two arrays differ by no more than tolerance times their greatest value."""
    difference, greatest = np.max(np.abs(a - b)), np.max(np.abs(b))
    assert difference <= tolerance * greatest, \
        f"{what}: two ways differ by {difference:.3g}, greatest value {greatest:.3g}"


def check_with_scipy(rig, values, gxx, gyx, gyy):
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
            must_agree("Gxx", gxx[:, i, j], density[:lines], SPECTRA_AGREE)
        for o in range(len(y)):
            _, density = signal.csd(x[i], y[o], **options)
            must_agree("Gyx", gyx[:, o, i], density[:lines], SPECTRA_AGREE)
    for o in range(len(y)):
        _, density = signal.welch(y[o], **options)
        must_agree("Gyy", gyy[:, o], density[:lines], SPECTRA_AGREE)
    must_agree("frequency", np.arange(lines) * rig.spacing_hz(), frequency[:lines], SPECTRA_AGREE)


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


def estimates(rig, gxx, gyx, gyy, gyy_full, blocks, n_e):
    """Every array that follows from the spectra, NaN where it cannot be known."""
    lines, p, q = gyx.shape
    unknown = complex(np.nan, np.nan)
    h = np.full((lines, p, q), unknown)
    g2 = np.full((lines, p), np.nan)
    error = np.full((lines, p, q), np.nan)
    condition = np.full(lines, np.nan)
    condition_raw = np.full(lines, np.nan)
    coherence = np.full((lines, q), np.nan)
    principal = np.full((lines, q), np.nan)

    if blocks > 0:
        principal = np.linalg.eigvalsh(gxx)[:, ::-1]
    ok = invertible_lines(gxx) if blocks >= q else np.zeros(lines, bool)
    if ok.any():
        condition[ok] = np.linalg.cond(unit_diagonal(gxx[ok]))
        condition_raw[ok] = np.linalg.cond(gxx[ok])
        coherence[ok] = force_coherence(gxx[ok])
        if rig.estimator == "h1":
            h[ok] = h1(gxx[ok], gyx[ok])
        elif rig.estimator == "h2":
            h[ok] = h2(gyx[ok], gyy_full[ok])
        else:
            h[ok] = hv(gxx[ok], gyx[ok], gyy[ok])
        if blocks > q:
            g2[ok] = multiple_coherence(gxx[ok], gyx[ok], gyy[ok])
        if n_e > q:
            inverse = np.einsum("lii->li", np.linalg.inv(gxx[ok])).real
            variance = (gyy[ok] * (1 - g2[ok]))[:, :, None] * inverse[:, None, :] / (n_e - q)
            with np.errstate(invalid="ignore"):
                error[ok] = np.sqrt(0.5 * variance) / np.abs(h[ok])
    return {
        "H": h, "multiple_coherence": g2, "random_error": error, "force_condition": condition,
        "force_condition_raw": condition_raw, "force_coherence": coherence,
        "principal_forces": principal, "reciprocity_error": reciprocity_error(rig, h, gyy),
    }


def full_response_matrix(rig, values, starts, weights):
    """E[y_o y_n*], shape (L, p, p): Gxx of a rig whose forces are the responses."""
    q = len(rig.forces)
    swapped = rigfile.Rig(**{**rig.__dict__, "forces": rig.responses, "responses": rig.forces})
    return spectra(swapped, np.roll(values, -q, axis=1), starts, weights)[0]


def compute(rig_path, recording_path):
    """Arrays for expected.npz and facts for expected.json, from the two files alone."""
    rig = rigfile.read(rig_path)
    rate_hz, digital = wavefile.read(recording_path)
    assert rate_hz == rig.rate_hz, "the recording's rate is not the rig file's"
    assert max(c.index for c in rig.channels()) < digital.shape[1]
    values = np.stack([c.engineering(digital[:, c.index]) for c in rig.channels()], axis=1)

    starts, counts = select_blocks(rig, digital)
    weights = block_weights(rig, len(starts))
    gxx, gyx, gyy = spectra(rig, values, starts, weights)
    if rig.averaging == "linear" and counts["blocks_set_aside"] == 0:
        check_with_scipy(rig, values, gxx, gyx, gyy)
    gyy_full = full_response_matrix(rig, values, starts, weights) if rig.estimator == "h2" else None
    n_e = effective_averages(window(rig.window, rig.block), starts, weights)

    arrays = {"frequency": np.arange(rig.lines()) * rig.spacing_hz(),
              "Gxx": gxx, "Gyx": gyx, "Gyy": gyy}
    arrays.update(estimates(rig, gxx, gyx, gyy, gyy_full, len(starts), n_e))
    arrays["reciprocity_pairs"] = np.array(rig.reciprocity_pairs(), np.int64).reshape(-1, 2)
    arrays["effective_averages"] = np.float64(n_e)
    arrays = {name: np.array(array, order="C") for name, array in arrays.items()}
    assert {a.dtype.str for a in arrays.values()} <= {"<c16", "<f8", "<i8"}
    return arrays, facts(rig, digital, starts, counts, n_e)


def facts(rig, digital, starts, counts, n_e):
    """The part of summary.json that the reference knows, under the same names."""
    return {
        "source": {"kind": "recording", "rate_hz": rig.rate_hz, "channels": digital.shape[1],
                   "frames": len(digital)},
        "analysis": {"rate_hz": rig.rate_hz / rig.decimation, "decimation": rig.decimation,
                     "block": rig.block, "hop": rig.hop, "line_spacing_hz": rig.spacing_hz(),
                     "window": rig.window, "estimator": rig.estimator, "excitation": "random"},
        **counts,
        "block_starts": [start * rig.decimation for start in starts],
        "effective_averages": float(n_e),
    }


def store(folder):
    """Writes expected.npz and expected.json beside the folder's rig.toml and run.wav."""
    arrays, summary = compute(os.path.join(folder, "rig.toml"), os.path.join(folder, "run.wav"))
    np.savez_compressed(os.path.join(folder, "expected.npz"), **arrays)
    with open(os.path.join(folder, "expected.json"), "w", encoding="utf-8") as file:
        file.write(json.dumps(summary, indent=1, allow_nan=False) + "\n")
    return arrays, summary


def check_values():
    """Published and hand-derived values that the functions above must give; stops the run if not.

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
    assert rigfile.resolve(48000, 1000, 0.5, 0.5) == (18, 5400, 2700)

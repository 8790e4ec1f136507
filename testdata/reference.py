"""The reference results: what a rig file and a recording must give, by NumPy and SciPy alone.

Written to be plainly right rather than fast. Arrays have the names and shapes of estimates.npz.
"""

import json
import os

import numpy as np

import averages
import burst
import chance
import drift
import estimates
import periodic
import rigfile
import wavefile


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


def halves(rig, transformed, n_e):
    """The averages of the first and of the other blocks, each block alike."""
    blocks = len(transformed)
    first = drift.first_part(blocks)
    return [averages.average(rig, part, np.ones(len(part)), n_e * len(part) / max(blocks, 1))
            for part in (transformed[:first], transformed[first:])]


def of_averaged_blocks(rig, values, starts, confidence):
    """Arrays of random and burst excitation, and the average itself."""
    weights = averages.block_weights(rig, len(starts))
    n_e = averages.effective_averages(averages.window(rig.window, rig.block), starts, weights)
    transformed = averages.transforms(rig, values, starts)
    averaged = averages.average(rig, transformed, weights, n_e)
    arrays = estimates.estimates(rig, averaged, confidence)
    arrays["drift"] = drift.drift(rig, arrays["H"], *halves(rig, transformed, n_e))
    if rig.excitation == "burst":
        arrays["decay_db"] = burst.decay_db(rig, values, starts)
    return averaged, arrays


def of_averaged_periods(rig, values, starts, confidence):
    """The same with periodic excitation, starts being those of the kept periods."""
    assert rig.averaging == "linear" and starts
    q = len(rig.forces)
    periods = periodic.period_transforms(rig, values, starts)
    transformed = periodic.averaged_periods(rig, values, starts)
    averages.must_agree("averaged periods", transformed, periods.mean(axis=1),
                        averages.SPECTRA_AGREE)
    n_e = float(len(starts))
    averaged = averages.average(rig, transformed, np.ones(len(starts)), n_e)
    noise = periodic.noise_densities(rig, periods)
    different = periodic.different_periods(rig, periods)
    cleared = different[:, :q, :q], different[:, q:, :q]
    periodic.check_cleared(rig, cleared, averaged, noise)

    arrays = estimates.estimates(rig, averaged, confidence, cleared)
    variance = periodic.h_variance(rig, arrays["H"], averaged, noise, cleared[0])
    arrays["random_error"] = estimates.relative_error(variance, arrays["H"])
    arrays["confidence_radius"] = np.sqrt(confidence.radius_squared(variance, q, n_e))
    arrays["drift"] = drift.drift(rig, arrays["H"], *halves(rig, transformed, n_e))
    diagonal = np.einsum("lii->li", noise).real
    arrays["noise_force"], arrays["noise_response"] = diagonal[:, :q], diagonal[:, q:]
    arrays["distortion_response"], arrays["distortion_chance"] = periodic.distortion(
        rig, arrays["H"], averaged, noise, transformed, periods)
    return averaged, arrays


def read(rig_path, recording_path):
    """The rig, the digital samples, and engineering values, (frames, q + p), forces first."""
    rig = rigfile.read(rig_path)
    rate_hz, digital = wavefile.read(recording_path)
    assert rate_hz == rig.rate_hz, "the recording's rate is not the rig file's"
    assert max(c.index for c in rig.channels()) < digital.shape[1]
    values = np.stack([c.engineering(digital[:, c.index]) for c in rig.channels()], axis=1)
    return rig, digital, values


def compute(rig_path, recording_path, confidence):
    """Arrays and facts of random excitation, from the two files alone."""
    rig, digital, values = read(rig_path, recording_path)
    assert rig.excitation == "random", "the starts of other blocks have to be given"
    starts, counts = select_blocks(rig, digital)
    averaged, arrays = of_averaged_blocks(rig, values, starts, confidence)
    if rig.averaging == "linear" and counts["blocks_set_aside"] == 0:
        averages.check_with_scipy(rig, values, averaged)
    return complete(rig, averaged, arrays), facts(rig, digital, starts, counts, averaged.n_e,
                                                  confidence)


def compute_at(rig_path, recording_path, starts, confidence):
    """The same of blocks that were found: starts are their first source frames, in order."""
    rig, digital, values = read(rig_path, recording_path)
    length = rig.block * rig.periodic.get("keep_periods", 1)
    for start, following in zip(starts, starts[1:] + [len(digital)]):
        assert 0 <= start and start + length <= following, "blocks overlap, or leave the recording"
    of_blocks = of_averaged_periods if rig.excitation == "periodic" else of_averaged_blocks
    averaged, arrays = of_blocks(rig, values, starts, confidence)
    return complete(rig, averaged, arrays), facts(
        rig, digital, starts, {"blocks_averaged": len(starts)}, averaged.n_e, confidence)


def complete(rig, averaged, arrays):
    """All arrays of estimates.npz, in its types."""
    arrays = {"frequency": np.arange(rig.lines()) * rig.spacing_hz(), "Gxx": averaged.gxx,
              "Gyx": averaged.gyx, "Gyy": averaged.gyy, **arrays,
              "reciprocity_pairs": np.array(rig.reciprocity_pairs(), np.int64).reshape(-1, 2),
              "effective_averages": np.float64(averaged.n_e)}
    arrays = {name: np.array(array, order="C") for name, array in arrays.items()}
    assert {a.dtype.str for a in arrays.values()} <= {"<c16", "<f8", "<i8"}
    return arrays


def facts(rig, digital, starts, counts, n_e, confidence):
    """The part of summary.json that the reference knows, under the same names."""
    return {
        "source": {"kind": "recording", "rate_hz": rig.rate_hz, "channels": digital.shape[1],
                   "frames": len(digital)},
        "analysis": {"rate_hz": rig.rate_hz / rig.decimation, "decimation": rig.decimation,
                     "block": rig.block, "hop": rig.hop or None,
                     "line_spacing_hz": rig.spacing_hz(), "window": rig.window,
                     "estimator": rig.estimator, "excitation": rig.excitation},
        **counts,
        "block_starts": [start * rig.decimation for start in starts],
        "effective_averages": float(n_e),
        "confidence": confidence.facts(),
        "chance_level": chance.chance_level(len(rig.forces), n_e),
    }


def store(folder, arrays, summary):
    """Writes expected.npz and expected.json into a folder."""
    np.savez_compressed(os.path.join(folder, "expected.npz"), **arrays)
    with open(os.path.join(folder, "expected.json"), "w", encoding="utf-8") as file:
        file.write(json.dumps(summary, indent=1, allow_nan=False) + "\n")


def check_values():
    """Values known from elsewhere that the functions must give; stops the run if not."""
    averages.check_values()
    chance.check_values()
    drift.check_values()
    assert rigfile.resolve(48000, 1000, 0.5, 0.5) == (18, 5400, 2700)
    assert rigfile.resolve_periodic(48000, 1000, 65536) == (16, 4096)

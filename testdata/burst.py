"""Burst random excitation: whether every channel has died out before its block ends."""

import numpy as np
from scipy import signal

SEGMENTS = 20


def above(rig, block):
    """The block without what lies below min_frequency."""
    if rig.min_frequency_hz == 0:
        return block
    sections = signal.butter(4, rig.min_frequency_hz, "highpass", fs=rig.rate_hz, output="sos")
    return signal.sosfilt(sections, block, axis=0)


def decay_db(rig, values, starts):
    """(q + p) dB: the last of SEGMENTS equal parts of the block against the one with most.

    Above min_frequency, each block filtered by itself from rest (Butterworth, fourth order).
    Mean square about the channel's offset, summed over the blocks; the offset is the mean of the
    last segments of all blocks together, where the signal is gone but an offset is not. NaN for
    channels that never differ from their offset, and with fewer than two blocks, where what is left
    can't be told from an offset.
    """
    n = rig.block
    power = np.zeros((SEGMENTS, values.shape[1]))
    if len(starts) < 2:
        return np.full(values.shape[1], np.nan)
    blocks = [above(rig, values[s:s + n]) for s in starts]
    last = [block[(SEGMENTS - 1) * n // SEGMENTS:] for block in blocks]
    offset = np.concatenate(last).mean(axis=0)
    for block in blocks:
        block = block - offset
        for j in range(SEGMENTS):
            power[j] += (block[j * n // SEGMENTS:(j + 1) * n // SEGMENTS] ** 2).mean(axis=0)
    with np.errstate(divide="ignore", invalid="ignore"):
        return 10 * np.log10(power[-1] / power.max(axis=0))

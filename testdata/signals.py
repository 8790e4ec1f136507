"""Invented test rigs: forces, and accelerations of a made-up structure. For tests alone.

Nothing here was measured. The structure hangs freely: it moves as a rigid body and in a sum of
modes, each one second-order section, so it is reciprocal and its driving points take up power.
Everything follows from a seed.
RandomState is used because its stream is promised never to change.
"""

import numpy as np
from scipy.signal import lfilter

# Modes as (share of max_frequency, damping ratio), and levels. Invented.
MODES = [(0.13, 0.05), (0.29, 0.04), (0.45, 0.03), (0.66, 0.03), (0.88, 0.02)]
RIGID = 2.0                 # gain of the rigid body, where a mode peaks at 1/(2 * damping ratio)
FORCE_RMS_N = 20.0
FORCE_LEVELS = [1.0, 0.7, 1.4, 0.9]
RESPONSE_RMS = 5.0          # m/s², mean over the responses
RESPONSE_NOISE = 0.2        # m/s², white, independent in each response
UNUSED_RMS = 0.15           # of full scale, on channels that no force or response uses

# One second-order section (b, a) per force: the invented colour of each shaker.
SHAKERS = [
    ([1.0, 0.3, 0.0], [1.0, -0.5, 0.2]),
    ([1.0, -0.4, 0.1], [1.0, -0.2, 0.1]),
    ([1.0, 0.0, 0.5], [1.0, -0.3, 0.3]),
    ([1.0, 0.6, 0.2], [1.0, 0.1, 0.2]),
]
SETTLE = 2000               # frames let go before the recording starts


def forces_n(random, frames, q, mix):
    """Forces in N, shape (frames, q). mix, shape (q, q), makes them depend on each other."""
    white = random.standard_normal((frames + SETTLE, q))
    shaped = np.stack([lfilter(*SHAKERS[i], white[:, i]) for i in range(q)], axis=1)
    shaped /= shaped.std(axis=0)
    if mix is not None:
        shaped = shaped @ np.asarray(mix).T
        shaped /= shaped.std(axis=0)
    return shaped * FORCE_RMS_N * np.asarray(FORCE_LEVELS[:q])


def accelerations(random, rig, forces, modes=MODES, noise=RESPONSE_NOISE):
    """Accelerations in m/s² in the direction of each transducer, shape (frames, p).

    modes are given like MODES, noise in m/s².
    """
    places = list(dict.fromkeys(c.place() for c in rig.channels()))
    shapes = random.uniform(0.4, 1.0, (len(places), 1 + len(modes)))
    shapes[:, 1:] *= random.choice([-1.0, 1.0], (len(places), len(modes)))
    row = {place: shapes[i] for i, place in enumerate(places)}
    force_shapes = np.stack([c.sign() * row[c.place()] for c in rig.forces])
    response_shapes = np.stack([c.sign() * row[c.place()] for c in rig.responses])

    total = RIGID * forces @ np.outer(force_shapes[:, 0], response_shapes[:, 0])
    for mode, (share, damping) in enumerate(modes, start=1):
        angle = 2 * np.pi * share * rig.max_frequency_hz / rig.rate_hz
        radius = np.exp(-damping * angle)
        a = [1.0, -2 * radius * np.cos(angle), radius ** 2]
        modal = lfilter([1.0, -2.0, 1.0], a, forces @ force_shapes[:, mode])
        total += np.outer(modal, response_shapes[:, mode])
    total *= RESPONSE_RMS / np.sqrt(np.mean(total ** 2))
    return total + noise * random.standard_normal(total.shape)


def digital(rig, seed, frames, file_channels, mix=None):
    """What the recorder would see, shape (frames, file_channels), full scale 1."""
    random = np.random.RandomState(seed)
    forces = forces_n(random, frames, len(rig.forces), mix)
    responses = accelerations(random, rig, forces)
    return recorded(random, rig, forces[SETTLE:], responses[SETTLE:], file_channels)


def recorded(random, rig, forces, responses, file_channels):
    """Digital samples of N and m/s² on their channels; the unused ones carry noise."""
    result = UNUSED_RMS * random.standard_normal((len(forces), file_channels))
    for channel, column in zip(rig.channels(), np.hstack([forces, responses]).T):
        result[:, channel.index] = channel.digital(column)
    return result

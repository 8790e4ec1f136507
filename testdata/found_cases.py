"""Cases whose blocks the program has to find by itself: bursts, and periodic random excitation.

Invented, for tests alone. What is stored of each is the rig file, the recording and the truth: for
every block that there is to find, the earliest and the latest source frame at which it may start.
The structure is damped so much that it rings out within a block.
"""

from dataclasses import dataclass, field
from typing import Callable, Optional

import numpy as np

import signals
from cases import force, response, silence

FOLDER = "found"            # they lie in, among the other cases

# Heavily damped modes, like signals.MODES.
MODES = [(0.15, 0.20), (0.40, 0.12), (0.70, 0.08)]
RESPONSE_NOISE = 0.1       # m/s², where the responses have some 5
FORCE_NOISE = 0.01          # of a force's own level: 40 dB down
RATE_HZ = 1000
EARLY = 16                  # frames by which a start may come early where no trigger fixes it


@dataclass
class FoundCase:
    name: str
    purpose: str            # one line, at the top of the rig file
    seed: int
    rig: dict               # the rig file's tables
    make: Callable          # (random, rig) -> forces, responses, marks
    expect: Callable        # (rig, values, marks) -> [[earliest, latest], ...]
    settings: dict = field(default_factory=dict)  # for make and expect
    edit: Optional[Callable] = None  # changes the digital samples in place


def tables(title, excitation, settings, analysis):
    """The rig file's tables: two forces, the first of them reversed, and three responses."""
    return {"title": title, "source": dict(rate=RATE_HZ, full_scale=10.0),
            "analysis": dict(max_frequency=200.0, **analysis, excitation=excitation),
            excitation: settings, "watch": {"on_fault": "carry-on"},
            "force": [force(1, "S1", "1", "+z", sensitivity=-0.05), force(2, "S2", "2", "+z")],
            "response": [response(3, "A1", "1", "+z"), response(4, "A2", "2", "+z"),
                         response(5, "A3", "3", "+z")]}


def every_found_case():
    """All of them in the order of README.md."""
    yield from bursts()
    yield from periodic_random()


def bursts():
    """Bursts by trigger and by period, exactly quiet between them and not."""
    by_trigger = tables("Bursts by trigger", "burst",
                        dict(trigger_force="S1", trigger_level=0.1, pre_trigger_s=0.02),
                        dict(line_spacing=2.0))
    for name, purpose, seed, count, noise, edit in (
            ("burst_trigger", "nothing at all between them", 902, 14, 0.0, None),
            ("burst_trigger_noise", "noise 40 dB down between them", 901, 14, FORCE_NOISE, None),
            ("burst_silent", "a response whose samples are all zero", 909, 8, 0.0, silence(4))):
        yield FoundCase(name, "bursts by trigger with pre-trigger, " + purpose, seed, by_trigger,
                        bursts_at_odd_times, expect_triggers,
                        dict(bursts=count, length=200, noise=noise), edit)
    yield FoundCase(
        # Taken for 350 frames, 350.4 would be off by more than EARLY after 48 bursts.
        "burst_period", "bursts by a period of broken frames, one of them at the start", 904,
        tables("Bursts by period", "burst", dict(period_s=0.3504), dict(line_spacing=3.2)),
        bursts_by_period, expect_bursts, dict(first=-60.0, bursts=49, length=110, noise=0.0))
    yield FoundCase(
        "burst_period_noise", "bursts by period, noise 40 dB down between them", 903,
        tables("Bursts by period", "burst", dict(period_s=0.7303),
               dict(line_spacing=1.5, min_frequency=15.0)),
        bursts_by_period, expect_bursts,
        dict(first=123.4, bursts=15, length=300, noise=FORCE_NOISE))


def periodic_random():
    """Random blocks of just enough periods, of more, and too few random blocks."""
    for name, purpose, seed, period, keep, lengths, edit in (
            ("periodic_two", "2 periods kept, random blocks without a period to spare", 905,
             400, 2, 7 * [5], None),
            ("periodic_four", "4 periods kept, random blocks without a period to spare", 906,
             254, 4, 8 * [7], None),
            # A random block may be too short, and need not be a whole number of periods.
            ("periodic_two_of_more", "2 periods kept of random blocks longer than that", 907,
             250, 2, [8, 8, 4, 8.4, 8, 8, 8, 8], None),
            ("periodic_four_of_more", "4 periods kept of random blocks longer than that", 908,
             250, 4, 7 * [10], None),
            ("periodic_few", "M = q = 2: H and noise, no coherence, no distortion", 910,
             250, 2, [6, 6], None),
            ("periodic_silent", "M = 3, a driving-point response whose samples are all zero", 911,
             250, 3, 3 * [7], silence(3))):
        yield FoundCase(
            name, purpose, seed,
            tables("Periodic random", "periodic",
                   dict(period=period, settle_periods=3, keep_periods=keep), {}),
            random_blocks, expect_kept_periods,
            # Enough periods of a random block whose start was not seen, or too few.
            dict(lengths=lengths, running=5.4 if keep == 2 else 2.4, noise=FORCE_NOISE), edit)


def gated(random, rig, firsts, length, frames):
    """Forces in N that are exactly 0 but for bursts of length frames from the given ones on."""
    forces = signals.forces_n(random, frames, len(rig.forces), None)[signals.SETTLE:]
    on = np.zeros(frames, bool)
    for first in firsts:
        on[max(first, 0):first + length] = True
    forces[~on] = 0
    return forces


def answered(random, rig, forces, noise):
    """Forces as measured, with noise, and the responses to the true ones."""
    responses = signals.accelerations(random, rig, forces, MODES, RESPONSE_NOISE)
    level = noise * signals.FORCE_RMS_N * np.asarray(signals.FORCE_LEVELS[:forces.shape[1]])
    return forces + level * random.standard_normal(forces.shape), responses


def bursts_at_odd_times(random, rig, bursts, length, noise):
    """Bursts of equal peak in S1, each of which starts below the trigger level, for two frames.

    The last one does not fit into the recording.
    """
    gaps = random.randint(rig.block + 60, rig.block + 260, bursts)
    firsts = 300 + np.cumsum(gaps) - gaps[0]
    forces = gated(random, rig, firsts, length, firsts[-1] + rig.block // 2)
    peak = np.max(np.abs(forces[:, 0]))
    for first in firsts:
        burst = forces[first:first + length, 0]
        burst *= peak / np.max(np.abs(burst))
        burst[:3] = peak * np.array([0.02, -0.035, 0.3]) * random.choice([-1, 1])
    return *answered(random, rig, forces, noise), firsts


def expect_triggers(rig, values, firsts, bursts, length, noise):
    """The first frame above the level times the peak, less the pre-trigger, wherever a block fits.

    The same with half and with one and a half times the level, so that the peak may be taken of
    any part of a burst that holds its peak.
    """
    lead = round(rig.burst["pre_trigger_s"] * rig.rate_hz)
    size = np.abs(values[:, [f.name for f in rig.forces].index(rig.burst["trigger_force"])])
    starts = []
    for share in (0.5, 1.0, 1.5):
        level = share * rig.burst["trigger_level"] * np.max(size)
        starts.append([])
        frame = 0
        while np.any(size[frame:] > level):
            frame += int(np.argmax(size[frame:] > level))
            starts[-1].append(frame - lead)
            frame += rig.block - lead
    assert starts[0] == starts[1] == starts[2] == [first + 2 - lead for first in firsts]
    fitting = [start for start in starts[1] if start + rig.block <= len(values)]
    assert len(fitting) == bursts - 1
    return [[start, start] for start in fitting]


def bursts_by_period(random, rig, first, bursts, length, noise):
    """Bursts a period apart, in frames that are no whole number, the first of them at first."""
    exact = first + rig.burst["period_s"] * rig.rate_hz * np.arange(bursts)
    firsts = np.ceil(exact).astype(int)
    forces = gated(random, rig, firsts, length, firsts[-1] + rig.block - 100)
    return *answered(random, rig, forces, noise), firsts


def expect_bursts(rig, values, firsts, first, bursts, length, noise):
    """Up to EARLY frames before the burst's first one, wherever the start was seen and a block fits."""
    return [[int(f) - EARLY, int(f)] for f in firsts if EARLY <= f <= len(values) - rig.block]


def random_blocks(random, rig, lengths, running, noise):
    """Random blocks of so many periods each, one after the other. Before them is what is left of
    one that was running, in periods; behind them one that ends with the recording, too early."""
    period, q = rig.periodic["period"], len(rig.forces)
    wanted = rig.periodic["settle_periods"] + rig.periodic["keep_periods"]
    before = 4 * period          # let go before the recording starts, within the first block
    lengths = [4 + running] + lengths + [wanted - 0.5]
    changes = np.rint(np.cumsum([0] + lengths) * period).astype(int)
    forces = np.zeros((changes[-1], q))
    for first, end in zip(changes, changes[1:]):
        one = random.standard_normal((period, q))
        forces[first:end] = one[(np.arange(end - first)) % period]
    forces *= signals.FORCE_RMS_N * np.asarray(signals.FORCE_LEVELS[:q])
    measured, responses = answered(random, rig, forces, noise)
    # The last response bends a little: distortion, which repeats with the period.
    responses[:, -1] += 0.02 * (responses[:, -1] ** 2 - np.mean(responses[:, -1] ** 2))
    return measured[before:], responses[before:], (changes[1:] - before).tolist()


def expect_kept_periods(rig, values, changes, lengths, running, noise):
    """settle_periods behind each change, up to EARLY frames before that, where there are enough."""
    period, settle = rig.periodic["period"], rig.periodic["settle_periods"]
    keep = rig.periodic["keep_periods"]
    return [[change + settle * period - EARLY, change + settle * period]
            for change, following in zip(changes, changes[1:])
            if following - change >= (settle + keep) * period]

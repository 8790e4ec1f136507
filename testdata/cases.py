"""The reference cases: rig files, recordings and what was done to them. Invented, for tests alone.

Each case says how many blocks its recording holds and, worked out by hand, which of them must be
averaged, so that the script that computes them is checked too. Every case sets on_fault to
carry-on: then only gaps and overranges keep a block out, whatever the watch says.
"""

from dataclasses import dataclass, field
from typing import Callable, Optional

import numpy as np

import chance


@dataclass
class Case:
    name: str
    purpose: str            # one line, at the top of the rig file
    seed: int
    rig: dict               # the rig file's tables
    blocks: int             # whole blocks in the recording
    tail: int = 37          # frames behind the last whole block, fewer than a hop
    encoding: str = "pcm16"
    file_channels: int = 0  # 0: no more than are used
    mix: Optional[list] = None
    edit: Optional[Callable] = None  # changes the digital samples in place
    aside: list = field(default_factory=list)  # blocks not averaged, worked out by hand
    gaps: int = 0
    overranges: int = 0
    driving_points: Optional[list] = None  # checked where the case is about them
    confidence: chance.Confidence = chance.Confidence()  # as asked for on the command line


def rig(title, source, analysis, force, response):
    """A rig file's tables, with the settings that every case shares."""
    return {"title": title, "source": source, "analysis": analysis,
            "watch": {"on_fault": "carry-on"}, "force": force, "response": response}


def force(channel, name, point, axis, sensitivity=0.05, **more):
    return dict(channel=channel, name=name, point=point, axis=axis, sensitivity=sensitivity, **more)


def response(channel, name, point, axis, sensitivity=0.1, **more):
    return dict(channel=channel, name=name, point=point, axis=axis, sensitivity=sensitivity, **more)


def two_by_two():
    """Two forces on channels 1 and 2, two driving-point responses on 3 and 4."""
    return dict(force=[force(1, "S1", "1", "+z"), force(2, "S2", "2", "+z")],
                response=[response(3, "A1", "1", "+z"), response(4, "A2", "2", "+z")])


def three_by_two():
    """Three forces on channels 1 to 3, two driving-point responses on 4 and 5."""
    return dict(force=[force(i, f"S{i}", str(i), "+z") for i in (1, 2, 3)],
                response=[response(4, "A1", "1", "+z"), response(5, "A2", "2", "+z")])


# Small analyses: 1000 frames/s, block 500, 101 lines to 200 Hz. 1000/2 < 2.56 * 200: not decimated.
SMALL = dict(max_frequency=200.0, line_spacing=2.0)
TEN_VOLTS = dict(rate=1000, full_scale=10.0)


def windows_and_blocks():
    """Every window, overlaps from 0 to 75 %, one to four forces, even and odd blocks."""
    yield Case(
        "two_forces_hann", "two forces, six responses, Hann, 50 % overlap", 1000,
        rig("Two forces, six responses", dict(rate=4096, full_scale=10.0, channels=8),
            dict(max_frequency=820.0, line_spacing=1.0, window="hann", overlap=0.5),
            [force(1, "S1", "1", "+z"), force(2, "S2", "5", "+z")],
            [response(3, "A1z", "1", "+z"), response(4, "A2z", "2", "+z"),
             response(5, "A3z", "3", "+z"), response(6, "A4z", "4", "+z"),
             response(7, "A5z", "5", "+z"), response(8, "A6z", "6", "+z")]),
        blocks=12, tail=777, driving_points=[0, 4])
    yield Case(
        "three_forces", "three forces that depend on each other, block 4800, 75 % overlap", 102,
        rig("Three forces, partly correlated", dict(rate=4800, full_scale=10.0),
            dict(max_frequency=940.0, line_spacing=1.0, window="hann", overlap=0.75),
            [force(1, "S1", "1", "+z"), force(2, "S2", "2", "+y"), force(3, "S3", "3", "+x")],
            [response(4, "A1z", "1", "+z"), response(5, "A2y", "2", "+y"),
             response(6, "A3x", "3", "+x")]),
        blocks=18, tail=501, mix=[[1, 0, 0], [0.5, 1, 0], [-0.3, 0.4, 1]],
        driving_points=[0, 1, 2])
    yield Case(
        # 4000/1.2 = 3333.3; the next 2^a 3^b 5^c is 3375 = 3^3 5^3.
        "four_forces", "four forces, odd block 3375, one force without a driving point", 103,
        rig("Four forces, odd block", dict(rate=4000, full_scale=10.0),
            dict(max_frequency=782.0, line_spacing=1.2, window="hann", overlap=0.5),
            [force(i, f"S{i}", str(i), "+z") for i in (1, 2, 3, 4)],
            [response(5, "A1z", "1", "+z"), response(6, "A2z", "2", "+z"),
             response(7, "A3z", "3", "+z"), response(8, "A9z", "9", "+z")]),
        blocks=14, tail=200, driving_points=[0, 1, 2, None])
    yield Case(
        # The spacing is 10/3 written to ten digits: 1000/3.3333333333 is above 300 by 1e-11 of
        # it, which counts as an exact hit, and line 60 lies on max_frequency.
        "rectangular", "rectangular window without overlap, block 300 hit to 1e-11", 104,
        rig("Rectangular window", TEN_VOLTS,
            dict(max_frequency=200.0, line_spacing=3.3333333333, window="rectangular",
                 overlap=0.0), **two_by_two()),
        blocks=16)
    yield Case(
        "flattop", "flat-top window, 50 % overlap", 105,
        rig("Flat-top window", dict(rate=1024, full_scale=10.0),
            dict(max_frequency=210.0, line_spacing=2.0, window="flattop", overlap=0.5),
            **two_by_two()),
        blocks=16)
    yield Case(
        "one_force", "one force, odd block 625, 60 % overlap, full scale by default", 106,
        rig("One force", dict(rate=2500),
            dict(max_frequency=500.0, line_spacing=4.0, window="hann", overlap=0.6),
            [force(1, "S1", "1", "+z", sensitivity=0.008)],
            [response(2, "A1z", "1", "+z", sensitivity=0.02),
             response(3, "A2z", "2", "+z", sensitivity=0.02)]),
        blocks=15, driving_points=[0])


def channel_tables():
    """What a channel table can hold, and channels that carry nothing."""
    yield Case(
        "scrambled",
        "scrambled and unused channels, signs, g, full scale per channel, driving points", 201,
        rig("Scrambled channels", dict(rate=2000, full_scale=10.0),
            dict(max_frequency=400.0, min_frequency=20.0, line_spacing=2.0),
            [force(9, "F at 12", "12", "-z", sensitivity=-0.06),
             force(2, "F at 7", "7", "+x", sensitivity=0.03, full_scale=5.0, unit="N"),
             force(10, "F at 30", "30", "-y", sensitivity=0.04),
             force(5, "F at 41", "41", "+x", sensitivity=-0.05)],
            [response(4, "A7y", "7", "+y"),
             response(7, "A12z", "12", "+z", unit="g", sensitivity=1.02),
             response(1, "A12z second", "12", "-z", sensitivity=-0.11),
             response(11, "A7x", "7", "+x", unit="g", sensitivity=-0.51, full_scale=4.0),
             response(3, "A30y", "30", "-y", unit="m/s^2", sensitivity=0.09)]),
        blocks=14, file_channels=13, driving_points=[1, 3, 4, None])
    yield Case(
        "silent_response", "a driving-point response whose samples are all zero", 202,
        rig("Silent response", TEN_VOLTS, SMALL,
            [force(1, "S1", "1", "+z"), force(2, "S2", "2", "+z"), force(3, "S3", "3", "+z")],
            [response(4, "A1", "1", "+z"), response(5, "A2", "2", "+z"),
             response(6, "A3", "3", "+z"), response(7, "A4", "4", "+z")]),
        blocks=12, edit=silence(4))
    yield Case(
        "silent_force", "a force whose samples are all zero", 203,
        rig("Silent force", TEN_VOLTS, SMALL, **two_by_two()), blocks=12, edit=silence(1))
    yield Case(
        "locked_forces", "two forces with the same samples: Gxx has no inverse", 204,
        rig("Locked forces", TEN_VOLTS, SMALL,
            [force(1, "S1", "1", "+z"), force(2, "S2", "2", "+z", sensitivity=-0.03)],
            [response(3, "A1", "1", "+z"), response(4, "A2", "2", "+z")]),
        blocks=12, edit=copy(0, 1))


def silence(column):
    def edit(digital):
        digital[:, column] = 0
    return edit


def copy(source, target):
    def edit(digital):
        digital[:, target] = digital[:, source]
    return edit


def gaps_and_overranges():
    """Blocks set aside. Block k holds frames k*hop to k*hop + 499, hop 250 at 50 %, 500 at 0 %."""
    yield Case(
        "gaps_and_overranges", "float32 with lost frames and a limit below full scale", 301,
        rig("Gaps and overranges", dict(rate=1000, full_scale=10.0, limit=6.0, channels=6),
            SMALL, **two_by_two()),
        blocks=24, tail=100, encoding="float32", file_channels=6, edit=edit_gaps_and_overranges,
        aside=[3, 4, 7, 8, 10, 11, 12, 17, 18, 20, 21], gaps=4, overranges=4)
    yield Case(
        "gaps_at_the_ends", "lost frames first, last and at the seams of blocks", 302,
        rig("Gaps at the ends", dict(rate=1000, full_scale=10.0),
            dict(**SMALL, window="rectangular", overlap=0.0), **two_by_two()),
        blocks=12, tail=60, encoding="float32", edit=edit_gaps_at_the_ends,
        aside=[0, 4, 6, 11], gaps=5)
    yield Case(
        "overranges", "16 bit: the last step below full scale counts, the one before does not", 1000,
        rig("Overranges", TEN_VOLTS, SMALL,
            [force(1, "S1", "1", "+z"), force(2, "S2", "2", "+z")],
            [response(3, "A1", "1", "+z"),
             response(4, "A2", "2", "+z", full_scale=5.0, sensitivity=0.05),
             response(5, "A3", "3", "+z", limit=4.0, sensitivity=0.03)]),
        blocks=16, file_channels=6, edit=edit_overranges,
        aside=[1, 2, 5, 6, 8, 9, 11, 12], overranges=8)
    yield Case(
        "no_block", "every block reaches the limit: nothing is averaged", 304,
        rig("Nothing averaged", TEN_VOLTS, dict(**SMALL, window="rectangular", overlap=0.0),
            **two_by_two()),
        blocks=6, edit=edit_no_block, aside=[0, 1, 2, 3, 4, 5], overranges=6)


def edit_gaps_and_overranges(digital):
    digital[1020:1030] = np.nan     # one stretch, every channel: blocks 3 and 4
    digital[2000, 3] = -np.inf      # one channel, first frame of block 8: blocks 7 and 8
    digital[2999, 1] = np.nan       # last frame of block 10: blocks 10 and 11
    digital[3001] = np.nan          # one good frame after the last: blocks 11 and 12
    digital[4100, 4] = np.nan       # an unused channel: nothing
    digital[4101, 5] = np.inf
    digital[4600:4605, 0] = 0.6     # at the limit, 6 V of 10: blocks 17 and 18
    digital[5000, 5] = 1.0          # an unused channel: nothing
    digital[5499, 2] = -0.61        # last frame of block 20: blocks 20 and 21
    digital[5900, 0] = 0.5999       # just below the limit: nothing


def edit_gaps_at_the_ends(digital):
    digital[0:3, 0] = np.nan        # block 0
    digital[2000, 1] = np.nan       # first frame of block 4, not in block 3
    digital[3499, 2] = np.nan       # last frame of block 6, not in block 7
    digital[5999, 3] = np.nan       # last frame of block 11, the last block
    digital[6030:] = np.nan         # behind the last block, to the end of the file


def edit_overranges(digital):
    step = 2.0 ** -15
    digital[600, 0] = 1 - step      # the highest sample there is: blocks 1 and 2
    digital[1300, 1] = 1 - 2 * step  # one below it: nothing
    digital[1700, 2] = -1.0         # blocks 5 and 6
    digital[2000, 5] = 1.0          # an unused channel: nothing
    digital[2300, 3] = 1 - step     # full scale of its own, 5 V: blocks 8 and 9
    digital[3010, 4] = 0.41         # limit of its own, 4 V of 10: blocks 11 and 12
    digital[3700, 4] = -0.39        # below it: nothing


def edit_no_block(digital):
    digital[250::500, 0] = -1.0


def few_blocks():
    """Three forces and hardly enough blocks, or not enough."""
    settings = dict(**SMALL, window="hann")
    # The seeds are chosen for condition numbers below make_references.WORST_CONDITION.
    for name, purpose, seed, overlap, blocks in (
            ("fewer_blocks_than_forces", "M = 2 of q = 3: no H, no condition", 401, 0.5, 2),
            ("as_many_blocks_as_forces", "M = q = 3: H and condition, no coherence", 452, 0.5, 3),
            ("one_block_more", "M = q + 1 = 4, n_e > q: everything known", 472, 0.5, 4),
            # Five Hann blocks at 75 % are worth n_e = 2.89 independent ones.
            ("overlapped_blocks", "M = 5 > q = 3 >= n_e: coherence, no random error", 442, 0.75, 5),
    ):
        yield Case(name, purpose, seed,
                   rig("Few blocks", TEN_VOLTS, dict(**settings, overlap=overlap),
                       **three_by_two()), blocks=blocks)
    yield Case("one_block", "M = q = 1 with one force: H and condition, no coherence", 405,
               rig("One block", TEN_VOLTS, settings, [force(1, "S1", "1", "+z")],
                   [response(2, "A1", "1", "+z")]), blocks=1)


def encodings():
    """Recordings other than plain 16 bit and float32."""
    for encoding, purpose, seed, channels in (
            ("pcm24", "24 bit, extensible header, unknown chunks of odd size", 501, 5),
            ("pcm32", "32 bit integers", 502, 4),
            ("float64", "float64 with more than 24 significant bits", 503, 4),
            ("rf64", "RF64 with float32, a long unknown chunk behind the data", 1001, 4)):
        # 37 frames of tail make the count odd: with 15-byte frames the data needs a pad byte.
        yield Case(encoding, purpose, seed, rig("Encoding " + encoding, TEN_VOLTS, SMALL,
                                                **two_by_two()),
                   blocks=8, encoding=encoding, file_channels=channels)


def confidence_regions():
    """Another confidence level than the usual one, for the three forces of a response at once."""
    yield Case(
        "simultaneous", "confidence regions at 95 %, for all forces of a response at once", 607,
        rig("Simultaneous confidence regions", TEN_VOLTS, dict(**SMALL, min_frequency=11.0),
            **three_by_two()) | {"target": {"depth_db": 12.0}},
        blocks=17, confidence=chance.Confidence(0.95, True))


def averaging_and_estimators():
    """Exponential averaging, H2 and Hv."""
    yield Case(
        "exponential", "exponential averaging; ages count accepted blocks only", 601,
        rig("Exponential averaging", TEN_VOLTS,
            dict(**SMALL, averaging="exponential", memory=6), **two_by_two()),
        blocks=14, edit=edit_exponential, aside=[9, 10], overranges=2)
    yield Case(
        "estimator_h2", "H2, as many responses as forces", 602,
        rig("Estimator H2", TEN_VOLTS, dict(**SMALL, estimator="h2"), **two_by_two()), blocks=16)
    yield Case(
        "estimator_hv", "Hv, three responses", 603,
        rig("Estimator Hv", TEN_VOLTS, dict(**SMALL, estimator="hv"),
            [force(1, "S1", "1", "+z"), force(2, "S2", "2", "+z")],
            [response(3, "A1", "1", "+z"), response(4, "A2", "2", "+z"),
             response(5, "A3", "3", "+z")]), blocks=16)
    yield Case(
        "exponential_overlapped", "exponential averaging at 75 % overlap, with a gap", 604,
        rig("Exponential averaging, much overlap", TEN_VOLTS,
            dict(**SMALL, overlap=0.75, averaging="exponential", memory=9), **two_by_two()),
        blocks=24, encoding="float32", edit=edit_exponential_overlapped,
        aside=[9, 10, 11, 12], gaps=1)
    yield Case(
        "estimator_h2_three_forces", "H2, three forces that depend on each other", 605,
        rig("Estimator H2, three forces", TEN_VOLTS, dict(**SMALL, estimator="h2"),
            [force(i, f"S{i}", str(i), "+z") for i in (1, 2, 3)],
            [response(4, "A1", "1", "+z"), response(5, "A2", "2", "-z"),
             response(6, "A9", "9", "+x")]),
        blocks=20, mix=[[1, 0.3, 0], [-0.4, 1, 0], [0.2, 0.2, 1]])
    yield Case(
        "estimator_hv_three_forces", "Hv, three forces, flat top", 606,
        rig("Estimator Hv, three forces", TEN_VOLTS,
            dict(**SMALL, estimator="hv", window="flattop"), **three_by_two()), blocks=20)


def edit_exponential_overlapped(digital):
    digital[1560:1580, 2] = np.nan  # hop 125: block 9 ends with frame 1624, block 12 begins at 1500


def edit_exponential(digital):
    digital[2600, 1] = -1.0         # blocks 9 and 10


def every_case():
    """All cases in the order of README.md."""
    groups = (windows_and_blocks, channel_tables, gaps_and_overranges, few_blocks, encodings,
              averaging_and_estimators, confidence_regions)
    return [case for group in groups for case in group()]

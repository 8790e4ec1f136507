#!/usr/bin/env python3
"""Writes a recording of 60 s with its rig file and reference results, too large to be stored.

    /usr/bin/python3 testdata/long_run.py OUTDIR [carry-on | hold]

Two forces, six responses, 4096 frames/s, float32: 8 MB. Nothing is wrong on the rig, so a run has
to average all 119 blocks also with on_fault = "hold". OUTDIR gets the same four files as a stored
case. Invented data, for tests alone.
"""

import sys

sys.dont_write_bytecode = True

import cases
import make_references
from cases import force, response

SECONDS = 60
RATE_HZ = 4096
BLOCK = 4096


def case(on_fault):
    """The long run; its recording ends with the last block."""
    rig = cases.rig(
        "Two forces, one minute", dict(rate=RATE_HZ, full_scale=10.0, channels=8),
        dict(max_frequency=820.0, line_spacing=RATE_HZ / BLOCK),
        [force(1, "S1", "1", "+z"), force(2, "S2", "5", "+z")],
        [response(2 + i, f"A{i}z", str(i), "+z") for i in range(1, 7)])
    rig["watch"]["on_fault"] = on_fault
    return cases.Case("long_run", "one minute with two forces and six responses", 701, rig,
                      blocks=2 * SECONDS * RATE_HZ // BLOCK - 1, tail=0, encoding="float32",
                      driving_points=[0, 4])


def main():
    if len(sys.argv) not in (2, 3) or sys.argv[2:] not in ([], ["carry-on"], ["hold"]):
        print("usage: long_run.py OUTDIR [carry-on | hold]", file=sys.stderr)
        return 2
    summary = make_references.make(case((sys.argv[2:] or ["carry-on"])[0]), sys.argv[1],
                                   "long_run.py")
    print(f"{summary['blocks_averaged']} blocks averaged, worth {summary['effective_averages']:.2f}")
    return 0


if __name__ == "__main__":
    sys.exit(main())

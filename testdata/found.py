#!/usr/bin/env python3
"""Reference results of blocks that a run has found by itself: bursts, and periodic random blocks.

    /usr/bin/python3 testdata/found.py RIG.toml RECORDING SUMMARY.json OUTDIR

Takes nothing but `block_starts` from SUMMARY.json, and writes expected.npz and expected.json to
OUTDIR: what estimates.npz and summary.json have to hold of these blocks.
"""

import json
import os
import sys

sys.dont_write_bytecode = True  # these scripts lie among the data
if not __debug__:
    sys.exit("found.py: its checks are assertions: run it without -O")

import chance
import reference


def main():
    if len(sys.argv) != 5:
        print("usage: found.py RIG.toml RECORDING SUMMARY.json OUTDIR", file=sys.stderr)
        return 2
    rig, recording, summary, folder = sys.argv[1:]
    with open(summary, encoding="utf-8") as file:
        starts = json.load(file)["block_starts"]
    arrays, facts = reference.compute_at(rig, recording, starts, chance.Confidence())
    os.makedirs(folder, exist_ok=True)
    reference.store(folder, arrays, facts)
    return 0


if __name__ == "__main__":
    sys.exit(main())

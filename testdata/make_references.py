#!/usr/bin/env python3
"""Makes the recordings, rig files and reference results beside it, with NumPy and SciPy alone.

    /usr/bin/python3 testdata/make_references.py [FOLDER]

Writes FOLDER/CASE/ with rig.toml, run.wav, expected.npz and expected.json for every case, FOLDER
being the one this script lies in by default. The data are invented, for tests alone; seeds are
fixed. compare_references.py says whether what is stored is still what this makes.
"""

import os
import sys

sys.dont_write_bytecode = True  # these scripts lie among the data
if not __debug__:
    sys.exit("make_references.py: its checks are assertions: run it without -O")

import numpy as np

import cases
import reference
import rigfile
import signals
import wavefile

HERE = os.path.dirname(os.path.abspath(__file__))

# Above these a result is so sensitive to rounding that builds of NumPy need not agree to 1e-12:
# the condition number of Gxx, and the random error, which has no bound where an H happens to be
# next to nothing.
WORST_CONDITION = 1e3
WORST_ERROR = 6.0


def write_inputs(case, folder, script="make_references.py"):
    """Writes rig.toml and run.wav. script is named in the rig file as their maker."""
    purpose = case.purpose[0].upper() + case.purpose[1:] + "."
    heading = [purpose, f"Invented data, for tests alone. Written by testdata/{script}."]
    rig_path = os.path.join(folder, "rig.toml")
    with open(rig_path, "w", encoding="utf-8") as file:
        file.write(rigfile.to_toml(case.rig, heading))
    rig = rigfile.read(rig_path)
    assert case.tail < rig.hop, f"{case.name}: the tail holds another block"
    if case.driving_points is not None:
        assert rig.driving_points() == case.driving_points, case.name
    frames = rig.block + (case.blocks - 1) * rig.hop + case.tail
    channels = case.file_channels or max(c.index for c in rig.channels()) + 1
    digital = signals.digital(rig, case.seed, frames, channels, case.mix)
    if case.edit is not None:
        case.edit(digital)
    wavefile.write(os.path.join(folder, "run.wav"), int(rig.rate_hz), digital, case.encoding)
    return rig


def check_counts(case, rig, summary):
    """The counts against those worked out by hand in cases.py."""
    kept = [k for k in range(case.blocks) if k not in case.aside]
    wanted = {"blocks_seen": case.blocks, "blocks_averaged": len(kept),
              "blocks_set_aside": len(case.aside), "gaps": case.gaps,
              "overranges": case.overranges, "block_starts": [k * rig.hop for k in kept]}
    for key, value in wanted.items():
        assert summary[key] == value, f"{case.name}: {key} is {summary[key]}, by hand {value}"


def check_conditioning(case, arrays):
    for name, worst in (("force_condition_raw", WORST_CONDITION), ("random_error", WORST_ERROR)):
        greatest = np.max(arrays[name], initial=0, where=np.isfinite(arrays[name]))
        assert greatest < worst, f"{case.name}: {name} up to {greatest:.3g}: choose another seed"


def make(case, folder, script="make_references.py"):
    """Makes the four files of one case in folder."""
    os.makedirs(folder, exist_ok=True)
    rig = write_inputs(case, folder, script)
    arrays, summary = reference.store(folder)
    check_counts(case, rig, summary)
    check_conditioning(case, arrays)
    return summary


def make_all(parent):
    """Makes a folder for every case."""
    reference.check_values()
    for case in cases.every_case():
        make(case, os.path.join(parent, case.name))


if __name__ == "__main__":
    make_all(sys.argv[1] if len(sys.argv) > 1 else HERE)

#!/usr/bin/env python3
"""Makes the recordings, rig files and reference results beside it, with NumPy and SciPy alone.

    /usr/bin/python3 testdata/make_references.py [FOLDER]

Writes FOLDER/CASE/ with rig.toml, run.wav, expected.npz and expected.json for every case, and
FOLDER/found/CASE/ with rig.toml, run.wav and truth.json for every case whose blocks have to be
found, FOLDER being the one this script lies in by default. The data are invented, for tests alone;
seeds are fixed. compare_references.py says whether what is stored is still what this makes.
"""

import json
import os
import sys

sys.dont_write_bytecode = True  # these scripts lie among the data
if not __debug__:
    sys.exit("make_references.py: its checks are assertions: run it without -O")

import numpy as np

import cases
import chance
import found_cases
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


def write_rig(case, folder, script="make_references.py"):
    """Writes rig.toml, in which script is named as the maker, and reads it back."""
    purpose = case.purpose[0].upper() + case.purpose[1:] + "."
    heading = [purpose, f"Invented data, for tests alone. Written by testdata/{script}."]
    rig_path = os.path.join(folder, "rig.toml")
    with open(rig_path, "w", encoding="utf-8") as file:
        file.write(rigfile.to_toml(case.rig, heading))
    return rigfile.read(rig_path)


def write_inputs(case, folder, script="make_references.py"):
    """Writes rig.toml and run.wav."""
    rig = write_rig(case, folder, script)
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
    arrays, summary = reference.compute(os.path.join(folder, "rig.toml"),
                                        os.path.join(folder, "run.wav"), case.confidence)
    reference.store(folder, arrays, summary)
    check_counts(case, rig, summary)
    check_conditioning(case, arrays)
    return summary


def make_found(case, folder):
    """Makes the three files of one case whose blocks have to be found, and tries the reference at
    both ends of what may be found."""
    os.makedirs(folder, exist_ok=True)
    rig = write_rig(case, folder)
    random = np.random.RandomState(case.seed)
    forces, responses, marks = case.make(random, rig, **case.settings)
    channels = max(c.index for c in rig.channels()) + 1
    digital = signals.recorded(random, rig, forces, responses, channels)
    if case.edit is not None:
        case.edit(digital)
    assert np.max(np.abs(digital)) < 0.9, f"{case.name}: near full scale"
    paths = [os.path.join(folder, name) for name in ("rig.toml", "run.wav")]
    wavefile.write(paths[1], int(rig.rate_hz), digital, "pcm16")
    _, _, values = reference.read(*paths)
    starts = case.expect(rig, values, marks, **case.settings)
    with open(os.path.join(folder, "truth.json"), "w", encoding="utf-8") as file:
        file.write(json.dumps({"starts": starts}) + "\n")
    for chosen in ([first for first, _ in starts], [last for _, last in starts]):
        arrays, _ = reference.compute_at(*paths, chosen, chance.Confidence())
        check_conditioning(case, arrays)


def make_all(parent):
    """Makes a folder for every case."""
    reference.check_values()
    for case in cases.every_case():
        make(case, os.path.join(parent, case.name))
    for case in found_cases.every_found_case():
        make_found(case, os.path.join(parent, found_cases.FOLDER, case.name))


if __name__ == "__main__":
    make_all(sys.argv[1] if len(sys.argv) > 1 else HERE)

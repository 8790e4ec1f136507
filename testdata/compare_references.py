#!/usr/bin/env python3
"""Makes every reference case anew in a temporary folder and compares it with what is stored.

    /usr/bin/python3 testdata/compare_references.py [FOLDER]

FOLDER holds the stored cases, by default the one this script lies in. Recordings, rig files and
true starts must be equal byte for byte. Arrays must agree to TOLERANCE of each array's greatest value, with
NaN in the same places: builds of NumPy differ in the last bits. Prints one line for each
difference; the exit status is 1 with any, else 0.
"""

import json
import os
import sys
import tempfile

sys.dont_write_bytecode = True

import numpy as np

import cases
import found_cases
import make_references

TOLERANCE = 1e-12


def read_bytes(path):
    with open(path, "rb") as file:
        return file.read()


def array_differences(stored, made):
    """What differs between two arrays, as one text; empty when nothing does."""
    if stored.dtype != made.dtype or stored.shape != made.shape:
        return f"{stored.dtype} {stored.shape} is stored, {made.dtype} {made.shape} is made"
    if made.dtype.kind == "i":
        return "" if np.array_equal(stored, made) else "other integers"
    parts = [(stored.real, made.real), (stored.imag, made.imag)]
    if any(not np.array_equal(np.isfinite(a), np.isfinite(b)) for a, b in parts):
        return "NaN in other places"
    known = np.isfinite(made)
    if not known.any():
        return ""
    difference = np.max(np.abs(stored[known] - made[known]))
    largest = np.max(np.abs(made[known]))
    if difference > TOLERANCE * largest:
        return f"differs by {difference:.3g}, greatest value {largest:.3g}"
    return ""


def npz_differences(stored_path, made_path):
    with np.load(stored_path, allow_pickle=False) as stored, \
            np.load(made_path, allow_pickle=False) as made:
        if sorted(stored.files) != sorted(made.files):
            yield f"arrays {sorted(stored.files)} are stored, {sorted(made.files)} are made"
            return
        for name in made.files:
            text = array_differences(stored[name], made[name])
            if text:
                yield f"{name}: {text}"


def json_differences(stored_path, made_path):
    stored, made = json.loads(read_bytes(stored_path)), json.loads(read_bytes(made_path))
    if not alike(stored, made):
        for key in sorted(stored.keys() | made.keys()):
            if not alike(stored.get(key), made.get(key)):
                yield f"{key} {stored.get(key)} is stored, {made.get(key)} is made"


def alike(stored, made):
    """Whether two values of JSON are the same, floating-point numbers to TOLERANCE."""
    if isinstance(stored, float) and isinstance(made, float):
        return abs(stored - made) <= TOLERANCE * abs(made)
    if isinstance(stored, dict) and isinstance(made, dict):
        return stored.keys() == made.keys() and all(alike(stored[k], made[k]) for k in made)
    return type(stored) is type(made) and stored == made


def byte_differences(stored_path, made_path):
    stored, made = read_bytes(stored_path), read_bytes(made_path)
    if stored != made:
        common = min(len(stored), len(made))
        first = next((i for i in range(common) if stored[i] != made[i]), common)
        yield f"{len(stored)} bytes are stored, {len(made)} are made, unlike from byte {first} on"


COMPARE = {"rig.toml": byte_differences, "run.wav": byte_differences,
           "expected.npz": npz_differences, "expected.json": json_differences}
COMPARE_FOUND = {"rig.toml": byte_differences, "run.wav": byte_differences,
                 "truth.json": byte_differences}


def differences(stored_parent, made_parent, names, comparisons):
    """One line for everything that differs between two folders of cases."""
    for name in names:
        folder = os.path.join(stored_parent, name)
        present = set(os.listdir(folder)) if os.path.isdir(folder) else set()
        for extra in sorted(present - comparisons.keys()):
            yield f"{name}/{extra}: is stored, no script makes it"
        for file, compare in comparisons.items():
            if file not in present:
                yield f"{name}/{file}: is not stored"
                continue
            for text in compare(os.path.join(folder, file), os.path.join(made_parent, name, file)):
                yield f"{name}/{file}: {text}"
    for name in sorted(os.listdir(stored_parent)) if os.path.isdir(stored_parent) else []:
        if os.path.isfile(os.path.join(stored_parent, name, "rig.toml")) and name not in names:
            yield f"{name}: is stored, no script makes it"
    described = read_bytes(os.path.join(make_references.HERE, "README.md")).decode("utf-8")
    for name in names:
        if f"`{name}`" not in described:
            yield f"README.md: case {name} is not described"


def main():
    stored = sys.argv[1] if len(sys.argv) > 1 else make_references.HERE
    names = [case.name for case in cases.every_case()]
    found_names = [case.name for case in found_cases.every_found_case()]
    with tempfile.TemporaryDirectory() as made:
        make_references.make_all(made)
        lines = list(differences(stored, made, names, COMPARE))
        lines += differences(os.path.join(stored, found_cases.FOLDER),
                             os.path.join(made, found_cases.FOLDER), found_names, COMPARE_FOUND)
    for line in lines:
        print(f"{line}: look at what changed, then run make_references.py", file=sys.stderr)
    if not lines:
        print(f"{len(names) + len(found_names)} reference cases agree")
    return 1 if lines else 0


if __name__ == "__main__":
    sys.exit(main())

#!/usr/bin/python3
"""Reads recordings with programs other than the one under test and prints what they hold.

    /usr/bin/python3 read_back.py FILE...

prints one JSON object: for each FILE the rate, the channels, the type of the samples ("float32" or
"float64") and the samples as C99 hexadecimal floating-point text, channel fastest. RIFF files are read
by SciPy, any warning of which ends the script. SciPy 1.10 does not read RF64, so those are taken apart
here as EBU Tech 3306 describes them, and every size in them is checked. Needs Debian's python3-scipy.
"""
import json
import struct
import sys
import warnings

import numpy as np
import scipy.io.wavfile

warnings.simplefilter("error")


def read_rf64(content):
    form, ones, wave, ds64, size = struct.unpack("<4sI4s4sI", content[:20])
    assert (form, ones, wave, ds64, size) == (b"RF64", 2**32 - 1, b"WAVE", b"ds64", 28)
    riff_bytes, data_bytes, frames, table = struct.unpack("<QQQI", content[20:48])
    assert riff_bytes == len(content) - 8 and table == 0
    at, rate, channels, tag, bits = 48, 0, 0, 0, 0
    while True:
        name, size = struct.unpack("<4sI", content[at : at + 8])
        body = content[at + 8 : at + 8 + size]
        if name == b"data":
            assert size == 2**32 - 1
            break
        if name == b"fmt ":
            tag, channels, rate, _, align, bits = struct.unpack("<HHIIHH", body[:16])
            if tag == 0xFFFE:
                tag = struct.unpack("<H", body[24:26])[0]
            assert align == channels * bits // 8
        if name == b"fact":
            assert struct.unpack("<I", body)[0] == frames
        at += 8 + size
    assert tag == 3 and data_bytes == frames * channels * bits // 8 and len(content) == at + 8 + data_bytes
    return rate, np.frombuffer(content[at + 8 :], dtype=f"<f{bits // 8}").reshape(frames, channels)


def read(path):
    with open(path, "rb") as f:
        content = f.read()
    if content[:4] == b"RF64":
        return read_rf64(content)
    rate, x = scipy.io.wavfile.read(path)
    return rate, x.reshape(len(x), -1)


def main():
    found = {}
    for path in sys.argv[1:]:
        rate, x = read(path)
        found[path] = {
            "rate": rate,
            "channels": x.shape[1],
            "type": x.dtype.name,
            "values": [float(v).hex() for v in x.ravel()],
        }
    json.dump(found, sys.stdout)


main()

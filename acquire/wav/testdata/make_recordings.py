#!/usr/bin/python3
"""Makes small recordings with SciPy, with Python's wave module and byte by byte, and what they hold.

    /usr/bin/python3 make_recordings.py DIR

writes *.wav and expected.json into DIR. Needs Debian's python3-scipy. The samples are a fixed pattern
that reaches both ends of the range, uses every byte of a sample and differs between channels, so that
swapped bytes, channels or frames cannot pass. expected.json holds for each file the rate, the channels,
the encoding, whether a warning is due, and the digital values as C99 hexadecimal floating-point text,
which loses no bit, channel fastest.

    /usr/bin/python3 make_recordings.py --libsndfile DIR

writes those that libsndfile makes instead, with expected-libsndfile.json. Needs python3-soundfile.
"""
import json
import os
import struct
import sys
import wave

import numpy as np
import scipy.io.wavfile

RATE = 4096
FRAMES = 21
ENCODING = {16: "PCM 16 bit", 24: "PCM 24 bit", 32: "PCM 32 bit"}

where = ""
expected = {}


def integers(bits, channels, frames=FRAMES):
    """A pattern in [-2^(bits-1), 2^(bits-1)), shape (frames, channels): a multiplicative sequence."""
    k = np.arange(frames * channels, dtype=object)
    x = (k * 2654435761 + 40503) % 2**bits - 2 ** (bits - 1)
    x[0], x[1], x[2], x[3] = -(2 ** (bits - 1)), 2 ** (bits - 1) - 1, 0, -1
    return x.reshape(frames, channels)


def floats(channels, dtype):
    x = np.array(integers(32, channels), dtype=np.float64) / 2**30  # in [-2, 2): beyond full scale
    x = (x * np.pi / 3).astype(dtype)
    x[3, 0], x[4, 0], x[5, 0] = np.nan, np.inf, -np.inf
    x[6, 0], x[7, 0] = np.finfo(dtype).max, np.finfo(dtype).smallest_subnormal
    x[8, 0] = -0.0
    return x


def packed(x, bits):
    """Little-endian two's complement bytes."""
    return b"".join(int(v).to_bytes(bits // 8, "little", signed=True) for v in x.ravel())


def chunk(name, body, size=None):
    size = len(body) if size is None else size
    return name + struct.pack("<I", size) + body + b"\0" * (len(body) % 2)


def fmt(tag, channels, bits, extensible=False, valid=None):
    align = channels * bits // 8
    head = struct.pack("<HIIHH", channels, RATE, RATE * align, align, bits)
    if not extensible:
        return chunk(b"fmt ", struct.pack("<H", tag) + head)
    guid = struct.pack("<IHH", tag, 0, 0x10) + bytes.fromhex("800000aa00389b71")
    rest = struct.pack("<HHI", 22, bits if valid is None else valid, 0)
    return chunk(b"fmt ", struct.pack("<H", 0xFFFE) + head + rest + guid)


def riff(*chunks, size=None):
    body = b"WAVE" + b"".join(chunks)
    return b"RIFF" + struct.pack("<I", len(body) if size is None else size) + body


def rf64(name, data_bytes, frames, *chunks):
    inner = 4 + 36 + sum(map(len, chunks))
    ds64 = chunk(b"ds64", struct.pack("<QQQI", inner, data_bytes, frames, 0))
    return name + b"\xff" * 4 + b"WAVE" + ds64 + b"".join(chunks)


def note(name, values, encoding, warning=False):
    values = np.asarray(values, dtype=np.float64)
    expected[name] = {
        "rate": RATE,
        "channels": values.shape[1],
        "encoding": encoding,
        "warning": warning,
        "values": [float(v).hex() for v in values.ravel()],
    }


def put(name, content, values, encoding, warning=False):
    with open(os.path.join(where, name), "wb") as f:
        f.write(content)
    note(name, values, encoding, warning)


def from_wave_module():
    for bits, channels in (16, 2), (24, 3), (32, 1):
        x = integers(bits, channels)
        name = f"wave-s{bits}.wav"
        with wave.open(os.path.join(where, name), "wb") as w:
            w.setparams((channels, bits // 8, RATE, 0, "NONE", ""))
            w.writeframes(packed(x, bits))
        note(name, x / 2 ** (bits - 1), ENCODING[bits])


def from_scipy():
    for dtype, channels, encoding in (
        ("i2", 5, "PCM 16 bit"),
        ("i4", 2, "PCM 32 bit"),
        ("f4", 3, "IEEE float 32 bit"),
        ("f8", 1, "IEEE float 64 bit"),
    ):
        bits = 8 * int(dtype[1])
        if dtype[0] == "i":
            x = integers(bits, channels)
            values, x = x / 2 ** (bits - 1), x.astype("<" + dtype)
        else:
            x = values = floats(channels, "<" + dtype)
        name = f"scipy-{dtype}.wav"
        scipy.io.wavfile.write(os.path.join(where, name), RATE, x)
        note(name, values, encoding)


def byte_by_byte():
    s16, s24, s32 = integers(16, 2), integers(24, 3), integers(32, 2)
    v16, v24, v32 = s16 / 2**15, s24 / 2**23, s32 / 2**31
    d16, d24, d32 = packed(s16, 16), packed(s24, 24), packed(s32, 32)
    f32, f64 = floats(4, "<f4"), floats(3, "<f8")

    put("extensible-s24.wav", riff(fmt(1, 3, 24, True), chunk(b"data", d24)), v24, ENCODING[24])
    put("extensible-f64.wav", riff(fmt(3, 3, 64, True), chunk(b"fact", struct.pack("<I", FRAMES)),
        chunk(b"data", f64.tobytes())), f64, "IEEE float 64 bit")
    left = s32 // 256 * 256  # 24 bits, left-justified in 32
    put("valid24-in-32.wav", riff(fmt(1, 2, 32, True, 24), chunk(b"data", packed(left, 32))), left / 2**31, ENCODING[32])
    put("right-justified.wav", riff(fmt(1, 2, 32, True, 24), chunk(b"data", packed(s32 // 256, 32))),
        s32 // 256 / 2**31, ENCODING[32], True)
    odd = chunk(b"LIST", b"INFOISFT\x05\0\0\0own.\0") + chunk(b"junk", b"odd") + chunk(b"bext", b"")
    put("odd-chunks.wav", riff(odd, fmt(1, 2, 16), chunk(b"note", b"x"), chunk(b"data", d16), odd), v16, ENCODING[16])
    put("rf64-s16.wav", rf64(b"RF64", len(d16), FRAMES, fmt(1, 2, 16), chunk(b"data", d16, 2**32 - 1)), v16, ENCODING[16])
    put("bw64-f32.wav", rf64(b"BW64", f32.nbytes, FRAMES, fmt(3, 4, 32, True), chunk(b"data", f32.tobytes(), 2**32 - 1),
        chunk(b"axml", b"<x/>")), f32, "IEEE float 32 bit")
    put("killed-zero.wav", riff(fmt(1, 2, 32), chunk(b"data", d32, 0), size=0), v32, ENCODING[32], True)
    put("killed-ones.wav", riff(fmt(1, 2, 32), chunk(b"data", d32 + b"abc", 2**32 - 1), size=2**32 - 1)[:-1], v32, ENCODING[32], True)
    put("cut-short.wav", riff(fmt(1, 2, 16), chunk(b"data", d16))[:-3], v16[:-1], ENCODING[16], True)


def from_libsndfile():
    import soundfile

    for form, subtype, channels in (
        ("RF64", "PCM_16", 2),
        ("RF64", "PCM_24", 3),
        ("RF64", "DOUBLE", 1),
        ("WAVEX", "FLOAT", 5),
        ("WAV", "PCM_24", 2),
    ):
        name = f"libsndfile-{form}-{subtype}.wav".lower()
        if subtype.startswith("PCM"):
            bits = int(subtype[4:])
            x = integers(bits, channels)
            values = x / 2 ** (bits - 1)
            x = (x * 2 ** (32 - bits)).astype(np.int32)  # libsndfile takes the upper bits
            encoding = ENCODING[bits]
        else:
            x = values = floats(channels, {"FLOAT": "f4", "DOUBLE": "f8"}[subtype])
            encoding = {"FLOAT": "IEEE float 32 bit", "DOUBLE": "IEEE float 64 bit"}[subtype]
        soundfile.write(os.path.join(where, name), x, RATE, subtype=subtype, format=form)
        note(name, values, encoding)


def main():
    global where
    where = sys.argv[-1]
    name = "expected.json"
    if sys.argv[1] == "--libsndfile":
        name = "expected-libsndfile.json"
        from_libsndfile()
    else:
        from_wave_module()
        from_scipy()
        byte_by_byte()
    with open(os.path.join(where, name), "w") as f:
        json.dump(expected, f, indent=1)
        f.write("\n")


main()

"""Recordings: WAV files in each encoding that the reference cases need, written and read back.

SciPy writes and reads the plain ones. 24 bit in an extensible header and RF64 are written and
read here, by Microsoft's "Multiple channel audio data and WAVE files" (WAVE_FORMAT_EXTENSIBLE)
and EBU Tech 3306 (RF64). Knows no rig and no spectra.
"""

import struct
import warnings

import numpy as np
from scipy.io import wavfile

# The part of the sub-format identifier behind the format tag; the same for PCM and float.
GUID_TAIL = bytes.fromhex("000000001000800000aa00389b71")
PCM, FLOAT, EXTENSIBLE = 1, 3, 0xFFFE
UNKNOWN_SIZE = 0xFFFFFFFF


# Samples of floating-point files lie on a grid of 2^-23 (exact in float32) or 2^-32 (finer than
# float32): far coarser than the last bits in which builds of NumPy differ, so that the file is
# the same wherever it is made, small samples too.
FLOAT32_GRID, FLOAT64_GRID = 2.0 ** -23, 2.0 ** -32


def on_grid(digital, grid):
    return np.rint(digital / grid) * grid


def integers(digital, bits):
    """Nearest integers of that many bits; full scale is 2^(bits-1), what goes beyond is clipped."""
    scale = 2.0 ** (bits - 1)
    return np.clip(np.rint(digital * scale), -scale, scale - 1).astype(np.int64)


def chunk(name, body):
    """A RIFF chunk: name, size, body, and a pad byte after an odd size."""
    return name + struct.pack("<I", len(body)) + body + b"\0" * (len(body) % 2)


def write(path, rate_hz, digital, encoding):
    """Writes digital, shape (frames, channels), full scale 1, in the named encoding."""
    if encoding == "pcm16":
        wavfile.write(path, rate_hz, integers(digital, 16).astype("<i2"))
    elif encoding == "pcm32":
        wavfile.write(path, rate_hz, integers(digital, 32).astype("<i4"))
    elif encoding == "float32":
        wavfile.write(path, rate_hz, on_grid(digital, FLOAT32_GRID).astype("<f4"))
    elif encoding == "float64":
        wavfile.write(path, rate_hz, on_grid(digital, FLOAT64_GRID).astype("<f8"))
    elif encoding == "pcm24":
        _write_bytes(path, pcm24_extensible(rate_hz, digital))
    elif encoding == "rf64":
        _write_bytes(path, rf64_float32(rate_hz, digital))
    else:
        raise ValueError(f"encoding {encoding!r}: choose one that write knows")


def _write_bytes(path, content):
    with open(path, "wb") as file:
        file.write(content)


def pcm24_extensible(rate_hz, digital):
    """24 bit with an extensible header, and chunks nobody knows before and behind the data."""
    channels = digital.shape[1]
    align = 3 * channels
    fmt = struct.pack("<HHIIHHHHIH", EXTENSIBLE, channels, rate_hz, rate_hz * align, align, 24,
                      22, 24, 0, PCM) + GUID_TAIL
    samples = integers(digital, 24).astype("<i4")
    data = samples.view(np.uint8).reshape(-1, 4)[:, :3].tobytes()
    body = (b"WAVE" + chunk(b"odd1", b"seven b") + chunk(b"fmt ", fmt) + chunk(b"data", data)
            + chunk(b"tail", b"behind the data"))
    return chunk(b"RIFF", body)


def rf64_float32(rate_hz, digital):
    """RF64 with float32 samples: the sizes stand in the ds64 chunk. A chunk nobody knows, as
    long as 64 frames, follows the data: who reads to the end of the file gets frames too many."""
    channels = digital.shape[1]
    align = 4 * channels
    fmt = struct.pack("<HHIIHHH", FLOAT, channels, rate_hz, rate_hz * align, align, 32, 0)
    data = on_grid(digital, FLOAT32_GRID).astype("<f4").tobytes()
    behind = chunk(b"fmt ", fmt) + chunk(b"fact", struct.pack("<I", UNKNOWN_SIZE))
    behind += b"data" + struct.pack("<I", UNKNOWN_SIZE) + data
    behind += chunk(b"tail", b"\x3e" * (64 * align))
    ds64_size = 28
    riff_size = 4 + 8 + ds64_size + len(behind)
    ds64 = struct.pack("<QQQI", riff_size, len(data), len(digital), 0)
    return (b"RF64" + struct.pack("<I", UNKNOWN_SIZE) + b"WAVE" + chunk(b"ds64", ds64) + behind)


def read(path):
    """Rate and digital samples, shape (frames, channels), as float64 with full scale 1."""
    with open(path, "rb") as file:
        content = file.read()
    fmt = content.find(b"fmt ")
    tag, = struct.unpack_from("<H", content, fmt + 8)
    if content[:4] == b"RIFF" and tag != EXTENSIBLE:
        return _read_with_scipy(path)
    rate_hz, digital = _read_chunks(content)
    if content[:4] == b"RIFF":
        check_rate, check = _read_with_scipy(path)
        assert check_rate == rate_hz and np.array_equal(check, digital), "two readers disagree"
    return rate_hz, digital


def _read_with_scipy(path):
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", wavfile.WavFileWarning)  # about the unknown chunks
        rate_hz, samples = wavfile.read(path)
    if samples.dtype.kind == "i":  # 24 bit arrive in the upper bytes of 32
        return rate_hz, samples / 2.0 ** (8 * samples.dtype.itemsize - 1)
    return rate_hz, samples.astype(np.float64)


def _read_chunks(content):
    position, sizes = 12, {}
    while position < len(content):
        name, size = struct.unpack_from("<4sI", content, position)
        position += 8
        if name == b"data" and size == UNKNOWN_SIZE:
            size = sizes["data"]
        body = content[position:position + size]
        if name == b"ds64":
            _, sizes["data"], _ = struct.unpack_from("<QQQ", body)
        elif name == b"fmt ":
            tag, channels, rate_hz, _, align, bits = struct.unpack_from("<HHIIHH", body)
        elif name == b"data":
            data = body
        position += size + size % 2
    assert align == channels * bits // 8
    if bits == 24:
        assert tag == EXTENSIBLE
        raw = np.frombuffer(data, np.uint8).reshape(-1, 3).astype(np.int64)
        value = raw[:, 0] | raw[:, 1] << 8 | raw[:, 2] << 16
        digital = np.where(value >= 2 ** 23, value - 2 ** 24, value) / 2.0 ** 23
    else:
        assert (tag, bits) == (FLOAT, 32)
        digital = np.frombuffer(data, "<f4").astype(np.float64)
    return rate_hz, digital.reshape(-1, channels)

"""The job in NumPy: window, transform and one-sided cross-spectral densities of blocks that overlap by half.

usage: with_numpy.py RECORDING FORCES RESPONSES BLOCK LINES BLOCKS rows|matmul TOGETHER

Then, on standard input: a number does the job as often and answers "done"; "write" answers with Gxx, Gyx and Gyy as raw
doubles. Channels are forces, then responses; G (channel, force) holds Gxx in its first rows and Gyx in the others.

Frames are turned into channels once for TOGETHER blocks, and both ways of summing keep their temporaries small or leave the
work to BLAS: "rows" multiplies one channel at a time with all forces, in place; "matmul" has one matrix product a line over
TOGETHER blocks.
"""

import ctypes
import sys

import numpy as np
from numpy.lib.stride_tricks import sliding_window_view

RATE_HZ = 48000


class Job:
    def __init__(self, recording, q, p, block, lines, blocks, way, together):
        self.q, self.channels, self.block, self.lines, self.blocks, self.together = q, q + p, block, lines, blocks, together
        self.hop = block // 2
        self.window = 0.5 - 0.5 * np.cos(2 * np.pi * np.arange(block) / block)
        frames = (blocks + 1) * self.hop
        self.recording = np.fromfile(recording, count=frames * self.channels).reshape(frames, self.channels)
        self.add = {"rows": self.add_rows, "matmul": self.add_matmul}[way]
        self.by_line = way == "matmul"
        c = self.channels
        self.strip = np.empty((c, (together + 1) * self.hop))
        self.windowed = np.empty((together, c, block))
        self.g = np.empty((lines, c, q) if self.by_line else (c, q, lines), complex)
        self.power = np.empty((lines, c) if self.by_line else (c, lines))
        self.product = np.empty_like(self.g) if self.by_line else np.empty((q, lines), complex)
        self.scale = np.full(lines, 2.0)
        self.scale[0] = 1
        self.scale /= RATE_HZ * (self.window @ self.window) * blocks

    def add_rows(self, spectra):
        for s in spectra:
            x = s[: self.q].conj()
            for row, y in zip(self.g, s):
                np.multiply(y, x, out=self.product)
                row += self.product
            self.power += s.real**2 + s.imag**2

    def add_matmul(self, spectra):
        z = np.ascontiguousarray(spectra.transpose(2, 1, 0))  # (line, channel, block)
        np.matmul(z, z[:, : self.q].conj().transpose(0, 2, 1), out=self.product)
        self.g += self.product
        self.power += np.einsum("lcb,lcb->lc", z.real, z.real) + np.einsum("lcb,lcb->lc", z.imag, z.imag)

    def run(self):
        self.g[...] = 0
        self.power[...] = 0
        for first in range(0, self.blocks, self.together):
            n = min(self.together, self.blocks - first)
            frames = (n + 1) * self.hop
            np.copyto(self.strip[:, :frames], self.recording[first * self.hop :][:frames].T)
            for b in range(n):
                np.multiply(self.strip[:, b * self.hop :][:, : self.block], self.window, out=self.windowed[b])
            self.add(np.fft.rfft(self.windowed[:n])[..., : self.lines])
        by_line = (slice(None),) + (None,) * (self.g.ndim - 1)
        self.g *= self.scale[by_line] if self.by_line else self.scale
        self.power *= self.scale[:, None] if self.by_line else self.scale

    def write(self):
        g, power = (self.g, self.power) if self.by_line else (self.g.transpose(2, 0, 1), self.power.T)
        for part in (g[:, : self.q], g[:, self.q :], power[:, self.q :]):
            for line in part:
                sys.stdout.buffer.write(line.tobytes())


def blas():
    """The BLAS that is loaded and its threads."""
    with open("/proc/self/maps") as maps:
        paths = {line.split()[-1] for line in maps if "blas" in line}
    for path in sorted(paths):
        library = ctypes.CDLL(path)
        if hasattr(library, "openblas_get_num_threads"):
            config = library.openblas_get_config
            config.restype = ctypes.c_char_p
            return f"{' '.join(config().decode().split()[:2])} with {library.openblas_get_num_threads()} threads for products"
    return "a BLAS of one thread for products"


def main():
    recording, sizes, way, together = sys.argv[1], sys.argv[2:7], sys.argv[7], int(sys.argv[8])
    job = Job(recording, *map(int, sizes), way, together)
    np.matmul(np.ones((2, 2)), np.ones((2, 2)))
    print(f"NumPy: {np.__version__}, its own transform on one core, {blas()}", flush=True)
    for line in sys.stdin:
        if line.strip() == "write":
            job.write()
        else:
            for _ in range(int(line)):
                job.run()
            print("done")
        sys.stdout.flush()


main()

"""What statistics says of an average: confidence regions, and coherences that chance alone gives."""

from dataclasses import dataclass

import numpy as np
from scipy import stats

CHANCE_PROBABILITY = 0.95


@dataclass(frozen=True)
class Confidence:
    """Which confidence region is wanted: for one H of a row or for the whole row of q at once."""
    level: float = 0.90
    simultaneous: bool = False

    def radius_squared(self, variance, q, n_e):
        """|H^ - H|² that is not exceeded at the level (Goodman 1965, AFFDL-TR-65-56)."""
        if self.simultaneous:
            return q * variance * stats.f.ppf(self.level, 2 * q, 2 * (n_e - q))
        return variance * stats.f.ppf(self.level, 2, 2 * (n_e - q))

    def facts(self):
        return {"level": self.level, "simultaneous": self.simultaneous}


def chance_level(q, n_e):
    """Coherences that unrelated signals stay below with CHANCE_PROBABILITY; None when unknown."""
    def quantile(a, b):
        if n_e <= q or a == 0:
            return None
        return float(stats.beta.ppf(CHANCE_PROBABILITY, a, b))

    return {"probability": CHANCE_PROBABILITY,
            "multiple_coherence": quantile(q, n_e - q),
            "partial_coherence": quantile(1, n_e - q),
            "force_coherence": quantile(q - 1, n_e - q + 1)}


def check_values():
    """F from the NIST/SEMATECH tables; F(2, v) and Beta(1, b) from their closed forms; Beta(q,
    n_e - q) worked out to four digits; a simulation of unrelated signals."""
    assert abs(stats.f.ppf(0.95, 2, 20) - 3.493) < 5e-4
    assert abs(stats.f.ppf(0.90, 2, 40) - 2.440) < 5e-4
    for level, v in ((0.9, 3.7), (0.95, 20), (0.5, 200)):
        closed = v / 2 * ((1 - level) ** (-2 / v) - 1)
        assert abs(stats.f.ppf(level, 2, v) - closed) < 1e-9 * closed
    for q, n_e, wanted in ((2, 30, 0.1534), (3, 30, 0.2016), (4, 64, 0.1185)):
        assert abs(chance_level(q, n_e)["multiple_coherence"] - wanted) < 5e-5, (q, n_e)
    assert abs(chance_level(3, 30)["partial_coherence"] - (1 - 0.05 ** (1 / 27))) < 1e-12
    check_by_simulation()


def check_by_simulation():
    """Unrelated Gaussian signals stay below the levels about as often as they should."""
    q, n, lines = 3, 12, 4000
    random = np.random.RandomState(801)
    v = random.standard_normal((lines, q + 1, n)) + 1j * random.standard_normal((lines, q + 1, n))
    g = v @ v.conj().swapaxes(1, 2) / n
    inverse, inverse_forces = np.linalg.inv(g), np.linalg.inv(g[:, 1:, 1:])

    def below(inverse_of, of, i, level):
        coherence = 1 - 1 / (of[:, i, i].real * inverse_of[:, i, i].real)
        return np.mean(coherence < level)

    levels = chance_level(q, n)
    shares = {"multiple": below(inverse, g, 0, levels["multiple_coherence"]),
              "force": below(inverse_forces, g[:, 1:, 1:], 0, levels["force_coherence"])}
    to_force = inverse[:, 0, 1]  # partial coherence from the inverse of the whole matrix
    partial = np.abs(to_force) ** 2 / (inverse[:, 0, 0].real * inverse[:, 1, 1].real)
    shares["partial"] = np.mean(partial < levels["partial_coherence"])
    for name, share in shares.items():  # a share of 4000 scatters by 0.0034
        assert abs(share - CHANCE_PROBABILITY) < 0.012, (name, share)

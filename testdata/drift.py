"""Drift: whether the first and the other averaged blocks tell the same frequency responses.

1 on average when nothing but chance lies between them, for each frequency response.
"""

import numpy as np

import estimates

# No |H| may lie so near the edge of the lines of interest that rounding decides, relative.
CLEAR_OF_FLOOR = 1e-9


def first_part(blocks):
    """How many of the averaged blocks are in the first part, a power of two near half of them."""
    if blocks < 2:
        return 0
    s = 1
    while 4 * s <= blocks:
        s *= 2
    # Now 2s <= blocks < 4s.
    return s if 2 * blocks < 3 * (2 * s) else 2 * s


def lines_of_interest(rig, size):
    """Lines where |H|, size, is no more than depth_db below its maximum; NaN where none is known."""
    judged = np.zeros(len(size), bool)
    judged[list(rig.judged_lines())] = True
    judged &= np.isfinite(size)
    if not judged.any():
        return judged
    floor = np.max(size[judged]) * 10 ** (-rig.depth_db / 20)
    nearest = np.min(np.abs(size[judged] - floor))
    assert floor == 0 or nearest > CLEAR_OF_FLOOR * floor, "a line on the floor: choose another seed"
    return judged & (size >= floor)


def drift(rig, h, early, late):
    """Mean of v ln(1 + t/v) over the lines of interest, (p, q); t = |H_e - H_l|² / (Var_e + Var_l).

    h decides which lines are of interest, whatever it was estimated by; the parts' H are H1. NaN
    with exponential averaging, and where no line is known.
    """
    _, p, q = h.shape
    result = np.full((p, q), np.nan)
    if rig.averaging == "exponential" or min(early.n_e, late.n_e) <= q:
        return result
    h_early, variance_early = estimates.h_by_h1(early)
    h_late, variance_late = estimates.h_by_h1(late)
    with np.errstate(invalid="ignore"):
        t = np.abs(h_early - h_late) ** 2 / (variance_early + variance_late)
    v = early.n_e + late.n_e - 2 * q
    u = v * np.log(1 + t / v)
    for o in range(p):
        for i in range(q):
            known = lines_of_interest(rig, np.abs(h[:, o, i])) & np.isfinite(u[:, o, i])
            if known.any():
                result[o, i] = np.mean(u[known, o, i])
    return result


def check_values():
    """Worked out by hand."""
    wanted = {0: 0, 1: 0, 2: 1, 3: 2, 4: 2, 5: 2, 6: 4, 7: 4, 8: 4, 9: 4, 11: 4, 12: 8, 23: 8, 24: 16}
    for blocks, first in wanted.items():
        assert first_part(blocks) == first, blocks

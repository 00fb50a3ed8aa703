"""Design linear-phase halfband filters, equiripple, for changing the rate by two.

A halfband filter of N = 4m+3 taps is zero at every second tap but the middle one, which is 1/2.  The others are
half the taps of a filter with a single band up to twice the passband's edge.
Source: P. P. Vaidyanathan and T. Q. Nguyen, "A 'trick' for the design of FIR half-band filters", IEEE Trans.
Circuits and Systems 34(3), 1987 (from memory); Parks-McClellan exchange by scipy.signal.remez.
"""

import numpy as np

PASSBANDS = (20 / 96, 20 / 192, 20 / 384, 20 / 768)
"""Edge of each stage's passband re its high rate: 20 kHz when the first stage goes from 48 to 96 kHz."""

STAGES = {"stage": (79, 23, 15, 11), "studio": (127, 31, 19, 15)}
"""Taps of the stages from the lowest rate up: what is folded back is 108 dB down at stage, 136 dB at studio."""


def design(length, passband):
    """Return every second tap of a halfband filter, ndarray of shape ((length+1)/2,), the sum being 1/2.

    Parameters
    ----------
    length : int
        Number of taps, 4m+3.
    passband : float
        Upper edge of the passband re the high rate; the stopband starts at 1/2 less this.
    """
    from scipy.signal import remez

    half = (length + 1) // 2
    single = remez(half, [0, 2 * passband], [1], fs=1.0, maxiter=500, grid_density=64)
    return (single + single[::-1]) / 4  # exactly symmetric, so that the delay is exact


def full(half):
    """Return all the taps, from every second one: zeros between them, 1/2 in the middle."""
    taps = np.zeros(2 * len(half) - 1)
    taps[::2] = half
    taps[len(half) - 1] = 0.5
    return taps

"""Spectra of coherent tones: every line falls on a bin, no window is needed."""

import numpy as np

RATE, SIZE = 48_000, 1 << 14


def bin_of(hz):
    """Return the odd bin nearest *hz*."""
    return int(hz / RATE * SIZE) | 1


def tone(*bins, level=1.0):
    """Return two periods of the analysis length of sines on these bins, to be rendered; use the second."""
    n = np.arange(2 * SIZE)
    return level * sum(np.sin(2 * np.pi * b * n / SIZE + 0.3 * i) for i, b in enumerate(bins))


def lines(out):
    """Return the peak amplitude in each bin of the second half of *out*."""
    half = np.abs(np.fft.rfft(np.asarray(out, float)[-SIZE:])) * 2 / SIZE
    half[0] /= 2
    return half


def db(x):
    """Return amplitudes in decibels, silence as -400."""
    return 20 * np.log10(np.maximum(x, 1e-20))

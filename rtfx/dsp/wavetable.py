"""Band-limited waveforms: one period in a table for every third of an octave, cut off below 20 kHz.

Row r holds the harmonics up to 2^(r/3).  A pitch reads the two highest rows that stay below the limit and blends
them, so that a gliding pitch never jumps from one row to the next.
Harmonics are whole up to 12.6 kHz and fade out between there and 20 kHz.
Accuracy: cubic interpolation in 4096 points leaves errors 96 dB or more below full scale.
Source: Fourier series of the waveforms; 4-point Lagrange interpolation.
"""

from functools import cache
from math import floor, log2

import numpy as np

from rtfx.native.options import inlined

POINTS = 4096
ROW = POINTS + 3  # one point before the period and two after it, for the interpolation
LIMIT_HZ = 20_000.0
TOP_ROW = 30  # 1024 harmonics: enough down to 20 Hz


def harmonics(row):
    """Return how many harmonics *row* may hold."""
    return int(2.0 ** (row / 3) + 1e-9)


def amplitudes(wave, count):
    """Return the sine amplitudes of harmonics 1..count of *wave*, ndarray of shape (count,)."""
    k = np.arange(1, count + 1)
    odd = k % 2
    if wave == "saw":
        return 2 / (np.pi * k) * np.where(odd, 1.0, -1.0)
    if wave == "square":
        return 4 / (np.pi * k) * odd
    return 8 / (np.pi * k) ** 2 * odd * np.where(k % 4 == 1, 1.0, -1.0)


@cache
def tables(wave, lowest_hz):
    """Return the rows of *wave* ("triangle", "saw", "square") that pitches from *lowest_hz* need, shape (rows, ROW)."""
    count = min(TOP_ROW, max(0, floor(3 * log2(LIMIT_HZ / lowest_hz)))) + 1
    spectrum = np.zeros((count, POINTS // 2 + 1), complex)
    for row in range(count):
        top = harmonics(row)
        spectrum[row, 1 : top + 1] = amplitudes(wave, top) * (POINTS / 2j)
    period = np.fft.irfft(spectrum, POINTS, axis=1)
    rows = np.concatenate([period[:, -1:], period, period[:, :2]], axis=1)
    rows.setflags(write=False)
    return rows


@inlined
def rows(pitch_hz):
    """Return (offset of the lower row, offset of the upper row, weight of the upper) for *pitch_hz*."""
    place = min(max(3.0 * log2(LIMIT_HZ / pitch_hz), 0.0), float(TOP_ROW))
    upper = int(place)
    return max(upper - 1, 0) * ROW, upper * ROW, place - upper


@inlined
def cubic(memory, at, t):
    """Interpolate between memory[at+1] and memory[at+2], *t* of the way."""
    a, b, c, d = memory[at], memory[at + 1], memory[at + 2], memory[at + 3]
    third = (d - a) / 6.0 + (b - c) * 0.5
    second = (a + c) * 0.5 - b
    first = c - a / 3.0 - b * 0.5 - d / 6.0
    return ((third * t + second) * t + first) * t + b


@inlined
def read(memory, at, lower, upper, weight, phase):
    """Return the blend of two rows at *phase* (cycles, 0 to below 1)."""
    place = phase * POINTS
    i = int(place)
    t = place - i
    low = cubic(memory, at + lower + i, t)
    high = cubic(memory, at + upper + i, t)
    return low + weight * (high - low)

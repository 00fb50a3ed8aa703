"""Eight delays that feed each other through an orthogonal matrix: the echoes of a room.

    v = H s / √8 + b x,   s_i = F_i{ v_i delayed by m_i },   H: the Hadamard matrix of order 8
    F_i(z) = g_i (1 − p_i) / (1 − p_i z⁻¹),   g_i = 10^(−3 τ_i / time)

At 0 Hz the level falls by 60 dB in `time`: a pass of τ_i seconds takes its share, g_i.  p_i is such that a pass at
the damping frequency takes twice that in dB; there the decay is half as long.
Lossless prototype: Hᵀ H = 8 I, so ‖H s / √8‖ = ‖s‖.  Without F_i the delays and the matrix keep the energy Σ v²
exactly, whatever the m_i.  |F_i| ≤ g_i < 1 at all frequencies, so every pass takes some: the network is stable for all
values of time and damping.
The m_i are primes: no two have a common divisor, and their echoes fall together as late as can be.
Source: J. Stautner and M. Puckette, "Designing multi-channel reverberators", Computer Music J. 6(1), 1982; J.-M. Jot
and A. Chaigne, "Digital delay networks for designing artificial reverberators", AES 90th Conv., 1991 (from memory).
"""

from math import cos, pi, sqrt

import numpy as np

from rtfx.dsp.hold import ring_for, whole
from rtfx.native.options import inlined

LINES = 8
NOMINAL_S = (0.0227, 0.0269, 0.0311, 0.0367, 0.0421, 0.0487, 0.0563, 0.0631)
T0, T1, T2, T3, T4, T5, T6, T7 = NOMINAL_S
MEAN_S = sum(NOMINAL_S) / LINES
ROOT = LINES**-0.5
HIGHEST = 0.49  # of the rate, for the damping frequency
HEAD = 8  # words before a line's ring: its length, what F last gave, and room that keeps the rings apart in the cache


def is_prime(n):
    """Tell whether the whole number *n* has no divisors but 1 and itself."""
    return n > 1 and all(n % d for d in range(2, int(sqrt(n)) + 1))


def nearest_prime(n):
    """Return the prime nearest the whole number *n*; of two as near, the upper."""
    return next(m for away in range(n) for m in (n + away, n - away) if is_prime(m))


def lengths(rate):
    """Return the m_i at *rate* (Hz): the primes nearest the nominal times, a tuple of LINES different ones."""
    return tuple(nearest_prime(round(t * rate)) for t in NOMINAL_S)


def memory_for(rate):
    """Return the first memory of all the lines at *rate* (Hz), and the length of each one's ring."""
    found = lengths(rate)
    ring = ring_for(max(found))
    lines = np.zeros((LINES, HEAD + ring))
    lines[:, 0] = found
    return lines.ravel(), ring


@inlined
def passing(nominal_s, time_s):
    """Return g, what is left after a pass."""
    return 10.0 ** (-3.0 * nominal_s / time_s)


@inlined
def pole(g, turn):
    """Return the p for which |F| at the damping frequency is g²; *turn* is the cosine of that frequency.

    From |1 − p|² = g² |1 − p e^(−jω)|², solved for the p below 1 in a form that subtracts nothing alike.
    """
    lost = 1.0 - g * g
    middle = 1.0 - g * g * turn
    return lost / (middle + sqrt(middle * middle - lost * lost))


@inlined
def fading(nominal_s, time_s, turn):
    """Return g (1 − p) and p of a line."""
    g = passing(nominal_s, time_s)
    p = pole(g, turn)
    return g * (1.0 - p), p


@inlined
def all_fading(time_s, damping_hz, rate):
    """Return the g (1 − p) of the eight lines, and their p."""
    turn = cos(2.0 * pi * min(damping_hz / rate, HIGHEST))
    a0, p0 = fading(T0, time_s, turn)
    a1, p1 = fading(T1, time_s, turn)
    a2, p2 = fading(T2, time_s, turn)
    a3, p3 = fading(T3, time_s, turn)
    a4, p4 = fading(T4, time_s, turn)
    a5, p5 = fading(T5, time_s, turn)
    a6, p6 = fading(T6, time_s, turn)
    a7, p7 = fading(T7, time_s, turn)
    return (a0, a1, a2, a3, a4, a5, a6, a7), (p0, p1, p2, p3, p4, p5, p6, p7)


@inlined
def taken(memory, line, place, mask, part, p):
    """Return what comes out of the delay at memory[line], through F; *part* is g (1 − p)."""
    late = memory[line + HEAD + ((place - whole(memory[line])) & mask)]
    y = part * late + p * memory[line + 1]
    memory[line + 1] = y
    return y


@inlined
def put_in(memory, line, place, fed_back, x):
    """Put what is fed back, and the input, into the delay at memory[line]."""
    memory[line + HEAD + place] = ROOT * fed_back + x


@inlined
def mixed(a, b, c, d, e, f, g, h):
    """Return H times the eight, by the fast transform of Hadamard and Walsh."""
    a, b, c, d, e, f, g, h = a + b, a - b, c + d, c - d, e + f, e - f, g + h, g - h
    a, b, c, d, e, f, g, h = a + c, b + d, a - c, b - d, e + g, f + h, e - g, f - h
    return a + e, b + f, c + g, d + h, a - e, b - f, c - g, d - h

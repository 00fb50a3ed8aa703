"""State-variable filter: two integrators in a loop, which stays in tune and stable while it is moved.

    g = tan(π · cutoff / rate),   k = 1 / q
    band = (s1 + g (x − s2)) / (1 + g (g + k)),   low = s2 + g · band
    high = x − k · band − low,   notch = x − k · band
    s1 ← 2 band − s1,   s2 ← 2 low − s2

It equals the analogue filter of second order under the bilinear transform, prewarped at the cutoff.
State: s1 and s2, what the two integrators hold.  Delay: none.
Limits: the cutoff is held below 0.49 of the rate, where the tangent runs off; from 41 kHz up none gets there.
Source: V. Zavalishin, The Art of VA Filter Design, 2012 (from memory): topology-preserving transform with
trapezoidal integrators.
"""

from math import pi, tan

from rtfx.native.options import inlined

HIGHEST = 0.49


@inlined
def coefficients(cutoff_hz, q, rate):
    """Return g, k and 1 / (1 + g (g + k))."""
    g = tan(pi * min(cutoff_hz / rate, HIGHEST))
    k = 1.0 / q
    return g, k, 1.0 / (1.0 + g * (g + k))


@inlined
def step(x, g, share, s1, s2):
    """Return the band and low outputs for one sample, and the new state."""
    band = (s1 + g * (x - s2)) * share
    low = s2 + g * band
    return band, low, 2.0 * band - s1, 2.0 * low - s2

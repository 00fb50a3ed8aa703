"""Follow a value slowly: one-pole smoothing with a time constant, and an end to it.

    y[n] = y[n-1] + a (t − y[n-1]),   a = 1 − exp(−1 / (tau · rate))

After tau seconds 63 % of the way to a resting target t are done.  In floating point y never quite arrives;
`approach` lands on t once what is left is below a millionth (−120 dB), so that a gain at rest is exactly 1.
Source: step response of an RC low-pass, sampled exactly.
"""

from math import expm1

from rtfx.native.options import inlined

ARRIVED = 1e-6


@inlined
def one_pole(tau_s, rate):
    """Return the coefficient a for a time constant of *tau_s* seconds at *rate* (Hz)."""
    return -expm1(-1.0 / (tau_s * rate))


@inlined
def approach(value, target, a):
    """Return *value* moved towards *target* by the share *a* of the way, or *target* if that is near enough."""
    moved = value + a * (target - value)
    return target if abs(target - moved) < ARRIVED else moved

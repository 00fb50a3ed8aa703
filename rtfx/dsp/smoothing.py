"""One-pole smoothing: y ← y + a (x − y), with a = 1 − exp(−1/(τ rate)).

Source: step response of an RC low-pass, sampled exactly.
"""

from math import exp

from rtfx.native.options import inlined


@inlined
def share(tau_s, rate):
    """Return the share a of the way that is gone in one sample."""
    return 1.0 - exp(-1.0 / (tau_s * rate))

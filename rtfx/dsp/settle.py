"""Glide to a value and arrive there.

    y ← y + a (t − y),   and y ← t once less than a millionth is left

A one-pole alone never quite arrives: a gain would not be exactly 1 again.  The last step is below −120 dB.
Source: one-pole smoothing, see rtfx.dsp.smoothing.
"""

from rtfx.native.options import inlined

LEFT_OVER = 1e-6


@inlined
def settle(value, target, a):
    """Return *value* moved by the share *a* of the way to *target*, or *target* if that is near enough."""
    moved = value + a * (target - value)
    return target if abs(target - moved) < LEFT_OVER else moved

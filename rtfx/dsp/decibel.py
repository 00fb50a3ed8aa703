"""Decibels of amplitudes: 20 dB are a factor of 10.

Source: definition of the decibel for amplitudes.
"""

from rtfx.native.options import inlined


@inlined
def amplitude(level_db):
    """Return the factor that *level_db* stands for; 0 dB is exactly 1."""
    return 10.0 ** (level_db / 20.0)

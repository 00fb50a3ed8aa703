"""A signal times itself: a note gives its octave, two notes give their sum and difference as well.

    y = x²,   (A cos α)² = A²/2 + A²/2 · cos 2α

Limits: the first half of that is DC, which follows the loudness: put a `dc-block` behind it.  The dynamics
double: a note 1 dB softer comes out 2 dB softer.
State: none.  Delay: none.
Source: double-angle identity.
"""

from rtfx.blocks.kind import Code, kind, order
from rtfx.native.options import inlined


@inlined
def tick(x):
    return x * x


@kind(
    "square",
    about="The signal times itself: an octave up, with twice the dynamics. Adds DC: put dc-block behind it.",
    ports=("x",),
    law="y = x²",
    source="Double-angle identity: cos² α = ½ + ½ cos 2α.",
    bandwidth=order(2),
    linear=False,
)
def square(setting):
    return Code(tick=tick)

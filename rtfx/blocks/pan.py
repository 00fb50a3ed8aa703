"""Place a sound between left and right, equally loud wherever it is.

    left = x · sin(π/4 · (1 − balance)),   right = x · sin(π/4 · (1 + balance))

left² + right² = x².  In the middle each side is 3.01 dB down; at an end the other side is silent.
State: none.  Delay: none.
Source: equal-power panning by sine and cosine, common practice.
"""

from math import pi, sin

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.native.options import inlined


@inlined
def prepare(balance, rate):
    """Return the factors for left and right."""
    return sin(pi / 4.0 * (1.0 - balance)), sin(pi / 4.0 * (1.0 + balance))


@inlined
def tick(x, left, right):
    return x * left, x * right


@kind(
    "pan",
    about="Place the sound between left and right; it stays equally loud on the way.",
    ports=("x",),
    outputs=("left", "right"),
    parameters=(Parameter("balance", "", -1.0, 1.0, 0.0, about="-1: left, 0: middle, 1: right"),),
    law="left = x · sin(π/4 · (1 − balance)), right = x · sin(π/4 · (1 + balance))",
    source="Equal-power panning by sine and cosine, common practice.",
)
def pan(setting):
    return Code(tick=tick, prepare=prepare, coefficients=2)

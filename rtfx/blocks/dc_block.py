"""Take out DC, and nothing that can be heard.

    y = x − x₁ + R · y₁,   R = 1 − 2π · cutoff / rate

A resting input dies away and leaves no residue: the difference is taken before anything is summed up.
State: the last input x₁ and the last output y₁.  Delay: none.
Limits: −3.01 dB at the cutoff and 0 dB above hold within 0.1 dB from 44.1 kHz up.
Source: first-order DC blocker, common practice.
"""

from math import pi

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.native.options import inlined


@inlined
def prepare(cutoff_hz, rate):
    """Return R."""
    return 1.0 - 2.0 * pi * cutoff_hz / rate


@inlined
def tick(x, r, last_x, last_y):
    y = x - last_x + r * last_y
    return y, x, y


@kind(
    "dc-block",
    about="Takes out DC, which square and even powers add; leaves all that can be heard.",
    ports=("x",),
    parameters=(Parameter("cutoff", "Hz", 1.0, 100.0, 10.0, "log", "how deep the bass still comes through"),),
    law="y = x − x₁ + R·y₁, R = 1 − 2π·cutoff/rate",
    source="First-order DC blocker, common practice.",
)
def dc_block(setting):
    return Code(tick=tick, prepare=prepare, state={"last_x": 0.0, "last_y": 0.0})

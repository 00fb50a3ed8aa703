"""From one signal to another.

    y = (1 − amount) · dry + amount · wet

At 0 the output is dry, at 1 it is wet, both to the last bit.  Half way, two signals that have nothing in
common are 3 dB down; two equal ones are not.
State: none.  Delay: none.
Source: linear crossfade, common practice.
"""

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.native.options import inlined


@inlined
def prepare(amount, rate):
    """Return the shares of dry and of wet."""
    return 1.0 - amount, amount


@inlined
def tick(dry, wet, dry_share, wet_share):
    return dry_share * dry + wet_share * wet


@kind(
    "mix",
    about="Blend two signals: your own sound and what the effect makes of it.",
    ports=("dry", "wet"),
    parameters=(Parameter("amount", "", 0.0, 1.0, 0.5, about="0: only dry, 1: only wet"),),
    law="y = (1 − amount) · dry + amount · wet",
    source="Linear crossfade, common practice.",
)
def mix(setting):
    return Code(tick=tick, prepare=prepare, coefficients=2)

"""Two-quadrant multiplication: one signal opens and closes the other, which stays in the sound.

    z = x · max(0, 1 + depth · y)

A tone f against a modulator g of peak 1 gives f as it was, and f+g and f−g at depth/2 each.
Limits: where depth · y falls below −1 the signal is shut, and the corner there makes overtones that the
bandwidth does not count; a modulator within ±1 never gets there.
State: none.  Delay: none.
Source: product-to-sum identity, (1 + m cos β) cos α = cos α + ½ m cos(α+β) + ½ m cos(α−β).
"""

from rtfx.blocks.kind import Code, Parameter, kind, product
from rtfx.native.options import inlined


@inlined
def prepare(depth, rate):
    return depth


@inlined
def tick(x, y, depth):
    factor = 1.0 + depth * y
    return x * (factor if factor > 0.0 else 0.0)


@kind(
    "amplitude-modulate",
    about="One signal moves the other's loudness: a slow one pulses, a fast one adds new tones beside yours.",
    ports=("x", "y"),
    parameters=(Parameter("depth", "", 0.0, 1.0, 1.0, about="0: untouched, 1: all the way to silence"),),
    law="z = x · max(0, 1 + depth · y)",
    source="Product-to-sum identity: (1 + m cos β) cos α = cos α + ½ m cos(α+β) + ½ m cos(α−β).",
    bandwidth=product,
    linear=False,
)
def amplitude_modulate(setting):
    return Code(tick=tick, prepare=prepare)

"""Two signals at once.

    z = x + y

State: none.  Delay: none.
Source: superposition.
"""

from rtfx.blocks.kind import Code, kind
from rtfx.native.options import inlined


@inlined
def tick(x, y):
    return x + y


@kind(
    "add",
    about="Both signals together, each as loud as it comes in.",
    ports=("x", "y"),
    law="z = x + y",
    source="Superposition.",
)
def add(setting):
    return Code(tick=tick)

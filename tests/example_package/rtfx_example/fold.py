"""Lead even powers into a signal by a parabola, an example of a kind from outside.

    y = x + depth · (x² − 1/2)

State: none.  Delay: none.  Source: with x = cos a the added part is (depth/2) cos 2a, an octave and no DC.
"""

from rtfx.blocks.kind import Code, Parameter, kind, order
from rtfx.native.options import inlined


@inlined
def prepare(depth, rate):
    return depth


@inlined
def tick(x, depth):
    return x + depth * (x * x - 0.5)


@kind(
    "fold",
    about="Adds an octave to a full-scale tone.",
    ports=("x",),
    parameters=(Parameter("depth", "", 0.0, 1.0, 0.5, about="twice the octave's amplitude"),),
    law="y = x + depth·(x² − 1/2)",
    source="Identity: cos² a = 1/2 + (1/2)·cos 2a.",
    bandwidth=order(2),
    linear=False,
)
def fold(setting):
    return Code(tick=tick, prepare=prepare)

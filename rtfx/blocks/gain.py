"""Make louder or softer.

    y = x · 10^(level/20)

State: none.  Delay: none.
Source: definition of the decibel for amplitudes.
"""

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.native.options import inlined


@inlined
def prepare(level_db, rate):
    """Return the factor for *level_db*."""
    return 10.0 ** (level_db / 20.0)


@inlined
def tick(x, factor):
    return x * factor


@kind(
    "gain",
    about="Louder or softer, by a level in decibels.",
    ports=("x",),
    parameters=(Parameter("level", "dB", -80.0, 36.0, 0.0),),
    law="y = x · 10^(level/20)",
    source="Definition of the decibel for amplitudes.",
)
def gain(setting):
    return Code(tick=tick, prepare=prepare)

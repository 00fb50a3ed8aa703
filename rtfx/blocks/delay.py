"""The same sound, later.  It may stand in a loop.

    y[n] = x[n − time · rate]

Between samples a cubic through the four around the place is read; at whole samples the output is the input to
the last bit.  Less than one sample is not possible: `time` 0 is one sample at the block's own rate.
State: where the next sample goes, and the ring's length less 1.  Memory: a ring of a power of two.
Limits: half way between samples the top fades: −0.5 dB at 10 kHz, −2.5 dB at 15 kHz (rate 48 kHz).
Source: Lagrange interpolation, see rtfx.dsp.interpolation.
"""

from math import ceil, floor

import numpy as np

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.dsp.hold import ring_for
from rtfx.dsp.interpolation import lagrange
from rtfx.native.options import inlined

WHOLE = 1e-6  # samples; as near to a whole number, a time is meant to be one
READ = 4  # samples that a reading takes


@inlined
def prepare(time_s, rate):
    """Return how far back the first of the four samples lies, and their weights."""
    late = max(time_s * rate, 1.0)
    nearest = floor(late + 0.5)
    if abs(late - nearest) < WHOLE:
        late = 1.0 * nearest
    first = max(floor(late) - 1, 1)
    w0, w1, w2, w3 = lagrange(late - first)
    return first, w0, w1, w2, w3


@inlined
def emerge(memory, at, first, w0, w1, w2, w3, place, mask):
    i = place - first
    s0, s1 = memory[at + (i & mask)], memory[at + ((i - 1) & mask)]
    s2, s3 = memory[at + ((i - 2) & mask)], memory[at + ((i - 3) & mask)]
    return w0 * s0 + w1 * s1 + w2 * s2 + w3 * s3


@inlined
def tick(x, memory, at, first, w0, w1, w2, w3, place, mask):
    memory[at + place] = x
    return (place + 1) & mask, mask


@kind(
    "delay",
    about="The same sound, later. In a loop it makes echoes, or a string.",
    ports=("x",),
    parameters=(Parameter("time", "s", 0.0, 2.0, 0.25, about="how much later; 0 is one sample"),),
    law="y[n] = x[n − time·rate], at least one sample, cubic between samples",
    source="Lagrange interpolation: Laakso et al., Splitting the Unit Delay, 1996 (from memory).",
    breaks_loops=True,
)
def delay(setting):
    ring = ring_for(ceil(setting.reach["time"][1] * setting.rate) + READ)
    return Code(
        tick=tick,
        prepare=prepare,
        emerge=emerge,
        coefficients=5,
        state={"place": 0, "mask": ring - 1},
        memory=np.zeros(ring),
    )

"""A room around the guitar: eight delays that feed each other, from one input to left and right.

    s_i: what comes out of delay i;   h = H s, H the Hadamard matrix of order 8
    into delay i: h_i/√8 + b x/√8;   left = h_1,   right = h_2
    b² = 1/G − 1,   G = 10^(−6 · 41 ms / time)

See rtfx.dsp.reverb_lines for the delays, their damping, and why this is stable at every setting.
Only the reverberation comes out: mix the dry sound to it.  The first echo comes after 23 ms.  b makes noise come out
as loud as it goes in, within 2 dB, whatever the time, but for what is damped.
State: the place in the rings; memory: the eight delays.  Delay: none to be made up for.
Source: Stautner and Puckette, 1982; Jot and Chaigne, 1991 (from memory).
"""

from math import sqrt

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.dsp.reverb_lines import HEAD, MEAN_S, ROOT, all_fading, memory_for, mixed, passing, put_in, taken
from rtfx.native.options import inlined


@inlined
def prepare(time_s, damping_hz, rate):
    """Return the gain of the input, and for the eight lines the parts g (1 − p) and the poles p."""
    parts, poles = all_fading(time_s, damping_hz, rate)
    mean = passing(MEAN_S, time_s)
    return ROOT * sqrt(1.0 / (mean * mean) - 1.0), parts, poles


@inlined
def tick(x, memory, at, gain, parts, poles, place, mask):
    a0, a1, a2, a3, a4, a5, a6, a7 = parts
    p0, p1, p2, p3, p4, p5, p6, p7 = poles
    step = HEAD + mask + 1
    l0, l1, l2, l3 = at, at + step, at + 2 * step, at + 3 * step
    l4, l5, l6, l7 = at + 4 * step, at + 5 * step, at + 6 * step, at + 7 * step
    s0, s1 = taken(memory, l0, place, mask, a0, p0), taken(memory, l1, place, mask, a1, p1)
    s2, s3 = taken(memory, l2, place, mask, a2, p2), taken(memory, l3, place, mask, a3, p3)
    s4, s5 = taken(memory, l4, place, mask, a4, p4), taken(memory, l5, place, mask, a5, p5)
    s6, s7 = taken(memory, l6, place, mask, a6, p6), taken(memory, l7, place, mask, a7, p7)
    h0, h1, h2, h3, h4, h5, h6, h7 = mixed(s0, s1, s2, s3, s4, s5, s6, s7)
    x *= gain
    put_in(memory, l0, place, h0, x)
    put_in(memory, l1, place, h1, x)
    put_in(memory, l2, place, h2, x)
    put_in(memory, l3, place, h3, x)
    put_in(memory, l4, place, h4, x)
    put_in(memory, l5, place, h5, x)
    put_in(memory, l6, place, h6, x)
    put_in(memory, l7, place, h7, x)
    return h1, h2, (place + 1) & mask, mask


@kind(
    "reverb",
    about="A room around the guitar, from one input to left and right; mix the dry sound to it.",
    ports=("x",),
    outputs=("left", "right"),
    parameters=(
        Parameter("time", "s", 0.2, 10.0, 2.0, "log", "how long it takes to fall by 60 dB"),
        Parameter("damping", "Hz", 500.0, 20_000.0, 5_000.0, "log", "where it takes half as long; above, less still"),
    ),
    law="eight delays of 23 to 63 ms fed back by an orthogonal matrix, 60 dB down after time, at damping in half of it",
    source="Stautner and Puckette, 1982; Jot and Chaigne, AES 90th Conv., 1991 (from memory).",
    base_rate_only=True,
)
def reverb(setting):
    memory, ring = memory_for(setting.rate)
    return Code(tick=tick, prepare=prepare, coefficients=3, state={"place": 0, "mask": ring - 1}, memory=memory)

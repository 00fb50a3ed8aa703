"""Thinner: what lies below the cutoff fades by 12 dB an octave.

    H(s) = s² / (s² + s/q + 1),   s = jf / cutoff

State: the two integrators of rtfx.dsp.svf.  Delay: none.
Gain: 1 at the top, q at the cutoff, 0 at 0 Hz.
Source: V. Zavalishin, The Art of VA Filter Design, 2012 (from memory).  See rtfx.dsp.svf.
"""

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.dsp.svf import coefficients, step
from rtfx.native.options import inlined


@inlined
def tick(x, g, k, share, s1, s2):
    band, low, s1, s2 = step(x, g, share, s1, s2)
    return x - k * band - low, s1, s2


@kind(
    "highpass",
    about="Thinner: takes away what lies below the cutoff, 12 dB an octave.",
    ports=("x",),
    parameters=(
        Parameter("cutoff", "Hz", 20.0, 20_000.0, 1_000.0, "log", "where the bass begins to fade"),
        Parameter("q", "", 0.3, 30.0, 0.7071, "log", "0.7: no peak; higher: a peak at the cutoff"),
    ),
    law="H = s² / (s² + s/q + 1), s = jf/cutoff",
    source="State-variable filter: V. Zavalishin, The Art of VA Filter Design, 2012 (from memory).",
)
def highpass(setting):
    return Code(tick=tick, prepare=coefficients, coefficients=3, state={"s1": 0.0, "s2": 0.0})

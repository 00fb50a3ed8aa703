"""Take out one pitch and leave the rest.

    H(s) = (s² + 1) / (s² + s/q + 1),   s = jf / cutoff

State: the two integrators of rtfx.dsp.svf.  Delay: none.
Gain: 0 at the cutoff, 1 far from it; −3 dB at two edges that lie cutoff / q apart.
Source: V. Zavalishin, The Art of VA Filter Design, 2012 (from memory).  See rtfx.dsp.svf.
"""

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.dsp.svf import coefficients, step
from rtfx.native.options import inlined


@inlined
def tick(x, g, k, share, s1, s2):
    band, _, s1, s2 = step(x, g, share, s1, s2)
    return x - k * band, s1, s2


@kind(
    "notch",
    about="Takes out what lies at the cutoff and leaves the rest.",
    ports=("x",),
    parameters=(
        Parameter("cutoff", "Hz", 20.0, 20_000.0, 1_000.0, "log", "the middle of what is taken out"),
        Parameter("q", "", 0.3, 30.0, 0.7071, "log", "higher: a narrower gap"),
    ),
    law="H = (s² + 1) / (s² + s/q + 1), s = jf/cutoff",
    source="State-variable filter: V. Zavalishin, The Art of VA Filter Design, 2012 (from memory).",
)
def notch(setting):
    return Code(tick=tick, prepare=coefficients, coefficients=3, state={"s1": 0.0, "s2": 0.0})

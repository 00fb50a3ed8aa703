"""A curve by its coefficients: c2 adds the octave, c3 the twelfth, and so on up to the eighth harmonic.

    y = c0 + c1·x + c2·x² + … + c8·x⁸

A tone comes out with harmonics up to the highest power used and none above; only powers that the patch can
reach count for the bandwidth.  Even powers and c0 add DC: put a `dc-block` behind them.
Limits: nothing holds the curve beyond ±1, where high powers grow fast.
State: none.  Delay: none.
Source: Horner's rule, W. G. Horner, Phil. Trans. R. Soc., 1819 (from memory).
"""

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.native.options import inlined

HIGHEST = 8


@inlined
def prepare(c0, c1, c2, c3, c4, c5, c6, c7, c8, rate):
    return c0, c1, c2, c3, c4, c5, c6, c7, c8


@inlined
def tick(x, c0, c1, c2, c3, c4, c5, c6, c7, c8):
    upper = (((c8 * x + c7) * x + c6) * x + c5) * x + c4
    return (((upper * x + c3) * x + c2) * x + c1) * x + c0


def highest_power(setting):
    """Return the highest power whose coefficient can be other than 0 (0 if there is none)."""
    return max((k for k in range(HIGHEST + 1) if setting.reach[f"c{k}"] != (0.0, 0.0)), default=0)


def _bandwidth(setting, inputs):
    """The bandwidth of its input times the highest power whose weight can leave 0."""
    return highest_power(setting) * max(inputs.values())


_ABOUT = (
    "a constant (DC)",
    "the signal itself",
    "the octave, and DC",
    "the twelfth (third harmonic)",
    "the fourth harmonic and below it",
    "the fifth harmonic and below it",
    "the sixth harmonic and below it",
    "the seventh harmonic and below it",
    "the eighth harmonic and below it",
)


@kind(
    "polynomial",
    about="A curve of your own: one number for each power of the signal, and so for each harmonic.",
    ports=("x",),
    parameters=tuple(
        Parameter(f"c{k}", "", -8.0, 8.0, 1.0 if k == 1 else 0.0, about=text) for k, text in enumerate(_ABOUT)
    ),
    law="y = c0 + c1·x + c2·x² + … + c8·x⁸",
    source="Horner's rule (W. G. Horner, Phil. Trans. R. Soc., 1819, from memory).",
    bandwidth=_bandwidth,
    linear=False,
)
def polynomial(setting):
    return Code(tick=tick, prepare=prepare, coefficients=HIGHEST + 1)

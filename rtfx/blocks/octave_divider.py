"""One or two octaves down: the guitar multiplied by +1 and −1 in turns that last as long as its own waves.

    y = g · p · x,   p = ±1

The fundamental is what a low-pass leaves; a Schmitt trigger counts its half waves, rising where it passes half its
recent peak and falling where it passes half its recent dip.  p turns with every second half wave (one octave), or with
three out of four (two octaves: the half waves are turned up and then alternate in fours).
p waits for the next zero crossing of x, so that no step is added: y never jumps further than x does.
A sine of level A gives 8A/(3π), −1.4 dB, at half its frequency, and odd multiples of that.
g opens when |x| reaches the threshold and shuts when its peak, falling by 1/e in 50 ms, is 6 dB below: between notes
there is silence.
State: filter, last input, peaks, trigger, count, p, g.  Delay: none.
Limits: one note at a time, up to twice the cutoff.  Set it near the highest note you play; far above, strong overtones
can be counted as the fundamental.
Source: frequency division by a flip-flop behind a Schmitt trigger, common practice.  Filter: see rtfx.dsp.svf.
"""

from math import exp, sqrt

from rtfx.blocks.kind import Choice, Code, Parameter, kind
from rtfx.dsp.decibel import amplitude
from rtfx.dsp.settle import settle
from rtfx.dsp.smoothing import share
from rtfx.dsp.svf import coefficients, step
from rtfx.native.options import inlined

Q = sqrt(0.5)
MEMORY_S = 0.05  # how long a peak counts
OPENS_S, SHUTS_S = 0.002, 0.02
HYSTERESIS = 0.5  # of peaks: for the trigger, and for the gate


@inlined
def prepare(cutoff_hz, threshold_db, rate):
    """Return the filter, the fading of peaks, the level that opens, and the glides of the gate."""
    g, _, part = coefficients(cutoff_hz, Q, rate)
    fading = exp(-1.0 / (MEMORY_S * rate))
    return g, part, fading, amplitude(threshold_db), share(OPENS_S, rate), share(SHUTS_S, rate)


@inlined
def trigger(low, high, top, bottom):
    """Return 1 while the fundamental *low* is in its upper half, 0 in its lower; *high* is what it was before."""
    if high > 0.0:
        return 0.0 if low < HYSTERESIS * bottom else 1.0
    return 1.0 if low > HYSTERESIS * top else 0.0


@inlined
def gated(peak, opens, open_, gain, rise, fall):
    """Return whether the gate is open (1) or shut (0), and its gain."""
    if peak >= opens:
        open_ = 1.0
    elif peak < HYSTERESIS * opens:
        open_ = 0.0
    return open_, settle(gain, open_, rise if open_ > 0.0 else fall)


@inlined
def divided(
    x, g, part, fading, opens, rise, fall, group, at_end, within,
    s1, s2, top, bottom, high, count, last, polarity, turn, peak, open_, gain,
):  # fmt: skip
    """Return the output and the state; *turn* is multiplied by *at_end* after *group* half waves, else by *within*."""
    _, low, s1, s2 = step(x, g, part, s1, s2)
    top, bottom = max(low, top * fading), min(low, bottom * fading)
    before, high = high, trigger(low, high, top, bottom)
    if high != before:
        count += 1.0
        turn *= at_end if count == group else within
        count = 0.0 if count == group else count
    if x * last <= 0.0:
        polarity *= turn
        turn = 1.0
    peak = max(abs(x), peak * fading)
    open_, gain = gated(peak, opens, open_, gain, rise, fall)
    return x * polarity * gain, s1, s2, top, bottom, high, count, x, polarity, turn, peak, open_, gain


@inlined
def tick_one(x, g, part, fading, opens, rise, fall, s1, s2, top, bottom, high, count, last, polarity, turn, peak,
             open_, gain):  # fmt: skip
    return divided(x, g, part, fading, opens, rise, fall, 2.0, -1.0, 1.0,
                   s1, s2, top, bottom, high, count, last, polarity, turn, peak, open_, gain)  # fmt: skip


@inlined
def tick_two(x, g, part, fading, opens, rise, fall, s1, s2, top, bottom, high, count, last, polarity, turn, peak,
             open_, gain):  # fmt: skip
    return divided(x, g, part, fading, opens, rise, fall, 4.0, 1.0, -1.0,
                   s1, s2, top, bottom, high, count, last, polarity, turn, peak, open_, gain)  # fmt: skip


STAGE, STUDIO = 7, 16  # effective orders: they lead to 4 and 8 times oversampling at 48 kHz


def _bandwidth(setting, inputs):
    """7 times the bandwidth of its input, at studio 16 times: the corners where it turns."""
    return (STUDIO if setting.quality == "studio" else STAGE) * max(inputs.values())


_TICKS = {"one": tick_one, "two": tick_two}
_FLOATS = ("s1", "s2", "top", "bottom", "high", "count", "last")


@kind(
    "octave-divider",
    about="One or two octaves below a single note: the guitar itself, turned over in turns of its own waves.",
    ports=("x",),
    parameters=(
        Choice("octaves", tuple(_TICKS), "one", "how far down"),
        Parameter("cutoff", "Hz", 50.0, 2_000.0, 400.0, "log", "near the highest note you play"),
        Parameter("threshold", "dB", -80.0, 0.0, -50.0, about="peaks above this open it; below by 6 dB it shuts"),
    ),
    law="y = g·p·x; p = ±1 turns every 2 half waves of the fundamental (2 octaves: 3 times in 4), where x crosses 0",
    source="Flip-flop frequency division behind a Schmitt trigger, common practice.",
    bandwidth=_bandwidth,
    linear=False,
)
def octave_divider(setting):
    state = dict.fromkeys(_FLOATS, 0.0) | {"polarity": 1.0, "turn": 1.0, "peak": 0.0, "open": 0.0, "gain": 0.0}
    return Code(tick=_TICKS[setting.choices["octaves"]], prepare=prepare, coefficients=6, state=state)

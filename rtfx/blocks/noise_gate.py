"""Quiet between the notes: open while you play, shut when only noise is left.

    opens where |x| ≥ threshold; shuts when |x| has stayed below threshold − hysteresis for the hold time
    y = g · x,   g ← g + a (t − g)
    open: t = 1, a from the attack;   shut: t = 10^(floor/20), a from the release

Once open for 14 attacks g is exactly 1, and the signal passes to the last bit.
State: the gain g, and how many samples the gate stays open yet.  Delay: none.  It starts silent.
Limits: a hold shorter than half a period of the lowest note lets the gate flutter within the note.
Source: gate with hysteresis and hold, common practice.
"""

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.dsp.decibel import amplitude
from rtfx.dsp.settle import settle
from rtfx.dsp.smoothing import share
from rtfx.native.options import inlined


@inlined
def prepare(threshold_db, hysteresis_db, attack_s, hold_s, release_s, floor_db, rate):
    """Return the levels that open and that keep open, the hold in samples, the floor, and two glides."""
    opens, keeps = amplitude(threshold_db), amplitude(threshold_db - hysteresis_db)
    rise, fall = share(attack_s, rate), share(release_s, rate)
    return opens, keeps, hold_s * rate, amplitude(floor_db), rise, fall


@inlined
def tick(x, opens, keeps, hold, floor, rise, fall, gain, left):
    if abs(x) >= (keeps if left > 0.0 else opens):
        left = hold
    elif left > 0.0:
        left -= 1.0
    gain = settle(gain, 1.0, rise) if left > 0.0 else settle(gain, floor, fall)
    return x * gain, gain, left


@kind(
    "noise-gate",
    about="Quiet between the notes: shuts when you stop playing, opens when you pick.",
    ports=("x",),
    parameters=(
        Parameter("threshold", "dB", -100.0, 0.0, -60.0, about="peaks above this open it"),
        Parameter("hysteresis", "dB", 0.0, 20.0, 6.0, about="how far below that a note may fade"),
        Parameter("attack", "s", 0.0001, 0.1, 0.002, "log", "how fast it opens"),
        Parameter("hold", "s", 0.01, 2.0, 0.05, "log", "how long it stays open after the last peak"),
        Parameter("release", "s", 0.005, 5.0, 0.1, "log", "how slowly it shuts"),
        Parameter("floor", "dB", -100.0, 0.0, -80.0, about="how far down the sound is while it is shut"),
    ),
    law="y = g·x; g → 1 where |x| ≥ threshold, → 10^(floor/20) after |x| < threshold − hysteresis for hold",
    source="Gate with hysteresis and hold, common practice.",
    linear=False,
    base_rate_only=True,
)
def noise_gate(setting):
    return Code(tick=tick, prepare=prepare, coefficients=6, state={"gain": 0.0, "left": 0.0})

"""Loudness that swings, freely or in time with the patch's tempo.

    y = x · (1 − depth · (1 − m) / 2),   φ ← φ + speed/rate (mod 1)
    sine: m = cos 2πφ
    triangle: m = t,   t = 4 |φ − ½| − 1
    square: m = u (3 − u²) / 2,   u = t · steepness, held within ±1;   an edge takes 4 ms

At φ = 0 the sound is at its loudest, and as loud as it came in.  With `beat` set, a period is that note's length at the
patch's tempo: so many beats, of which 1/4 is one.
State: φ, and the beat's own step.  Delay: none.
Source: amplitude modulation by a slow wave; the edge is a cubic with level ends (common practice).
"""

from rtfx.blocks.kind import Choice, Code, Parameter, kind
from rtfx.dsp.sine import sine
from rtfx.native.options import inlined

BEATS = {"1/1": 4.0, "1/2": 2.0, "1/4": 1.0, "1/8": 0.5, "1/16": 0.25, "1/8 triplet": 1 / 3, "1/8 dotted": 0.75}
FREE = "free"
EDGE_S = 0.004
OVERTONES_HZ = 2_000.0  # above that an edge has nothing left that could be heard


@inlined
def prepare(speed_hz, depth, rate):
    """Return the step in cycles, half the depth, and the length of an edge in samples."""
    return speed_hz / rate, 0.5 * depth, EDGE_S * rate


@inlined
def onward(phase, step, beat):
    """Return the next phase: by the beat's step if there is one."""
    phase += beat if beat > 0.0 else step
    return phase - 1.0 if phase >= 1.0 else phase


@inlined
def tick_sine(x, step, half, edge, phase, beat):
    ahead = phase + 0.25
    m = sine(ahead if ahead < 1.0 else ahead - 1.0)
    return x * (1.0 - half * (1.0 - m)), onward(phase, step, beat), beat


@inlined
def tick_triangle(x, step, half, edge, phase, beat):
    m = 4.0 * abs(phase - 0.5) - 1.0
    return x * (1.0 - half * (1.0 - m)), onward(phase, step, beat), beat


@inlined
def tick_square(x, step, half, edge, phase, beat):
    t = 4.0 * abs(phase - 0.5) - 1.0
    steepness = 1.0 / (2.0 * edge * (beat if beat > 0.0 else step))
    u = min(max(t * steepness, -1.0), 1.0)
    m = u * (1.5 - 0.5 * u * u)
    return x * (1.0 - half * (1.0 - m)), onward(phase, step, beat), beat


def beat_hz(beat, tempo):
    """Return how many times a second the note *beat* fits at *tempo* (beats a minute)."""
    return tempo / 60.0 / BEATS[beat]


def _bandwidth(setting, inputs):
    """2 kHz more than its input: the overtones of the fastest edge."""
    return max(inputs.values()) + OVERTONES_HZ


_TICKS = {"sine": tick_sine, "triangle": tick_triangle, "square": tick_square}


@kind(
    "tremolo",
    about="Loudness that swings: soft or chopped, at a speed of its own or in time with the tempo.",
    ports=("x",),
    parameters=(
        Choice("wave", tuple(_TICKS), "sine", "how it swings; square has soft edges that do not click"),
        Choice("beat", (FREE, *BEATS), FREE, "a note's length at the patch's tempo; free: by speed"),
        Parameter("speed", "Hz", 0.05, 20.0, 5.0, "log", "swings a second, where beat is free"),
        Parameter("depth", "", 0.0, 1.0, 0.5, about="0: untouched, 1: down to silence"),
    ),
    law="y = x·(1 − depth·(1 − m)/2), m between −1 and 1: a sine, a triangle, or a square with edges of 4 ms",
    source="Amplitude modulation, common practice.",
    bandwidth=_bandwidth,
    linear=False,
)
def tremolo(setting):
    beat = setting.choices["beat"]
    step = 0.0 if beat == FREE else beat_hz(beat, setting.tempo) / setting.rate
    return Code(
        tick=_TICKS[setting.choices["wave"]], prepare=prepare, coefficients=3, state={"phase": 0.0, "beat": step}
    )

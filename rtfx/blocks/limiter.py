"""Never louder than the ceiling: the gain goes down before a peak arrives, and comes back by the release.

    g = min(1, ceiling / |x|),   m = least of the last L of g,   r = m or below, by the release
    y[n] = x[n − (L−1)] · mean of the last L of r,   L = lookahead · rate, at least 1

Every r in that mean has seen the peak, so |y| ≤ ceiling, exactly.  While nothing exceeds the ceiling and the
release is over (14 times its time), y is x to the last bit.  Lookahead 0 acts at once, with no delay.
State: place in the rings, r, and the sum of the last L of r.  Delay: L − 1 samples.
Gains are whole multiples of 2⁻⁴⁰: their running sum is exact and never drifts.
Limits: samples are bounded, not the curve between them; a ceiling that glides binds a sample as it comes in.
Source: P. Hämäläinen, "Smoothing of the control signal without clipped output in digital peak limiters",
DAFx-02, 2002 (from memory).
"""

from math import floor

import numpy as np

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.dsp.decibel import amplitude
from rtfx.dsp.running_minimum import running_minimum
from rtfx.dsp.settle import settle
from rtfx.dsp.smoothing import share
from rtfx.native.options import inlined

GRID = 2.0**40
BELOW = 1.0 - 2.0**-52  # keeps ceiling / |x| from being rounded up


@inlined
def window(lookahead_s, rate):
    """Return L, in samples."""
    return max(floor(lookahead_s * rate + 0.5), 1)


@inlined
def prepare(ceiling_db, lookahead_s, release_s, rate):
    return amplitude(ceiling_db), window(lookahead_s, rate), share(release_s, rate)


@inlined
def on_grid(gain):
    return floor(gain * GRID) / GRID


@inlined
def tick(x, memory, at, ceiling, length, release, place, gain, total):
    level = abs(x)
    needed = on_grid(ceiling * BELOW / level) if level > ceiling else 1.0
    least = running_minimum(memory, at, length, place, needed)
    gain = least if least < gain else on_grid(settle(gain, least, release))
    gains, signal = at + 2 * length, at + 3 * length
    total += gain - memory[gains + place]
    memory[gains + place] = gain
    memory[signal + place] = x
    place = place + 1 if place + 1 < length else 0
    return memory[signal + place] * (total / length), place, gain, total


@kind(
    "limiter",
    about="Never louder than the ceiling: turns peaks down just before they come, and leaves all else alone.",
    ports=("x",),
    parameters=(
        Parameter("ceiling", "dB", -40.0, 0.0, -1.0, about="the loudest that comes out"),
        Parameter("lookahead", "s", 0.0, 0.005, 0.001, about="how early it acts, and its delay", fixed=True),
        Parameter("release", "s", 0.01, 1.0, 0.1, "log", "how slowly it lets go after a peak"),
    ),
    law="y = x[n−(L−1)] · mean over L of r, r ≤ least over L of min(1, ceiling/|x|), L = lookahead·rate",
    source="P. Hämäläinen, DAFx-02, 2002 (from memory).",
    linear=False,
    base_rate_only=True,
)
def limiter(setting):
    length = window(setting.values["lookahead"], setting.rate)
    memory = np.concatenate([np.ones(3 * length), np.zeros(length)])
    state = {"place": 0, "gain": 1.0, "total": float(length)}
    return Code(tick=tick, prepare=prepare, coefficients=3, state=state, memory=memory, delay=length - 1)

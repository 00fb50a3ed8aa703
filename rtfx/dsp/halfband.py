"""Change the rate by two with a linear-phase halfband filter, sample by sample.

Up:    y[2n] = Σ 2 h[2k] x[n−k],  y[2n+1] = x[n − (N−3)/4]
Down:  y[n] = Σ h[2k] x[2n−2k] + ½ x[2n+1 − (N+1)/2]       (polyphase: the zero taps cost nothing)

N is the number of taps, 4m+3.  Delay: (N−1)/2 samples at the high rate, each way, at every frequency.
The filtered branch needs half the products, the other is a plain delay.
Source: polyphase halfband filters are common practice; the design is in rtfx.dsp.halfband_design.
"""

from dataclasses import dataclass
from functools import cache

import numpy as np

from rtfx.dsp.halfband_design import PASSBANDS, STAGES
from rtfx.dsp.halfband_taps import TAPS
from rtfx.native.lanes import LANES, spread
from rtfx.native.options import inlined
from rtfx.native.windows import down_many, past_size, up_many


@dataclass(frozen=True)
class Stage:
    """One change of the rate by two: its length N, and how its memory is laid out.

    The lowest stage has one sample a frame.  It runs in transposed form; its memory is: taps twice over, a 0-or-1 for
    each sum twice over, the running sums, a ring for the plain delay.  The others take all their samples of a frame
    at once (rtfx.native.windows); their memory is: the past, and the taps.
    """

    length: int
    passband: float
    many: int
    """Samples at the low rate in one frame of the patch."""

    @property
    def taps(self):
        """Number of taps of the filtered branch."""
        return (self.length + 1) // 2

    @property
    def period(self):
        """Number of running sums: the filtered branch's taps, filled up to whole vectors."""
        return -(-self.taps // LANES) * LANES

    @property
    def ring(self):
        """Length of the plain delay's ring, a power of two."""
        return 1 << ((self.length + 1) // 4).bit_length()

    def late(self, way):
        """Return the plain delay in samples at the low rate, for *way* "up" or "down"."""
        return (self.length - 3) // 4 if way == "up" else (self.length + 1) // 4

    def memory(self, way):
        """Return the first content of the stage's memory; going up, the taps make good for the zeros put in."""
        taps = np.array(TAPS[self.length, self.passband]) * (2.0 if way == "up" else 1.0)
        if self.many == 1:
            taps = np.concatenate([taps, np.zeros(self.period - self.taps)])
            keep = np.ones(self.period)
            keep[-1] = 0.0
            return np.concatenate([taps, taps, keep, keep, np.zeros(self.period + self.ring)])
        past = past_size(self.taps - 1, self.many)
        if way == "down":
            past += past_size(self.late("down"), self.many)
        return np.concatenate([np.zeros(past), taps])

    def call(self, way):
        """Return the function that does it, and what it is given between its memory and its samples."""
        if self.many == 1:
            return (up if way == "up" else down), (self.period, self.ring, self.late(way), "clock")
        return (up_many if way == "up" else down_many), (self.taps, self.late(way), self.many, "clock")


@cache
def stages(rate, factor, quality):
    """Return the stages from *rate* (Hz) up to *factor* times it, lowest first."""
    first = 0 if rate < 80_000 else 1 if rate < 160_000 else 2
    count = factor.bit_length() - 1
    places = [min(first + i, len(PASSBANDS) - 1) for i in range(count)]
    return tuple(Stage(STAGES[quality][p], PASSBANDS[p], 1 << i) for i, p in enumerate(places))


def delay_one_way(chain):
    """Return the delay of going all the way up (or down), in samples at the highest rate."""
    top = 1 << len(chain)
    return sum((stage.length - 1) // 2 * (top >> (i + 1)) for i, stage in enumerate(chain))


@inlined
def filtered(memory, at, period, clock, x):
    """Take *x* into the filtered branch and return what comes out; *clock* counts its inputs."""
    now = clock % period
    spread(memory, at + 4 * period, at + period - now, at + 3 * period - now, x, period // LANES)
    return memory[at + 4 * period + now]


@inlined
def up(memory, at, period, ring, late, clock, low, high):
    """Read one sample at memory[low] and write two at memory[high:]."""
    rings = at + 5 * period
    x = memory[low]
    memory[rings + (clock & (ring - 1))] = x
    memory[high] = filtered(memory, at, period, clock, x)
    memory[high + 1] = memory[rings + ((clock - late) & (ring - 1))]


@inlined
def down(memory, at, period, ring, late, clock, high, low):
    """Read two samples at memory[high:] and write one at memory[low]."""
    rings = at + 5 * period
    plain = 0.5 * memory[rings + ((clock - late) & (ring - 1))]
    memory[rings + (clock & (ring - 1))] = memory[high + 1]
    memory[low] = filtered(memory, at, period, clock, memory[high]) + plain

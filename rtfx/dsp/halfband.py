"""Change the rate by two with a linear-phase halfband filter, sample by sample.

Up:    y[2n] = Σ 2 h[2k] x[n−k],  y[2n+1] = x[n − (N−3)/4]
Down:  y[n] = Σ h[2k] x[2n−2k] + ½ x[2n+1 − (N+1)/2]       (polyphase: the zero taps cost nothing)

N is the number of taps, 4m+3.  Delay: (N−1)/2 samples at the high rate, each way, at every frequency.
The filtered branch runs in transposed form (see rtfx.native.lanes), the other is a plain delay.
Source: polyphase halfband filters are common practice; the design is in rtfx.dsp.halfband_design.
"""

from dataclasses import dataclass
from functools import cache

import numpy as np

from rtfx.dsp.halfband_design import PASSBANDS, STAGES
from rtfx.dsp.halfband_taps import TAPS
from rtfx.native.lanes import LANES, spread
from rtfx.native.options import inlined


@dataclass(frozen=True)
class Stage:
    """One change of the rate by two: its length N and where things lie in its memory.

    Memory: taps twice over, a 0-or-1 for each sum twice over, the running sums, a ring for the plain delay.
    """

    length: int
    passband: float
    many: int
    """Samples at the low rate in one frame of the patch."""

    @property
    def period(self):
        """Number of running sums: the filtered branch's taps, filled up to whole vectors."""
        return -(-((self.length + 1) // 2) // LANES) * LANES

    @property
    def ring(self):
        """Length of the plain delay's ring, a power of two."""
        return 1 << ((self.length + 1) // 4 + self.many).bit_length()

    def memory(self, gain):
        """Return the first content of the stage's memory, with its taps multiplied by *gain*."""
        taps = np.zeros(self.period)
        taps[: (self.length + 1) // 2] = TAPS[self.length, self.passband]
        keep = np.ones(self.period)
        keep[-1] = 0.0
        return np.concatenate([gain * taps, gain * taps, keep, keep, np.zeros(self.period + self.ring)])


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
def filtered(memory, at, period, place, x):
    """Take *x* into the filtered branch and return what comes out; *place* counts its inputs."""
    now = place % period
    spread(memory, at + 4 * period, at + period - now, at + 3 * period - now, x, period // LANES)
    return memory[at + 4 * period + now]


@inlined
def up(memory, at, period, ring, late, many, clock, low, high):
    """Read *many* samples at memory[low:] and write twice as many at memory[high:]."""
    rings = at + 5 * period
    for j in range(many):
        place = clock * many + j
        x = memory[low + j]
        memory[rings + (place & (ring - 1))] = x
        memory[high + 2 * j] = filtered(memory, at, period, place, x)
        memory[high + 2 * j + 1] = memory[rings + ((place - late) & (ring - 1))]


@inlined
def down(memory, at, period, ring, late, many, clock, high, low):
    """Read twice *many* samples at memory[high:] and write *many* at memory[low:]."""
    rings = at + 5 * period
    for j in range(many):
        place = clock * many + j
        plain = 0.5 * memory[rings + ((place - late) & (ring - 1))]
        memory[rings + (place & (ring - 1))] = memory[high + 2 * j + 1]
        memory[low + j] = filtered(memory, at, period, place, memory[high + 2 * j]) + plain

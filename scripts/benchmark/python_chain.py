"""The same three graphs as a chain of numpy and scipy calls a block, as a Python user would write them."""

import numpy as np
from scipy.signal import lfilter, upfirdn

from rtfx.dsp.halfband_design import full


class Fir:
    """One change of the rate by two, block by block."""

    def __init__(self, taps, up):
        self.taps, self.up = (2 if up else 1) * full(taps), up
        self.kept = np.zeros(len(taps) if up else 2 * len(taps))

    def __call__(self, x):
        joined = np.concatenate([self.kept, x])
        self.kept = joined[len(x) :]
        start = len(joined) - len(x)
        if self.up:
            return upfirdn(self.taps, joined, up=2)[2 * start : 2 * len(joined)]
        return upfirdn(self.taps, joined, down=2)[start // 2 : len(joined) // 2]


class Chain:
    """Sine carrier, smooth clip and filters with their state."""

    def __init__(self, numbers, taps):
        self.c = numbers
        self.ups, self.downs = [Fir(t, True) for t in taps], [Fir(t, False) for t in reversed(taps)]
        self.phase, self.last = 0.0, 0.0
        self.averages, self.pad, self.dry = np.zeros(2), np.zeros(5), np.zeros(47)
        self.high, self.low = self._biquad(numbers[3:5], True), self._biquad(numbers[5:7], False)
        self.z = [np.zeros(2), np.zeros(2)]

    @staticmethod
    def _biquad(gk, high):
        g, k = gk
        d = 1 + g * (g + k)
        a = np.array([1, 2 * (g * g - 1) / d, (1 + g * (g - k)) / d])
        return (np.array([1, -2, 1]) / d if high else np.array([1, 2, 1]) * g * g / d), a

    def carrier(self, n, step):
        phase = self.phase + step * np.arange(n)
        self.phase = (self.phase + step * n) % 1.0
        return np.sin(2 * np.pi * phase)

    def clip(self, x):
        v = x * self.c[1]
        points = np.empty(2 * len(v) + 1)
        points[0], points[2::2] = self.last, v
        points[1::2] = 0.5 * (points[0:-1:2] + points[2::2])
        root = np.sqrt(1 + points * points)
        a = np.concatenate([self.averages, (points[1:] + points[:-1]) / (root[1:] + root[:-1])])
        self.last, self.averages = v[-1], a[-2:]
        return (a[0:-2:2] + 3 * (a[1:-2:2] + a[2::2]) + a[3::2]) / 8

    def driven(self, x):
        for fir in self.ups:
            x = fir(x)
        x = np.concatenate([self.pad, self.clip(x)])
        self.pad, x = x[-5:], x[:-5]
        for fir in self.downs:
            x = fir(x)
        return x * self.carrier(len(x), self.c[0])

    def balanced(self, x):
        return x * self.carrier(len(x), self.c[0])

    def driven_balanced(self, x):
        return self.driven(x)

    def six_blocks(self, x):
        thin, self.z[0] = lfilter(*self.high, x, zi=self.z[0])
        wet = self.driven(thin)
        dry = np.concatenate([self.dry, x])
        self.dry = dry[-47:]
        out, self.z[1] = lfilter(*self.low, (1 - self.c[2]) * dry[: len(x)] + self.c[2] * wet, zi=self.z[1])
        return out

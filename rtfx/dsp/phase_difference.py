"""Two outputs a quarter turn apart, at all frequencies of a band: what single-sideband modulation needs.

    a section: H = (c + z⁻¹) / (1 + c z⁻¹),   c = (w − 1) / (w + 1)
    w_m = tan(π · low / rate) · sc((2m + 1) K′ / 2n, k′),   m = 0 … n − 1,   n = 16
    k = tan(π · low / rate) / tan(π · high / rate),   k′² = 1 − k²,   K = K(k),   K′ = K(k′)

Even m form one chain of all-passes, odd m the other.  The difference of their phases leaves 90° by equal
ripples from 30 Hz to 20 kHz (18.4 kHz at 44.1 kHz); the wrong sideband is down to 2 exp(−n π K / K′) at most:
−70.7 dB at 48 kHz, −71.4 dB at 44.1 kHz, and less at every higher rate.
Delay: that of the all-passes, the same in both chains: 4.5 ms at 82 Hz, 1.0 ms at 440 Hz, 0.1 ms at 5 kHz.
Source: S. Darlington, "Realization of a constant phase difference", Bell System Technical Journal 29, 1950; R. Ansari,
"IIR discrete-time Hilbert transformers", IEEE Trans. ASSP 35(8), 1987 (both from memory).
"""

from math import pi, tan

import numpy as np

from rtfx.native.options import inlined

LOWEST_HZ = 30.0
HIGHEST_HZ = 20_000.0
PAIRS = 8  # sections in each chain
WORDS = 4  # of a pair: two coefficients, two last outputs


def band(rate):
    """Return the edges in Hz between which the two outputs stand at right angles; *rate* in Hz."""
    return LOWEST_HZ, min(HIGHEST_HZ, rate * 20 / 48)


def corners(rate):
    """Return the w of all sections, ndarray of shape (2 · PAIRS,), rising."""
    from scipy.special import ellipj, ellipkm1

    low, high = (tan(pi * edge / rate) for edge in band(rate))
    square, n = (low / high) ** 2, 2 * PAIRS
    sn, cn, _, _ = ellipj((2 * np.arange(n) + 1) * ellipkm1(square) / (2 * n), 1.0 - square)
    return low * sn / cn


def memory_for(rate):
    """Return the first memory that `split` needs: its last input, and the pairs."""
    w = corners(rate)
    pairs = np.zeros((PAIRS, WORDS))
    pairs[:, :2] = ((w - 1.0) / (w + 1.0)).reshape(PAIRS, 2)
    return np.concatenate([np.zeros(1), pairs.ravel()])


@inlined
def split(memory, at, x):
    """Return *x* through the two chains; the second output leads the first by 90°."""
    first, second, first_before, second_before = x, x, memory[at], memory[at]
    memory[at] = x
    for i in range(PAIRS):
        pair = at + 1 + WORDS * i
        c, d, first_last, second_last = memory[pair], memory[pair + 1], memory[pair + 2], memory[pair + 3]
        first = (first_before - c * first_last) + c * first
        second = (second_before - d * second_last) + d * second
        memory[pair + 2], memory[pair + 3] = first, second
        first_before, second_before = first_last, second_last
    return first, second

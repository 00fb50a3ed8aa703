"""Convolution with a long response, with no added delay and the same little work in every sample.

The first 2N taps run as a direct-form filter (transposed, see rtfx.native.lanes).  The rest is cut into parts of N
taps, and each block of N input samples goes through all of them in the frequency domain (overlap-save, a ring of
past spectra).  While one block of samples comes in, the work on the block before it is done in small shares, and its
result is heard one block later: that is what the direct taps make up for.

Work in one block, in order: the forward transform, the products, the inverse transform; each a list of small steps
of which a fixed number is done in every sample.
Source: W. G. Gardner, "Efficient convolution without input-output delay", JAES 43(3), 1995 (from memory); radix-2
transform by Cooley and Tukey, 1965.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from rtfx.native.lanes import LANES, spread
from rtfx.native.options import inlined

BLOCK = 512
SIZE = 2 * BLOCK
HEAD = 2 * BLOCK
STAGES = SIZE.bit_length() - 1
TRANSFORM = SIZE + STAGES * BLOCK  # steps of one transform: the loading, then the butterflies
BINS = BLOCK + 1

# Layout of the tail's memory, before the parts: twiddles, order of loading, two transforms, input ring, output.
COS, SIN, ORDER = 0, BLOCK, SIZE
FORWARD, INVERSE = ORDER + SIZE, ORDER + 3 * SIZE
INPUT, OUTPUT = INVERSE + 2 * SIZE, INVERSE + 4 * SIZE
SUMS = OUTPUT + 4 * BLOCK  # the products' sums: left and right, real and imaginary, a bin
PAST = SUMS + 4 * BINS


@dataclass(frozen=True)
class Shares:
    """How many steps of each kind are done in every sample of its stretch, and where the stretches begin."""

    transform: int
    bins: int
    products_from: int
    inverse_from: int


def shares(parts: int) -> Shares:
    """Divide a block of samples among the three kinds of work by what they cost."""
    transform, products = 5.0 * TRANSFORM, 2.0 * parts * BINS
    stretch = max(int(BLOCK * transform / (2 * transform + products)), 32)
    middle = BLOCK - 2 * stretch
    return Shares(-(-TRANSFORM // stretch), -(-BINS // middle), stretch, BLOCK - stretch)


def head_memory(taps: np.ndarray) -> np.ndarray:
    """Return the first content of a direct-form filter: taps twice over, 0-or-1 twice over, the running sums."""
    period = -(-len(taps) // LANES) * LANES
    filled = np.concatenate([taps, np.zeros(period - len(taps))])
    keep = np.ones(period)
    keep[-1] = 0.0
    return np.concatenate([filled, filled, keep, keep, np.zeros(period)])


@inlined
def head(memory, at, period, clock, x):
    """Take *x* in and return what the direct-form filter of *period* taps gives; *clock* counts its inputs."""
    now = clock % period
    spread(memory, at + 4 * period, at + period - now, at + 3 * period - now, x, period // LANES)
    return memory[at + 4 * period + now]


def tail_memory(responses: np.ndarray) -> np.ndarray:
    """Return the first content of the tail's memory for *responses*, shape (1 or 2, taps), which begin at tap 2N.

    For each bin and channel the parts' spectra lie side by side, as do the past spectra of the input.
    """
    channels, taps = responses.shape
    parts = -(-taps // BLOCK)
    padded = np.zeros((channels, parts, SIZE))
    padded[:, :, :BLOCK] = np.pad(responses, ((0, 0), (0, parts * BLOCK - taps))).reshape(channels, parts, BLOCK)
    spectra = np.fft.rfft(padded, axis=2).transpose(0, 2, 1)
    numbers = np.stack([spectra.real, spectra.imag], axis=3).ravel()
    memory = np.zeros(PAST + 2 * BINS * parts + numbers.size)
    turn = 2 * np.pi * np.arange(BLOCK) / SIZE
    memory[COS : COS + BLOCK], memory[SIN : SIN + BLOCK] = np.cos(turn), np.sin(turn)
    memory[ORDER : ORDER + SIZE] = [int(f"{i:0{STAGES}b}"[::-1], 2) for i in range(SIZE)]
    memory[PAST + 2 * BINS * parts :] = numbers
    return memory


@inlined
def butterfly(memory, at, data, step, sign):
    """Do butterfly *step* of a radix-2 transform of the complex numbers at *data*; *sign* -1 forward, 1 back."""
    stage, which = step // BLOCK, step % BLOCK
    half = 1 << stage
    inside = which & (half - 1)
    low = data + 2 * (((which - inside) << 1) + inside)
    high = low + 2 * half
    turn = inside * (BLOCK // half)
    c, s = memory[at + COS + turn], sign * memory[at + SIN + turn]
    real = c * memory[high] - s * memory[high + 1]
    imaginary = c * memory[high + 1] + s * memory[high]
    memory[high], memory[high + 1] = memory[low] - real, memory[low + 1] - imaginary
    memory[low], memory[low + 1] = memory[low] + real, memory[low + 1] + imaginary


@inlined
def forward_step(memory, at, step, block):
    """Load a sample of the two newest whole blocks in the transform's order, or do a butterfly."""
    if step < SIZE:
        source = int(memory[at + ORDER + step])
        begin = (block + 2) * BLOCK  # block - 2, in a ring of four
        memory[at + FORWARD + 2 * step] = memory[at + INPUT + ((begin + source) & (4 * BLOCK - 1))]
        memory[at + FORWARD + 2 * step + 1] = 0.0
    elif step < TRANSFORM:
        butterfly(memory, at, at + FORWARD, step - SIZE, -1.0)


@inlined
def product_sum(memory, past, spectrum, parts, newest):
    """Sum of each part's number times the past one it belongs to; both lie in rows of *parts* complex numbers."""
    real, imaginary = 0.0, 0.0
    for part in range(parts):
        back = newest - part if newest >= part else newest - part + parts
        xr, xi = memory[past + 2 * back], memory[past + 2 * back + 1]
        hr, hi = memory[spectrum + 2 * part], memory[spectrum + 2 * part + 1]
        real += xr * hr - xi * hi
        imaginary += xr * hi + xi * hr
    return real, imaginary


@inlined
def product_step(memory, at, bin_, parts, stereo, newest):
    """Put the newest spectrum's number of one bin into the past, and sum the products of that bin."""
    past = at + PAST + 2 * bin_ * parts
    memory[past + 2 * newest] = memory[at + FORWARD + 2 * bin_]
    memory[past + 2 * newest + 1] = memory[at + FORWARD + 2 * bin_ + 1]
    spectra = at + PAST + 2 * BINS * parts
    sums = at + SUMS + 4 * bin_
    memory[sums], memory[sums + 1] = product_sum(memory, past, spectra + 2 * bin_ * parts, parts, newest)
    if stereo > 0:
        right = spectra + 2 * (BINS + bin_) * parts
        memory[sums + 2], memory[sums + 3] = product_sum(memory, past, right, parts, newest)


@inlined
def inverse_step(memory, at, step):
    """Load left + i·right of one bin (of the mirrored half: conjugates) in the transform's order, or do a butterfly."""
    if step < SIZE:
        bin_ = int(memory[at + ORDER + step])
        mirror = -1.0 if bin_ > BLOCK else 1.0
        sums = at + SUMS + 4 * (bin_ if bin_ <= BLOCK else SIZE - bin_)
        memory[at + INVERSE + 2 * step] = memory[sums] - mirror * memory[sums + 3]
        memory[at + INVERSE + 2 * step + 1] = mirror * memory[sums + 1] + memory[sums + 2]
    elif step < TRANSFORM:
        butterfly(memory, at, at + INVERSE, step - SIZE, 1.0)


@inlined
def work(memory, at, n, block, parts, stereo, transform, bins, products_from, inverse_from):
    """Do the share of sample *n* of a block: see `Shares`."""
    if n < products_from:
        for i in range(transform):
            forward_step(memory, at, n * transform + i, block)
    elif n < inverse_from:
        first = (n - products_from) * bins
        for i in range(bins):
            if first + i < BINS:
                product_step(memory, at, first + i, parts, stereo, block % parts)
    else:
        for i in range(transform):
            inverse_step(memory, at, (n - inverse_from) * transform + i)


@inlined
def tail(memory, at, x, n, block, parts, stereo, transform, bins, products_from, inverse_from):
    """Take *x* in as sample *n* of *block* and return (left, right) of the tail."""
    memory[at + INPUT + ((block * BLOCK + n) & (4 * BLOCK - 1))] = x
    heard = at + OUTPUT + 2 * (BLOCK * (block & 1) + n)
    left, right = memory[heard], memory[heard + 1]
    work(memory, at, n, block, parts, stereo, transform, bins, products_from, inverse_from)
    if n == BLOCK - 1:
        ready = at + OUTPUT + 2 * BLOCK * ((block + 1) & 1)
        for i in range(2 * BLOCK):
            memory[ready + i] = memory[at + INVERSE + 2 * BLOCK + i] / SIZE
    return left, right

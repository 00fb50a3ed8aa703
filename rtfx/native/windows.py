"""FIR filters over several samples at once, one lane a sample, in an order that is the same on every machine.

A window of k samples back is cut out of two neighbouring vectors, so that the newest samples, which are still on
their way to memory, are never read with another width than they were written with: that would stall the processor.
"""

from __future__ import annotations

from llvmlite import ir
from numba import config, types
from numba.extending import intrinsic

from rtfx.native.options import f64p

_I64, _I32, _DOUBLE = ir.IntType(64), ir.IntType(32), ir.DoubleType()


class _Vectors:
    """Loads, stores and cuts of vectors of *width* doubles in the block of memory at *base*."""

    def __init__(self, builder, base, width):
        self.builder, self.base, self.width = builder, base, width

    def _at(self, index, offset, width):
        place = self.builder.add(index, ir.Constant(_I64, offset))
        vector = ir.VectorType(_DOUBLE, width)
        return self.builder.bitcast(self.builder.gep(self.base, [place]), vector.as_pointer())

    def load(self, index, offset=0, width=None):
        return self.builder.load(self._at(index, offset, width or self.width), align=8)

    def gather(self, index, first=0, step=1):
        """A vector of numbers that lie *step* apart, each read by itself.

        They were written one by one just before; one wide load of them would have to wait until all those stores are
        done.  Atomic loads keep LLVM from making that of it.
        """
        vector = ir.Constant(ir.VectorType(_DOUBLE, self.width), ir.Undefined)
        for lane in range(self.width):
            place = self.builder.add(index, ir.Constant(_I64, first + step * lane))
            number = self.builder.load_atomic(self.builder.gep(self.base, [place]), "monotonic", 8)
            vector = self.builder.insert_element(vector, number, ir.Constant(_I32, lane))
        return vector

    def store(self, value, index, offset=0, width=None):
        self.builder.store(value, self._at(index, offset, width or self.width), align=8)

    def everywhere(self, number):
        vector = ir.Constant(ir.VectorType(_DOUBLE, self.width), ir.Undefined)
        one = self.builder.insert_element(vector, number, ir.Constant(_I32, 0))
        return self.cut(one, one, [0] * self.width)

    def number(self, index, offset):
        return self.builder.load(self.builder.gep(self.base, [self.builder.add(index, ir.Constant(_I64, offset))]))

    def cut(self, first, second, places):
        mask = ir.Constant(ir.VectorType(_I32, len(places)), places)
        return self.builder.shuffle_vector(first, second, mask)

    def history(self, newest, index, count, clock):
        """The newest vector and *count* older ones, from a ring in memory in which the newest takes its place.

        The ring is written twice over, so that the past lies in one piece wherever it starts; nothing is moved, and so
        every vector is read with the width with which it was written.
        """
        ring = ring_of(count)
        now = self.builder.and_(clock, ir.Constant(_I64, ring - 1))
        now = self.builder.add(index, self.builder.mul(now, ir.Constant(_I64, self.width)))
        older = [self.load(now, (ring - i) * self.width) for i in range(1, count + 1)]
        self.store(newest, now)
        self.store(newest, now, ring * self.width)
        return [newest, *older]

    def window(self, vectors, back):
        """The vector of samples *back* samples earlier than the newest vector."""
        whole, rest = divmod(back, self.width)
        if not rest:
            return vectors[whole]
        start = self.width - rest
        return self.cut(vectors[whole + 1], vectors[whole], list(range(start, start + self.width)))

    def filtered(self, vectors, taps_at, taps):
        """Sum of tap k times the window k samples back, in pairs."""
        window = [self.window(vectors, k) for k in range(taps)]
        terms = [self.builder.fmul(self.everywhere(self.number(taps_at, k)), window[k]) for k in range(taps)]
        return in_pairs(terms, self.builder.fadd)


def in_pairs(terms, add):
    """Add neighbours, then neighbouring sums, and so on: a fixed order that leaves the processor little to wait for."""
    while len(terms) > 1:
        pairs = [add(a, b) for a, b in zip(terms[::2], terms[1::2], strict=False)]
        terms = [*pairs, *terms[2 * len(pairs) :]]
    return terms[0]


def ring_of(count: int) -> int:
    """Return the length, a power of two, of a ring that holds the newest vector and *count* older ones."""
    return 1 << count.bit_length()


def past_size(samples: int, many: int) -> int:
    """Return how many doubles it takes to look *samples* samples back, *many* at a time."""
    return 2 * ring_of(vectors_back(samples, many)) * many


def vectors_back(samples: int, many: int) -> int:
    """Return how many vectors of *many* samples reach *samples* back."""
    return -(-samples // many)


def _literals(*arguments):
    return all(isinstance(a, types.IntegerLiteral) for a in arguments)


@intrinsic(prefer_literal=True)
def _up_many(typing_context, memory, at, taps, late, many, clock, low, high):
    if not _literals(taps, late, many):
        return None
    t, behind, width = taps.literal_value, late.literal_value, many.literal_value
    signature = types.void(f64p, types.int64, taps, late, many, types.int64, types.int64, types.int64)

    def generate(context, builder, signature, args):
        base, at, _, _, _, clock, low, high = args
        v = _Vectors(builder, base, width)
        vectors = v.history(v.gather(low), at, vectors_back(t - 1, width), clock)
        taps_at = builder.add(at, ir.Constant(_I64, past_size(t - 1, width)))
        even, odd = v.filtered(vectors, taps_at, t), v.window(vectors, behind)
        both = v.cut(even, odd, [i // 2 + (i % 2) * width for i in range(2 * width)])
        v.store(both, high, width=2 * width)
        return context.get_dummy_value()

    return signature, generate


@intrinsic(prefer_literal=True)
def _down_many(typing_context, memory, at, taps, late, many, clock, high, low):
    if not _literals(taps, late, many):
        return None
    t, behind, width = taps.literal_value, late.literal_value, many.literal_value
    signature = types.void(f64p, types.int64, taps, late, many, types.int64, types.int64, types.int64)

    def generate(context, builder, signature, args):
        base, at, _, _, _, clock, high, low = args
        v = _Vectors(builder, base, width)
        even, odd = v.gather(high, 0, 2), v.gather(high, 1, 2)
        evens = v.history(even, at, vectors_back(t - 1, width), clock)
        odd_at = builder.add(at, ir.Constant(_I64, past_size(t - 1, width)))
        odds = v.history(odd, odd_at, vectors_back(behind, width), clock)
        taps_at = builder.add(odd_at, ir.Constant(_I64, past_size(behind, width)))
        plain = builder.fmul(v.everywhere(ir.Constant(_DOUBLE, 0.5)), v.window(odds, behind))
        v.store(builder.fadd(v.filtered(evens, taps_at, t), plain), low)
        return context.get_dummy_value()

    return signature, generate


def _history_in_python(newest, memory, at, samples, clock):
    """The newest samples and the past, newest first."""
    many = len(newest)
    ring = ring_of(vectors_back(samples, many)) * many
    for j in range(many):
        memory[at + (clock * many + j) % ring] = newest[j]
    last = clock * many + many - 1
    return [memory[at + (last - i) % ring] for i in range(samples + many)]


def _filtered_in_python(samples, memory, at, taps, many, j):
    return in_pairs([memory[at + k] * samples[many - 1 - j + k] for k in range(taps)], lambda a, b: a + b)


def _up_in_python(memory, at, taps, late, many, clock, low, high):
    newest = [memory[low + j] for j in range(many)]
    samples = _history_in_python(newest, memory, at, taps - 1, clock)
    taps_at = at + past_size(taps - 1, many)
    for j in range(many):
        memory[high + 2 * j] = _filtered_in_python(samples, memory, taps_at, taps, many, j)
        memory[high + 2 * j + 1] = samples[many - 1 - j + late]


def _down_in_python(memory, at, taps, late, many, clock, high, low):
    evens = [memory[high + 2 * j] for j in range(many)]
    odds = [memory[high + 2 * j + 1] for j in range(many)]
    odd_at = at + past_size(taps - 1, many)
    evens, odds = (_history_in_python(*a, clock) for a in ((evens, memory, at, taps - 1), (odds, memory, odd_at, late)))
    for j in range(many):
        filtered = _filtered_in_python(evens, memory, odd_at + past_size(late, many), taps, many, j)
        memory[low + j] = filtered + 0.5 * odds[many - 1 - j + late]


up_many = _up_in_python if config.DISABLE_JIT else _up_many
"""``up_many(memory, at, taps, late, many, clock, low, high)``: twice the rate, *many* samples at a time.

memory[at:] holds the past and then the taps; the even outputs are filtered, the odd ones are the input *late*
samples earlier; *clock* counts the calls.  *taps*, *late* and *many* must be written as numbers where it is called.
"""
down_many = _down_in_python if config.DISABLE_JIT else _down_many
"""``down_many(memory, at, taps, late, many, clock, high, low)``: half the rate, in the same way."""

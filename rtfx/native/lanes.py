"""Vector arithmetic with a fixed order, so that every machine gives the same bits.

LLVM may not reorder floating-point sums, and so cannot vectorise a dot product by itself.  The transposed form
of a FIR filter needs no reordering: each input is spread over the sums it belongs to, one lane a sum.
"""

from llvmlite import ir
from numba import config, types
from numba.core import cgutils
from numba.extending import intrinsic

from rtfx.native.options import f64p

LANES = 8
"""Doubles a vector; LLVM splits it where the machine has narrower registers."""

_I64 = ir.IntType(64)
_I32 = ir.IntType(32)
_VECTOR = ir.VectorType(ir.DoubleType(), LANES)


def _on_every_lane(builder, x):
    lane0 = builder.insert_element(ir.Constant(_VECTOR, ir.Undefined), x, ir.Constant(_I32, 0))
    return builder.shuffle_vector(lane0, lane0, ir.Constant(ir.VectorType(_I32, LANES), [0] * LANES))


@intrinsic
def _spread(typing_context, memory, sums, taps, keep, x, vectors):
    signature = types.void(f64p, types.int64, types.int64, types.int64, types.float64, types.int64)

    def generate(context, builder, signature, args):
        base, sums, taps, keep, x, vectors = args
        xs = _on_every_lane(builder, x)

        def vector_at(index, offset):
            pointer = builder.gep(base, [builder.add(index, offset)])
            return builder.bitcast(pointer, _VECTOR.as_pointer())

        with cgutils.for_range(builder, vectors) as loop:
            offset = builder.mul(loop.index, ir.Constant(_I64, LANES))
            at = vector_at(sums, offset)
            kept = builder.fmul(builder.load(at, align=8), builder.load(vector_at(keep, offset), align=8))
            new = builder.fmul(builder.load(vector_at(taps, offset), align=8), xs)
            builder.store(builder.fadd(kept, new), at, align=8)
        return context.get_dummy_value()

    return signature, generate


def _spread_in_python(memory, sums, taps, keep, x, vectors):
    for j in range(vectors * LANES):
        memory[sums + j] = memory[sums + j] * memory[keep + j] + memory[taps + j] * x


spread = _spread_in_python if config.DISABLE_JIT else _spread
"""``spread(memory, sums, taps, keep, x, vectors)``: sums[j] = sums[j] · keep[j] + taps[j] · x, for each lane j.

*sums*, *taps* and *keep* are offsets into *memory*; *vectors* counts groups of `LANES` doubles.
"""

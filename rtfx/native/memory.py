"""Reach memory from kernels: pointers held in memory, and loads and stores with a stated ordering.

numba has no atomics for CPU memory, and pointer arithmetic on integers may be miscompiled once inlined, so
pointers are loaded as pointers and indexed, never computed from integers.
"""

from llvmlite import ir
from numba import types
from numba.extending import intrinsic

from rtfx.native.options import f32p, f64p, i64p

_I64 = ir.IntType(64)


def _pointer_loader(pointee):
    """Return an intrinsic ``load(words, index)``: the pointer kept in word *index*, with acquire ordering."""

    @intrinsic
    def load(typing_context, words, index):
        def generate(context, builder, signature, args):
            pointer_type = context.get_value_type(pointee)
            slot = builder.bitcast(builder.gep(args[0], [args[1]]), pointer_type.as_pointer())
            return builder.load_atomic(slot, "acquire", 8)

        return pointee(i64p, types.int64), generate

    return load


load_f32p = _pointer_loader(f32p)
load_f64p = _pointer_loader(f64p)
load_i64p = _pointer_loader(i64p)


@intrinsic
def as_f64p(typing_context, words):
    """View the same words as doubles."""

    def generate(context, builder, signature, args):
        return builder.bitcast(args[0], context.get_value_type(f64p))

    return f64p(i64p), generate


@intrinsic
def as_f32p(typing_context, words):
    """View the same words as floats, two to a word."""

    def generate(context, builder, signature, args):
        return builder.bitcast(args[0], context.get_value_type(f32p))

    return f32p(i64p), generate


@intrinsic
def load_acquire(typing_context, words, index):
    """Read word *index*: nothing after it is read earlier than it."""

    def generate(context, builder, signature, args):
        return builder.load_atomic(builder.gep(args[0], [args[1]]), "acquire", 8)

    return types.int64(i64p, types.int64), generate


@intrinsic
def store_release(typing_context, words, index, value):
    """Write word *index*: everything written before it is seen by whoever acquires it."""

    def generate(context, builder, signature, args):
        builder.store_atomic(args[2], builder.gep(args[0], [args[1]]), "release", 8)
        return context.get_dummy_value()

    return types.void(i64p, types.int64, types.int64), generate


@intrinsic
def float_at(typing_context, floats, index):
    """Pointer to float *index*, so that a kernel can be handed the rest of a buffer."""

    def generate(context, builder, signature, args):
        return builder.gep(args[0], [args[1]])

    return f32p(f32p, types.int64), generate


@intrinsic
def double_at(typing_context, doubles, index):
    """Pointer to double *index*."""

    def generate(context, builder, signature, args):
        return builder.gep(args[0], [args[1]])

    return f64p(f64p, types.int64), generate


@intrinsic
def word_at(typing_context, words, index):
    """Pointer to word *index*."""

    def generate(context, builder, signature, args):
        return builder.gep(args[0], [args[1]])

    return i64p(i64p, types.int64), generate

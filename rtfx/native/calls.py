"""Call a patch's kernel through a pointer kept in memory, so that it can be changed while audio runs.

The call is opaque to LLVM: nothing that changes the floating-point mode around it can be moved across it.
"""

from llvmlite import ir
from numba import types
from numba.extending import intrinsic

from rtfx.native.options import f32p, f64p, i64p


@intrinsic
def call_kernel(typing_context, words, index, inp, out, frames, p, state, memory):
    """Call the function whose address is in word *index* with `KERNEL_SIGNATURE`; the address is acquired."""
    signature = types.void(i64p, types.int64, f32p, f64p, types.int64, f64p, f64p, f64p)

    def generate(context, builder, signature, args):
        kernel_args = [context.get_value_type(t) for t in signature.args[2:]]
        kernel = ir.FunctionType(ir.VoidType(), kernel_args).as_pointer()
        slot = builder.bitcast(builder.gep(args[0], [args[1]]), kernel.as_pointer())
        builder.call(builder.load_atomic(slot, "acquire", 8), args[2:])
        return context.get_dummy_value()

    return signature, generate

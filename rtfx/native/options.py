"""How every line of machine code in rtfx is compiled: no Python object, no allocation, no exception path.

``error_model="numpy"`` removes the checks that would raise; ``_nrt=False`` makes anything that allocates fail
to compile; helpers are inlined by LLVM because numba keeps an error path (and Python symbols) on ordinary
calls.  Floating point is strict: no reassociation and no contraction, so that the same samples give the same
bits whatever the block size and whatever the machine.
"""

from numba import njit, types

OPTIONS = {"error_model": "numpy", "_nrt": False}

inlined = njit(forceinline=True, **OPTIONS)
"""Decorator for a helper that kernels call: compiled into its caller, callable from Python for tests."""

f32p = types.CPointer(types.float32)
f64p = types.CPointer(types.float64)
i64p = types.CPointer(types.int64)

KERNEL_SIGNATURE = types.void(f32p, f64p, types.int64, f64p, f64p, f64p)
"""``kernel(inp, out, frames, p, state, memory)``: mono float32 in, stereo interleaved float64 out."""

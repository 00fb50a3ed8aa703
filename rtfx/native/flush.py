"""Flush denormal numbers to zero: a decaying tail would otherwise run many times slower.

The mode belongs to the thread.  It is set at the top of every callback and of every offline render and put back
on the way out, so that live and offline give the same bits.
Source: Intel 64 and IA-32 manual vol. 1 § 10.2.3 (MXCSR bits 15 and 6), Arm ARM, FPCR bit 24; both from memory.
"""

import platform

from llvmlite import ir
from numba import types
from numba.extending import intrinsic

_I32 = ir.IntType(32)
_I64 = ir.IntType(64)
_X86 = platform.machine().lower() in ("x86_64", "amd64")
_FLUSH_X86 = 0x8040
_FLUSH_ARM = 1 << 24


def _function(builder, name, result, *args):
    module = builder.module
    kind = ir.FunctionType(result, args)
    return module.globals.get(name) or ir.Function(module, kind, name)


def _read(builder):
    if not _X86:
        return builder.call(_function(builder, "llvm.aarch64.get.fpcr", _I64), [])
    slot = builder.alloca(_I32)
    byte = builder.bitcast(slot, ir.IntType(8).as_pointer())
    builder.call(_function(builder, "llvm.x86.sse.stmxcsr", ir.VoidType(), byte.type), [byte])
    return builder.zext(builder.load(slot), _I64)


def _write(builder, mode):
    if not _X86:
        builder.call(_function(builder, "llvm.aarch64.set.fpcr", ir.VoidType(), _I64), [mode])
        return
    slot = builder.alloca(_I32)
    builder.store(builder.trunc(mode, _I32), slot)
    byte = builder.bitcast(slot, ir.IntType(8).as_pointer())
    builder.call(_function(builder, "llvm.x86.sse.ldmxcsr", ir.VoidType(), byte.type), [byte])


@intrinsic
def flush_on(typing_context):
    """Flush denormals from here on; returns the mode as it was, for `flush_restore`."""

    def generate(context, builder, signature, args):
        before = _read(builder)
        flush = _FLUSH_X86 if _X86 else _FLUSH_ARM
        _write(builder, builder.or_(before, ir.Constant(_I64, flush)))
        return before

    return types.int64(), generate


@intrinsic
def flush_restore(typing_context, mode):
    """Put the mode back as `flush_on` found it."""

    def generate(context, builder, signature, args):
        _write(builder, args[0])
        return context.get_dummy_value()

    return types.void(types.int64), generate


@intrinsic
def floating_point_mode(typing_context):
    """Return this thread's floating-point control word (MXCSR or FPCR)."""

    def generate(context, builder, signature, args):
        return _read(builder)

    return types.int64(), generate

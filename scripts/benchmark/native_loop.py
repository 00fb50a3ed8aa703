"""Loops over blocks in native code, so that no call through Python is timed."""

import ctypes
from functools import cache

from rtfx.compiler import build

_GRAPH = """\
from rtfx.native.calls import call_kernel
from rtfx.native.flush import flush_on, flush_restore
from rtfx.native.memory import double_at, float_at


def {kernel}(words, inp, out, frames, blocks, p, state, memory):
    for i in range(blocks):
        mode = flush_on()
        at = i * frames
        call_kernel(words, 0, float_at(inp, at), double_at(out, 2 * at), frames, p, state, memory)
        flush_restore(mode)
"""

_CALLBACK = """\
from rtfx.engine.callback import process
from rtfx.engine.events import drain
from rtfx.engine.finish import meter
from rtfx.native.memory import float_at


def {kernel}(inp, out, frames, blocks, words):
    for i in range(blocks):
        at = i * frames
        process(float_at(inp, at), float_at(out, 2 * at), frames, 0, words)
"""


@cache
def _loops():
    from numba import types

    from rtfx.native.options import f32p, f64p, i64p

    whole, pointer, number = types.int64, ctypes.c_void_p, ctypes.c_int64
    graph = build.compile_at(build.write(_GRAPH), types.void(i64p, f32p, f64p, whole, whole, f64p, f64p, f64p))
    callback = build.compile_at(build.write(_CALLBACK), types.void(f32p, f32p, whole, whole, i64p))
    graph_kind = ctypes.CFUNCTYPE(None, *[pointer] * 3, number, number, *[pointer] * 3)
    callback_kind = ctypes.CFUNCTYPE(None, pointer, pointer, number, number, pointer)
    return graph_kind(graph.address), callback_kind(callback.address), (graph, callback)


def repeat_native(instance, guitar, out, block):
    """Run *instance* over *guitar* (float32) into *out* (float64, stereo) in whole blocks of *block* frames."""
    arrays = (instance.parameters, instance.state, instance.memory)
    _loops()[0](
        instance.words.ctypes.data, guitar.ctypes.data, out.ctypes.data, block, len(guitar) // block,
        *(a.ctypes.data for a in arrays),
    )  # fmt: skip


def repeat_callback(host, guitar, out, block):
    """Run the whole callback of *host* over *guitar* (float32) into *out* (float32, stereo), block by block."""
    _loops()[1](guitar.ctypes.data, out.ctypes.data, block, len(guitar) // block, host.userdata)

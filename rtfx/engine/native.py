"""The callback as machine code, built like a patch so that a change anywhere in what it inlines is seen."""

from __future__ import annotations

import ctypes
from functools import cache

from rtfx.compiler import build

_CALLBACK = """\
from rtfx.engine.callback import process
from rtfx.engine.events import drain
from rtfx.engine.finish import meter
from rtfx.engine.layout import OFFSET
from rtfx.engine.words import SIZE


def {kernel}(inp, out, frames, time, flags, words):
    return process(inp, out, int64(frames), flags, words)
"""


@cache
def callback() -> build.Built:
    """Return the callback, with PortAudio's signature: (input, output, frames, time, flags, userdata) -> int."""
    from numba import types

    from rtfx.native.options import f32p, i64p

    signature = types.int32(f32p, f32p, types.ulong, types.voidptr, types.ulong, i64p)
    return build.compile_at(build.write("from numba import int64\n" + _CALLBACK), signature)


_RELEASE = """\
from rtfx.native.memory import store_release


def {kernel}(words, index, value):
    store_release(words, index, value)
"""


@cache
def release_store():
    """Return ``store(address, index, value)``: a store of one word with release ordering, for use from Python."""
    from numba import types

    from rtfx.native.options import i64p

    built = build.compile_at(build.write(_RELEASE), types.void(i64p, types.int64, types.int64))
    store = ctypes.CFUNCTYPE(None, ctypes.c_void_p, ctypes.c_int64, ctypes.c_int64)(built.address)
    store.built = built  # type: ignore[attr-defined]  # keeps the code alive
    return store

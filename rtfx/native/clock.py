"""The monotonic clock, read from native code without the GIL (tens of nanoseconds), and a sleep."""

import sys

from numba import types

from rtfx.native.options import i64p, inlined

_MONOTONIC = 6 if sys.platform == "darwin" else 1

_clock_gettime = types.ExternalFunction("clock_gettime", types.int32(types.int32, i64p))
_usleep = types.ExternalFunction("usleep", types.int32(types.uint32))


@inlined
def now_ns(scratch):
    """Nanoseconds of the monotonic clock; *scratch* points to two words of the caller's."""
    _clock_gettime(_MONOTONIC, scratch)
    return scratch[0] * 1_000_000_000 + scratch[1]


@inlined
def sleep_ns(duration):
    """Sleep for about *duration* nanoseconds (not below 0)."""
    _usleep(types.uint32(max(duration, 0) // 1000))

"""The built-in clocked device: the same callback, run by a timer, with the demo guitar as its input.

The loop that calls the callback is native code in a thread of its own: it takes no GIL either.
Written by: the control thread (RUN).  Read by: the clock thread, once a block.
"""

from __future__ import annotations

import ctypes
import threading

import numpy as np

from rtfx.compiler import build
from rtfx.devices.guitar import demo_guitar

NAME = "built-in"
BLOCK = 64
RUN, PERIOD_NS, BLOCKS, CLOCK = 0, 1, 2, 4

_LOOP = """\
from rtfx.engine.callback import process
from rtfx.engine.events import drain
from rtfx.engine.finish import meter
from rtfx.engine.layout import OFFSET
from rtfx.engine.words import SIZE
from rtfx.devices.builtin import BLOCKS, CLOCK, PERIOD_NS, RUN
from rtfx.native.clock import now_ns, sleep_ns
from rtfx.native.memory import float_at, load_acquire, word_at


def {kernel}(guitar, length, out, frames, words, timer):
    clock = word_at(timer, CLOCK)
    due = now_ns(clock)
    at = 0
    while load_acquire(timer, RUN) == 1:
        process(float_at(guitar, at), out, frames, 0, words)
        timer[BLOCKS] += 1
        at = at + frames if at + 2 * frames <= length else 0
        due += timer[PERIOD_NS]
        now = now_ns(clock)
        if due > now:
            sleep_ns(due - now)
        elif now - due > 1000000000:
            due = now
"""


def _loop() -> build.Built:
    from numba import types

    from rtfx.native.options import f32p, i64p

    signature = types.void(f32p, types.int64, f32p, types.int64, i64p, i64p)
    return build.compile_at(build.write(_LOOP), signature)


class BuiltIn:
    """A stream on the built-in device; `speed` above 1 runs it faster than real time."""

    in_channels, out_channels = 1, 2

    def __init__(self, rate: float, block: int = 0, speed: float = 1.0) -> None:
        self.rate, self.block = rate, block or BLOCK
        self.guitar = np.ascontiguousarray(demo_guitar(rate))
        self.out = np.zeros(2 * self.block, np.float32)
        self.timer = np.zeros(8, np.int64)
        self.timer[PERIOD_NS] = round(self.block / rate / speed * 1e9)
        self.description = f"built-in clock at {rate:g} Hz with the demo guitar; nothing can be heard"

    def start(self, host) -> None:
        """Begin to call *host*'s callback."""
        built = _loop()
        kind = ctypes.CFUNCTYPE(None, *[ctypes.c_void_p, ctypes.c_int64] * 2, ctypes.c_void_p, ctypes.c_void_p)
        call, self.host = kind(built.address), host
        self.timer[RUN] = 1
        arguments = (
            self.guitar.ctypes.data, len(self.guitar), self.out.ctypes.data, self.block, host.userdata,
            self.timer.ctypes.data,
        )  # fmt: skip
        self.thread = threading.Thread(target=call, args=arguments, daemon=True)
        self.thread.start()

    @property
    def active(self) -> bool:
        """True while the clock runs."""
        return self.thread.is_alive()

    def stop(self) -> None:
        """Stop after the present block."""
        self.timer[RUN] = 0
        self.thread.join(1.0)

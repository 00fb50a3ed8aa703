"""Run a plan over a recording: the same machine code as live, the same bits whatever the block size."""

from __future__ import annotations

import ctypes
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache

import numpy as np

from rtfx.compiler import build
from rtfx.compiler.driver import Plan, plan
from rtfx.compiler.layout import on_a_line
from rtfx.dsp.glide import WORDS
from rtfx.patch.model import Patch

GLIDE_S = 0.02
"""How long a moved parameter takes to arrive."""
CHUNK = 1024
"""Frames a kernel is given at a time; it changes nothing in the result."""


@dataclass(frozen=True)
class Move:
    """One timed change: at *frame*, *target* ("block.parameter") sets out for *value* and arrives `GLIDE_S` later."""

    frame: int
    target: str
    value: float


_DRIVER = """\
from rtfx.native.calls import call_kernel
from rtfx.native.flush import flush_on, flush_restore
from rtfx.native.memory import float_at


def {kernel}(words, inp, scratch, chunk, out, frames, p, state, memory):
    mode = flush_on()
    done = 0
    while done < frames:
        count = min(chunk, frames - done)
        call_kernel(words, 0, float_at(inp, done), scratch, count, p, state, memory)
        for i in range(2 * count):
            out[2 * done + i] = scratch[i]
        done += count
    flush_restore(mode)
"""

_AIM = """\
from rtfx.dsp.glide import aim


def {kernel}(p, at, target, frames, log):
    aim(p, at, target, frames, log != 0)
"""


@cache
def _driver():
    from numba import types

    from rtfx.native.options import f32p, f64p, i64p

    whole, pointer, number = types.int64, ctypes.c_void_p, ctypes.c_int64
    signature = types.void(i64p, f32p, f64p, whole, f32p, whole, f64p, f64p, f64p)
    built = build.compile_at(build.write(_DRIVER), signature)
    kind = ctypes.CFUNCTYPE(None, pointer, pointer, pointer, number, pointer, number, pointer, pointer, pointer)
    call = kind(built.address)
    return built, call


@cache
def _aim():
    from numba import types

    from rtfx.native.options import f64p

    built = build.compile_at(
        build.write(_AIM), types.void(f64p, types.int64, types.float64, types.float64, types.int64)
    )
    kind = ctypes.CFUNCTYPE(None, ctypes.c_void_p, ctypes.c_int64, ctypes.c_double, ctypes.c_double, ctypes.c_int64)
    return built, kind(built.address)


class Instance:
    """One running copy of a built plan: its code, and parameters, state and memory of its own."""

    def __init__(self, plan: Plan) -> None:
        self.plan = plan
        self.built = plan.build()
        self.words = np.array([self.built.address], np.int64)
        self.parameters = plan.parameters()
        self.state, self.memory = plan.state.copy(), on_a_line(plan.memory)
        self.scratch = np.empty((CHUNK, 2))
        self._drive = _driver()[1]

    def run(self, samples: np.ndarray, out: np.ndarray) -> None:
        """Run over *samples* (float32, shape (frames,)) into *out* (float32, shape (frames, 2)), both contiguous.

        Numbers too small for a float32 become 0 on the way out, as they do in the audio callback.
        """
        self._drive(
            self.words.ctypes.data, samples.ctypes.data, self.scratch.ctypes.data, CHUNK, out.ctypes.data, len(samples),
            self.parameters.ctypes.data, self.state.ctypes.data, self.memory.ctypes.data,
        )  # fmt: skip

    def move(self, target: str, value: float, glide_s: float = GLIDE_S) -> None:
        """Send a parameter on its way to *value*, from the next frame on."""
        slot = self.plan.slot(target)
        if not slot.low <= value <= slot.high:
            raise ValueError(
                f"{target} = {value:g} is outside {slot.low:g} to {slot.high:g}, which the patch is built for"
            )
        frames = round(glide_s * self.plan.rate)
        _aim()[1](self.parameters.ctypes.data, WORDS * slot.index, value, frames, int(slot.log))


def mono(samples: np.ndarray) -> np.ndarray:
    """Return *samples* as one float32 channel; two channels are averaged.

    Raises
    ------
    ValueError
        If the shape is not (frames,), (frames, 1) or (frames, 2), or a sample is not finite.
    """
    samples = np.asarray(samples)
    if samples.ndim > 2 or (samples.ndim == 2 and samples.shape[1] not in (1, 2)):
        raise ValueError(f"samples have shape {samples.shape}; wanted (frames,), (frames, 1) or (frames, 2)")
    if not np.isfinite(samples).all():
        raise ValueError("samples hold NaN or Inf; wanted finite numbers, full scale ±1")
    one = samples if samples.ndim == 1 else samples.mean(axis=1)
    return np.ascontiguousarray(one, np.float32)


def render(
    patch: Patch | Plan,
    samples: np.ndarray,
    rate: float = 48_000.0,
    quality: str = "stage",
    moves: Iterable[Move] = (),
    block: int | None = None,
) -> np.ndarray:
    """Run *patch* over a dry recording and return what its graph gives out.

    Parameters
    ----------
    patch : Patch or Plan
        With a Plan, its own rate and quality count.
    samples : ndarray, shape (frames,) or (frames, 1..2)
        Guitar as recorded, full scale ±1; two channels are averaged.
    rate : float
        Sample rate in Hz, 44100 to 192000.
    quality : str
        "stage" or "studio".
    moves : iterable of Move
        Timed changes, in any order.
    block : int, optional
        Frames handed to the native function at a time; it changes nothing in the result.

    Returns
    -------
    ndarray of float32, shape (frames, 2)
        Left and right, later than the input by ``plan.delay`` samples.

    Raises
    ------
    ValueError
        For a rate, quality, shape, block or move that is not allowed.
    """
    worked_out = patch if isinstance(patch, Plan) else plan(patch, rate, quality)
    dry = mono(samples)
    if block is not None and block < 1:
        raise ValueError(f"block = {block} frames; wanted 1 or more")
    instance = Instance(worked_out)
    out = np.empty((len(dry), 2), np.float32)
    todo = sorted(moves, key=lambda move: move.frame)
    at = 0
    while at < len(dry):
        while todo and todo[0].frame <= at:
            instance.move(todo[0].target, todo[0].value)
            del todo[0]
        until = min(len(dry), todo[0].frame if todo else len(dry), at + (block or len(dry)))
        instance.run(dry[at:until], out[at:until])
        at = until
    return out

"""Run one kind of block over arrays: natively, or as plain Python, from the same generated loop.

The loop follows the calling convention of `rtfx.blocks.kind`: coefficients from the parameters' values in
every frame, then `emerge` and `tick`.  Native, it is a C function without exceptions, as a patch's kernel is.
Plain, every compiled helper is replaced by the Python function it was made from.
"""

from __future__ import annotations

import ctypes
from dataclasses import dataclass
from functools import cache
from math import floor
from types import FunctionType

import numpy as np
from numba import cfunc, types
from numba.core.dispatcher import Dispatcher

from rtfx.blocks import table
from rtfx.blocks.kind import Code, Kind, Setting
from rtfx.native.options import OPTIONS, f64p

RATE = 48_000.0
_DOUBLES = ctypes.POINTER(ctypes.c_double)
_SIGNATURE = types.void(f64p, f64p, types.int64, f64p, f64p, f64p)


@dataclass(frozen=True)
class Run:
    """What came out, shape (outputs, frames), and what the block then holds."""

    outputs: np.ndarray
    state: dict[str, float]
    memory: np.ndarray

    @property
    def out(self) -> np.ndarray:
        """The only output."""
        (out,) = self.outputs
        return out


def setting(kind: Kind, values: dict | None = None, rate: float = RATE, reach: dict | None = None) -> Setting:
    """Return a setting with *values* where given and defaults elsewhere; arrays of values widen the reach."""
    values = {p.name: p.default for p in kind.numbers} | (values or {})
    reached = {name: (float(np.min(v)), float(np.max(v))) for name, v in values.items()} | (reach or {})
    first = {name: float(np.ravel(v)[0]) for name, v in values.items()}
    return Setting({c.name: c.default for c in kind.choices}, first, reached, rate, "stage")


def run(name: str, *inputs: np.ndarray, rate: float = RATE, plain: bool = False, reach=None, **values) -> Run:
    """Run kind *name* over its *inputs*, float64 of shape (frames,); parameters may be such arrays too."""
    kind = table.find(name)
    code = kind.build(setting(kind, values, rate, reach))
    signals = np.array(inputs, float)
    frames = signals.shape[1]
    columns = [np.broadcast_to(values.get(p.name, p.default), frames) for p in kind.numbers]
    numbers = np.column_stack([*columns, np.full(frames, rate)])
    outputs = np.full((len(kind.outputs), frames), np.nan)
    state = np.array([*map(float, code.state.values()), 0.0])
    memory = np.zeros(1) if code.memory is None else code.memory.copy()
    loop = plain_loop(name) if plain else native_loop(name).call
    loop(signals.ravel(), outputs.reshape(-1), frames, numbers.ravel(), state, memory)
    return Run(outputs, dict(zip(code.state, state, strict=False)), memory)


def write(kind: Kind, code: Code) -> str:
    """Return the source of the loop for one block."""
    read = {int: "floor", float: "float"}  # in numba, int() of a float can raise
    loads = [f"    {s} = {read[type(first)]}(state[{i}])" for i, (s, first) in enumerate(code.state.items())]
    stores = [f"    state[{i}] = float({s})" for i, s in enumerate(code.state)]
    head = "def loop(inputs, outputs, frames, numbers, state, memory):"
    frame = [f"        {line}" for line in _frame(kind, code)]
    return "\n".join([head, *loads, "    for n in range(frames):", *frame, *stores])


def _frame(kind: Kind, code: Code) -> list[str]:
    """Return the lines for one frame."""
    count, states = len(kind.numbers) + 1, list(code.state)
    numbers = [f"numbers[{count} * n + {i}]" for i in range(count)]
    coefficients = [f"c{i}" for i in range(code.coefficients)] if code.prepare else []
    ports = [f"inputs[{i} * frames + n]" for i in range(len(kind.ports))]
    outputs = [f"out{i}" for i in range(len(kind.outputs))]
    rest = [*(["memory", "0"] if code.memory is not None else []), *coefficients, *states]
    lines = []
    if code.prepare:
        lines.append(f"{', '.join(coefficients)} = prepare({', '.join(numbers)})")
    if code.emerge:
        lines.append(f"{', '.join(outputs)} = emerge({', '.join(rest)})")
    results = states if code.emerge else outputs + states
    lines.append(f"{', '.join(results)} = tick({', '.join(ports + rest)})")
    return lines + [f"outputs[{i} * frames + n] = {out}" for i, out in enumerate(outputs)]


def _made(name: str, treat) -> FunctionType:
    kind = table.find(name)
    code = kind.build(setting(kind))
    used = {"prepare": code.prepare, "emerge": code.emerge, "tick": code.tick}
    namespace = {"floor": floor} | {n: treat(f) for n, f in used.items() if f is not None}
    exec(write(kind, code), namespace)
    return namespace["loop"]


@cache
def plain_loop(name: str) -> FunctionType:
    """Return the loop of kind *name* as plain Python."""
    return _made(name, plain)


@cache
def plain(function: Dispatcher) -> FunctionType:
    """Return the Python function behind *function*, calling only such functions itself."""
    source = function.py_func
    used = {n: source.__globals__[n] for n in source.__code__.co_names if n in source.__globals__}
    names = {n: plain(f) if isinstance(f, Dispatcher) else f for n, f in used.items()}
    return FunctionType(source.__code__, names, source.__name__, source.__defaults__, source.__closure__)


@cache
def native_loop(name: str) -> Native:
    """Return the loop of kind *name* as machine code."""
    return Native(cfunc(_SIGNATURE, **OPTIONS)(_made(name, lambda function: function)))


class Native:
    """A compiled loop that can be called with arrays."""

    def __init__(self, compiled) -> None:
        self.compiled = compiled

    def call(self, inputs, outputs, frames, numbers, state, memory) -> None:
        """Run the loop over arrays of float64."""
        a, b, c, d, e = (x.ctypes.data_as(_DOUBLES) for x in (inputs, outputs, numbers, state, memory))
        self.compiled.ctypes(a, b, frames, c, d, e)

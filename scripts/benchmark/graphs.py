"""The three reference graphs, each as rtfx's native code, as plain C, and as a numpy chain."""

import ctypes
import subprocess
from functools import cache
from math import pi, tan
from pathlib import Path

import numpy as np
from native_loop import repeat_native
from python_chain import Chain

import rtfx
from rtfx.compiler.render import Instance
from rtfx.dsp.halfband import stages
from rtfx.dsp.halfband_taps import TAPS

RATE, BLOCK = 48_000, 64
PITCH, DRIVE_DB, AMOUNT, THIN_HZ, SOFT_HZ, Q = 330.0, 24.0, 0.7, 120.0, 5000.0, 0.7071067811865476
WAYS = ("native", "c", "numpy")
HEAD = 'name = "b"\nabout = "b"\n'
TONE = f'[blocks.tone]\nkind = "oscillator"\npitch = {PITCH}\n'
SHAPE = f'[blocks.shape]\nkind = "clip"\nx = "{{x}}"\ndrive = {DRIVE_DB}\n'
PRODUCT = '[blocks.product]\nkind = "multiply"\nx = "{x}"\ny = "tone"\n'
THIN = f'[blocks.thin]\nkind = "highpass"\nx = "input"\ncutoff = {THIN_HZ}\nq = {Q}\n'
BLEND = f'[blocks.blend]\nkind = "mix"\ndry = "input"\nwet = "product"\namount = {AMOUNT}\n'
SOFT = f'[blocks.soft]\nkind = "lowpass"\nx = "blend"\ncutoff = {SOFT_HZ}\nq = {Q}\n'
OUTPUT = '[output]\nfrom = "{x}"\n'
GRAPHS = {
    "balanced": TONE + PRODUCT.format(x="input") + OUTPUT.format(x="product"),
    "driven_balanced": SHAPE.format(x="input") + TONE + PRODUCT.format(x="shape") + OUTPUT.format(x="product"),
    "six_blocks": THIN
    + SHAPE.format(x="thin")
    + TONE
    + PRODUCT.format(x="shape")
    + BLEND
    + SOFT
    + OUTPUT.format(x="soft"),
}


def plan(name):
    """Return the plan of a graph at stage quality."""
    return rtfx.plan(rtfx.loads(HEAD + GRAPHS[name]), RATE)


def numbers():
    """Return the graphs' coefficients as C and numpy take them."""
    g = [value for hz in (THIN_HZ, SOFT_HZ) for value in (tan(pi * hz / RATE), 1 / Q)]
    return np.array([PITCH / RATE, 10 ** (DRIVE_DB / 20), AMOUNT, *g])


def taps():
    """Return every second tap of the three stages up to 8 times."""
    return [np.array(TAPS[s.length, s.passband]) for s in stages(float(RATE), 8, "stage")]


def compile_c(folder):
    """Compile the plain C on the spot; returns the library."""
    arrays = "".join(
        f"#define N{i} {len(t)}\nstatic const double TAPS{i}[] = {{{', '.join(map(repr, t.tolist()))}}};\n"
        for i, t in enumerate(taps(), 1)
    )
    source, library = Path(folder) / "plain.c", Path(folder) / "plain.so"
    source.write_text(arrays + (Path(__file__).parent / "plain.c").read_text())
    subprocess.run(
        ["cc", "-O3", "-march=native", "-shared", "-fPIC", "-o", str(library), str(source), "-lm"], check=True
    )
    return ctypes.CDLL(str(library))


@cache
def outputs(frames):
    """Return one array for whoever plays: new memory for each would be timed too."""
    return np.zeros((frames, 2))


class Native:
    """A graph as rtfx compiles it; the loop over blocks is native too, as a device's is."""

    def __init__(self, name, library):
        self.instance = Instance(plan(name))

    def __call__(self, guitar):
        out = outputs(len(guitar))
        repeat_native(self.instance, guitar, out, BLOCK)
        return out[:, 0]


class PlainC:
    """The same graph in C."""

    def __init__(self, name, library):
        self.graph, self.repeat = getattr(library, name), library.repeat
        self.repeat.argtypes = [ctypes.c_void_p] * 3 + [ctypes.c_long] + [ctypes.c_void_p] * 2
        self.state, self.numbers = ctypes.create_string_buffer(library.state_size()), numbers()
        library.reset(self.state)

    def __call__(self, guitar):
        out = outputs(len(guitar))
        blocks = len(guitar) // BLOCK
        self.repeat(
            self.graph, guitar.ctypes.data, out.ctypes.data, blocks,
            ctypes.addressof(self.state), self.numbers.ctypes.data,
        )  # fmt: skip
        return out[:, 0]


class NumpyChain:
    """The same graph as numpy and scipy calls, a block at a time."""

    def __init__(self, name, library):
        self.step = getattr(Chain(numbers(), taps()), name)

    def __call__(self, guitar):
        return np.concatenate([self.step(guitar[i : i + BLOCK]) for i in range(0, len(guitar), BLOCK)])


def runners(name, library):
    """Return {way: function(guitar) -> left channel} for one graph, each with a state of its own."""
    return {way: kind(name, library) for way, kind in zip(WAYS, (Native, PlainC, NumpyChain), strict=True)}

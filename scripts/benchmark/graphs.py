"""Time each graph as rtfx's native code, as plain C and as a numpy chain, side by side in one run."""

import ctypes
import subprocess
import tempfile
import time
from math import pi, tan
from pathlib import Path

import numpy as np
from python_chain import Chain

import rtfx
from rtfx.compiler.render import Instance
from rtfx.devices.guitar import demo_guitar
from rtfx.dsp.halfband import stages
from rtfx.dsp.halfband_taps import TAPS

RATE, BLOCK, ROUNDS, SECONDS = 48_000, 64, 7, 1
PITCH, DRIVE_DB, AMOUNT, THIN_HZ, SOFT_HZ, Q = 330.0, 24.0, 0.7, 120.0, 5000.0, 0.7071067811865476
WAYS = ("native", "c", "numpy")
HEAD = 'name = "b"\nabout = "b"\n'
TONE = f'[blocks.tone]\nkind = "oscillator"\npitch = {PITCH}\n'
SHAPE = f'[blocks.shape]\nkind = "clip"\nx = "{{x}}"\ndrive = {DRIVE_DB}\n'
PRODUCT = '[blocks.product]\nkind = "multiply"\nx = "{x}"\ny = "tone"\n'
SIX = (
    f'[blocks.thin]\nkind = "highpass"\nx = "input"\ncutoff = {THIN_HZ}\nq = {Q}\n' + SHAPE.format(x="thin") + TONE
    + PRODUCT.format(x="shape")
    + f'[blocks.blend]\nkind = "mix"\ndry = "input"\nwet = "product"\namount = {AMOUNT}\n'
    + f'[blocks.soft]\nkind = "lowpass"\nx = "blend"\ncutoff = {SOFT_HZ}\nq = {Q}\n[output]\nfrom = "soft"\n'
)  # fmt: skip
GRAPHS = {
    "balanced": TONE + PRODUCT.format(x="input") + '[output]\nfrom = "product"\n',
    "driven_balanced": SHAPE.format(x="input") + TONE + PRODUCT.format(x="shape") + '[output]\nfrom = "product"\n',
    "six_blocks": SIX,
}


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


def runners(name, library):
    """Return {way: function(block, its address)} for one graph, and the "out" where native and C leave their sound."""
    instance = Instance(rtfx.plan(rtfx.loads(HEAD + GRAPHS[name]), RATE))
    chain, c, out = Chain(numbers(), taps()), numbers(), np.empty((BLOCK, 2))
    state = ctypes.create_string_buffer(library.state_size())
    library.reset(state)
    plain = getattr(library, name)
    plain.argtypes = [ctypes.c_void_p, ctypes.c_void_p, ctypes.c_long, ctypes.c_void_p, ctypes.c_void_p]
    step = getattr(chain, name)

    out_at, state_at, c_at = out.ctypes.data, ctypes.addressof(state), c.ctypes.data
    return {
        "native": lambda x, at: instance.run_at(at, out_at, BLOCK),
        "c": lambda x, at: plain(at, out_at, BLOCK, state_at, c_at),
        "numpy": lambda x, at: step(x),
        "out": out,
        "kept": (state, c),
    }


def check(name, ways, blocks):
    """Assert that the three give the same sound before any of them is timed."""

    def answer(way, x):
        given = ways[way](x, x.ctypes.data)
        return given if way == "numpy" else ways["out"][:, 0].copy()

    answers = {way: np.concatenate([answer(way, x) for x in blocks]) for way in WAYS}
    for way in ("c", "numpy"):
        worst = np.abs(answers[way] - answers["native"]).max()
        assert worst < 1e-9, f"{name}: {way} differs from native by {worst:g}"


def measure():
    """Return for each graph its name and nanoseconds a sample each way, the best of rounds that take turns."""
    guitar = demo_guitar(float(RATE))[RATE : RATE + SECONDS * RATE]
    blocks = [np.ascontiguousarray(guitar[i : i + BLOCK]) for i in range(0, len(guitar) - BLOCK + 1, BLOCK)]
    pairs = [(x, x.ctypes.data) for x in blocks]
    results = []
    with tempfile.TemporaryDirectory() as folder:
        library = compile_c(folder)
        for name in GRAPHS:
            ways = runners(name, library)
            check(name, ways, blocks)
            best = dict.fromkeys(WAYS, float("inf"))
            for _ in range(ROUNDS):
                for way in WAYS:
                    run = ways[way]
                    start = time.perf_counter()
                    for x, at in pairs:
                        run(x, at)
                    best[way] = min(best[way], (time.perf_counter() - start) / len(blocks) / BLOCK)
            results.append({"name": name} | {f"{way}_ns": round(1e9 * t, 2) for way, t in best.items()})
    return results

"""Time the graphs side by side, and what the engine adds to a graph."""

import tempfile
import time

import numpy as np
from graphs import BLOCK, GRAPHS, RATE, WAYS, Native, compile_c, plan, runners
from native_loop import repeat_callback

from rtfx.devices.artifact import load, save
from rtfx.devices.guitar import demo_guitar
from rtfx.engine.host import Host
from rtfx.engine.layout import OFFSET, Shared

ROUNDS, SECONDS, AGREE = 15, 1, 1e-9


def guitar():
    """Return a second of the demo guitar in whole blocks."""
    sound = demo_guitar(float(RATE))[RATE : RATE + SECONDS * RATE]
    return np.ascontiguousarray(sound[: len(sound) // BLOCK * BLOCK])


def check(name, ways, sound):
    """Assert that the three give the same sound before any of them is timed."""
    answers = {way: run(sound).copy() for way, run in ways.items()}
    for way in ("c", "numpy"):
        worst = np.abs(answers[way] - answers["native"]).max()
        assert worst < AGREE, f"{name}: {way} differs from native by {worst:g}"


def best_of(runs, sound):
    """Return the shortest time of each of *runs* over *sound*, in seconds; they take turns."""
    best = dict.fromkeys(runs, float("inf"))
    for _ in range(ROUNDS):
        for way, run in runs.items():
            start = time.perf_counter()
            run(sound)
            best[way] = min(best[way], time.perf_counter() - start)
    return best


def graphs():
    """Return for each graph its name and nanoseconds a sample each way."""
    sound, results = guitar(), []
    with tempfile.TemporaryDirectory() as folder:
        library = compile_c(folder)
        for name in GRAPHS:
            ways = runners(name, library)
            check(name, ways, sound)
            best = best_of(ways, sound)
            results.append({"name": name} | {f"{way}_ns": round(1e9 * best[way] / len(sound), 2) for way in WAYS})
    return results


def overhead_us(name="balanced"):
    """Return how many microseconds a block the whole callback takes beyond the bare graph."""
    shared = Shared(bytearray(8 * OFFSET["SIZE"]))
    shared.set("RATE", RATE)
    shared.set("CEILING", 0.9)
    worked_out = plan(name)
    linear = sum(not s.log for s in worked_out.slots)
    host = Host(shared, load(save(worked_out), 1, [s.value for s in worked_out.slots], linear), 1, 2)
    sound = guitar()
    out = np.empty((len(sound), 2), np.float32)
    runs = {"bare": Native(name, None), "engine": lambda x: repeat_callback(host, x, out, BLOCK)}
    best = best_of(runs, sound)
    return round(1e6 * (best["engine"] - best["bare"]) / (len(sound) // BLOCK), 2)

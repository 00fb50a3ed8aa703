"""What each kind costs, at the base rate and in the region that it usually asks for, and what each preset costs."""

import sys
from contextlib import contextmanager
from pathlib import Path

import numpy as np
from graphs import BLOCK, RATE
from native_loop import repeat_native

import rtfx
from rtfx.blocks.table import find, names
from rtfx.compiler import widen
from rtfx.compiler.render import Instance

ROOT = Path(__file__).parents[2]
sys.path.insert(0, str(ROOT / "tests"))
ROUNDS = 7


@contextmanager
def at_the_base_rate():
    """Within ``with``, nothing is oversampled, whatever it aliases."""
    usual = widen.FACTORS
    widen.FACTORS = (1,)
    try:
        yield
    finally:
        widen.FACTORS = usual


def cost_ns(plan, sound):
    """Return nanoseconds a sample of *plan* over *sound*, the best of some rounds."""
    import time

    instance, out, best = Instance(plan), np.zeros((len(sound), 2)), float("inf")
    for _ in range(ROUNDS):
        start = time.perf_counter()
        repeat_native(instance, sound, out, BLOCK)
        best = min(best, time.perf_counter() - start)
    return round(1e9 * best / len(sound), 1)


def kinds(sound):
    """Return, for each kind: its name, ns at the base rate, ns as it usually runs, and the factor it then has."""
    from patches import one

    rows = []
    for name in names():
        patch = one(name, wires=find(name).ports)
        with at_the_base_rate():
            base = cost_ns(rtfx.plan(patch, RATE), sound)
        plan = rtfx.plan(patch, RATE)
        factor = max((r.factor for r in plan.regions), default=1)
        rows.append({"kind": name, "base_ns": base, "usual_ns": cost_ns(plan, sound), "factor": factor})
    return rows


def presets(sound):
    """Return, for each preset: its name, ns a sample and percent of one core at 48 kHz."""
    rows = []
    for path in sorted((ROOT / "presets").rglob("*.toml")):
        if "[blocks." not in path.read_text():
            continue
        ns = cost_ns(rtfx.plan(rtfx.load(path), RATE), sound)
        rows.append({"preset": path.stem, "ns": ns, "percent": round(ns * RATE / 1e7, 2)})
    return rows

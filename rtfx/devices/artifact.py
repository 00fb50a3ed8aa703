"""A built patch as files: what the front hands to the sound process, which loads it and compiles nothing."""

from __future__ import annotations

import os
import tempfile
from pathlib import Path

import numpy as np

from rtfx.compiler.build import compile_at
from rtfx.compiler.driver import Plan
from rtfx.engine.host import Graph
from rtfx.native.options import KERNEL_SIGNATURE


def save(plan: Plan) -> str:
    """Build *plan* and write its first state and memory beside its code; returns the path of the source."""
    built = plan.build()
    images = built.path.with_suffix(".npz")
    if not images.exists():
        with tempfile.NamedTemporaryFile(dir=images.parent, suffix=".part", delete=False) as file:
            np.savez(file, state=plan.state, memory=plan.memory)
        os.replace(file.name, images)
    return str(built.path)


def load(path: str, number: int, parameters: list[float], first_log: int, shown: list[int] | None = None) -> Graph:
    """Return the graph at *path* with its parameters standing at *parameters*."""
    source = Path(path)
    with np.load(source.with_suffix(".npz")) as images:
        state, memory = images["state"], images["memory"]
    words = np.zeros(max(4 * len(parameters), 1))
    words[0 : 4 * len(parameters) : 4] = words[1 : 4 * len(parameters) : 4] = parameters
    built = compile_at(source, KERNEL_SIGNATURE)
    return Graph(built, number, words, state, memory, len(parameters), first_log, shown or [])

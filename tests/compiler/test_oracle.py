"""The emitted source run as plain Python is the oracle for the machine code."""

import os
import subprocess
import sys

import numpy as np
import pytest
from patches import PRESETS

import rtfx

FRAMES = 400
BOUND = 1e-9  # the C library's and Python's functions may differ in the last bit; loops add that up
RUN = """
import sys, numpy as np, rtfx
from rtfx.compiler.build import load_module
plan = rtfx.plan(rtfx.load(sys.argv[1]), quality=sys.argv[2])
path = plan.write()
kernel = getattr(load_module(path), path.stem)
samples = np.load(sys.argv[3]).astype(float)
out = np.zeros(2 * len(samples))
kernel(samples, out, len(samples), plan.parameters(), plan.state.copy(), plan.memory.copy())
np.save(sys.argv[4], out.reshape(-1, 2))
"""


@pytest.mark.parametrize("quality", ["stage", "studio"])
@pytest.mark.parametrize("path", PRESETS, ids=lambda p: p.stem)
def test_machine_code_agrees_with_plain_python(path, quality, tmp_path, noise):
    dry, wet = tmp_path / "dry.npy", tmp_path / "wet.npy"
    np.save(dry, noise[:FRAMES])
    environment = os.environ | {"NUMBA_DISABLE_JIT": "1"}
    subprocess.run([sys.executable, "-c", RUN, str(path), quality, str(dry), str(wet)], env=environment, check=True)
    native = rtfx.render(rtfx.plan(rtfx.load(path), quality=quality), noise[:FRAMES])
    assert np.abs(np.load(wet) - native).max() < max(BOUND, 2**-24)  # native output is float32

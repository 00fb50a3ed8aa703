"""A kind from another package is found, explained, compiled and heard like our own."""

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parents[1] / "example_package"
HEAR = """
import json, numpy as np, rtfx
head = 'name = "t"\\nabout = "t"\\n'
patch = rtfx.loads(head + '[blocks.b]\\nkind = "fold"\\nx = "input"\\ndepth = 0.5\\n[output]\\nfrom = "b"\\n')
plan = rtfx.plan(patch)
n = np.arange(1 << 15)
out = rtfx.render(plan, np.cos(2 * np.pi * 301 * n / (1 << 14)))[-(1 << 14):, 0].astype(float)
lines = np.abs(np.fft.rfft(out)) * 2 / (1 << 14)
print(json.dumps({"octave": lines[602], "factor": plan.regions[0].factor}))
"""


@pytest.fixture(scope="module")
def environment(tmp_path_factory):
    """An environment in which the example package is installed."""
    place = tmp_path_factory.mktemp("packages")
    command = [sys.executable, "-m", "pip", "install", "-q", "--no-deps", "--target", str(place), str(PACKAGE)]
    subprocess.run(command, check=True, capture_output=True)
    return os.environ | {"PYTHONPATH": str(place)}


def python(code, environment):
    return subprocess.run(
        [sys.executable, "-c", code], env=environment, check=True, capture_output=True, text=True
    ).stdout


def test_kind_is_explained(environment):
    run = "import sys; sys.argv[1:] = ['blocks', 'fold', '--json']; from rtfx.cli.main import run; run()"
    assert json.loads(python(run, environment))["law"] == "y = x + depth·(x² − 1/2)"


def test_kind_is_compiled_in_a_region_and_gives_its_octave(environment):
    heard = json.loads(python(HEAR, environment))
    assert heard["factor"] == 2
    assert heard["octave"] == pytest.approx(0.25, rel=1e-3)  # depth/2, cos² a = ½ + ½ cos 2a

"""Short patches for tests."""

import tempfile
from functools import cache
from pathlib import Path

import numpy as np
import soundfile

import rtfx
from rtfx.blocks.table import find
from rtfx.patch.song import kind_of_file

ROOT = Path(__file__).parents[1] / "presets"
PRESETS = [path for path in sorted(ROOT.rglob("*.toml")) if kind_of_file(path) == "patch"]
"""All patches that ship."""

HEAD = 'name = "test"\nabout = "for a test"\n'


@cache
def response_file(taps=3000, channels=2, rate=48_000):
    """Return the path of a WAV with a decaying noise of so many taps, for kinds that want a file."""
    path = Path(tempfile.mkdtemp(prefix="rtfx-test-")) / "response.wav"
    sound = np.random.default_rng(2).standard_normal((taps, channels)) * np.exp(-6 * np.arange(taps) / taps)[:, None]
    soundfile.write(path, sound, rate, subtype="DOUBLE")
    return str(path)


def preset(name):
    """Return the path of the preset called *name*."""
    return next(path for path in PRESETS if path.stem == name)


def one(kind, *, wires=("x",), **parameters):
    """Return a patch of a single block of *kind*, the guitar on all its *wires*."""
    outputs = find(kind).outputs
    parameters = {f.name: response_file() for f in find(kind).files} | parameters
    lines = [f'kind = "{kind}"', *(f'{w} = "input"' for w in wires)]
    lines += [f"{k} = {v!r}".replace("'", '"') for k, v in parameters.items()]
    end = 'from = "only"' if len(outputs) == 1 else f'left = "only.{outputs[0]}"\nright = "only.{outputs[1]}"'
    return rtfx.loads(HEAD + "[blocks.only]\n" + "\n".join(lines) + f"\n[output]\n{end}\n")


def text(body):
    """Return the patch with this *body* below its name."""
    return rtfx.loads(HEAD + body)


RING = """
[blocks.tone]
kind = "oscillator"
pitch = {pitch}
[blocks.product]
kind = "multiply"
x = "input"
y = "tone"
[output]
from = "product"
"""

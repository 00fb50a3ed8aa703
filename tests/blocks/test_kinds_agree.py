"""Every kind of block: machine code that calls no Python and gives the same bits as Python would."""

import re

import numpy as np
import pytest

from rtfx.blocks import table
from tests.blocks.harness import native_loop, run

KINDS = (
    "add", "amplitude-modulate", "bandpass", "compressor", "dc-block", "delay", "envelope", "frequency-shift",
    "highpass", "limiter", "lowpass", "mix", "noise-gate", "notch", "octave-divider", "pan", "polynomial", "reverb",
    "square", "tremolo",
)  # fmt: skip
FRAMES = 3000


def _sweep(parameter, turned):
    """Return the parameter's whole range, passed through once; a fixed one stays."""
    if parameter.fixed:
        return parameter.default
    space = np.geomspace if parameter.taper == "log" else np.linspace
    return space(parameter.low, parameter.high, FRAMES)[:: -1 if turned else 1]


def _bursts(seed):
    """Return noise that comes and goes and has rests in it."""
    noise = np.random.default_rng(seed).normal(size=FRAMES)
    return noise * np.maximum(0.0, np.sin(np.arange(FRAMES) / 150.0))


@pytest.mark.parametrize("name", KINDS)
def test_native_and_plain_python_agree_to_the_last_bit(name):
    kind = table.find(name)
    inputs = [_bursts(i) for i in range(len(kind.ports))]
    values = {p.name: _sweep(p, i % 2) for i, p in enumerate(kind.numbers)}
    native, plain = (run(name, *inputs, plain=plain, **values) for plain in (False, True))
    assert native.outputs.tobytes() == plain.outputs.tobytes()
    assert native.state == plain.state
    assert native.memory.tobytes() == plain.memory.tobytes()


@pytest.mark.parametrize("name", KINDS)
def test_machine_code_calls_no_python(name):
    called = re.findall(r'call [^@\n]*@"?([\w.]+)', native_loop(name).compiled.inspect_llvm())
    assert [c for c in called if c.startswith(("Py", "NRT", "numba"))] == []


@pytest.mark.parametrize("name", KINDS)
def test_silence_stays_silence(name):
    kind = table.find(name)
    outputs = run(name, *np.zeros((len(kind.ports), 500))).outputs
    assert not np.any(outputs)


@pytest.mark.parametrize("name", KINDS)
def test_kind_says_what_it_is(name):
    kind = table.find(name)
    assert kind.name == name
    assert all([kind.about, kind.law, kind.source, *(p.about for p in kind.parameters)])

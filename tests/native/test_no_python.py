"""The law of the audio thread: no Python, no allocation, no error path in any code it runs."""

import re
from pathlib import Path

import pytest
from patches import one

import rtfx
from rtfx.blocks.table import find, names
from rtfx.engine.native import callback

PRESETS = sorted((Path(__file__).parents[2] / "presets").glob("*.toml"))


def called(built):
    """Return the names of all functions that the linked code calls."""
    return set(re.findall(r'call [^@\n]*@"?([\w.]+)', built.keep.inspect_llvm()))


def forbidden(built):
    return {n for n in called(built) if n.startswith(("Py", "_Py", "NRT", "numba_"))}


def test_callback_calls_no_python():
    assert "clock_gettime" in called(callback())
    assert not forbidden(callback())


@pytest.mark.parametrize("quality", ["stage", "studio"])
@pytest.mark.parametrize("name", names())
def test_kind_calls_no_python(name, quality):
    assert not forbidden(rtfx.plan(one(name, wires=find(name).ports), quality=quality).build())


@pytest.mark.parametrize("path", PRESETS, ids=lambda p: p.stem)
def test_preset_calls_no_python(path):
    assert not forbidden(rtfx.plan(rtfx.load(path)).build())

"""The law of the audio thread: no Python, no allocation, no error path in any code it runs."""

import re
import sys

import pytest
from patches import PRESETS, one

import rtfx
from rtfx.blocks.table import find, names
from rtfx.engine.native import callback

pytestmark = pytest.mark.usefixtures("fresh_cache")


@pytest.fixture
def fresh_cache(tmp_path, monkeypatch):
    """Compile anew: numba does not show the code that it loads from its cache."""
    monkeypatch.setenv("RTFX_CACHE", str(tmp_path))
    for name in [n for n in sys.modules if n.startswith("rtfx_")]:
        monkeypatch.delitem(sys.modules, name)


def called(built):
    """Return the names of all functions that the linked code calls."""
    return set(re.findall(r'call [^@\n]*@"?([\w.]+)', built.keep.inspect_llvm()))


def forbidden(built):
    return {n for n in called(built) if n.startswith(("Py", "_Py", "NRT", "numba_"))}


def test_callback_calls_no_python():
    built = callback.__wrapped__()
    assert "clock_gettime" in called(built)
    assert not forbidden(built)


@pytest.mark.parametrize("quality", ["stage", "studio"])
@pytest.mark.parametrize("name", names())
def test_kind_calls_no_python(name, quality):
    assert not forbidden(rtfx.plan(one(name, wires=find(name).ports), quality=quality).build())


@pytest.mark.parametrize("path", PRESETS, ids=lambda p: p.stem)
def test_preset_calls_no_python(path):
    assert not forbidden(rtfx.plan(rtfx.load(path)).build())

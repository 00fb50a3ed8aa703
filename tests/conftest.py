"""What every test stands on: its own cache, and a floating-point mode that is left as it was found."""

import ctypes

import numpy as np
import pytest


@pytest.fixture(autouse=True, scope="session")
def own_cache(tmp_path_factory):
    """Build into a folder of the test run's own."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("RTFX_CACHE", str(tmp_path_factory.mktemp("built")))
        yield


@pytest.fixture(scope="session")
def floating_point_mode(own_cache):
    """Return a function that reads this thread's floating-point control word."""
    from numba import types

    from rtfx.compiler import build

    text = "from rtfx.native.flush import floating_point_mode\n\n\ndef {kernel}():\n    return floating_point_mode()\n"
    built = build.compile_at(build.write(text), types.int64())
    read = ctypes.CFUNCTYPE(ctypes.c_int64)(built.address)
    read.built = built
    return read


_CONTROL_BITS = 0xFFC0  # MXCSR without its sticky exception flags


@pytest.fixture(autouse=True)
def mode_is_left_alone(floating_point_mode):
    """Fail a test that leaves the floating-point mode changed."""
    before = floating_point_mode() & _CONTROL_BITS
    yield
    assert floating_point_mode() & _CONTROL_BITS == before


@pytest.fixture
def noise():
    """One second of noise at 48 kHz, float32, RMS 0.2."""
    return (0.2 * np.random.default_rng(7).standard_normal(48_000)).astype(np.float32)

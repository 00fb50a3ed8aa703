"""Levels against what standards say of a tone."""

import numpy as np
import pyloudnorm
import pytest
from patches import one
from stand import Stand

import rtfx

RATE = 48_000


@pytest.fixture
def full_scale():
    """Two seconds of a 997 Hz sine of amplitude 1, the tone of ITU-R BS.1770."""
    return np.sin(2 * np.pi * 997 * np.arange(2 * RATE) / RATE)


def test_the_loudness_meter_that_matches_presets_reads_the_standards_tone(full_scale):
    """ITU-R BS.1770: a 997 Hz sine at 0 dBFS on one front channel reads -3.01 LKFS (from memory)."""
    assert pyloudnorm.Meter(RATE).integrated_loudness(full_scale) == pytest.approx(-3.01, abs=0.05)


def test_meters_read_a_full_scale_sine(full_scale):
    """Root mean square of a sine of amplitude 1 is 1/sqrt 2, -3.01 dB (common practice)."""
    stand = Stand(rtfx.plan(one("gain")), ceiling=1.0)
    stand.run(full_scale)
    assert 10 * np.log10(stand.shared.many("SQUARE")) == pytest.approx(-3.01, abs=0.03)
    assert 20 * np.log10(stand.shared.many("PEAK")) == pytest.approx(0.0, abs=0.05)

"""The shipped patches: level with each other, quick, and safe."""

import numpy as np
import pyloudnorm
import pytest
from patches import PRESETS

import rtfx
from rtfx.devices.guitar import demo_guitar

TARGET_LUFS = -24.0


def test_there_are_at_least_six():
    assert len(PRESETS) >= 6


@pytest.mark.parametrize("path", PRESETS, ids=lambda p: p.stem)
def test_preset_is_level_with_the_others_and_below_full_scale(path):
    """Loudness by ITU-R BS.1770 through pyloudnorm; within 1 LU of each other means within 0.5 of the target."""
    out = rtfx.render(rtfx.load(path), demo_guitar(48_000.0)).astype(float)
    assert pyloudnorm.Meter(48_000).integrated_loudness(out) == pytest.approx(TARGET_LUFS, abs=0.5)
    assert np.abs(out).max() < 0.9


@pytest.mark.parametrize("path", PRESETS, ids=lambda p: p.stem)
def test_preset_delays_by_two_milliseconds_at_most(path):
    plan = rtfx.plan(rtfx.load(path))
    assert plan.delay <= 0.002 * plan.rate

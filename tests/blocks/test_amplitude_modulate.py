"""Amplitude modulation: two quadrants."""

import numpy as np
import pytest

from rtfx.blocks import table
from tests.blocks.harness import run, setting

X, Y = np.random.default_rng(0).uniform(-1.0, 1.0, (2, 1000))


def test_depth_0_leaves_the_signal_to_the_last_bit():
    assert run("amplitude-modulate", X, Y, depth=0.0).out.tobytes() == X.tobytes()


def test_a_silent_modulator_leaves_the_signal():
    assert np.array_equal(run("amplitude-modulate", X, 0.0 * Y).out, X)


def test_factor_is_1_plus_the_modulator():
    assert run("amplitude-modulate", X, Y, depth=0.7).out == pytest.approx(X * (1 + 0.7 * Y), rel=1e-15)


def test_signal_is_never_turned_round():
    assert np.all(run("amplitude-modulate", X, 3.0 * Y).out * X >= 0.0)


def test_signal_is_shut_where_the_modulator_is_below_minus_1():
    assert not np.any(run("amplitude-modulate", X, np.full(1000, -1.5)).out)


def test_bandwidth_is_the_sum():
    kind = table.find("amplitude-modulate")
    assert kind.bandwidth(setting(kind), {"x": 5000.0, "y": 300.0}) == 5300.0

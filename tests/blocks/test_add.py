"""Add: superposition."""

import numpy as np

from tests.blocks.harness import run


def test_sum_of_two_signals():
    x, y = np.random.default_rng(0).normal(size=(2, 100))
    assert np.array_equal(run("add", x, y).out, x + y)


def test_a_signal_and_its_opposite_are_silent():
    x = np.random.default_rng(1).normal(size=100)
    assert not np.any(run("add", x, -x).out)

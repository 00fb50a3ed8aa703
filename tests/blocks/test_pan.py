"""Pan: equal power from left to right."""

import numpy as np
import pytest

from tests.blocks.harness import run

X = np.random.default_rng(0).normal(size=1000)


def test_power_is_the_same_wherever_the_sound_is():
    balance = np.linspace(-1.0, 1.0, len(X))
    left, right = run("pan", X, balance=balance).outputs
    assert left**2 + right**2 == pytest.approx(X**2, rel=1e-14)


def test_middle_is_3_01_db_down_on_each_side():
    levels = 20 * np.log10(np.abs(run("pan", np.ones(1)).outputs))
    assert levels == pytest.approx(-10 * np.log10(2), abs=1e-12)


@pytest.mark.parametrize(("balance", "loud"), [(-1.0, 0), (1.0, 1)])
def test_an_end_is_the_signal_itself_and_nothing_on_the_other_side(balance, loud):
    outputs = run("pan", X, balance=balance).outputs
    assert np.array_equal(outputs[loud], X)
    assert not np.any(outputs[1 - loud])


def test_left_and_right_mirror_each_other_to_the_last_bit():
    balance = np.linspace(-1.0, 1.0, len(X))
    assert np.array_equal(run("pan", X, balance=balance).outputs, run("pan", X, balance=-balance).outputs[::-1])

"""Compressor: how it moves, and when it leaves all alone."""

import numpy as np
import pytest

from tests.blocks.harness import RATE, run

SETTINGS = {"threshold": -20.0, "ratio": 4.0, "knee": 0.0, "attack": 0.01, "release": 0.1}
FULL = 15.0  # dB that a level of 1 is turned down with these


def _reduction(x, **values):
    return -20 * np.log10(run("compressor", x, **(SETTINGS | values)).out / x)


def test_below_the_knee_every_bit_passes():
    x = np.random.default_rng(0).uniform(-1, 1, 5000) * 10 ** (-26 / 20)
    assert np.array_equal(run("compressor", x, threshold=-20.0, knee=12.0).out, x)


def test_it_turns_down_by_the_attack():
    n = np.arange(1, 4001)
    expected = FULL * (1 - np.exp(-n / (0.01 * RATE)))
    assert _reduction(np.ones(4000)) == pytest.approx(expected, abs=1e-5)


def test_it_lets_go_by_the_release_rounded_by_the_attack():
    """Two one-poles in a row, started at rest in full reduction: the sum of a geometric series."""
    n, a, r = np.arange(1, 10_001), np.exp(-1 / (0.01 * RATE)), np.exp(-1 / (0.1 * RATE))
    expected = FULL * (a**n + (1 - a) * r * (r**n - a**n) / (r - a))
    x = np.concatenate([np.ones(48_000), np.full(10_000, 0.01)])
    assert _reduction(x)[48_000:] == pytest.approx(expected, abs=1e-4)


def test_once_the_release_is_over_every_bit_passes_again():
    x = np.concatenate([np.ones(4800), np.full(48_000 * 3, 0.05)])
    assert np.array_equal(run("compressor", x, **SETTINGS).out[-1000:], x[-1000:])


def test_makeup_is_plain_gain():
    x = np.random.default_rng(1).uniform(-0.01, 0.01, 1000)
    assert run("compressor", x, makeup=12.0).out == pytest.approx(x * 10 ** (12 / 20), rel=1e-12)


def test_both_halves_of_the_wave_are_treated_alike():
    x = np.random.default_rng(2).normal(size=5000)
    assert np.array_equal(run("compressor", -x, **SETTINGS).out, -run("compressor", x, **SETTINGS).out)


def test_ratio_1_changes_nothing():
    x = np.random.default_rng(3).normal(size=5000)
    assert np.array_equal(run("compressor", x, ratio=1.0, threshold=-60.0).out, x)


def test_a_note_an_octave_lower_is_held_at_the_same_level():
    """Peaks are held over the release: a tone's level does not hang on its pitch."""
    n = np.arange(48_000)
    levels = [
        np.abs(run("compressor", np.sin(2 * np.pi * f * n / RATE), **SETTINGS).out[-9600:]).max() for f in (110, 220)
    ]
    assert 20 * np.log10(levels[0] / levels[1]) == pytest.approx(0.0, abs=0.5)

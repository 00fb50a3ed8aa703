"""Noise gate: when it opens, when it shuts, how it moves."""

import numpy as np
import pytest

from tests.blocks.harness import RATE, run

FRAMES = 48_000


def _level(db, frames=FRAMES):
    return np.full(frames, 10 ** (db / 20))


def _gain(*pieces, **values):
    """Gain of the gate over pieces of steady signal."""
    x = np.concatenate(pieces)
    return run("noise-gate", x, **values).out / x


def test_below_the_threshold_it_stays_at_the_floor():
    gain = _gain(_level(-60.1), threshold=-60.0, floor=-40.0, release=0.01)
    assert gain[-1] == pytest.approx(10 ** (-40 / 20), rel=1e-12)


def test_at_the_threshold_it_opens_and_passes_every_bit():
    noise = np.sign(np.random.default_rng(0).normal(size=FRAMES)) * _level(-59.9)
    assert np.array_equal(run("noise-gate", noise, threshold=-60.0).out[-1000:], noise[-1000:])


def test_within_the_hysteresis_it_stays_open():
    gain = _gain(_level(-50), _level(-65.9), threshold=-60.0, hysteresis=6.0)
    assert gain[-1] == 1.0


def test_below_the_hysteresis_it_shuts():
    gain = _gain(_level(-50), _level(-66.1), threshold=-60.0, hysteresis=6.0, floor=-80.0, release=0.01)
    assert gain[-1] == pytest.approx(1e-4, rel=1e-12)


def test_within_the_hysteresis_it_does_not_open():
    gain = _gain(_level(-60.1), threshold=-60.0, hysteresis=6.0)
    assert np.max(gain) < 1e-3


def test_hold_is_counted_from_the_last_peak_to_the_sample():
    gain = _gain(_level(-50), _level(-90), hold=0.1)
    assert np.argmax(gain[FRAMES:] < 1.0) == 0.1 * RATE - 1


def test_rests_shorter_than_the_hold_do_not_move_the_gain():
    tone = 0.1 * np.sin(2 * np.pi * 82.41 / RATE * np.arange(FRAMES))
    out = run("noise-gate", tone, threshold=-30.0, hysteresis=0.0, hold=0.02).out
    assert np.array_equal(out[FRAMES // 2 :], tone[FRAMES // 2 :])


def test_it_opens_by_the_attack():
    n = np.arange(1, 501)
    gain = _gain(_level(-20), attack=0.01)[:500]
    assert gain == pytest.approx(1 - np.exp(-n / (0.01 * RATE)), rel=1e-11)


def test_it_shuts_by_the_release():
    start, floor = FRAMES + int(0.05 * RATE) - 1, 0.01
    gain = _gain(_level(-50), _level(-90), release=0.2, hold=0.05, floor=-40.0)[start : start + 9600]
    n = np.arange(1, 9601)
    assert gain == pytest.approx(floor + (1 - floor) * np.exp(-n / (0.2 * RATE)), rel=1e-9)


def test_opening_makes_no_step():
    gain = _gain(_level(-90), _level(-20), attack=0.002)
    assert np.max(np.abs(np.diff(gain))) < 1 / (0.002 * RATE)

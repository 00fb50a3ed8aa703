"""Tremolo: its waves, its period to the sample, and its edges."""

import numpy as np
import pytest
from patches import one, text

import rtfx
from tests.blocks.harness import RATE, run

TEMPO = 100  # a beat of 28800 samples


def _gain(frames, **values):
    """Gain over time, from the signal 1."""
    return run("tremolo", np.ones(frames), **values).out


def _wave(wave, frames, **values):
    return rtfx.render(one("tremolo", wave=wave, **values), np.ones(frames))[:, 0].astype(float)


def test_sine_is_a_raised_cosine():
    n = np.arange(20_000)
    expected = 1 - 0.8 * (1 - np.cos(2 * np.pi * 3.0 * n / RATE)) / 2
    assert _gain(20_000, speed=3.0, depth=0.8) == pytest.approx(expected, abs=1e-10)


def test_period_is_exact_after_a_minute():
    gain = _gain(60 * 48_000, speed=5.0, depth=1.0)
    assert gain[-9600:] == pytest.approx(gain[:9600], abs=1e-9)


def test_depth_0_passes_every_bit():
    x = np.random.default_rng(0).normal(size=5000)
    assert np.array_equal(run("tremolo", x, depth=0.0).out, x)


@pytest.mark.parametrize("wave", ["sine", "triangle", "square"])
def test_depth_1_goes_from_full_to_silence_in_half_a_period(wave):
    gain = _wave(wave, 9600, speed=5.0, depth=1.0)
    assert gain[0] == pytest.approx(1.0, abs=1e-6)
    assert gain[4800] == pytest.approx(0.0, abs=1e-6)


@pytest.mark.parametrize("wave", ["sine", "triangle", "square"])
def test_gain_stays_within_the_depth(wave):
    gain = _wave(wave, 48_000, speed=7.0, depth=0.6)
    assert gain.min() >= 0.4 - 1e-6
    assert gain.max() <= 1.0


def test_triangle_falls_evenly():
    gain = _wave("triangle", 4800, speed=5.0, depth=1.0)
    assert np.diff(gain) == pytest.approx(np.full(4799, -1 / 4800), abs=1e-6)


@pytest.mark.parametrize("speed", [0.05, 1.0, 20.0])
def test_square_is_never_steeper_than_its_edge(speed):
    """A cubic with level ends is at most 1.5 times as steep as the straight line: 1 in 4 ms."""
    gain = _wave("square", 48_000 * 11, speed=speed, depth=1.0)
    assert np.abs(np.diff(gain)).max() == pytest.approx(1.5 / (0.004 * RATE), rel=0.03)


def test_square_is_full_for_nearly_half_the_time():
    gain = _wave("square", 48_000, speed=5.0, depth=1.0)
    assert np.mean(gain > 0.999) == pytest.approx(0.5 - 0.5 * 2 * 5.0 * 0.004, abs=0.01)


@pytest.mark.parametrize(("beat", "period"), [
    ("1/1", 115_200), ("1/2", 57_600), ("1/4", 28_800), ("1/8", 14_400), ("1/16", 7_200),
    ("1/8 triplet", 9_600), ("1/8 dotted", 21_600),
])  # fmt: skip
def test_a_beat_is_a_note_at_the_patchs_tempo(beat, period):
    patch = text(
        f'tempo = {TEMPO}\n[blocks.only]\nkind = "tremolo"\nx = "input"\nbeat = "{beat}"\ndepth = 1.0\nspeed = 7.3\n'
        '[output]\nfrom = "only"\n'
    )
    gain = rtfx.render(patch, np.ones(2 * period))[:, 0]
    assert np.argmin(gain[:period]) == period / 2
    assert gain[period:] == pytest.approx(gain[:period], abs=1e-6)

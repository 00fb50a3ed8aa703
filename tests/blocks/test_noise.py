"""Noise: its level, its colour, and that it is the same again."""

import numpy as np
import pytest
from patches import one
from scipy import signal

import rtfx
from rtfx.blocks.noise import pink_memory, tick_pink, tick_white
from rtfx.dsp.random_numbers import first_state
from tests.blocks.harness import plain

OCTAVES = 31.25 * 2.0 ** np.arange(9.5)  # centres, Hz


def _noise(seconds=20, rate=48_000, **values):
    patch = one("noise", wires=(), **values)
    return rtfx.render(rtfx.plan(patch, rate=rate), np.zeros(seconds * rate))[:, 0].astype(float)


def _octave_levels(sound, rate):
    """Power in each octave of OCTAVES below 20 kHz, dB."""
    hz, power = signal.welch(sound, rate, nperseg=1 << 15)
    edges = [(c / 2**0.5, c * 2**0.5) for c in OCTAVES]
    return np.array([10 * np.log10(power[(hz >= a) & (hz < b)].sum() * hz[1]) for a, b in edges if b < 20_000])


@pytest.mark.parametrize("colour", ["white", "pink"])
@pytest.mark.parametrize("level", [-40.0, -12.0])
def test_level_is_the_rms(colour, level):
    assert 10 * np.log10(np.mean(_noise(colour=colour, level=level) ** 2)) == pytest.approx(level, abs=0.2)


@pytest.mark.parametrize("rate", [44_100, 96_000, 192_000])
def test_level_of_pink_is_the_same_at_every_rate(rate):
    assert 10 * np.log10(np.mean(_noise(colour="pink", rate=rate) ** 2)) == pytest.approx(-20.0, abs=0.2)


def test_white_is_within_its_bound_and_fills_it():
    top = np.abs(_noise(5, level=-20.0)).max()
    assert top == pytest.approx(0.1 * 3**0.5, rel=1e-4)


def test_white_has_no_mean():
    assert abs(_noise().mean()) < 3e-4


def test_white_is_not_like_itself_a_moment_later():
    sound = _noise(5)
    likeness = [np.corrcoef(sound[late:], sound[:-late])[0, 1] for late in (1, 2, 3, 10, 1000)]
    assert np.abs(likeness).max() < 0.01


@pytest.mark.parametrize("rate", [44_100, 48_000, 192_000])
def test_white_rises_by_3_db_an_octave_in_octaves(rate):
    """As strong per Hz: every octave is twice as wide as the last."""
    assert np.diff(_octave_levels(_noise(rate=rate), rate)) == pytest.approx(10 * np.log10(2), abs=0.5)


@pytest.mark.parametrize("rate", [44_100, 48_000, 192_000])
def test_pink_is_as_strong_in_every_octave(rate):
    levels = _octave_levels(_noise(40, colour="pink", rate=rate), rate)
    assert levels - levels.mean() == pytest.approx(np.zeros(len(levels)), abs=0.5)


def _sections(rate):
    """The pink filter as scipy's second-order sections, and the gain before it."""
    memory = pink_memory(rate)
    poles, zeros = memory[1:].reshape(-1, 4)[:, :2].T
    return [*([1, -z, 0, 1, -p, 0] for p, z in zip(poles, zeros, strict=True)), [1, 0.08, 0, 1, 0, 0]], memory[0]


@pytest.mark.parametrize("rate", [44_100.0, 48_000.0, 88_200.0, 96_000.0, 192_000.0])
def test_pink_filter_keeps_to_its_slope(rate):
    """−3.01 dB an octave within ±0.3 dB from 20 Hz to 20 kHz (18 kHz at 44.1 kHz)."""
    hz = np.geomspace(20, min(20_000, rate * 18 / 44.1), 5000)
    response = np.abs(signal.sosfreqz(_sections(rate)[0], hz, fs=rate)[1])
    apart = 20 * np.log10(response) + 10 * np.log10(hz)
    assert apart.max() - apart.min() < 0.6


def test_pink_is_white_through_that_filter():
    memory, (sections, gain) = pink_memory(48_000.0), _sections(48_000.0)
    numbers, found, number, last = [], [], 1, 0.0
    for _ in range(500):
        y, number, last = plain(tick_pink)(memory, 0, 1.0, number, last)
        numbers.append(number)
        found.append(y)
    white = gain * (2 * np.array(numbers) / (2**31 - 1) - 1)
    assert found == pytest.approx(signal.sosfilt(sections, white), abs=1e-12)


def test_machine_code_gives_the_numbers_of_plain_python():
    number, expected = first_state(5), []
    for _ in range(500):
        y, number = plain(tick_white)(0.1 * 3**0.5, number)
        expected.append(y)
    assert _noise(1, level=-20.0, seed=5)[:500] == pytest.approx(expected, rel=1e-7)


def test_the_same_seed_gives_the_same_noise():
    assert np.array_equal(_noise(1, seed=7), _noise(1, seed=7))


@pytest.mark.parametrize(("first", "second"), [(1, 2), (1, 3), (2, 4), (10, 1000)])
def test_different_seeds_give_noises_that_are_not_alike(first, second):
    assert abs(np.corrcoef(_noise(5, seed=first), _noise(5, seed=second))[0, 1]) < 0.01


def test_a_seed_between_whole_numbers_is_refused():
    with pytest.raises(ValueError, match=r"seed = 1.5 is not a whole number; give one from 1 to 1000000"):
        rtfx.plan(one("noise", wires=(), seed=1.5))

"""Octave divider: how far down, how strong, without steps, and silent between the notes."""

import numpy as np
import pytest
from patches import one

import rtfx
from tests.blocks.harness import RATE, run

SIZE = 1 << 14


def _tone(k, level=1.0, frames=3 * SIZE):
    return level * np.sin(2 * np.pi * k * np.arange(frames) / SIZE)


def _lines(out):
    return np.abs(np.fft.rfft(np.asarray(out, float)[-SIZE:])) * 2 / SIZE


def _bin(hz, multiple):
    """The odd multiple of a *multiple* nearest below *hz*."""
    return (int(hz * SIZE / RATE / multiple) | 1) * multiple


@pytest.fixture(scope="module")
def one_octave():
    """Lines of a full-scale 220 Hz sine divided by 2, and its bin, a multiple of 2."""
    k = _bin(220.0, 2)
    return k, _lines(run("octave-divider", _tone(k)).out)


def test_a_sine_times_a_square_of_half_its_pitch_has_the_lines_of_its_fourier_series(one_octave):
    """sin 2α times (4/π) Σ sin(nα)/n, n odd: 8/(π |m² − 4|) at m times half the pitch, m odd."""
    k, found = one_octave
    m = np.arange(1, 20, 2)
    assert found[k // 2 * m] == pytest.approx(8 / np.pi / np.abs(m**2 - 4), abs=2e-3)


def test_the_note_itself_is_gone(one_octave):
    k, found = one_octave
    assert found[k] < 1e-6


def test_two_octaves_are_half_waves_in_fours():
    """Fourier integral of |sin 4α| with the sign of sin α, worked out numerically."""
    k = _bin(220.0, 4)
    found = _lines(rtfx.render(one("octave-divider", octaves="two"), _tone(k))[:, 0])
    a = (np.arange(100_000) + 0.5) * np.pi / 100_000
    expected = [2 * np.mean(np.abs(np.sin(4 * a)) * np.sin(m * a)) for m in (1, 3, 5, 7)]
    assert found[k // 4 * np.array([1, 3, 5, 7])] == pytest.approx(np.abs(expected), abs=2e-3)


@pytest.mark.parametrize("hz", [82.0, 147.0, 220.0, 330.0, 440.0, 659.0])
def test_a_tone_whose_octave_is_twice_as_strong_is_still_divided_by_its_fundamental(hz):
    k = _bin(hz, 2)
    x = 0.2 * _tone(k) + 0.4 * _tone(2 * k) + 0.1 * _tone(3 * k)
    found = _lines(run("octave-divider", x, cutoff=hz).out)
    between = np.delete(found, np.arange(k // 2, SIZE // 2, k))
    assert found[k // 2] > 0.05
    assert between.max() < 0.01 * found[k // 2]


def test_it_never_jumps_further_than_the_guitar_does():
    x = np.random.default_rng(0).normal(size=48_000)
    out = run("octave-divider", x).out
    settled = slice(4800, None)
    assert np.abs(np.diff(out[settled])).max() <= np.abs(np.diff(x[settled])).max()


def test_its_loudness_follows_the_guitar():
    x = _tone(_bin(220.0, 2)) * np.linspace(1.0, 0.1, 3 * SIZE)
    out = run("octave-divider", x).out
    assert np.array_equal(np.abs(out[4800:]), np.abs(x[4800:]))


def test_below_the_threshold_there_is_silence():
    assert not np.any(run("octave-divider", _tone(75, 0.009), threshold=-40.0).out)


def test_after_a_note_there_is_silence_though_noise_goes_on():
    hiss = 1e-4 * np.random.default_rng(0).normal(size=48_000)
    out = run("octave-divider", np.concatenate([_tone(75, 0.5), hiss]), threshold=-50.0).out
    assert not np.any(out[-4800:])


@pytest.mark.parametrize(("quality", "limit"), [("stage", -80), ("studio", -90)])
@pytest.mark.parametrize("octaves", ["one", "two"])
def test_corners_do_not_fold_back(octaves, quality, limit):
    """Full-scale sines over the guitar's range: no line under 20 kHz but multiples of the divided pitch."""
    parts = 2 if octaves == "one" else 4
    plan = rtfx.plan(one("octave-divider", octaves=octaves, cutoff=700.0), quality=quality)
    for hz in (82.4, 196.0, 440.0, 880.0, 1318.5):
        k = _bin(hz, parts)
        found = _lines(rtfx.render(plan, _tone(k))[:, 0])[: int(20_000 / RATE * SIZE)]
        wanted = np.arange(0, len(found), k // parts)
        strongest = found[wanted].max()
        assert 20 * np.log10(np.delete(found, wanted).max() / strongest) < limit

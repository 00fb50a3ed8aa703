"""Delay: exact at whole samples, a cubic between them, at least one sample."""

import numpy as np
import pytest

from rtfx.blocks import table
from tests.blocks.harness import RATE, run, setting

NOISE = np.random.default_rng(0).normal(size=5000)
MIDDLE_BOUND, OUTER_BOUND = 0.0235, 0.0417  # of Lagrange's remainder, times ω⁴


def _late(samples, x=NOISE, **more):
    return run("delay", x, time=np.asarray(samples) / RATE, **more).out


@pytest.mark.parametrize("samples", [1, 2, 3, 4, 5, 63, 64, 65, 1000])
def test_whole_samples_come_out_to_the_last_bit(samples):
    out = _late(samples)
    assert out[samples:].tobytes() == NOISE[:-samples].tobytes()
    assert not np.any(out[:samples])


def test_whole_milliseconds_come_out_to_the_last_bit():
    exact = [
        np.array_equal(run("delay", NOISE, time=ms / 1000).out[48 * ms :], NOISE[: -48 * ms]) for ms in range(1, 100)
    ]
    assert all(exact)


@pytest.mark.parametrize("rate", [44_100.0, 48_000.0, 768_000.0])
def test_no_time_is_one_sample_at_the_blocks_own_rate(rate):
    out = run("delay", NOISE, time=0.0, rate=rate).out
    assert out.tobytes() == np.concatenate([[0.0], NOISE[:-1]]).tobytes()


def test_longest_time_fits_into_memory():
    x = np.zeros(100_000)
    x[0] = 1.0
    assert np.flatnonzero(run("delay", x, time=2.0).out) == [96_000]


def test_memory_counts_the_time_a_control_can_reach_at_the_blocks_rate():
    kind = table.find("delay")
    code = kind.build(setting(kind, {"time": 0.001}, rate=8 * RATE, reach={"time": (0.0, 0.1)}))
    assert len(code.memory) >= 0.1 * 8 * RATE + 3


def test_time_may_move_up_to_what_a_control_can_reach():
    samples = np.linspace(10.0, 500.0, len(NOISE)).round()
    out = _late(samples, reach={"time": (10 / RATE, 500 / RATE)})
    n = np.arange(len(NOISE))[600:]
    assert np.array_equal(out[600:], NOISE[n - samples[600:].astype(int)])


@pytest.mark.parametrize("samples", [1.25, 1.5, 1.999, 2.5, 7.3, 100.7])
def test_a_cubic_curve_is_followed_exactly(samples):
    def cubic(n):
        return 0.5 - n / 100 + (n / 100) ** 2 - 0.1 * (n / 100) ** 3

    n = np.arange(500.0)
    assert _late(samples, cubic(n))[110:] == pytest.approx(cubic(n - samples)[110:], rel=1e-11, abs=1e-12)


@pytest.mark.parametrize(("samples", "bound"), [(1.4, OUTER_BOUND), (2.5, MIDDLE_BOUND), (33.7, MIDDLE_BOUND)])
def test_band_limited_noise_is_late_within_the_remainder_of_the_cubic(samples, bound):
    size, rng = 4096, np.random.default_rng(2)
    omega = 2 * np.pi * np.arange(size // 2 + 1) / size
    spectrum = np.where(omega < 0.5, np.exp(2j * np.pi * rng.uniform(size=len(omega))), 0.0)
    spectrum[0] = 0.0
    x = np.fft.irfft(spectrum, size)
    shifted = np.fft.irfft(spectrum * np.exp(-1j * omega * samples), size)
    error = _late(samples, np.tile(x, 2))[size:] - shifted
    assert np.max(np.abs(error)) < np.sum(2 / size * np.abs(spectrum) * bound * omega**4)


@pytest.mark.parametrize(("frequency_hz", "loss_db"), [(10_000.0, 0.53), (15_000.0, 2.53)])
def test_half_way_between_samples_the_top_fades(frequency_hz, loss_db):
    """(9 cos ω/2 − cos 3ω/2) / 8 is the gain of the four weights −1, 9, 9, −1 over 16."""
    half = np.pi * frequency_hz / RATE
    gain = (9 * np.cos(half) - np.cos(3 * half)) / 8
    n = np.arange(1000)
    late = gain * np.cos(2 * half * (n - 2.5))
    assert _late(2.5, np.cos(2 * half * n))[10:] == pytest.approx(late[10:], abs=1e-12)
    assert 20 * np.log10(gain) == pytest.approx(-loss_db, abs=0.01)


def test_a_moving_time_has_no_step_where_the_four_samples_stop_moving_along():
    omega, n = 0.1, np.arange(5000.0)
    samples = np.linspace(1.0, 4.0, len(n))
    out = _late(samples, np.sin(omega * n))
    assert np.max(np.abs(out - np.sin(omega * (n - samples)))[10:]) < OUTER_BOUND * omega**4


def test_what_comes_out_does_not_depend_on_what_comes_in_at_the_same_time():
    other = NOISE.copy()
    other[2000:] = 0.0
    assert _late(1.3)[2000] == _late(1.3, other)[2000]

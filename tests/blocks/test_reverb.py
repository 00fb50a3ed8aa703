"""Reverb: the network's parts, its first echoes, and its level."""

from itertools import combinations
from math import gcd

import numpy as np
import pytest

from rtfx.dsp import reverb_lines as rl
from tests.blocks.harness import RATE, plain, run

CLICK = np.eye(1, 96_000)[0]


def test_the_matrix_keeps_energy():
    """Lossless prototype: H times its own transpose is 8 times the identity, to the last bit."""
    H = np.array([plain(rl.mixed)(*row) for row in np.eye(8)])
    assert np.array_equal(H @ H.T, 8 * np.eye(8))


@pytest.mark.parametrize("rate", [44_100, 48_000, 88_200, 96_000, 176_400, 192_000])
def test_no_two_delays_have_a_common_divisor(rate):
    assert all(gcd(a, b) == 1 for a, b in combinations(rl.lengths(rate), 2))


@pytest.mark.parametrize("rate", [44_100, 48_000, 88_200, 96_000, 176_400, 192_000])
def test_delays_are_within_half_a_percent_of_their_nominal_times(rate):
    assert np.array(rl.lengths(rate)) / rate == pytest.approx(rl.NOMINAL_S, rel=0.005)


@pytest.mark.parametrize("time", [0.2, 2.0, 10.0])
@pytest.mark.parametrize("damping", [500.0, 5000.0, 20_000.0])
def test_a_pass_takes_its_share_at_0_hz_and_twice_that_at_the_damping_frequency(time, damping):
    """The filter's response, worked out from its coefficients."""
    parts, poles = map(np.array, rl.all_fading(time, damping, RATE))
    z = np.exp(-2j * np.pi * damping / RATE)
    loss = -60 * np.array(rl.NOMINAL_S) / time
    assert 20 * np.log10(parts / (1 - poles)) == pytest.approx(loss, abs=1e-9)
    assert 20 * np.log10(np.abs(parts / (1 - poles * z))) == pytest.approx(2 * loss, abs=1e-9)


@pytest.mark.parametrize("time", [0.2, 10.0])
@pytest.mark.parametrize("damping", [500.0, 20_000.0])
def test_no_frequency_gains_in_a_pass(time, damping):
    parts, poles = map(np.array, rl.all_fading(time, damping, RATE))
    z = np.exp(-2j * np.pi * np.linspace(0, 0.5, 1001))[:, None]
    assert np.abs(parts / (1 - poles * z)).max() < 1.0


def test_the_first_echoes_come_after_the_eight_delays():
    out = run("reverb", CLICK, damping=20_000.0).outputs[0]
    lengths = rl.lengths(RATE)
    assert np.flatnonzero(out)[0] == lengths[0]
    assert np.abs(out[list(lengths)]).min() > 0.02


def test_left_and_right_are_not_alike():
    left, right = run("reverb", CLICK).outputs
    assert abs(left @ right) / np.sqrt((left @ left) * (right @ right)) < 0.1


@pytest.mark.parametrize("time", [0.2, 1.0, 10.0])
def test_noise_comes_out_about_as_loud_as_it_goes_in(time):
    """Energy of the impulse response, low in frequency, where nothing is damped: 1 within 2 dB."""
    responses = run("reverb", np.eye(1, 12 * 48_000)[0], time=time, damping=20_000.0).outputs
    low = np.abs(np.fft.rfft(responses)[:, 100 * 12 : 1000 * 12]) ** 2
    assert np.abs(10 * np.log10(low.mean(axis=1))).max() < 2


def test_a_gliding_time_makes_no_step():
    n = np.arange(48_000)
    x = 0.1 * np.sin(2 * np.pi * 200 * n / RATE)
    time = np.geomspace(0.2, 10.0, 24_000)
    moved = run("reverb", x, time=np.concatenate([time, time[::-1]])).outputs
    assert np.abs(np.diff(moved, 2)).max() < 0.05


def test_left_alone_it_becomes_silent():
    x = np.concatenate([np.random.default_rng(0).normal(size=4800), np.zeros(96_000)])
    assert np.abs(run("reverb", x, time=0.2).outputs[:, -1000:]).max() < 1e-20

"""Envelope: attack, release, and never below 0."""

import numpy as np
import pytest

from rtfx.blocks import table
from tests.blocks.harness import RATE, run, setting

KIND = table.find("envelope")


def test_a_step_is_followed_by_the_attack():
    n = np.arange(1, 2001)
    out = run("envelope", np.full(2000, 0.8), attack=0.01).out
    assert out == pytest.approx(0.8 * (1 - np.exp(-n / (0.01 * RATE))), rel=1e-11)


def test_silence_is_followed_by_the_release():
    x = np.concatenate([np.ones(48_000), np.zeros(20_000)])
    out = run("envelope", x, attack=0.001, release=0.2).out
    n = np.arange(1, 20_001)
    assert out[48_000:] == pytest.approx(np.exp(-n / (0.2 * RATE)), rel=1e-9)


def test_both_halves_of_the_wave_count():
    x = np.random.default_rng(0).normal(size=1000)
    assert np.array_equal(run("envelope", x).out, run("envelope", -x).out)


def test_it_is_never_below_0_nor_above_the_highest_peak():
    x = np.random.default_rng(1).normal(size=100_000)
    out = run("envelope", x, attack=0.0001, release=0.001).out
    assert 0.0 <= np.min(out) <= np.max(out) <= np.max(np.abs(x))


def test_a_tone_reads_near_its_peak():
    x = 0.5 * np.sin(2 * np.pi * 440.0 / RATE * np.arange(48_000))
    assert np.min(run("envelope", x, attack=0.0001, release=1.0).out[-4800:]) == pytest.approx(0.5, rel=0.01)


def test_bandwidth_is_the_cutoff_of_the_shortest_attack_in_reach():
    width = KIND.bandwidth(setting(KIND, reach={"attack": (0.001, 0.1)}), {"x": 20_000.0})
    assert width == pytest.approx(159.155, abs=0.001)


def test_bandwidth_of_a_narrow_input_stays_narrow():
    assert KIND.bandwidth(setting(KIND, {"attack": 0.0001}), {"x": 3.0}) == 3.0

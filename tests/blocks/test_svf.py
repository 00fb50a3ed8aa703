"""The four filters on one core: what they share, and how they bear being moved."""

import numpy as np
import pytest

from tests.blocks.harness import RATE, run

FILTERS = ("lowpass", "highpass", "bandpass", "notch")
NOISE = np.random.default_rng(0).normal(size=20_000)


def test_low_band_and_high_add_up_to_the_signal():
    parts = [run(name, NOISE, cutoff=700.0, q=3.0).out for name in ("lowpass", "bandpass", "highpass")]
    assert np.sum(parts, axis=0) == pytest.approx(NOISE, abs=1e-13)


def test_notch_is_what_the_band_leaves():
    band, notch = (run(name, NOISE, cutoff=700.0, q=3.0).out for name in ("bandpass", "notch"))
    assert band + notch == pytest.approx(NOISE, abs=1e-13)


@pytest.mark.parametrize(("name", "gain"), [("lowpass", 1.0), ("highpass", 0.0), ("bandpass", 0.0), ("notch", 1.0)])
def test_gain_at_dc(name, gain):
    assert run(name, np.ones(20_000)).out[-1] == pytest.approx(gain, abs=1e-13)


@pytest.mark.parametrize("name", FILTERS)
def test_a_cutoff_near_or_above_half_the_rate_is_stable(name):
    out = run(name, NOISE, rate=8000.0, cutoff=20_000.0, q=30.0).out
    assert np.max(np.abs(out)) < 30 * np.max(np.abs(NOISE))


@pytest.mark.parametrize("name", FILTERS)
def test_a_cutoff_above_0_49_of_the_rate_counts_as_0_49(name):
    above, held = (run(name, NOISE, rate=8000.0, cutoff=f).out for f in (20_000.0, 0.49 * 8000.0))
    assert above == pytest.approx(held, rel=1e-12)


@pytest.mark.parametrize("name", FILTERS)
def test_a_cutoff_that_jumps_in_every_sample_does_not_blow_up(name):
    cutoff = np.random.default_rng(1).uniform(20.0, 20_000.0, len(NOISE))
    assert np.max(np.abs(run(name, NOISE, cutoff=cutoff, q=30.0).out)) < 1000.0


def test_a_moved_cutoff_adds_no_energy_once_the_input_rests():
    x = np.where(np.arange(len(NOISE)) < 100, NOISE, 0.0)
    cutoff = 1000.0 * 2.0 ** np.sin(2 * np.pi * 300.0 / RATE * np.arange(len(NOISE)))
    out = run("lowpass", x, cutoff=cutoff, q=5.0).out
    assert np.max(np.abs(out[-1000:])) < 1e-9

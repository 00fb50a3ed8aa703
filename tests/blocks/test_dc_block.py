"""DC block: no DC, and nothing else gone."""

import numpy as np
import pytest

from tests.blocks.harness import RATE, run


def _gain_db(r, frequency_hz, rate):
    """Gain of (1 − z⁻¹) / (1 − R z⁻¹)."""
    z = np.exp(2j * np.pi * frequency_hz / rate)
    return 20 * np.log10(np.abs((z - 1) / (z - r)))


def _r(cutoff_hz, rate=RATE):
    """R as the second sample of the impulse response shows it: R − 1."""
    return run("dc-block", np.array([1.0, 0.0]), cutoff=cutoff_hz, rate=rate).out[1] + 1.0


def test_dc_dies_away_without_a_residue():
    assert run("dc-block", np.full(3_000_000, 0.7), cutoff=10.0).out[-1] < 1e-300


@pytest.mark.parametrize("cutoff_hz", [1.0, 10.0, 100.0])
def test_dc_falls_by_r_a_sample(cutoff_hz):
    out = run("dc-block", np.ones(2000), cutoff=cutoff_hz).out
    assert out == pytest.approx((1 - 2 * np.pi * cutoff_hz / RATE) ** np.arange(2000), rel=1e-11)


@pytest.mark.parametrize("rate", [44_100.0, 48_000.0, 384_000.0])
@pytest.mark.parametrize("cutoff_hz", [1.0, 10.0, 100.0])
def test_cutoff_is_3_db_down(cutoff_hz, rate):
    assert _gain_db(_r(cutoff_hz, rate), cutoff_hz, rate) == pytest.approx(-3.01, abs=0.1)


def test_lowest_string_keeps_its_level():
    assert _gain_db(_r(10.0), 82.41, RATE) == pytest.approx(0.0, abs=0.1)


def test_top_is_not_raised():
    assert _gain_db(_r(100.0, 44_100.0), 20_000.0, 44_100.0) == pytest.approx(0.0, abs=0.1)

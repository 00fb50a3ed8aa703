"""The frequency shifter's phase network against the theory of equal ripples, and what it rejects at every rate."""

import numpy as np
import pytest
from scipy.special import ellipk, ellipkm1

from rtfx.dsp import phase_difference as pd
from tests.blocks.harness import run

RATES = [44_100.0, 48_000.0, 88_200.0, 96_000.0, 192_000.0]
SIZE = 1 << 17


def difference(rate, hz):
    """Phase of the second chain less that of the first, in radians, from the sections' transfer functions."""
    z = np.exp(-2j * np.pi * hz / rate)
    c = pd.memory_for(rate)[1:].reshape(pd.PAIRS, pd.WORDS)[:, :2, None]
    first, second = np.prod((c + z) / (1 + c * z), axis=0)
    return np.angle(second / first)


@pytest.mark.parametrize("rate", RATES)
def test_phase_difference_has_the_ripple_of_elliptic_theory(rate):
    """Equal ripples: the wrong sideband is tan(δ/2) = 2 qⁿ, q = exp(−π K/K′), S. Darlington, 1950 (from memory)."""
    low, high = pd.band(rate)
    k = np.tan(np.pi * low / rate) / np.tan(np.pi * high / rate)
    expected = 2 * np.exp(-np.pi * ellipk(k * k) / ellipkm1(k * k)) ** (2 * pd.PAIRS)
    ripple = difference(rate, np.geomspace(low, high, 50_001)) - np.pi / 2
    assert np.tan(np.abs(ripple).max() / 2) == pytest.approx(expected, rel=1e-3)


@pytest.mark.parametrize("rate", RATES)
def test_ripples_touch_their_bound_once_a_section_and_once_more(rate):
    """An equiripple approximation of n parameters has n + 1 extrema of alternating sign (Chebyshev's criterion)."""
    ripple = difference(rate, np.geomspace(*pd.band(rate), 200_001)) - np.pi / 2
    near = np.abs(ripple) > 0.999 * np.abs(ripple).max()
    signs = np.sign(ripple[near])
    assert 1 + np.count_nonzero(np.diff(signs)) == 2 * pd.PAIRS + 1


@pytest.mark.parametrize("rate", RATES)
@pytest.mark.parametrize("output", [0, 1])
def test_wrong_sideband_is_70_db_down_from_30_hz_to_20_khz(rate, output):
    """Tones all over the band at once; their bins are multiples of 8 and the shift is 3 bins: none falls on another."""
    low, high = (edge / rate * SIZE for edge in pd.band(rate))
    tones = np.unique(np.geomspace(low / 8 + 1, high / 8 - 1, 300).astype(int)) * 8
    n = np.arange(SIZE)
    spectrum = np.zeros(SIZE // 2 + 1, complex)
    spectrum[tones] = np.exp(2j * np.pi * np.random.default_rng(0).uniform(size=len(tones)))
    x = np.tile(np.fft.irfft(spectrum, SIZE) * SIZE / 2, 2)
    out = run("frequency-shift", x, rate=rate, shift=3 * rate / SIZE).outputs[output]
    found = np.abs(np.fft.rfft(out[len(n) :])) * 2 / SIZE
    wanted, wrong = (tones + 3, tones - 3) if output == 0 else (tones - 3, tones + 3)
    assert np.abs(20 * np.log10(found[wanted])).max() < 0.05
    assert 20 * np.log10(found[wrong].max()) < -70

"""The carrier's waveforms against their Fourier series and the THD that handbooks give for them."""

import numpy as np
import pytest
from patches import text
from spectrum import RATE, SIZE, bin_of, db, lines

import rtfx

BODY = '[blocks.tone]\nkind = "oscillator"\nwave = "{wave}"\npitch = {pitch!r}\n[output]\nfrom = "tone"\n'


def spectrum_of(wave, k):
    patch = text(BODY.format(wave=wave, pitch=k * RATE / SIZE))
    return lines(rtfx.render(patch, np.zeros(2 * SIZE))[:, 0])


def test_a4_is_440_hz():
    """ISO 16:1975 (from memory): A4 = 440 Hz, measured by counting the carrier's periods over ten seconds."""
    patch = text(BODY.format(wave="sine", pitch=1).replace("pitch = 1", 'pitch = "A4"'))
    out = rtfx.render(patch, np.zeros(480_000))[:, 0].astype(float)
    rising = np.flatnonzero((out[:-1] < 0) & (out[1:] >= 0))
    exact = rising + out[rising] / (out[rising] - out[rising + 1])
    assert (len(exact) - 1) / (exact[-1] - exact[0]) * RATE == pytest.approx(440, abs=1e-4)


@pytest.mark.parametrize(("wave", "series"), [
    ("square", lambda n: 4 / (np.pi * n) * (n % 2)),
    ("saw", lambda n: 2 / (np.pi * n)),
    ("triangle", lambda n: 8 / (np.pi * n) ** 2 * (n % 2)),
])  # fmt: skip
def test_harmonics_are_the_fourier_series(wave, series):
    """Fourier series of the waveforms (any handbook of mathematics); whole below 12.6 kHz."""
    k = bin_of(110)
    found = spectrum_of(wave, k)
    n = np.arange(1, int(12_500 / 110))
    assert np.abs(found[k * n] - series(n)).max() < 2e-4


@pytest.mark.parametrize("wave", ["square", "saw", "triangle"])
@pytest.mark.parametrize("hz", [110, 440, 1760, 5000])
def test_nothing_but_harmonics_below_20_khz_and_nothing_above(wave, hz):
    k = bin_of(hz)
    found = spectrum_of(wave, k)
    harmonic = np.zeros(len(found), bool)
    harmonic[k::k] = True
    harmonic[int(20_000 * SIZE / RATE) + 1 :] = False
    assert db(found[~harmonic].max()) < -90


def test_thd_of_the_square_is_what_handbooks_give():
    """√(π²/8 − 1) = 48.34 % (handbook value) for all harmonics; those above 12.5 kHz add less than 0.5 % of it."""
    k = bin_of(55)
    found = spectrum_of("square", k)
    top = int(12_500 / 55)
    thd = np.sqrt((found[2 * k : top * k : k] ** 2).sum()) / found[k]
    n = np.arange(3, top, 2)
    assert thd == pytest.approx(np.sqrt((1.0 / n**2).sum()), rel=1e-3)
    assert thd == pytest.approx(np.sqrt(np.pi**2 / 8 - 1), rel=5e-3)

"""Filters against the outside world: scipy's filter design and the analogue formulas."""

import numpy as np
import pytest
from scipy import signal

from tests.blocks.harness import RATE, run

NUMERATORS = {
    "lowpass": lambda w, q: [w * w],
    "highpass": lambda w, q: [1.0, 0.0, 0.0],
    "bandpass": lambda w, q: [w / q, 0.0],
    "notch": lambda w, q: [1.0, 0.0, w * w],
}
CASES = [
    (20.0, 0.3),
    (82.41, 0.7071),
    (1000.0, 0.7071),
    (1000.0, 30.0),
    (5000.0, 2.0),
    (20_000.0, 0.7071),
    (20_000.0, 30.0),
]


def _impulse(frames):
    x = np.zeros(frames)
    x[0] = 1.0
    return x


def _bilinear(name, cutoff, q):
    """scipy.signal.bilinear of the analogue prototype, prewarped at the cutoff."""
    w = 2 * RATE * np.tan(np.pi * cutoff / RATE)
    return signal.bilinear(NUMERATORS[name](w, q), [1.0, w / q, w * w], RATE)


@pytest.mark.parametrize("name", NUMERATORS)
@pytest.mark.parametrize(("cutoff", "q"), CASES)
def test_impulse_response_is_that_of_the_bilinear_transform(name, cutoff, q):
    x = _impulse(10_000)
    expected = signal.lfilter(*_bilinear(name, cutoff, q), x)
    assert np.max(np.abs(run(name, x, cutoff=cutoff, q=q).out - expected)) < 1e-9


@pytest.mark.parametrize("name", NUMERATORS)
@pytest.mark.parametrize(("cutoff", "q"), CASES)
def test_frequency_response_is_the_analogue_one_on_a_warped_scale(name, cutoff, q):
    response = np.fft.rfft(run(name, _impulse(1 << 18), cutoff=cutoff, q=q).out)[:-1]
    f = np.arange(len(response)) / (1 << 18)
    s = 1j * np.tan(np.pi * f) / np.tan(np.pi * cutoff / RATE)
    expected = np.polyval(NUMERATORS[name](1.0, q), s) / (s * s + s / q + 1)
    assert np.max(np.abs(response - expected)) < 1e-9


@pytest.mark.parametrize("name", ["lowpass", "highpass"])
def test_q_of_root_half_is_the_butterworth_design(name):
    x = np.random.default_rng(0).normal(size=10_000)
    expected = signal.sosfilt(signal.butter(2, 2000.0, name, fs=RATE, output="sos"), x)
    assert np.max(np.abs(run(name, x, cutoff=2000.0, q=np.sqrt(0.5)).out - expected)) < 1e-9


def test_notch_is_the_notch_of_scipy():
    """signal.iirnotch puts its −3 dB edges as far apart on the warped scale: tan(π f / (q rate))."""
    cutoff, q = 3000.0, 10.0
    x = np.random.default_rng(0).normal(size=10_000)
    width = np.tan(np.pi * cutoff / RATE / q)
    same_q = np.sin(2 * np.pi * cutoff / RATE) / (2 * width)
    expected = signal.lfilter(*signal.iirnotch(cutoff, q, RATE), x)
    assert np.max(np.abs(run("notch", x, cutoff=cutoff, q=same_q).out - expected)) < 1e-9


def test_lowpass_peaks_at_the_cutoff_with_a_gain_of_q():
    q, cutoff = 20.0, 3000.0
    tone = np.exp(2j * np.pi * cutoff / RATE * np.arange(48_000))
    response = np.sum(run("lowpass", _impulse(48_000), cutoff=cutoff, q=q).out * np.conj(tone))
    assert abs(response) == pytest.approx(q, rel=1e-9)


def test_bandpass_edges_lie_cutoff_over_q_apart():
    """Common practice: q is the centre frequency over the width between the −3 dB edges."""
    cutoff, q = 440.0, 4.0
    response = np.abs(np.fft.rfft(run("bandpass", _impulse(1 << 19), cutoff=cutoff, q=q).out))
    kept = np.flatnonzero(response >= np.sqrt(0.5)) * RATE / (1 << 19)
    assert kept[-1] - kept[0] == pytest.approx(cutoff / q, rel=2e-3)


@pytest.mark.parametrize("cutoff", [1.0, 10.0, 100.0])
def test_dc_block_is_the_textbook_filter(cutoff):
    x = np.random.default_rng(1).normal(size=20_000)
    expected = signal.lfilter([1.0, -1.0], [1.0, 2 * np.pi * cutoff / RATE - 1.0], x)
    assert np.max(np.abs(run("dc-block", x, cutoff=cutoff).out - expected)) < 1e-12


@pytest.mark.parametrize(("cutoff", "r"), [(10.0, 0.998691), (20.0, 0.997382)])
def test_dc_block_has_the_usual_pole(cutoff, r):
    """Values at 48 kHz: common practice."""
    assert run("dc-block", np.array([1.0, 0.0]), cutoff=cutoff).out[1] + 1 == pytest.approx(r, abs=5e-7)

"""The reverberation time, measured as rooms are."""

import numpy as np
import pytest
from scipy import signal

from tests.blocks.harness import run

CASES = [(44_100.0, 1.0), (48_000.0, 0.2), (48_000.0, 0.5), (48_000.0, 2.0), (48_000.0, 10.0), (96_000.0, 2.0)]


def response(rate, time, damping):
    """Impulse response of the left output, as long as the reverberation."""
    click = np.eye(1, int(rate * (time + 0.3)))[0]
    return run("reverb", click, rate=rate, time=time, damping=damping).outputs[0]


def t60(sound, rate):
    """Slope from −5 to −35 dB (ISO 3382) of the energy yet to come (M. R. Schroeder, JASA 37, 1965): from memory."""
    level = 10 * np.log10(np.cumsum(sound[::-1] ** 2)[::-1] / np.sum(sound**2) + 1e-30)
    inside = np.flatnonzero((level < -5) & (level > -35))
    slope = np.polyfit(inside / rate, level[inside], 1)[0]
    return -60 / slope


@pytest.mark.parametrize(("rate", "time"), CASES)
def test_low_notes_fall_by_60_db_in_the_time_that_is_set(rate, time):
    low = signal.butter(4, [100, 800], "bandpass", fs=rate, output="sos")
    sound = signal.sosfilt(low, response(rate, time, 20_000.0))
    assert t60(sound, rate) == pytest.approx(time, rel=0.05)


@pytest.mark.parametrize("damping", [1000.0, 3000.0, 8000.0])
def test_at_the_damping_frequency_it_takes_half_as_long(damping):
    rate, time = 48_000.0, 2.0
    band = signal.butter(2, [damping * 0.95, damping * 1.05], "bandpass", fs=rate, output="sos")
    assert t60(signal.sosfilt(band, response(rate, time, damping)), rate) == pytest.approx(time / 2, rel=0.07)

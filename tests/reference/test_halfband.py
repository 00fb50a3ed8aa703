"""The stored halfband taps against scipy.signal.remez, and what they do against scipy.signal.freqz."""

import numpy as np
import pytest
from scipy.signal import freqz

from rtfx.dsp.halfband_design import PASSBANDS, STAGES, design, full
from rtfx.dsp.halfband_taps import TAPS

LEAST_DB = {"stage": 105, "studio": 135}


@pytest.mark.parametrize("key", TAPS, ids=str)
def test_stored_taps_are_the_design(key):
    assert np.abs(np.array(TAPS[key]) - design(*key)).max() < 1e-9


@pytest.mark.parametrize("quality", STAGES)
def test_stopband_is_as_far_down_as_said(quality):
    for length, passband in zip(STAGES[quality], PASSBANDS, strict=True):
        w, response = freqz(full(TAPS[length, passband]), worN=1 << 14)
        stop = np.abs(response[w >= 2 * np.pi * (0.5 - passband)]).max()
        assert 20 * np.log10(stop) < -LEAST_DB[quality], length

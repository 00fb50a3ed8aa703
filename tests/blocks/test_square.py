"""Square: the octave, with DC and doubled dynamics."""

import numpy as np
import pytest

from rtfx.blocks import table
from tests.blocks.harness import run, setting

FRAMES = 4800
PHASE = 2 * np.pi * np.arange(FRAMES) / FRAMES


def test_square_of_a_cosine_is_dc_plus_the_octave():
    amplitude = 0.6
    out = run("square", amplitude * np.cos(11 * PHASE)).out
    half = amplitude**2 / 2
    assert out == pytest.approx(half + half * np.cos(22 * PHASE), abs=1e-15)


def test_1_db_softer_comes_out_2_db_softer():
    loud, soft = (run("square", a * np.sin(7 * PHASE)).out for a in (1.0, 10 ** (-1 / 20)))
    assert 20 * np.log10(np.std(soft) / np.std(loud)) == pytest.approx(-2.0, abs=1e-12)


def test_bandwidth_doubles():
    kind = table.find("square")
    assert kind.bandwidth(setting(kind), {"x": 6000.0}) == 12000.0

"""The compressor's steady curve against the published one."""

import numpy as np
import pytest

from tests.blocks.harness import run


def published(level_db, threshold, ratio, knee):
    """y_G of x_G, all in dB: D. Giannoulis, M. Massberg, J. D. Reiss, JAES 60(6), 2012, static curve (from memory)."""
    x, t, r, w = level_db, threshold, ratio, knee
    if 2 * (x - t) < -w:
        return x
    if 2 * abs(x - t) <= w and w > 0:
        return x + (1 / r - 1) * (x - t + w / 2) ** 2 / (2 * w)
    return t + (x - t) / r


@pytest.mark.parametrize("level", [-70.0, -40.0, -33.0, -30.0, -27.0, -24.1, -20.0, -10.0, 0.0, 12.0])
@pytest.mark.parametrize(("threshold", "ratio", "knee"), [(-30.0, 2.0, 0.0), (-30.0, 4.0, 12.0), (-30.0, 20.0, 6.0)])
def test_a_steady_level_comes_out_as_published(level, threshold, ratio, knee):
    x = np.full(9600, 10 ** (level / 20))
    out = run("compressor", x, threshold=threshold, ratio=ratio, knee=knee, attack=0.001, release=0.01).out[-1]
    assert 20 * np.log10(out) == pytest.approx(published(level, threshold, ratio, knee), abs=1e-5)


def test_ratio_is_db_in_over_db_out():
    """Definition, common practice: at 4:1, 8 dB more in are 2 dB more out."""
    outs = [run("compressor", np.full(9600, 10 ** (db / 20)), threshold=-40.0, knee=0.0).out[-1] for db in (-20, -12)]
    assert 20 * np.log10(outs[1] / outs[0]) == pytest.approx(2.0, abs=1e-5)

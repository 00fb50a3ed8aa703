"""No frequency that multiplication or a curve does not make: sines from 1 to 15 kHz at full scale.

The targets are this project's own; the harmonics that may be there are those of a memoryless curve.
"""

import numpy as np
import pytest
from patches import one, text
from spectrum import RATE, SIZE, bin_of, db, lines, tone

import rtfx

SWEEP = [bin_of(f) for f in np.geomspace(1000, 15_000, 12)]
AUDIBLE = int(20_000 / RATE * SIZE)


def worst_alias(plan, k, strongest=None):
    """Largest line under 20 kHz that is no harmonic of bin *k*, re the fundamental (or the strongest wanted line)."""
    found = lines(rtfx.render(plan, tone(k))[:, 0])[: AUDIBLE + 1]
    wanted = np.zeros(len(found), bool)
    wanted[::k] = True
    reference = found[wanted][1:].max() if strongest else found[k]
    return db(found[~wanted].max() / reference)


@pytest.mark.parametrize(("quality", "limit"), [("stage", -80), ("studio", -110)])
@pytest.mark.parametrize("order", [2, 3, 4, 8])
def test_polynomial_keeps_clean(order, quality, limit):
    plan = rtfx.plan(one("polynomial", c1=1.0, **{f"c{order}": 1.0}), quality=quality)
    assert max(worst_alias(plan, k) for k in SWEEP) < limit


@pytest.mark.parametrize(("quality", "limit"), [("stage", -80), ("studio", -110)])
def test_octave_of_a_15_khz_sine_does_not_come_back_at_18_khz(quality, limit):
    body = (
        '[blocks.octave]\nkind = "square"\nx = "input"\n[blocks.sum]\nkind = "add"\nx = "octave"\ny = "input"\n'
        '[output]\nfrom = "sum"\n'
    )
    plan = rtfx.plan(text(body), quality=quality)
    assert max(worst_alias(plan, k) for k in SWEEP) < limit


@pytest.mark.parametrize(("quality", "limit"), [("stage", -80), ("studio", -110)])
def test_guitar_times_itself_keeps_clean(quality, limit):
    plan = rtfx.plan(one("multiply", wires=("x", "y")), quality=quality)
    low = [k for k in SWEEP if 2 * k <= AUDIBLE]
    assert max(worst_alias(plan, k, strongest=True) for k in low) < limit


@pytest.mark.parametrize("law", ["smooth", "hard"])
@pytest.mark.parametrize(
    ("quality", "drive", "limit"),
    [("stage", 0, -80), ("stage", 6, -80), ("stage", 12, -80), ("stage", 24, -60), ("stage", 36, -60),
     ("studio", 0, -90), ("studio", 12, -90), ("studio", 24, -90), ("studio", 36, -90)],
)  # fmt: skip
def test_clip_keeps_clean(law, quality, drive, limit):
    plan = rtfx.plan(one("clip", law=law, drive=drive), quality=quality)
    assert max(worst_alias(plan, k) for k in SWEEP) < limit

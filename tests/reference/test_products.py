"""Multiplication against the product-to-sum identity (any handbook of trigonometry)."""

import numpy as np
import pytest
from patches import RING, text
from spectrum import RATE, SIZE, bin_of, db, lines, tone

import rtfx


@pytest.fixture(scope="module")
def spectrum():
    """A full-scale sine times a sine carrier, both on a bin."""
    signal, carrier = bin_of(1000), bin_of(3300)
    patch = text(RING.format(pitch=repr(carrier * RATE / SIZE)))
    return signal, carrier, lines(rtfx.render(patch, tone(signal))[:, 0])


def test_products_stand_at_the_sum_and_the_difference(spectrum):
    signal, carrier, found = spectrum
    for place in (carrier - signal, carrier + signal):
        assert db(found[place]) == pytest.approx(20 * np.log10(0.5), abs=0.01)  # cos a cos b = ½ … + ½ …


def test_nothing_else_is_above_120_db_below_full_scale(spectrum):
    signal, carrier, found = spectrum
    rest = np.delete(found, [carrier - signal, carrier + signal])
    assert db(rest.max()) < -120


def test_carrier_and_guitar_are_rejected_by_120_db(spectrum):
    signal, carrier, found = spectrum
    assert db(found[carrier] / found[carrier + signal]) < -120
    assert db(found[signal] / found[carrier + signal]) < -120

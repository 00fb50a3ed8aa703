"""Mix: from dry to wet."""

import numpy as np
import pytest

from tests.blocks.harness import run

DRY, WET = np.random.default_rng(0).normal(size=(2, 1000))


def test_amount_0_is_dry_to_the_last_bit():
    assert run("mix", DRY, WET, amount=0.0).out.tobytes() == DRY.tobytes()


def test_amount_1_is_wet_to_the_last_bit():
    assert run("mix", DRY, WET, amount=1.0).out.tobytes() == WET.tobytes()


@pytest.mark.parametrize("amount", [0.1, 0.5, 0.9])
def test_amount_is_the_share_of_wet(amount):
    out = run("mix", np.ones(4), np.full(4, 3.0), amount=amount).out
    assert out == pytest.approx(1.0 + 2.0 * amount, rel=1e-15)


def test_two_equal_signals_keep_their_level_half_way():
    assert np.array_equal(run("mix", DRY, DRY, amount=0.5).out, DRY)

"""Polynomial: one coefficient a power, and the bandwidth that the patch can reach."""

import numpy as np
import pytest

from rtfx.blocks import table
from tests.blocks.harness import run, setting

KIND = table.find("polynomial")


def _bandwidth(values=None, reach=None):
    return KIND.bandwidth(setting(KIND, values, reach=reach), {"x": 1000.0})


def test_default_passes_the_signal_to_the_last_bit():
    x = np.random.default_rng(0).normal(size=1000)
    assert run("polynomial", x).out.tobytes() == x.tobytes()


@pytest.mark.parametrize("power", range(9))
def test_each_coefficient_belongs_to_its_power(power):
    values = {"c1": 0.0} | {f"c{power}": 1.0}
    x = np.array([-2.0, -0.5, 0.5, 1.0, 3.0])
    assert np.array_equal(run("polynomial", x, **values).out, x**power)


@pytest.mark.parametrize("power", range(2, 9))
def test_bandwidth_follows_the_highest_power_in_use(power):
    assert _bandwidth({f"c{power}": -0.25}) == power * 1000.0


def test_default_keeps_the_bandwidth():
    assert _bandwidth() == 1000.0


def test_bandwidth_counts_a_power_that_a_control_can_reach():
    assert _bandwidth({"c5": 0.0}, reach={"c5": (0.0, 0.5)}) == 5000.0


def test_a_constant_has_no_bandwidth():
    assert _bandwidth({"c0": 1.0, "c1": 0.0}) == 0.0

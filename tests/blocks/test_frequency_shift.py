"""Frequency shift: where tones go, how strong they are, and what does not come out."""

import numpy as np
import pytest

from rtfx.blocks import table
from rtfx.dsp import phase_difference
from tests.blocks.harness import RATE, plain, run, setting

SIZE = 1 << 15


def _lines(out):
    """Peak amplitude in each bin of the last SIZE samples."""
    return np.abs(np.fft.rfft(out[-SIZE:])) * 2 / SIZE


def _shifted(signal, carrier):
    """Lines of both outputs for tones on bins {bin: level}, moved by *carrier* bins."""
    n = np.arange(3 * SIZE)
    x = sum(level * np.cos(2 * np.pi * k * n / SIZE + k) for k, level in signal.items())
    return [_lines(out) for out in run("frequency-shift", x, shift=carrier * RATE / SIZE).outputs]


def test_up_adds_the_shift_to_every_partial():
    up, _ = _shifted({300: 0.5, 600: 0.25}, 71)
    assert up[[371, 671]] == pytest.approx([0.5, 0.25], rel=1e-3)


def test_down_takes_the_shift_from_every_partial():
    _, down = _shifted({300: 0.5, 600: 0.25}, 71)
    assert down[[229, 529]] == pytest.approx([0.5, 0.25], rel=1e-3)


def test_a_tone_below_the_shift_turns_round_at_0_hz_on_down():
    _, down = _shifted({300: 0.5}, 371)
    assert down[71] == pytest.approx(0.5, rel=1e-3)


def test_neither_the_tone_nor_the_carrier_comes_out():
    for found in _shifted({300: 0.5}, 71):
        assert found[[300, 71]].max() < 1e-9


def test_an_input_with_dc_brings_no_carrier():
    for found in _shifted({0: 0.5, 300: 0.5}, 71):
        assert found[71] < 1e-7


def test_both_outputs_together_are_twice_a_product_with_a_sine():
    """The all-passes turn the tone alone: its two products stand as far apart and as high as those of `multiply`."""
    n = np.arange(3 * SIZE)
    x = np.cos(2 * np.pi * 300 * n / SIZE)
    both = _lines(run("frequency-shift", x, shift=71 * RATE / SIZE).outputs.sum(axis=0))
    product = _lines(2 * x * np.cos(2 * np.pi * 71 * n / SIZE))
    assert both[[229, 371]] == pytest.approx(product[[229, 371]], rel=1e-3)


def test_split_keeps_the_energy_of_a_click_in_each_output():
    """All-passes keep all energy."""
    memory, step = phase_difference.memory_for(RATE), plain(phase_difference.split)
    outputs = np.array([step(memory, 0, x) for x in np.eye(1, 20_000)[0]])
    assert (outputs**2).sum(axis=0) == pytest.approx([1.0, 1.0], abs=1e-9)


@pytest.mark.parametrize(("hz", "late_s"), [(82.4, 0.0045), (440.0, 0.0010), (1000.0, 0.0004)])
def test_split_is_as_late_as_it_says(hz, late_s):
    """Group delay of both chains: the slope of their phase, from their response to a click."""
    memory, step = phase_difference.memory_for(RATE), plain(phase_difference.split)
    n = np.arange(20_000)
    outputs = np.array([step(memory, 0, x) for x in np.eye(1, len(n))[0]])
    turn = np.exp(-2j * np.pi * hz * n / RATE)[:, None]
    late = ((n[:, None] * outputs * turn).sum(axis=0) / (outputs * turn).sum(axis=0)).real / RATE
    assert late == pytest.approx(late_s, rel=0.1)


def test_bandwidth_is_the_input_and_the_highest_shift_in_reach():
    kind = table.find("frequency-shift")
    assert kind.bandwidth(setting(kind, reach={"shift": (1.0, 3000.0)}), {"x": 20_000.0}) == 23_000.0

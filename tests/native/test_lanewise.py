"""A formula written once: all samples of a frame at once give the bits that one sample at a time gives."""

from itertools import pairwise

import numpy as np
import pytest
from numba import cfunc, types

from rtfx.blocks import clip
from rtfx.native.options import OPTIONS, f64p

MANY = 8
tick, sweep = clip.tick_smooth_2, clip.sweep_smooth_2
hard_tick, hard_sweep = clip.tick_hard_2, clip.sweep_hard_2


def one_at_a_time(memory, count):
    last, root, a0, a1 = 0.0, 1.0, 0.0, 0.0
    for j in range(count):
        memory[count + j], last, root, a0, a1 = tick(memory[j], 12.5, last, root, a0, a1)


def a_frame_at_a_time(memory, count):
    last, root, a0, a1 = 0.0, 1.0, 0.0, 0.0
    for j in range(0, count, MANY):
        last, root, a0, a1 = sweep(memory, j, count + j, 8, 12.5, last, root, a0, a1)


def hard_one_at_a_time(memory, count):
    last, a0, a1 = 0.0, 0.0, 0.0
    for j in range(count):
        memory[count + j], last, a0, a1 = hard_tick(memory[j], 2.5, last, a0, a1)


def hard_a_frame_at_a_time(memory, count):
    last, a0, a1 = 0.0, 0.0, 0.0
    for j in range(0, count, MANY):
        last, a0, a1 = hard_sweep(memory, j, count + j, 8, 2.5, last, a0, a1)


@pytest.fixture
def samples():
    return np.random.default_rng(5).standard_normal(64 * MANY)


def run(function, samples):
    memory = np.concatenate([samples, np.zeros_like(samples)])
    compiled = cfunc(types.void(f64p, types.int64), **OPTIONS)(function)
    compiled.ctypes(memory.ctypes.data_as(compiled.ctypes.argtypes[0]), len(samples))
    return memory[len(samples) :]


def test_both_ways_give_the_same_bits(samples):
    assert np.array_equal(run(one_at_a_time, samples), run(a_frame_at_a_time, samples))
    held = np.repeat(samples[:64], MANY)  # nothing moves for a while: the division by nothing is not taken
    for given in (samples, held):
        assert np.array_equal(run(hard_one_at_a_time, given), run(hard_a_frame_at_a_time, given))


def test_the_formula_is_the_average_it_claims_to_be(samples):
    """Independent: the average of v / √(1 + v²) over a straight line by numerical integration."""
    slow = samples[:16] * 0.1
    v = np.concatenate([[0.0, 0.0], 12.5 * slow])
    t = (np.arange(1000) + 0.5) / 1000
    half = [(a + (b - a) * (t + s) / 2) for a, b in pairwise(v) for s in (0, 1)]
    averages = np.array([np.mean(u / np.sqrt(1 + u * u)) for u in half])
    expected = [np.dot([1, 3, 3, 1], averages[i : i + 4]) / 8 for i in range(0, len(averages) - 2, 2)]
    assert np.abs(run(one_at_a_time, slow) - expected).max() < 1e-6

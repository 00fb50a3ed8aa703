"""Limiter: the ceiling holds, nothing else is touched, and nothing drifts."""

from math import ceil, fsum, log2

import numpy as np
import pytest
from numpy.lib.stride_tricks import sliding_window_view

from rtfx.blocks import table
from rtfx.dsp.running_minimum import running_minimum
from tests.blocks.harness import RATE, plain, run, setting

LONG = 1_000_000
LOOKAHEADS = (0.0, 1 / RATE, 2 / RATE, 0.0005, 0.001, 0.005)


def _length(lookahead):
    return max(round(lookahead * RATE), 1)


def _amplitude(db):
    return 10.0 ** (db / 20.0)


def _hot(frames, seed=0):
    """Return noise with single peaks up to +40 dB, and rests."""
    rng = np.random.default_rng(seed)
    x = rng.normal(size=frames) * (np.sin(np.arange(frames) / 5000.0) > -0.5)
    x[rng.integers(0, frames, frames // 1000)] *= 100.0
    return x


@pytest.mark.parametrize("lookahead", LOOKAHEADS)
@pytest.mark.parametrize("ceiling", [0.0, -1.0, -13.7])
def test_no_sample_exceeds_the_ceiling_not_even_by_a_bit(lookahead, ceiling):
    out = run("limiter", _hot(LONG), lookahead=lookahead, ceiling=ceiling, release=0.01).out
    assert 0.9 * _amplitude(ceiling) < np.max(np.abs(out)) <= _amplitude(ceiling)


@pytest.mark.parametrize("level", [1.0, 2.0, 4.0, 1024.0, 1.0 + 2**-52, 2.0 - 2**-52])
def test_a_steady_level_is_brought_to_the_ceiling_and_not_above(level):
    x = np.full(1000, level)
    out = run("limiter", x, ceiling=0.0).out
    assert 1.0 - 1e-8 < out[-1] <= 1.0


def test_a_gain_that_would_be_rounded_up_does_not_exceed_the_ceiling():
    """These levels need a gain that is a multiple of 2⁻⁴⁰ but for rounding; 239 of them would come out too loud."""
    ceiling, top = _amplitude(-0.1), int(0.98 * 2**40)
    x = ceiling / (np.arange(top, top - 100_000, -1) * 2.0**-40)
    assert np.max(run("limiter", x, ceiling=-0.1, lookahead=0.0).out) <= ceiling


@pytest.mark.parametrize("lookahead", LOOKAHEADS)
def test_below_the_ceiling_every_bit_passes_late_by_the_stated_delay(lookahead):
    kind = table.find("limiter")
    x = np.random.default_rng(1).uniform(-1.0, 1.0, 5000) * _amplitude(-1.0)
    late = kind.build(setting(kind, {"lookahead": lookahead})).delay
    out = run("limiter", x, lookahead=lookahead).out
    assert out[late:].tobytes() == x[: len(x) - late].tobytes()


@pytest.mark.parametrize(("lookahead", "late"), [(0.0, 0), (0.001, 47), (0.005, 239)])
def test_delay_is_one_sample_less_than_the_lookahead(lookahead, late):
    kind = table.find("limiter")
    assert kind.build(setting(kind, {"lookahead": lookahead})).delay == late


def test_once_the_release_is_over_every_bit_passes_again():
    x = 0.5 * np.random.default_rng(2).uniform(-1.0, 1.0, 20_000)
    x[100] = 5.0
    out = run("limiter", x, release=0.01).out
    over = 147 + 48 + 14 * 480
    assert out[over:].tobytes() == x[over - 47 : -47].tobytes()


def test_the_running_sum_is_exact_after_a_million_samples():
    result = run("limiter", _hot(LONG), release=0.037)
    length = _length(0.001)
    gains = result.memory[2 * length : 3 * length]
    assert result.state["total"] == fsum(gains)
    assert np.min(gains) < 1.0


def test_after_a_million_loud_samples_and_a_rest_every_bit_passes():
    quiet = 0.5 * np.random.default_rng(3).uniform(-1.0, 1.0, 100_000)
    out = run("limiter", np.concatenate([_hot(LONG), quiet]), release=0.037).out
    assert out[-1000:].tobytes() == quiet[-1047:-47].tobytes()


def _by_definition(x, ceiling, length, release):
    """The method written out with whole arrays: needed gain, running minimum, release, running mean."""
    needed = np.minimum(1.0, ceiling / np.maximum(np.abs(x), 1e-300))
    least = sliding_window_view(np.concatenate([np.ones(length - 1), needed]), length).min(axis=1)
    share, gain, released = 1 - np.exp(-1 / (release * RATE)), 1.0, []
    for m in least:
        gain = min(m, gain + share * (m - gain))
        released.append(gain)
    mean = sliding_window_view(np.concatenate([np.ones(length - 1), released]), length).mean(axis=1)
    return np.concatenate([np.zeros(length - 1), x])[: len(x)] * mean


@pytest.mark.parametrize("lookahead", LOOKAHEADS)
def test_it_follows_the_published_method(lookahead):
    x = _hot(20_000, seed=4) / 10.0
    out = run("limiter", x, lookahead=lookahead, ceiling=-6.0, release=0.05).out
    expected = _by_definition(x, _amplitude(-6.0), _length(lookahead), 0.05)
    assert np.max(np.abs(out - expected)) < 2e-6


def test_a_gliding_ceiling_binds_each_sample_as_it_comes_in():
    ceiling = np.linspace(0.0, -20.0, 50_000)
    out = run("limiter", _hot(50_000, seed=5), ceiling=ceiling).out
    assert np.all(np.abs(out[47:]) <= _amplitude(ceiling[: len(out) - 47]))


def test_the_gain_moves_gently_into_a_peak():
    x = np.full(2000, 0.5)
    x[1000] = 5.0
    gain = run("limiter", x, ceiling=0.0).out[47:] / x[:-47]
    assert np.max(np.abs(np.diff(gain))) < 1.01 * (1 - 0.2) / 48


def test_what_is_not_a_number_leaves_no_trace():
    x = 0.5 * np.random.default_rng(6).uniform(-1.0, 1.0, 1000)
    x[100] = np.nan
    out = run("limiter", x).out
    assert np.flatnonzero(np.isnan(out)) == [147]


@pytest.mark.parametrize("length", [1, 2, 3, 5, 48, 64, 240])
def test_running_minimum_is_the_least_of_the_window(length):
    values = np.random.default_rng(7).uniform(0.0, 1.0, 2000)
    memory = np.ones(2 * length)
    found = [plain(running_minimum)(memory, 0, length, i % length, v) for i, v in enumerate(values)]
    windows = sliding_window_view(np.concatenate([np.ones(length - 1), values]), length)
    assert np.array_equal(found, windows.min(axis=1))


class _Counting:
    """Memory that counts how often it is read."""

    def __init__(self, size):
        self.words, self.reads = [1.0] * size, 0

    def __getitem__(self, i):
        self.reads += 1
        return self.words[i]

    def __setitem__(self, i, value):
        self.words[i] = value


@pytest.mark.parametrize("values", [np.linspace(0, 1, 500), np.linspace(1, 0, 500)], ids=["rising", "falling"])
def test_running_minimum_never_needs_more_than_its_few_steps(values):
    length, reads = 48, []
    memory = _Counting(2 * length)
    for i, value in enumerate(values):
        before = memory.reads
        plain(running_minimum)(memory, 0, length, i % length, value)
        reads.append(memory.reads - before)
    assert max(reads) <= 2 * ceil(log2(length)) + 1

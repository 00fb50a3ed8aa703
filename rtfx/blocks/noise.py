"""Noise that is the same every time: white, equally strong per Hz, or pink, equally strong per octave.

    white: y = a · r,   r spread evenly between −1 and 1 (see rtfx.dsp.random_numbers)
    pink:  y = a · r through Π (1 − z_i z⁻¹) / (1 − p_i z⁻¹) · (1 + 0.08 z⁻¹)
           p_i = exp(−2π · 5 Hz · 4^i / rate),   z_i = exp(−2π · 10 Hz · 4^i / rate),   i = 0 … 7

A pole and a zero in every two octaves, an octave apart, fall by 3.01 dB an octave on the whole; the last factor
straightens the top.  Pink keeps to that slope within ±0.3 dB from 20 Hz to 20 kHz (18 kHz at 44.1 kHz).
Level: `level` is the RMS over the whole band, up to half the rate.  White never exceeds 4.8 dB above its RMS;
pink is bounded too, and beyond 12 dB above its RMS less than once in 10 000 samples.
State: the generator's; memory: the filter.  Delay: none.  Runs at the base rate, so that its level does not hang
on what it is wired to.
Source: generator of Park and Miller, 1988; poles and zeros in equal steps on a log scale: M. S. Keshner, "1/f noise",
Proc. IEEE 70(3), 1982 (both from memory).
"""

import numpy as np

from rtfx.blocks.kind import AUDIBLE_HZ, Choice, Code, Parameter, kind
from rtfx.dsp.decibel import amplitude
from rtfx.dsp.random_numbers import RMS, evenly, first_state, following
from rtfx.native.options import inlined

SECTIONS = 8
WORDS = 4  # of a section: its pole, its zero, its last input and its last output
LOWEST_HZ, RATIO = 5.0, 4.0
TOP = 0.08
POINTS = 1 << 18  # of the frequency scale over which power is summed up: closer together than the lowest pole


@inlined
def prepare(level_db, seed, rate):
    return amplitude(level_db) / RMS


@inlined
def tick_white(level, number):
    number = following(number)
    return level * evenly(number), number


@inlined
def tick_pink(memory, at, level, number, last):
    number = following(number)
    r = memory[at] * evenly(number)
    y, last = r + TOP * last, r
    for i in range(SECTIONS):
        section = at + 1 + WORDS * i
        x = y
        y = x - memory[section + 1] * memory[section + 2] + memory[section] * memory[section + 3]
        memory[section + 2], memory[section + 3] = x, y
    return level * y, number, last


def poles_and_zeros(rate):
    """Return the poles and the zeros of pink at *rate* (Hz), each an ndarray of shape (SECTIONS,)."""
    corner = 2 * np.pi * LOWEST_HZ * RATIO ** np.arange(SECTIONS) / rate
    return np.exp(-corner), np.exp(-corner * np.sqrt(RATIO))


def pink_memory(rate):
    """Return the gain that keeps the RMS, and the sections."""
    poles, zeros = poles_and_zeros(rate)
    delay = np.exp(-2j * np.pi * np.arange(POINTS // 2 + 1) / POINTS)
    response = 1 + TOP * delay
    for p, z in zip(poles, zeros, strict=True):
        response *= (1 - z * delay) / (1 - p * delay)
    power = np.abs(response) ** 2
    mean = (power[0] + 2 * power[1:-1].sum() + power[-1]) / POINTS
    sections = np.column_stack([poles, zeros, np.zeros((SECTIONS, 2))])
    return np.concatenate([[1 / np.sqrt(mean)], sections.ravel()])


def _bandwidth(setting, inputs):
    """20 kHz: what folds back from above is noise among noise."""
    return AUDIBLE_HZ


@kind(
    "noise",
    about="Steady noise, white or pink, the same with every start: breath for a filter, or a carrier without a pitch.",
    parameters=(
        Choice("colour", ("white", "pink"), "white", "bright, or as strong in the bass as in the treble"),
        Parameter("level", "dB", -80.0, -12.0, -20.0, about="its RMS"),
        Parameter("seed", "", 1.0, 1_000_000.0, 1.0, about="a whole number; another gives other noise", fixed=True),
    ),
    law="white: evenly spread, s ← 16807·s mod (2³¹−1); pink: −3.01 dB an octave, a pole every two octaves",
    source="Park and Miller, Comm. ACM 31(10), 1988; Keshner, Proc. IEEE 70(3), 1982 (both from memory).",
    bandwidth=_bandwidth,
    base_rate_only=True,
)
def noise(setting):
    seed = setting.values["seed"]
    if seed != int(seed):
        raise ValueError(f"noise: seed = {seed:g} is not a whole number; give one from 1 to 1000000")
    state = {"number": first_state(int(seed))}
    if setting.choices["colour"] == "white":
        return Code(tick=tick_white, prepare=prepare, state=state)
    return Code(tick=tick_pink, prepare=prepare, state=state | {"last": 0.0}, memory=pink_memory(setting.rate))

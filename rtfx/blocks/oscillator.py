"""The tuned carrier: sine, triangle, saw or square, free of aliases.

    sine: y = sin 2πφ,  φ ← φ + pitch/rate (mod 1)
    triangle, saw, square: their Fourier series, whole up to 12.6 kHz and faded out by 20 kHz, read from tables

State: the phase, in cycles.  The phase wraps by subtraction: it stays within 1e-9 cycle for hours.
Source: Fourier series of the waveforms; band-limited wavetables as in D. C. Massie, "Wavetable Sampling
Synthesis", in Applications of DSP to Audio and Acoustics, 1998 (from memory).  See rtfx.dsp.wavetable.
"""

from rtfx.blocks.kind import AUDIBLE_HZ, Choice, Code, Parameter, kind
from rtfx.dsp import wavetable
from rtfx.dsp.sine import sine
from rtfx.native.options import inlined


@inlined
def prepare_sine(pitch_hz, rate):
    return pitch_hz / rate


@inlined
def tick_sine(step, phase):
    y = sine(phase)
    phase += step
    if phase >= 1.0:
        phase -= 1.0
    return y, phase


@inlined
def prepare_table(pitch_hz, rate):
    lower, upper, weight = wavetable.rows(pitch_hz)
    return pitch_hz / rate, lower, upper, weight


@inlined
def tick_table(memory, at, step, lower, upper, weight, phase):
    y = wavetable.read(memory, at, lower, upper, weight, phase)
    phase += step
    if phase >= 1.0:
        phase -= 1.0
    return y, phase


def _highest_harmonic(setting, inputs):
    """Its highest pitch; 20 kHz for waves that have harmonics."""
    return setting.reach["pitch"][1] if setting.choices["wave"] == "sine" else AUDIBLE_HZ


@kind(
    "oscillator",
    about="A tuned carrier: sine, triangle, saw or square, without aliases. Peak ±1; square and saw overshoot.",
    parameters=(
        Choice("wave", ("sine", "triangle", "saw", "square"), "sine", "the waveform"),
        Parameter("pitch", "Hz", 0.05, 12_000.0, 220.0, "log", "a note, a note with cents, or a frequency"),
    ),
    law="sine: sin 2πφ, φ advancing by pitch/rate; the others: Fourier series to 12.6 kHz, faded out by 20 kHz",
    source="Fourier series; band-limited wavetables (D. C. Massie, Wavetable Sampling Synthesis, 1998, from memory).",
    bandwidth=_highest_harmonic,
)
def oscillator(setting):
    if setting.choices["wave"] == "sine":
        return Code(tick=tick_sine, prepare=prepare_sine, state={"phase": 0.0})
    tables = wavetable.tables(setting.choices["wave"], setting.reach["pitch"][0])
    return Code(tick=tick_table, prepare=prepare_table, coefficients=4, state={"phase": 0.0}, memory=tables.ravel())

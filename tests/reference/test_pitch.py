"""Pitch against published standards and arithmetic that is not ours."""

from fractions import Fraction

import pytest

from rtfx.pitch.notes import named, nearest, note_hz, note_number, number_at

# ISO 16:1975, Acoustics, Standard tuning frequency (from memory): the A in the treble stave is 440 Hz.
ISO_16_HZ = 440.0

# Twelve-tone equal temperament, f = 440 · 2^((m − 69)/12), worked out apart from this code, to five decimals.
# Open strings of a guitar (E A D G B E), its low D and B, and the highest note of a neck with 24 frets.
EQUAL_TEMPERAMENT_HZ = {
    "E2": (40, 82.40689), "A2": (45, 110.0), "D3": (50, 146.83238), "G3": (55, 195.99772), "B3": (59, 246.94165),
    "E4": (64, 329.62756), "D2": (38, 73.41619), "B1": (35, 61.73541), "E6": (88, 1318.51023),
}  # fmt: skip

# MIDI Tuning Standard (MIDI Manufacturers Association; from memory): a pitch is a semitone xx and a fraction of
# (yy · 128 + zz) / 16384 of 100 cents above it.
TUNING_STANDARD = {440.0: "45 00 00", 261.6255653: "3C 00 00", 443.0: "45 0F 07", 432.0: "44 57 2B"}

# Cents of just intervals, 1200 · log2 of the ratio (common practice), to four decimals.
JUST_CENTS = {
    "3/2": 701.9550, "5/4": 386.3137, "6/5": 315.6413, "4/3": 498.0450, "5/3": 884.3587, "7/4": 968.8259,
    "81/80": 21.5063, "531441/524288": 23.4600,
}  # fmt: skip


def test_a4_is_the_standard_tuning_frequency():
    assert note_hz("A4") == ISO_16_HZ


@pytest.mark.parametrize("name", EQUAL_TEMPERAMENT_HZ)
def test_notes_have_the_frequencies_of_equal_temperament(name):
    assert note_hz(name) == pytest.approx(EQUAL_TEMPERAMENT_HZ[name][1], abs=5.1e-6)


@pytest.mark.parametrize("name", EQUAL_TEMPERAMENT_HZ)
def test_notes_have_their_midi_numbers(name):
    assert note_number(name) == EQUAL_TEMPERAMENT_HZ[name][0]


@pytest.mark.parametrize("name", EQUAL_TEMPERAMENT_HZ)
def test_frequencies_of_equal_temperament_are_named_without_deviation(name):
    assert named(EQUAL_TEMPERAMENT_HZ[name][1]) == f"{name} +0.0 c"


@pytest.mark.parametrize("hz", TUNING_STANDARD)
def test_numbers_agree_with_the_midi_tuning_standard(hz):
    steps = round(number_at(hz) * 16384)
    semitone, fraction = divmod(steps, 16384)
    assert f"{semitone:02X} {fraction >> 7:02X} {fraction & 127:02X}" == TUNING_STANDARD[hz]


@pytest.mark.parametrize("ratio", JUST_CENTS)
def test_just_intervals_have_their_cents(ratio):
    cents = 100 * (number_at(float(ISO_16_HZ * Fraction(ratio))) - number_at(ISO_16_HZ))
    assert cents == pytest.approx(JUST_CENTS[ratio], abs=5.1e-5)


def test_a_cent_is_a_twelve_hundredth_of_an_octave():
    """1 cent = 0.05778 % (common practice)."""
    assert note_hz("A4 +1c") / note_hz("A4") - 1 == pytest.approx(0.0005778, abs=5e-8)


def test_a_just_fifth_above_a_is_two_cents_above_e():
    assert nearest(ISO_16_HZ * 3 / 2) == ("E5", pytest.approx(1.9550, abs=5.1e-5))

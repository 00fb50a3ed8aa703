"""Names of notes are read and given back; what is none is refused."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from rtfx.pitch.notes import frequency, named, nearest, note_hz, note_name, note_number, number_at

NUMBERS = {
    "A4": 69, "a4": 69, "C4": 60, "C#4": 61, "Db3": 49, "E♭4": 63, "F♯2": 42, "Cb4": 59, "B#3": 60, "C-1": 0,
    "C−1": 0, "G9": 127, " E4 ": 64, "bb3": 58, "b3": 59,
    "E4 -14c": 63.86, "E4 -14 c": 63.86, "E4 - 14 c": 63.86, "E4 −14c": 63.86, "A4+3.5c": 69.035, "A4 5 cents": 69.05,
    "C-1 -50c": -0.5,
}  # fmt: skip


@pytest.mark.parametrize("name", NUMBERS)
def test_name_has_its_midi_number(name):
    assert note_number(name) == pytest.approx(NUMBERS[name], abs=1e-9)


@pytest.mark.parametrize(
    "text", ["", "H4", "A", "4", "A#b4", "A4 14", "A4 -14 Hz", "A4 c", "A100", "A٤", "A4\n5", "Ax4"]
)
def test_what_is_no_note_is_refused(text):
    with pytest.raises(ValueError, match=r"is not a note; wanted a letter A to G"):
        note_number(text)


def test_cents_beyond_an_octave_are_refused():
    with pytest.raises(ValueError, match=r"is 1201 cents off; wanted -1200 to 1200 cents"):
        note_number("A4 +1201c")


@pytest.mark.parametrize("hz", [0.0, -440.0, math.inf, math.nan])
def test_what_is_no_frequency_has_no_note(hz):
    with pytest.raises(ValueError, match=r"has no pitch; wanted a finite frequency above 0 Hz"):
        nearest(hz)


def test_a_reference_of_nothing_is_refused():
    with pytest.raises(ValueError, match=r"0\.0 Hz has no pitch"):
        nearest(440.0, 0.0)


@given(st.integers(0, 127))
def test_names_of_midi_numbers_are_read_back(number):
    assert note_number(note_name(number)) == number


@given(st.floats(0.05, 20_000.0), st.floats(380.0, 500.0))
def test_nearest_note_and_cents_give_the_frequency_back(hz, reference):
    name, cents = nearest(hz, reference)
    assert abs(cents) <= 50
    assert note_hz(name, reference) * 2 ** (cents / 1200) == pytest.approx(hz, rel=1e-12)


@given(st.floats(-60, 200))
def test_number_and_frequency_are_inverse(number):
    assert number_at(frequency(number)) == pytest.approx(number, abs=1e-9)


@pytest.mark.parametrize(
    ("hz", "text"),
    [(440.0, "A4 +0.0 c"), (439.9999, "A4 +0.0 c"), (330.0, "E4 +2.0 c"), (275.0, "C#4 -13.7 c"), (27.5, "A0 +0.0 c")],
)
def test_frequency_is_named_with_its_deviation(hz, text):
    assert named(hz) == text


def test_names_follow_the_reference():
    assert named(432.0, 432.0) == "A4 +0.0 c"

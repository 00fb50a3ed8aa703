"""Texts with units mean what they say in the parameter's own unit."""

import pytest

from rtfx.blocks.kind import Parameter
from rtfx.patch.units import depth, quantity

PITCH = Parameter("pitch", "Hz", 20.0, 20_000.0, 440.0, "log")
OFFSET = Parameter("offset", "Hz", -1000.0, 1000.0, 0.0)
TIME = Parameter("time", "s", 0.0, 2.0, 0.25)
LEVEL = Parameter("level", "dB", -80.0, 36.0, 0.0)
AMOUNT = Parameter("amount", "", 0.0, 1.0, 0.5)
RATIO = Parameter("ratio", "ratio", 1.0, 20.0, 4.0)

MEANS = [
    (PITCH, 440, 440.0),
    (PITCH, "440", 440.0),
    (PITCH, "329.6 Hz", 329.6),
    (PITCH, "2 kHz", 2000.0),
    (PITCH, "2kHz", 2000.0),
    (PITCH, " .5e1 kHz ", 5000.0),
    (PITCH, "A5", 880.0),
    (TIME, 0.25, 0.25),
    (TIME, "1.5 s", 1.5),
    (TIME, "20 ms", 0.020),
    (TIME, "100 us", 0.0001),
    (TIME, "100 µs", 0.0001),
    (LEVEL, -6, -6.0),
    (LEVEL, "-6 dB", -6.0),
    (LEVEL, "−6 dB", -6.0),
    (LEVEL, "+3dB", 3.0),
    (AMOUNT, 1, 1.0),
    (AMOUNT, "50 %", 0.5),
    (AMOUNT, "0 dB", 1.0),
    (AMOUNT, "-20 dB", 0.1),
    (RATIO, "3/2", 1.5),
    (RATIO, 4, 4.0),
]


@pytest.mark.parametrize(("parameter", "found", "value"), MEANS)
def test_text_means_the_value(parameter, found, value):
    assert quantity(found, parameter, 440.0).value == value


@pytest.mark.parametrize("thousandths", range(1, 2000, 7))
def test_milliseconds_are_the_same_float_as_seconds(thousandths):
    assert quantity(f"{thousandths} ms", TIME, 440.0).value == float(f"{thousandths / 1000:.3f}")


def test_notes_follow_the_reference():
    assert quantity("A4", PITCH, 432.0).value == 432.0


REFUSED = [
    (PITCH, "A", "wanted a note"),
    (PITCH, "", "wanted a note"),
    (PITCH, "5 sec", "unknown unit 'sec'"),
    (PITCH, "1e400", "wanted a note"),
    (PITCH, None, "wanted a note"),
    (TIME, "A4", "wanted a time"),
    (TIME, "3 samples", "unknown unit 'samples'"),
    (TIME, "2 sec", "unknown unit 'sec'. Did you mean 's'"),
    (LEVEL, "-6 db", "unknown unit 'db'. Did you mean 'dB'"),
    (LEVEL, True, "= true; wanted a level"),
    (AMOUNT, "3 Hz", "unknown unit 'Hz'. Allowed: %, dB"),
    (AMOUNT, float("nan"), "= nan; wanted a number"),
    (RATIO, "3/0", "wanted a ratio"),
    (RATIO, "3 %", "Allowed: nothing"),
]


@pytest.mark.parametrize(("parameter", "found", "words"), REFUSED)
def test_what_is_no_such_quantity_is_refused(parameter, found, words):
    with pytest.raises(ValueError, match=words):
        quantity(found, parameter, 440.0)


DEPTHS = [
    (PITCH, "30 c", 30 / 1200),
    (PITCH, "-30 cents", -30 / 1200),
    (PITCH, "2 semitones", 2 / 12),
    (PITCH, "1 semitone", 1 / 12),
    (PITCH, "1 oct", 1.0),
    (PITCH, "0.5", 0.5),
    (PITCH, 2, 2.0),
    (OFFSET, "1 kHz", 1000.0),
    (LEVEL, "-6 dB", -6.0),
    (TIME, "5 ms", 0.005),
    (AMOUNT, "50 %", 0.5),
    (AMOUNT, 0.25, 0.25),
]


@pytest.mark.parametrize(("parameter", "found", "value"), DEPTHS)
def test_depth_is_octaves_on_a_log_taper_else_in_the_parameters_unit(parameter, found, value):
    assert depth(found, parameter) == value


REFUSED_DEPTHS = [
    (PITCH, "5 Hz", "unknown unit 'Hz'"),
    (PITCH, "1 octav", "Did you mean 'octave'"),
    (PITCH, "A4", "wanted octaves"),
    (PITCH, False, "= false; wanted octaves"),
    (PITCH, "1e999 c", "wanted -64 to 64 octaves"),
    (PITCH, -65, "wanted -64 to 64 octaves"),
    (OFFSET, "A4", "wanted a number"),
    (OFFSET, "30 c", "unknown unit 'c'"),
    (TIME, "1e999 s", "wanted a number"),
    (LEVEL, True, "= true; wanted a number"),
]


@pytest.mark.parametrize(("parameter", "found", "words"), REFUSED_DEPTHS)
def test_what_is_no_depth_is_refused(parameter, found, words):
    with pytest.raises(ValueError, match=words):
        depth(found, parameter)

"""Note names, MIDI note numbers and frequencies in twelve-tone equal temperament.

    f = reference · 2^((n − 69)/12),  n the MIDI note number, A4 = 69
    cents = 1200 · log₂(f / f₀)

Octaves change at C: B3 lies a semitone below C4, which is MIDI note 60.
Source: ISO 16:1975, A4 = 440 Hz (from memory); MIDI note numbers as in the MIDI Tuning Standard.
"""

from __future__ import annotations

import re
from math import isfinite, log2

NAMES = ("C", "C#", "D", "D#", "E", "F", "F#", "G", "G#", "A", "A#", "B")
A4, STANDARD_HZ = 69, 440.0
MOST_CENTS = 1200.0
_WANTED = "a letter A to G, # or b if need be, an octave from -9 to 99, and cents if you like: A4, C#4, Eb3, 'E4 -14c'"
_NOTE = re.compile(
    r"\s*(?P<letter>[A-Ga-g])(?P<accidental>[#♯b♭]?)(?P<octave>-?[0-9]{1,2})"
    r"\s*(?:(?P<cents>[+-]?\s*[0-9]+(?:\.[0-9]*)?)\s*(?:c|cents?))?\s*"
)
_ACCIDENTAL = {"": 0, "#": 1, "♯": 1, "b": -1, "♭": -1}


def note_number(text: str) -> float:
    """Return the MIDI note number of a named note.

    Parameters
    ----------
    text : str
        Letter, accidental (#, ♯, b or ♭), octave and cents: "A4", "C#4", "E♭3", "E4 -14c", "A4+3.5 c".

    Returns
    -------
    float
        69 for A4; cents make it a fraction (1 cent: 0.01).

    Raises
    ------
    ValueError
        If *text* is not such a name, or its cents are more than an octave.
    """
    match = _NOTE.fullmatch(text.replace("−", "-"))
    if match is None:
        raise ValueError(f"'{text}' is not a note; wanted {_WANTED}")
    cents = float((match["cents"] or "0").replace(" ", ""))
    if abs(cents) > MOST_CENTS:
        raise ValueError(f"'{text}' is {cents:g} cents off; wanted {-MOST_CENTS:g} to {MOST_CENTS:g} cents")
    step = NAMES.index(match["letter"].upper()) + _ACCIDENTAL[match["accidental"]]
    return step + len(NAMES) * (int(match["octave"]) + 1) + cents / 100


def note_name(number: int) -> str:
    """Return the name of MIDI note *number*, with sharps: 60 is "C4", 61 is "C#4"."""
    octave, step = divmod(number, len(NAMES))
    return f"{NAMES[step]}{octave - 1}"


def frequency(number: float, reference_hz: float = STANDARD_HZ) -> float:
    """Return the frequency in Hz of MIDI note *number*, whole or not, where A4 has *reference_hz*."""
    return reference_hz * 2.0 ** ((number - A4) / len(NAMES))


def number_at(hz: float, reference_hz: float = STANDARD_HZ) -> float:
    """Return the MIDI note number, with its fraction, of *hz*: the inverse of `frequency`.

    Raises
    ------
    ValueError
        If *hz* or *reference_hz* is not a finite frequency above 0.
    """
    for found in (hz, reference_hz):
        if not (isfinite(found) and found > 0):
            raise ValueError(f"{found!r} Hz has no pitch; wanted a finite frequency above 0 Hz")
    return A4 + len(NAMES) * (log2(hz) - log2(reference_hz))


def note_hz(text: str, reference_hz: float = STANDARD_HZ) -> float:
    """Return the frequency in Hz of the note called *text*; ValueError if it is none (see `note_number`)."""
    return frequency(note_number(text), reference_hz)


def nearest(hz: float, reference_hz: float = STANDARD_HZ) -> tuple[str, float]:
    """Return the nearest note of *hz* and how many cents above it *hz* lies (-50 to 50).

    Raises
    ------
    ValueError
        If *hz* or *reference_hz* is not a finite frequency above 0.
    """
    number = number_at(hz, reference_hz)
    whole = round(number)
    return note_name(whole), 100 * (number - whole)


def named(hz: float, reference_hz: float = STANDARD_HZ) -> str:
    """Return *hz* as a note with its deviation, as "E4 +2.0 c"; ValueError as `nearest`."""
    name, cents = nearest(hz, reference_hz)
    tenths = round(cents, 1) + 0.0  # adding 0 turns -0.0 into 0.0
    return f"{name} {tenths:+.1f} c"

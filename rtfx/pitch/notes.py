"""Note names and frequencies in twelve-tone equal temperament.

    f = reference · 2^((n − 69)/12),  n the MIDI note number, A4 = 69

Source: ISO 16:1975, A4 = 440 Hz (from memory); MIDI note numbers as in the MIDI Tuning Standard.
"""

from __future__ import annotations

import re
from math import log2

STEPS = {"C": 0, "D": 2, "E": 4, "F": 5, "G": 7, "A": 9, "B": 11}
NAMES = ("C", "C#", "D", "D#", "E", "F", "F#", "G", "G#", "A", "A#", "B")
A4, STANDARD_HZ = 69, 440.0
_NOTE = re.compile(r"\s*([A-Ga-g])([#b♯♭]?)(-?\d+)\s*(?:([+−-]?\s*\d+(?:\.\d+)?)\s*c)?\s*")
_ACCIDENTAL = {"": 0, "#": 1, "♯": 1, "b": -1, "♭": -1}


def note_number(text: str) -> float:
    """Return the MIDI note number of a name like "A4", "C#4", "E♭3" or "E4 -14c"; cents make it a fraction.

    Raises
    ------
    ValueError
        If *text* is not such a name.
    """
    match = _NOTE.fullmatch(text)
    if match is None:
        raise ValueError(f"'{text}' is not a note; wanted a name and an octave, as A4, C#4, Eb3 or 'E4 -14c'")
    letter, accidental, octave, cents = match.groups()
    whole = STEPS[letter.upper()] + _ACCIDENTAL[accidental] + 12 * (int(octave) + 1)
    return whole + float((cents or "0").replace("−", "-").replace(" ", "")) / 100


def frequency(number: float, reference_hz: float = STANDARD_HZ) -> float:
    """Return the frequency in Hz of MIDI note *number*."""
    return reference_hz * 2 ** ((number - A4) / 12)


def note_hz(text: str, reference_hz: float = STANDARD_HZ) -> float:
    """Return the frequency in Hz of the note called *text*; ValueError if it is none."""
    return frequency(note_number(text), reference_hz)


def nearest(hz: float, reference_hz: float = STANDARD_HZ) -> tuple[str, float]:
    """Return the nearest note of *hz* (above 0) and how many cents above it *hz* lies."""
    number = A4 + 12 * log2(hz / reference_hz)
    whole = round(number)
    return f"{NAMES[whole % 12]}{whole // 12 - 1}", 100 * (number - whole)


def named(hz: float, reference_hz: float = STANDARD_HZ) -> str:
    """Return *hz* as a note with its deviation, as "E4 +2.0 c"."""
    name, cents = nearest(hz, reference_hz)
    return f"{name} {cents:+.1f} c"

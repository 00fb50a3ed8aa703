"""Values with units: "2 kHz", "E4 -14c", "-6 dB", "20 ms", "30 c".

A plain number is in the parameter's own unit.
"""

from __future__ import annotations

import math
import re

from rtfx.blocks.kind import Parameter
from rtfx.pitch.notes import note_hz

_UNITS: dict[str, dict[str, float]] = {
    "Hz": {"Hz": 1.0, "kHz": 1000.0},
    "s": {"s": 1.0, "ms": 1e-3, "us": 1e-6},
    "dB": {"dB": 1.0},
    "": {"%": 0.01},
    "ratio": {},
}
_OCTAVES = {"c": 1 / 1200, "cents": 1 / 1200, "semitones": 1 / 12, "oct": 1.0}
_NUMBER = re.compile(r"\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*(\S*)\s*")


def _wanted(parameter: Parameter) -> str:
    examples = {
        "Hz": "a note (A4, 'E4 -14c') or a frequency (440, '440 Hz', '2 kHz')",
        "s": "a time (0.25, '250 ms', '0.25 s')",
        "dB": "a level (-6, '-6 dB')",
        "": "a number, or '50 %' or '-6 dB' as a factor",
        "ratio": "a ratio (1.5 or '3/2')",
    }
    return examples[parameter.unit]


def quantity(found: object, parameter: Parameter, reference_hz: float) -> float:
    """Return *found* in the unit of *parameter*.

    Raises
    ------
    ValueError
        If it is no such quantity; the message says what is wanted.
    """
    if isinstance(found, bool) or not isinstance(found, (int, float, str)):
        raise ValueError(f"found {found!r}; wanted {_wanted(parameter)}")
    value = _text(found, parameter, reference_hz) if isinstance(found, str) else float(found)
    if not math.isfinite(value):
        raise ValueError(f"found {found!r}; wanted a finite number")
    return value


def _text(found: str, parameter: Parameter, reference_hz: float) -> float:
    match = _NUMBER.fullmatch(found)
    if match:
        number, unit = float(match.group(1)), match.group(2)
        known = _UNITS[parameter.unit]
        if not unit:
            return number
        if unit in known:
            return number * known[unit]
        if unit == "dB" and parameter.unit == "":
            return 10 ** (number / 20)
        if parameter.unit == "ratio" and unit.startswith("/"):
            return number / float(unit[1:])
        raise ValueError(f"found '{found}': the unit '{unit}' is not known here; wanted {_wanted(parameter)}")
    if parameter.unit == "Hz":
        try:
            return note_hz(found, reference_hz)
        except ValueError:
            pass
    raise ValueError(f"found '{found}'; wanted {_wanted(parameter)}")


def depth(found: object, parameter: Parameter) -> float:
    """Return how far a followed signal of ±1 moves *parameter*: in its unit, or in octaves on a log taper.

    Raises
    ------
    ValueError
        If it is no such quantity; the message says what is wanted.
    """
    if parameter.taper == "linear":
        return quantity(found, parameter, 440.0)
    wanted = "octaves (0.5, '30 c', '2 semitones', '1 oct')"
    if isinstance(found, str) and (match := _NUMBER.fullmatch(found)) and match.group(2) in _OCTAVES:
        return float(match.group(1)) * _OCTAVES[match.group(2)]
    if isinstance(found, bool) or not isinstance(found, (int, float)) or not math.isfinite(found):
        raise ValueError(f"found {found!r}; wanted {wanted}")
    return float(found)

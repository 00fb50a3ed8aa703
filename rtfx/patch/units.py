"""Values with units: "2 kHz", "E4 -14c", "-6 dB", "20 ms", "50 %", "30 c".

A plain number is in the parameter's own unit.  A power of ten moves the decimal point before the text becomes a
float, so that "100 us" is the very same number as 0.0001.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from rtfx.blocks.kind import Parameter
from rtfx.patch.errors import shown, suggestion
from rtfx.pitch.notes import note_hz

POWERS = {
    "Hz": {"Hz": 0, "kHz": 3},
    "s": {"s": 0, "ms": -3, "us": -6},
    "dB": {"dB": 0},
    "": {"%": -2},
    "ratio": {},
}
"""For each unit of a parameter, the units a text may have and the power of ten of each."""

EXAMPLES = {
    "Hz": "a note ('A4', 'E4 -14c') or a frequency (440, '440 Hz', '2 kHz')",
    "s": "a time (0.25, '0.25 s', '250 ms')",
    "dB": "a level (-6, '-6 dB')",
    "": "a number (0.5), or '50 %' or '-6 dB' as a factor",
    "ratio": "a ratio (1.5 or '3/2')",
}
OCTAVES = {"c": 1200, "cent": 1200, "cents": 1200, "semitone": 12, "semitones": 12, "oct": 1, "octave": 1, "octaves": 1}
"""How many of each unit make an octave."""

MOST_OCTAVES = 64.0  # wider than any parameter's range, and 2**64 is far from the end of a float's
_NUMBER = re.compile(r"\s*([+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+))(?:[eE]([+-]?[0-9]{1,9}))?\s*([^\s0-9.+-]*)\s*")
_RATIO = re.compile(r"\s*([0-9]+\.?[0-9]*)\s*/\s*([0-9]+\.?[0-9]*)\s*")
_MINUS, _MICRO = "−", "µμ"


@dataclass(frozen=True)
class Quantity:
    """A `value` in its parameter's unit, as it was `written`, in `unit`, 10**`power` times the parameter's."""

    value: float
    written: str
    unit: str
    power: int = 0

    def same_unit(self, value: float) -> str:
        """Return another *value* of the parameter, in the unit in which this one was written."""
        return f"{value / 10.0**self.power:.10g} {self.unit}".rstrip()


def number(found: object) -> float | None:
    """Return *found* as a finite float; None if it is no number, or not finite (true and false are no numbers)."""
    if isinstance(found, bool) or not isinstance(found, (int, float)):
        return None
    try:
        value = float(found)
    except OverflowError:
        return None
    return value if math.isfinite(value) else None


def quantity(found: object, parameter: Parameter, reference_hz: float) -> Quantity:
    """Return *found* as a quantity in the unit of *parameter*; its range is not looked at.

    Raises
    ------
    ValueError
        If it is no such quantity; the message goes on after the name: "= 'H4'; wanted a note …".
    """
    if isinstance(found, str):
        read = _measured(found, parameter) or _pitch(found, parameter, reference_hz) or _ratio(found, parameter)
    else:
        read = _plain(number(found), parameter)
    if read is None or not math.isfinite(read.value):
        raise ValueError(f"= {shown(found)}; wanted {EXAMPLES[parameter.unit]}")
    return read


def depth(found: object, parameter: Parameter) -> float:
    """Return how far a followed signal of 1 moves *parameter*: in its unit, or in octaves on a log taper.

    Raises
    ------
    ValueError
        If it is no such quantity, or wider than `MOST_OCTAVES`; the message goes on after the name.
    """
    if parameter.taper == "log":
        return _octaves(found)
    read = _measured(found, parameter) if isinstance(found, str) else _plain(number(found), parameter)
    if read is None or not math.isfinite(read.value):
        unit = f" {parameter.unit}".rstrip()
        raise ValueError(f"= {shown(found)}; wanted a number, in the parameter's unit (0.5, '0.5{unit}')")
    return read.value


def _plain(value: float | None, parameter: Parameter) -> Quantity | None:
    if value is None:
        return None
    unit = "" if parameter.unit == "ratio" else parameter.unit
    return Quantity(value, f"{value:.10g} {unit}".rstrip(), unit)


def _split(found: str) -> tuple[str, int, str] | None:
    """Return the digits, the power of ten and the unit of a text like "2.5e3 kHz"; None if it is none."""
    match = _NUMBER.fullmatch(found.replace(_MINUS, "-"))
    if match is None:
        return None
    unit = match[3].replace(_MICRO[0], "u").replace(_MICRO[1], "u")
    return match[1], int(match[2] or 0), unit


def _measured(found: str, parameter: Parameter) -> Quantity | None:
    """Return a number with or without a unit; None if *found* is not even that."""
    parts = _split(found)
    if parts is None:
        return None
    digits, power, unit = parts
    powers = POWERS[parameter.unit]
    if not unit:
        return _plain(float(f"{digits}e{power}"), parameter)
    if unit in powers:
        return Quantity(float(f"{digits}e{power + powers[unit]}"), found.strip(), unit, powers[unit])
    if unit == "dB" and parameter.unit == "":
        return Quantity(_amplitude(float(f"{digits}e{power}")), found.strip(), "")
    factor = ["dB"] if parameter.unit == "" else []
    raise ValueError(f"= {shown(found)}: unknown unit {shown(unit)}.{suggestion(unit, [*powers, *factor])}")


def _amplitude(level_db: float) -> float:
    try:
        return 10.0 ** (level_db / 20)
    except OverflowError:
        return math.inf


def _pitch(found: str, parameter: Parameter, reference_hz: float) -> Quantity | None:
    if parameter.unit != "Hz":
        return None
    try:
        hz = note_hz(found, reference_hz)
    except ValueError:
        return None
    return Quantity(hz, f"{found.strip()} ({hz:.6g} Hz)", "Hz")


def _ratio(found: str, parameter: Parameter) -> Quantity | None:
    match = _RATIO.fullmatch(found)
    if parameter.unit != "ratio" or match is None or float(match[2]) == 0:
        return None
    return Quantity(float(match[1]) / float(match[2]), found.strip(), "")


def _octaves(found: object) -> float:
    """Return *found*, a number of octaves or a text like "30 c", in octaves."""
    value, parts = number(found), _split(found) if isinstance(found, str) else None
    if parts is not None:
        digits, power, unit = parts
        if unit and unit not in OCTAVES:
            raise ValueError(f"= {shown(found)}: unknown unit {shown(unit)}.{suggestion(unit, OCTAVES)}")
        value = float(f"{digits}e{power}") / OCTAVES.get(unit, 1)
    if value is None:
        raise ValueError(f"= {shown(found)}; wanted octaves (0.5, '30 c', '2 semitones', '1 oct')")
    if abs(value) > MOST_OCTAVES:
        raise ValueError(f"= {shown(found)}; wanted {-MOST_OCTAVES:g} to {MOST_OCTAVES:g} octaves")
    return value

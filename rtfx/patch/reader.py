"""What reading a patch needs everywhere: the faults so far, the lines, and the checks that add to them.

A check that fails notes a fault and returns something harmless, so that reading goes on and finds the next.
"""

from __future__ import annotations

import math
import pathlib
from collections.abc import Iterable, Mapping
from typing import Any

from rtfx.blocks.kind import Choice, File, Kind, Parameter
from rtfx.patch.errors import Fault, shown, suggestion
from rtfx.patch.lines import Path, key_lines, line_of
from rtfx.patch.units import Quantity, number, quantity
from rtfx.pitch.notes import STANDARD_HZ


class Reader:
    """The faults of the file at *path*, and the checks.

    `kinds` is filled before any wire is read: the kind of every block by its name, None where it has a fault.
    """

    def __init__(self, path: str, text: str = "") -> None:
        self.path = path
        self.lines = key_lines(text)
        self.faults: list[Fault] = []
        self.kinds: dict[str, Kind | None] = {}
        self.reference = STANDARD_HZ

    def fault(self, message: str, where: Path = (), block: str = "") -> None:
        """Note that something is wrong at the key path *where*."""
        self.faults.append(Fault(self.path, line_of(self.lines, where), block, message))

    def check_keys(
        self, found: Iterable[str], allowed: Iterable[str], where: Path = (), what: str = "key", block: str = ""
    ) -> None:
        """Note every key that is not allowed."""
        allowed = list(allowed)
        for key in found:
            if key not in allowed:
                self.fault(f"unknown {what} {shown(key)}.{suggestion(key, allowed)}", (*where, key), block)

    def text(self, content: Mapping[str, Any], key: str) -> str:
        """Return the required text under *key* at the top of the file."""
        found = content.get(key)
        if isinstance(found, str) and found.strip():
            return found
        problem = f"{shown(key)} is missing" if found is None else f"{key} = {shown(found)}"
        self.fault(f'{problem}; wanted a text, as {key} = "…"', (key,))
        return ""

    def number(self, content: Mapping[str, Any], key: str, default: float, low: float, high: float) -> float:
        """Return the optional number under *key* at the top of the file."""
        found = content.get(key, default)
        value = number(found)
        if value is not None and low <= value <= high:
            return value
        self.fault(f"{key} = {shown(found)}; wanted a number from {low:g} to {high:g}", (key,))
        return default

    def table(self, content: Mapping[str, Any], key: str) -> dict[str, Any]:
        """Return the table under *key* at the top of the file; empty, with a fault, if it is something else."""
        found = content.get(key, {})
        if isinstance(found, dict):
            return found
        self.fault(f"{key} = {shown(found)}; wanted a table, [{key}]", (key,))
        return {}

    def value(self, parameter: Parameter, found: object, where: Path = (), block: str = "", label: str = "") -> float:
        """Return *found* as a value of *parameter*, checked against its range; messages call it *label*.

        With a fault it is NaN: no comparison with that is true, so that one fault does not lead to another.
        """
        try:
            read = quantity(found, parameter, self.reference)
        except ValueError as error:
            self.fault(f"{label or parameter.name} {error}", where, block)
            return math.nan
        problem = _beyond(read, parameter, label)
        if problem:
            self.fault(problem, where, block)
            return math.nan
        return read.value

    def choice(self, choice: Choice, found: object, where: Path = (), block: str = "") -> str:
        """Return *found* as one of the values of *choice*."""
        if isinstance(found, str) and found in choice.choices:
            return found
        hint = suggestion(str(found) if isinstance(found, str) else "", choice.choices)
        self.fault(f"{choice.name} = {shown(found)} is not known.{hint}", where, block)
        return choice.default

    def file(self, file: File, found: object, where: Path = (), block: str = "") -> str:
        """Return the whole path of the file that *found* names, from the folder of the patch."""
        if not isinstance(found, str) or not found.strip():
            problem = f"{shown(file.name)} is missing" if found is None else f"{file.name} = {shown(found)}"
            self.fault(f'{problem}; wanted the path of a file, as {file.name} = "room.wav"', where, block)
            return ""
        path = pathlib.Path(self.path).parent / found
        if not path.is_file():
            self.fault(f"{file.name} = {shown(found)}: there is no file {shown(str(path))}", where, block)
        return str(path)


def _beyond(read: Quantity, parameter: Parameter, label: str) -> str:
    """Return what is wrong if *read* lies outside the range of *parameter*, else an empty text."""
    low, high = read.same_unit(parameter.low), read.same_unit(parameter.high)
    name, it = label or parameter.name, "it" if label else parameter.name
    if read.value > parameter.high:
        return f"{name} = {read.written} is above {high}. Lower {it} to {high} or less."
    if read.value < parameter.low:
        return f"{name} = {read.written} is below {low}. Raise {it} to {low} or more."
    return ""

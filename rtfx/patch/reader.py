"""What reading a patch needs everywhere: the faults so far, the lines, and the checks that add to them.

A check that fails notes a fault and returns something harmless, so that reading goes on and finds the next.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from typing import Any

from rtfx.blocks.kind import Choice, Parameter
from rtfx.patch.errors import Fault, suggestion
from rtfx.patch.lines import key_lines, line_of
from rtfx.patch.units import quantity


class Reader:
    """The faults of the file at *path*, and the checks."""

    def __init__(self, path: str, text: str, content: Mapping[str, Any]) -> None:
        self.path, self.content = path, content
        self.lines = key_lines(text)
        self.faults: list[Fault] = []
        self.reference = 440.0

    def fault(self, message: str, *where: str, block: str = "") -> None:
        """Note that something is wrong at the key path *where*."""
        self.faults.append(Fault(self.path, line_of(self.lines, *where), block, message))

    def check_keys(
        self, found: Iterable[str], allowed: Iterable[str], where: tuple, what: str, block: str = ""
    ) -> None:
        """Note every key that is not allowed."""
        allowed = list(allowed)
        for key in found:
            if key not in allowed:
                self.fault(f"unknown {what} '{key}'.{suggestion(key, allowed)}", *where, key, block=block)

    def known(self, name: str, table: Mapping[str, Any], what: str, block: str = "", where: tuple = ()) -> Any:
        """Return what *table* has under *name*; None, with a fault, if nothing."""
        if name not in table:
            self.fault(f"there is no {what} '{name}'.{suggestion(name, table)}", *where, block=block)
        return table.get(name)

    def text(self, content: Mapping[str, Any], key: str) -> str:
        """Return the required text under *key* at the top of the file."""
        found = content.get(key)
        if not isinstance(found, str) or not found.strip():
            problem = f"'{key}' is missing" if found is None else f"{key} = {found!r}"
            self.fault(f'{problem}; wanted a text, as {key} = "…"', key)
            return ""
        return found

    def number(self, content: Mapping[str, Any], key: str, default: float, low: float, high: float) -> float:
        """Return the optional number under *key* at the top of the file."""
        found = content.get(key, default)
        fine = isinstance(found, (int, float)) and not isinstance(found, bool) and math.isfinite(found)
        if not fine or not low <= found <= high:
            self.fault(f"{key} = {found!r}; wanted a number from {low:g} to {high:g}", key)
            return default
        return float(found)

    def table(self, content: Mapping[str, Any], *path: str) -> dict[str, Any]:
        """Return the table at the top-level key; empty, with a fault, if it is something else."""
        found = content.get(path[-1], {})
        if not isinstance(found, dict):
            self.fault(f"{path[-1]} = {found!r}; wanted a table, [{'.'.join(path)}]", *path)
            return {}
        return found

    def value(self, parameter: Parameter, found: object, block: str, *where: str) -> float:
        """Return *found* as a value of *parameter*, checked against its range."""
        label = f"{where[-1] if where else parameter.name}"
        try:
            value = quantity(found, parameter, self.reference)
        except (ValueError, ZeroDivisionError) as error:
            self.fault(f"{label}: {error}", *where, block=block)
            return parameter.default
        unit = f" {parameter.unit}".rstrip()
        for beyond, side, bound, way in (
            (value > parameter.high, "above", parameter.high, "Lower it to"),
            (value < parameter.low, "below", parameter.low, "Raise it to"),
        ):
            if beyond:
                tail = "less" if side == "above" else "more"
                self.fault(
                    f"{label} = {value:g}{unit} is {side} {bound:g}{unit}. {way} {bound:g}{unit} or {tail}.",
                    *where, block=block,
                )  # fmt: skip
                return parameter.default
        return value

    def choice(self, choice: Choice, found: object, block: str, *where: str) -> str:
        """Return *found* as one of the values of *choice*."""
        if found not in choice.choices:
            hint = suggestion(str(found), choice.choices)
            self.fault(f"{choice.name} = {found!r} is not known.{hint}", *where, block=block)
            return choice.default
        return str(found)

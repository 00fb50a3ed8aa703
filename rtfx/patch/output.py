"""Read what goes to the left and to the right."""

from __future__ import annotations

from typing import Any

from rtfx.patch.errors import shown
from rtfx.patch.model import INPUT, Wire
from rtfx.patch.reader import Reader
from rtfx.patch.wires import outputs_of, read_wire

SIDES = ("left", "right")
_WANTED = 'from = "block", or left = "block" and right = "block"'


def read_output(reader: Reader, content: dict[str, Any]) -> tuple[Wire, Wire]:
    """Return what goes to the left and to the right: a mono wire on both, a stereo block on one each."""
    entry = reader.table(content, "output")
    reader.check_keys(entry, ("from", *SIDES), ("output",), "key of [output]")
    if not isinstance(content.get("output", {}), dict):
        return Wire(INPUT), Wire(INPUT)
    given = [key for key in ("from", *SIDES) if key in entry]
    if given == ["from"]:
        return _both(reader, entry["from"])
    if given == list(SIDES):
        left, right = (read_wire(reader, entry[side], side, ("output", side)) for side in SIDES)
        return left, right
    found = f"has {' and '.join(map(shown, given))}" if given else "says nothing"
    reader.fault(f"[output] {found}; wanted {_WANTED}", ("output",))
    return Wire(INPUT), Wire(INPUT)


def _both(reader: Reader, source: object) -> tuple[Wire, Wire]:
    if isinstance(source, str) and outputs_of(reader, source) == SIDES:
        return Wire(source, 0), Wire(source, 1)
    wire = read_wire(reader, source, "from", ("output", "from"))
    return wire, wire

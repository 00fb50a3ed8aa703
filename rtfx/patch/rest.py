"""Read what is not a block: the output and the controls."""

from __future__ import annotations

from typing import Any

from rtfx.blocks.kind import Parameter
from rtfx.patch.blockread import _outputs, read_wire
from rtfx.patch.model import INPUT, Control, Placed, Wire
from rtfx.patch.reader import Reader

_CONTROL = ("by", "from", "to", "ladder")


def read_output(reader: Reader, content: dict[str, Any]) -> tuple[Wire, Wire]:
    """Return what goes to the left and to the right."""
    entry = reader.table(content, "output")
    reader.check_keys(entry, ("from", "left", "right"), ("output",), "key")
    if "from" in entry and len(entry) == 1:
        source = entry["from"]
        tables = reader.table(content, "blocks") if isinstance(content.get("blocks"), dict) else {}
        if isinstance(source, str) and _outputs(tables.get(source)) == ("left", "right"):
            return Wire(source, 0), Wire(source, 1)
        wire = read_wire(reader, source, "from", ("output", "from"))
        return wire, wire
    if "left" in entry and "right" in entry and "from" not in entry:
        left, right = (read_wire(reader, entry[side], side, ("output", side)) for side in ("left", "right"))
        return left, right
    reader.fault('[output] wants from = "block", or left = "block" and right = "block"', "output")
    return Wire(INPUT), Wire(INPUT)


def read_controls(reader: Reader, content: dict[str, Any], blocks: tuple[Placed, ...]) -> tuple[Control, ...]:
    """Return what hands and feet move."""
    found = (_control(reader, target, entry, blocks) for target, entry in reader.table(content, "controls").items())
    return tuple(c for c in found if c is not None)


def _control(reader: Reader, target: str, entry: Any, blocks: tuple[Placed, ...]) -> Control | None:
    where = ("controls", target)
    if not isinstance(entry, dict):
        reader.fault(f'{target} = {entry!r}; wanted {{ by = "knob 1", from = …, to = … }}', *where)
        return None
    reader.check_keys(entry, _CONTROL, where, "key of a control")
    movable = {f"{b.name}.{p.name}": (b, p) for b in blocks for p in b.kind.numbers}
    pair = reader.known(target, movable, "parameter", where=where)
    if pair is None:
        return None
    block, parameter = pair
    if parameter.fixed:
        reader.fault(f"{target} is fixed when the patch is built: no control can move it", *where)
    by = entry.get("by")
    if not isinstance(by, str) or not by.strip():
        reader.fault(f'{target}: by = {by!r}; wanted the name of a control, as by = "knob 1"', *where)
        by = ""
    low, high = (
        reader.value(parameter, entry.get(key, bound), block.name, *where)
        for key, bound in (("from", parameter.low), ("to", parameter.high))
    )
    return Control(block.name, parameter.name, by, low, high, _ladder(reader, entry, parameter, where, low, high))


def _ladder(reader: Reader, entry: dict, parameter: Parameter, where: tuple, low: float, high: float) -> tuple:
    found = entry.get("ladder", [])
    if not isinstance(found, list):
        reader.fault(f"ladder = {found!r}; wanted a list of values", *where)
        return ()
    steps = tuple(reader.value(parameter, step, "", *where) for step in found)
    least, most = min(low, high), max(low, high)
    for step, text in zip(steps, found, strict=True):
        if not least * (1 - 1e-9) <= step <= most * (1 + 1e-9) and least >= 0:
            reader.fault(f"ladder: {text!r} lies outside from … to ({least:g} to {most:g} {parameter.unit})", *where)
    return steps

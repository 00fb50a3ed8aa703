"""Read one block of a patch: its wires, its parameters and what follows what."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from rtfx.blocks.kind import Choice, File, Kind, Parameter
from rtfx.patch.errors import shown
from rtfx.patch.lines import line_of
from rtfx.patch.model import INPUT, Follow, Placed, Wire
from rtfx.patch.reader import Reader
from rtfx.patch.units import depth
from rtfx.patch.wires import read_wire

_FOLLOW = ("base", "ratio", "add", "depth")
_WANTED = '{ base = …, add = "block", depth = … } or { base = "block", ratio = "3/2" }'
_RATIO = Parameter("ratio", "ratio", 1 / 64, 64.0, 1.0)


def read_block(reader: Reader, name: str, kind: Kind, entry: dict[str, Any]) -> Placed:
    """Return the block called *name*, with a fault for everything that is wrong with it."""
    where = ("blocks", name)
    reader.check_keys(entry, ["kind", *kind.ports, *(p.name for p in kind.parameters)], where, block=name)
    wires = {port: _port(reader, name, entry, port) for port in kind.ports}
    values: dict[str, float] = {}
    choices: dict[str, str] = {}
    follows: dict[str, Follow] = {}
    for p in kind.parameters:
        found = entry.get(p.name, None if isinstance(p, File) else p.default)
        if isinstance(p, Choice):
            choices[p.name] = reader.choice(p, found, (*where, p.name), name)
        elif isinstance(p, File):
            choices[p.name] = reader.file(p, found, (*where, p.name), name)
        elif isinstance(found, dict):
            values[p.name], follows[p.name] = _following(reader, name, p, found)
        else:
            values[p.name] = reader.value(p, found, (*where, p.name), name)
    return Placed(name, kind, wires, values, choices, follows, line_of(reader.lines, where))


def _port(reader: Reader, name: str, entry: dict[str, Any], port: str) -> Wire:
    where = ("blocks", name, port)
    if port in entry:
        return read_wire(reader, entry[port], port, where, name)
    reader.fault(f'port {shown(port)} is not wired; wanted {port} = "{INPUT}" or a block\'s name', where, name)
    return Wire(INPUT)


def _following(reader: Reader, name: str, parameter: Parameter, found: dict[str, Any]) -> tuple[float, Follow]:
    """Read { base = …, add = "block", depth = … }; with a ratio the base is a block too."""
    label, where = parameter.name, ("blocks", name, parameter.name)
    reader.check_keys(found, _FOLLOW, where, f"key of {label}", name)
    if parameter.fixed:
        message = f"{label} is fixed when the patch is built: it cannot follow a signal. Give it a plain value."
        reader.fault(message, where, name)
    if "ratio" not in found or "add" in found or "depth" in found:
        for key in ("add", "depth"):
            if key not in found:
                reader.fault(f"{label}: {shown(key)} is missing; wanted {_WANTED}", where, name)
    wire = read_wire(reader, found["add"], f"{label}: add", (*where, "add"), name) if "add" in found else None
    moved = Follow(wire, _depth(reader, name, parameter, found))
    if "ratio" not in found:
        base = found.get("base", parameter.default)
        return reader.value(parameter, base, (*where, "base"), name, f"{label}: base"), moved
    source = read_wire(reader, found.get("base"), f"{label}: base", (*where, "base"), name)
    ratio = reader.value(_RATIO, found["ratio"], (*where, "ratio"), name, f"{label}: ratio")
    return parameter.default, replace(moved, base=source, ratio=ratio)


def _depth(reader: Reader, name: str, parameter: Parameter, found: dict[str, Any]) -> float:
    try:
        return depth(found.get("depth", 0.0), parameter)
    except ValueError as error:
        reader.fault(f"{parameter.name}: depth {error}", ("blocks", name, parameter.name, "depth"), name)
        return 0.0

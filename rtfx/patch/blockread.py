"""Read one block of a patch: its kind, its wires, its parameters and what follows what."""

from __future__ import annotations

from typing import Any

from rtfx.blocks import table
from rtfx.blocks.kind import Choice, Kind, Parameter
from rtfx.patch.errors import suggestion
from rtfx.patch.model import INPUT, Follow, Placed, Wire
from rtfx.patch.reader import Reader
from rtfx.patch.units import depth


def kind_of(reader: Reader, name: str, entry: Any) -> Kind | None:
    """Return the kind that a block's table names; None, with a fault, if there is none."""
    if not isinstance(entry, dict):
        reader.fault(f"{name} = {entry!r}; wanted a table, [blocks.{name}]", "blocks", name, block=name)
        return None
    found = entry.get("kind")
    if not isinstance(found, str):
        problem = "'kind' is missing" if found is None else f"kind = {found!r}"
        reader.fault(f"{problem}; wanted one of: {', '.join(table.names())}", "blocks", name, "kind", block=name)
        return None
    if found not in table.names():
        hint = suggestion(found, table.names())
        reader.fault(f"there is no kind '{found}'.{hint}", "blocks", name, "kind", block=name)
        return None
    return table.find(found)


def read_wire(reader: Reader, found: Any, label: str, where: tuple[str, ...], block: str = "") -> Wire:
    """Return the wire that *found* describes: "input", a block, or "block.output"."""
    tables = reader.content.get("blocks", {})
    sources = [INPUT, *tables]
    if not isinstance(found, str):
        reader.fault(f'{label} = {found!r}; wanted the name of a block in quotes, or "{INPUT}"', *where, block=block)
        return Wire(INPUT)
    source, _, output = found.partition(".")
    if source not in sources:
        reader.fault(f"{label} = '{found}': no such block.{suggestion(source, sources)}", *where, block=block)
        return Wire(INPUT)
    outputs = _outputs(tables.get(source))
    if output in outputs and len(outputs) > 1:
        return Wire(source, outputs.index(output))
    if output or len(outputs) > 1:
        allowed = ", ".join(f"{source}.{o}" for o in outputs) if len(outputs) > 1 else source
        reader.fault(f"{label} = '{found}': say which output. Allowed: {allowed}.", *where, block=block)
    return Wire(source)


def _outputs(entry: Any) -> tuple[str, ...]:
    """The outputs of the block in *entry*; one, if its kind is not known."""
    name = entry.get("kind") if isinstance(entry, dict) else None
    if isinstance(name, str) and name in table.names():
        return table.find(name).outputs
    return ("out",)


def read_block(reader: Reader, name: str, entry: Any, tables: dict[str, Any]) -> Placed | None:
    """Return the block called *name*; None if its kind is not known."""
    kind = kind_of(reader, name, entry)
    if kind is None:
        return None
    where = ("blocks", name)
    reader.check_keys(entry, ["kind", *kind.ports, *(p.name for p in kind.parameters)], where, "key", name)
    wires = {port: _port(reader, name, entry, port) for port in kind.ports}
    values: dict[str, float] = {}
    choices: dict[str, str] = {}
    follows: dict[str, Follow] = {}
    for p in kind.parameters:
        found = entry.get(p.name, p.default)
        if isinstance(p, Choice):
            choices[p.name] = reader.choice(p, found, name, *where, p.name)
        elif isinstance(found, dict):
            values[p.name], follows[p.name] = _following(reader, name, p, found)
        else:
            values[p.name] = reader.value(p, found, name, *where, p.name)
    return Placed(name, kind, wires, values, choices, follows, reader.lines.get(where, 0))


def _port(reader: Reader, name: str, entry: dict, port: str) -> Wire:
    where = ("blocks", name, port)
    if port not in entry:
        reader.fault(f"port '{port}' is not wired; wanted {port} = \"{INPUT}\" or a block", *where, block=name)
        return Wire(INPUT)
    return read_wire(reader, entry[port], port, where, name)


def _following(reader: Reader, name: str, parameter: Parameter, found: dict) -> tuple[float, Follow]:
    """Read { base = …, add = "block", depth = … }."""
    where = ("blocks", name, parameter.name)
    reader.check_keys(found, ("base", "add", "depth"), where, f"key of {parameter.name}", name)
    if parameter.fixed:
        reader.fault(f"{parameter.name} is fixed when the patch is built: nothing can move it", *where, block=name)
    for key in ("add", "depth"):
        if key not in found:
            wanted = '{ base = …, add = "block", depth = … }'
            reader.fault(f"{parameter.name}: '{key}' is missing; wanted {wanted}", *where, block=name)
            return parameter.default, Follow(Wire(INPUT), 0.0)
    base = reader.value(parameter, found.get("base", parameter.default), name, *where)
    wire = read_wire(reader, found["add"], f"{parameter.name}: add", where, name)
    try:
        return base, Follow(wire, depth(found["depth"], parameter))
    except ValueError as error:
        reader.fault(f"{parameter.name}: depth: {error}", *where, block=name)
        return base, Follow(wire, 0.0)

"""Read which controls move which parameters, from where to where, and by which steps."""

from __future__ import annotations

from typing import Any

from rtfx.blocks.kind import Choice, Parameter
from rtfx.patch.errors import shown, suggestion
from rtfx.patch.lines import Path
from rtfx.patch.model import Control, Placed
from rtfx.patch.reader import Reader

_KEYS = ("by", "from", "to", "ladder")


def read_controls(reader: Reader, content: dict[str, Any], blocks: tuple[Placed, ...]) -> tuple[Control, ...]:
    """Return what hands and feet move."""
    entries = reader.table(content, "controls").items()
    found = (_control(reader, target, entry, blocks) for target, entry in entries)
    return tuple(control for control in found if control is not None)


def _control(reader: Reader, target: str, entry: Any, blocks: tuple[Placed, ...]) -> Control | None:
    where: Path = ("controls", target)
    if _without_quotes(reader, target, entry):
        return None
    aim = _aim(reader, target, blocks)
    block = aim[0].name if aim else ""
    if not isinstance(entry, dict):
        reader.fault(f'{shown(target)} = {shown(entry)}; wanted {{ by = "knob 1", from = …, to = … }}', where, block)
        return None
    reader.check_keys(entry, _KEYS, where, "key of a control", block)
    by = _by(reader, entry, where, block)
    return None if aim is None else _travel(reader, *aim, by, entry, where)


def _without_quotes(reader: Reader, target: str, entry: Any) -> bool:
    """True, with a fault, for ``tone.pitch = { … }``, which TOML takes for a table within a table."""
    inner = [key for key in entry if isinstance(entry[key], dict)] if isinstance(entry, dict) else []
    if "." in target or not inner:
        return False
    for key in inner:
        name = f"{target}.{key}"
        reader.fault(f'{shown(name)} needs quotes: write "{shown(name)[1:-1]}" = …', ("controls", target, key))
    return True


def _aim(reader: Reader, target: str, blocks: tuple[Placed, ...]) -> tuple[Placed, Parameter] | None:
    """Return the block and the parameter that *target* names; None, with a fault, if nothing can move it."""
    name, _, wanted = target.partition(".")
    if name in reader.kinds and reader.kinds[name] is None:
        return None  # the fault is the block's kind, and is noted there
    named = {f"{b.name}.{p.name}": (b, p) for b in blocks for p in b.kind.parameters}
    block, parameter = named.get(target, (None, None))
    if block is not None and isinstance(parameter, Parameter) and not parameter.fixed:
        return block, parameter
    why = f"there is no parameter {shown(target)}"
    if parameter is not None:
        why = "is a choice" if isinstance(parameter, Choice) else "is fixed when the patch is built"
        why = f"{wanted} {why}: no control can move it"
    movable = [t for t, (_, p) in named.items() if isinstance(p, Parameter) and not p.fixed]
    reader.fault(f"{why}.{suggestion(target, movable)}", ("controls", target), name if block else "")
    return None


def _by(reader: Reader, entry: dict[str, Any], where: Path, block: str) -> str:
    by = entry.get("by")
    if isinstance(by, str) and by.strip():
        return by
    problem = "'by' is missing" if by is None else f"by = {shown(by)}"
    reader.fault(f'{problem}; wanted the name of a control, as by = "knob 1"', (*where, "by"), block)
    return ""


def _travel(
    reader: Reader, block: Placed, parameter: Parameter, by: str, entry: dict[str, Any], where: Path
) -> Control:
    """Read from where to where a control goes: without a word, over the parameter's whole range."""
    label = f"control of {parameter.name}"
    low, high = (
        reader.value(parameter, entry.get(key, end), (*where, key), block.name, f"{label}: {key}")
        for key, end in (("from", parameter.low), ("to", parameter.high))
    )
    steps = entry.get("ladder", [])
    if not isinstance(steps, list):
        reader.fault(f"{label}: ladder = {shown(steps)}; wanted a list of values", (*where, "ladder"), block.name)
        steps = []
    control = Control(block.name, parameter.name, by, low, high)
    ladder = tuple(_step(reader, control, parameter, step, (*where, "ladder", i)) for i, step in enumerate(steps))
    return Control(block.name, parameter.name, by, low, high, ladder)


def _step(reader: Reader, control: Control, parameter: Parameter, found: object, where: Path) -> float:
    """Read one step of a ladder, which lies between the ends of the control."""
    label = f"control of {parameter.name}: ladder"
    value = reader.value(parameter, found, where, control.block, label)
    low, high = control.low, control.high
    if (value < low and value < high) or (value > low and value > high):  # false where any of them has a fault
        ends = f"{min(low, high):.10g} to {max(low, high):.10g} {parameter.unit}".rstrip()
        reader.fault(f"{label}: {shown(found)} lies outside from … to. Allowed: {ends}.", where, control.block)
    return value

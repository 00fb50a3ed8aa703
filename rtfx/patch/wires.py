"""Read wires: "input", the name of a block, or "block.output" where a block has several outputs."""

from __future__ import annotations

from rtfx.patch.errors import shown, suggestion
from rtfx.patch.lines import Path
from rtfx.patch.model import INPUT, Wire
from rtfx.patch.reader import Reader


def read_wire(reader: Reader, found: object, label: str, where: Path, block: str = "") -> Wire:
    """Return the wire that *found* describes; with a fault, one that does no harm."""
    if not isinstance(found, str):
        wanted = f'wanted the name of a block in quotes, or "{INPUT}"'
        reader.fault(f"{label} = {shown(found)}; {wanted}", where, block)
        return Wire(INPUT)
    source, dot, output = found.partition(".")
    if source != INPUT and source not in reader.kinds:
        reader.fault(f"{label} = {shown(found)}: no such block.{suggestion(found, _all(reader))}", where, block)
        return Wire(INPUT)
    kind = reader.kinds.get(source)
    if source != INPUT and kind is None:
        return Wire(INPUT)  # the fault is the source's kind, and is noted there
    if kind is not None and len(kind.outputs) > 1:
        return _one_of(reader, source, output, f"{label} = {shown(found)}", where, block)
    if dot:
        reader.fault(f"{label} = {shown(found)}: there is only one output. Write {shown(source)}.", where, block)
    return Wire(source)


def _one_of(reader: Reader, source: str, output: str, label: str, where: Path, block: str) -> Wire:
    """Return a wire from one of the outputs of a block that has several."""
    outputs = outputs_of(reader, source)
    if output in outputs:
        return Wire(source, outputs.index(output))
    problem = "no such output" if output else "say which output"
    allowed = [f"{source}.{name}" for name in outputs]
    reader.fault(f"{label}: {problem}.{suggestion(f'{source}.{output}' if output else '', allowed)}", where, block)
    return Wire(source)


def outputs_of(reader: Reader, source: str) -> tuple[str, ...]:
    """Return the names of the outputs of the block called *source*; none if it or its kind is not known."""
    kind = reader.kinds.get(source)
    return kind.outputs if kind is not None else ()


def _all(reader: Reader) -> list[str]:
    """All wires that there are."""
    wires = [INPUT]
    for name in reader.kinds:
        outputs = outputs_of(reader, name)
        wires += [f"{name}.{output}" for output in outputs] if len(outputs) > 1 else [name]
    return wires

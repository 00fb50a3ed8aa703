"""Read a patch file: all its faults are found and reported at once."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

from rtfx.blocks.kind import Choice, File
from rtfx.patch.blockread import read_block
from rtfx.patch.controls import read_controls
from rtfx.patch.errors import PatchError, shown, suggestion
from rtfx.patch.kinds import read_kinds
from rtfx.patch.loops import check_loops
from rtfx.patch.model import Patch, Placed
from rtfx.patch.output import read_output
from rtfx.patch.reader import Reader
from rtfx.patch.source import content_of, text_of, without_mark
from rtfx.pitch.notes import STANDARD_HZ

KEYS = ("name", "about", "tempo", "reference", "blocks", "output", "controls")
TEMPO, SLOWEST, FASTEST = 120.0, 20.0, 400.0  # beats a minute
LOWEST_HZ, HIGHEST_HZ = 380.0, 500.0  # of A4
OVERRIDE = "--set"


def load(path: str | Path) -> Patch:
    """Return the patch in the file at *path*.

    Raises
    ------
    PatchError
        With all the faults of the file, or with why it cannot be read.
    """
    return loads(text_of(path), str(path))


def loads(text: str, path: str = "patch") -> Patch:
    """Return the patch written in *text*; *path* is what faults call the file.

    Raises
    ------
    PatchError
        With all the faults of the text.
    """
    text = without_mark(text)
    content = content_of(text, path)
    reader = Reader(path, text)
    patch = _read(reader, content, text)
    if reader.faults:
        raise PatchError(reader.faults)
    return patch


def _read(reader: Reader, content: dict[str, Any], text: str) -> Patch:
    reader.check_keys(content, KEYS)
    name, about = reader.text(content, "name"), reader.text(content, "about")
    tempo = reader.number(content, "tempo", TEMPO, SLOWEST, FASTEST)
    reader.reference = reader.number(content, "reference", STANDARD_HZ, LOWEST_HZ, HIGHEST_HZ)
    tables = reader.table(content, "blocks")
    read_kinds(reader, tables)
    blocks = tuple(read_block(reader, n, kind, tables[n]) for n, kind in reader.kinds.items() if kind is not None)
    left, right = read_output(reader, content)
    controls = read_controls(reader, content, blocks)
    check_loops(reader, blocks)
    return Patch(name, about, blocks, left, right, controls, tempo, reader.reference, reader.path, text)


def set_value(patch: Patch, target: str, found: str | float) -> Patch:
    """Return *patch* with "block.parameter" (*target*) set to *found*, a value as in a patch file.

    Raises
    ------
    PatchError
        If there is no such parameter or it cannot have that value.
    """
    reader = Reader(OVERRIDE)
    reader.reference = patch.reference
    fresh = _with_value(reader, patch, target, found)
    if fresh is None or reader.faults:
        raise PatchError(reader.faults)
    return replace(patch, blocks=tuple(fresh if block.name == fresh.name else block for block in patch.blocks))


def _with_value(reader: Reader, patch: Patch, target: str, found: str | float) -> Placed | None:
    """Return the block that *target* is about with its new value; None, with a fault, if there is no such thing."""
    named = {f"{b.name}.{p.name}": (b, p) for b in patch.blocks for p in b.kind.parameters}
    if target not in named:
        reader.fault(f"there is no parameter {shown(target)}.{suggestion(target, named)}")
        return None
    block, parameter = named[target]
    name = parameter.name
    if isinstance(parameter, File):
        return replace(block, choices={**block.choices, name: reader.file(parameter, found, block=block.name)})
    if isinstance(parameter, Choice):
        return replace(block, choices={**block.choices, name: reader.choice(parameter, found, block=block.name)})
    return replace(block, values={**block.values, name: reader.value(parameter, found, block=block.name)})

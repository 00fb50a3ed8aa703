"""Read a patch file: all its faults are found and reported at once."""

from __future__ import annotations

import re
import tomllib
from dataclasses import replace
from pathlib import Path
from typing import Any

from rtfx.patch.blockread import read_block
from rtfx.patch.errors import Fault, PatchError
from rtfx.patch.loops import loop_faults
from rtfx.patch.model import Patch, Placed
from rtfx.patch.reader import Reader
from rtfx.patch.rest import read_controls, read_output

_NAME = re.compile(r"[a-z][a-z0-9_-]*")
RESERVED = ("input", "output")
TOP = ("name", "about", "tempo", "reference", "blocks", "output", "controls")


def load(path: str | Path) -> Patch:
    """Return the patch in the file at *path*.

    Raises
    ------
    PatchError
        With all the faults of the file, or with why it cannot be read.
    """
    try:
        text = Path(path).read_text(encoding="utf-8")
    except UnicodeDecodeError as error:
        raise PatchError([Fault(str(path), 0, "", f"not UTF-8 text ({error.reason} at byte {error.start})")]) from None
    except OSError as error:
        raise PatchError([Fault(str(path), 0, "", f"cannot be read: {error.strerror or error}")]) from None
    return loads(text, str(path))


def loads(text: str, path: str = "patch") -> Patch:
    """Return the patch written in *text*; *path* is what faults call the file.

    Raises
    ------
    PatchError
        With all the faults of the text.
    """
    try:
        content = tomllib.loads(text)
    except (tomllib.TOMLDecodeError, RecursionError) as error:
        found = re.search(r"line (\d+)", str(error))
        line = int(found.group(1)) if found else len(text.splitlines())
        raise PatchError([Fault(path, line, "", f"not TOML: {error}")]) from None
    reader = Reader(path, text, content)
    patch = _read(reader, content, text)
    if reader.faults:
        raise PatchError(reader.faults)
    return patch


def _read(reader: Reader, content: dict[str, Any], text: str) -> Patch:
    reader.check_keys(content, TOP, (), "key")
    name = reader.text(content, "name")
    about = reader.text(content, "about")
    tempo = reader.number(content, "tempo", 120.0, 20.0, 400.0)
    reader.reference = reader.number(content, "reference", 440.0, 380.0, 500.0)
    tables = reader.table(content, "blocks")
    for block in tables:
        if not _NAME.fullmatch(block) or block in RESERVED:
            reader.fault(
                f"a block cannot be called '{block}'; wanted lower-case letters, digits, '-' and '_', "
                f"a letter first, and not {' or '.join(RESERVED)}",
                "blocks",
                block,
            )
    blocks = tuple(b for b in (read_block(reader, n, t, tables) for n, t in tables.items()) if b is not None)
    left, right = read_output(reader, content)
    controls = read_controls(reader, content, blocks)
    if not reader.faults:
        reader.faults += loop_faults(reader, blocks)
    return Patch(name, about, blocks, left, right, controls, tempo, reader.reference, reader.path, text)


def set_value(patch: Patch, target: str, found: str) -> Patch:
    """Return *patch* with "block.parameter" (*target*) set to *found*, a value as in a patch file.

    Raises
    ------
    PatchError
        If there is no such parameter or it cannot have that value.
    """
    reader = Reader("--set", "", {})
    reader.reference = patch.reference
    block_name, _, parameter = target.partition(".")
    block = reader.known(block_name, {b.name: b for b in patch.blocks}, "block")
    if block is None:
        raise PatchError(reader.faults)
    fresh = _with_value(reader, block, parameter, found)
    if reader.faults:
        raise PatchError(reader.faults)
    return replace(patch, blocks=tuple(fresh if b is block else b for b in patch.blocks))


def _with_value(reader: Reader, block: Placed, name: str, found: str) -> Placed:
    parameter = reader.known(name, {p.name: p for p in block.kind.parameters}, "parameter", block.name)
    if parameter in block.kind.choices:
        return replace(block, choices={**block.choices, name: reader.choice(parameter, found, block.name)})
    if parameter is None:
        return block
    return replace(block, values={**block.values, name: reader.value(parameter, found, block.name)})

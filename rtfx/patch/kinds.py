"""Read what there is of blocks before any of them is read whole: their names and their kinds."""

from __future__ import annotations

import re
from typing import Any

from rtfx.blocks import table
from rtfx.blocks.kind import Kind
from rtfx.patch.errors import shown, suggestion
from rtfx.patch.reader import Reader

RESERVED = ("input", "output")
_NAME = re.compile(r"[a-z0-9][a-z0-9_-]*")


def read_kinds(reader: Reader, tables: dict[str, Any]) -> None:
    """Fill ``reader.kinds`` from the tables of the blocks, in the order of the file."""
    for name, entry in tables.items():
        _check_name(reader, name)
        reader.kinds[name] = _kind(reader, name, entry)


def _check_name(reader: Reader, name: str) -> None:
    if name in RESERVED:
        wanted = f"any name but {' and '.join(map(shown, RESERVED))}"
        reader.fault(f"a block cannot be called {shown(name)}; wanted {wanted}", ("blocks", name))
    elif not _NAME.fullmatch(name):
        wanted = "lower-case letters, digits, '-' and '_', a letter or a digit first"
        reader.fault(f"a block cannot be called {shown(name)}; wanted {wanted}", ("blocks", name))


def _kind(reader: Reader, name: str, entry: Any) -> Kind | None:
    """Return the kind that a block's table names; None, with a fault, if there is none."""
    where = ("blocks", name, "kind")
    if not isinstance(entry, dict):
        reader.fault(f"{shown(name)[1:-1]} = {shown(entry)}; wanted a table, [blocks.{name}]", where, name)
        return None
    found = entry.get("kind")
    if not isinstance(found, str):
        problem = "'kind' is missing" if found is None else f"kind = {shown(found)}"
        reader.fault(f"{problem}; wanted one of: {', '.join(table.names())}", where, name)
        return None
    if found not in table.names():
        reader.fault(f"there is no kind {shown(found)}.{suggestion(found, table.names())}", where, name)
        return None
    return _loaded(reader, name, found)


def _loaded(reader: Reader, name: str, kind: str) -> Kind | None:
    """Return the kind from the package that offers it; None, with a fault, if the package is at fault."""
    try:
        return table.find(kind)
    except Exception as error:  # somebody else's module is imported here, and can raise anything
        reason = f"{type(error).__name__}: {error}"
        message = f"kind {shown(kind)} is offered by a package that does not load ({shown(reason)[1:-1]}). Repair it"
        reader.fault(f"{message} or use another kind.", ("blocks", name, "kind"), name)
        return None

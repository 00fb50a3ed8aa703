"""The one table of kinds: every module named in the entry-point group ``rtfx.blocks``, loaded when first asked for."""

from __future__ import annotations

from functools import cache
from importlib import metadata

from rtfx.blocks.kind import Kind, _declared

GROUP = "rtfx.blocks"


@cache
def _entry_points() -> dict[str, metadata.EntryPoint]:
    return {point.name: point for point in metadata.entry_points(group=GROUP)}


def names() -> tuple[str, ...]:
    """Return the names of all kinds that can be used, sorted; nothing is loaded for it."""
    return tuple(sorted(_entry_points()))


def find(name: str) -> Kind:
    """Return the kind called *name*, loading its module if need be.

    Raises
    ------
    KeyError
        If no installed package offers it, or the package that does declares something else.
    """
    if name not in _declared:
        _entry_points()[name].load()
    return _declared[name]

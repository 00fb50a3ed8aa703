"""Third pass: the order in which blocks run within a frame.

What breaks a loop gives its output first and takes its input last, so that everything else can stand in between.
A region runs as one unit at the base rate, and its blocks have an order of their own within it.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from rtfx.compiler.graph import Graph, stable_order
from rtfx.compiler.widen import Widths
from rtfx.patch.model import Patch


@dataclass(frozen=True)
class Schedule:
    """`steps` are block names and region numbers; `within` lists the blocks of each region, in order."""

    steps: tuple[str | int, ...]
    within: tuple[tuple[str, ...], ...]

    def blocks(self) -> tuple[str, ...]:
        """Return all blocks in the order in which they run."""
        return tuple(n for s in self.steps for n in ([s] if isinstance(s, str) else self.within[s]))


def order(patch: Patch, widths: Widths) -> Schedule:
    """Return the schedule of *patch*; ties keep the order of the file."""
    graph = Graph(patch)
    waits = {name: _waits_for(patch, graph, name) for name in graph.names}
    within = tuple(
        tuple(stable_order({n: waits[n] & region.blocks for n in graph.names if n in region.blocks}))
        for region in widths.regions
    )
    unit: dict[str, Any] = {n: n if (i := widths.region_of(n)) is None else i for n in graph.names}
    units: dict[str | int, set] = {unit[n]: set() for n in graph.names}
    for name in graph.names:
        units[unit[name]] |= {unit[m] for m in waits[name]} - {unit[name]}
    return Schedule(tuple(stable_order(units)), within)


def _waits_for(patch: Patch, graph: Graph, name: str) -> set[str]:
    """Blocks that must have run before *name* gives its output in the same frame."""
    if patch.block(name).kind.breaks_loops:
        return set(graph.follows[name]) - {name}
    return set(graph.feeds[name])

"""The wiring of a patch as a graph: who feeds whom, what lies between, and which blocks form loops."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from functools import cached_property
from graphlib import TopologicalSorter

from rtfx.patch.model import INPUT, Patch


def heard(patch: Patch) -> Patch:
    """Return *patch* without the blocks that do not lead to its output."""
    graph, ends = Graph(patch), {patch.left.block, patch.right.block} - {INPUT}
    kept = ends.union(*(graph.before[n] for n in ends))
    return replace(patch, blocks=tuple(b for b in patch.blocks if b.name in kept))


class Graph:
    """Port wires and follow wires of *patch*, by block name; "input" is no block of it."""

    def __init__(self, patch: Patch) -> None:
        self.patch = patch
        self.names = tuple(b.name for b in patch.blocks)
        self.ports = {b.name: {w.block for w in b.wires.values()} - {INPUT} for b in patch.blocks}
        self.follows = {b.name: {w.block for f in b.follows.values() for w in f.wires} - {INPUT} for b in patch.blocks}
        self.feeds = {n: self.ports[n] | self.follows[n] for n in self.names}

    @cached_property
    def fed_by(self) -> dict[str, set[str]]:
        """For each block, the blocks it feeds."""
        return {n: {m for m in self.names if n in self.feeds[m]} for n in self.names}

    @cached_property
    def before(self) -> dict[str, set[str]]:
        """For each block, every block from which a signal can come to it."""
        return {n: self._closure(n, self.feeds) for n in self.names}

    @staticmethod
    def _closure(start: str, step: dict[str, set[str]]) -> set[str]:
        seen: set[str] = set()
        todo = list(step[start])
        while todo:
            name = todo.pop()
            if name not in seen:
                seen.add(name)
                todo += step[name]
        return seen

    def between(self, group: Iterable[str]) -> set[str]:
        """Return the blocks outside *group* that lie on a way from *group* back into it."""
        group = set(group)
        upstream = set().union(*(self.before[n] for n in group))
        return {n for n in upstream - group if self.before[n] & group}

    def loop_of(self, name: str) -> frozenset[str]:
        """Return the blocks of the loops through *name*; only itself where there is none."""
        return frozenset(n for n in self.before[name] if name in self.before[n]) | {name}

    def is_loop(self, group: frozenset[str]) -> bool:
        """Tell whether *group* (of `loop_of`) really is a loop."""
        return len(group) > 1 or any(n in self.feeds[n] for n in group)

    def groups(self) -> tuple[frozenset[str], ...]:
        """Return single blocks and loops, each after what feeds it; ties in the order of the file."""
        of = {n: self.loop_of(n) for n in self.names}
        waits = {of[n]: set[frozenset[str]]() for n in self.names}
        for name in self.names:
            waits[of[name]] |= {of[m] for m in self.feeds[name]} - {of[name]}
        return tuple(stable_order(waits))


def stable_order(waits):
    """Sort the keys of *waits* ({item: items it waits for}) so that each comes after its own; ties keep their order."""
    place = {item: i for i, item in enumerate(waits)}
    sorter = TopologicalSorter(waits)
    sorter.prepare()
    ready: list = []
    result = []
    while sorter.is_active():
        ready = sorted([*ready, *sorter.get_ready()], key=place.__getitem__)
        first, *ready = ready
        result.append(first)
        sorter.done(first)
    return result

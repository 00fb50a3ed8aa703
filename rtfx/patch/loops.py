"""Find loops that pass through nothing that breaks them."""

from __future__ import annotations

from rtfx.patch.errors import Fault
from rtfx.patch.model import Placed
from rtfx.patch.reader import Reader


def loop_faults(reader: Reader, blocks: tuple[Placed, ...]) -> list[Fault]:
    """Return a fault for each loop without a `delay` (or another kind that breaks loops), its blocks in order."""
    feeds = {b.name: _immediate(b) for b in blocks}
    faults: list[Fault] = []
    done: set[str] = set()
    for block in blocks:
        loop = _way_back(block.name, feeds)
        if loop and not done & set(loop):
            done |= set(loop)
            way = " → ".join([*loop, loop[0]])
            message = f"the loop {way} must pass through a delay, of one sample at least"
            faults.append(Fault(reader.path, block.line, block.name, message))
    return faults


def _immediate(block: Placed) -> list[str]:
    """Blocks whose present sample this block needs for its own."""
    ports = [] if block.kind.breaks_loops else [w.block for w in block.wires.values()]
    return [*ports, *(f.wire.block for f in block.follows.values())]


def _way_back(start: str, feeds: dict[str, list[str]]) -> list[str]:
    """Return the blocks of a loop through *start* in the direction of the signal; [] if there is none."""
    todo, seen = [[start]], set()
    while todo:
        way = todo.pop()
        for source in feeds.get(way[-1], []):
            if source == start:
                return [start, *reversed(way[1:])]
            if source not in seen:
                seen.add(source)
                todo.append([*way, source])
    return []

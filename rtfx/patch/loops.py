"""Find loops that pass through nothing that breaks them."""

from __future__ import annotations

from rtfx.patch.model import Placed
from rtfx.patch.reader import Reader


def check_loops(reader: Reader, blocks: tuple[Placed, ...]) -> None:
    """Note a fault for each loop without a `delay` (or another kind that breaks loops), its blocks in order.

    Of the loops through a block the shortest is reported: their number can be beyond counting.
    """
    feeds = {block.name: _immediate(block) for block in blocks}
    reported: set[frozenset[str]] = set()
    for block in blocks:
        loop = _way_back(block.name, feeds)
        if loop and frozenset(loop) not in reported:
            reported.add(frozenset(loop))
            way = " → ".join([*loop, loop[0]])
            message = f"the loop {way} must pass through a delay, of one sample at least. Put a delay block into it."
            reader.fault(message, ("blocks", block.name), block.name)


def _immediate(block: Placed) -> list[str]:
    """Blocks whose present sample this block needs for its own."""
    ports = [] if block.kind.breaks_loops else [wire.block for wire in block.wires.values()]
    return [*ports, *(wire.block for follow in block.follows.values() for wire in follow.wires)]


def _way_back(start: str, feeds: dict[str, list[str]]) -> list[str]:
    """Return the blocks of a shortest loop through *start*, in the direction of the signal; [] if there is none."""
    feeding: dict[str, str] = {}  # each block met, and the block it feeds
    around = [start]
    for name in around:  # grows on the way: nearest first
        for source in feeds.get(name, []):
            if source == start:
                return _loop(start, name, feeding)
            if source not in feeding:
                feeding[source] = name
                around.append(source)
    return []


def _loop(start: str, last: str, feeding: dict[str, str]) -> list[str]:
    """Return *start*, *last* (which *start* feeds), and on as they feed each other until *start* comes again."""
    loop = [start]
    while last != start:
        loop.append(last)
        last = feeding[last]
    return loop

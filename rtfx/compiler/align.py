"""Second pass: give parallel ways the same delay, to the sample.

A signal's arrival is its delay against the guitar, in samples at the rate where it stands.  Where signals meet,
the early ones wait.  What leaves a region waits until its delay is a whole number of samples at the base rate.
A source has no arrival of its own, unless several blocks use it: then it counts from 0, so that they agree.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from rtfx.blocks.kind import Code
from rtfx.compiler.graph import Graph, stable_order
from rtfx.compiler.widen import Widths
from rtfx.dsp import halfband
from rtfx.patch.model import INPUT, Patch, Wire

Arrival = int | None


@dataclass
class Alignment:
    """What this pass found.

    `late` holds, for each (block, port), how many samples at the block's rate that wire waits; `pad`, for each
    block that leaves its region, how many at the region's rate; `out_late` how many the left and right output wait;
    `delay` is the delay of the whole patch, in samples at the base rate.
    """

    late: dict[tuple[str, str], int] = field(default_factory=dict)
    pad: dict[str, int] = field(default_factory=dict)
    out_late: tuple[int, int] = (0, 0)
    delay: int = 0


def align(patch: Patch, widths: Widths, codes: dict[str, Code], rate: float, quality: str) -> Alignment:
    """Return the waits that make all ways through *patch* equally long."""
    return _Aligning(patch, widths, codes, rate, quality).run()


class _Aligning:
    def __init__(self, patch: Patch, widths: Widths, codes: dict[str, Code], rate: float, quality: str) -> None:
        self.patch, self.widths, self.codes = patch, widths, codes
        self.graph = Graph(patch)
        self.one_way = [halfband.delay_one_way(halfband.stages(rate, r.factor, quality)) for r in widths.regions]
        self.arrival: dict[str, Arrival] = {}
        self.result = Alignment()

    def run(self) -> Alignment:
        for group in self.graph.groups():
            if self.graph.is_loop(group):
                self._align_loop(group)
            else:
                self._align_block(next(iter(group)), group)
        ends = [self._at_base(self.patch.left), self._at_base(self.patch.right)]
        self.result.delay = max((e for e in ends if e is not None), default=0)
        left, right = (0 if e is None else self.result.delay - e for e in ends)
        self.result.out_late = (left, right)
        return self.result

    def _at_base(self, wire: Wire) -> Arrival:
        """Arrival of *wire* at the base rate; what leaves a region is padded to a whole number of samples."""
        if wire.block == INPUT:
            return 0
        arrival, region = self.arrival[wire.block], self.widths.region_of(wire.block)
        if region is None or arrival is None:
            self.result.pad.setdefault(wire.block, 0)
            return arrival
        factor = self.widths.regions[region].factor
        whole = -(-(arrival + self.one_way[region]) // factor)
        self.result.pad[wire.block] = whole * factor - arrival - self.one_way[region]
        return whole

    def _at(self, wire: Wire, name: str) -> Arrival:
        """Arrival of *wire* where block *name* stands, at that block's rate."""
        region = self.widths.region_of(name)
        if wire.block != INPUT and region == self.widths.region_of(wire.block):
            return self.arrival[wire.block]
        base = self._at_base(wire)
        if region is None or base is None:
            return base
        return base * self.widths.regions[region].factor + self.one_way[region]

    def _align_block(self, name: str, loop: frozenset[str], floor: Arrival = None) -> None:
        """Make the inputs of *name* meet; inside a *loop*, what a delay gives back is never made to wait."""
        block = self.patch.block(name)
        arrivals: dict[str, Arrival] = {}
        for port, wire in block.wires.items():
            back = wire.block in loop and (wire.block not in self.arrival or self._breaks(wire.block))
            arrivals[port] = None if back else self._at(wire, name)
        for wire in (w for follow in block.follows.values() for w in follow.wires):
            if wire.block in self.arrival:
                self._at_base(wire)
        known = [a for a in [*arrivals.values(), floor] if a is not None]
        meet = max(known, default=None)
        for port, arrival in arrivals.items():
            self.result.late[name, port] = 0 if arrival is None or meet is None else meet - arrival
        if meet is None and not block.wires and len(self.graph.fed_by[name]) > 1:
            meet = 0
        self.arrival[name] = None if meet is None else meet + self.codes[name].delay

    def _breaks(self, name: str) -> bool:
        return self.patch.block(name).kind.breaks_loops

    def _align_loop(self, group: frozenset[str]) -> None:
        """Let everything that enters the loop enter it together, then go round once."""
        entering = [
            self._at(wire, name)
            for name in group
            for wire in self.patch.block(name).wires.values()
            if wire.block not in group
        ]
        floor = max((a for a in entering if a is not None), default=None)
        order = self._once_round(group)
        for name in order:
            if self._breaks(name):
                self.arrival[name] = floor
        for name in order:
            self._align_block(name, group, floor)
            if self._breaks(name):
                self.arrival[name] = floor

    def _once_round(self, group: frozenset[str]) -> list[str]:
        waits = {
            n: set() if self._breaks(n) else (self.graph.feeds[n] & group) - {n} for n in self.graph.names if n in group
        }
        return stable_order(waits)

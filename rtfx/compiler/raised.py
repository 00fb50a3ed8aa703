"""The lines of a region: raise the rate of what enters, run the blocks, lower the rate of what leaves."""

from __future__ import annotations

from rtfx.compiler.lines import BODY, INNER, Lines
from rtfx.dsp import halfband
from rtfx.dsp import hold as holds
from rtfx.patch.model import Placed, Wire


def write_region(lines: Lines, index: int) -> None:
    """Write region number *index*."""
    _Raised(lines, index).write()


class _Raised:
    def __init__(self, lines: Lines, index: int) -> None:
        self.to, self.index, of = lines, index, lines.of
        self.region = of.widths.regions[index]
        self.factor = self.region.factor
        self.blocks = [of.patch.block(n) for n in of.schedule.within[index]]
        self.chain = halfband.stages(of.rate, self.factor, of.quality)
        self.pad = {wire: of.alignment.pad.get(wire.block, 0) for wire in self._leaving()}

    def write(self) -> None:
        to = self.to
        to.add(BODY, f"# {self.factor} times {to.of.rate:g} Hz, for {self.region.because}")
        entering = {wire: self._raise(wire) for wire in self._entering()}
        leaving = {wire: to.storage.memory(self.factor + pad) for wire, pad in self.pad.items()}
        for block in self.blocks:
            if block.follows and not self._follows_within(block):
                to.add(BODY, to.prepared(block))
        if self._at_once():
            self._sweep(self.blocks[0], entering, leaving)
        else:
            self._sample_by_sample(entering, leaving)
        for wire, at in leaving.items():
            self._lower(wire, at)

    # What crosses the border

    def _follows_within(self, block: Placed) -> bool:
        return any(w.block in self.region.blocks for f in block.follows.values() for w in f.wires)

    def _entering(self) -> list[Wire]:
        wires = [b.wires[port] for b in self.blocks for port in b.kind.ports]
        return list(dict.fromkeys(w for w in wires if w.block not in self.region.blocks))

    def _leaving(self) -> list[Wire]:
        patch, inside = self.to.of.patch, self.region.blocks
        used = [patch.left, patch.right]
        for block in patch.blocks:
            if block.name not in inside:
                used += [*block.wires.values(), *(w for f in block.follows.values() for w in f.wires)]
        return list(dict.fromkeys(w for w in used if w.block in inside))

    def _raise(self, wire: Wire) -> int:
        """Raise the rate of *wire*; returns where its samples lie in memory."""
        low = self.to.storage.memory(1)
        self.to.add(BODY, f"memory[{low}] = {self.to.base(wire)}")
        for stage in self.chain:
            high = self.to.storage.memory(2 * stage.many)
            self._filter("up", stage, low, high)
            low = high
        return low

    def _lower(self, wire: Wire, high: int) -> None:
        """Lower the rate of *wire* from the samples at *high*; the pad stays there for the next frame."""
        first, signal = high, self.to.signal[wire]
        for stage in reversed(self.chain):
            low = self.to.storage.memory(stage.many)
            self._filter("down", stage, high, low)
            high = low
        self.to.at_base[wire] = self.to.names.fresh(f"{signal}_down")
        self.to.add(BODY, f"{self.to.at_base[wire]} = memory[{high}]")
        if self.pad[wire]:
            keep = self.to.names.function(holds.keep)
            self.to.add(BODY, f"{keep}(memory, {first}, {self.factor}, {self.pad[wire]})")

    def _filter(self, way: str, stage: halfband.Stage, source: int, target: int) -> None:
        at = self.to.storage.memory(stage.memory(way))
        function, numbers = stage.call(way)
        arguments = ", ".join(map(str, ["memory", at, *numbers, source, target]))
        self.to.add(BODY, f"{self.to.names.function(function)}({arguments})")

    # What runs inside

    def _at_once(self) -> bool:
        """Tell whether the region is one block that can take all samples of a frame at once."""
        block = self.blocks[0]
        single = len(self.blocks) == len(block.kind.ports) == len(block.kind.outputs) == 1
        return single and self.to.of.codes[block.name].sweep is not None and not self._follows_within(block)

    def _sweep(self, block: Placed, entering: dict[Wire, int], leaving: dict[Wire, int]) -> None:
        (source,) = entering.values()
        ((wire, target),) = leaving.items()
        self.to.outputs(block)
        function = self.to.names.function(self.to.of.codes[block.name].sweep)
        numbers = f"memory, {source}, {target + self.pad[wire]}, {self.factor}"
        states, given = ", ".join(self.to.states[block.name]), ", ".join(self.to.given(block))
        self.to.add(BODY, f"{states} = {function}({numbers}, {given})  # {block.name}")

    def _sample_by_sample(self, entering: dict[Wire, int], leaving: dict[Wire, int]) -> None:
        to = self.to
        to.add(BODY, f"for j in range({self.factor}):")
        outside = dict(to.signal)
        for wire, at in entering.items():
            name = to.names.fresh(f"{to.base(wire)}_up")
            to.add(INNER, f"{name} = memory[{at} + j]")
            to.signal[wire] = name
        self._samples()
        for wire, at in leaving.items():
            to.add(INNER, f"memory[{at + self.pad[wire]} + j] = {to.signal[wire]}")
        to.signal = outside | {w: t for w, t in to.signal.items() if w.block in self.region.blocks}

    def _samples(self) -> None:
        to, read = self.to, self.to.signal.__getitem__
        for block in self.blocks:
            if block.follows and self._follows_within(block):
                to.add(INNER, to.prepared(block))
            if block.kind.breaks_loops:
                to.give_out(block, INNER)
            else:
                to.call(block, to.inputs(block, read, INNER, self.factor), INNER)
        for block in to.loop_breakers(self.index):
            to.call(block, to.inputs(block, read, INNER, self.factor), INNER)

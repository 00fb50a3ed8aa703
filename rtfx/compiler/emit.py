"""Fourth pass: write the patch as one Python function, one line a block, for a player to read and numba to compile.

    kernel(inp, out, frames, p, state, memory)

reads *frames* mono samples at inp and writes as many left-right pairs at out.  Each frame runs the schedule;
a region runs its blocks several times a frame, between the filters that raise and lower the rate.
Coefficients are worked out at the start and, while a parameter glides, in every frame.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from rtfx.blocks.kind import Code
from rtfx.compiler.align import Alignment
from rtfx.compiler.layout import Slot, Storage
from rtfx.compiler.names import Names
from rtfx.compiler.order import Schedule
from rtfx.compiler.widen import Region, Widths
from rtfx.dsp import glide as glides
from rtfx.dsp import halfband
from rtfx.dsp import hold as holds
from rtfx.patch.model import INPUT, Patch, Placed, Wire

BODY, INNER = "        ", "            "


@dataclass(frozen=True)
class Emitted:
    """The source of the kernel, as a text with "{kernel}" where its name goes, and the first state and memory."""

    source: str
    state: np.ndarray
    memory: np.ndarray


@dataclass(frozen=True)
class Passes:
    """What the earlier passes found about one patch."""

    patch: Patch
    widths: Widths
    codes: dict[str, Code]
    alignment: Alignment
    schedule: Schedule
    slots: tuple[Slot, ...]
    rate: float
    quality: str


def emit(passes: Passes) -> Emitted:
    """Return the source of the kernel for a patch that has gone through the earlier passes."""
    return _Writer(passes).write()


class _Writer:
    def __init__(self, passes: Passes) -> None:
        self.of = passes
        self.storage = Storage()
        self.names = Names()
        self.start: list[str] = []
        self.moving: list[str] = []
        self.lines: list[str] = []
        self.signal: dict[Wire, str] = {Wire(INPUT): "guitar"}
        self.at_base: dict[Wire, str] = {Wire(INPUT): "guitar"}
        self.arguments: dict[str, list[str]] = {}
        self.slot = {s.target: s for s in passes.slots}
        self.variable = {b.name: self.names.fresh(b.name) for b in passes.patch.blocks}
        self.coefficients: dict[str, list[str]] = {}
        self.storage.state("clock", 0)

    # The whole

    def write(self) -> Emitted:
        for block in self.of.patch.blocks:
            self._open(block)
        for step in self.of.schedule.steps:
            if isinstance(step, str):
                self._base_block(self.of.patch.block(step))
            else:
                self._region(step)
        left = self._wait(self._base(self.of.patch.left), self.of.alignment.out_late[0], "left", BODY)
        right = self._wait(self._base(self.of.patch.right), self.of.alignment.out_late[1], "right", BODY)
        self.lines += [f"{BODY}out[2 * n] = {left}", f"{BODY}out[2 * n + 1] = {right}"]
        self._take_in(self._loop_breakers(None), BODY)
        state, memory = self.storage.images()
        return Emitted(self._text(), state, memory)

    def _text(self) -> str:
        glide, longest, whole = (self.names.function(f) for f in (glides.glide, glides.longest_glide, holds.whole))
        names, firsts = self.storage.names, self.storage.first
        count = len(self.of.slots)
        linear = sum(not s.log for s in self.of.slots)
        loads = [
            f"    {name} = {whole if isinstance(first, int) else 'float'}(state[{i}])"
            for i, (name, first) in enumerate(zip(names, firsts, strict=True))
        ]
        stores = [f"    state[{i}] = float({name})" for i, name in enumerate(names)]
        gliding = [f"{BODY}if busy > 0:", f"{INNER}busy -= 1", f"{INNER}{glide}(p, {linear}, {count})"]
        return "\n".join(
            [
                *self.names.imports(),
                "",
                "",
                "def {kernel}(inp, out, frames, p, state, memory):",
                *loads,
                f"    busy = {longest}(p, {count})",
                *(f"    {line}" for line in self.start),
                "    for n in range(frames):",
                *gliding,
                *(f"{INNER}{line}" for line in self.moving),
                f"{BODY}guitar = 1.0 * inp[n]",
                *self.lines,
                f"{BODY}clock += 1",
                *stores,
                "",
            ]
        )

    # One block

    def _open(self, block: Placed) -> None:
        """Give *block* its state, its memory and its coefficients."""
        code, name = self.of.codes[block.name], self.variable[block.name]
        states = [self.names.fresh(f"{name}_{s}") for s in code.state]
        for state, first in zip(states, code.state.values(), strict=True):
            self.storage.state(state, first)
        memory = [] if code.memory is None else ["memory", str(self.storage.memory(code.memory))]
        coefficients = [self.names.fresh(f"{name}_c{i}") for i in range(code.coefficients)] if code.prepare else []
        self.coefficients[block.name] = coefficients
        self.arguments[block.name] = [*memory, *coefficients, *states]
        if code.prepare and not block.follows:
            line = self._prepare(block)
            self.start.append(line)
            self.moving.append(line)

    def _prepare(self, block: Placed) -> str:
        code = self.of.codes[block.name]
        values = [self._value(block, p) for p in block.kind.numbers]
        rate = self.of.rate * self.of.widths.factor(block.name)
        targets = ", ".join(self.coefficients[block.name])
        return f"{targets} = {self.names.function(code.prepare)}({', '.join([*values, repr(rate)])})"

    def _value(self, block: Placed, parameter) -> str:
        """The text for a parameter's present value, with what follows it added."""
        slot = self.slot.get(f"{block.name}.{parameter.name}")
        if slot is None:
            return repr(block.values[parameter.name])
        value = f"p[{glides.WORDS * slot.index}]"
        follow = block.follows.get(parameter.name)
        if follow is None:
            return value
        signal = self._following(follow.wire, block.name)
        amount = f"{follow.depth!r} * {signal}"
        octaves, bounded = self.names.function(glides.octaves), self.names.function(glides.bounded)
        moved = f"{octaves}({value}, {amount})" if slot.log else f"{value} + {amount}"
        return f"{bounded}({moved}, {parameter.low!r}, {parameter.high!r})"

    def _following(self, wire: Wire, name: str) -> str:
        same = wire.block != INPUT and self.of.widths.region_of(wire.block) == self.of.widths.region_of(name)
        return self.signal[wire] if same else self._base(wire)

    def _outputs(self, block: Placed) -> list[str]:
        name = self.variable[block.name]
        outputs = (
            [name] if len(block.kind.outputs) == 1 else [self.names.fresh(f"{name}_{o}") for o in block.kind.outputs]
        )
        self.signal |= {Wire(block.name, i): text for i, text in enumerate(outputs)}
        return outputs

    def _call(self, block: Placed, inputs: list[str], indent: str) -> None:
        """The line of a block that is no loop breaker."""
        code = self.of.codes[block.name]
        states = self.arguments[block.name][len(self.arguments[block.name]) - len(code.state) :]
        targets = ", ".join([*self._outputs(block), *states])
        call = f"{self.names.function(code.tick)}({', '.join([*inputs, *self.arguments[block.name]])})"
        self.lines.append(f"{indent}{targets} = {call}  # {block.name}")

    def _wait(self, signal: str, late: int, label: str, indent: str, factor: int = 1) -> str:
        """Make *signal* wait *late* samples; returns the text of what then comes."""
        if not late:
            return signal
        hold = self.names.function(holds.hold)
        ring = holds.ring_for(late)
        at = self.storage.memory(ring)
        place = "clock" if factor == 1 else f"clock * {factor} + j"
        name = self.names.fresh(f"{label}_late")
        self.lines.append(f"{indent}{name} = {hold}(memory, {at}, {ring}, {late}, {place}, {signal})")
        return name

    def _base_block(self, block: Placed) -> None:
        if block.follows:
            self.lines.append(f"{BODY}{self._prepare(block)}")
        if block.kind.breaks_loops:
            self._give_out(block, BODY)
            return
        inputs = [self._arriving(block, port, self._base(wire), BODY) for port, wire in self._wires(block)]
        self._call(block, inputs, BODY)

    def _wires(self, block: Placed):
        return [(port, block.wires[port]) for port in block.kind.ports]

    def _arriving(self, block: Placed, port: str, signal: str, indent: str, factor: int = 1) -> str:
        label = f"{self.variable[block.name]}_{port}"
        return self._wait(signal, self.of.alignment.late[block.name, port], label, indent, factor)

    # Loop breakers: what comes out first, what goes in last

    def _loop_breakers(self, region: int | None) -> list[Placed]:
        blocks = [self.of.patch.block(n) for n in self.of.schedule.blocks()]
        return [b for b in blocks if b.kind.breaks_loops and self.of.widths.region_of(b.name) == region]

    def _give_out(self, block: Placed, indent: str) -> None:
        code = self.of.codes[block.name]
        outputs = ", ".join(self._outputs(block))
        call = f"{self.names.function(code.emerge)}({', '.join(self.arguments[block.name])})"
        self.lines.append(f"{indent}{outputs} = {call}  # {block.name}, what comes out")

    def _take_in(self, blocks: list[Placed], indent: str, factor: int = 1) -> None:
        for block in blocks:
            code = self.of.codes[block.name]
            read = self._base if factor == 1 else self.signal.__getitem__
            inputs = [self._arriving(block, port, read(wire), indent, factor) for port, wire in self._wires(block)]
            states = self.arguments[block.name][len(self.arguments[block.name]) - len(code.state) :]
            call = f"{self.names.function(code.tick)}({', '.join([*inputs, *self.arguments[block.name]])})"
            self.lines.append(f"{indent}{', '.join(states)} = {call}  # {block.name}, what goes in")

    # Regions

    def _base(self, wire: Wire) -> str:
        """The text of *wire* at the base rate."""
        inside = wire.block != INPUT and self.of.widths.region_of(wire.block) is not None
        return self.at_base[wire] if inside else self.signal[wire]

    def _region(self, index: int) -> None:
        region, names = self.of.widths.regions[index], self.of.schedule.within[index]
        chain = halfband.stages(self.of.rate, region.factor, self.of.quality)
        blocks = [self.of.patch.block(n) for n in names]
        self.lines.append(f"{BODY}# {region.factor} times {self.of.rate:g} Hz, for {region.because}")
        entering = {w: self._raise(w, chain, BODY) for w in self._entering(blocks, region)}
        pads = {w: self.of.alignment.pad.get(w.block, 0) for w in self._leaving(region)}
        leaving = {w: self.storage.memory(region.factor + pad) for w, pad in pads.items()}
        for block in blocks:
            if block.follows and not self._follows_within(block, region):
                self.lines.append(f"{BODY}{self._prepare(block)}")
        if self._sweeps(blocks, region):
            self._sweep(blocks[0], region, entering, leaving, pads)
        else:
            self._sample_by_sample(index, blocks, region, entering, leaving, pads)
        for wire, at in leaving.items():
            self.at_base[wire] = self._lower(self.signal[wire], at, chain)
            if pads[wire]:
                keep = self.names.function(holds.keep)
                self.lines.append(f"{BODY}{keep}(memory, {at}, {region.factor}, {pads[wire]})")

    def _sweeps(self, blocks: list[Placed], region: Region) -> bool:
        """Tell whether a region is a single block that can take all samples of a frame at once."""
        return (
            len(blocks) == 1
            and bool(self.of.codes[blocks[0].name].sweep)
            and not self._follows_within(blocks[0], region)
        )

    def _sweep(self, block: Placed, region: Region, entering, leaving, pads) -> None:
        code = self.of.codes[block.name]
        ((wire, target),) = leaving.items()
        (source,) = entering.values()
        self._outputs(block)
        states = ", ".join(self.arguments[block.name][-len(code.state) :])
        given = ", ".join(self.arguments[block.name])
        call = f"{self.names.function(code.sweep)}(memory, {source}, {target + pads[wire]}, {region.factor}, {given})"
        self.lines.append(f"{BODY}{states} = {call}  # {block.name}")

    def _sample_by_sample(self, index: int, blocks: list[Placed], region: Region, entering, leaving, pads) -> None:
        self.lines.append(f"{BODY}for j in range({region.factor}):")
        outside = dict(self.signal)
        for wire, at in entering.items():
            name = self.names.fresh(f"{self._base(wire)}_up")
            self.lines.append(f"{INNER}{name} = memory[{at} + j]")
            self.signal[wire] = name
        self._inner(index, blocks, region)
        for wire, at in leaving.items():
            self.lines.append(f"{INNER}memory[{at + pads[wire]} + j] = {self.signal[wire]}")
        self.signal = outside | {w: t for w, t in self.signal.items() if w.block in region.blocks}

    def _inner(self, index: int, blocks: list[Placed], region: Region) -> None:
        for block in blocks:
            if block.follows and self._follows_within(block, region):
                self.lines.append(f"{INNER}{self._prepare(block)}")
            if block.kind.breaks_loops:
                self._give_out(block, INNER)
                continue
            inputs = [
                self._arriving(block, port, self.signal[wire], INNER, region.factor)
                for port, wire in self._wires(block)
            ]
            self._call(block, inputs, INNER)
        self._take_in(self._loop_breakers(index), INNER, region.factor)

    def _follows_within(self, block: Placed, region: Region) -> bool:
        return any(f.wire.block in region.blocks for f in block.follows.values())

    def _entering(self, blocks: list[Placed], region: Region) -> list[Wire]:
        wires = [w for b in blocks for _, w in self._wires(b) if w.block not in region.blocks]
        return list(dict.fromkeys(wires))

    def _leaving(self, region: Region) -> list[Wire]:
        used = [self.of.patch.left, self.of.patch.right]
        for block in self.of.patch.blocks:
            used += [f.wire for f in block.follows.values() if not self._follows_within(block, region)]
            if block.name not in region.blocks:
                used += block.wires.values()
        return list(dict.fromkeys(w for w in used if w.block in region.blocks))

    def _raise(self, wire: Wire, chain, indent: str) -> int:
        """Lines that raise the rate of *wire*; returns where its samples lie in memory."""
        low = self.storage.memory(1)
        self.lines.append(f"{indent}memory[{low}] = {self._base(wire)}")
        for stage in chain:
            high = self.storage.memory(2 * stage.many)
            self._filter("up", stage, low, high)
            low = high
        return low

    def _lower(self, signal: str, high: int, chain) -> str:
        """Lines that lower the rate again from memory at *high*; returns the text of the result."""
        for stage in reversed(chain):
            low = self.storage.memory(stage.many)
            self._filter("down", stage, high, low)
            high = low
        name = self.names.fresh(f"{signal}_down")
        self.lines.append(f"{BODY}{name} = memory[{high}]")
        return name

    def _filter(self, way: str, stage: halfband.Stage, source: int, target: int) -> None:
        at = self.storage.memory(stage.memory(way))
        function, numbers = stage.call(way)
        arguments = ", ".join(map(str, ["memory", at, *numbers, source, target]))
        self.lines.append(f"{BODY}{self.names.function(function)}({arguments})")

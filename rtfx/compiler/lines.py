"""The lines of single blocks: their state, their coefficients, their call, and the waits before it."""

from __future__ import annotations

from dataclasses import dataclass

from rtfx.blocks.kind import Code, Parameter
from rtfx.compiler.align import Alignment
from rtfx.compiler.layout import Slot, Storage
from rtfx.compiler.names import Names
from rtfx.compiler.order import Schedule
from rtfx.compiler.widen import Widths
from rtfx.dsp import glide as glides
from rtfx.dsp import hold as holds
from rtfx.patch.model import INPUT, Patch, Placed, Wire

BODY, INNER = "        ", "            "
"""Indents: within the frame, and within the samples of a raised rate."""


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


class Lines:
    """The kernel's lines as they are written, and what the text of each signal is by now.

    `start` is done once a call, `moving` in each frame while a parameter glides, `frame` in every frame.  `signal`
    holds each wire's text where its block runs, `at_base` the text of what has left a region.
    """

    def __init__(self, passes: Passes) -> None:
        self.of = passes
        self.names, self.storage = Names(), Storage()
        self.start: list[str] = []
        self.moving: list[str] = []
        self.frame: list[str] = []
        self.signal: dict[Wire, str] = {Wire(INPUT): "guitar"}
        self.at_base: dict[Wire, str] = {}
        self.variable = {b.name: self.names.fresh(b.name) for b in passes.patch.blocks}
        self.memory: dict[str, list[str]] = {}
        self.coefficients: dict[str, list[str]] = {}
        self.states: dict[str, list[str]] = {}
        self.slot = {s.target: s for s in passes.slots}
        self.storage.state("clock", 0)

    def add(self, indent: str, text: str) -> None:
        """Write a line of the frame."""
        self.frame.append(indent + text)

    def open(self, block: Placed) -> None:
        """Give *block* its state, its memory and its coefficients."""
        code, name = self.of.codes[block.name], self.variable[block.name]
        self.states[block.name] = [self.names.fresh(f"{name}_{s}") for s in code.state]
        for state, first in zip(self.states[block.name], code.state.values(), strict=True):
            self.storage.state(state, first)
        self.memory[block.name] = [] if code.memory is None else ["memory", str(self.storage.memory(code.memory))]
        count = code.coefficients if code.prepare else 0
        self.coefficients[block.name] = [self.names.fresh(f"{name}_c{i}") for i in range(count)]
        if code.prepare and not block.follows:
            line = self.prepared(block)
            self.start.append(line)
            self.moving.append(line)

    def prepared(self, block: Placed) -> str:
        """The line that works out the coefficients of *block*."""
        values = [self._value(block, p) for p in block.kind.numbers]
        rate = self.of.rate * self.of.widths.factor(block.name)
        prepare = self.names.function(self.of.codes[block.name].prepare)
        return f"{', '.join(self.coefficients[block.name])} = {prepare}({', '.join([*values, repr(rate)])})"

    def _value(self, block: Placed, parameter: Parameter) -> str:
        """The text of a parameter's present value, with what follows it added."""
        slot = self.slot.get(f"{block.name}.{parameter.name}")
        if slot is None:
            return repr(block.values[parameter.name])
        value = f"p[{glides.WORDS * slot.index}]"
        follow = block.follows.get(parameter.name)
        if follow is None:
            return value
        if follow.base is not None:
            value = f"{follow.ratio!r} * {self._followed(follow.base, block)}"
        if follow.wire is not None:
            amount = f"{follow.depth!r} * {self._followed(follow.wire, block)}"
            value = f"{self.names.function(glides.octaves)}({value}, {amount})" if slot.log else f"{value} + {amount}"
        return f"{self.names.function(glides.bounded)}({value}, {parameter.low!r}, {parameter.high!r})"

    def _followed(self, wire: Wire, block: Placed) -> str:
        region_of = self.of.widths.region_of
        together = wire.block != INPUT and region_of(wire.block) == region_of(block.name)
        return self.signal[wire] if together else self.base(wire)

    def base(self, wire: Wire) -> str:
        """The text of *wire* at the base rate."""
        raised = wire.block != INPUT and self.of.widths.region_of(wire.block) is not None
        return self.at_base[wire] if raised else self.signal[wire]

    def outputs(self, block: Placed) -> list[str]:
        """Name what *block* gives; from here on its wires have a text."""
        name, several = self.variable[block.name], len(block.kind.outputs) > 1
        texts = [self.names.fresh(f"{name}_{o}") for o in block.kind.outputs] if several else [name]
        self.signal |= {Wire(block.name, i): text for i, text in enumerate(texts)}
        return texts

    def given(self, block: Placed) -> list[str]:
        """What the functions of *block* are given behind its signals."""
        return [*self.memory[block.name], *self.coefficients[block.name], *self.states[block.name]]

    def call(self, block: Placed, inputs: list[str], indent: str) -> None:
        """The line of *block*; of one that breaks loops, the line that takes in."""
        function = self.names.function(self.of.codes[block.name].tick)
        taking = block.kind.breaks_loops
        targets = [*([] if taking else self.outputs(block)), *self.states[block.name]]
        remark = f"{block.name}, what goes in" if taking else block.name
        self.add(indent, f"{', '.join(targets)} = {function}({', '.join([*inputs, *self.given(block)])})  # {remark}")

    def give_out(self, block: Placed, indent: str) -> None:
        """The line of a block that breaks loops, in which it gives what it holds."""
        function = self.names.function(self.of.codes[block.name].emerge)
        outputs = ", ".join(self.outputs(block))
        self.add(indent, f"{outputs} = {function}({', '.join(self.given(block))})  # {block.name}, what comes out")

    def inputs(self, block: Placed, read, indent: str, factor: int = 1) -> list[str]:
        """The texts of what comes in at the ports of *block*, each made to wait as long as it must."""
        late, name = self.of.alignment.late, self.variable[block.name]
        return [
            self.wait(read(block.wires[port]), late[block.name, port], f"{name}_{port}", indent, factor)
            for port in block.kind.ports
        ]

    def wait(self, signal: str, late: int, label: str, indent: str, factor: int = 1) -> str:
        """Make *signal* wait *late* samples; returns the text of what then comes."""
        if not late:
            return signal
        hold, ring = self.names.function(holds.hold), holds.ring_for(late)
        at, name = self.storage.memory(ring), self.names.fresh(f"{label}_late")
        place = "clock" if factor == 1 else f"clock * {factor} + j"
        self.add(indent, f"{name} = {hold}(memory, {at}, {ring}, {late}, {place}, {signal})")
        return name

    def loop_breakers(self, region: int | None) -> list[Placed]:
        """Blocks of *region* (None: of none) that take in last."""
        blocks = [self.of.patch.block(n) for n in self.of.schedule.blocks()]
        return [b for b in blocks if b.kind.breaks_loops and self.of.widths.region_of(b.name) == region]

"""Fourth pass: write the patch as one Python function, one line a block, for a player to read and numba to compile.

    kernel(inp, out, frames, p, state, memory)

reads *frames* mono samples at inp and writes as many left-right pairs at out.  Each frame runs the schedule;
a region runs its blocks several times a frame, between the filters that raise and lower the rate.
Coefficients are worked out at the start and, while a parameter glides, in every frame.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from rtfx.compiler.lines import BODY, INNER, Lines, Passes
from rtfx.compiler.raised import write_region
from rtfx.dsp import glide as glides
from rtfx.dsp import hold as holds
from rtfx.patch.model import Placed


@dataclass(frozen=True)
class Shown:
    """A state that a player may want to see: its block, its name, and its place in the state."""

    block: str
    name: str
    index: int


@dataclass(frozen=True)
class Emitted:
    """The source of the kernel, as a text with "{kernel}" where its name goes, and the first state and memory."""

    source: str
    state: np.ndarray
    memory: np.ndarray
    shows: tuple[Shown, ...]


def emit(passes: Passes) -> Emitted:
    """Return the source of the kernel for a patch that has gone through the earlier passes."""
    lines = Lines(passes)
    for block in passes.patch.blocks:
        lines.open(block)
    for step in passes.schedule.steps:
        if isinstance(step, str):
            _write_block(lines, passes.patch.block(step))
        else:
            write_region(lines, step)
    _write_output(lines)
    for block in lines.loop_breakers(None):
        lines.call(block, lines.inputs(block, lines.base, BODY), BODY)
    state, memory = lines.storage.images()
    return Emitted(_text(lines), state, memory, _shows(lines))


def _shows(lines: Lines) -> tuple[Shown, ...]:
    """Find the states that blocks want to be seen."""
    return tuple(
        Shown(name, state, lines.storage.names.index(variable))
        for name, variables in lines.states.items()
        for state, variable in zip(lines.of.codes[name].state, variables, strict=True)
        if state in lines.of.codes[name].shows
    )


def _write_block(lines: Lines, block: Placed) -> None:
    """A block at the base rate."""
    if block.follows:
        lines.add(BODY, lines.prepared(block))
    if block.kind.breaks_loops:
        lines.give_out(block, BODY)
    else:
        lines.call(block, lines.inputs(block, lines.base, BODY), BODY)


def _write_output(lines: Lines) -> None:
    patch, late = lines.of.patch, lines.of.alignment.out_late
    left = lines.wait(lines.base(patch.left), late[0], "left", BODY)
    right = lines.wait(lines.base(patch.right), late[1], "right", BODY)
    lines.add(BODY, f"out[2 * n] = {left}")
    lines.add(BODY, f"out[2 * n + 1] = {right}")


def _text(lines: Lines) -> str:
    """Put the function together."""
    glide, longest, whole = map(lines.names.function, (glides.glide, glides.longest_glide, holds.whole))
    count, linear = len(lines.of.slots), sum(not s.log for s in lines.of.slots)
    states = list(zip(lines.storage.names, lines.storage.first, strict=True))
    kinds = [whole if isinstance(first, int) else "float" for _, first in states]
    return "\n".join(
        [
            *lines.names.imports(),
            "",
            "",
            "def {kernel}(inp, out, frames, p, state, memory):",
            *(
                f"    {name} = {kind}(state[{i}])"
                for i, ((name, _), kind) in enumerate(zip(states, kinds, strict=True))
            ),
            f"    busy = {longest}(p, {count})",
            *(f"    {line}" for line in lines.start),
            "    for n in range(frames):",
            f"{BODY}if busy > 0:",
            f"{INNER}busy -= 1",
            f"{INNER}{glide}(p, {linear}, {count})",
            *(INNER + line for line in lines.moving),
            f"{BODY}guitar = 1.0 * inp[n]",
            *lines.frame,
            f"{BODY}clock += 1",
            *(f"    state[{i}] = float({name})" for i, (name, _) in enumerate(states)),
            "",
        ]
    )

"""How far each parameter can come: what it is set to, what its controls do, and what follows it."""

from __future__ import annotations

from rtfx.blocks.kind import Parameter, Setting
from rtfx.patch.model import Patch, Placed


def reach(patch: Patch, block: Placed, parameter: Parameter) -> tuple[float, float]:
    """Return the lowest and highest value that *parameter* of *block* can have; followed signals are taken as ±1."""
    ends = [block.values[parameter.name]]
    for control in patch.controls:
        if (control.block, control.parameter) == (block.name, parameter.name):
            ends += [control.low, control.high]
    low, high = min(ends), max(ends)
    follow = block.follows.get(parameter.name)
    if follow is not None:
        depth = abs(follow.depth)
        low, high = (low - depth, high + depth) if parameter.taper == "linear" else (low / 2**depth, high * 2**depth)
    return max(low, parameter.low), min(high, parameter.high)


def setting(patch: Patch, block: Placed, rate: float, quality: str) -> Setting:
    """Return what the kind of *block* may know when it is built at *rate* (Hz, the block's own)."""
    reached = {p.name: reach(patch, block, p) for p in block.kind.numbers}
    return Setting(block.choices, block.values, reached, rate, quality)

"""How far each parameter can come: what it is set to, what its controls do, and what follows it."""

from __future__ import annotations

from rtfx.blocks.kind import Parameter, Setting
from rtfx.patch.model import INPUT, Patch, Placed, Wire


def reach(patch: Patch, block: Placed, parameter: Parameter) -> tuple[float, float]:
    """Return the lowest and highest value that *parameter* of *block* can have, with all that moves it."""
    ends = [block.values[parameter.name]]
    for control in patch.controls:
        if (control.block, control.parameter) == (block.name, parameter.name):
            ends += [control.low, control.high]
    low, high = min(ends), max(ends)
    follow = block.follows.get(parameter.name)
    if follow is not None and follow.base is not None:
        low, high = (follow.ratio * value for value in _gives(patch, follow.base))
    if follow is not None and follow.wire is not None:
        most = abs(follow.depth) * max(map(abs, _gives(patch, follow.wire)))
        low, high = (low - most, high + most) if parameter.taper == "linear" else (low / 2**most, high * 2**most)
    return max(low, parameter.low), min(high, parameter.high)


def _gives(patch: Patch, wire: Wire) -> tuple[float, float]:
    return (-1.0, 1.0) if wire.block == INPUT else patch.block(wire.block).kind.gives


def setting(patch: Patch, block: Placed, rate: float, quality: str) -> Setting:
    """Return what the kind of *block* may know when it is built at *rate* (Hz, the block's own)."""
    reached = {p.name: reach(patch, block, p) for p in block.kind.numbers}
    return Setting(block.choices, block.values, reached, rate, quality, patch.tempo)

"""A patch as data, after reading and before compiling: nothing in it is text any more."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from rtfx.blocks.kind import Kind

INPUT = "input"
"""The name under which the guitar is wired."""


@dataclass(frozen=True)
class Wire:
    """Where a signal comes from: a block's name (or "input") and the number of its output."""

    block: str
    output: int = 0


@dataclass(frozen=True)
class Follow:
    """What a parameter follows: ratio · base in place of its own value, and on top of it depth · wire.

    `base` gives values in the parameter's unit (a tracker's pitch).  `depth` is in the parameter's unit, on a log
    taper in octaves.  Either may be missing.
    """

    wire: Wire | None = None
    depth: float = 0.0
    base: Wire | None = None
    ratio: float = 1.0

    @property
    def wires(self) -> tuple[Wire, ...]:
        """All that is followed."""
        return tuple(w for w in (self.base, self.wire) if w is not None)


@dataclass(frozen=True)
class Placed:
    """One block of a patch."""

    name: str
    kind: Kind
    wires: Mapping[str, Wire]
    values: Mapping[str, float]
    choices: Mapping[str, str]
    follows: Mapping[str, Follow]
    line: int = 0


@dataclass(frozen=True)
class Control:
    """What a hand or a foot moves: `by` names the control, `low` and `high` its ends in the parameter's unit.

    `ladder` lists values the control steps through, in its order.  With `low` above `high` the control is turned round.
    """

    block: str
    parameter: str
    by: str
    low: float
    high: float
    ladder: tuple[float, ...] = ()


@dataclass(frozen=True)
class Patch:
    """Blocks, how they are wired, and which controls move what."""

    name: str
    about: str
    blocks: tuple[Placed, ...]
    left: Wire
    right: Wire
    controls: tuple[Control, ...] = ()
    tempo: float = 120.0
    reference: float = 440.0
    path: str = ""
    text: str = ""

    def block(self, name: str) -> Placed:
        """Return the block called *name*; KeyError if there is none."""
        for placed in self.blocks:
            if placed.name == name:
                return placed
        raise KeyError(name)

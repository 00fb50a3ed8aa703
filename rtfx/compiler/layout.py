"""Where a patch keeps what: parameters, state and memory, each a plain array of doubles."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from rtfx.blocks.kind import Parameter
from rtfx.dsp.glide import TARGET, VALUE, WORDS
from rtfx.patch.model import Patch

LINE = 8
"""Doubles in a cache line."""


@dataclass(frozen=True)
class Slot:
    """One parameter of a built patch: "block.parameter", its place, its first value and how far it may go."""

    target: str
    index: int
    parameter: Parameter
    value: float
    low: float
    high: float

    @property
    def log(self) -> bool:
        """True if it glides on a log taper."""
        return self.parameter.taper == "log"


def slots(patch: Patch) -> tuple[Slot, ...]:
    """Return the moving parameters of *patch*, those on a linear taper first, each with its index."""
    found = [(b, p) for b in patch.blocks for p in b.kind.numbers if not p.fixed]
    found.sort(key=lambda pair: pair[1].taper == "log")
    return tuple(Slot(f"{b.name}.{p.name}", i, p, b.values[p.name], p.low, p.high) for i, (b, p) in enumerate(found))


def on_a_line(content: np.ndarray) -> np.ndarray:
    """Return a copy of *content* (float64) that begins on a cache line, so that no vector lies across two."""
    room = np.empty(content.size + LINE)
    start = (-room.ctypes.data // 8) % LINE
    copy = room[start : start + content.size]
    copy[:] = content
    return copy


def parameter_words(slots: tuple[Slot, ...]) -> np.ndarray:
    """Return the parameters standing still at their first values, float64 of shape (4 · slots,)."""
    words = np.zeros(max(WORDS * len(slots), 1))
    for slot in slots:
        words[WORDS * slot.index + VALUE] = words[WORDS * slot.index + TARGET] = slot.value
    return words


@dataclass
class Storage:
    """State and memory as they are handed out while the source is written."""

    names: list[str] = field(default_factory=list)
    first: list[float | int] = field(default_factory=list)
    pieces: list[np.ndarray] = field(default_factory=list)
    size: int = 0

    def state(self, name: str, first: float | int) -> int:
        """Give *name* a word of state; returns its index."""
        self.names.append(name)
        self.first.append(first)
        return len(self.names) - 1

    def memory(self, content: np.ndarray | int) -> int:
        """Give out a piece of memory with this first content (an int: so many zeros); returns its offset.

        Each piece begins on a cache line of its own.
        """
        piece = np.zeros(content) if isinstance(content, int) else np.asarray(content, float)
        start, filled = self.size, -(-len(piece) // LINE) * LINE
        self.pieces.append(np.concatenate([piece, np.zeros(filled - len(piece))]))
        self.size += filled
        return start

    def images(self) -> tuple[np.ndarray, np.ndarray]:
        """Return the first content of state and memory."""
        memory = np.concatenate([*self.pieces, np.zeros(1)])
        return np.array([*map(float, self.first), 0.0]), memory

"""The callback's surroundings in the sound process: its words, its graphs, and the swap from one to the next.

Written by: the control thread.  Ordering: a record is complete before its address is stored in NEXT with
release.  Lifetime: every graph is kept until the callback has handed it back in OLD.
"""

from __future__ import annotations

import numpy as np

from rtfx.compiler.build import Built
from rtfx.compiler.layout import on_a_line
from rtfx.engine import words as w
from rtfx.engine.layout import OFFSET, Shared
from rtfx.engine.native import callback, release_store


class Graph:
    """One copy of a built patch in this process, and its record for the callback."""

    def __init__(
        self, built: Built, number: int, parameters, state, memory, count: int, first_log: int, shown=()
    ) -> None:
        self.built, self.number = built, number
        self.arrays = [on_a_line(np.asarray(a, np.float64)) for a in (parameters, state, memory)]
        self.first = (parameters, state, memory)
        self.shown = np.array([*shown, 0], np.int64)
        self.record = np.zeros(w.GRAPH_WORDS, np.int64)
        self.record[w.KERNEL] = built.address
        self.record[w.PARAMETERS : w.MEMORY + 1] = [a.ctypes.data for a in self.arrays]
        self.record[w.NUMBER], self.record[w.COUNT], self.record[w.FIRST_LOG] = number, count, first_log
        self.record[w.SHOWN], self.record[w.SHOWN_COUNT] = self.shown.ctypes.data, len(shown)

    @property
    def address(self) -> int:
        """Where the record lies."""
        return self.record.ctypes.data

    def fresh(self) -> Graph:
        """Return a copy with its first state and memory, its parameters where they are going now."""
        parameters = self.arrays[0].reshape(-1, 4).copy() if len(self.arrays[0]) >= 4 else self.arrays[0].copy()
        if parameters.ndim == 2:
            parameters[:, 0], parameters[:, 3] = parameters[:, 1], 0.0
        _, state, memory = self.first
        count, first_log = int(self.record[w.COUNT]), int(self.record[w.FIRST_LOG])
        shown = self.shown[:-1].tolist()
        return Graph(self.built, self.number, parameters.ravel(), state, memory, count, first_log, shown)


class Host:
    """Owns the callback's memory; its address and `userdata` are what a device is given."""

    def __init__(self, shared: Shared, graph: Graph, in_channels: int, out_channels: int) -> None:
        self.shared = shared
        self.callback = callback()
        self.words = np.zeros(w.SIZE, np.int64)
        self.scratch: list[np.ndarray] = [np.zeros(2 * w.CHUNK), np.zeros(2 * w.CHUNK), np.zeros(w.CHUNK, np.float32)]
        self.words[w.SHARED] = shared.words.ctypes.data
        self.words[w.SCRATCH_A : w.MONO + 1] = [a.ctypes.data for a in self.scratch]
        self.words[w.IN_CHANNELS], self.words[w.OUT_CHANNELS] = in_channels, out_channels
        self.words[w.PANIC_SEEN] = shared.get("PANIC")
        self.words.view(np.float64)[[w.WET, w.LIMIT]] = 1.0
        self.graphs = [graph]
        self.waiting: list[Graph] = []
        self.words[w.NOW] = graph.address
        shared.set("GRAPH", graph.number)
        self.renewed = int(shared.get("RENEW"))

    @property
    def userdata(self) -> int:
        """Address of the callback's words."""
        return self.words.ctypes.data

    @property
    def newest(self) -> Graph:
        """The graph that is heard, or will be when all fades are over."""
        return (self.waiting or self.graphs)[-1]

    def swap(self, graph: Graph) -> None:
        """Fade *graph* in as soon as no other fade is going on; of several waiting only the last is heard."""
        self.waiting = [graph]

    def tend(self) -> None:
        """Do the control thread's part; call it every few hundredths of a second."""
        if self.words[w.OLD] != 0:
            self.words[w.OLD] = 0
            self.graphs = self.graphs[-1:]
        asked = int(self.shared.words[OFFSET["RENEW"]])
        if asked != self.renewed and not self.waiting and self.words[w.NEXT] == 0:
            self.renewed = asked
            self.waiting = [self.graphs[-1].fresh()]
        if self.waiting and self.words[w.NEXT] == 0 and len(self.graphs) == 1:
            graph = self.waiting.pop()
            self.graphs.append(graph)
            release_store()(self.userdata, w.NEXT, graph.address)

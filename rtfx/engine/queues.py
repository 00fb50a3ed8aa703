"""The front's ends of the queues: events in, moves and audio out.

Heads and tails are stored with release by native code, after the entry has been written or read.  They are loaded
plainly: a stale value only makes a queue look fuller, or emptier, than it is.
"""

from __future__ import annotations

import numpy as np

from rtfx.engine.layout import AUDIO_CHANNELS, AUDIO_FRAMES, EVENT_WORDS, EVENTS, OFFSET, Shared
from rtfx.engine.native import release_store


def send(shared: Shared, graph: int, slot: int, value: float, frame: int = 0) -> bool:
    """Put an event into the front's queue; False if it is full."""
    head, tail = int(shared.get("EVENTS_HEAD")), int(shared.get("EVENTS_TAIL"))
    if head - tail >= EVENTS:
        return False
    at = OFFSET["EVENTS"] + (head % EVENTS) * EVENT_WORDS
    shared.words[at : at + 3] = frame, graph, slot
    shared.doubles[at + 3] = value
    release_store()(shared.words.ctypes.data, OFFSET["EVENTS_HEAD"], head + 1)
    return True


def moves(shared: Shared) -> list[tuple[int, int, int, float]]:
    """Take what the audio thread has applied: (frame, graph, slot, value); slot -1 is the start of that graph."""
    head, tail = int(shared.get("MOVES_HEAD")), int(shared.get("MOVES_TAIL"))
    found = []
    for i in range(tail, head):
        at = OFFSET["MOVES"] + (i % EVENTS) * EVENT_WORDS
        frame, graph, slot = (int(x) for x in shared.words[at : at + 3])
        found.append((frame, graph, slot, float(shared.doubles[at + 3])))
    release_store()(shared.words.ctypes.data, OFFSET["MOVES_TAIL"], head)
    return found


def audio(shared: Shared) -> np.ndarray:
    """Take the recorded frames that wait: float32 of shape (frames, 3), dry, wet left, wet right."""
    head, tail = int(shared.get("AUDIO_HEAD")), int(shared.get("AUDIO_TAIL"))
    places = np.arange(tail, head) % AUDIO_FRAMES
    frames = shared.audio.reshape(-1, AUDIO_CHANNELS)[places]
    release_store()(shared.words.ctypes.data, OFFSET["AUDIO_TAIL"], head)
    return frames

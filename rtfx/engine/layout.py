"""The one block of shared memory: what is in it, where, who writes it and who reads it.

Words are 8 bytes; a field is a whole number of words, integers or doubles.  Everything is addressed by these
offsets, in Python through `Shared` and in the audio thread as constants.  The front, the sound process and the
hands process have a place each; the last is kept for a process that is still to come.

Ordering: a queue's head is stored with release by its one writer after the entry is complete; its tail with
release by its one reader after the entry has been read.  Counters are plain words with a single writer.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

PARAMETERS = 256
"""Most moving parameters a patch may have."""
SHOWN = 32
"""Most states that are shown."""
EVENTS = 1024
EVENT_WORDS = 4  # frame, graph, slot, value
AUDIO_FRAMES = 1 << 20
"""Frames the audio queue holds: 21 s at 48 kHz, 5 s at 192 kHz."""
AUDIO_CHANNELS = 3  # dry, wet left, wet right
LOADS = 128
"""Bins of the load histogram, two percent each; the last holds all above."""


@dataclass(frozen=True)
class Field:
    """A named run of words: integers ("i") or doubles ("f")."""

    name: str
    type: str
    count: int
    about: str


FIELDS = (
    # Settings: written by the front, read by the audio thread
    Field("RATE", "f", 1, "sample rate, Hz"),
    Field("CEILING", "f", 1, "highest absolute output sample"),
    Field("FADE_FRAMES", "i", 1, "length of a crossfade between graphs"),
    Field("MUTE", "i", 1, "1: go to silence by a ramp; 0: ramp up"),
    Field("BYPASS", "i", 1, "1: the guitar alone"),
    Field("PANIC", "i", 1, "counts requests: silence at once, tails cut, stay muted"),
    Field("INPUT_CHANNEL", "i", 1, "which input channel is the guitar, from 0"),
    # Heartbeats: each written by its process, read by the front
    Field("BEAT_FRONT", "i", 1, "monotonic ns of the front's last sign of life"),
    Field("BEAT_SOUND", "i", 1, "monotonic ns of the sound process's last sign of life"),
    Field("BEAT_HANDS", "i", 1, "the same for the hands process"),
    # Counters and state: written by the audio thread, read by anyone
    Field("FRAMES", "i", 1, "frames played since the start, over all restarts"),
    Field("BLOCKS", "i", 1, "callbacks"),
    Field("LATE_BLOCKS", "i", 1, "callbacks that took longer than the time they had"),
    Field("LONGEST_NS", "i", 1, "longest callback"),
    Field("XRUNS", "i", 1, "callbacks that the device said were over- or underrun"),
    Field("RESETS", "i", 1, "times a NaN or Inf was caught"),
    Field("PANICS", "i", 1, "panic requests that were carried out"),
    Field("DROPPED_EVENTS", "i", 1, "events for no present graph"),
    Field("DROPPED_FRAMES", "i", 1, "frames the audio queue had no room for"),
    Field("EVENTS_HIGH", "i", 1, "most events ever waiting"),
    Field("AUDIO_HIGH", "i", 1, "most frames ever waiting in the audio queue"),
    Field("RESTARTS", "i", 1, "times the sound process was started again (written by the front)"),
    Field("LAST_FRAMES", "i", 1, "frames of the last callback"),
    Field("GRAPH", "i", 1, "number of the graph that is heard (the newer while fading)"),
    Field("FADING", "i", 1, "1 while two graphs are heard"),
    Field("RENEW", "i", 1, "counts requests of the audio thread for a fresh copy of the graph"),
    Field("GAIN", "f", 1, "present gain of the mute ramp"),
    Field("LIMIT_GAIN", "f", 1, "present gain of the ceiling limiter"),
    Field("WET", "f", 1, "present share of the graph against bypass"),
    Field("PEAK", "f", 3, "peak of input, left, right, falling 20 dB a second"),
    Field("SQUARE", "f", 3, "mean square of input, left, right, over 0.3 s"),
    Field("LOAD", "i", LOADS, "callbacks by load"),
    Field("VALUES", "f", PARAMETERS, "present values of the parameters of the graph that is heard"),
    Field("SHOWN", "f", SHOWN, "present values of the states that its blocks show"),
    # Queues
    Field("EVENTS_HEAD", "i", 1, "front to audio: entries ever written"),
    Field("EVENTS_TAIL", "i", 1, "front to audio: entries ever read"),
    Field("EVENTS", "i", EVENTS * EVENT_WORDS, "front to audio: frame (0: now), graph, slot, value (a double)"),
    Field("HAND_EVENTS_HEAD", "i", 1, "hands to audio: the same"),
    Field("HAND_EVENTS_TAIL", "i", 1, ""),
    Field("HAND_EVENTS", "i", EVENTS * EVENT_WORDS, ""),
    Field("MOVES_HEAD", "i", 1, "audio to front: what was applied, on which frame"),
    Field("MOVES_TAIL", "i", 1, ""),
    Field("MOVES", "i", EVENTS * EVENT_WORDS, "frame, graph, slot (-1: this graph begins), value"),
    Field("AUDIO_ON", "i", 1, "1 while someone reads the audio queue"),
    Field("AUDIO_HEAD", "i", 1, "audio to front: frames ever written"),
    Field("AUDIO_TAIL", "i", 1, "audio to front: frames ever read"),
    Field("AUDIO", "f", AUDIO_FRAMES * AUDIO_CHANNELS // 2, "float32: dry, left, right of each frame"),
)


def _offsets() -> dict[str, int]:
    offsets, at = {}, 0
    for field in FIELDS:
        offsets[field.name] = at
        at += field.count
    return offsets | {"SIZE": at}


OFFSET = _offsets()
"""Offset of each field in words, and "SIZE", the number of words in all."""


class Shared:
    """The shared block seen from Python: `words` and `doubles` are the same memory, indexed by `OFFSET`."""

    def __init__(self, buffer) -> None:
        self.words = np.frombuffer(buffer, np.int64, OFFSET["SIZE"])
        self.doubles = self.words.view(np.float64)
        at = OFFSET["AUDIO"]
        self.audio = self.words[at : at + AUDIO_FRAMES * AUDIO_CHANNELS // 2].view(np.float32)

    def get(self, name: str) -> float:
        """Return the first word of field *name*."""
        field = next(f for f in FIELDS if f.name == name)
        view = self.words if field.type == "i" else self.doubles
        return view[OFFSET[name]].item()

    def set(self, name: str, value: float) -> None:
        """Write the first word of field *name*."""
        field = next(f for f in FIELDS if f.name == name)
        view = self.words if field.type == "i" else self.doubles
        view[OFFSET[name]] = value

    def many(self, name: str) -> np.ndarray:
        """Return a view of all words of field *name*."""
        field = next(f for f in FIELDS if f.name == name)
        view = self.words if field.type == "i" else self.doubles
        return view[OFFSET[name] : OFFSET[name] + field.count]

"""Events on their way into the graph: single-producer single-consumer queues in shared memory.

Written by: the front or the hands process, one queue each (head, release).  Read by: the audio thread (tail,
release).  An event carries the frame on which it is to happen; what was done on which frame goes back through the
MOVES queue, so that a take can be rendered again.
"""

from rtfx.compiler.render import GLIDE_S
from rtfx.dsp.glide import WORDS, aim
from rtfx.engine import words as w
from rtfx.engine.layout import EVENT_WORDS, EVENTS, OFFSET
from rtfx.native.memory import as_f64p, load_acquire, load_f64p, load_i64p, store_release
from rtfx.native.options import inlined

FAR = 1 << 62
"""A frame that never comes."""
_MOVES, _MOVES_HEAD, _MOVES_TAIL = OFFSET["MOVES"], OFFSET["MOVES_HEAD"], OFFSET["MOVES_TAIL"]
_DROPPED, _HIGH, _RATE = OFFSET["DROPPED_EVENTS"], OFFSET["EVENTS_HIGH"], OFFSET["RATE"]


@inlined
def report(shared, frame, graph, slot, value):
    """Tell the front what was applied, if there is room."""
    head = shared[_MOVES_HEAD]
    if head - load_acquire(shared, _MOVES_TAIL) < EVENTS:
        entry = _MOVES + (head & (EVENTS - 1)) * EVENT_WORDS
        shared[entry] = frame
        shared[entry + 1] = graph
        shared[entry + 2] = slot
        as_f64p(shared)[entry + 3] = value
        store_release(shared, _MOVES_HEAD, head + 1)


@inlined
def apply(record, shared, entry, frame):
    """Send the parameter that the event at *entry* names on its way."""
    slot = shared[entry + 2]
    value = as_f64p(shared)[entry + 3]
    frames = float(int(as_f64p(shared)[_RATE] * GLIDE_S + 0.5))
    aim(load_f64p(record, w.PARAMETERS), WORDS * slot, value, frames, slot >= record[w.FIRST_LOG])
    report(shared, frame, record[w.NUMBER], slot, value)


@inlined
def matches(record, shared, entry):
    """Tell whether the event at *entry* is for the graph of *record*."""
    slot = shared[entry + 2]
    return shared[entry + 1] == record[w.NUMBER] and slot >= 0 and slot < record[w.COUNT]


@inlined
def drain(words, shared, queue, head_at, tail_at, frame):
    """Apply what is due by *frame* in the queue at *queue*; return the frame of the next event after it."""
    head = load_acquire(shared, head_at)
    tail = shared[tail_at]
    shared[_HIGH] = max(shared[_HIGH], head - tail)
    upcoming = FAR
    while tail < head and upcoming == FAR:
        entry = queue + (tail & (EVENTS - 1)) * EVENT_WORDS
        if shared[entry] > frame:
            upcoming = shared[entry]
        else:
            if words[w.NEXT] != 0 and matches(load_i64p(words, w.NEXT), shared, entry):
                apply(load_i64p(words, w.NEXT), shared, entry, frame)
            elif matches(load_i64p(words, w.NOW), shared, entry):
                apply(load_i64p(words, w.NOW), shared, entry, frame)
            else:
                shared[_DROPPED] += 1
            tail += 1
            store_release(shared, tail_at, tail)
    return upcoming

"""The audio callback: native code that never takes the GIL, allocates, locks, logs or does I/O.

    device -> guitar -> graph (two while fading) -> bypass -> mute ramp -> ceiling -> device

Each callback goes in chunks, and a chunk is split where an event falls, so that every move happens on its frame.
A graph that gives NaN or Inf is not run again: what it last gave fades out, and the control thread is asked for a
fresh copy, which fades in.
"""

from rtfx.dsp.glide import WORDS
from rtfx.engine import words as w
from rtfx.engine.events import FAR, drain, report
from rtfx.engine.finish import (
    BYPASS_S,
    HOLD_DECAY,
    PEAK_FALL_DB_S,
    RELEASE_S,
    SQUARE_S,
    ceiling_gain,
    meter,
    ramp_step,
    record_done,
    record_frame,
    record_room,
    toward,
    within,
)
from rtfx.engine.layout import LOADS, OFFSET
from rtfx.native.calls import call_kernel
from rtfx.native.clock import now_ns
from rtfx.native.flush import flush_on, flush_restore
from rtfx.native.memory import (
    as_f64p,
    double_at,
    float_at,
    load_acquire,
    load_f32p,
    load_f64p,
    load_i64p,
    store_release,
    word_at,
)
from rtfx.native.options import inlined

_RATE, _CEILING, _FADE = OFFSET["RATE"], OFFSET["CEILING"], OFFSET["FADE_FRAMES"]
_MUTE, _BYPASS, _PANIC, _PANICS = OFFSET["MUTE"], OFFSET["BYPASS"], OFFSET["PANIC"], OFFSET["PANICS"]
_CHANNEL, _FRAMES, _BLOCKS, _LATE = (
    OFFSET["INPUT_CHANNEL"],
    OFFSET["FRAMES"],
    OFFSET["BLOCKS"],
    OFFSET["LATE_BLOCKS"],
)
_LONGEST, _XRUNS, _RESETS, _RENEW = OFFSET["LONGEST_NS"], OFFSET["XRUNS"], OFFSET["RESETS"], OFFSET["RENEW"]
_GRAPH, _FADING, _LAST, _LOAD = OFFSET["GRAPH"], OFFSET["FADING"], OFFSET["LAST_FRAMES"], OFFSET["LOAD"]
_GAIN, _LIMIT, _WET, _PEAK, _SQUARE = (
    OFFSET["GAIN"], OFFSET["LIMIT_GAIN"], OFFSET["WET"], OFFSET["PEAK"], OFFSET["SQUARE"],
)  # fmt: skip
_VALUES, _SHOWN = OFFSET["VALUES"], OFFSET["SHOWN"]
_QUEUES = (OFFSET["EVENTS"], OFFSET["EVENTS_HEAD"], OFFSET["EVENTS_TAIL"])
_HAND_QUEUES = (OFFSET["HAND_EVENTS"], OFFSET["HAND_EVENTS_HEAD"], OFFSET["HAND_EVENTS_TAIL"])
_XRUN_FLAGS = 0xF  # input under- and overflow, output under- and overflow; priming is none


@inlined
def take_guitar(inp, first, count, words, shared):
    """Copy the guitar's channel of the device's input into the mono buffer; silence where there is no input."""
    mono = load_f32p(words, w.MONO)
    channels = words[w.IN_CHANNELS]
    channel = min(shared[_CHANNEL], channels - 1)
    for i in range(count):
        mono[i] = inp[(first + i) * channels + channel] if channels > 0 else 0.0


@inlined
def run_graph(record, mono, scratch, at, count):
    """Run one graph over frames at..at+count of the chunk."""
    call_kernel(
        record, w.KERNEL, float_at(mono, at), double_at(scratch, 2 * at), count,
        load_f64p(record, w.PARAMETERS), load_f64p(record, w.STATE), load_f64p(record, w.MEMORY),
    )  # fmt: skip


@inlined
def run_graphs(words, shared, count):
    """Run what is heard over the chunk, stopping on each frame that has an event."""
    mono = load_f32p(words, w.MONO)
    at = 0
    while at < count:
        frame = shared[_FRAMES] + at
        first = drain(words, shared, _QUEUES[0], _QUEUES[1], _QUEUES[2], frame)
        second = drain(words, shared, _HAND_QUEUES[0], _HAND_QUEUES[1], _HAND_QUEUES[2], frame)
        upcoming = min(first, second)
        until = count if upcoming == FAR else min(count, upcoming - shared[_FRAMES])
        if words[w.DEAD] == 0:
            run_graph(load_i64p(words, w.NOW), mono, load_f64p(words, w.SCRATCH_A), at, until - at)
        if words[w.FADE_LEFT] > 0:
            run_graph(load_i64p(words, w.NEXT), mono, load_f64p(words, w.SCRATCH_B), at, until - at)
        at = until


@inlined
def begin_fade(words, shared):
    """Start to fade the waiting graph in, if there is one and none is fading."""
    if words[w.FADE_LEFT] == 0 and load_acquire(words, w.NEXT) != 0:
        number = load_i64p(words, w.NEXT)[w.NUMBER]
        words[w.FADE_LEFT] = max(shared[_FADE], 1)
        shared[_GRAPH] = number
        shared[_FADING] = 1
        report(shared, shared[_FRAMES], number, -1, 0.0)


@inlined
def end_fade(words, shared):
    """The new graph alone is heard now; the old one is handed back to the control thread."""
    words[w.DEAD] = 0
    shared[_FADING] = 0
    old = words[w.NOW]
    words[w.NOW] = words[w.NEXT]
    words[w.NEXT] = 0
    store_release(words, w.OLD, old)


@inlined
def give_up(words, shared):
    """Stop running the present graph and ask for a fresh copy of it."""
    words[w.DEAD] = 1
    store_release(shared, _RENEW, shared[_RENEW] + 1)


@inlined
def finite(left, right):
    """False for NaN and Inf in either."""
    return left - left == 0.0 and right - right == 0.0


@inlined
def graph_output(words, own, shared, i):
    """Return left and right of frame *i* of the chunk, with the fade between graphs and the guard against NaN."""
    a, b = load_f64p(words, w.SCRATCH_A), load_f64p(words, w.SCRATCH_B)
    left, right = a[2 * i], a[2 * i + 1]
    if words[w.DEAD] == 0 and not finite(left, right):
        shared[_RESETS] += 1
        give_up(words, shared)
    if words[w.DEAD] != 0:
        own[w.HOLD_LEFT] *= HOLD_DECAY
        own[w.HOLD_RIGHT] *= HOLD_DECAY
        left, right = own[w.HOLD_LEFT], own[w.HOLD_RIGHT]
    if words[w.FADE_LEFT] > 0:
        words[w.FADE_LEFT] -= 1
        share = words[w.FADE_LEFT] / max(shared[_FADE], 1)
        new_left, new_right = b[2 * i], b[2 * i + 1]
        if finite(new_left, new_right):
            left = new_left + share * (left - new_left) if share > 0.0 else new_left
            right = new_right + share * (right - new_right) if share > 0.0 else new_right
    if words[w.DEAD] == 0:
        own[w.HOLD_LEFT], own[w.HOLD_RIGHT] = left, right
    return left, right


@inlined
def finish(words, own, shared, floats, out, first, count):
    """Carry the chunk from the graph's output to the device."""
    mono = load_f32p(words, w.MONO)
    rate, ceiling = floats[_RATE], floats[_CEILING]
    panic = shared[_PANIC] != words[w.PANIC_SEEN]
    muted = load_acquire(shared, _MUTE) != 0 or panic
    gain_target, gain_step = 0.0 if muted else 1.0, ramp_step(muted, panic, rate)
    wet_target, wet_step = 0.0 if shared[_BYPASS] != 0 else 1.0, 1.0 / (BYPASS_S * rate)
    release = 1.0 / (RELEASE_S * rate)
    fall, follow = 10.0 ** (-PEAK_FALL_DB_S / 20.0 / rate), 1.0 / (SQUARE_S * rate)
    room = record_room(shared, count)
    channels = words[w.OUT_CHANNELS]
    for i in range(count):
        fading = words[w.FADE_LEFT] > 0
        left, right = graph_output(words, own, shared, i)
        if fading and words[w.FADE_LEFT] == 0:
            copy_rest(words, i, count)
            end_fade(words, shared)
        guitar = 1.0 * mono[i]
        if room >= 0:
            record_frame(shared, room + i, guitar, left, right)
        own[w.WET] = toward(own[w.WET], wet_target, wet_step)
        if own[w.WET] < 1.0:
            left, right = guitar + own[w.WET] * (left - guitar), guitar + own[w.WET] * (right - guitar)
        own[w.GAIN] = toward(own[w.GAIN], gain_target, gain_step)
        left, right = left * own[w.GAIN], right * own[w.GAIN]
        own[w.LIMIT] = ceiling_gain(own[w.LIMIT], max(abs(left), abs(right)), ceiling, release)
        left, right = within(left * own[w.LIMIT], ceiling), within(right * own[w.LIMIT], ceiling)
        meter(own, w.METERS, guitar, fall, follow)
        meter(own, w.METERS + 1, left, fall, follow)
        meter(own, w.METERS + 2, right, fall, follow)
        to_device(out, (first + i) * channels, channels, left, right)
    if room >= 0:
        record_done(shared, room + count)
    if panic and own[w.GAIN] == 0.0:
        words[w.PANIC_SEEN] = shared[_PANIC]
        shared[_PANICS] += 1
        give_up(words, shared)


@inlined
def copy_rest(words, i, count):
    """After the last frame of a fade the new graph's output stands where the old one's stood."""
    a, b = load_f64p(words, w.SCRATCH_A), load_f64p(words, w.SCRATCH_B)
    for k in range(2 * (i + 1), 2 * count):
        a[k] = b[k]


@inlined
def to_device(out, at, channels, left, right):
    """Write one frame: the mean where the device has one channel, silence beyond the second."""
    if channels == 1:
        out[at] = 0.5 * (left + right)
    else:
        out[at] = left
        out[at + 1] = right
        for k in range(2, channels):
            out[at + k] = 0.0


@inlined
def publish(words, own, shared, floats):
    """Show the present values and levels to whoever reads the shared block."""
    record = load_i64p(words, w.NOW) if words[w.NEXT] == 0 else load_i64p(words, w.NEXT)
    p = load_f64p(record, w.PARAMETERS)
    for i in range(record[w.COUNT]):
        floats[_VALUES + i] = p[WORDS * i]
    state, shown = load_f64p(record, w.STATE), load_i64p(record, w.SHOWN)
    for i in range(record[w.SHOWN_COUNT]):
        floats[_SHOWN + i] = state[shown[i]]
    for i in range(3):
        floats[_PEAK + i] = own[w.METERS + i]
        floats[_SQUARE + i] = own[w.METERS + 3 + i]
    floats[_GAIN], floats[_LIMIT], floats[_WET] = own[w.GAIN], own[w.LIMIT], own[w.WET]


@inlined
def account(shared, floats, frames, flags, took_ns):
    """Count this callback."""
    budget_ns = frames * 1e9 / floats[_RATE]
    shared[_LAST] = frames
    shared[_LONGEST] = max(shared[_LONGEST], took_ns)
    shared[_LOAD + min(int(50.0 * took_ns / budget_ns), LOADS - 1)] += 1
    if took_ns > budget_ns:
        shared[_LATE] += 1
    if (flags & _XRUN_FLAGS) != 0:
        shared[_XRUNS] += 1
    store_release(shared, _BLOCKS, shared[_BLOCKS] + 1)


@inlined
def process(inp, out, frames, flags, words):
    """The whole callback; *words* is laid out in rtfx.engine.words."""
    mode = flush_on()
    clock = word_at(words, w.CLOCK)
    started = now_ns(clock)
    shared = load_i64p(words, w.SHARED)
    own, floats = as_f64p(words), as_f64p(shared)
    done = 0
    while done < frames:
        count = min(w.CHUNK, frames - done)
        take_guitar(inp, done, count, words, shared)
        begin_fade(words, shared)
        run_graphs(words, shared, count)
        finish(words, own, shared, floats, out, done, count)
        shared[_FRAMES] += count
        done += count
    publish(words, own, shared, floats)
    account(shared, floats, frames, int(flags), now_ns(clock) - started)
    flush_restore(mode)
    return 0

"""What every sample goes through between the graph and the device: bypass, mute ramp, ceiling, meters, recording.

All of it is exact when it has nothing to do: with the ramp over and the level below the ceiling, what the graph
gave is what the device gets, to the last bit.
"""

from rtfx.engine.layout import AUDIO_CHANNELS, AUDIO_FRAMES, OFFSET
from rtfx.native.memory import as_f32p, load_acquire, store_release, word_at
from rtfx.native.options import inlined

UNMUTE_S, MUTE_S, PANIC_S, BYPASS_S, RELEASE_S = 0.1, 0.05, 0.005, 0.02, 0.2
PEAK_FALL_DB_S, SQUARE_S = 20.0, 0.3
HOLD_DECAY = 0.99  # a sample after a caught NaN: gone in 20 ms
_AUDIO, _HEAD, _TAIL, _ON = OFFSET["AUDIO"], OFFSET["AUDIO_HEAD"], OFFSET["AUDIO_TAIL"], OFFSET["AUDIO_ON"]
_AUDIO_HIGH, _DROPPED = OFFSET["AUDIO_HIGH"], OFFSET["DROPPED_FRAMES"]


@inlined
def toward(value, target, step):
    """Move *value* towards *target* by at most *step*, and land on it exactly."""
    if value < target:
        return min(value + step, target)
    return max(value - step, target)


@inlined
def ramp_step(muted, panic, rate):
    """Step of the mute ramp for one frame."""
    seconds = PANIC_S if panic else MUTE_S if muted else UNMUTE_S
    return 1.0 / (seconds * rate)


@inlined
def ceiling_gain(gain, peak, ceiling, step):
    """Next gain of the ceiling limiter: down at once, up slowly, never above 1."""
    gain = min(gain + step, 1.0)
    return ceiling / peak if peak * gain > ceiling else gain


@inlined
def within(x, ceiling):
    """Hold the last rounding error under the ceiling; changes nothing below it."""
    return min(max(x, -ceiling), ceiling)


@inlined
def record_room(shared, count):
    """Return where *count* frames may be written in the audio queue (frames ever written), or -1."""
    if load_acquire(shared, _ON) == 0:
        return -1
    head = shared[_HEAD]
    waiting = head - load_acquire(shared, _TAIL)
    if waiting + count > AUDIO_FRAMES:
        shared[_DROPPED] += count
        return -1
    shared[_AUDIO_HIGH] = max(shared[_AUDIO_HIGH], waiting + count)
    return head


@inlined
def record_frame(shared, place, dry, left, right):
    """Write one frame into the audio queue."""
    audio = as_f32p(word_at(shared, _AUDIO))
    at = (place & (AUDIO_FRAMES - 1)) * AUDIO_CHANNELS
    audio[at] = dry
    audio[at + 1] = left
    audio[at + 2] = right


@inlined
def record_done(shared, head):
    """Hand the written frames to the reader."""
    store_release(shared, _HEAD, head)


@inlined
def meter(own, at, x, fall, follow):
    """Let the peak at own[at] and the mean square at own[at+3] follow *x*."""
    size = abs(x)
    own[at] = max(size, own[at] * fall)
    own[at + 3] += follow * (size * size - own[at + 3])

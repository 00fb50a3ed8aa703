"""Parameters that glide: each moves to its target in a stated number of frames, a step a frame.

A parameter is four doubles: its value, its target, its step, and the frames left.  On a linear taper the step is
added, on a log taper it multiplies; the last step lands on the target exactly.
Written by: the audio thread alone.
"""

from rtfx.native.options import inlined

VALUE, TARGET, STEP, LEFT, WORDS = 0, 1, 2, 3, 4


@inlined
def longest_glide(p, count):
    """Return how many frames it takes until all *count* parameters stand still."""
    longest = 0.0
    for i in range(count):
        longest = max(longest, p[WORDS * i + LEFT])
    return int(longest)


@inlined
def glide(p, linear, count):
    """Move all parameters on by one frame; the first *linear* of *count* are on a linear taper."""
    for i in range(count):
        at = WORDS * i
        if p[at + LEFT] > 0.0:
            p[at + LEFT] -= 1.0
            moved = p[at] + p[at + STEP] if i < linear else p[at] * p[at + STEP]
            p[at] = moved if p[at + LEFT] > 0.0 else p[at + TARGET]


@inlined
def aim(p, at, target, frames, log):
    """Send the parameter at offset *at* to *target* in *frames* frames (0: at once)."""
    p[at + TARGET] = target
    p[at + LEFT] = frames
    if frames <= 0.0:
        p[at] = target
        p[at + LEFT] = 0.0
    elif log:
        p[at + STEP] = (target / p[at]) ** (1.0 / frames)
    else:
        p[at + STEP] = (target - p[at]) / frames


@inlined
def bounded(value, low, high):
    """Hold a followed value inside its parameter's range: signals know no bounds, coefficients need them."""
    return min(max(value, low), high)


@inlined
def octaves(value, amount):
    """Move *value* by *amount* octaves: how a signal is added on a log taper."""
    return value * 2.0**amount

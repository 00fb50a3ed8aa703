"""Make a signal wait a whole number of samples.

State: a ring of a power of two in the patch's memory; the patch's clock says where it stands.
"""

from rtfx.native.options import inlined


@inlined
def hold(memory, at, ring, late, place, x):
    """Return the sample that came *late* calls ago (0: *x* itself); *place* counts the calls."""
    memory[at + (place & (ring - 1))] = x
    return memory[at + ((place - late) & (ring - 1))]


def ring_for(late):
    """Return the length of the ring that `hold` needs for *late* samples."""
    return 1 << int(late).bit_length()


@inlined
def keep(memory, at, factor, pad):
    """Keep the last *pad* of *factor* + *pad* samples for the next frame, in which they come first."""
    for i in range(pad):
        memory[at + i] = memory[at + factor + i]


@inlined
def whole(x):
    """Return *x* as an integer: int() called in a kernel itself would leave numba's error path in it."""
    return int(x)

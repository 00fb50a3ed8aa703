"""The least of the last so many values, with the same few steps for every sample.

A binary tree over a ring: a new value replaces the oldest leaf, and every node above it becomes the lesser of
its two children, so that the top is the least of all.  The *length* leaves lie at memory[at + length:], and
node i is above nodes 2i and 2i + 1; any length will do.
Steps a sample: log2(length), rounded up, whatever the signal.
Memory: 2 · length doubles, filled before use with what the values were before the first.
Source: tournament tree, common practice.
"""

from rtfx.native.options import inlined


@inlined
def running_minimum(memory, at, length, place, value):
    """Return the least of *value* and the *length* − 1 values before it; *place* runs round 0…length − 1."""
    node = length + place
    memory[at + node] = value
    while node > 1:
        node >>= 1
        left, right = memory[at + 2 * node], memory[at + 2 * node + 1]
        memory[at + node] = left if left < right else right
    return memory[at + 1]

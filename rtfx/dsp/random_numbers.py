"""White noise from whole numbers: the same on every machine, in plain Python and in machine code.

    s ← 16807 · s mod (2³¹ − 1),   r = 2 s / (2³¹ − 1) − 1

Every s from 1 to 2³¹ − 2 comes once in a period of 2³¹ − 2 samples: 12 hours at 48 kHz.  All products stay below
2⁴⁶, so that nothing wraps in 64 bits.  r is spread evenly between −1 and 1: its mean is 0, its RMS 1/√3.
Seeds go through a mixing of bits first, as states that stand in a simple ratio would give noises that are alike.
Source: S. K. Park and K. W. Miller, "Random number generators: good ones are hard to find", Comm. ACM 31(10),
1988; mixing: G. L. Steele, D. Lea, C. H. Flood, "Fast splittable pseudorandom number generators", OOPSLA, 2014
(both from memory).
"""

from rtfx.native.options import inlined

MULTIPLIER = 16_807
MODULUS = 2**31 - 1
RMS = 3.0**-0.5
_WORD = 2**64 - 1


@inlined
def following(state):
    """Return the state after *state*, both from 1 to 2³¹ − 2."""
    return MULTIPLIER * state % MODULUS


@inlined
def evenly(state):
    """Return the number that *state* stands for, from above −1 to below 1."""
    return state * (2.0 / MODULUS) - 1.0


def first_state(seed):
    """Return the state that a *seed* (a whole number) starts from; different seeds start far from each other."""
    z = (seed * 0x9E3779B97F4A7C15) & _WORD
    z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & _WORD
    z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & _WORD
    return (z ^ (z >> 31)) % (MODULUS - 1) + 1

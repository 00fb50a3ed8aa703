"""Every frequency moved by the same number of Hz: harmonics lose their ratios and ring like metal.

    up   = a · cos 2πφ + b · sin 2πφ,   φ ← φ + shift/rate (mod 1)
    down = a · cos 2πφ − b · sin 2πφ

a and b are the input through two chains of all-passes, b leading a by 90° (see rtfx.dsp.phase_difference).
A tone f of level A gives f + shift on `up` and f − shift on `down`, each of level A.  `add` of both is twice
`multiply` by a sine; `mix` with the dry sound at shifts below 1 Hz gives slow, endless moving notches.
Rejection: the other sideband is 70 dB down for inputs from 30 Hz to 20 kHz (18.4 kHz at 44.1 kHz); the carrier
does not come out at all, as DC is taken from the input (−3 dB at 2 Hz) before it can be shifted.
State: φ, the DC blocker; memory: the all-passes.  Delay: none to be made up for; the all-passes turn the phase, as
if by 4.5 ms at 82 Hz and 0.4 ms at 1 kHz, so that a mix with the dry sound is coloured even by the smallest shift.
Limits: on `down`, a tone below the shift comes out at shift − f: it turns round at 0 Hz.
Source: single-sideband modulation by phase shift, R. V. L. Hartley, 1928 (from memory).
"""

from math import pi

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.dsp.phase_difference import memory_for, split
from rtfx.dsp.sine import sine
from rtfx.native.options import inlined

DC_HZ = 2.0


@inlined
def prepare(shift_hz, rate):
    """Return the carrier's step in cycles, and the pole that keeps DC out."""
    return shift_hz / rate, 1.0 - 2.0 * pi * DC_HZ / rate


@inlined
def tick(x, memory, at, step, keep, phase, last_x, blocked):
    blocked = x - last_x + keep * blocked
    a, b = split(memory, at, blocked)
    ahead = phase + 0.25
    in_phase = a * sine(ahead if ahead < 1.0 else ahead - 1.0)
    turned = b * sine(phase)
    phase += step
    if phase >= 1.0:
        phase -= 1.0
    return in_phase + turned, in_phase - turned, phase, x, blocked


def _bandwidth(setting, inputs):
    """The bandwidth of its input and its highest shift together."""
    return max(inputs.values()) + setting.reach["shift"][1]


@kind(
    "frequency-shift",
    about="Moves every frequency by the same number of Hz, up on one output and down on the other: bells and metal.",
    ports=("x",),
    outputs=("up", "down"),
    parameters=(Parameter("shift", "Hz", 0.05, 5_000.0, 100.0, "log", "how far all is moved, up and down"),),
    law="up = a·cos 2πφ + b·sin 2πφ, down = a·cos 2πφ − b·sin 2πφ; b leads a by 90°, φ advances by shift/rate",
    source="Single sideband by phase shift (Hartley, 1928), all-passes by Darlington, BSTJ 29, 1950 (from memory).",
    bandwidth=_bandwidth,
    linear=False,
)
def frequency_shift(setting):
    state = {"phase": 0.0, "last_x": 0.0, "blocked": 0.0}
    return Code(tick=tick, prepare=prepare, coefficients=2, state=state, memory=memory_for(setting.rate))

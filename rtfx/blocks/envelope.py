"""How loud the signal is: it rises with the attack, falls with the release, and is never below 0.

    e ← e + a (|x| − e),   a = 1 − exp(−1 / (attack · rate)) where |x| > e, else with the release

State: e.  Delay: none; the attack rounds what comes fast.
Bandwidth: the cutoff of the shortest attack, 1 / (2π · attack), if the input is not narrower still.
Limits: beyond that it falls by only 6 dB an octave; a short release ripples at the notes' own pitch.
Source: peak follower with attack and release, common practice.
"""

from math import pi

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.dsp.smoothing import share
from rtfx.native.options import inlined


@inlined
def prepare(attack_s, release_s, rate):
    """Return the shares of the way up and down that are made in a sample."""
    return share(attack_s, rate), share(release_s, rate)


@inlined
def tick(x, rise, fall, level):
    away = abs(x) - level
    level += (rise if away > 0.0 else fall) * away
    return level, level


def _bandwidth(setting, inputs):
    """What its quickest attack lets through: 1/(2π·attack)."""
    return min(max(inputs.values()), 1.0 / (2.0 * pi * setting.reach["attack"][0]))


@kind(
    "envelope",
    about="Follows how loud you play, from 0 up: let a filter or an effect open with the pick.",
    ports=("x",),
    parameters=(
        Parameter("attack", "s", 0.0001, 1.0, 0.005, "log", "how soon it rises when you pick"),
        Parameter("release", "s", 0.001, 5.0, 0.1, "log", "how slowly it falls when the note fades"),
    ),
    law="e += a·(|x| − e), a = 1 − exp(−1/(attack·rate)) going up, the same with release going down",
    source="Peak follower with attack and release, common practice.",
    bandwidth=_bandwidth,
    linear=False,
    base_rate_only=True,
)
def envelope(setting):
    return Code(tick=tick, prepare=prepare, coefficients=2, state={"level": 0.0})

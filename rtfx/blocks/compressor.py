"""Evens out how loud you play: what is above the threshold is turned down, the more the louder it is.

    L = 20 log10 |x|,   o = L − threshold,   s = 1 − 1/ratio
    wanted reduction in dB:  0 where 2o ≤ −knee;   s · (o + knee/2)² / (2 knee) where 2|o| < knee;   s · o above
    held ← max(wanted, held + a_r (wanted − held)),   r ← r + a_a (held − r)
    y = x · 10^((makeup − r)/20)

a = 1 − exp(−1 / (time · rate)), of the attack and of the release.  All of it works on decibels, so that attack
and release sound alike at every loudness.
Below the knee, once the release is over, r is exactly 0: with makeup 0 every bit passes.
State: held and r, in dB.  Delay: none; a peak faster than the attack comes through.
Source: D. Giannoulis, M. Massberg, J. D. Reiss, "Digital dynamic range compressor design — a tutorial and analysis",
JAES 60(6), 2012 (from memory): feed-forward, soft knee, smooth decoupled peak detector in the log domain.
"""

from math import exp, log

from rtfx.blocks.kind import Code, Parameter, kind
from rtfx.dsp.decibel import amplitude
from rtfx.dsp.settle import settle
from rtfx.dsp.smoothing import share
from rtfx.native.options import inlined

DB_PER_NEPER = 8.685889638065037  # 20 / ln 10


@inlined
def prepare(threshold_db, ratio, knee_db, attack_s, release_s, makeup_db, rate):
    """Return the level where the knee begins, threshold, slope, knee, the two glides, and the makeup in dB."""
    begins = amplitude(threshold_db - knee_db * 0.5)
    slope = 1.0 - 1.0 / ratio
    return begins, threshold_db, slope, knee_db, share(attack_s, rate), share(release_s, rate), makeup_db


@inlined
def wanted_reduction(level, threshold, slope, knee):
    """Return by how many dB an amplitude of *level*, at or above the beginning of the knee, is to be turned down."""
    over = DB_PER_NEPER * log(level) - threshold
    into = over + knee * 0.5
    if over >= knee * 0.5:
        return slope * over
    return slope * into * into / (2.0 * knee)


@inlined
def tick(x, begins, threshold, slope, knee, rise, fall, makeup, held, reduction):
    level = abs(x)
    wanted = wanted_reduction(level, threshold, slope, knee) if level > begins else 0.0
    held = max(wanted, settle(held, wanted, fall))
    reduction = settle(reduction, held, rise)
    return x * exp((makeup - reduction) / DB_PER_NEPER), held, reduction


@kind(
    "compressor",
    about="Evens out your playing: loud notes are turned down, and with makeup the quiet ones come forward.",
    ports=("x",),
    parameters=(
        Parameter("threshold", "dB", -60.0, 0.0, -20.0, about="peaks above this are turned down"),
        Parameter("ratio", "ratio", 1.0, 20.0, 4.0, "log", "so many dB more in, one dB more out"),
        Parameter("knee", "dB", 0.0, 24.0, 6.0, about="how wide the bend at the threshold is; 0: a corner"),
        Parameter("attack", "s", 0.0001, 0.5, 0.01, "log", "how soon it turns down"),
        Parameter("release", "s", 0.005, 5.0, 0.15, "log", "how slowly it lets go"),
        Parameter("makeup", "dB", -12.0, 36.0, 0.0, about="gain afterwards"),
    ),
    law="y = x·10^((makeup − r)/20); r follows (1 − 1/ratio)·(20·log10|x| − threshold), 0 below, bent in the knee",
    source="Giannoulis, Massberg, Reiss, Digital dynamic range compressor design, JAES 60(6), 2012 (from memory).",
    linear=False,
    base_rate_only=True,
)
def compressor(setting):
    return Code(tick=tick, prepare=prepare, coefficients=7, state={"held": 0.0, "reduction": 0.0})

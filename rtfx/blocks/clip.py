"""Drive into a ceiling of ±1: a hard corner or a smooth bend.

    v = x · 10^(drive/20),   hard: y = min(1, max(−1, v)),   smooth: y = v / √(1 + v²)

The curve is averaged over straight lines between samples (antiderivative antialiasing, first order) in 2 or 4
steps a sample, and the steps are weighted so that what would fold back from the sample rate is cancelled.
State: the last input and the last averages.  Delay: exactly one sample at the rate it runs at.
Source: J. Parker, V. Zavalishin, E. Le Bivic, "Reducing the aliasing of nonlinear waveshaping using
continuous-time convolution", DAFx-16, 2016 (abstract read).  Both averages are in closed forms that never divide
by a small difference: smooth, (a+b) / (√(1+a²) + √(1+b²)); hard, the clipped areas one by one.
"""

from rtfx.blocks.kind import Choice, Code, Parameter, kind
from rtfx.native.lanewise import both_ways
from rtfx.native.options import inlined


@inlined
def prepare(drive_db, rate):
    return 10.0 ** (drive_db / 20.0)


def hard_average(a, b):
    """Average of min(1, max(−1, v)) over v from *a* to *b*: the area above, the area below, and what lies between."""
    low, high = a.least(b), a.most(b)
    inside_low, inside_high = low.most(-1.0).least(1.0), high.most(-1.0).least(1.0)
    above, below = (high - low.most(1.0)).most(0.0), (high.least(-1.0) - low).most(0.0)
    area = above - below + (inside_high - inside_low) * (inside_high + inside_low) * 0.5
    return area.over(high - low, inside_high)


def hard_2(x, drive, last, a0, a1):
    v = x * drive
    before = v.after(last)
    middle = before + (v - before) * 0.5
    b0, b1 = hard_average(before, middle), hard_average(middle, v)
    y = (b0.after(a0) + 3.0 * (b1.after(a1) + b0) + b1) * 0.125
    return y, v.last(), b0.last(), b1.last()


def hard_4(x, drive, last, a0, a1, a2, a3):
    v = x * drive
    before = v.after(last)
    step = (v - before) * 0.25
    p, q, r = before + step, before + 2.0 * step, v - step
    b0, b1, b2, b3 = (hard_average(*ends) for ends in ((before, p), (p, q), (q, r), (r, v)))
    return weighted_4(b0, b1, b2, b3, a0, a1, a2, a3), v.last(), b0.last(), b1.last(), b2.last(), b3.last()


def weighted_4(b0, b1, b2, b3, a0, a1, a2, a3):
    """Four averages and the four before them, weighted 1-3-5-7-7-5-3-1."""
    outer = b0.after(a0) + b3 + 3.0 * (b1.after(a1) + b2)
    inner = 5.0 * (b2.after(a2) + b1) + 7.0 * (b3.after(a3) + b0)
    return (outer + inner) * 0.03125


def two_averages(a, root_a, b, root_b, c, root_c):
    """Averages of v / √(1 + v²) from *a* to *b* and from *b* to *c*, given √(1 + v²) at each, for one division."""
    first, second = root_a + root_b, root_b + root_c
    both = 1.0 / (first * second)
    return (a + b) * second * both, (b + c) * first * both


def smooth_2(x, drive, last, root, a0, a1):
    v = x * drive
    before = v.after(last)
    middle = before + (v - before) * 0.5
    root_middle, root_v = (middle * middle + 1.0).sqrt(), (v * v + 1.0).sqrt()
    b0, b1 = two_averages(before, root_v.after(root), middle, root_middle, v, root_v)
    y = (b0.after(a0) + 3.0 * (b1.after(a1) + b0) + b1) * 0.125
    return y, v.last(), root_v.last(), b0.last(), b1.last()


def smooth_4(x, drive, last, root, a0, a1, a2, a3):
    v = x * drive
    before = v.after(last)
    step = (v - before) * 0.25
    p, q, r = before + step, before + 2.0 * step, v - step
    root_p, root_q, root_r, root_v = ((u * u + 1.0).sqrt() for u in (p, q, r, v))
    b0, b1 = two_averages(before, root_v.after(root), p, root_p, q, root_q)
    b2, b3 = two_averages(q, root_q, r, root_r, v, root_v)
    y = weighted_4(b0, b1, b2, b3, a0, a1, a2, a3)
    return y, v.last(), root_v.last(), b0.last(), b1.last(), b2.last(), b3.last()


LITTLE, MUCH, MOST = 7, 16, 32  # effective orders: they lead to 4, 8 and 16 times oversampling at 48 kHz


def effective_order(law, drive_db, quality):
    """Return the order of the polynomial that aliases as little as this curve does with its averaging.

    Measured with sines from 1 to 15 kHz: see tests/reference/test_aliasing.py for what each gives.
    """
    if quality == "studio":
        return MUCH if law == "smooth" and drive_db <= 12.0 else MOST
    return LITTLE if law == "smooth" and drive_db <= 6.0 else MUCH


def _bandwidth(setting, inputs):
    """7, 16 or 32 times the bandwidth of its input, by law, highest drive and quality."""
    n = effective_order(setting.choices["law"], setting.reach["drive"][1], setting.quality)
    return n * max(inputs.values())


tick_hard_2, sweep_hard_2 = both_ways(hard_2)
tick_hard_4, sweep_hard_4 = both_ways(hard_4)
tick_smooth_2, sweep_smooth_2 = both_ways(smooth_2)
tick_smooth_4, sweep_smooth_4 = both_ways(smooth_4)
_WAYS = {
    ("hard", "stage"): (tick_hard_2, sweep_hard_2),
    ("hard", "studio"): (tick_hard_4, sweep_hard_4),
    ("smooth", "stage"): (tick_smooth_2, sweep_smooth_2),
    ("smooth", "studio"): (tick_smooth_4, sweep_smooth_4),
}


@kind(
    "clip",
    about="Drive into a ceiling of ±1: odd harmonics, more the harder it is driven.",
    ports=("x",),
    parameters=(
        Choice("law", ("smooth", "hard"), "smooth", "a bend or a corner"),
        Parameter("drive", "dB", 0.0, 36.0, 12.0, about="gain before the curve"),
    ),
    law="v = x·10^(drive/20); smooth: v/√(1+v²); hard: v held within ±1",
    source="Antiderivative antialiasing: Parker, Zavalishin, Le Bivic, DAFx-16, 2016.",
    bandwidth=_bandwidth,
    linear=False,
)
def clip(setting):
    law, steps = setting.choices["law"], 4 if setting.quality == "studio" else 2
    state = {"last": 0.0} | ({"root": 1.0} if law == "smooth" else {})
    state |= {f"a{i}": 0.0 for i in range(steps)}
    tick, sweep = _WAYS[law, setting.quality]
    return Code(tick=tick, sweep=sweep, prepare=prepare, state=state, delay=1)

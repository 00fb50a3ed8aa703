"""A plucked string: a burst of noise goes round a loop that is tuned and damped; a pickup hears it.

    y[n] = x[n] + A(D(y[n - N])),   D = ρ ((1 + z⁻¹)/2)^M,   A = (C + z⁻¹)/(1 + C z⁻¹)

The loop is N + M/2 + Δ = rate/pitch samples long; the allpass A gives Δ in [0.1, 1.1), exact at the pitch:
C = sin((1-Δ)ω/2)/sin((1+Δ)ω/2).  A partial at f is 60 dB down after

    t60(f) = -ln 1000 / (pitch (ln ρ + M ln cos(πf/rate))),

from which ρ follows.  M = 1 is the published loop; a thick string takes more averages, its highs die sooner.
Sources: K. Karplus and A. Strong, "Digital Synthesis of Plucked-String and Drum Timbres"; D. A. Jaffe and
J. O. Smith, "Extensions of the Karplus-Strong Plucked-String Algorithm"; both in Computer Music Journal 7(2),
1983 (from memory).  The pickup as a comb and a resonant low-pass of 2 to 5 kHz is common practice.
"""

from dataclasses import dataclass
from itertools import pairwise

import numpy as np

LEAST_TUNING = 0.1
"""Smallest delay asked of the allpass, samples: nearer to 0 its pole comes to the unit circle and rings."""


@dataclass(frozen=True)
class Loop:
    """What a string does to itself once a period."""

    delay: int
    """N, samples."""
    gain: float
    """ρ, at most 1."""
    averages: int
    """M, how many times two neighbouring samples are averaged."""
    allpass: float
    """C, the tuning."""

    def filter(self):
        """Return numerator and denominator of D·A, as scipy.signal.lfilter takes them."""
        taps = np.array([self.gain])
        for _ in range(self.averages):
            taps = np.convolve(taps, (0.5, 0.5))
        return np.convolve(taps, (self.allpass, 1.0)), np.array([1.0, self.allpass])


def loop(pitch_hz, t60_s, rate, averages=1):
    """Return the Loop that sounds at *pitch_hz* and dies away by 60 dB in *t60_s*.

    Parameters
    ----------
    pitch_hz, t60_s : float
        Fundamental and its decay time.
    rate : float
        Sample rate, Hz.
    averages : int
        M; each one multiplies a partial at f by cos(πf/rate), once a period.

    Raises
    ------
    ValueError
        If the period is shorter than the loop's filters, or the averages alone end the note before *t60_s*.
    """
    period = rate / pitch_hz
    rest = period - averages / 2
    delay = int(np.floor(rest - LEAST_TUNING))
    if delay < 2:
        raise ValueError(f"pitch = {pitch_hz} Hz is too high for a string at {rate} Hz: lower it, or raise the rate.")
    w, tuning = 2 * np.pi / period, rest - delay
    allpass = np.sin((1 - tuning) * w / 2) / np.sin((1 + tuning) * w / 2)
    return Loop(delay, _gain(pitch_hz, t60_s, w, averages), averages, float(allpass))


def _gain(pitch_hz, t60_s, w, averages):
    """Return the ρ that leaves the fundamental 60 dB down after *t60_s*, with what the averages take."""
    taken = averages * np.log(np.cos(w / 2))
    gain = float(np.exp(-np.log(1000) / (pitch_hz * t60_s) - taken))
    if gain > 1:
        longest_s = -np.log(1000) / (pitch_hz * taken)
        raise ValueError(
            f"t60 = {t60_s} s is above what averages = {averages} leave at {pitch_hz} Hz: {longest_s:.3g} s. "
            "Ask for less, take fewer averages, or raise the rate."
        )
    return gain


def burst(frames, delay, seed, softness, plucked, heard):
    """Return what the pick puts into the string: noise of one period, softened, unit RMS, sum zero.

    Parameters
    ----------
    frames, delay : int
        Length of what is returned, and of the noise in it, samples.
    seed : int
        The same seed gives the same noise.
    softness : sequence of float
        Poles p in [0, 1) of the low-passes (1-p)/(1-p z⁻¹): one for the force, one for the direction.
    plucked, heard : float
        Where the string is plucked and heard, re its length from the bridge, 0 to 1/2: the combs
        1 - z^-⌊plucked·delay + ½⌋, which leave out the partials that have a node there.

    Returns
    -------
    ndarray of float64, shape (frames,)
    """
    from scipy.signal import lfilter

    x = np.zeros(frames)
    x[:delay] = np.random.Generator(np.random.PCG64(seed)).uniform(-1.0, 1.0, delay)
    for pole in softness:
        x = lfilter((1 - pole,), (1, -pole), x)
    for place in (plucked, heard):  # they take the mean as well: an offset would go round and die slowly
        x = _comb(x, int(np.floor(place * delay + 0.5)))
    return x * np.sqrt(delay / np.sum(x * x))


def _comb(x, lag):
    delayed = np.zeros_like(x)
    delayed[lag:] = x[: len(x) - lag]
    return x - delayed


def ring(string, x):
    """Return what the Loop *string* makes of the excitation *x*, ndarray of float64, as long as *x*."""
    from scipy.signal import lfilter

    turns = -(-len(x) // string.delay)
    y = np.zeros((turns, string.delay))
    y.flat[: len(x)] = x
    numerator, denominator = string.filter()
    memory = np.zeros(len(numerator) - 1)
    for before, now in pairwise(y):  # a whole turn at a time
        back, memory = lfilter(numerator, denominator, before, zi=memory)
        now += back
    return y.ravel()[: len(x)]


def bend(y, cents):
    """Return the string *y* pulled sideways by *cents*, shape (frames,), a value a sample.

    Pulling raises the tension, so that every partial moves by one ratio: *y* is read at another speed.
    Where *y* is too short for that, silence follows.
    """
    from scipy.ndimage import map_coordinates

    speed = 2.0 ** (np.asarray(cents) / 1200)
    return map_coordinates(y, [np.cumsum(speed) - speed[0]], order=5, mode="constant")


def pickup(x, cutoff_hz, q, rate):
    """Return *x*, shape (frames,), through w²/(s² + s w/q + w²) by the bilinear transform."""
    from scipy.signal import lfilter

    k = np.tan(np.pi * cutoff_hz / rate)
    a = np.array((1 + k / q + k * k, 2 * (k * k - 1), 1 - k / q + k * k))
    return lfilter(k * k * np.array((1, 2, 1)) / a[0], a / a[0], x)

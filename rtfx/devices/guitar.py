"""The demo guitar: nine seconds of a guitar that nobody had to record, the same every time.

    phrase = pickup(Σ force · release · bend(ring(burst))),  over the notes

Single notes low and high, a double stop, a bend, a strummed chord, soft and hard strokes, rests.  It begins
and ends in silence, so that it can go round.  It is made at 48 kHz and then brought to the wanted rate:
the same noise plucks the strings at every rate.  Strings, pickup and their sources: rtfx.devices.strings.
"""

import hashlib
import os
import tempfile
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from rtfx.devices import strings

DURATION_S = 9.0
PEAK = 10 ** (-6 / 20)
"""Highest sample at 48 kHz.  Other rates have the same level, and catch the peaks at other moments."""
LOWEST_RATE, HIGHEST_RATE = 8_000, 192_000

_RATE = 48_000
_OPEN_HZ = {s: 440 * 2 ** (semitones / 12) for s, semitones in enumerate((-5, -10, -14, -19, -24, -29), 1)}
_BEAT_S, _START_S, _RELEASE_S, _STRUM_S = 0.54, 0.06, 0.07, 0.022
_LOW_E_T60_S, _ONE_AVERAGE_HZ = 7.5, 330.0
_PICK_AT, _PICKUP_AT, _UPSTROKE_POLE = 0.14, 0.19, 0.5
_PICKUP_HZ, _PICKUP_Q = 3_400.0, 1.8
_FORCE_RANGE_DB, _SOFTEST_PARTIALS, _FORCE_OCTAVES = 24.0, 1.5, 2.5
_FIRST_SEED = 800  # noise is luck: with this one every note has a fundamental to be reckoned with
_BEND_AFTER_S, _BEND_S, _VIBRATO_HZ, _VIBRATO_CENTS = 0.22, 0.2, 5.5, 12.0


@dataclass(frozen=True)
class Note:
    """One stroke: when and how long (beats), which string (1 is the highest) and fret, how hard (0 to 1)."""

    at: float
    beats: float
    string: int
    fret: int
    force: float
    up: bool = False
    bend_cents: float = 0.0

    @property
    def pitch_hz(self):
        return _OPEN_HZ[self.string] * 2 ** (self.fret / 12)


def _strum(at, beats, force, frets):
    """Return a chord; *frets* gives string and fret in the order in which the pick meets them."""
    step = _STRUM_S / _BEAT_S
    return [Note(at + i * step, beats - i * step, s, fret, force) for i, (s, fret) in enumerate(frets)]


PHRASE = (
    Note(0.0, 1.5, 5, 0, 0.9),
    Note(1.5, 0.5, 5, 3, 0.45, up=True),
    Note(2.0, 1.0, 4, 2, 0.6),
    Note(3.0, 0.5, 3, 0, 0.5, up=True),
    Note(3.5, 0.5, 3, 2, 0.7),
    Note(4.0, 1.5, 6, 0, 1.0),
    *_strum(6.0, 1.6, 0.6, ((3, 5), (2, 5))),
    Note(8.0, 1.9, 2, 3, 0.85, bend_cents=200.0),
    Note(10.0, 0.5, 1, 12, 0.4, up=True),
    Note(10.5, 0.6, 1, 17, 0.6),
    *_strum(11.5, 4.5, 0.75, ((5, 0), (4, 2), (3, 4), (2, 1), (1, 0))),
)


def demo_guitar(rate=48000.0):
    """Return the demo phrase, from the user's cache folder when it has been made before.

    Parameters
    ----------
    rate : float
        Sample rate, Hz; 8000 to 192000.

    Returns
    -------
    ndarray of float32, shape (frames,)
        Nine seconds, mono, peak about -6 dBFS (full scale ±1), silent at both ends.

    Raises
    ------
    ValueError
        If *rate* is out of range.
    """
    _check(rate)
    file = _cache_file(rate)
    phrase = _load(file, round(DURATION_S * rate))
    if phrase is None:
        phrase = build(rate)
        _keep(file, phrase)
    return phrase


def build(rate):
    """Make the demo phrase; as demo_guitar, but without the cache."""
    from scipy.signal import resample

    _check(rate)
    dry = np.zeros(round(DURATION_S * _RATE))
    for seed, note in enumerate(PHRASE, _FIRST_SEED):
        start = round((_START_S + note.at * _BEAT_S) * _RATE)
        y = play(note, seed)
        dry[start : start + len(y)] += y
    heard = strings.pickup(dry, _PICKUP_HZ, _PICKUP_Q, _RATE)
    heard *= PEAK / np.max(np.abs(heard))
    return resample(heard, round(DURATION_S * rate)).astype(np.float32)


def play(note, seed):
    """Return one note up to its release: 48 kHz, before the pickup, ndarray of float64, shape (frames,)."""
    frames = round((note.beats * _BEAT_S + _RELEASE_S) * _RATE)
    string = _string(note)
    cents = _bend(note.bend_cents, frames)
    needed = int(frames * 2 ** (cents.max() / 1200)) + 1
    x = strings.burst(needed, string.delay, seed, _softness(note), _PICK_AT, _PICKUP_AT)
    y = strings.bend(strings.ring(string, x), cents) if note.bend_cents else strings.ring(string, x)[:frames]
    return 10 ** (_FORCE_RANGE_DB * (note.force - 1) / 20) * y * _release(frames)


def _softness(note):
    """Return the poles of the stroke: a harder one is brighter, one upwards is duller."""
    bandwidth_hz = note.pitch_hz * _SOFTEST_PARTIALS * 2 ** (_FORCE_OCTAVES * note.force)
    return np.exp(-np.pi * bandwidth_hz / _RATE), _UPSTROKE_POLE if note.up else 0.0


def _string(note):
    """Return the note's Loop: high notes die sooner, low strings are thick and lose their highs."""
    t60_s = _LOW_E_T60_S * np.sqrt(_OPEN_HZ[6] / note.pitch_hz)
    averages = max(1, round(_ONE_AVERAGE_HZ / note.pitch_hz))
    return strings.loop(note.pitch_hz, t60_s, _RATE, averages)


def _bend(cents, frames):
    """Return the way up to *cents*, and the vibrato that sets in there, ndarray of shape (frames,)."""
    t = np.arange(frames) / _RATE - _BEND_AFTER_S
    way = (1 - np.cos(np.pi * np.clip(t / _BEND_S, 0, 1))) / 2
    since = np.maximum(t - _BEND_S, 0)
    vibrato = _VIBRATO_CENTS * (1 - np.cos(2 * np.pi * _VIBRATO_HZ * since))
    return cents * way - vibrato if cents else np.zeros(frames)


def _release(frames):
    """Return a gain of 1 that falls to 0 at the end, as the finger comes off, ndarray of shape (frames,)."""
    fall = round(_RELEASE_S * _RATE)
    gain = np.ones(frames)
    gain[-fall:] = (1 + np.cos(np.pi * np.arange(1, fall + 1) / fall)) / 2
    return gain


def _check(rate):
    if not LOWEST_RATE <= rate <= HIGHEST_RATE:
        raise ValueError(f"rate = {rate} Hz: the demo guitar plays at {LOWEST_RATE} to {HIGHEST_RATE} Hz.")


def _cache_file(rate):
    """Return where the phrase is kept; a change of the rate or of what makes it gives another name."""
    import platformdirs

    made_by = b"".join(Path(source).read_bytes() for source in (__file__, strings.__file__))
    key = hashlib.sha256(made_by + repr(float(rate)).encode()).hexdigest()[:16]
    return Path(platformdirs.user_cache_dir("rtfx")) / f"demo-guitar-{key}.npy"


def _load(file, frames):
    """Return the kept phrase, or None if there is none, or it is not what was kept."""
    try:
        with file.open("rb") as opened:
            phrase = np.lib.format.read_array(opened, allow_pickle=False)
    except Exception:  # whatever is wrong with the file, the phrase can be made again
        return None
    whole = phrase.shape == (frames,) and phrase.dtype == np.float32
    return phrase if whole and PEAK / 2 < np.max(np.abs(phrase)) < 1.0 else None


def _keep(file, phrase):
    """Write the phrase whole, then rename; a folder that cannot be written is no reason to stop."""
    with suppress(OSError):
        file.parent.mkdir(parents=True, exist_ok=True)
        handle, part = tempfile.mkstemp(dir=file.parent, suffix=".part")
        try:
            with os.fdopen(handle, "wb") as opened:
                np.save(opened, phrase)
            os.replace(part, file)
        except BaseException:
            os.unlink(part)
            raise

"""The guitar through a recorded room or cabinet: convolution with the player's own file.

    left = x * h_left,  right = x * h_right      (a mono file gives both the same)

Up to 1024 taps run in direct form; longer files in blocks behind that, with no added delay.  A file at another rate
is resampled.  State: positions; memory: the response and the past.  Delay: none beyond the file's own.
Source: see rtfx.dsp.convolution.
"""

import numpy as np

from rtfx.blocks.kind import Choice, Code, File, Parameter, kind
from rtfx.dsp import convolution as cv
from rtfx.native.options import inlined

LONGEST_S = 6.0


@inlined
def prepare(level_db, rate):
    return 10.0 ** (level_db / 20.0)


@inlined
def tick_short(x, memory, at, level, clock, period, right_at):
    left = cv.head(memory, at, period, clock, x)
    right = cv.head(memory, at + right_at, period, clock, x) if right_at > 0 else left
    return left * level, right * level, clock + 1, period, right_at


@inlined
def tick_long(
    x, memory, at, level, clock, right_at, tail_at, parts, stereo, transform, bins, products_from, inverse_from
):
    left = cv.head(memory, at, cv.HEAD, clock, x)
    right = cv.head(memory, at + right_at, cv.HEAD, clock, x) if stereo > 0 else left
    far_left, far_right = cv.tail(
        memory, at + tail_at, x, clock % cv.BLOCK, clock // cv.BLOCK,
        parts, stereo, transform, bins, products_from, inverse_from,
    )  # fmt: skip
    left += far_left
    right = right + far_right if stereo > 0 else left
    fixed = (right_at, tail_at, parts, stereo, transform, bins, products_from, inverse_from)
    return (left * level, right * level, clock + 1, *fixed)


def read(path, rate):
    """Return the response in *path* at *rate*, shape (1 or 2, taps).

    Raises
    ------
    ValueError
        If it cannot be read, is empty, silent, longer than `LONGEST_S` or has more than two channels.
    """
    import soundfile

    try:
        sound, own_rate = soundfile.read(path, always_2d=True)
    except soundfile.LibsndfileError as error:
        raise ValueError(f"impulse-response: {path} cannot be read as audio ({error.error_string})") from None
    if sound.shape[1] > 2:
        raise ValueError(f"impulse-response: {path} has {sound.shape[1]} channels; wanted 1 or 2")
    if len(sound) > LONGEST_S * own_rate:
        raise ValueError(f"impulse-response: {path} is {len(sound) / own_rate:.1f} s long; cut it to {LONGEST_S:g} s")
    if not np.isfinite(sound).all() or not sound.any():
        raise ValueError(f"impulse-response: {path} holds nothing to be heard, or no finite numbers")
    if own_rate != rate:
        import soxr

        sound = soxr.resample(sound, own_rate, rate, quality="VHQ") * (own_rate / rate)
    return sound.T


def _long(responses):
    """Code for a response with a tail."""
    channels = len(responses)
    heads = [cv.head_memory(r[: cv.HEAD]) for r in responses]
    far = cv.tail_memory(responses[:, cv.HEAD :])
    parts = -(-(responses.shape[1] - cv.HEAD) // cv.BLOCK)
    share = cv.shares(parts)
    state = {"clock": 0, "right_at": len(heads[0]), "tail_at": sum(map(len, heads)), "parts": parts}
    state |= {"stereo": channels - 1, "transform": share.transform, "bins": share.bins}
    state |= {"products_from": share.products_from, "inverse_from": share.inverse_from}
    return Code(tick=tick_long, prepare=prepare, state=state, memory=np.concatenate([*heads, far]))


def _short(responses):
    heads = [cv.head_memory(r) for r in responses]
    state = {"clock": 0, "period": len(heads[0]) // 5, "right_at": len(heads[0]) if len(heads) > 1 else 0}
    return Code(tick=tick_short, prepare=prepare, state=state, memory=np.concatenate(heads))


@kind(
    "impulse-response",
    about="The guitar through a room or a cabinet that you have recorded: your own WAV, mono or stereo.",
    ports=("x",),
    parameters=(
        File("file", "an impulse response, up to 6 s"),
        Choice("loudness", ("matched", "as-is"), "matched", "matched: noise comes out as loud as it goes in"),
        Parameter("level", "dB", -60.0, 24.0, 0.0),
    ),
    law="y = x * h, the convolution with the file",
    source="W. G. Gardner, Efficient convolution without input-output delay, JAES 43(3), 1995 (from memory).",
    outputs=("left", "right"),
    base_rate_only=True,
)
def impulse_response(setting):
    responses = read(setting.choices["file"], setting.rate)
    if setting.choices["loudness"] == "matched":
        responses = responses / np.sqrt((responses**2).sum(axis=1).max())
    return _short(responses) if responses.shape[1] <= cv.HEAD else _long(responses)

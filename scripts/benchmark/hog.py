"""Missed callbacks while a pure-Python loop keeps the interpreter busy: native callback against an ordinary one.

    python hog.py native|python HOG(0|1) SECONDS      one run on the present JACK server, a JSON line on stdout

A server's cycle in which the callback did not run is a miss.  Lateness is against the schedule that the earliest
of the callbacks around keep to.
"""

import json
import subprocess
import sys
import threading
import time
from pathlib import Path

import numpy as np
from scipy.ndimage import minimum_filter1d

RATE, BLOCK = 48_000, 64
PERIOD_NS = BLOCK * 1e9 / RATE
SCHEDULE = 401  # callbacks around one that tell the schedule: the server starts a new one after a dropout
TESTS = Path(__file__).parents[2] / "tests"

_LOGGED = """\
from numba import int64
from rtfx.engine.callback import process
from rtfx.engine.events import drain
from rtfx.engine.finish import meter
from rtfx.engine.words import CLOCK, SIZE
from rtfx.native.clock import now_ns
from rtfx.native.memory import load_i64p, word_at


def {kernel}(inp, out, frames, time, flags, words):
    log = load_i64p(words, SIZE)
    if log[0] < log[1]:
        log[2 + log[0]] = now_ns(word_at(words, CLOCK))
        log[0] += 1
    return process(inp, out, int64(frames), flags, words)
"""


def summary(stamps):
    """Return misses, cycles in all, and the 99th percentile of lateness in us, from entry times in ns."""
    steps = np.maximum(np.rint(np.diff(stamps) / PERIOD_NS), 1).astype(int)
    cycle = np.concatenate([[0], np.cumsum(steps)])
    after = stamps - cycle * PERIOD_NS
    late = after - minimum_filter1d(after, SCHEDULE)
    return {
        "missed": int(cycle[-1] + 1 - len(stamps)),
        "of": int(cycle[-1] + 1),
        "late_p99_us": round(float(np.percentile(np.maximum(late, 0), 99)) / 1000, 1),
    }


def native(seconds):
    """Stream with rtfx's callback, entry times logged by native code."""
    from graphs import plan
    from numba import types

    from rtfx.compiler import build
    from rtfx.devices.artifact import load, save
    from rtfx.devices.portaudio import PortAudio
    from rtfx.engine.host import Host
    from rtfx.engine.layout import OFFSET, Shared
    from rtfx.native.options import f32p, i64p

    shared = Shared(bytearray(8 * OFFSET["SIZE"]))
    shared.set("RATE", RATE)
    shared.set("CEILING", 0.9)
    worked_out = plan("balanced")
    linear = sum(not s.log for s in worked_out.slots)
    host = Host(shared, load(save(worked_out), 1, [s.value for s in worked_out.slots], linear), 1, 2)
    signature = types.int32(f32p, f32p, types.ulong, types.voidptr, types.ulong, i64p)
    host.callback = build.compile_at(build.write(_LOGGED), signature)
    log = np.zeros(int(2.5 * seconds * RATE / BLOCK) + 1000, np.int64)
    log[1] = len(log) - 2
    host.words = np.concatenate([host.words, [log.ctypes.data]])
    device = PortAudio("system", "system", float(RATE), 0, 0)
    device.start(host)
    yield
    device.stop()
    yield log[2 : 2 + log[0]].astype(float)


def python(seconds):
    """Stream with an ordinary Python callback that does the same with numpy."""
    import sounddevice
    from graphs import numbers, taps
    from python_chain import Chain

    chain, stamps = Chain(numbers(), taps()), []

    def callback(inp, out, frames, when, status):
        stamps.append(time.monotonic_ns())
        out[:] = chain.balanced(inp[:, 0])[:, None]

    stream = sounddevice.Stream(
        samplerate=RATE, blocksize=0, device="system", channels=(1, 2), dtype="float32", callback=callback
    )
    stream.start()
    yield
    stream.stop()
    stream.close()
    yield np.array(stamps, float)


def one_run(way, hog, seconds):
    """Stream for *seconds* with or without the hog and print the summary."""
    run = {"native": native, "python": python}[way](seconds)
    next(run)
    time.sleep(0.5)
    if hog:
        threading.Thread(target=_busy, daemon=True).start()
    time.sleep(seconds)
    print(json.dumps(summary(next(run))), flush=True)


def _busy():
    count = 0
    while True:
        count += 1


def compare(seconds):
    """Return {"native": …, "python": …, "idle": …}: under the hog, and native without it, on a server of our own."""
    sys.path.insert(0, str(TESTS))
    from rig.server import JackServer

    results = {}
    with JackServer(BLOCK, RATE, sync=False, realtime=True) as server:
        for label, way, hog in (("idle", "native", 0), ("native", "native", 1), ("python", "python", 1)):
            command = [sys.executable, __file__, way, str(hog), str(seconds)]
            done = subprocess.run(command, env=server.env, capture_output=True, text=True, timeout=4 * seconds + 60)
            if done.returncode:
                raise RuntimeError(f"{label}: {done.stderr}")
            results[label] = json.loads(done.stdout)
    return results


if __name__ == "__main__":
    one_run(sys.argv[1], sys.argv[2] == "1", float(sys.argv[3]))

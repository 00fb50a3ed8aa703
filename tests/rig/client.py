"""Two JACK clients, "rigout" and "rigin", that feed a program and capture its answer, exact to the sample.

The process callback is native: no Python runs in JACK's thread, so the rig itself causes no dropout.  Both clients
start at a common frame of JACK's own clock; with the program between them there is no cycle, hence no delay.

Written by: the test thread while RUN is 0.  Read by: JACK's thread, which alone writes the rest.
"""

import ctypes
import os
import time

import numpy as np
from numba import carray, cfunc, njit, types
from numba.extending import intrinsic

AUDIO = b"32 bit float mono audio"
IS_INPUT, IS_OUTPUT = 1, 2
RUN, AT, LENGTH, CLIENT, PORTS, START, LAST, GAPS, PACE, PACE_START, PACE_FRAMES, OUTWARD = range(12)
PORT, BUFFER, CLOCK, WORDS = 16, 20, 24, 32
MONOTONIC = 1

_jack = ctypes.CDLL("libjack.so.0", mode=ctypes.RTLD_GLOBAL)
_p, _s, _i = ctypes.c_void_p, ctypes.c_char_p, ctypes.c_int


def _declare(name, result, *arguments):
    function = getattr(_jack, name)
    function.restype, function.argtypes = result, list(arguments)
    return function


client_open = _declare("jack_client_open", _p, _s, _i, _p)
client_close = _declare("jack_client_close", _i, _p)
activate = _declare("jack_activate", _i, _p)
set_process = _declare("jack_set_process_callback", _i, _p, _p, _p)
register = _declare("jack_port_register", _p, _p, _s, _s, ctypes.c_ulong, ctypes.c_ulong)
frame_time = _declare("jack_last_frame_time", ctypes.c_uint32, _p)
freewheel = _declare("jack_set_freewheel", _i, _p, _i)
set_buffer = _declare("jack_set_buffer_size", _i, _p, ctypes.c_uint32)
get_buffer = _declare("jack_get_buffer_size", ctypes.c_uint32, _p)
connect = _declare("jack_connect", _i, _p, _s, _s)

_x_buffer = types.ExternalFunction("jack_port_get_buffer", types.voidptr(types.voidptr, types.uint32))
_x_frame = types.ExternalFunction("jack_last_frame_time", types.uint32(types.voidptr))
_x_usleep = types.ExternalFunction("usleep", types.int32(types.uint32))
_x_clock = types.ExternalFunction("clock_gettime", types.int32(types.int32, types.voidptr))


@intrinsic
def _pointer(typing_context, word):
    def generate(context, builder, signature, args):
        return builder.inttoptr(args[0], context.get_value_type(types.voidptr))

    return types.voidptr(types.int64), generate


@njit
def _move(words, n):
    """Copy one period between the JACK ports and our buffers; silence outside a play."""
    length, at = words[LENGTH], words[AT]
    for port in range(words[PORTS]):
        sound = carray(_x_buffer(_pointer(words[PORT + port]), n), (n,), np.float32)
        if words[RUN] == 2:
            ours = carray(_pointer(words[BUFFER + port]), (length,), np.float32)
            for i in range(n):
                if words[OUTWARD] == 1:
                    sound[i] = ours[at + i] if at + i < length else np.float32(0)
                elif at + i < length:
                    ours[at + i] = sound[i]
        elif words[OUTWARD] == 1:
            for i in range(n):
                sound[i] = np.float32(0)


@njit
def _hold_back(words, n):
    """In freewheel, sleep so that the graph runs at PACE frames a second."""
    _x_clock(np.int32(MONOTONIC), words[CLOCK:].ctypes)
    now = words[CLOCK] * 1_000_000_000 + words[CLOCK + 1]
    if words[PACE_START] == 0:
        words[PACE_START] = now
        words[PACE_FRAMES] = 0
    words[PACE_FRAMES] += n
    ahead = words[PACE_START] + words[PACE_FRAMES] * 1_000_000_000 // words[PACE] - now
    if ahead > 50_000:
        _x_usleep(np.uint32(min(ahead // 1000, 100_000)))


@cfunc(types.int32(types.uint32, types.voidptr))
def _process(frames, argument):
    words = carray(argument, (WORDS,), np.int64)
    n = np.int64(frames)
    time_now = np.int64(_x_frame(_pointer(words[CLIENT])))
    if words[RUN] == 2 and time_now != words[LAST]:
        words[GAPS] += 1
    words[LAST] = time_now + n
    if words[RUN] == 1 and time_now >= words[START]:
        words[RUN] = 2
        words[AT] = 0
    _move(words, n)
    if words[RUN] == 2:
        words[AT] += n
        if words[AT] >= words[LENGTH]:
            words[RUN] = 3
    if words[PACE] > 0:
        _hold_back(words, n)
    return 0


class _Client:
    def __init__(self, name, ports, outward):
        self.pointer = client_open(name.encode(), 1, None)
        if not self.pointer:
            raise RuntimeError("no JACK server; start one with tests/rig/server.py")
        self.words = np.zeros(WORDS, np.int64)
        self.words[CLIENT], self.words[PORTS], self.words[OUTWARD] = self.pointer, ports, int(outward)
        word, flag = ("out", IS_OUTPUT) if outward else ("in", IS_INPUT)
        for i in range(ports):
            self.words[PORT + i] = register(self.pointer, f"{word}_{i + 1}".encode(), AUDIO, flag, 0)
        set_process(self.pointer, _process.address, self.words.ctypes.data)
        activate(self.pointer)


class Rig:
    """Feeds one channel and captures two; keep it open for as many plays as needed."""

    def __init__(self, server, rate=48_000):
        os.environ["JACK_DEFAULT_SERVER"] = server.name
        os.environ["JACK_NO_START_SERVER"] = "1"
        self.rate = rate
        self.source, self.sink = _Client("rigout", 1, True), _Client("rigin", 2, False)
        self.clients = (self.source, self.sink)

    @property
    def gaps(self):
        """How often JACK's clock jumped while the last play ran."""
        return int(sum(c.words[GAPS] for c in self.clients))

    def set_period(self, frames):
        """Change the server's frames a period under everyone."""
        assert set_buffer(self.source.pointer, frames) == 0
        until = time.monotonic() + 5
        while get_buffer(self.source.pointer) != frames and time.monotonic() < until:
            time.sleep(0.01)

    def connect(self, source, sink):
        """Wire two ports by their full names."""
        assert connect(self.source.pointer, source.encode(), sink.encode()) in (0, 17)

    def play(self, feed, wheel=False, during=None, seconds=60.0):
        """Feed *feed* (float32) and return what came back at the same time, float32 of shape (2, frames).

        With *wheel* the server runs without deadlines, held back to real time; *during* is called once it runs.
        """
        feed = np.ascontiguousarray(feed, np.float32)
        captured = np.zeros((2, len(feed)), np.float32)
        if wheel:
            freewheel(self.source.pointer, 1)
        self.source.words[PACE_START] = 0
        self.source.words[PACE] = self.rate if wheel else 0
        self._arm(feed, captured)
        try:
            if during is not None:
                during()
            self._wait(seconds)
        finally:
            self.source.words[PACE] = 0
            if wheel:
                freewheel(self.source.pointer, 0)
        return captured

    def _arm(self, feed, captured):
        start = frame_time(self.source.pointer) + 8 * get_buffer(self.source.pointer)
        for client, buffers in ((self.source, [feed]), (self.sink, captured)):
            words = client.words
            words[RUN] = 0
            words[LENGTH], words[GAPS], words[START] = len(feed), 0, start
            for i, buffer in enumerate(buffers):
                words[BUFFER + i] = buffer.ctypes.data
        for client in self.clients:
            client.words[RUN] = 1

    def _wait(self, seconds):
        until = time.monotonic() + seconds
        while any(c.words[RUN] != 3 for c in self.clients):
            if time.monotonic() > until:
                raise TimeoutError("the rig has not come to the end of its feed")
            time.sleep(0.005)

    def close(self):
        """Leave the server."""
        for client in self.clients:
            client_close(client.pointer)

    def __enter__(self):
        return self

    def __exit__(self, *_):
        self.close()

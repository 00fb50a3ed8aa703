"""A private JACK server on the dummy driver: audio that needs no sound card.

It dies with the test that started it.  A server that was killed leaves an entry in JACK's registry, and after eight
such entries none starts: `stop` therefore starts a killed one again under its name and ends it properly.
"""

import ctypes
import os
import shutil
import signal
import subprocess
import time
import uuid

_NO_START, _BY_NAME = 1, 4
_DEATH_SIGNAL = 1


_QUIET = ctypes.CFUNCTYPE(None, ctypes.c_char_p)(lambda message: None)


def _die_with_parent():
    ctypes.CDLL(None).prctl(_DEATH_SIGNAL, signal.SIGTERM)


class JackServer:
    """Within ``with``, a server with this *period*.

    *sync* makes it wait for its clients in every cycle; *realtime* asks for a real-time priority.
    """

    def __init__(self, period=128, rate=48_000, sync=True, realtime=False):
        if shutil.which("jackd") is None:
            raise RuntimeError("jackd is missing; install it: apt-get install jackd2")
        self.name = "t" + uuid.uuid4().hex[:8]
        driver = ["-d", "dummy", "-r", str(rate), "-p", str(period)]
        self.command = ["jackd", "-n", self.name, "-R" if realtime else "-r", *(["-S"] if sync else []), *driver]
        self.process = None
        self.killed = False

    @property
    def env(self):
        """Environment for programs that are to find this server and no other."""
        own = {"JACK_DEFAULT_SERVER": self.name, "JACK_NO_START_SERVER": "1", "JACK_NO_AUDIO_RESERVATION": "1"}
        return os.environ | own

    def start(self, seconds=10.0):
        """Start the server and wait until a client can be opened."""
        self.process = subprocess.Popen(
            self.command, env=self.env, stdin=subprocess.DEVNULL, stdout=subprocess.DEVNULL,
            stderr=subprocess.DEVNULL, preexec_fn=_die_with_parent,
        )  # fmt: skip
        until = time.monotonic() + seconds
        while not self._answers():
            if self.process.poll() is not None or time.monotonic() > until:
                raise RuntimeError(f"jackd did not start: {' '.join(self.command)}")
            time.sleep(0.02)
        return self

    def _answers(self):
        jack = ctypes.CDLL("libjack.so.0")
        jack.jack_set_error_function(_QUIET)
        jack.jack_set_info_function(_QUIET)
        jack.jack_client_open.restype = ctypes.c_void_p
        jack.jack_client_close.argtypes = [ctypes.c_void_p]
        status = ctypes.c_int(0)
        client = jack.jack_client_open(b"probe", _NO_START | _BY_NAME, ctypes.byref(status), self.name.encode())
        if client:
            jack.jack_client_close(client)
        return bool(client)

    def kill(self):
        """End the server as a crash would."""
        self.process.kill()
        self.process.wait()
        self.killed = True

    def stop(self):
        """End the server properly, so that nothing of it stays in the registry."""
        if self.process.poll() is not None and self.killed:
            self.start()
        self.process.terminate()
        self.process.wait(10)
        self.killed = False

    def __enter__(self):
        return self.start()

    def __exit__(self, *_):
        self.stop()

"""Single keys while playing, in a terminal of the test's own."""

import os
import pty
import re
import select
import subprocess
import sys
import time

import pytest
from patches import preset

PRESET = str(preset("fifth-above"))
ESCAPES = re.compile(r"\x1b\[[0-9;?]*[A-Za-z]")


class Terminal:
    """`rtfx play` in a pseudo-terminal."""

    def __enter__(self):
        self.ours, theirs = pty.openpty()
        command = [sys.executable, "-c", "from rtfx.cli.main import run; run()", "play", PRESET, "--device", "built-in"]
        environment = os.environ | {"TERM": "xterm", "COLUMNS": "100", "LINES": "30"}
        self.process = subprocess.Popen(command, stdin=theirs, stdout=theirs, stderr=theirs, env=environment)
        os.close(theirs)
        return self

    def __exit__(self, *_):
        self.process.kill()
        self.process.wait()
        os.close(self.ours)

    def press(self, key):
        os.write(self.ours, key.encode())

    def shows(self, words, seconds=20):
        """Tell whether *words* come on the screen from now on."""
        seen, end = "", time.monotonic() + seconds
        while time.monotonic() < end:
            if select.select([self.ours], [], [], 0.1)[0]:
                seen += os.read(self.ours, 65536).decode(errors="replace")
                if words in ESCAPES.sub("", seen):
                    return True
        return False


@pytest.fixture
def terminal():
    with Terminal() as running:
        assert running.shows("MUTED")
        yield running


def test_m_b_x_and_q_do_what_the_screen_says(terminal):
    terminal.press("m")
    assert terminal.shows("sound    on")
    terminal.press("b")
    assert terminal.shows("guitar alone", 5)
    terminal.press("x")
    assert terminal.shows("silence; m brings the sound back")
    assert terminal.shows("MUTED")
    terminal.press("q")
    assert terminal.process.wait(5) == 0


def test_the_screen_names_the_carrier(terminal):
    assert terminal.shows("329.63 Hz  E4 +0.0 c")

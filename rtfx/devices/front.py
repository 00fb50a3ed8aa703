"""The front's side of the sound process: start it, watch it, end it, start it again.

A sound process that has stopped answering (its audio server died, or it was killed) is ended from outside, because
PortAudio then hangs in every call of its own.  The next one waits for the device by being started again and again.
The mute state, the parameters and the counters live in the shared block, so the sound comes back as it was.
"""

from __future__ import annotations

import json
import os
import subprocess
import sys
import threading
import time
from collections.abc import Callable
from contextlib import suppress
from dataclasses import dataclass

from rtfx.compiler.driver import Plan
from rtfx.devices.artifact import save
from rtfx.engine import queues, share
from rtfx.engine.layout import PARAMETERS, SHOWN

STUCK_S = 0.6
"""No callback for this long while playing: the device is gone."""
READY_S = 20.0
RETRY_S = 0.2
FADE_S = 0.03


@dataclass(frozen=True)
class Wish:
    """The device a player asked for, part of a name or a number each way, or "built-in"; `block` 0: its own."""

    input: str | None = None
    output: str | None = None
    rate: float = 48_000.0
    block: int = 0
    channel: int = 0
    speed: float = 1.0


@dataclass(frozen=True)
class Gap:
    """A stretch without sound while the sound process was started again: after which frame, and how long."""

    frame: int
    seconds: float


class Front:
    """Keeps one sound process playing one plan.  `tell` is called with a sentence whenever something happens."""

    def __init__(self, wish: Wish, tell: Callable[[str], None], ceiling_db: float = -1.0, muted: bool = True) -> None:
        self.wish, self.tell = wish, tell
        self.descriptor = share.create()
        self.shared = share.attach(self.descriptor)
        self.shared.set("RATE", wish.rate)
        self.shared.set("CEILING", 10 ** (ceiling_db / 20))
        self.shared.set("FADE_FRAMES", round(FADE_S * wish.rate))
        self.shared.set("MUTE", int(muted))
        self.shared.set("INPUT_CHANNEL", wish.channel)
        self.process: subprocess.Popen | None = None
        self.plan: Plan | None = None
        self.plans: dict[int, Plan] = {}
        self.number = 0
        self.device = ""
        self.state = "starting"
        self.refusal = ""
        self.seen = (0, 0.0)
        self.values: list[float] = []
        self.gaps: list[Gap] = []
        self.lost = (0, 0.0)
        self._spawn()

    # The process

    def _spawn(self) -> None:
        """Start a sound process; it gets ready while we do other things."""
        command = [sys.executable, "-m", "rtfx.devices.sound", str(self.descriptor)]
        environment = os.environ | {"JACK_NO_START_SERVER": "1"}
        self.process = subprocess.Popen(
            command, stdin=subprocess.PIPE, stdout=subprocess.PIPE, stderr=subprocess.DEVNULL, text=True,
            pass_fds=(self.descriptor,), env=environment, start_new_session=True,
        )  # fmt: skip
        self.state = "starting"
        self.seen = (int(self.shared.get("BLOCKS")), time.monotonic())
        threading.Thread(target=self._listen, args=(self.process,), daemon=True).start()

    def _listen(self, process: subprocess.Popen) -> None:
        assert process.stdout is not None
        for line in process.stdout:
            fact = json.loads(line)
            if process is self.process:
                self._hear(fact)

    def _hear(self, fact: dict) -> None:
        if fact["event"] == "playing":
            self.device, self.seen = fact["device"], (int(self.shared.get("BLOCKS")), time.monotonic())
            self.state = "playing"
            self._note_gap()
            self.tell(f"playing on {self.device}")
        elif fact["event"] == "refused":
            self.refusal = fact["why"]
        elif fact["event"] == "absent":
            if self.number == 1 and not self.device:
                self.refusal = fact["why"]
            elif self.state != "waiting":
                self.tell(f"waiting for the device: {fact['why']}")
            self.state = "waiting"

    def _order(self, **order) -> None:
        assert self.process is not None
        assert self.process.stdin is not None
        with suppress(OSError):  # it may have ended; `watch` will see that and start another
            self.process.stdin.write(json.dumps(order) + "\n")
            self.process.stdin.flush()

    # The graph

    def _graph(self) -> dict:
        assert self.plan is not None
        linear = sum(not s.log for s in self.plan.slots)
        shown = [s.index for s in self.plan.shows][:SHOWN]
        return {
            "path": self.path,
            "number": self.number,
            "parameters": self.values,
            "first_log": linear,
            "shown": shown,
        }

    def play(self, plan: Plan) -> None:
        """Let *plan* be heard: at once on the first call, by a crossfade later on."""
        if len(plan.slots) > PARAMETERS:
            raise ValueError(f"the patch has {len(plan.slots)} parameters; live it may have {PARAMETERS}")
        self.path = save(plan)
        self.plan, self.number = plan, self.number + 1
        self.plans[self.number] = plan
        self.values = [s.value for s in plan.slots]
        if self.number == 1:
            self._open()
        else:
            self._order(order="swap", graph=self._graph())

    def _open(self) -> None:
        self._order(order="open", graph=self._graph(), **self.wish.__dict__)

    def set(self, target: str, value: float) -> None:
        """Send a parameter ("block.parameter") on its way to *value*, in its own unit."""
        assert self.plan is not None
        slot = self.plan.slot(target)
        if not slot.low <= value <= slot.high:
            raise ValueError(f"{target} = {value:g} is outside {slot.low:g} to {slot.high:g}")
        self.values[slot.index] = value
        queues.send(self.shared, self.number, slot.index, value)

    # Watching

    def watch(self) -> None:
        """Look after the sound process; call it at least five times a second."""
        self.shared.set("BEAT_FRONT", time.monotonic_ns())
        assert self.process is not None
        blocks, now = int(self.shared.get("BLOCKS")), time.monotonic()
        if blocks != self.seen[0]:
            self.seen = (blocks, now)
        ended = self.process.poll() is not None
        stuck = self.state == "playing" and now - self.seen[1] > STUCK_S
        slow = self.state == "starting" and self.number > 0 and now - self.seen[1] > READY_S
        if (ended or stuck or slow) and not self.refusal:
            self._again(ended)

    def _again(self, ended: bool) -> None:
        if self.state == "playing":
            self.lost = (int(self.shared.get("FRAMES")), self.seen[1])
            self.tell("the sound process has ended" if ended else "the audio device has stopped answering")
            self.tell("starting again; the sound comes back by itself")
        elif self.state == "waiting":
            time.sleep(RETRY_S)
        waiting = self.state in ("waiting", "playing")
        self._kill()
        self.shared.set("RESTARTS", self.shared.get("RESTARTS") + 1)
        self._spawn()
        if self.number:
            self._open()
        self.state = "waiting" if waiting else "starting"

    def _note_gap(self) -> None:
        frame, since = self.lost
        if since:
            self.gaps.append(Gap(frame, round(time.monotonic() - since, 3)))
            self.lost = (0, 0.0)

    def _kill(self) -> None:
        assert self.process is not None
        self.process.kill()
        self.process.wait()
        for pipe in (self.process.stdin, self.process.stdout):
            if pipe is not None:
                with suppress(OSError):  # a write was under way when it ended
                    pipe.close()

    def close(self) -> None:
        """Mute by the ramp, end the sound process and let the memory go."""
        self._order(order="stop")
        assert self.process is not None
        try:
            self.process.wait(1.5)
        except subprocess.TimeoutExpired:
            self._kill()

    # What a player does

    def mute(self, on: bool) -> None:
        """Go to silence, or come back, by a ramp."""
        self.shared.set("MUTE", int(on))

    def bypass(self, on: bool) -> None:
        """Hear the guitar alone, or the patch again."""
        self.shared.set("BYPASS", int(on))

    def panic(self) -> None:
        """Silence at once, cut all tails, and stay muted."""
        self.shared.set("MUTE", 1)
        self.shared.set("PANIC", self.shared.get("PANIC") + 1)

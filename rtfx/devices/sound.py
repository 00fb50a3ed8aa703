"""The sound process: it owns the device and the callback, loads built patches, and does nothing else.

    python -m rtfx.devices.sound DESCRIPTOR

Orders come as JSON lines on standard input, answers go to standard output.  The end of standard input means that
the front is gone: the sound is muted by its ramp and the process ends.  It always ends by `os._exit`, because
PortAudio hangs in every call once an audio server has died.
"""

from __future__ import annotations

import json
import os
import queue
import sys
import threading
import time
from typing import Any

from rtfx.devices import artifact
from rtfx.devices.builtin import NAME, BuiltIn
from rtfx.devices.errors import DeviceError, DeviceGone
from rtfx.devices.portaudio import PortAudio
from rtfx.engine import share
from rtfx.engine.host import Host

TEND_S = 0.02
MUTED_WITHIN_S = 0.5
GOODBYE_S = 0.5


def say(**facts) -> None:
    """Answer the front; it may be gone."""
    try:
        print(json.dumps(facts), flush=True)
    except OSError:
        os._exit(0)


def _read_orders(orders: queue.Queue) -> None:
    for line in sys.stdin:
        orders.put(json.loads(line))
    orders.put({"order": "gone"})


def open_device(order: dict):
    """Return the device that the order asks for."""
    if order["input"] == NAME:
        return BuiltIn(order["rate"], order["block"], order.get("speed", 1.0))
    return PortAudio(order["input"], order["output"], order["rate"], order["block"], order["channel"])


class Sound:
    """The control thread of the sound process."""

    def __init__(self, shared) -> None:
        self.shared = shared
        self.orders: queue.Queue = queue.Queue()
        self.device: Any = None
        self.host: Any = None
        threading.Thread(target=_read_orders, args=(self.orders,), daemon=True).start()

    def run(self) -> None:
        """Obey until the front is gone or says stop."""
        say(event="ready")
        while True:
            self._beat()
            try:
                order = self.orders.get(timeout=TEND_S)
            except queue.Empty:
                self._tend()
                continue
            getattr(self, f"do_{order['order']}")(order)

    def _beat(self) -> None:
        self.shared.set("BEAT_SOUND", time.monotonic_ns())

    def _tend(self) -> None:
        if self.host is not None:
            self.host.tend()
            if not self.device.active:
                say(event="lost", why="the audio device or its server has stopped")
                os._exit(3)

    def do_open(self, order: dict) -> None:
        """Open the device and start to play the graph; ends the process if it cannot."""
        graph = artifact.load(**order["graph"])
        try:
            self.device = open_device(order)
            self.host = Host(self.shared, graph, self.device.in_channels, self.device.out_channels)
            self.device.start(self.host)
        except DeviceError as error:
            self._beat()
            say(event="absent" if isinstance(error, DeviceGone) else "refused", why=str(error))
            os._exit(2)
        say(event="playing", device=self.device.description)

    def do_swap(self, order: dict) -> None:
        """Fade another graph in."""
        self.host.swap(artifact.load(**order["graph"]))
        self.host.tend()
        say(event="swapped", graph=order["graph"]["number"])

    def do_gone(self, order: dict) -> None:
        """The front is gone: mute by the ramp, and end."""
        self.shared.set("MUTE", 1)
        until = time.monotonic() + MUTED_WITHIN_S
        while self.host is not None and self.shared.get("GAIN") > 0 and time.monotonic() < until:
            time.sleep(0.01)
        self._leave()

    def _leave(self) -> None:
        """Say goodbye to the device, but do not wait long for it: a dead server never answers."""
        if self.host is not None and self.device.active:
            goodbye = threading.Thread(target=self.device.stop, daemon=True)
            goodbye.start()
            goodbye.join(GOODBYE_S)
        os._exit(0)

    def do_stop(self, order: dict) -> None:
        """The same, asked for."""
        self.do_gone(order)


def main() -> None:
    """Start on the shared block whose descriptor is the first argument."""
    Sound(share.attach(int(sys.argv[1]))).run()


if __name__ == "__main__":
    main()

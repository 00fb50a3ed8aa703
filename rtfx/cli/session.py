"""One evening with `rtfx play`: build, play, watch, obey keys, keep, end."""

from __future__ import annotations

import json
import signal
import sys
import threading
import time
from pathlib import Path

from rtfx.cli.common import load_with, takes_folder
from rtfx.cli.keys import Keys
from rtfx.cli.screen import Screen
from rtfx.cli.status import status
from rtfx.compiler.driver import Plan, plan
from rtfx.devices.front import Front, Wish
from rtfx.patch import PatchError
from rtfx.takes.keep import Take, new_folder

LOOK_S = 0.05
JSON_S = 1.0
WARNINGS = {
    "resets": "the patch gave a number that is none; it was silenced and started afresh",
    "dropped_frames": "the recording could not keep up; it has a hole",
    "dropped_events": "a move came for a sound that was gone",
}


class Session:
    """Plays one patch file until the player has had enough."""

    def __init__(
        self, path: Path, wish: Wish, quality: str, settings: list[str] | None, seconds: float | None,
        unmuted: bool, record: bool, as_json: bool,
    ) -> None:  # fmt: skip
        self.path, self.wish, self.quality, self.settings = path, wish, quality, settings
        self.seconds, self.record, self.as_json = seconds, record, as_json
        self.messages: list[str] = []
        self.front = Front(wish, self.tell, muted=not unmuted)
        self.take: Take | None = None
        self.saved = 0.0
        self.over = False
        self.built: Plan | None = None
        self.warned: dict[str, int] = {}
        self.builder: threading.Thread | None = None

    def tell(self, sentence: str) -> None:
        """Say something to the player, now."""
        self.messages.append(sentence)
        line = json.dumps({"message": sentence, "time": time.time()}) if self.as_json else f"rtfx: {sentence}"
        print(line, file=sys.stdout if self.as_json else sys.stderr, flush=True)

    def run(self) -> None:
        """Play to the end; the sound process is gone afterwards, whatever happens."""
        signal.signal(signal.SIGTERM, lambda *_: setattr(self, "over", True))
        signal.signal(signal.SIGINT, lambda *_: setattr(self, "over", True))
        try:
            self._begin()
            with Keys() as keys, Screen(shown=not self.as_json) as screen:
                self._loop(keys, screen)
        finally:
            if self.take is not None:
                played = self.front.plan.patch.text if self.front.plan else ""
                self.take.finish(played, [(g.frame, g.seconds) for g in self.front.gaps])
            self.front.close()
        if self.take is not None:
            where = self.take.folder
            self._say_end(f"kept {self.take.frames / self.wish.rate:.1f} s in {where} (dry.wav, wet.wav)")

    def _say_end(self, sentence: str) -> None:
        self.tell(sentence) if self.as_json else print(sentence)

    def _begin(self) -> None:
        self.saved = self._stamp()
        self.front.play(plan(load_with(self.path, self.settings), self.wish.rate, self.quality))
        if self.record:
            self.start_take()

    def start_take(self) -> None:
        """Begin to keep what is played."""
        self.take = Take(new_folder(takes_folder()), self.front.shared, self.wish.rate)

    def _loop(self, keys: Keys, screen: Screen) -> None:
        said = 0.0
        while not self.over:
            self.front.watch()
            if self.front.refusal:
                from rtfx.devices.errors import DeviceError

                raise DeviceError(self.front.refusal)
            self._follow_file()
            if self.take is not None:
                self.take.write()
            facts = status(self.front)
            self._warn(facts)
            screen.show(facts, self.messages)
            if self.as_json and time.monotonic() - said >= JSON_S:
                said = time.monotonic()
                print(json.dumps(facts), flush=True)
            self.over = self.over or (self.seconds is not None and facts["seconds"] >= self.seconds)
            self._obey(keys.pressed(LOOK_S))

    def _warn(self, facts: dict) -> None:
        """Say at once what a player should know about."""
        for fact, sentence in WARNINGS.items():
            if facts[fact] > self.warned.get(fact, 0):
                self.tell(sentence)
            self.warned[fact] = facts[fact]
        if self.take is not None and self.take.fault and self.take.fault not in self.messages:
            self.tell(self.take.fault)

    def _obey(self, key: str) -> None:
        if key == "m":
            self.front.mute(not self.front.shared.get("MUTE"))
        elif key == "b":
            self.front.bypass(not self.front.shared.get("BYPASS"))
        elif key == "x":
            self.front.panic()
            self.tell("silence; m brings the sound back")
        elif key == "q":
            self.over = True

    # The patch file, saved again

    def _stamp(self) -> float:
        try:
            return self.path.stat().st_mtime
        except OSError:
            return self.saved

    def _follow_file(self) -> None:
        """Build in the background what was saved; a fault leaves the present sound playing."""
        if self.built is not None:
            self.front.play(self.built)
            self.tell(f"changed to '{self.built.patch.name}'")
            self.built = None
        if self._stamp() != self.saved and (self.builder is None or not self.builder.is_alive()):
            self.saved = self._stamp()
            self.builder = threading.Thread(target=self._build, daemon=True)
            self.builder.start()

    def _build(self) -> None:
        try:
            worked_out = plan(load_with(self.path, self.settings), self.wish.rate, self.quality)
            worked_out.build()
            self.built = worked_out
        except (PatchError, ValueError) as error:
            self.tell(f"not changed: {error}")

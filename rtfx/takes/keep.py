"""Keep what is played: dry and wet sound, written while it is played.

float32 WAV that turns into RF64 beyond 4 GiB; the header is kept current, so that what was written can be read
even if the program is killed.  After a first write error nothing more is written: one more would overwrite the
start of the take.  Wet is what the graph gives, before mute ramp and ceiling: that is what can be rendered again.
"""

from __future__ import annotations

import time
from collections.abc import Iterable
from importlib import metadata
from pathlib import Path

import numpy as np
import tomli_w

from rtfx.engine import queues
from rtfx.engine.layout import Shared

_SET_UPDATE_HEADER_AUTO = 0x1061
_RF64_AUTO_DOWNGRADE = 0x1210
SYNC_S = 1.0


def _open(path: Path, rate: float, channels: int):
    """Open a WAV whose header is always right; soundfile has no public way to ask for that."""
    import soundfile

    file = soundfile.SoundFile(path, "w", round(rate), channels, subtype="FLOAT", format="RF64")
    for command in (_RF64_AUTO_DOWNGRADE, _SET_UPDATE_HEADER_AUTO):
        soundfile._snd.sf_command(file._file, command, soundfile._ffi.NULL, 1)
    return file


class Take:
    """A take being recorded in *folder*, from the audio queue of *shared*."""

    def __init__(self, folder: Path, shared: Shared, rate: float) -> None:
        folder.mkdir(parents=True)
        self.folder, self.shared = folder, shared
        self.files = [_open(folder / "dry.wav", rate, 1), _open(folder / "wet.wav", rate, 2)]
        self.frames, self.fault, self.synced = 0, "", time.monotonic()
        self.start = int(shared.get("FRAMES"))
        self.rate = rate
        shared.set("AUDIO_TAIL", shared.get("AUDIO_HEAD"))
        shared.set("AUDIO_ON", 1)

    def write(self) -> None:
        """Write what has come since the last call; call it at least every few seconds."""
        audio = queues.audio(self.shared)
        if self.fault or not len(audio):
            return
        try:
            self.files[0].write(audio[:, 0])
            self.files[1].write(np.ascontiguousarray(audio[:, 1:]))
            self.frames += len(audio)
            if time.monotonic() - self.synced > SYNC_S:
                self.synced = time.monotonic()
                for file in self.files:
                    file.flush()
        except (OSError, RuntimeError) as error:
            self.fault = f"recording stopped after {self.frames} frames: {error}"
            self._close()

    def _close(self) -> None:
        for file in self.files:
            file.close()

    def finish(self, patch: str, gaps: Iterable[tuple[int, float]] = ()) -> None:
        """Write the rest, close the files, and write down what they are.

        Parameters
        ----------
        patch : str
            The text of the patch as played.
        gaps : iterable of (int, float)
            Frames of the stream after which nothing came for so many seconds.
        """
        self.write()
        self.shared.set("AUDIO_ON", 0)
        if not self.fault:
            self._close()
        marked = [{"frame": f - self.start, "seconds": s} for f, s in gaps if f >= self.start]
        notes = {"rate": self.rate, "frames": self.frames, "rtfx": metadata.version("rtfx"), "gaps": marked}
        (self.folder / "take.toml").write_text(tomli_w.dumps({**notes, "patch": patch}, multiline_strings=True))


def new_folder(root: Path) -> Path:
    """Return a folder name for a take that starts now, not used yet."""
    stamp = time.strftime("%Y-%m-%dT%H-%M-%S")
    folder, n = root / stamp, 2
    while folder.exists():
        folder, n = root / f"{stamp}-{n}", n + 1
    return folder

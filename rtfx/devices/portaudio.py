"""PortAudio: finding a device, and a stream whose callback is native code.

sounddevice documents its base stream class for callbacks that are C functions; it keeps neither the code nor the
userdata alive, so the stream object here does, until after close.
"""

from __future__ import annotations

import ctypes
import ctypes.util

from rtfx.devices.errors import DeviceError, DeviceGone

CLIENT = b"rtfx"


def library():
    """Return the sounddevice module.

    Raises
    ------
    DeviceError
        If PortAudio itself is missing.
    """
    try:
        _name_client()
        import sounddevice
    except OSError as error:
        raise DeviceError(
            f"PortAudio cannot be loaded ({error}). Install it: 'apt-get install libportaudio2' on Debian and its kin, "
            "'brew install portaudio' on macOS; or play with --device built-in, which needs no sound card."
        ) from None
    return sounddevice


def _shared_library():
    """Return PortAudio itself, for what sounddevice does not offer; None if it is not installed by itself."""
    found = ctypes.util.find_library("portaudio")
    return ctypes.CDLL(found) if found else None


def _name_client() -> None:
    """Have JACK call our ports rtfx:in_0 and so on; a PortAudio without JACK does not mind."""
    name_it = getattr(_shared_library(), "PaJack_SetClientName", None)
    if name_it is not None:
        _name_client.kept = ctypes.c_char_p(CLIENT)  # type: ignore[attr-defined]
        name_it(_name_client.kept)  # type: ignore[attr-defined]


def devices() -> list[dict]:
    """Return what PortAudio lists: index, name, host (API), in and out (channels), rate (Hz), and default flags."""
    sd = library()
    hosts = sd.query_hostapis()
    chosen = tuple(sd.default.device)
    return [
        {
            "index": d["index"],
            "name": d["name"],
            "host": hosts[d["hostapi"]]["name"],
            "in": d["max_input_channels"],
            "out": d["max_output_channels"],
            "rate": d["default_samplerate"],
            "default_in": d["index"] == chosen[0] or d["index"] == hosts[0]["default_input_device"],
            "default_out": d["index"] == chosen[1] or d["index"] == hosts[0]["default_output_device"],
        }
        for d in sd.query_devices()
    ]


def find(wanted: str | None, way: str) -> dict:
    """Return the device that *wanted* (a number, or part of a name) means for *way* ("in" or "out").

    Raises
    ------
    DeviceGone
        If there is none: it may come back.
    DeviceError
        If several fit.
    """
    able = [d for d in devices() if d[way] > 0]
    word = {"in": "input", "out": "output"}[way]
    if wanted is None:
        default = next((d for d in able if d[f"default_{way}"]), able[0] if able else None)
        if default is None:
            raise DeviceGone(f"there is no audio {word}. Plug one in, or play with --device built-in.")
        return default
    fits = [d for d in able if wanted == str(d["index"])] or [d for d in able if d["name"] == wanted]
    fits = fits or [d for d in able if wanted.lower() in d["name"].lower()]
    listed = "; ".join(f"[{d['index']}] {d['name']}, {d['host']}" for d in (fits or able))
    if not fits:
        raise DeviceGone(f"no {word} is called '{wanted}'. There are: {listed or 'none'}.")
    if len(fits) > 1:
        raise DeviceError(f"'{wanted}' matches {len(fits)} {word}s: {listed}. Give the number or more of the name.")
    return fits[0]


class PortAudio:
    """A stream on a real device; the callback is native, so Python never stands in its way."""

    def __init__(self, wanted_in: str | None, wanted_out: str | None, rate: float, block: int, channel: int) -> None:
        self.sd = library()
        self.input, self.output = find(wanted_in, "in"), find(wanted_out, "out")
        if channel >= self.input["in"]:
            raise DeviceError(
                f"input channel {channel + 1} does not exist: '{self.input['name']}' has {self.input['in']}."
            )
        self.in_channels, self.out_channels = channel + 1, min(2, self.output["out"])
        self.rate, self.block = rate, block
        self.description = f"{self.input['name']} to {self.output['name']} ({self.output['host']}) at {rate:g} Hz"

    def start(self, host) -> None:
        """Open the stream with *host*'s callback and start it.

        Raises
        ------
        DeviceError
            If the device refuses the rate, the channels or the block size.
        """
        self.host = host
        ffi, stream = self.sd._ffi, self.sd._StreamBase
        try:
            self.stream = stream(
                kind="duplex", samplerate=self.rate, blocksize=self.block, dtype="float32", latency="low",
                device=(self.input["index"], self.output["index"]),
                channels=(self.in_channels, self.out_channels),
                callback=ffi.cast("PaStreamCallback*", host.callback.address),
                userdata=ffi.cast("void*", host.userdata), wrap_callback=None,
            )  # fmt: skip
            self._ask_for_priority()
            self.stream.start()
        except self.sd.PortAudioError as error:
            raise DeviceError(
                f"{self.description}: the device refuses ({error.args[0]}). "
                f"Its own rate is {self.output['rate']:g} Hz: try --rate {self.output['rate']:g} and --block 0."
            ) from None

    def _ask_for_priority(self) -> None:
        """Ask for a real-time thread where PortAudio does not do so by itself: on ALSA.

        Without the right to it (the group "audio", or rtprio in limits.d) the stream runs all the same.
        """
        enable = getattr(_shared_library(), "PaAlsa_EnableRealtimeScheduling", None)
        if self.output["host"] == "ALSA" and enable is not None:
            enable.argtypes = [ctypes.c_void_p, ctypes.c_int]
            enable(int(self.sd._ffi.cast("intptr_t", self.stream._ptr)), 1)

    @property
    def active(self) -> bool:
        """False once the server or the device is gone; the stream must not be touched then."""
        return self.stream.active

    @property
    def latency_s(self) -> tuple[float, float]:
        """Input and output latency as the device states them, in seconds."""
        return self.stream.latency

    def stop(self) -> None:
        """Stop and close; only while `active`."""
        self.stream.stop()
        self.stream.close()

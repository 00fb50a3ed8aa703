"""Finding a device, and what is said when there is none."""

import pytest

from rtfx.devices import portaudio
from rtfx.devices.errors import DeviceError, DeviceGone


def device(index, name, ins, outs, default=""):
    found = {"index": index, "name": name, "host": "ALSA", "in": ins, "out": outs, "rate": 48000.0}
    return found | {"default_in": "in" in default, "default_out": "out" in default}


LISTED = [device(0, "Front", 2, 2, "out"), device(3, "USB Codec", 2, 0, "in"), device(5, "USB Mic", 1, 0)]


@pytest.fixture(autouse=True)
def listed(monkeypatch):
    monkeypatch.setattr(portaudio, "devices", lambda: LISTED)


@pytest.mark.parametrize(("wanted", "index"), [("5", 5), ("USB Codec", 3), ("mic", 5), ("front", 0), (None, 3)])
def test_device_is_found_by_number_name_or_part_of_it(wanted, index):
    assert portaudio.find(wanted, "in")["index"] == index


def test_two_that_fit_are_both_named_with_their_numbers():
    with pytest.raises(DeviceError, match=r"'usb' matches 2 inputs: \[3\] USB Codec, ALSA; \[5\] USB Mic, ALSA. Give"):
        portaudio.find("usb", "in")


def test_none_that_fits_is_said_with_what_there_is():
    with pytest.raises(DeviceGone, match=r"no output is called 'usb'. There are: \[0\] Front, ALSA"):
        portaudio.find("usb", "out")


def test_no_device_at_all_is_said_with_the_way_out(monkeypatch):
    monkeypatch.setattr(portaudio, "devices", list)
    with pytest.raises(DeviceGone, match=r"there is no audio input\. Plug one in, or play with --device built-in"):
        portaudio.find(None, "in")


def test_missing_portaudio_is_said_with_the_line_to_run(monkeypatch):
    def missing():
        raise OSError("PortAudio library not found")

    monkeypatch.setattr(portaudio, "_name_client", missing)
    with pytest.raises(DeviceError, match="apt-get install libportaudio2"):
        portaudio.library()

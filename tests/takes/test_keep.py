"""Takes as they are kept from the audio queue."""

import tomllib

import numpy as np
import pytest
import soundfile
from patches import one
from stand import RATE, Stand

import rtfx
from rtfx.takes.keep import Take, new_folder


@pytest.fixture
def stand():
    return Stand(rtfx.plan(one("gain", level=-6)))


def test_take_holds_dry_and_wet_and_says_what_it_is(stand, noise, tmp_path):
    stand.run(noise[:6400])
    take = Take(tmp_path / "take", stand.shared, RATE)
    stand.run(noise[6400:12_800])
    take.finish("the patch", [(100, 9.0), (7000, 0.8)])
    dry, wet = (soundfile.read(tmp_path / "take" / f"{w}.wav", dtype="float32")[0] for w in ("dry", "wet"))
    assert np.array_equal(dry, noise[6400:12_800])
    assert np.array_equal(wet, rtfx.render(one("gain", level=-6), dry))
    notes = tomllib.loads((tmp_path / "take" / "take.toml").read_text())
    assert notes["gaps"] == [{"frame": 600, "seconds": 0.8}]
    assert (notes["frames"], notes["rate"], notes["patch"]) == (6400, RATE, "the patch")


def test_header_is_right_before_the_take_is_closed(stand, noise, tmp_path):
    take = Take(tmp_path / "take", stand.shared, RATE)
    stand.run(noise[:6400])
    take.write()
    assert soundfile.info(tmp_path / "take" / "wet.wav").frames == 6400
    take.finish("")


def test_a_disk_error_ends_the_recording_and_not_the_playing(stand, noise, tmp_path, monkeypatch):
    take = Take(tmp_path / "take", stand.shared, RATE)
    stand.run(noise[:640])
    take.write()

    def full(_):
        raise OSError("No space left on device")

    monkeypatch.setattr(take.files[0], "write", full)
    stand.run(noise[:640])
    take.write()
    assert "recording stopped after 640 frames: No space left on device" in take.fault
    stand.run(noise[:640])
    take.write()
    take.finish("")
    assert soundfile.info(tmp_path / "take" / "wet.wav").frames == 640


def test_takes_of_one_second_have_folders_of_their_own(tmp_path):
    first = new_folder(tmp_path)
    first.mkdir()
    assert new_folder(tmp_path) != first

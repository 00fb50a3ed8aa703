"""What dies comes back, or takes everything of its own with it."""

import os
import signal
import time
import tomllib

import psutil
import pytest
import soundfile
from patches import preset
from rig.program import Program
from rig.server import JackServer

PRESET = str(preset("fifth-above"))
pytestmark = pytest.mark.faults


def built_in():
    return Program(PRESET, "--device", "built-in", "--unmuted", env=os.environ)


def sound_process(program):
    children = psutil.Process(program.process.pid).children()
    return next(c for c in children if "rtfx.devices.sound" in " ".join(c.cmdline()))


def loud(fact):
    return fact.get("state") == "playing" and fact.get("gain") == 1.0 and fact["restarts"] > 0


def test_sound_process_killed_is_said_within_a_second_and_sounds_again_in_three():
    with built_in() as program:
        program.until(lambda f: f.get("gain") == 1.0)
        sound_process(program).kill()
        killed = time.monotonic()
        program.until_message("has ended", 1.0)
        program.until_message("playing on", 3.0 - (time.monotonic() - killed))
        program.until(loud, 2.0)
        assert program.end() == 0


def test_server_killed_and_back_is_heard_again_by_itself():
    with JackServer(128) as server, Program(PRESET, "--device", "system", "--unmuted", env=server.env) as program:
        program.until(lambda f: f.get("gain") == 1.0)
        server.kill()
        program.until_message("starting again", 1.0)
        time.sleep(2.0)
        server.start()
        back = time.monotonic()
        program.until_message("playing on", 3.0)
        assert time.monotonic() - back < 3.0
        program.until(loud, 3.0)
        assert program.end() == 0


def test_front_killed_takes_the_sound_process_with_it():
    with built_in() as program:
        program.until(lambda f: f.get("gain") == 1.0)
        sound = sound_process(program)
        before = set(os.listdir("/dev/shm"))
        program.process.send_signal(signal.SIGKILL)
        sound.wait(2.0)
        assert set(os.listdir("/dev/shm")) <= before


def test_a_take_goes_on_over_a_restart_with_the_gap_marked(tmp_path):
    environment = os.environ | {"XDG_DATA_HOME": str(tmp_path)}
    with Program(PRESET, "--device", "built-in", "--record", env=environment) as program:
        program.until(lambda f: f.get("state") == "playing" and f["seconds"] > 1)
        sound_process(program).kill()
        program.until_message("playing on")
        after = program.until(lambda f: f.get("restarts") == 1)["seconds"]
        program.until(lambda f: f.get("seconds", 0) > after + 1)
        assert program.end() == 0
    folder = next((tmp_path / "rtfx" / "takes").iterdir())
    (gap,) = tomllib.loads((folder / "take.toml").read_text())["gaps"]
    assert 0 < gap["frame"] < soundfile.info(folder / "wet.wav").frames
    assert 0 < gap["seconds"] < 3

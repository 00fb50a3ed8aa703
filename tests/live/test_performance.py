"""`rtfx play` with carriers, echoes and gates: the take renders again to the same bits, and swaps leave no click."""

import json
import time

import numpy as np
import pytest
import soundfile
from patches import preset
from rig.client import Rig
from rig.program import Program
from rig.server import JackServer

import rtfx

RATE = 48_000
pytestmark = pytest.mark.live


def playing(server, patch, *more, **environment):
    arguments = (str(patch), "--input", "rigout", "--output", "rigin", "--unmuted", *more)
    return Program(*arguments, env=server.env | environment)


@pytest.mark.parametrize("name", ["driven-bell", "echo-tangle", "iron-gate", "two-sides"])
def test_take_and_capture_are_the_render_of_the_dry_recording(name, tmp_path):
    feed = (0.05 * np.random.default_rng(4).standard_normal(RATE)).astype(np.float32)
    patch = preset(name)
    recorded = {"XDG_DATA_HOME": str(tmp_path)}
    with JackServer(64) as server, Rig(server) as rig, playing(server, patch, "--record", **recorded) as program:
        program.until(lambda f: f.get("gain") == 1.0)
        captured = rig.play(feed, wheel=True)
        assert program.end() == 0
    folder = next((tmp_path / "rtfx" / "takes").iterdir())
    dry, wet = (soundfile.read(folder / f"{w}.wav", dtype="float32")[0] for w in ("dry", "wet"))
    assert np.array_equal(wet, rtfx.render(rtfx.load(patch), dry))
    start = np.flatnonzero(dry)[0]
    assert np.array_equal(dry[start : start + len(feed)], feed)
    assert np.array_equal(captured.T, wet[start : start + len(feed)])


def test_twenty_swaps_at_full_level_leave_no_click(tmp_path):
    levels = [-6.0, -12.0]
    head = 'name = "t"\nabout = "t"\n[output]\nfrom = "only"\n[blocks.only]\nkind = "gain"\nx = "input"\nlevel = '
    patch = tmp_path / "mine.toml"
    patch.write_text(f"{head}{levels[0]}\n")
    hz, level, seconds = 100.0, 0.5, 12
    feed = level * np.sin(2 * np.pi * hz * np.arange(seconds * RATE) / RATE)
    with JackServer(64) as server, Rig(server) as rig, playing(server, patch) as program:
        program.until(lambda f: f.get("gain") == 1.0)

        def save_again_and_again():
            for i in range(1, 21):
                patch.write_text(f"{head}{levels[i % 2]}\n")
                program.until_message("changed to")
                time.sleep(0.05)

        captured = rig.play(feed, wheel=True, during=save_again_and_again)[0].astype(float)
        assert program.until(lambda f: "graph" in f)["graph"] == 21
    gains = [10 ** (g / 20) for g in levels]
    slope = level * gains[0] * 2 * np.pi * hz / RATE
    fade = level * abs(gains[0] - gains[1]) / (0.03 * RATE)
    assert np.abs(np.diff(captured)).max() <= slope + fade + 1e-6
    assert np.abs(captured).max() == pytest.approx(level * gains[0], rel=1e-3)


def test_status_line_says_what_there_is_to_know():
    with JackServer(128) as server, Rig(server) as rig, playing(server, preset("two-sides")) as program:
        facts = program.until(lambda f: f.get("gain") == 1.0)
        rig.play(np.full(RATE, 0.25, np.float32), wheel=True)
        facts = program.until(lambda f: f.get("seconds", 0) > facts["seconds"] + 1)
    assert {c["note"] for c in facts["carriers"]} == {"A3", "E4"}
    assert facts["frames_a_block"] == 128
    assert facts["blocks"] > 0
    assert facts["late_blocks"] <= facts["blocks"] // 100
    json.dumps(facts)


def test_a_rate_that_the_server_refuses_is_said_with_the_way_out():
    with JackServer(128) as server, playing_on_system(server, "--rate", "44100") as program:
        assert program.process.wait(20) == 1
        message = program.process.stderr.read()
    assert "the device refuses" in message
    assert "try --rate 48000" in message
    assert "Traceback" not in message


def playing_on_system(server, *more):
    return Program(str(preset("two-sides")), "--device", "system", *more, env=server.env)

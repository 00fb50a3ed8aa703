"""The command line as a player meets it."""

import json
import subprocess
import sys

import numpy as np
import pytest
import soundfile
from patches import preset
from rig.program import Program

import rtfx
from rtfx.blocks.table import names

PRESET = preset("fifth-above")


def run(*arguments):
    command = [sys.executable, "-c", "from rtfx.cli.main import run; run()", *map(str, arguments)]
    return subprocess.run(command, capture_output=True, text=True)


@pytest.mark.parametrize("command", ["play", "render", "check", "blocks", "setup"])
def test_every_command_explains_itself(command):
    done = run(command, "--help")
    assert done.returncode == 0
    assert command in done.stdout


def test_render_writes_what_render_gives(tmp_path, noise):
    dry, wet = tmp_path / "dry.wav", tmp_path / "wet.wav"
    soundfile.write(dry, noise, 48_000, subtype="FLOAT")
    done = run("render", PRESET, dry, wet, "--quality", "stage", "--set", "tone.pitch=C5", "--json")
    assert json.loads(done.stdout)["frames"] == len(noise)
    from rtfx.patch.read import set_value

    expected = rtfx.render(set_value(rtfx.load(PRESET), "tone.pitch", "C5"), noise)
    assert np.array_equal(soundfile.read(wet, dtype="float32")[0], expected)


def test_render_obeys_moves(tmp_path, noise):
    dry, wet, moves = tmp_path / "dry.wav", tmp_path / "wet.wav", tmp_path / "moves.jsonl"
    soundfile.write(dry, noise, 48_000, subtype="FLOAT")
    moves.write_text('{"frame": 999, "target": "tone.pitch", "value": 500}\n')
    assert run("render", PRESET, dry, wet, "--quality", "stage", "--moves", moves).returncode == 0
    expected = rtfx.render(rtfx.load(PRESET), noise, moves=[rtfx.Move(999, "tone.pitch", 500.0)])
    assert np.array_equal(soundfile.read(wet, dtype="float32")[0], expected)


def test_bad_moves_are_refused_with_their_line(tmp_path, noise):
    dry, moves = tmp_path / "dry.wav", tmp_path / "moves.jsonl"
    soundfile.write(dry, noise, 48_000)
    moves.write_text('{"frame": 1, "target": "tone.pitch", "value": 500}\nnonsense\n')
    done = run("render", PRESET, dry, tmp_path / "wet.wav", "--moves", moves)
    assert done.returncode == 1
    assert "moves.jsonl:2: not a move" in done.stderr
    assert "Traceback" not in done.stderr


def test_check_gives_its_facts_as_json():
    facts = json.loads(run("check", preset("driven-bell"), "--json").stdout)
    assert facts["regions"][0]["factor"] == 8
    assert facts["delay_ms"] <= 1.0
    assert {row["block"] for row in facts["order"]} >= {"shape", "tone", "product"}
    assert facts["cost_ns"] > 0


def test_blocks_gives_every_kind_as_json():
    kinds = json.loads(run("blocks", "--json").stdout)["kinds"]
    assert [k["kind"] for k in kinds] == list(names())
    assert all(k["law"] and k["source"] and k["about"] and k["bandwidth"] for k in kinds)


def test_unknown_kind_is_answered_with_the_nearest():
    done = run("blocks", "multipy")
    assert done.returncode == 1
    assert "Did you mean 'multiply'?" in done.stderr


def test_no_such_device_is_said_plainly():
    done = run("play", PRESET, "--device", "nowhere", "--seconds", "1")
    assert done.returncode == 1
    assert "Traceback" not in done.stderr


def test_play_ends_by_itself_and_keeps_a_take(tmp_path, monkeypatch):
    monkeypatch.setenv("XDG_DATA_HOME", str(tmp_path))
    done = run("play", PRESET, "--device", "built-in", "--seconds", "1", "--record")
    assert done.returncode == 0
    folder = next((tmp_path / "rtfx" / "takes").iterdir())
    assert str(folder) in done.stdout
    dry, rate = soundfile.read(folder / "dry.wav", dtype="float32")
    wet, _ = soundfile.read(folder / "wet.wav", dtype="float32")
    assert len(dry) >= rate
    assert np.array_equal(wet, rtfx.render(rtfx.load(PRESET), dry))


def test_a_saved_patch_fades_in_and_a_mistake_leaves_the_old_one(tmp_path):
    import os

    path = tmp_path / "mine.toml"
    path.write_text(PRESET.read_text())
    with Program(str(path), "--device", "built-in", env=os.environ) as program:
        program.until(lambda f: f.get("graph") == 1)
        path.write_text(PRESET.read_text().replace('pitch = "E4"', 'pitch = "A4"'))
        program.until_message("changed to")
        program.until(lambda f: f.get("graph") == 2 and f["carriers"][0]["note"] == "A4")
        path.write_text(PRESET.read_text().replace('pitch = "E4"', 'pitch = "H4"'))
        assert "wanted a note" in program.until_message("not changed")["message"]
        assert program.until(lambda f: f.get("state") == "playing")["graph"] == 2


def test_a_fault_of_our_own_is_kept_in_a_file_and_said_in_a_line(tmp_path, monkeypatch, capsys):
    from rtfx.cli.faults import explained

    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path))
    with pytest.raises(SystemExit, match="1"), explained():
        raise AssertionError("impossible")
    message = capsys.readouterr().err
    assert "fault of rtfx itself" in message
    assert "impossible" in next(tmp_path.rglob("fault-*.txt")).read_text()
    assert "Traceback" not in message


def test_chosen_devices_are_remembered_and_the_rest_of_the_setup_is_kept(tmp_path, monkeypatch):
    from rig.server import JackServer

    monkeypatch.setenv("XDG_CONFIG_HOME", str(tmp_path))
    path = tmp_path / "rtfx" / "setup.toml"
    path.parent.mkdir()
    path.write_text('[hall]\nname = "Small"\n')
    with JackServer(128) as server:
        for name, value in server.env.items():
            monkeypatch.setenv(name, value)
        listed = json.loads(run("setup", "devices", "--input", "system", "--json").stdout)
    assert listed["remembered"] == {"input": "system"}
    assert 'name = "Small"' in path.read_text()

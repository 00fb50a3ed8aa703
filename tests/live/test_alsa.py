"""PortAudio's ALSA path, on ALSA's own null device: it takes no sound and gives silence, as fast as it is asked."""

import os

import pytest
from rig.program import Program

PATCH = 'name = "t"\nabout = "t"\n[blocks.only]\nkind = "gain"\nx = "input"\n[output]\nfrom = "only"\n'
DEVICES = (
    "pcm.nothing { type null hint { show on description 'nothing' } }\npcm.!default { type plug slave.pcm nothing }\n"
)


@pytest.mark.live
def test_stream_runs_on_alsa(tmp_path):
    (tmp_path / ".asoundrc").write_text(DEVICES)
    patch = tmp_path / "t.toml"
    patch.write_text(PATCH)
    environment = os.environ | {"HOME": str(tmp_path), "JACK_DEFAULT_SERVER": "none", "JACK_NO_START_SERVER": "1"}
    with Program(str(patch), "--device", "default", "--unmuted", env=environment) as program:
        assert "ALSA" in program.until_message("playing on")["message"]
        program.until(lambda f: f.get("gain") == 1.0)
        assert program.end() == 0

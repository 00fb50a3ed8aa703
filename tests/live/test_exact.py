"""`rtfx play` on a real JACK server: what comes out is what `rtfx.render` gives, bit for bit."""

import numpy as np
import pytest
from patches import preset
from rig.client import Rig
from rig.program import Program
from rig.server import JackServer

import rtfx

PRESET = preset("octave-over")
SETTLE = 12_000  # frames of silence first: the ramp is over and the graph has heard nothing but zeros


@pytest.fixture
def feed():
    return (0.2 * np.random.default_rng(3).standard_normal(96_000)).astype(np.float32)


def playing(server):
    arguments = (str(PRESET), "--input", "rigout", "--output", "rigin", "--unmuted")
    return Program(*arguments, env=server.env)


def offline(feed):
    return rtfx.render(rtfx.plan(rtfx.load(PRESET)), feed).T


@pytest.mark.live
@pytest.mark.parametrize("period", [64, 128])
@pytest.mark.parametrize("wheel", [True, False], ids=["paced freewheel", "real time"])
def test_capture_is_the_render_bit_for_bit(period, wheel, feed):
    with JackServer(period) as server, Rig(server) as rig, playing(server) as program:
        program.until(lambda f: f.get("gain") == 1.0)
        captured = rig.play(feed, wheel=wheel)
        assert np.array_equal(captured, offline(feed))


@pytest.mark.live
def test_the_frame_count_may_change_under_the_running_stream(feed):
    with JackServer(128) as server, Rig(server) as rig, playing(server) as program:
        program.until(lambda f: f.get("gain") == 1.0)
        for period in (256, 64, 1024, 128):
            rig.set_period(period)
            program.until(lambda f, p=period: f.get("frames_a_block") == p)
            assert np.array_equal(rig.play(feed[:48_000]), offline(feed[:48_000])), period

"""The callback as a device would call it."""

import numpy as np
import pytest
from patches import RING, one, text
from stand import Stand, graph

import rtfx
from rtfx.engine import queues
from rtfx.engine.words import NEXT


@pytest.fixture
def ring():
    return rtfx.plan(text(RING.format(pitch=330)))


@pytest.mark.parametrize("block", [1, 64, 300, 1024])
def test_live_is_offline_bit_for_bit_once_the_ramp_is_over(ring, noise, block):
    out, offline = Stand(ring).run(noise[:12_000], block), rtfx.render(ring, noise[:12_000])
    assert np.array_equal(out[4801:], offline[4801:])


def test_starts_muted_when_asked_and_ramps_without_a_step(ring):
    stand = Stand(rtfx.plan(one("gain")))
    stand.shared.set("MUTE", 1)
    assert not stand.run(np.ones(1000)).any()
    stand.shared.set("MUTE", 0)
    out = stand.run(0.5 * np.ones(9600))[:, 0]
    assert out[-1] == 0.5
    assert np.abs(np.diff(out)).max() <= 0.5 / 4800 * 1.01


def test_ceiling_is_held_and_is_exact_below_it(noise):
    stand = Stand(rtfx.plan(one("gain", level=20)), ceiling=0.5)
    assert np.abs(stand.run(noise)).max() <= np.float32(0.5)


def test_an_event_is_applied_on_its_frame_and_reported(ring, noise):
    stand = Stand(ring)
    slot = ring.slot("tone.pitch").index
    assert queues.send(stand.shared, 1, slot, 440.0, frame=6001)
    out = stand.run(noise[:12_000])
    offline = rtfx.render(ring, noise[:12_000], moves=[rtfx.Move(6001, "tone.pitch", 440.0)])
    assert np.array_equal(out[4801:], offline[4801:])
    assert queues.moves(stand.shared) == [(6001, 1, slot, 440.0)]


def test_an_event_for_no_present_graph_is_counted_and_dropped(ring, noise):
    stand = Stand(ring)
    queues.send(stand.shared, 9, 0, 440.0)
    stand.run(noise[:64])
    assert stand.shared.get("DROPPED_EVENTS") == 1


def test_swap_fades_and_then_is_the_new_graph_exactly(ring):
    stand = Stand(rtfx.plan(one("gain")))
    stand.run(0.5 * np.ones(6000))
    stand.host.swap(graph(rtfx.plan(one("gain", level=-20)), 2))
    out = stand.run(0.5 * np.ones(4000))[:, 0]
    assert out[-1] == pytest.approx(0.05)
    assert np.abs(np.diff(out)).max() <= 0.45 / 1000 * 1.01
    assert stand.shared.get("GRAPH") == 2
    assert stand.host.words[NEXT] == 0
    assert len(stand.host.graphs) == 1


def test_nan_is_silenced_counted_and_the_graph_comes_back(noise):
    plan = rtfx.plan(one("lowpass"))
    stand = Stand(plan)
    stand.run(noise[:6000])
    broken = noise[:12_000].copy()
    broken[1000] = np.nan
    out = stand.run(broken)
    assert np.isfinite(out).all()
    assert stand.shared.get("RESETS") == 1
    assert np.abs(out[6000:]).max() > 0.05


def test_panic_is_silent_within_ten_milliseconds_and_stays_so(ring, noise):
    stand = Stand(ring)
    stand.run(noise[:6000])
    stand.shared.set("MUTE", 1)
    stand.shared.set("PANIC", 1)
    assert not stand.run(noise[:6000])[480:].any()
    assert stand.shared.get("PANICS") == 1


def test_bypass_gives_the_guitar_exactly(ring, noise):
    stand = Stand(ring)
    stand.shared.set("BYPASS", 1)
    out = stand.run(noise[:12_000])
    assert np.array_equal(out[4801:, 0], noise[4801:12_000])


def test_what_is_recorded_is_dry_and_graph_output(ring, noise):
    stand = Stand(ring)
    stand.shared.set("AUDIO_ON", 1)
    stand.shared.set("MUTE", 1)
    stand.run(noise[:6000])
    audio = queues.audio(stand.shared)
    assert np.array_equal(audio[:, 0], noise[:6000])
    assert np.array_equal(audio[:, 1:], rtfx.render(ring, noise[:6000]))


def test_blocks_and_frames_are_counted(ring, noise):
    stand = Stand(ring)
    stand.run(noise[:6400])
    assert stand.shared.get("BLOCKS") == 100
    assert stand.shared.get("FRAMES") == 6400
    assert stand.shared.many("LOAD").sum() == 100


def test_what_fades_below_the_smallest_float_is_the_same_live_and_offline():
    """Denormals are flushed in the callback, on the way to float32 too; offline must do just that."""
    plan = rtfx.plan(one("lowpass", cutoff=200))
    click = np.zeros(24_000, np.float32)
    click[6000] = 1e-30
    offline = rtfx.render(plan, click)
    assert np.array_equal(Stand(plan).run(click)[4801:], offline[4801:])
    assert np.abs(offline[offline != 0]).min() >= np.finfo(np.float32).tiny

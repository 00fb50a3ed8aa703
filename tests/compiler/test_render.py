"""The compiled patch: same bits whatever the block size, exact delays, smooth moves."""

import numpy as np
import pytest
from patches import RING, one, text

import rtfx
from rtfx.blocks.table import find, names

SIZES = (1, 7, 64, 480)


def every_kind():
    return [one(n, wires=find(n).ports) for n in names()]


@pytest.mark.parametrize("name", names())
def test_block_size_changes_nothing(name, noise):
    plan = rtfx.plan(one(name, wires=find(name).ports))
    whole = rtfx.render(plan, noise[:4800])
    for size in SIZES:
        assert np.array_equal(whole, rtfx.render(plan, noise[:4800], block=size)), size


def test_moves_fall_on_their_frame_whatever_the_block_size(noise):
    plan = rtfx.plan(text(RING.format(pitch=330)))
    moves = [rtfx.Move(1001, "tone.pitch", 440.0), rtfx.Move(1500, "tone.pitch", 220.0)]
    whole = rtfx.render(plan, noise[:4800], moves=moves)
    still = rtfx.render(plan, noise[:4800])
    assert np.array_equal(whole[:1001], still[:1001])
    assert not np.array_equal(whole[1001:1100], still[1001:1100])
    for size in SIZES:
        assert np.array_equal(whole, rtfx.render(plan, noise[:4800], moves=moves, block=size))


@pytest.mark.parametrize(("kind", "settings"), [("square", {}), ("clip", {"drive": 24}), ("polynomial", {"c8": 0.1})])
def test_delay_reported_is_delay_measured(kind, settings):
    plan = rtfx.plan(one(kind, **settings))
    click = np.zeros(2000, np.float32)
    click[500] = 0.01
    assert np.argmax(np.abs(rtfx.render(plan, click)[:, 0])) == 500 + plan.delay


def test_stage_delay_of_one_region_is_below_a_millisecond():
    assert rtfx.plan(one("clip", drive=36, law="hard")).delay <= 48


def test_dry_nulls_against_a_unity_path_through_a_region():
    body = """
[blocks.unity]
kind = "polynomial"
x = "input"
{order} = 1e-12
[blocks.turned]
kind = "gain"
x = "unity"
[blocks.upside]
kind = "polynomial"
x = "turned"
c1 = -1.0
[blocks.null]
kind = "add"
x = "input"
y = "upside"
[output]
from = "null"
"""
    for order in ("c2", "c4", "c8"):
        plan = rtfx.plan(text(body.format(order=order)))
        assert plan.regions, order
        for hz in (20, 1000, 10_000, 18_000):
            tone = np.sin(2 * np.pi * hz * np.arange(48_000) / 48_000)
            left = rtfx.render(plan, tone)[2000:, 0]
            assert 20 * np.log10(np.abs(left).max() + 1e-12) < -100, (order, hz)


def test_a_jump_from_0_to_1_leaves_no_step_beyond_its_glide():
    patch = text(
        '[blocks.silence]\nkind = "gain"\nx = "input"\nlevel = -80\n'
        '[blocks.blend]\nkind = "mix"\ndry = "silence"\nwet = "input"\namount = 0.0\n[output]\nfrom = "blend"\n'
    )
    ones = np.ones(4800, np.float32)
    out = rtfx.render(patch, ones, moves=[rtfx.Move(1000, "blend.amount", 1.0)])[:, 0]
    assert out[-1] == 1.0
    assert np.abs(np.diff(out)).max() <= 1.0 / (0.02 * 48_000) + 1e-6


def test_loop_through_a_one_sample_delay_is_the_recursion(noise):
    from scipy.signal import lfilter

    patch = text(
        '[blocks.sum]\nkind = "add"\nx = "input"\ny = "back"\n[blocks.back]\nkind = "gain"\nx = "late"\nlevel = -6\n'
        '[blocks.late]\nkind = "delay"\nx = "sum"\ntime = 0\n[output]\nfrom = "sum"\n'
    )
    expected = lfilter([1], [1, -(10 ** (-6 / 20))], noise.astype(float))
    assert np.abs(rtfx.render(patch, noise)[:, 0] - expected).max() < 1e-6


def test_a_followed_signal_moves_the_pitch():
    patch = text(
        '[blocks.wobble]\nkind = "oscillator"\npitch = 5\n'
        '[blocks.tone]\nkind = "oscillator"\npitch = { base = 440, add = "wobble", depth = "100 c" }\n'
        '[output]\nfrom = "tone"\n'
    )
    out = rtfx.render(patch, np.zeros(48_000))[:, 0].astype(float)
    crossings = np.flatnonzero((out[:-1] < 0) & (out[1:] >= 0))
    whole = crossings + out[crossings] / (out[crossings] - out[crossings + 1])
    pitch = 48_000 / np.diff(whole)
    assert pitch.max() == pytest.approx(440 * 2 ** (1 / 12), rel=2e-3)
    assert pitch.min() == pytest.approx(440 / 2 ** (1 / 12), rel=2e-3)


def test_bad_samples_are_refused():
    with pytest.raises(ValueError, match="NaN or Inf"):
        rtfx.render(one("gain"), np.array([0.0, np.nan]))
    with pytest.raises(ValueError, match=r"shape \(2, 3\)"):
        rtfx.render(one("gain"), np.zeros((2, 3)))
    with pytest.raises(ValueError, match="outside 44100 to 192000"):
        rtfx.plan(one("gain"), rate=8000)


LIKE_VARIABLES = [
    "hold",
    "tone-phase",
    "tone_c0",
    "guitar",
    "up",
    "glide",
    "tone-late",
    "clock",
    "lambda",
    "tone_",
    "n",
]


@pytest.mark.parametrize("name", LIKE_VARIABLES)
def test_no_name_of_a_block_stands_in_the_way_of_a_variable(name, noise):
    body = RING.format(pitch=330).replace('x = "input"', 'x = "shape"') + (
        '[blocks.shape]\nkind = "clip"\nx = "echo"\n[blocks.echo]\nkind = "delay"\nx = "input"\ntime = 0.001\n'
    )
    plain, renamed = text(body), text(body.replace("[blocks.echo]", f"[blocks.{name}]").replace('"echo"', f'"{name}"'))
    assert np.array_equal(rtfx.render(renamed, noise[:960]), rtfx.render(plain, noise[:960]))
    renamed = text(body.replace("[blocks.shape]", f"[blocks.{name}]").replace('"shape"', f'"{name}"'))
    assert np.array_equal(rtfx.render(renamed, noise[:960]), rtfx.render(plain, noise[:960]))


def test_a_limiter_in_a_loop_that_needs_a_higher_rate_is_refused():
    body = (
        '[blocks.sum]\nkind = "add"\nx = "input"\ny = "back"\n[blocks.shape]\nkind = "clip"\nx = "sum"\n'
        '[blocks.safe]\nkind = "limiter"\nx = "shape"\n[blocks.back]\nkind = "delay"\nx = "safe"\n'
        '[output]\nfrom = "sum"\n'
    )
    with pytest.raises(ValueError, match="'safe': limiter runs at the base rate only"):
        rtfx.plan(text(body))


def test_a_delay_may_follow_a_signal(noise):
    patch = text(
        '[blocks.wobble]\nkind = "oscillator"\npitch = 2\n[blocks.late]\nkind = "delay"\nx = "input"\n'
        'time = { base = 0.01, add = "wobble", depth = 0.005 }\n[output]\nfrom = "late"\n'
    )
    whole = rtfx.render(patch, noise[:9600])
    assert np.array_equal(whole, rtfx.render(patch, noise[:9600], block=7))
    assert np.abs(whole[:480]).max() == 0.0
    assert np.abs(whole[960:]).max() > 0.1


def test_a_block_that_leads_nowhere_is_left_out(noise):
    body = RING.format(pitch=330) + '[blocks.idle]\nkind = "clip"\nx = "input"\n'
    plan = rtfx.plan(text(body))
    assert plan.order == ("tone", "product")
    assert np.array_equal(rtfx.render(plan, noise), rtfx.render(text(RING.format(pitch=330)), noise))


def test_a_region_may_have_two_outputs_and_two_inputs(noise):
    body = """
[blocks.shape]
kind = "clip"
x = "input"
drive = 24
[blocks.spread]
kind = "pan"
x = "shape"
[blocks.product]
kind = "multiply"
x = "spread.left"
y = "input"
[output]
left = "product"
right = "shape"
"""
    plan = rtfx.plan(text(body))
    whole = rtfx.render(plan, noise[:4800])
    assert np.array_equal(whole, rtfx.render(plan, noise[:4800], block=7))
    assert len(plan.regions) == 1
    assert np.array_equal(rtfx.render(one("clip", drive=24), noise[:4700])[:, 1], whole[:4700, 1])


def test_a_parameter_may_take_its_value_from_a_signal_at_a_ratio():
    """A control signal in place of the value: here the guitar input itself, 0.4 times 3/2 being the amount."""
    patch = text(
        '[blocks.tone]\nkind = "oscillator"\npitch = 100\n[blocks.quiet]\nkind = "gain"\nx = "tone"\nlevel = -80\n'
        '[blocks.blend]\nkind = "mix"\ndry = "quiet"\nwet = "tone"\namount = { base = "input", ratio = "3/2" }\n'
        '[output]\nfrom = "blend"\n'
    )
    out = rtfx.render(patch, np.full(4800, 0.4))[:, 0].astype(float)
    tone = np.sin(2 * np.pi * 100 * np.arange(4800) / 48_000)
    assert np.abs(out - 0.6 * tone).max() < 1e-4

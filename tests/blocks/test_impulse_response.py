"""Convolution with a player's file against scipy, and what is said of bad files."""

import numpy as np
import pytest
import soundfile
from patches import one, response_file
from scipy.signal import fftconvolve

import rtfx


@pytest.fixture
def write(tmp_path):
    """Return a function that writes a response and gives its path."""

    def to_file(sound, rate=48_000, name="h.wav"):
        soundfile.write(tmp_path / name, sound, rate, subtype="DOUBLE")
        return str(tmp_path / name)

    return to_file


@pytest.mark.parametrize("taps", [1, 7, 1024, 1025, 1536, 1537, 20_000])
@pytest.mark.parametrize("channels", [1, 2])
def test_output_is_the_convolution(taps, channels, noise):
    path = response_file(taps, channels)
    h = soundfile.read(path, always_2d=True)[0]
    out = rtfx.render(one("impulse-response", file=path, loudness="as-is"), noise)
    expected = np.stack([fftconvolve(noise.astype(float), h[:, c])[: len(noise)] for c in range(channels)], axis=1)
    assert np.abs(out - expected).max() < 2e-7 * np.abs(expected).max() + 1e-12


@pytest.mark.parametrize("taps", [1000, 5000])
def test_nothing_is_late(taps, write):
    h = np.zeros(taps)
    h[0] = 1.0
    h[-1] = 0.5
    click = np.zeros(8000, np.float32)
    click[1000] = 1.0
    plan = rtfx.plan(one("impulse-response", file=write(h), loudness="as-is"))
    out = rtfx.render(plan, click)[:, 0]
    assert plan.delay == 0
    assert np.flatnonzero(np.abs(out) > 1e-6).tolist() == [1000, 1000 + taps - 1]


def test_block_size_changes_nothing(noise):
    plan = rtfx.plan(one("impulse-response", file=response_file(5000, 2)))
    whole = rtfx.render(plan, noise[:9600])
    for size in (1, 7, 480):
        assert np.array_equal(whole, rtfx.render(plan, noise[:9600], block=size))


def test_matched_loudness_keeps_the_level_of_noise(noise):
    out = rtfx.render(one("impulse-response", file=response_file(2000, 1)), noise)[4000:]
    assert 20 * np.log10(out.std() / noise.std()) == pytest.approx(0, abs=0.5)


def test_response_at_another_rate_is_resampled(noise, write):
    """A 1 kHz resonance recorded at 96 kHz rings at 1 kHz at 48 kHz, with the same gain."""
    n = np.arange(9600)
    h = np.sin(2 * np.pi * 1000 * n / 96_000) * np.exp(-n / 960) / 480
    out = rtfx.render(one("impulse-response", file=write(h, 96_000), loudness="as-is"), noise)[:, 0].astype(float)
    expected = fftconvolve(noise.astype(float), h[::2] * 2)[: len(noise)]
    assert np.abs(out - expected).max() < 0.02 * np.abs(expected).max()


@pytest.mark.parametrize(("sound", "words"), [
    (np.zeros(100), "holds nothing to be heard"),
    (np.full(100, np.nan), "no finite numbers"),
    (np.ones((100, 3)), "has 3 channels; wanted 1 or 2"),
    (np.ones(7 * 48_000), "is 7.0 s long; cut it to 6 s"),
])  # fmt: skip
def test_bad_responses_are_refused(sound, words, write):
    with pytest.raises(ValueError, match=words):
        rtfx.plan(one("impulse-response", file=write(sound)))


def test_a_file_that_is_no_sound_is_refused(tmp_path):
    (tmp_path / "h.wav").write_text("no sound")
    with pytest.raises(ValueError, match="cannot be read as audio"):
        rtfx.plan(one("impulse-response", file=str(tmp_path / "h.wav")))


def test_a_file_that_is_not_there_is_a_fault_of_the_patch():
    with pytest.raises(rtfx.PatchError, match="there is no file"):
        one("impulse-response", file="nowhere.wav")


def test_a_file_is_meant_from_the_folder_of_the_patch(tmp_path, write):
    write(np.ones(3), name="near.wav")
    patch = 'name = "t"\nabout = "t"\n[blocks.b]\nkind = "impulse-response"\nx = "input"\nfile = "near.wav"\n'
    (tmp_path / "p.toml").write_text(patch + '[output]\nfrom = "b"\n')
    assert rtfx.plan(rtfx.load(tmp_path / "p.toml")).order == ("b",)

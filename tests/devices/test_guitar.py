"""The demo guitar: the phrase, its levels, the same at every rate, and its cache."""

import itertools
import pickle

import numpy as np
import pytest

from rtfx.devices import guitar, strings

RATE = 48_000


@pytest.fixture(scope="module")
def phrase():
    return guitar.build(RATE)


@pytest.fixture
def folder(tmp_path, monkeypatch):
    """Return a cache folder of the test's own, not yet there."""
    monkeypatch.setattr("platformdirs.user_cache_dir", lambda name: str(tmp_path / name))
    return tmp_path / "rtfx"


def _between(x, start_s, end_s, rate=RATE):
    return x[round(start_s * rate) : round(end_s * rate)].astype(np.float64)


def _db(x):
    return 10 * np.log10(np.mean(np.square(x)))


def _level_at(x, frequency_hz, rate=RATE):
    """Return the amplitude at one frequency, dB, under a Hann window."""
    window = np.hanning(len(x))
    return 20 * np.log10(abs(np.sum(window * x * np.exp(-2j * np.pi * frequency_hz / rate * np.arange(len(x))))))


def _peak_near(x, frequency_hz, rate=RATE):
    """Return the strongest frequency within a semitone of *frequency_hz*: a parabola through three bins."""
    size = 1 << 19
    spectrum = np.log(np.abs(np.fft.rfft(x * np.hanning(len(x)), size)))
    low, high = (round(frequency_hz * 2 ** (semitones / 12) * size / rate) for semitones in (-1, 1))
    k = low + int(np.argmax(spectrum[low:high]))
    left, top, right = spectrum[k - 1 : k + 2]
    return (k + (left - right) / (2 * (left - 2 * top + right))) * rate / size


def test_two_builds_have_the_same_bits(phrase):
    assert guitar.build(RATE).tobytes() == phrase.tobytes()


def test_phrase_is_mono_float32_of_nine_seconds(phrase):
    assert (phrase.dtype, phrase.shape) == (np.float32, (9 * RATE,))


def test_phrase_is_finite(phrase):
    assert np.isfinite(phrase).all()


def test_peak_is_six_db_below_full_scale(phrase):
    assert 20 * np.log10(np.max(np.abs(phrase))) == pytest.approx(-6.0, abs=0.01)


@pytest.mark.parametrize(("rate", "within_db"), [(8_000, 1.0), (44_100, 0.1), (192_000, 0.1)])
def test_peak_at_other_rates_stays_near(rate, within_db):
    # At 8 kHz what is above 4 kHz is missing, and some of the peak with it.
    assert 20 * np.log10(np.max(np.abs(guitar.build(rate)))) == pytest.approx(-6.0, abs=within_db)


def test_phrase_has_no_offset(phrase):
    assert abs(phrase.mean(dtype=np.float64)) < 1e-6


@pytest.mark.parametrize("rate", [8_000, 44_100, 48_000, 192_000])
def test_phrase_goes_round_without_a_click(rate):
    x = guitar.build(rate)
    assert max(np.max(np.abs(_between(x, 0, 0.03, rate))), np.max(np.abs(_between(x, 8.9, 9, rate)))) < 1e-4


@pytest.mark.parametrize(("start_s", "end_s"), [(3.12, 3.28), (6.14, 6.25)])
def test_player_rests(phrase, start_s, end_s):
    assert _db(_between(phrase, start_s, end_s)) < -90


def test_hard_stroke_is_louder_than_a_soft_one(phrase):
    hard, soft = _between(phrase, 2.23, 2.43), _between(phrase, 0.88, 1.08)
    assert _db(hard) - _db(soft) > 6


def test_hard_stroke_is_brighter_than_a_soft_one():
    def share_above_2_khz(force):
        y = guitar.play(guitar.Note(0.0, 1.0, 5, 0, force), seed=1)[:9600]
        power = np.abs(np.fft.rfft(y)) ** 2
        return power[400:].sum() / power.sum()

    assert share_above_2_khz(1.0) > 2 * share_above_2_khz(0.4)


def test_stroke_upwards_is_duller():
    def share_above_5_khz(up):
        y = guitar.play(guitar.Note(0.0, 1.0, 5, 0, 0.8, up=up), seed=1)[:9600]
        power = np.abs(np.fft.rfft(y)) ** 2
        return power[1000:].sum() / power.sum()

    assert share_above_5_khz(False) > 1.5 * share_above_5_khz(True)


@pytest.mark.parametrize("rate", [8_000, 44_100, 48_000])
@pytest.mark.parametrize(
    ("start_s", "end_s", "pitch_hz"),
    [
        (0.2, 0.8, 110.0),
        (1.25, 1.65, 164.8138),
        (2.4, 3.0, 82.40689),
        (3.45, 4.1, 261.6256),
        (5.75, 6.0, 880.0),
    ],
)
def test_notes_are_in_tune_at_every_rate(start_s, end_s, pitch_hz, rate):
    x = guitar.build(rate)
    found_hz = _peak_near(_between(x, start_s, end_s, rate), pitch_hz, rate)
    assert abs(1200 * np.log2(found_hz / pitch_hz)) < 2


def test_bend_starts_on_its_fret(phrase):
    found_hz = _peak_near(_between(phrase, 4.42, 4.58), 293.6648)
    assert abs(1200 * np.log2(found_hz / 293.6648)) < 10


def test_bend_arrives_a_whole_tone_higher(phrase):
    # The vibrato lets go by 24 cents and comes back, so that the middle is 12 below.
    found_hz = _peak_near(_between(phrase, 4.82, 4.82 + 3 / 5.5), 329.6276)
    assert 1200 * np.log2(found_hz / 329.6276) == pytest.approx(-12, abs=12)


@pytest.mark.parametrize("pitch_hz", [110.0, 164.8138, 246.9417, 261.6256, 329.6276])
def test_last_chord_holds_its_five_notes(phrase, pitch_hz):
    chord = _between(phrase, 6.6, 8.2)
    beside = max(_level_at(chord, pitch_hz - 7), _level_at(chord, pitch_hz + 7))
    assert _level_at(chord, pitch_hz) - beside > 20


@pytest.mark.parametrize("note", guitar.PHRASE, ids=lambda n: f"string {n.string} at {n.at:.2f}")
def test_note_is_let_go_without_a_click(note):
    y = guitar.play(note, seed=1)
    assert np.max(np.abs(y[-48:])) < 2e-3 * np.max(np.abs(y))


def test_chord_is_struck_string_by_string():
    starts = [note.at * 0.54 for note in guitar.PHRASE[-5:]]
    assert np.diff(starts) == pytest.approx(0.022)


def test_no_string_is_asked_for_two_notes_at_once():
    for _, notes in itertools.groupby(sorted(guitar.PHRASE, key=lambda n: (n.string, n.at)), lambda n: n.string):
        for before, after in itertools.pairwise(notes):
            assert before.at + before.beats <= after.at


@pytest.mark.parametrize("rate", [8_000, 44_100, 96_000, 192_000])
def test_phrase_is_the_same_at_every_rate(phrase, rate):
    # Samples of one band-limited sound: below both half rates the transforms agree but for their length.
    bins = int(min(rate, RATE) / 2 * 0.99) * 9
    here = np.fft.rfft(guitar.build(rate).astype(np.float64))[:bins] / rate
    there = np.fft.rfft(phrase.astype(np.float64))[:bins] / RATE
    assert np.max(np.abs(here - there)) < 1e-5 * np.max(np.abs(there))


@pytest.mark.parametrize("rate", [7_999, 192_001, float("nan")])
def test_rate_out_of_range_is_refused(rate):
    with pytest.raises(ValueError, match=rf"rate = {rate} Hz: the demo guitar plays at 8000 to 192000 Hz"):
        guitar.demo_guitar(rate)


def test_first_call_returns_what_was_built(folder, phrase):
    assert guitar.demo_guitar(RATE).tobytes() == phrase.tobytes()


def test_second_call_builds_nothing(folder, phrase, monkeypatch):
    guitar.demo_guitar(RATE)
    monkeypatch.setattr(guitar, "build", lambda rate: pytest.fail("built again"))
    assert guitar.demo_guitar(RATE).tobytes() == phrase.tobytes()


def test_cache_holds_one_whole_file_a_rate(folder):
    for rate in (8_000, 8_000, 11_025):
        guitar.demo_guitar(rate)
    assert [file.suffix for file in folder.iterdir()] == [".npy", ".npy"]


def _truncate(file):
    file.write_bytes(file.read_bytes()[:-1000])


BROKEN = {
    "empty": lambda file: file.write_bytes(b""),
    "noise": lambda file: file.write_bytes(bytes(range(256)) * 4),
    "cut short": _truncate,
    "a pickle": lambda file: file.write_bytes(pickle.dumps([1, 2])),
    "not a number": lambda file: np.save(file, np.full(72_000, np.nan, np.float32)),
    "too loud": lambda file: np.save(file, np.full(72_000, 9.0, np.float32)),
    "silence": lambda file: np.save(file, np.zeros(72_000, np.float32)),
    "another length": lambda file: np.save(file, np.zeros(10, np.float32)),
    "another type": lambda file: np.save(file, np.zeros(72_000)),
}


@pytest.mark.parametrize("damage", BROKEN.values(), ids=BROKEN.keys())
def test_broken_cache_file_is_made_again(folder, damage, monkeypatch):
    whole = guitar.demo_guitar(8_000)
    damage(next(folder.iterdir()))
    assert guitar.demo_guitar(8_000).tobytes() == whole.tobytes()
    monkeypatch.setattr(guitar, "build", lambda rate: pytest.fail("the file was left broken"))
    assert guitar.demo_guitar(8_000).tobytes() == whole.tobytes()


def test_change_of_the_string_makes_the_phrase_again(folder, tmp_path, monkeypatch):
    guitar.demo_guitar(8_000)
    changed = tmp_path / "strings.py"
    with open(strings.__file__, "rb") as source:
        changed.write_bytes(source.read() + b"\n")
    monkeypatch.setattr(strings, "__file__", str(changed))
    guitar.demo_guitar(8_000)
    assert len(list(folder.iterdir())) == 2


def test_folder_that_cannot_be_written_stops_nothing(folder):
    folder.write_text("a file where the folder should be")
    assert guitar.demo_guitar(8_000).shape == (72_000,)


def test_rename_that_fails_leaves_nothing_behind(folder, monkeypatch):
    def refuse(source, target):
        raise PermissionError("in use")

    monkeypatch.setattr("os.replace", refuse)
    guitar.demo_guitar(8_000)
    assert list(folder.iterdir()) == []

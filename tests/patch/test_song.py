"""Songs and sets, read from files."""

import pytest
from good_patch import GOOD

import rtfx
from rtfx.patch.song import kind_of_file, load_set, load_song

PATCH = """\
name = "Plain"
about = "For a song."
[blocks.tone]
kind = "oscillator"
pitch = "A4"
[blocks.blend]
kind = "mix"
dry = "input"
wet = "tone"
[output]
from = "blend"
"""
SONG = """\
name = "Low Tide"
about = "For a test."
tempo = 92

[[sections]]
name = "verse"
patch = "plain.toml"
values = { "tone.pitch" = "E4", "blend.amount" = 0.25 }

[[sections]]
name = "chorus"
patch = "plain.toml"
"""


@pytest.fixture
def folder(tmp_path):
    (tmp_path / "plain.toml").write_text(PATCH)
    (tmp_path / "song.toml").write_text(SONG)
    (tmp_path / "set.toml").write_text('name = "Night"\nabout = "t"\nsongs = ["song.toml", "song.toml"]\n')
    return tmp_path


def test_a_section_is_its_patch_with_the_values_and_the_tempo_in_it(folder):
    song = load_song(folder / "song.toml")
    verse, chorus = song.sections
    assert verse.patch.block("tone").values["pitch"] == pytest.approx(329.6276)
    assert verse.patch.block("blend").values["amount"] == 0.25
    assert chorus.patch.block("tone").values["pitch"] == 440
    assert (verse.patch.tempo, verse.name, chorus.name) == (92, "verse", "chorus")


def test_a_set_holds_its_songs_in_order(folder):
    whole = load_set(folder / "set.toml")
    assert [s.name for s in whole.songs] == ["Low Tide", "Low Tide"]


def test_files_are_told_apart_by_what_they_hold(folder):
    kinds = [kind_of_file(folder / f"{name}.toml") for name in ("plain", "song", "set")]
    assert kinds == ["patch", "song", "set"]


@pytest.mark.parametrize(("old", "new", "line", "words"), [
    ('"plain.toml"\nvalues', '"plane.toml"\nvalues', 7, "'plane.toml' cannot be used"),
    ('"tone.pitch"', '"tome.pitch"', 8, "there is no parameter 'tome.pitch'. Did you mean 'tone.pitch'?"),
    ("0.25", "1.25", 8, "amount = 1.25 is above 1"),
    ('name = "verse"\n', "", 5, "'name' is missing; wanted a text"),
    ("tempo = 92", "tempo = 9", 3, "wanted a number from 20 to 400"),
    ('name = "chorus"', 'nome = "chorus"', 11, "unknown key 'nome'. Did you mean 'name'?"),
    ("[[sections]]", "[[section]]", 0, "a song wants sections"),
])  # fmt: skip
def test_faults_of_a_song_have_their_line(folder, old, new, line, words):
    (folder / "song.toml").write_text(SONG.replace(old, new))
    with pytest.raises(rtfx.PatchError, match=r".+") as caught:
        load_song(folder / "song.toml")
    fits = [f for f in caught.value.faults if words in f.message]
    assert fits, str(caught.value)
    assert fits[0].line == line


def test_faults_of_a_patch_are_told_with_the_song_that_uses_it(folder):
    (folder / "plain.toml").write_text(PATCH.replace('"A4"', '"H4"'))
    with pytest.raises(rtfx.PatchError, match="wanted a note") as caught:
        load_set(folder / "set.toml")
    assert any("'song.toml' cannot be used" in f.message for f in caught.value.faults)


def test_a_patch_is_no_song(tmp_path):
    (tmp_path / "p.toml").write_text(GOOD)
    with pytest.raises(rtfx.PatchError, match="a song wants sections"):
        load_song(tmp_path / "p.toml")

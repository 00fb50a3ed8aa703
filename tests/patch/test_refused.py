"""Broken patches: each gets the right line and the right words, all faults at once, and never a traceback."""

import subprocess
import sys

import pytest

import rtfx

GOOD = """\
name = "Good"
about = "All is well."
tempo = 100
reference = 440

[blocks.tone]
kind = "oscillator"
wave = "sine"
pitch = "E4 -14c"

[blocks.product]
kind = "multiply"
x = "input"
y = "tone"

[blocks.place]
kind = "pan"
x = "product"

[blocks.safe]
kind = "limiter"
x = "place.left"

[output]
left = "safe"
right = "place.right"

[controls]
"tone.pitch" = { by = "knob 1", from = "A3", to = "A5", ladder = ["A3", "E4"] }
"""

# What is put in place of what, the line of the fault, and words of its message.
BROKEN = {
    "no name": ('name = "Good"\n', "", 0, "'name' is missing"),
    "empty name": ('"Good"', '" "', 1, "name = ' '; wanted a text"),
    "no about": ('about = "All is well."\n', "", 0, "'about' is missing"),
    "about is a number": ('"All is well."', "3", 2, "about = 3; wanted a text"),
    "unknown key": ("tempo = 100", "tempi = 100", 3, "unknown key 'tempi'. Did you mean 'tempo'?"),
    "tempo too fast": ("tempo = 100", "tempo = 1000", 3, "wanted a number from 20 to 400"),
    "tempo is true": ("tempo = 100", "tempo = true", 3, "tempo = True; wanted a number"),
    "tempo is not finite": ("tempo = 100", "tempo = nan", 3, "tempo = nan"),
    "reference is a text": ("reference = 440", 'reference = "A4"', 4, "reference = 'A4'; wanted a number"),
    "reference too low": ("reference = 440", "reference = 44", 4, "wanted a number from 380 to 500"),
    "not TOML": ("tempo = 100", "tempo 100", 3, "not TOML"),
    "key twice": ("tempo = 100", 'name = "Twice"', 3, "not TOML"),
    "unknown kind": ('"oscillator"', '"oscilator"', 7, "no kind 'oscilator'. Did you mean 'oscillator'?"),
    "no kind": ('kind = "oscillator"\n', "", 6, "'kind' is missing; wanted one of: add,"),
    "kind is a number": ('kind = "oscillator"', "kind = 1", 7, "kind = 1; wanted one of"),
    "unknown choice": ('"sine"', '"sinus"', 8, "wave = 'sinus' is not known. Did you mean 'sine'?"),
    "choice is a number": ('wave = "sine"', "wave = 1", 8, "wave = 1 is not known"),
    "unknown note": ('"E4 -14c"', '"H4"', 9, "pitch: found 'H4'; wanted a note"),
    "note without octave": ('"E4 -14c"', '"E"', 9, "wanted a note"),
    "unknown unit": ('"E4 -14c"', '"3 furlongs"', 9, "the unit 'furlongs' is not known here"),
    "wrong unit": ('"E4 -14c"', '"20 ms"', 9, "the unit 'ms' is not known here"),
    "pitch too high": ('"E4 -14c"', '"30 kHz"', 9, "pitch = 30000 Hz is above 12000 Hz. Lower it to 12000 Hz or less"),
    "pitch too low": ('"E4 -14c"', "-1", 9, "pitch = -1 Hz is below 0.05 Hz. Raise it"),
    "pitch is true": ('"E4 -14c"', "true", 9, "found True; wanted a note"),
    "pitch is a list": ('"E4 -14c"', "[440]", 9, "found [440]; wanted a note"),
    "pitch is not finite": ('"E4 -14c"', "inf", 9, "wanted a finite number"),
    "unknown parameter": ('wave = "sine"', 'wafe = "sine"', 8, "unknown key 'wafe'. Did you mean 'wave'?"),
    "unknown port": ('y = "tone"', 'y = "tone"\nz = "tone"', 15, "unknown key 'z'"),
    "port not wired": ('y = "tone"\n', "", 11, "port 'y' is not wired"),
    "dangling wire": ('y = "tone"', 'y = "tome"', 14, "y = 'tome': no such block. Did you mean 'tone'?"),
    "wire is a number": ('y = "tone"', "y = 3", 14, "y = 3; wanted the name of a block"),
    "wire to no output": ('y = "tone"', 'y = "tone.left"', 14, "say which output. Allowed: tone"),
    "which output?": ('x = "place.left"', 'x = "place"', 22, "say which output. Allowed: place.left, place.right"),
    "no such output": ('x = "place.left"', 'x = "place.top"', 22, "Allowed: place.left, place.right"),
    "block has a bad name": ("[blocks.safe]", '[blocks."Safe 1"]', 20, "a block cannot be called 'Safe 1'"),
    "block has a reserved name": ("[blocks.safe]", "[blocks.input]", 20, "cannot be called 'input'"),
    "block is no table": ("[blocks.tone]", "[blocks]\nother = 3\n[blocks.tone]", 7, "other = 3; wanted a table"),
    "no output": ('[output]\nleft = "safe"\nright = "place.right"\n', "", 0, "[output] wants from"),
    "half an output": ('right = "place.right"\n', "", 24, "[output] wants from"),
    "unknown output key": ('left = "safe"', 'lift = "safe"', 25, "unknown key 'lift'. Did you mean 'left'?"),
    "output dangles": ('left = "safe"', 'left = "save"', 25, "left = 'save': no such block. Did you mean 'safe'?"),
    "fixed follows": (
        'x = "place.left"', 'x = "place.left"\nlookahead = { base = 0.001, add = "tone", depth = 0.001 }', 23,
        "lookahead is fixed when the patch is built",
    ),
    "following nothing": ('"E4 -14c"', '{ base = "E4", depth = "30 c" }', 9, "pitch: 'add' is missing"),
    "following no one": ('"E4 -14c"', '{ add = "wobble", depth = 1 }', 9, "add = 'wobble': no such block"),
    "following too oddly": ('"E4 -14c"', '{ add = "product", depth = "2 apples" }', 9, "depth: found '2 apples'"),
    "following with a typo": ('"E4 -14c"', '{ bass = "E4", add = "input", depth = 1 }', 9, "Did you mean 'base'?"),
    "loop": ('x = "input"', 'x = "safe"', 11, "the loop"),
    "control of nothing": ('"tone.pitch" =', '"tone.pits" =', 29, "'tone.pits'. Did you mean 'tone.pitch'?"),
    "control of a choice": ('"tone.pitch" =', '"tone.wave" =', 29, "there is no parameter 'tone.wave'"),
    "control of a fixed": ('"tone.pitch" = { by = "knob 1", from = "A3", to = "A5", ladder = ["A3", "E4"] }',
                           '"safe.lookahead" = { by = "pedal" }', 29, "no control can move it"),
    "control by nothing": ('by = "knob 1", ', "", 29, "by = None; wanted the name of a control"),
    "control out of range": ('to = "A5"', 'to = "40 kHz"', 29, "= 40000 Hz is above 12000 Hz"),
    "control has a typo": ("from =", "form =", 29, "unknown key of a control 'form'. Did you mean 'from'?"),
    "control is a text": (
        '{ by = "knob 1", from = "A3", to = "A5", ladder = ["A3", "E4"] }', '"knob 1"', 29, "= 'knob 1'; wanted {"),
    "ladder is a text": ('["A3", "E4"]', '"A3"', 29, "ladder = 'A3'; wanted a list"),
    "ladder leaves the range": ('["A3", "E4"]', '["A2", "E4"]', 29, "'A2' lies outside from"),
}  # fmt: skip


def broken(name):
    old, new, line, words = BROKEN[name]
    assert GOOD.count(old) >= 1
    return GOOD.replace(old, new, 1), line, words


def test_the_good_patch_is_good():
    assert rtfx.loads(GOOD).name == "Good"


def test_there_are_at_least_forty():
    assert len(BROKEN) >= 40


@pytest.mark.parametrize("name", BROKEN)
def test_fault_names_line_and_words(name):
    text, line, words = broken(name)
    with pytest.raises(rtfx.PatchError, match=r".+") as caught:
        rtfx.loads(text, "bad.toml")
    fits = [f for f in caught.value.faults if words in f.message]
    assert fits, str(caught.value)
    assert fits[0].line == line
    assert str(fits[0]).startswith(f"bad.toml:{line}: " if line else "bad.toml: ")


def test_all_faults_are_reported_at_once_in_the_order_of_their_lines():
    text = GOOD.replace('"sine"', '"sinus"').replace('"E4 -14c"', '"H4"').replace('y = "tone"', 'y = "tome"')
    with pytest.raises(rtfx.PatchError, match="sinus") as caught:
        rtfx.loads(text)
    assert [f.line for f in caught.value.faults] == [8, 9, 14]


@pytest.mark.parametrize("name", ["unknown kind", "not TOML", "loop", "dangling wire"])
def test_command_line_says_it_without_a_traceback(name, tmp_path):
    path = tmp_path / "bad.toml"
    path.write_text(broken(name)[0])
    command = [sys.executable, "-c", "from rtfx.cli.main import run; run()", "check", str(path)]
    done = subprocess.run(command, capture_output=True, text=True)
    assert done.returncode == 1
    assert broken(name)[2] in done.stderr
    assert "Traceback" not in done.stderr


def test_files_that_cannot_be_read_are_said_plainly(tmp_path):
    (tmp_path / "latin.toml").write_bytes(b'name = "\xe9"')
    for path, words in (
        (tmp_path / "none.toml", "No such file"),
        (tmp_path, "directory"),
        (tmp_path / "latin.toml", "UTF-8"),
    ):
        with pytest.raises(rtfx.PatchError, match=words):
            rtfx.load(path)

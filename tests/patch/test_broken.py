"""Broken patches: each gets the right line and the right words, all faults at once, and never a traceback."""

import subprocess
import sys

import pytest
from good_patch import GOOD

import rtfx

FOLLOWING = '{ base = "E4 -14c", add = "wobble", depth = "30 c" }'

# What is put in place of what, the line of the fault, its block, and words of its message.
BROKEN = {
    # The head
    "no name": ('name = "Good"\n', "", 0, "", "'name' is missing; wanted a text"),
    "no about": ('about = """\nAll is [well], isn\'t it? # """\n', "", 0, "", "'about' is missing; wanted a text"),
    "empty name": ('"Good"', '" "', 1, "", "name = ' '; wanted a text"),
    "about is a number": ('about = """\nAll is [well], isn\'t it? # """', "about = 3\n", 2, "", "about = 3; wanted a"),
    "unknown key": ("tempo = 100", "tempi = 100", 4, "", "unknown key 'tempi'. Did you mean 'tempo'?"),
    "key over two lines": ("tempo = 100", '"te\\nmpo" = 100', 4, "", r"unknown key 'te\nmpo'. Did you mean 'tempo'?"),
    "unknown key of many names": ("tempo = 100", "a.b.c.d.e.f.g = 1", 4, "", "unknown key 'a'. Allowed: name, about"),
    "tempo too slow": ("tempo = 100", "tempo = 19.9", 4, "", "tempo = 19.9; wanted a number from 20 to 400"),
    "tempo too fast": ("tempo = 100", "tempo = 1000", 4, "", "tempo = 1000; wanted a number from 20 to 400"),
    "tempo is true": ("tempo = 100", "tempo = true", 4, "", "tempo = true; wanted a number"),
    "tempo is not finite": ("tempo = 100", "tempo = nan", 4, "", "tempo = nan; wanted a number"),
    "tempo is huge": ("tempo = 100", "tempo = 1" + 400 * "0", 4, "", "wanted a number from 20 to 400"),
    "reference is a text": ("reference = 440", 'reference = "A4"', 5, "", "reference = 'A4'; wanted a number"),
    "reference too high": ("reference = 440", "reference = 501", 5, "", "reference = 501; wanted a number from 380 to"),
    "reference too low": ("reference = 440", "reference = 44", 5, "", "wanted a number from 380 to 500"),
    "blocks is a text": ("[blocks.", "[x.", 7, "", "unknown key 'x'. Allowed: name, about, tempo,"),
    # TOML itself
    "not TOML": ("tempo = 100", "tempo 100", 4, "", "not TOML: Expected '='"),
    "open text": ('wave = "sine"', 'wave = "sine', 9, "", "not TOML: Illegal character"),
    "open list": ("] }\n", "", 54, "", "not TOML: Unclosed array"),
    "endless text": ("reference = 440", 'reference = """', 55, "", "not TOML: Unterminated string at the end"),
    "key twice": ("tempo = 100", 'name = "Twice"', 4, "", "'name' is given twice, first on line 1"),
    "block twice": ("[output]", "[blocks.late]\n\n[output]", 46, "", "'blocks.late' is given twice, first on line 26"),
    "control's key twice": ('by = "pedal"', 'by = "a", by = "b"', 55, "", "by' is given twice, first on line 55"),
    "endless number": ("tempo = 100", "tempo = " + 5000 * "9", 4, "", "a number has more than 4000 digits"),
    # Blocks and kinds
    "unknown kind": ('"multiply"', '"multipy"', 22, "product", "no kind 'multipy'. Did you mean 'multiply'?"),
    "no kind": ('kind = "add"\n', "", 16, "sum", "'kind' is missing; wanted one of: add, "),
    "kind is a number": ('kind = "add"', "kind = 1", 17, "sum", "kind = 1; wanted one of"),
    "block is no table": ("[blocks.tone]", "[blocks]\nother = 3\n[blocks.tone]", 8, "other", "other = 3; wanted a"),
    "block has a bad name": ("[blocks.late]", '[blocks."Late 1"]', 26, "", "cannot be called 'Late 1'; wanted lower-"),
    "block has a reserved name": ("[blocks.late]", "[blocks.output]", 26, "", "'output'; wanted any name but 'input'"),
    "unknown parameter": ('wave = "sine"', 'wafe = "sine"', 9, "tone", "unknown key 'wafe'. Did you mean 'wave'?"),
    "unknown port": ('y = "late"', 'y = "late"\nz = "late"', 20, "sum", "unknown key 'z'. Allowed: kind, x, y."),
    # Wires
    "port not wired": ('y = "late"\n', "", 16, "sum", "port 'y' is not wired; wanted y ="),
    "dangling wire": ('y = "late"', 'y = "lane"', 19, "sum", "y = 'lane': no such block. Did you mean 'late'?"),
    "wire in capitals": ('y = "late"', 'y = "Late"', 19, "sum", "y = 'Late': no such block. Did you mean 'late'?"),
    "wire is a number": ('y = "late"', "y = 3", 19, "sum", "y = 3; wanted the name of a block in quotes"),
    "wire is a list": ('y = "late"', 'y = ["late"]', 19, "sum", "y = a list; wanted the name of a block"),
    "wire to an output of one": ('y = "late"', 'y = "late.left"', 19, "sum", "only one output. Write 'late'."),
    "output of the guitar": ('x = "input"', 'x = "input.left"', 18, "sum", "only one output. Write 'input'."),
    "which output?": ('x = "place.left"', 'x = "place"', 43, "safe", "say which output. Allowed: place.left, place."),
    "no such output": ('"place.left"', '"place.lift"', 43, "safe", "no such output. Did you mean 'place.left'?"),
    "loop": ('y = "late"', 'y = "soft"', 16, "sum", "the loop sum → product → soft → sum must pass through a"),
    "loop of one": ('y = "late"', 'y = "sum"', 16, "sum", "the loop sum → sum must"),
    "loop over following": ('pitch = "5 Hz"', 'pitch = { base = 5, add = "tone", depth = 1 }', 7, "tone",
                            "the loop tone → wobble → tone must"),
    "delay follows itself": ('time = "330 ms"', 'time = { base = 0.3, add = "late", depth = 0.1 }', 26, "late",
                             "the loop late → late must"),
    # Values
    "unknown choice": ('"sine"', '"sinus"', 9, "tone", "wave = 'sinus' is not known. Did you mean 'sine'?"),
    "choice is a number": ('wave = "sine"', "wave = 1", 9, "tone", "wave = 1 is not known. Allowed: sine, triangle"),
    "unknown note": ('"5 Hz"', '"H4"', 14, "wobble", "pitch = 'H4'; wanted a note"),
    "note without octave": ('"5 Hz"', '"E"', 14, "wobble", "pitch = 'E'; wanted a note"),
    "note beyond hearing": ('"5 Hz"', '"A12"', 14, "wobble", "pitch = A12 (112640 Hz) is above 12000 Hz. Lower pitch"),
    "note beyond counting": ('"5 Hz"', '"A99999"', 14, "wobble", "pitch = 'A99999'; wanted a note"),
    "unknown unit": ('"5 Hz"', '"3 furlongs"', 14, "wobble", "unknown unit 'furlongs'. Allowed: Hz, kHz."),
    "unit in small letters": ('"5 Hz"', '"5 khz"', 14, "wobble", "unknown unit 'khz'. Did you mean 'kHz'?"),
    "wrong unit": ('"330 ms"', '"330 dB"', 29, "late", "unknown unit 'dB'. Allowed: s, ms, us."),
    "too high": ('"5 Hz"', "30000", 14, "wobble",
                 "pitch = 30000 Hz is above 12000 Hz. Lower pitch to 12000 Hz or less."),
    "too high in its own unit": ('"5 Hz"', '"30 kHz"', 14, "wobble",
                                 "pitch = 30 kHz is above 12 kHz. Lower pitch to 12 kHz or less."),
    "too low": ('"5 Hz"', "-1", 14, "wobble", "pitch = -1 Hz is below 0.05 Hz. Raise pitch to 0.05 Hz or more."),
    "too late": ('"330 ms"', '"2500 ms"', 29, "late", "time = 2500 ms is above 2000 ms. Lower time to 2000 ms"),
    "too much": ('"50 %"', '"150 %"', 35, "soft", "amount = 150 % is above 100 %. Lower amount to 100 % or less."),
    "too loud a factor": ('"50 %"', '"6 dB"', 35, "soft", "amount = 6 dB is above 1. Lower amount to 1 or less."),
    "endlessly loud": ('"50 %"', '"1e9 dB"', 35, "soft", "amount = '1e9 dB'; wanted a number"),
    "value is true": ('"5 Hz"', "true", 14, "wobble", "pitch = true; wanted a note"),
    "value is a list": ('"5 Hz"', "[440]", 14, "wobble", "pitch = a list; wanted a note"),
    "value is a date": ('"5 Hz"', "1999-01-01", 14, "wobble", "pitch = 1999-01-01; wanted a note"),
    "value is not finite": ('"5 Hz"', "inf", 14, "wobble", "pitch = inf; wanted a note"),
    "text is not finite": ('"5 Hz"', '"1e999 Hz"', 14, "wobble", "pitch = '1e999 Hz'; wanted a note"),
    # What follows a signal
    "fixed follows": ('ceiling = "-1 dB"', 'lookahead = { base = 0.001, add = "tone", depth = 0.001 }', 44, "safe",
                      "lookahead is fixed when the patch is built: it cannot follow a signal"),
    "following nothing": ('add = "wobble", ', "", 10, "tone", "pitch: 'add' is missing; wanted { base ="),
    "following without depth": (', depth = "30 c"', "", 10, "tone", "pitch: 'depth' is missing; wanted { base ="),
    "following no one": ('add = "wobble"', 'add = "wobbel"', 10, "tone", "pitch: add = 'wobbel': no such block. Did"),
    "following one of two": ('add = "wobble"', 'add = "place"', 10, "tone", "pitch: add = 'place': say which output"),
    "following too oddly": ('"30 c"', '"2 apples"', 10, "tone", "pitch: depth = '2 apples': unknown unit 'apples'"),
    "following too far": ('"30 c"', '"80 oct"', 10, "tone", "pitch: depth = '80 oct'; wanted -64 to 64 octaves"),
    "following from too high": ('"E4 -14c"', '"30 kHz"', 10, "tone", "pitch: base = 30 kHz is above 12 kHz. Lower it"),
    "following with a typo": ("base =", "bass =", 10, "tone", "unknown key of pitch 'bass'. Did you mean 'base'?"),
    "ratio too high": (FOLLOWING, '{ base = "late", ratio = "300/2" }', 10, "tone",
        "pitch: ratio = 300/2 is above 64. Lower it to 64 or less."),
    "ratio too low": (FOLLOWING, '{ base = "late", ratio = 0 }', 10, "tone",
        "pitch: ratio = 0 is below 0.015625. Raise it to 0.015625 or more."),
    "ratio is true": (FOLLOWING, '{ base = "late", ratio = true }', 10, "tone",
        "pitch: ratio = true; wanted a ratio"),
    "ratio of nothing": (FOLLOWING, '{ base = "late", ratio = "3/0" }', 10, "tone",
        "pitch: ratio = '3/0'; wanted a ratio"),
    "ratio of a note": (FOLLOWING, '{ base = "A4", ratio = "3/2" }', 10, "tone",
        "pitch: base = 'A4': no such block."),
    "ratio of a number": (FOLLOWING, '{ base = 440, ratio = "3/2" }', 10, "tone",
        "pitch: base = 440; wanted the name of a block in quotes"),
    "depth is not finite": ('"30 c"', "nan", 10, "tone", "pitch: depth = nan; wanted octaves"),
    "depth is true": ('"30 c"', "true", 10, "tone", "pitch: depth = true; wanted octaves"),
    # The output
    "no output": ('[output]\nleft = "safe"\nright = "place.right"\n', "", 0, "", "[output] says nothing; wanted from"),
    "half an output": ('right = "place.right"\n', "", 46, "", "[output] has 'left'; wanted from"),
    "too much output": ("[output]\n", '[output]\nfrom = "safe"\n', 46, "", "has 'from' and 'left' and 'right'; wanted"),
    "unknown output key": ('left = "safe"', 'lift = "safe"', 47, "", "key of [output] 'lift'. Did you mean 'left'?"),
    "output dangles": ('left = "safe"', 'left = "save"', 47, "", "left = 'save': no such block. Did you mean 'safe'?"),
    # Controls
    "control of nothing": ('"tone.pitch" =', '"tone.pits" =', 51, "", "'tone.pits'. Did you mean 'tone.pitch'?"),
    "control of a choice": ('"safe.ceiling" = { by = "pedal", from = -10, to = -0.5, ladder = [-10, -6] }',
                            '"tone.wave" = { by = "pedal" }', 55, "tone", "wave is a choice: no control can move it"),
    "control of a fixed": ('"safe.ceiling" = { by = "pedal", from = -10, to = -0.5, ladder = [-10, -6] }',
                           '"safe.lookahead" = { by = "pedal" }', 55, "safe",
                           "lookahead is fixed when the patch is built: no control can move it"),
    "control without quotes": ('"tone.pitch" =', "tone.pitch =", 51, "", '\'tone.pitch\' needs quotes: write "tone.p'),
    "control by nothing": ('by = "pedal", ', "", 55, "safe", "'by' is missing; wanted the name of a control"),
    "control by a number": ('by = "pedal"', "by = 1", 55, "safe", "by = 1; wanted the name of a control"),
    "control out of range": ('to = "A5"', 'to = "40 kHz"', 51, "tone", "pitch: to = 40 kHz is above 12 kHz. Lower it"),
    "control has a typo": ("from = -10", "form = -10", 55, "safe", "key of a control 'form'. Did you mean 'from'?"),
    "control is a text": ('{ by = "pedal", from = -10, to = -0.5, ladder = [-10, -6] }', '"pedal"', 55, "safe",
                          "'safe.ceiling' = 'pedal'; wanted { by ="),
    "ladder is a text": ("[-10, -6]", '"-6 dB"', 55, "safe", "ladder = '-6 dB'; wanted a list of values"),
    "ladder above its ends": ('"E4", "A4"', '"E4", "B5"', 53, "tone", "'B5' lies outside from … to. Allowed: 220 to"),
    "ladder below its ends": ("[-10, -6]", "[-10, -12]", 55, "safe", "-12 lies outside from … to. Allowed: -10 to"),
    "step of a ladder is true": ("[-10, -6]", "[true]", 55, "safe", "ceiling: ladder = true; wanted a level"),
    "step of a ladder is not finite": ("[-10, -6]", "[-10, nan]", 55, "safe", "ladder = nan; wanted a level"),
    "step of a ladder is a list": ("[-10, -6]", "[[-6]]", 55, "safe", "ladder = a list; wanted a level"),
    "step of a ladder is no note": ('"E4", "A4"', '"E4", "H4"', 53, "tone", "pitch: ladder = 'H4'; wanted a note"),
}  # fmt: skip


def broken(name):
    old, new = BROKEN[name][:2]
    assert old in GOOD
    return GOOD.replace(old, new, 1)


def faults_of(text):
    with pytest.raises(rtfx.PatchError, match=r".") as caught:
        rtfx.loads(text, "bad.toml")
    return caught.value.faults


def test_the_good_patch_is_good():
    assert rtfx.loads(GOOD).name == "Good"


@pytest.mark.parametrize("name", BROKEN)
def test_fault_names_line_block_and_words(name):
    _, _, line, block, words = BROKEN[name]
    found = faults_of(broken(name))
    assert (line, block) in [(f.line, f.block) for f in found if words in f.message], "\n".join(map(str, found))


MORE_THAN_ONE = {  # what else goes wrong with it
    "blocks is a text",  # all wires dangle
    "block has a bad name",  # its old name is still in use
    "block has a reserved name",
    "following one of two",  # it is a loop as well
    "unknown output key",  # a side is missing
}


@pytest.mark.parametrize("name", sorted(set(BROKEN) - MORE_THAN_ONE))
def test_one_mistake_is_one_fault(name):
    found = faults_of(broken(name))
    assert len(found) == 1, "\n".join(map(str, found))


@pytest.mark.parametrize("name", BROKEN)
def test_every_fault_has_a_line_of_its_own_in_the_message(name):
    with pytest.raises(rtfx.PatchError, match=r".") as caught:
        rtfx.loads(broken(name), "bad.toml")
    assert str(caught.value).split("\n") == [str(fault) for fault in caught.value.faults]


def test_all_faults_are_reported_at_once_in_the_order_of_their_lines():
    names = ["tempo too fast", "unknown choice", "unknown note", "dangling wire", "too late", "output dangles"]
    text = GOOD
    for name in reversed(names):
        text = text.replace(*BROKEN[name][:2], 1)
    assert [(f.line, f.block) for f in faults_of(text)] == [BROKEN[name][2:4] for name in names]


def test_parts_that_are_no_tables_are_all_said():
    found = faults_of('name = "a"\nabout = "b"\nblocks = 3\noutput = "tone"\ncontrols = []\n')
    assert [(f.line, f.message.partition(";")[0]) for f in found] == [
        (3, "blocks = 3"), (4, "output = 'tone'"), (5, "controls = a list"),
    ]  # fmt: skip


def test_a_fault_reads_as_file_line_block_and_the_way_out():
    text = GOOD.replace('"5 Hz"', "30000")
    with pytest.raises(rtfx.PatchError) as caught:
        rtfx.loads(text, "presets/bell.toml")
    way_out = "pitch = 30000 Hz is above 12000 Hz. Lower pitch to 12000 Hz or less."
    assert str(caught.value) == f"presets/bell.toml:14: block 'wobble': {way_out}"


@pytest.mark.parametrize("name", ["unknown kind", "not TOML", "loop", "dangling wire", "too high", "key twice"])
def test_command_line_says_it_without_a_traceback(name, tmp_path):
    path = tmp_path / "bad.toml"
    path.write_text(broken(name), encoding="utf-8")
    command = [sys.executable, "-c", "from rtfx.cli.main import run; run()", "check", str(path)]
    done = subprocess.run(command, capture_output=True, text=True)
    assert done.returncode == 1
    assert f"{path}:{BROKEN[name][2]}: " in done.stderr
    assert BROKEN[name][4] in done.stderr
    assert "Traceback" not in done.stderr


def test_a_file_that_is_not_there_is_said(tmp_path):
    with pytest.raises(rtfx.PatchError, match=r"none\.toml: cannot be read: No such file"):
        rtfx.load(tmp_path / "none.toml")


def test_a_folder_is_said(tmp_path):
    with pytest.raises(rtfx.PatchError, match="cannot be read: Is a directory"):
        rtfx.load(tmp_path)


def test_a_file_without_permission_is_said(tmp_path, monkeypatch):
    def refuse(path):
        raise PermissionError(13, "Permission denied", str(path))

    monkeypatch.setattr("pathlib.Path.read_bytes", refuse)  # root may read everything
    with pytest.raises(rtfx.PatchError, match="cannot be read: Permission denied"):
        rtfx.load(tmp_path / "mine.toml")


def test_a_path_with_a_zero_in_it_is_said():
    with pytest.raises(rtfx.PatchError, match="is no path"):
        rtfx.load("a\0b")


def test_text_in_another_encoding_is_said_with_its_line(tmp_path):
    (tmp_path / "latin.toml").write_bytes(b'name = "a"\nabout = "\xe9"\n')
    with pytest.raises(rtfx.PatchError, match=r"latin\.toml:2: not UTF-8 text: .* at byte 20"):
        rtfx.load(tmp_path / "latin.toml")

"""A good patch becomes the data that it describes."""

import pytest
from good_patch import GOOD

import rtfx
from rtfx.blocks import table
from rtfx.patch.model import Control, Follow, Wire
from rtfx.patch.read import set_value

HEAD = 'name = "a"\nabout = "b"\n'
PLACE = '[blocks.place]\nkind = "pan"\nx = "input"\n'


@pytest.fixture
def good():
    return rtfx.loads(GOOD, "good.toml")


def test_blocks_keep_the_order_of_the_file(good):
    assert [b.name for b in good.blocks] == ["tone", "wobble", "sum", "product", "late", "soft", "place", "safe"]


def test_blocks_know_their_lines(good):
    assert [b.line for b in good.blocks] == [7, 12, 16, 21, 26, 31, 37, 41]


def test_head_is_read(good):
    assert (good.name, good.tempo, good.reference, good.path) == ("Good", 100.0, 440.0, "good.toml")


def test_tempo_and_reference_may_be_left_out():
    patch = rtfx.loads(HEAD + '[output]\nfrom = "input"\n')
    assert (patch.tempo, patch.reference) == (120.0, 440.0)


def test_text_is_kept(good):
    assert good.text == GOOD


def test_wires_name_blocks_and_outputs(good):
    assert good.block("safe").wires == {"x": Wire("place", 0)}
    assert (good.left, good.right) == (Wire("safe"), Wire("place", 1))


def test_values_have_the_parameters_unit(good):
    assert good.block("late").values == {"time": 0.33}
    assert good.block("soft").values == {"amount": 0.5}


def test_what_is_not_said_has_its_default(good):
    assert good.block("safe").values["release"] == 0.1
    assert good.block("wobble").choices == {"wave": "sine"}


def test_a_parameter_that_follows_keeps_its_base(good):
    assert good.block("tone").values["pitch"] == pytest.approx(440 * 2 ** ((64 - 69 - 0.14) / 12))
    assert good.block("tone").follows == {"pitch": Follow(Wire("wobble"), 30 / 1200)}


def test_a_ratio_makes_the_base_a_block():
    text = GOOD.replace('{ base = "E4 -14c", add = "wobble", depth = "30 c" }', '{ base = "wobble", ratio = "3/2" }')
    assert rtfx.loads(text).block("tone").follows == {"pitch": Follow(base=Wire("wobble"), ratio=1.5)}


def test_a_following_table_may_stand_by_itself(good):
    text = GOOD.replace('pitch = { base = "E4 -14c", add = "wobble", depth = "30 c" }', "")
    text += '[blocks.tone.pitch]\nbase = "E4 -14c"\nadd = "wobble"\ndepth = "30 c"\n'
    assert rtfx.loads(text).block("tone").follows == good.block("tone").follows


def test_controls_have_ends_and_a_ladder(good):
    assert good.controls[1] == Control("safe", "ceiling", "pedal", -10.0, -0.5, (-10.0, -6.0))
    assert good.controls[0].ladder == pytest.approx([220.0, 440 * 2 ** (-5 / 12), 440.0])


def test_control_without_ends_goes_over_the_whole_range():
    text = GOOD.replace('"safe.ceiling" = { by = "pedal", from = -10, to = -0.5, ladder = [-10, -6] }', "")
    control = rtfx.loads(text + '"soft.amount" = { by = "pedal" }\n').controls[1]
    assert (control.low, control.high, control.ladder) == (0.0, 1.0, ())


def test_control_may_be_turned_round():
    text = GOOD.replace("from = -10, to = -0.5", "from = -0.5, to = -10")
    assert rtfx.loads(text).controls[1] == Control("safe", "ceiling", "pedal", -0.5, -10.0, (-10.0, -6.0))


def test_mono_goes_to_both_sides():
    patch = rtfx.loads(HEAD + PLACE + '[output]\nfrom = "place.right"\n')
    assert (patch.left, patch.right) == (Wire("place", 1), Wire("place", 1))


def test_stereo_goes_left_and_right():
    patch = rtfx.loads(HEAD + PLACE + '[output]\nfrom = "place"\n')
    assert (patch.left, patch.right) == (Wire("place", 0), Wire("place", 1))


def test_blocks_that_reach_no_output_are_kept():
    assert [b.name for b in rtfx.loads(HEAD + PLACE + '[output]\nfrom = "input"\n').blocks] == ["place"]


def test_block_names_may_have_digits_and_dashes():
    text = HEAD + PLACE.replace("place", "2nd-place_3") + '[output]\nfrom = "2nd-place_3"\n'
    assert rtfx.loads(text).left == Wire("2nd-place_3")


def test_notes_follow_the_reference_of_the_patch():
    text = GOOD.replace("reference = 440", "reference = 432").replace('"5 Hz"', '"A4"')
    assert rtfx.loads(text).block("wobble").values["pitch"] == 432.0


def test_a_loop_through_a_delay_is_allowed(good):
    assert good.block("sum").wires["y"] == Wire("late")


def test_a_byte_order_mark_is_passed_over(tmp_path):
    (tmp_path / "marked.toml").write_text(GOOD, encoding="utf-8-sig")
    assert rtfx.load(tmp_path / "marked.toml").text == GOOD


def test_a_kind_from_a_package_that_does_not_load_is_a_fault(monkeypatch):
    class Broken:
        def load(self):
            raise ImportError("no module named 'left'")

    points = {**table._entry_points(), "left-over": Broken()}
    monkeypatch.setattr(table, "_entry_points", lambda: points)
    with pytest.raises(rtfx.PatchError, match=r":13: .* 'left-over' is offered by a package that does not load \(Imp"):
        rtfx.loads(GOOD.replace('wave = "sine"\n', "").replace('"oscillator"\npitch = "5', '"left-over"\npitch = "5')
                   .replace("tempo", "\ntempo"))  # fmt: skip


def test_set_value_changes_one_value(good):
    changed = set_value(good, "wobble.pitch", "A4")
    assert changed.block("wobble").values == {"pitch": 440.0}
    assert changed.block("tone") is good.block("tone")


def test_set_value_takes_plain_numbers(good):
    assert set_value(good, "soft.amount", 0.25).block("soft").values["amount"] == 0.25


def test_set_value_changes_a_choice(good):
    assert set_value(good, "tone.wave", "saw").block("tone").choices == {"wave": "saw"}


def test_set_value_keeps_what_follows(good):
    assert set_value(good, "tone.pitch", "A4").block("tone").follows == good.block("tone").follows


def test_set_value_leaves_the_patch_it_was_given(good):
    set_value(good, "soft.amount", 0.25)
    assert good.block("soft").values["amount"] == 0.5


@pytest.mark.parametrize(
    ("target", "found", "words"),
    [
        ("tone.pits", "A4", r"--set: there is no parameter 'tone\.pits'\. Did you mean 'tone\.pitch'\?"),
        ("tone", "A4", r"--set: there is no parameter 'tone'"),
        ("sum.x", "input", r"--set: there is no parameter 'sum\.x'"),
        ("tone.pitch", "H4", r"--set: block 'tone': pitch = 'H4'; wanted a note"),
        ("tone.pitch", "30 kHz", r"--set: block 'tone': pitch = 30 kHz is above 12 kHz"),
        ("tone.wave", "sinus", r"--set: block 'tone': wave = 'sinus' is not known\. Did you mean 'sine'"),
        ("soft.amount", True, r"--set: block 'soft': amount = true; wanted a number"),
    ],
)
def test_set_value_refuses_as_the_file_does(good, target, found, words):
    with pytest.raises(rtfx.PatchError, match=words):
        set_value(good, target, found)

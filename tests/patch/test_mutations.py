"""However a patch file is damaged, it is read or refused, and nothing else happens."""

import re

from good_patch import GOOD
from hypothesis import given, settings
from hypothesis import strategies as st

import rtfx

PIECES = [*'"[]{}=.,#\n \\0aé-', "\r\n", "\u2028", "1e999", "9" * 400, '"""', "'''", "nan", "true", "1979-05-27"]
PIECES += ['"input"', '"place"', '"A99999"', '"1e9 dB"', "[[", "]]", "{ base = 1 }", "blocks", "kind", "\ufeff"]
WORDS = re.findall(r"\w+|\"[^\"\n]*\"|[^\w\s]|\s+", GOOD)


def read_or_refused(text):
    try:
        patch = rtfx.loads(text)
    except rtfx.PatchError as error:
        last = text.count("\n") + 1
        return bool(error.faults) and all(0 <= fault.line <= last for fault in error.faults)
    return bool(patch.name)


@settings(max_examples=300, deadline=None)
@given(
    st.lists(st.tuples(st.integers(0, len(GOOD)), st.integers(0, 40), st.sampled_from(PIECES)), min_size=1, max_size=4)
)
def test_damaged_text_is_read_or_refused(damage):
    text = GOOD
    for at, length, put in damage:
        text = text[:at] + put + text[at + length :]
    assert read_or_refused(text)


@settings(max_examples=300, deadline=None)
@given(st.lists(st.tuples(st.integers(0, len(WORDS) - 1), st.sampled_from([*WORDS, *PIECES])), min_size=1, max_size=4))
def test_exchanged_words_are_read_or_refused(changes):
    words = list(WORDS)
    for at, put in changes:
        words[at] = put
    assert read_or_refused("".join(words))


@settings(max_examples=200, deadline=None)
@given(
    st.lists(st.tuples(st.sampled_from(["drop", "double", "move"]), *2 * [st.integers(0, 200)]), min_size=1, max_size=6)
)
def test_shuffled_lines_are_read_or_refused(changes):
    lines = GOOD.split("\n")
    for what, at, to in changes:
        line = lines[at % len(lines)]
        if what != "double" and len(lines) > 1:
            lines.remove(line)
        if what != "drop":
            lines.insert(to % (len(lines) + 1), line)
    assert read_or_refused("\n".join(lines))


@settings(max_examples=100, deadline=None)
@given(st.text())
def test_any_text_is_read_or_refused(text):
    assert read_or_refused(text)

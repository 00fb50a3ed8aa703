"""However a patch file is damaged, it is read or refused, and nothing else happens."""

from hypothesis import given, settings
from hypothesis import strategies as st
from test_refused import GOOD

import rtfx

CHARACTERS = st.sampled_from([*'"[]{}=.,#\n \\0aé', "1e999", '"""', "'''", "nan", "true"])
DAMAGE = st.lists(st.tuples(st.integers(0, len(GOOD)), st.integers(0, 40), CHARACTERS), min_size=1, max_size=4)


@settings(max_examples=200, deadline=None)
@given(DAMAGE)
def test_damaged_text_is_read_or_refused(damage):
    text = GOOD
    for at, length, put in damage:
        text = text[:at] + put + text[at + length :]
    try:
        patch = rtfx.loads(text)
    except rtfx.PatchError as error:
        assert error.faults  # noqa: PT017
    else:
        assert patch.name

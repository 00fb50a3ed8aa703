"""Lines of keys: wherever TOML lets a key stand, its line is found."""

import tomllib

import pytest
from hypothesis import given
from hypothesis import strategies as st

from rtfx.patch.lines import given_twice, key_lines, line_of

PLACES = {
    "bare key": ("a = 1\nb = 2", ("b",), 2),
    "quoted key": ('"a b" = 1\n"c.d" = 2', ("c.d",), 2),
    "escaped key": ('\n"\\u00e9\\n" = 1', ("é\n",), 2),
    "literal key": ("\n'\\u' = 1", ("\\u",), 2),
    "dotted key": ('\na . "b" . c = 1', ("a", "b", "c"), 2),
    "around a dotted key": ("\na.b.c = 1", ("a", "b"), 2),
    "table": ("\n[ a . 'b' ]", ("a", "b"), 2),
    "key in a table": ("[a]\n\nb = 1\n[c]\nb = 2", ("c", "b"), 5),
    "list of tables": ("[[a]]\nb = 1\n[[a]]\nb = 2", ("a",), 1),
    "inline table": ("\na = { b = 1, c = { d = 2 } }", ("a", "c", "d"), 2),
    "after an inline table": ("a = { b = 1 }\nc = 2", ("c",), 2),
    "after an empty inline table": ("a = {}\nc = 2", ("c",), 2),
    "element of a list": ("a = [\n1,\n2.5, 3,\n]", ("a", 2), 3),
    "list in a list": ("a = [[1,\n2],\n[3]]", ("a", 1, 0), 3),
    "table in a list": ("a = [\n{ b = 1 },\n{ b = 2 } ]", ("a", 1, "b"), 3),
    "after a list over lines": ("a = [ 1, # ] \n2,\n]\nb = 2", ("b",), 4),
    "key after a list in an inline table": ("a = { b = [\n1,\n], c = 2 }", ("a", "c"), 3),
    "comment with quotes": ("# don't \"\"\"\na = 1 # '''\nb = 2", ("b",), 3),
    "text over lines": ('a = """\nb = 1\n"""\nb = 2', ("b",), 4),
    "text with quotes at its end": ('a = """x\n"""""\nb = 2', ("b",), 3),
    "text with an escaped end": ('a = """x\\"""\n"""\nb = 2', ("b",), 3),
    "literal over lines": ("a = '''\n[b]\n\\'''\nb = 2", ("b",), 4),
    "text like a header": ('a = "[b]"\n[b]', ("b",), 2),
    "unusual line ends in a text": ('a = "\u2028\u0085"\nb = 2', ("b",), 2),
    "lines that end in CR LF": ("a = 1\r\nb = 2\r\n", ("b",), 2),
    "date": ("a = 1979-05-27 07:32:00\nb = 2", ("b",), 2),
}


@pytest.mark.parametrize("name", PLACES)
def test_key_is_found(name):
    text, path, line = PLACES[name]
    tomllib.loads(text)
    assert key_lines(text)[path] == line


def test_what_has_no_line_has_that_of_the_table_around_it():
    assert line_of(key_lines("\n[a]\nb = 1"), ("a", "c", "d")) == 2


def test_what_has_no_table_around_it_has_no_line():
    assert line_of(key_lines("\n[a]\nb = 1"), ("c",)) == 0


def test_lists_of_tables_may_repeat_their_keys():
    assert given_twice("[[a]]\nb = 1\n[[a]]\nb = 2\nc = [1, 1]") is None


def test_a_table_may_be_named_by_its_parts_first():
    assert given_twice("[a.b]\nc = 1\n[a]\nd = 1") is None


VALUES = st.recursive(
    st.sampled_from(["1", "2.5", '"a = 1"', "'[b]'", '"""\nx = 1\n"""', "true", "[]", "{}", "[ # ]\n1,\n]"]),
    lambda inner: st.one_of(
        st.lists(inner, max_size=3).map(lambda v: f"[ {', '.join(v)} ]"),
        st.lists(inner, max_size=3).map(lambda v: f"{{ {', '.join(f'k{i} = {x}' for i, x in enumerate(v))} }}"),
    ),
    max_leaves=6,
)


@given(st.lists(st.tuples(st.booleans(), VALUES), max_size=6))
def test_every_key_is_found_after_any_value(entries):
    text, expected, table = "", {}, ()
    for i, (opens, value) in enumerate(entries):
        if opens:
            table = (f"t{i}",)
            expected[table] = text.count("\n") + 1
            text += f"[t{i}]\n"
        expected[(*table, f"a{i}")] = text.count("\n") + 1
        text += f"a{i} = {value}\n"
    tomllib.loads(text)
    lines = key_lines(text)
    assert {path: lines.get(path) for path in expected} == expected

"""Find on which line of a TOML text each key stands; the standard reader does not say.

A path is a tuple: the names of the tables and of the key, and a number for an element of a list.  The text up to
its end, or up to its first fault, is taken to be right: that it is, the standard reader has found out.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator
from dataclasses import dataclass

Path = tuple[str | int, ...]
DEEPEST = 5  # names of the longest path in a patch: controls, block.parameter, ladder, number
_TOKEN = re.compile(
    r"""
      (?P<comment> \#[^\n]* )
    | (?P<string>  \"{3} (?: \\. | (?!\"{3})[^\\] )* \"{3,5}  |  '{3} (?: (?!'{3}). )* '{3,5}
                 | " (?: \\. | [^"\\\n] )* "  |  '[^'\n]*' )
    | (?P<bare>    [A-Za-z0-9_+:-]+ )
    | (?P<mark>    [=.,\[\]{}\n] )
    """,
    re.VERBOSE | re.DOTALL,
)


@dataclass
class _Open:
    """A list or an inline table that is not closed yet."""

    path: Path
    closing: str
    index: int = -1  # of the element being read; -1: none yet


class _Walk:
    """Where we are in the text: in the header, in a key or in a value, and inside of what."""

    def __init__(self) -> None:
        self.table: Path = ()
        self.key: list[str] = []
        self.key_line = 0
        self.brackets = 0  # of the header being read
        self.headers = 0
        self.path: Path = ()
        self.in_value = False
        self.open: list[_Open] = []

    def step(self, kind: str, token: str, line: int) -> tuple[Path, int] | None:
        """Take the next token; returns the path that is complete with it, and its line."""
        return self._value(kind, token, line) if self.in_value else self._key(kind, token, line)

    def _key(self, kind: str, token: str, line: int) -> tuple[Path, int] | None:
        if kind != "mark":
            self.key_line = self.key_line if self.key else line
            self.key.append(_name(token))
        elif token == "=":
            base = self.open[-1].path if self.open else self.table
            self.path, self.key, self.in_value = _joined(base, self.key), [], True
            return self.path, self.key_line
        elif token == "[":
            self.brackets += 1
        elif token == "]" and self.brackets and self.key:
            return self._header()
        elif token == "}" and self.open:
            self._close()
        elif token == "\n" and not self.open:
            self.key, self.brackets = [], 0
        return None

    def _header(self) -> tuple[Path, int]:
        # Of a list of tables each is another one: a number tells them apart.
        number: Path = (self.headers,) if self.brackets > 1 else ()
        self.table, self.key, self.brackets = _joined((), self.key) + number, [], 0
        self.headers += 1
        return self.table, self.key_line

    def _value(self, kind: str, token: str, line: int) -> tuple[Path, int] | None:
        if token == "\n":
            self.in_value = bool(self.open)
        elif token in ("]", "}"):
            self._close()
        elif token == ",":
            self._next()
        elif token != ".":
            found = self._element(line)
            if token in ("[", "{"):
                self.open.append(_Open(self.path, "]" if token == "[" else "}"))
                self.in_value = token == "["
            return found
        return None

    def _element(self, line: int) -> tuple[Path, int] | None:
        """Note that a value begins; returns its path if it is the next one of a list."""
        inside = self.open[-1] if self.open else None
        if inside is None or inside.closing != "]" or self.path[:-1] == inside.path:
            return None
        inside.index += 1
        self.path = (*inside.path, inside.index)
        return self.path, line

    def _next(self) -> None:
        if self.open:
            self.path = self.open[-1].path
            self.in_value = self.open[-1].closing == "]"

    def _close(self) -> None:
        if self.open:
            self.path = self.open.pop().path
        self.in_value = True


def _name(token: str) -> str:
    """Return the key that *token* stands for."""
    if token[0] == '"' and "\\" in token:
        try:
            return str(tomllib.loads(f"key = {token}")["key"])
        except ValueError:
            return token
    return token[1:-1] if token[0] in "\"'" else token


def _joined(base: Path, key: list[str]) -> Path:
    """Return the path of *key* below *base*; what lies too deep for a patch is cut off."""
    return (*base, *key[: DEEPEST + 1])[: DEEPEST + 1]


def key_places(text: str) -> Iterator[tuple[Path, int]]:
    """Yield the path and the line (from 1) of every header, key and list element of *text*, in its order.

    A path longer than `DEEPEST` may be cut off.
    """
    walk, line = _Walk(), 1
    for match in _TOKEN.finditer(text):
        kind = match.lastgroup or ""
        if kind != "comment":
            found = walk.step(kind, match.group(), line)
            if found is not None and found[0]:
                yield found
        line += match.group().count("\n")


def key_lines(text: str) -> dict[Path, int]:
    """Return the line (from 1) on which every table, key and list element of *text* is first named."""
    lines: dict[Path, int] = {}
    for path, line in key_places(text):
        for length in range(1, min(len(path), DEEPEST) + 1):
            lines.setdefault(path[:length], line)
    return lines


def line_of(lines: dict[Path, int], path: Path) -> int:
    """Return the line of *path*, or of the nearest table around it (0: none)."""
    for length in range(len(path), 0, -1):
        if path[:length] in lines:
            return lines[path[:length]]
    return 0


def given_twice(text: str) -> tuple[Path, int, int] | None:
    """Return the first key or header of *text* that comes a second time: its path, that line, and its first line."""
    first: dict[Path, int] = {}
    for path, line in key_places(text):
        if len(path) > DEEPEST:  # may be cut off, and then stand for several
            continue
        if isinstance(path[-1], str) and path in first:
            return path, line, first[path]
        first[path] = line
    return None

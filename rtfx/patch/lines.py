"""Find on which line of a TOML text each key stands; the standard reader does not say."""

from __future__ import annotations

import re

_PART = re.compile(r"""\s*(?:"((?:[^"\\]|\\.)*)"|'([^']*)'|([A-Za-z0-9_-]+))\s*(\.?)""")
_HEADER = re.compile(r"\s*\[{1,2}([^\[\]]+)\]{1,2}")
_STRINGS = re.compile(r'"(?:[^"\\]|\\.)*"|\'[^\']*\'|#.*')


def _path(text: str) -> tuple[tuple[str, ...], int]:
    """Return the dotted key at the start of *text* and where it ends."""
    parts, at = [], 0
    while match := _PART.match(text, at):
        parts.append(next(g for g in match.groups()[:3] if g is not None))
        at = match.end()
        if not match.group(4):
            break
    return tuple(parts), at


def key_lines(text: str) -> dict[tuple[str, ...], int]:
    """Return the line (from 1) of every table and every key of *text*, by its whole path."""
    lines: dict[tuple[str, ...], int] = {}
    table: tuple[str, ...] = ()
    depth, closing = 0, ""
    for number, line in enumerate(text.splitlines(), 1):
        if closing:
            closing = "" if closing in line else closing
            continue
        bare = _STRINGS.sub("", re.sub(r'""".*?"""|\'\'\'.*?\'\'\'', "", line))
        if depth == 0 and (header := _HEADER.match(line)):
            table = _path(header.group(1))[0]
            lines.setdefault(table, number)
            continue
        if depth == 0:
            key, end = _path(line)
            if key and line[end:].lstrip().startswith("="):
                lines.setdefault(table + key, number)
        depth = max(0, depth + sum(bare.count(c) for c in "[{") - sum(bare.count(c) for c in "]}"))
        closing = next((q for q in ('"""', "'''") if line.count(q) % 2), "")
    return lines


def line_of(lines: dict[tuple[str, ...], int], *path: str) -> int:
    """Return the line of *path*, or of the nearest table around it (0: none)."""
    for length in range(len(path), 0, -1):
        if path[:length] in lines:
            return lines[path[:length]]
    return 0

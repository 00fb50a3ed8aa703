"""From a file to tables: bytes to text, text to what TOML makes of it.  Each can fail in one way only, said plainly."""

from __future__ import annotations

import re
import tomllib
from pathlib import Path
from typing import Any

from rtfx.patch.errors import Fault, PatchError, shown
from rtfx.patch.lines import given_twice

_PLACE = re.compile(r" \(at (?:line (?P<line>\d+), column (?P<column>\d+)|end of document)\)$")
_LONG_NUMBER = re.compile(r"[0-9_]{4000,}")
_BYTE_ORDER_MARK = "\ufeff"


def text_of(path: str | Path) -> str:
    """Return the text of the file at *path*.

    Raises
    ------
    PatchError
        If there is no such file, it cannot be read, or it is not UTF-8 text.
    """
    try:
        content = Path(path).read_bytes()
    except OSError as error:
        message = f"cannot be read: {error.strerror or error}. Wanted a patch, a TOML file."
        raise PatchError([Fault(str(path), 0, "", message)]) from None
    except ValueError as error:  # a path with a zero in it
        raise PatchError([Fault(shown(str(path))[1:-1], 0, "", f"is no path: {error}")]) from None
    try:
        return content.decode("utf-8")
    except UnicodeDecodeError as error:
        line = content.count(b"\n", 0, error.start) + 1
        message = f"not UTF-8 text: {error.reason} at byte {error.start}. Save the file as UTF-8."
        raise PatchError([Fault(str(path), line, "", message)]) from None


def content_of(text: str, path: str) -> dict[str, Any]:
    """Return the tables of a TOML *text*; *path* is what a fault calls the file.

    Raises
    ------
    PatchError
        If *text* is not TOML, with the line.
    """
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise PatchError([_syntax_fault(text, path, str(error))]) from None
    except RecursionError:
        raise PatchError([Fault(path, 0, "", "not TOML that can be read: lists lie in lists too deeply")]) from None
    except ValueError:  # only of int(), that it does not read more than 4300 digits
        found = _LONG_NUMBER.search(text)
        line = text.count("\n", 0, found.start()) + 1 if found else 0
        raise PatchError([Fault(path, line, "", "a number has more than 4000 digits. Write a shorter one.")]) from None


def _syntax_fault(text: str, path: str, message: str) -> Fault:
    """Return the fault that the standard reader's *message* describes; it gives lines only in its text."""
    place = _PLACE.search(message)
    reason = message[: place.start()] if place else message
    if place is None or place["line"] is None:
        return Fault(path, max(len(text.rstrip().split("\n")), 1), "", f"not TOML: {reason} at the end of the file")
    line = int(place["line"])
    twice = given_twice("\n".join(text.split("\n")[:line]))
    if twice is not None:
        name = shown(".".join(map(str, twice[0])))
        return Fault(path, twice[1], "", f"{name} is given twice, first on line {twice[2]}. Keep one of the two.")
    return Fault(path, line, "", f"not TOML: {reason} (column {place['column']})")


def without_mark(text: str) -> str:
    """Return *text* without the byte order mark that some editors put before it."""
    return text.removeprefix(_BYTE_ORDER_MARK)

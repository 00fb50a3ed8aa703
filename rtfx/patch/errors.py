"""What can be wrong with a patch file, and how it is said.

PatchError        all the faults of one file, in the order of its lines
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from dataclasses import dataclass

LONGEST = 60  # characters of what was found that a message repeats
ALIKE = 0.5  # from which likeness on a name is suggested


@dataclass(frozen=True, order=True)
class Fault:
    """One thing that is wrong: where (line 0: the file as a whole), in which block ("" for none), and what."""

    path: str
    line: int
    block: str
    message: str

    def __str__(self) -> str:
        place = f"{self.path}:{self.line}" if self.line else self.path
        return f"{place}: block {shown(self.block)}: {self.message}" if self.block else f"{place}: {self.message}"


class PatchError(Exception):
    """A patch cannot be used; `faults` lists everything that is wrong with it, and each has a line of the text."""

    def __init__(self, faults: Iterable[Fault]) -> None:
        self.faults = tuple(sorted(faults))
        super().__init__("\n".join(map(str, self.faults)))


def shown(found: object) -> str:
    """Return *found* as the file has it, on one line and not too long; texts in single quotes."""
    if isinstance(found, (list, dict)):
        return "a list" if isinstance(found, list) else "a table"
    text = str(found).lower() if isinstance(found, (bool, float)) else str(found)
    plain = "".join(c if c.isprintable() else ascii(c)[1:-1] for c in text[:LONGEST])
    plain += "…" if len(text) > LONGEST else ""
    return f"'{plain}'" if isinstance(found, str) else plain


def suggestion(found: str, allowed: Iterable[str]) -> str:
    """Return what is allowed, the nearest name first: " Did you mean 'x'? Allowed: …"; case does not matter."""
    allowed = list(allowed)
    plain = {name.casefold(): name for name in reversed(allowed)}
    near = difflib.get_close_matches(found.casefold(), plain, 1, ALIKE)
    hint = f" Did you mean {shown(plain[near[0]])}?" if near else ""
    return f"{hint} Allowed: {', '.join(shown(name)[1:-1] for name in allowed) or 'nothing'}."

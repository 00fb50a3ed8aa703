"""What can be wrong with a patch file.

PatchError        all the faults of one file, in the order of its lines
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from dataclasses import dataclass


@dataclass(frozen=True, order=True)
class Fault:
    """One thing that is wrong: where (line 0: the file as a whole), in which block ("" for none), and what."""

    path: str
    line: int
    block: str
    message: str

    def __str__(self) -> str:
        place = f"{self.path}:{self.line}" if self.line else self.path
        return f"{place}: block '{self.block}': {self.message}" if self.block else f"{place}: {self.message}"


class PatchError(Exception):
    """A patch cannot be used; `faults` lists everything that is wrong with it."""

    def __init__(self, faults: Iterable[Fault]) -> None:
        self.faults = tuple(sorted(faults))
        super().__init__("\n".join(map(str, self.faults)))


def suggestion(found: str, allowed: Iterable[str]) -> str:
    """Return what is allowed, the nearest name first: " Did you mean 'x'? Allowed: …"."""
    allowed = list(allowed)
    near = difflib.get_close_matches(found, allowed, 1, 0.5)
    hint = f" Did you mean '{near[0]}'?" if near else ""
    return f"{hint} Allowed: {', '.join(allowed) or 'nothing'}."

"""Memory that several processes see, with no name that could be left behind.

The front makes it and hands the file descriptor down; the kernel frees it when the last process is gone, however
that process ends.
"""

from __future__ import annotations

import mmap
import os
import tempfile

from rtfx.engine.layout import OFFSET, Shared

SIZE = 8 * OFFSET["SIZE"]


def create() -> int:
    """Return the descriptor of a new, zeroed block of `SIZE` bytes, to be inherited by child processes."""
    if hasattr(os, "memfd_create"):
        descriptor = os.memfd_create("rtfx", 0)
    else:
        descriptor, path = tempfile.mkstemp(prefix="rtfx-")
        os.unlink(path)
    os.ftruncate(descriptor, SIZE)
    os.set_inheritable(descriptor, True)
    return descriptor


def attach(descriptor: int) -> Shared:
    """Return the block behind *descriptor*, mapped into this process."""
    return Shared(mmap.mmap(descriptor, SIZE))

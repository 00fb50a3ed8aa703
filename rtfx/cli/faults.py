"""Turn what can go wrong into a message and an exit code: 1 failed, 2 wrong usage (typer's own)."""

from __future__ import annotations

import sys
from collections.abc import Iterator
from contextlib import contextmanager


def _expected() -> tuple[type[BaseException], ...]:
    """The errors that have a message for the player; imported only when something has gone wrong."""
    from rtfx.devices.errors import DeviceError
    from rtfx.patch import PatchError

    return (PatchError, DeviceError, ValueError, KeyError, OSError, RuntimeError)


@contextmanager
def explained() -> Iterator[None]:
    """Print the message of an expected error on standard error and exit with 1."""
    try:
        yield
    except KeyboardInterrupt:
        sys.exit(130)
    except Exception as error:
        if not isinstance(error, _expected()):
            raise
        text = error.args[0] if isinstance(error, KeyError) and error.args else error
        print(f"rtfx: {text}", file=sys.stderr)
        sys.exit(1)

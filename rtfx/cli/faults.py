"""Turn what can go wrong into a message and an exit code: 1 failed, 2 wrong usage (typer's own).

A fault of rtfx itself is no use to a player on a stage either: its details go into a file, and the message says where.
"""

from __future__ import annotations

import sys
import time
import traceback
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path


def _expected() -> tuple[type[BaseException], ...]:
    """The errors that have a message for the player; imported only when something has gone wrong."""
    from rtfx.devices.errors import DeviceError
    from rtfx.patch import PatchError

    return (PatchError, DeviceError, ValueError, KeyError, OSError)


def _kept_details() -> Path:
    """Write the present traceback into a file; returns its path."""
    import platformdirs

    path = Path(platformdirs.user_log_dir("rtfx")) / time.strftime("fault-%Y-%m-%dT%H-%M-%S.txt")
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text(traceback.format_exc(), encoding="utf-8")
    return path


def said(error: BaseException) -> str:
    """Return what to tell the player about *error*."""
    if isinstance(error, _expected()):
        return str(error.args[0]) if isinstance(error, KeyError) and error.args else str(error)
    return f"this is a fault of rtfx itself, please report it: {error!r}. The details are in {_kept_details()}"


@contextmanager
def explained() -> Iterator[None]:
    """Print the message of an error on standard error and exit with 1."""
    try:
        yield
    except KeyboardInterrupt:
        sys.exit(130)
    except Exception as error:
        print(f"rtfx: {said(error)}", file=sys.stderr)
        sys.exit(1)

"""Single keys from the terminal, without Enter; none where standard input is no terminal."""

from __future__ import annotations

import select
import sys
import time


class Keys:
    """Within ``with``, the terminal hands over each key as it is pressed; afterwards it is as it was."""

    def __enter__(self) -> Keys:
        self.before = None
        if sys.stdin is not None and sys.stdin.isatty():
            import termios
            import tty

            self.before = termios.tcgetattr(sys.stdin)
            tty.setcbreak(sys.stdin)
        return self

    def __exit__(self, *_: object) -> None:
        if self.before is not None:
            import termios

            termios.tcsetattr(sys.stdin, termios.TCSADRAIN, self.before)

    def pressed(self, seconds: float) -> str:
        """Wait at most *seconds* for a key; return it, or "" if none came."""
        if self.before is None:
            time.sleep(seconds)
            return ""
        ready, _, _ = select.select([sys.stdin], [], [], seconds)
        return sys.stdin.read(1) if ready else ""

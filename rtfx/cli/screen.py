"""The live status in the terminal: a few lines that stay in place."""

from __future__ import annotations

import sys
from typing import Any

BAR, LOW_DB = 30, -60.0
KEYS = "m sound on/off   b guitar alone   x silence at once   q end"


def bar(peak_db: float, rms_db: float):
    """Return a level bar: solid up to the RMS level, light up to the peak."""
    from rich.text import Text

    def cells(db: float) -> int:
        return round(BAR * min(max(1 - db / LOW_DB, 0.0), 1.0))

    solid, light = cells(rms_db), max(cells(peak_db) - cells(rms_db), 0)
    colour = "red" if peak_db > -1.5 else "yellow" if peak_db > -9 else "green"
    drawn = Text("█" * solid + "▒" * light, colour)
    return drawn + Text("·" * (BAR - solid - light), "bright_black") + Text(f" {peak_db:6.1f} dB", "default")


def _sound(facts: dict) -> str:
    if facts["state"] != "playing":
        return "[yellow]waiting for the device[/]"
    if facts["muted"]:
        return "[bold yellow]MUTED[/]  volume down, then m"
    return "[bold]guitar alone[/]" if facts["bypass"] else "[green]on[/]"


def lines(facts: dict, messages: list[str]):
    """Return what is shown for these facts."""
    from rich.table import Table

    grid = Table.grid(padding=(0, 2))
    grid.add_row("patch", f"[bold]{facts['patch']}[/]  delay {facts['delay_ms']:.2f} ms")
    for name, peak, rms in zip(("guitar", "left", "right"), facts["peak_db"], facts["rms_db"], strict=True):
        grid.add_row(name, bar(peak, rms))
    for c in facts["carriers"]:
        grid.add_row("carrier", f"{c['hz']:.2f} Hz  {c['note']} {c['cents']:+.1f} c  [bright_black]{c['block']}[/]")
    load = f"{facts['load']['p99']:.0f} % of the time there is; late {facts['late_blocks']}, xruns {facts['xruns']}"
    grid.add_row("load", load)
    grid.add_row("sound", _sound(facts) + ("  [red]recording[/]" if facts["recording"] else ""))
    if messages:
        grid.add_row("", f"[bright_black]{messages[-1]}[/]")
    grid.add_row("", f"[bright_black]{KEYS}[/]")
    return grid


class Screen:
    """Shows the status while within ``with``; nothing where standard output is no terminal."""

    def __init__(self, shown: bool) -> None:
        self.shown = shown and sys.stdout.isatty()
        self.live: Any = None

    def __enter__(self) -> Screen:
        if self.shown:
            from rich.live import Live

            self.live = Live(auto_refresh=False)
            self.live.start()
        return self

    def __exit__(self, *_: object) -> None:
        if self.live is not None:
            self.live.stop()

    def show(self, facts: dict, messages: list[str]) -> None:
        """Draw *facts* and the last message."""
        if self.live is not None:
            self.live.update(lines(facts, messages), refresh=True)

"""The command line: one file a command, each loaded only when it is the one that runs."""

from __future__ import annotations

import importlib
import sys
from typing import Any

import typer
from typer.core import TyperCommand, TyperGroup

COMMANDS = {
    "play": "Play a patch live: audio in, audio out, status on screen.",
    "render": "Run a recording through a patch: the same code as live, the same bits.",
    "check": "Validate a patch and explain what it becomes.",
    "blocks": "List the kinds of block, or explain one.",
    "setup": "Audio devices of this machine: list them, choose and remember.",
}


class _Lazy(TyperGroup):
    def list_commands(self, ctx: Any) -> list[str]:
        return list(COMMANDS)

    def get_command(self, ctx: Any, cmd_name: str) -> Any:
        if cmd_name not in COMMANDS:
            return None
        if ctx.resilient_parsing or not any(cmd_name == a for a in sys.argv):
            return TyperCommand(cmd_name, help=COMMANDS[cmd_name])
        module = importlib.import_module(f"rtfx.cli.{cmd_name}")
        command = typer.main.get_command(module.app)
        command.name = cmd_name
        return command


app = typer.Typer(
    cls=_Lazy, no_args_is_help=True, add_completion=False, rich_markup_mode=None, pretty_exceptions_enable=False
)


@app.callback()
def rtfx() -> None:
    """Play guitar through multiplication: find carriers, play them live, keep and rework what was played."""


def run() -> None:
    """Run the command line; what goes wrong is said in plain words, without a traceback."""
    from rtfx.cli.faults import explained

    with explained():
        app()

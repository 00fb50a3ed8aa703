"""`rtfx setup devices`: list audio devices, choose, and remember the choice."""

from __future__ import annotations

import json
import os
import tempfile
from typing import Annotated

import typer

app = typer.Typer(no_args_is_help=True)


@app.callback()
def setup() -> None:
    """Audio devices of this machine: list them, choose and remember."""


def remembered() -> dict:
    """Return the remembered choice of devices: {"input": …, "output": …}, empty at first."""
    import tomllib

    from rtfx.cli.common import setup_file

    path = setup_file()
    if not path.exists():
        return {}
    try:
        return tomllib.loads(path.read_text(encoding="utf-8")).get("audio", {})
    except tomllib.TOMLDecodeError as error:
        raise ValueError(f"{path}: not a TOML file ({error}). Mend it, or remove it and choose again.") from None


def remember(choice: dict) -> None:
    """Write the choice into the setup file, at once or not at all, keeping what else is in it."""
    import tomllib

    import tomli_w

    from rtfx.cli.common import setup_file

    path = setup_file()
    whole = tomllib.loads(path.read_text(encoding="utf-8")) if path.exists() else {}
    whole["audio"] = {**whole.get("audio", {}), **choice}
    path.parent.mkdir(parents=True, exist_ok=True)
    with tempfile.NamedTemporaryFile("wb", dir=path.parent, delete=False) as file:
        tomli_w.dump(whole, file)
        file.flush()
        os.fsync(file.fileno())
    os.replace(file.name, path)


@app.command("devices")
def devices(
    input_: Annotated[str | None, typer.Option("--input", help="number or part of a name, to remember")] = None,
    output: Annotated[str | None, typer.Option(help="number or part of a name, to remember")] = None,
    as_json: Annotated[bool, typer.Option("--json", help="facts as one JSON object")] = False,
) -> None:
    """List audio devices; with --input or --output choose one and remember it."""
    from rtfx.devices import portaudio

    choice = {}
    if input_ is not None:
        choice["input"] = portaudio.find(input_, "in")["name"]
    if output is not None:
        choice["output"] = portaudio.find(output, "out")["name"]
    if choice:
        remember(choice)
    listed = portaudio.devices()
    if as_json:
        print(json.dumps({"devices": listed, "remembered": remembered()}))
    else:
        _show(listed)


def _show(listed: list[dict]) -> None:
    from rich.console import Console
    from rich.table import Table

    console = Console()
    if not listed:
        console.print("There is no audio device. 'rtfx play PATCH --device built-in' needs none.")
        return
    chosen = remembered()
    table = Table(box=None, pad_edge=False, header_style="bold")
    for title in ("", "device", "through", "in", "out", "rate", ""):
        table.add_column(title)
    for d in listed:
        marks = [w for w, key in (("input", "input"), ("output", "output")) if chosen.get(key) == d["name"]]
        table.add_row(
            str(d["index"]),
            d["name"],
            d["host"],
            str(d["in"]),
            str(d["out"]),
            f"{d['rate']:g} Hz",
            ", ".join(marks),
        )
    console.print(table)
    console.print("Choose with --input and --output, by number or part of a name.")

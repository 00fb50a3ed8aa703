"""`rtfx play PATCH`: live audio, status on screen, single keys, recording."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

app = typer.Typer()


@app.command()
def play(
    patch: Annotated[Path, typer.Argument(help="patch file; saved again while playing, it fades in")],
    input_: Annotated[str | None, typer.Option("--input", help="input device: number or part of its name")] = None,
    output: Annotated[str | None, typer.Option(help="output device: number or part of its name")] = None,
    device: Annotated[str | None, typer.Option(help="one device both ways; 'built-in' needs no sound card")] = None,
    channel: Annotated[int, typer.Option(help="input channel that the guitar is on, from 1")] = 1,
    rate: Annotated[float, typer.Option(help="sample rate in Hz")] = 48_000.0,
    block: Annotated[int, typer.Option(help="frames a block; 0 is the device's own, with the least delay")] = 0,
    seconds: Annotated[float | None, typer.Option(help="end by itself after so much sound")] = None,
    unmuted: Annotated[bool, typer.Option("--unmuted", help="ramp the sound up at once")] = False,
    record: Annotated[bool, typer.Option("--record", help="keep dry and wet sound from the start")] = False,
    quality: Annotated[str, typer.Option(help="stage (least delay) or studio (least aliasing)")] = "stage",
    set_: Annotated[list[str] | None, typer.Option("--set", help="block.param=value, may be repeated")] = None,
    as_json: Annotated[bool, typer.Option("--json", help="a status line a second, as JSON")] = False,
) -> None:
    """Play a patch live. Starts muted: turn your volume down, press m, and turn up slowly."""
    from rtfx.cli.session import Session
    from rtfx.cli.setup import remembered
    from rtfx.devices.front import Wish

    if channel < 1:
        raise ValueError(f"--channel {channel}: channels are counted from 1")
    if seconds is not None and seconds <= 0:
        raise ValueError(f"--seconds {seconds:g}: wanted more than 0")
    chosen = remembered()
    wish = Wish(
        input_ or device or chosen.get("input"),
        output or device or chosen.get("output"),
        rate, block, channel - 1,
    )  # fmt: skip
    Session(patch, wish, quality, set_, seconds, unmuted, record, as_json).run()

"""`rtfx render PATCH IN.wav OUT.wav`: offline, same code, same bits."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Annotated

import typer

app = typer.Typer()


def read_moves(path: Path) -> list:
    """Return the moves in a JSON-lines file: one {"frame": …, "target": …, "value": …} a line.

    Raises
    ------
    ValueError
        Naming the file and line that is not such a move.
    """
    from rtfx.compiler.render import Move

    moves = []
    for number, line in enumerate(path.read_text(encoding="utf-8").splitlines(), 1):
        try:
            entry = json.loads(line)
            moves.append(Move(int(entry["frame"]), str(entry["target"]), float(entry["value"])))
        except (ValueError, KeyError, TypeError) as error:
            wanted = '{"frame": 48000, "target": "tone.pitch", "value": 440.0}'
            raise ValueError(f"{path}:{number}: not a move ({error}); wanted one a line, as {wanted}") from None
    return moves


@app.command()
def render(
    patch: Annotated[Path, typer.Argument(help="patch file")],
    dry: Annotated[Path, typer.Argument(help="recording of the guitar, any format libsndfile reads")],
    wet: Annotated[Path, typer.Argument(help="WAV file to write: stereo, float32")],
    quality: Annotated[str, typer.Option(help="stage (least delay) or studio (least aliasing)")] = "studio",
    set_: Annotated[list[str] | None, typer.Option("--set", help="block.param=value, may be repeated")] = None,
    moves: Annotated[Path | None, typer.Option(help="JSON lines: frame, target, value")] = None,
    as_json: Annotated[bool, typer.Option("--json", help="facts as one JSON object")] = False,
) -> None:
    """Run a recording through a patch: the same code as live, the same bits."""
    import soundfile

    from rtfx.cli.common import load_with
    from rtfx.compiler.driver import plan
    from rtfx.compiler.render import render as run

    loaded = load_with(patch, set_)
    try:
        samples, rate = soundfile.read(dry, dtype="float32")
    except soundfile.LibsndfileError as error:
        raise ValueError(f"{dry}: cannot be read as audio ({error.error_string})") from None
    worked_out = plan(loaded, rate, quality)
    out = run(worked_out, samples, moves=read_moves(moves) if moves else ())
    soundfile.write(wet, out, rate, subtype="FLOAT")
    facts = {"wet": str(wet), "frames": len(out), "rate": rate, "quality": quality, "delay": worked_out.delay}
    print(json.dumps(facts) if as_json else f"{wet}: {len(out) / rate:.2f} s, delay {worked_out.delay} samples")

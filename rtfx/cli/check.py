"""`rtfx check PATCH`: validate and explain: order, regions, oversampling, delay, cost."""

from __future__ import annotations

import json
import time
from pathlib import Path
from typing import Annotated

import typer

app = typer.Typer()
BLOCK, ROUNDS = 64, 400


def cost_ns(plan) -> float:
    """Return how many nanoseconds a sample takes on this machine, the best of several runs of 64-frame blocks."""
    import numpy as np

    from rtfx.compiler.render import Instance

    instance = Instance(plan)
    samples = (0.1 * np.random.default_rng(1).standard_normal(BLOCK)).astype(np.float32)
    out = np.empty((BLOCK, 2), np.float32)
    best = float("inf")
    for _ in range(5):
        start = time.perf_counter()
        for _ in range(ROUNDS):
            instance.run(samples, out)
        best = min(best, (time.perf_counter() - start) / ROUNDS / BLOCK)
    return best * 1e9


def facts_of(plan) -> dict:
    """Return what there is to know about a plan, ready for JSON."""
    factor = {n: r.factor for r in plan.regions for n in r.blocks}
    return {
        "patch": plan.patch.name,
        "rate": plan.rate,
        "quality": plan.quality,
        "order": [
            {
                "block": n,
                "kind": plan.patch.block(n).kind.name,
                "factor": factor.get(n, 1),
                "width_hz": plan.width_hz[n],
            }
            for n in plan.order
        ],
        "regions": [
            {
                "blocks": [n for n in plan.order if n in r.blocks],
                "factor": r.factor,
                "because": f"'{r.because}' makes up to {r.width_hz / 1000:.1f} kHz",
            }
            for r in plan.regions
        ],
        "delay": plan.delay,
        "delay_ms": 1000 * plan.delay / plan.rate,
        "cost_ns": round(cost_ns(plan), 1),
    }


def _show(facts: dict) -> None:
    from rich.console import Console
    from rich.table import Table

    console = Console()
    table = Table(box=None, pad_edge=False, header_style="bold")
    for title, side in (("block", "left"), ("kind", "left"), ("runs at", "right"), ("makes up to", "right")):
        table.add_column(title, justify=side)  # type: ignore[arg-type]
    for row in facts["order"]:
        table.add_row(row["block"], row["kind"], f"{row['factor']}×", f"{row['width_hz'] / 1000:.1f} kHz")
    console.print(f"[bold]{facts['patch']}[/] is in order, at {facts['rate']:g} Hz, {facts['quality']} quality.")
    console.print(table)
    for region in facts["regions"]:
        console.print(f"{', '.join(region['blocks'])}: {region['factor']} times the rate, because {region['because']}")
    load = facts["cost_ns"] * facts["rate"] / 1e7
    console.print(f"delay {facts['delay']} samples, {facts['delay_ms']:.2f} ms")
    console.print(f"about {facts['cost_ns']:.0f} ns a sample here: {load:.2f} % of one core")


def _check_sections(path: Path, rate: float, quality: str, as_json: bool) -> None:
    """Validate a song or a set, and list its sections."""
    from rtfx.compiler.driver import plan
    from rtfx.patch.song import kind_of_file, load_set, load_song

    songs = load_set(path).songs if kind_of_file(path) == "set" else (load_song(path),)
    rows = [(song, section, plan(section.patch, rate, quality)) for song in songs for section in song.sections]
    if as_json:
        facts = [{"song": so.name, "section": se.name, "patch": se.patch.name, "delay": p.delay} for so, se, p in rows]
        print(json.dumps({"sections": facts}))
        return
    for song, section, worked_out in rows:
        delay = 1000 * worked_out.delay / rate
        print(f"{song.name:20} {section.name:16} {section.patch.name:20} delay {delay:.2f} ms")


@app.command()
def check(
    patch: Annotated[Path, typer.Argument(help="patch, song or set file")],
    rate: Annotated[float, typer.Option(help="sample rate in Hz")] = 48_000.0,
    quality: Annotated[str, typer.Option(help="stage or studio")] = "stage",
    set_: Annotated[list[str] | None, typer.Option("--set", help="block.param=value, may be repeated")] = None,
    source: Annotated[bool, typer.Option("--source", help="show the function that the patch becomes")] = False,
    as_json: Annotated[bool, typer.Option("--json", help="facts as one JSON object")] = False,
) -> None:
    """Validate a patch and explain what it becomes."""
    from rtfx.cli.common import load_with
    from rtfx.compiler.driver import plan
    from rtfx.patch.song import kind_of_file

    if kind_of_file(patch) != "patch":
        _check_sections(patch, rate, quality, as_json)
        return
    worked_out = plan(load_with(patch, set_), rate, quality)
    if source:
        print(worked_out.write().read_text())
    elif as_json:
        print(json.dumps(facts_of(worked_out)))
    else:
        _show(facts_of(worked_out))

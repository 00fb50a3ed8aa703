"""`rtfx blocks [KIND]`: every kind: ports, parameters, units, ranges, law, source."""

from __future__ import annotations

import difflib
import json
from typing import Annotated

import typer

app = typer.Typer()


def facts_of(kind) -> dict:
    """Return what there is to know about a kind, ready for JSON."""
    from rtfx.blocks.kind import Choice, File

    def facts(p) -> dict:
        if isinstance(p, Choice):
            return {"name": p.name, "choices": list(p.choices), "default": p.default, "about": p.about}
        if isinstance(p, File):
            return {"name": p.name, "file": True, "about": p.about}
        about = {"about": p.about, "taper": p.taper, "fixed": p.fixed}
        return {"name": p.name, "unit": p.unit, "low": p.low, "high": p.high, "default": p.default} | about

    return {
        "kind": kind.name,
        "about": kind.about,
        "ports": list(kind.ports),
        "outputs": list(kind.outputs),
        "parameters": [facts(p) for p in kind.parameters],
        "bandwidth": (kind.bandwidth.__doc__ or "By a rule of its own.").splitlines()[0],
        "law": kind.law,
        "source": kind.source,
    }


def _show_all(kinds) -> None:
    from rich.console import Console
    from rich.table import Table

    table = Table(box=None, pad_edge=False, header_style="bold")
    for title in ("kind", "takes", "does"):
        table.add_column(title)
    for kind in kinds:
        table.add_row(kind.name, ", ".join(kind.ports) or "–", kind.about)
    Console().print(table)


def _show_one(facts: dict) -> None:
    from rich.console import Console
    from rich.table import Table

    console = Console()
    console.print(f"[bold]{facts['kind']}[/]  {facts['about']}\n")
    console.print(f"takes   {', '.join(facts['ports']) or 'nothing: it is a source'}")
    console.print(f"gives   {', '.join(facts['outputs'])}")
    console.print(f"law     {facts['law']}", highlight=False)
    console.print(f"width   {facts['bandwidth']}", highlight=False)
    console.print(f"source  {facts['source']}\n", highlight=False)
    table = Table(box=None, pad_edge=False, header_style="bold")
    for title in ("parameter", "range", "scale", "unless given", "what it is"):
        table.add_column(title)
    for p in facts["parameters"]:
        if "file" in p:
            table.add_row(p["name"], "a file", "fixed", "–", p["about"])
            continue
        reach = " | ".join(p["choices"]) if "choices" in p else f"{p['low']:g} to {p['high']:g} {p['unit']}".strip()
        default = p["default"] if "choices" in p else f"{p['default']:g} {p['unit']}".strip()
        scale = "" if "choices" in p else "fixed" if p["fixed"] else p["taper"]
        table.add_row(p["name"], reach, scale, default, p["about"])
    if facts["parameters"]:
        console.print(table)


@app.command()
def blocks(
    kind: Annotated[str | None, typer.Argument(help="a kind, to have it explained")] = None,
    as_json: Annotated[bool, typer.Option("--json", help="facts as one JSON object")] = False,
) -> None:
    """List the kinds of block, or explain one."""
    from rtfx.blocks.table import find, names

    if kind is None:
        kinds = [find(n) for n in names()]
        if as_json:
            print(json.dumps({"kinds": [facts_of(k) for k in kinds]}))
        else:
            _show_all(kinds)
        return
    if kind not in names():
        near = difflib.get_close_matches(kind, names(), 1)
        hint = f" Did you mean '{near[0]}'?" if near else ""
        raise ValueError(f"there is no kind '{kind}'.{hint} There are: {', '.join(names())}.")
    facts = facts_of(find(kind))
    if as_json:
        print(json.dumps(facts))
    else:
        _show_one(facts)

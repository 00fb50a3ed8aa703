"""Songs and sets: a section is a patch with values, a song a list of sections, a set a list of songs.

    name = "Low Tide"                        name  = "Harbour night"
    about = "…"                              about = "…"
    tempo = 92                               songs = ["low-tide.toml", "crane.toml"]

    [[sections]]
    name   = "verse"
    patch  = "../ring/fifth-above.toml"
    values = { "tone.pitch" = "E4", "blend.amount" = 0.4 }

Paths are meant from the folder of the file in which they stand.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from rtfx.patch.errors import PatchError, shown
from rtfx.patch.lines import Path as KeyPath
from rtfx.patch.model import Patch
from rtfx.patch.read import FASTEST, SLOWEST, TEMPO, load, set_value
from rtfx.patch.reader import Reader
from rtfx.patch.source import content_of, text_of, without_mark

SONG_KEYS = ("name", "about", "tempo", "sections")
SECTION_KEYS = ("name", "patch", "values")
SET_KEYS = ("name", "about", "songs")


@dataclass(frozen=True)
class Section:
    """A part of a song: its patch, with the section's values and the song's tempo in it."""

    name: str
    patch: Patch


@dataclass(frozen=True)
class Song:
    """Sections in the order in which they are played."""

    name: str
    about: str
    tempo: float
    sections: tuple[Section, ...]
    path: str = ""


@dataclass(frozen=True)
class SongSet:
    """Songs in the order in which they are played."""

    name: str
    about: str
    songs: tuple[Song, ...]
    path: str = ""


def load_song(path: str | Path) -> Song:
    """Return the song in the file at *path*.

    Raises
    ------
    PatchError
        With all faults of the song and of the patches it uses.
    """
    reader, content = _opened(path)
    reader.check_keys(content, SONG_KEYS)
    name, about = reader.text(content, "name"), reader.text(content, "about")
    tempo = reader.number(content, "tempo", TEMPO, SLOWEST, FASTEST)
    sections = tuple(
        _section(reader, where, entry, tempo) for where, entry in _tables(reader, content) if isinstance(entry, dict)
    )
    if reader.faults:
        raise PatchError(reader.faults)
    return Song(name, about, tempo, tuple(s for s in sections if s is not None), str(path))


def load_set(path: str | Path) -> SongSet:
    """Return the set in the file at *path*.

    Raises
    ------
    PatchError
        With all faults of the set, its songs and their patches.
    """
    reader, content = _opened(path)
    reader.check_keys(content, SET_KEYS)
    name, about = reader.text(content, "name"), reader.text(content, "about")
    found = content.get("songs")
    if not isinstance(found, list) or not found:
        reader.fault(f'songs = {shown(found)}; wanted a list of files, as songs = ["one.toml", "two.toml"]', ("songs",))
        found = []
    songs = [_song_of(reader, entry, ("songs", i)) for i, entry in enumerate(found)]
    if reader.faults:
        raise PatchError(reader.faults)
    return SongSet(name, about, tuple(s for s in songs if s is not None), str(path))


def kind_of_file(path: str | Path) -> str:
    """Tell whether the file at *path* is a "patch", a "song" or a "set", by what it holds."""
    content = content_of(without_mark(text_of(path)), str(path))
    return "set" if "songs" in content else "song" if "sections" in content else "patch"


def _opened(path: str | Path) -> tuple[Reader, dict[str, Any]]:
    text = without_mark(text_of(path))
    return Reader(str(path), text), content_of(text, str(path))


def _tables(reader: Reader, content: dict[str, Any]) -> list[tuple[KeyPath, Any]]:
    """Return the sections with the key path of each; a fault if there are none."""
    found = content.get("sections")
    if not isinstance(found, list) or not found or not all(isinstance(s, dict) for s in found):
        reader.fault("a song wants sections, each under [[sections]]", ("sections",))
        return []
    numbers = sorted(p[1] for p in reader.lines if len(p) == 2 and p[0] == "sections" and isinstance(p[1], int))
    return [(("sections", n), s) for n, s in zip(numbers, found, strict=False)]


def _section(reader: Reader, where: KeyPath, entry: dict[str, Any], tempo: float) -> Section | None:
    reader.check_keys(entry, SECTION_KEYS, where)
    name, file = entry.get("name"), entry.get("patch")
    for key, found in (("name", name), ("patch", file)):
        if not isinstance(found, str) or not found.strip():
            problem = f"'{key}' is missing" if found is None else f"{key} = {shown(found)}"
            reader.fault(f'{problem}; wanted a text, as {key} = "…"', where)
            return None
    values = entry.get("values", {})
    if not isinstance(values, dict):
        reader.fault(f'values = {shown(values)}; wanted {{ "block.parameter" = … }}', (*where, "values"))
        return None
    patch = _loaded(reader, load, str(file), (*where, "patch"))
    for target, found in values.items() if patch is not None else ():
        patch = _with_value(reader, patch, target, found, (*where, "values", target))
    return None if patch is None else Section(str(name), replace(patch, tempo=tempo))


def _with_value(reader: Reader, patch: Patch, target: str, found: Any, where: KeyPath) -> Patch:
    try:
        return set_value(patch, target, found)
    except PatchError as error:
        for fault in error.faults:
            reader.fault(fault.message, where)
        return patch


def _song_of(reader: Reader, entry: Any, where: KeyPath) -> Song | None:
    if not isinstance(entry, str):
        reader.fault(f"songs: {shown(entry)} is no path of a file", where)
        return None
    return _loaded(reader, load_song, entry, where)


def _loaded(reader: Reader, read, file: str, where: KeyPath):
    """Return what *read* makes of *file*; its faults are ours too, after a line that says where it is used."""
    try:
        return read(Path(reader.path).parent / file)
    except PatchError as error:
        reader.fault(f"{shown(file)} cannot be used:", where)
        reader.faults += error.faults
        return None

"""Last pass: turn source into machine code, kept on disk so that it is compiled once.

The text is written as a real module whose name is the hash of everything it depends on: itself, the first state
and memory, rtfx's version, and the content of every module whose code is inlined (numba's own cache looks at one
file only).  numba's compiled code is kept beside it, and the next process loads it in milliseconds.
"""

from __future__ import annotations

import hashlib
import importlib.util
import os
import sys
import tempfile
from dataclasses import dataclass
from functools import cache
from importlib import metadata
from pathlib import Path
from types import ModuleType
from typing import Any

import numpy as np
import platformdirs


@dataclass(frozen=True)
class Built:
    """Machine code and what keeps it alive: hold this object for as long as `address` may be called."""

    name: str
    address: int
    path: Path
    keep: Any


def cache_folder() -> Path:
    """Return the folder for built patches; RTFX_CACHE names another."""
    named = os.environ.get("RTFX_CACHE")
    return Path(named) if named else Path(platformdirs.user_cache_dir("rtfx")) / "built"


@cache
def _content_of(path: str) -> bytes:
    return hashlib.sha256(Path(path).read_bytes()).digest()


def _inlined_files(modules: tuple[str, ...]) -> list[str]:
    """Files whose code may end up in the kernel: the ground, the shared maths and the modules named in the text."""
    house = Path(__file__).parent.parent
    files = [str(f) for part in ("native", "dsp") for f in sorted((house / part).glob("*.py"))]
    named = [spec.origin for m in modules if (spec := importlib.util.find_spec(m)) and spec.origin]
    return sorted({*files, *named})


def name_for(text: str, images: tuple[np.ndarray, ...] = ()) -> str:
    """Return the name under which *text* with these first contents is built."""
    digest = hashlib.sha256()
    digest.update(f"{metadata.version('rtfx')} {metadata.version('numba')}\n{text}".encode())
    modules = tuple(line.split()[1] for line in text.splitlines() if line.startswith("from "))
    for path in _inlined_files(modules):
        digest.update(_content_of(path))
    for image in images:
        digest.update(np.ascontiguousarray(image).tobytes())
    return f"rtfx_{digest.hexdigest()[:16]}"


def write(text: str, images: tuple[np.ndarray, ...] = (), heading: str = "") -> Path:
    """Write *text* into the cache, at once or not at all, "{kernel}" being its function's name; returns its path."""
    name = name_for(text, images)
    path = cache_folder() / f"{name}.py"
    if not path.exists():
        path.parent.mkdir(parents=True, exist_ok=True)
        with tempfile.NamedTemporaryFile("w", dir=path.parent, suffix=".part", delete=False, encoding="utf-8") as file:
            file.write(heading + text.replace("{kernel}", name))
        os.replace(file.name, path)
    return path


def load_module(path: Path) -> ModuleType:
    """Import the module at *path* under its own name, which numba needs to find it again."""
    name = path.stem
    if name not in sys.modules or sys.modules[name].__file__ != str(path):
        if str(path.parent) not in sys.path:
            sys.path.append(str(path.parent))
        spec = importlib.util.spec_from_file_location(name, path)
        assert spec is not None
        assert spec.loader is not None
        module = importlib.util.module_from_spec(spec)
        sys.modules[name] = module
        spec.loader.exec_module(module)
    return sys.modules[name]


@cache
def compile_at(path: Path, signature) -> Built:
    """Compile the function that the module at *path* is named after, or load it compiled."""
    from numba import cfunc

    from rtfx.native.options import OPTIONS

    function = getattr(load_module(path), path.stem)
    compiled = cfunc(signature, cache=True, **OPTIONS)(function)
    return Built(path.stem, compiled.address, path, compiled)

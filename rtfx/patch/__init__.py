"""Patches: from text to data.  `load` and `loads` read, `PatchError` lists all that is wrong."""

from rtfx.patch.errors import Fault, PatchError
from rtfx.patch.model import Patch
from rtfx.patch.read import load, loads

__all__ = ["Fault", "Patch", "PatchError", "load", "loads"]

"""rtfx: play guitar through multiplication, live and again afterwards, with the same bits.

The names below load what they need when first used, so that ``import rtfx`` costs nothing.
"""

from importlib import import_module
from typing import Any

__version__ = "0.1.0"

_PLACES = {
    "load": "rtfx.patch",
    "loads": "rtfx.patch",
    "Patch": "rtfx.patch",
    "PatchError": "rtfx.patch",
    "plan": "rtfx.compiler.driver",
    "Plan": "rtfx.compiler.driver",
    "render": "rtfx.compiler.render",
    "Move": "rtfx.compiler.render",
}
__all__ = sorted(_PLACES)


def __getattr__(name: str) -> Any:
    if name in _PLACES:
        return getattr(import_module(_PLACES[name]), name)
    raise AttributeError(f"module 'rtfx' has no attribute '{name}'; it has: {', '.join(__all__)}")


def __dir__() -> list[str]:
    return __all__

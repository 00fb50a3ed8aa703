"""Names in the emitted source: each given once, so that no block's name can stand in another variable's way."""

from __future__ import annotations

import keyword
import sys

KERNEL_NAMES = ["inp", "out", "frames", "p", "state", "memory", "clock", "busy", "n", "j", "guitar", "range", "float"]


class Names:
    """Hands out identifiers that were never handed out before, and the imports of the functions that are called."""

    def __init__(self) -> None:
        self.used = set(KERNEL_NAMES)
        self.aliases: dict[tuple[str, str], str] = {}

    def fresh(self, wanted: str) -> str:
        """Return *wanted* as an identifier, with a mark behind it if it is taken."""
        name = wanted.replace("-", "_")
        if not name.isidentifier() or keyword.iskeyword(name):
            name = f"b_{name}"
        while name in self.used:
            name += "_"
        self.used.add(name)
        return name

    def function(self, function) -> str:
        """Return the name under which *function* (of a module) is called in the source."""
        module = getattr(function, "py_func", function).__module__
        name = next(n for n, value in vars(sys.modules[module]).items() if value is function and n[0] != "_")
        if (module, name) not in self.aliases:
            readable = (
                name if module.startswith(("rtfx.dsp.", "rtfx.native.")) else f"{module.rsplit('.', 1)[-1]}_{name}"
            )
            self.aliases[module, name] = self.fresh(readable)
        return self.aliases[module, name]

    def imports(self) -> list[str]:
        """Return the import lines of all functions that were asked for."""
        return sorted(
            f"from {module} import {name}" + ("" if alias == name else f" as {alias}")
            for (module, name), alias in self.aliases.items()
        )

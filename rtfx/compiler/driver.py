"""Patch -> Plan: the passes, one after the other."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np

from rtfx.compiler import build
from rtfx.compiler.align import align
from rtfx.compiler.emit import Shown, emit
from rtfx.compiler.graph import heard
from rtfx.compiler.layout import Slot, parameter_words, slots
from rtfx.compiler.lines import Passes
from rtfx.compiler.order import order
from rtfx.compiler.reach import setting
from rtfx.compiler.widen import Region, widen
from rtfx.patch.model import Patch

RATES = (44_100.0, 192_000.0)
QUALITIES = ("stage", "studio")


@dataclass(frozen=True, eq=False)
class Plan:
    """A patch worked out for one rate and quality: what `rtfx check` explains and what is built.

    `order` lists the blocks as they run; `regions` where the rate is raised; `delay` is in samples at `rate`;
    `width_hz` is the bandwidth of each block's output; `source` is the kernel's text.
    """

    patch: Patch
    rate: float
    quality: str
    order: tuple[str, ...]
    regions: tuple[Region, ...]
    width_hz: dict[str, float]
    delay: int
    slots: tuple[Slot, ...]
    source: str
    state: np.ndarray
    memory: np.ndarray
    shows: tuple[Shown, ...]

    def parameters(self) -> np.ndarray:
        """Return the parameters at their first values, as the kernel wants them."""
        return parameter_words(self.slots)

    def slot(self, target: str) -> Slot:
        """Return the parameter "block.parameter"; KeyError naming what there is."""
        for slot in self.slots:
            if slot.target == target:
                return slot
        raise KeyError(f"no moving parameter '{target}'; there are: {', '.join(s.target for s in self.slots)}")

    def write(self) -> Path:
        """Write the kernel's source into the cache; returns its path."""
        heading = (
            f'"""{self.patch.name}: one function, for {self.rate:g} Hz at {self.quality} quality. '
            f'Written by rtfx; changes here are not used."""\n\n'
        ).replace("\\", "/")
        return build.write(self.source, (self.state, self.memory), heading)

    def build(self) -> build.Built:
        """Return the kernel as machine code, compiled or from the cache."""
        from rtfx.native.options import KERNEL_SIGNATURE

        return build.compile_at(self.write(), KERNEL_SIGNATURE)


def plan(patch: Patch, rate: float = 48_000.0, quality: str = "stage") -> Plan:
    """Work out how *patch* runs at *rate*; blocks that lead nowhere are left out.

    Parameters
    ----------
    patch : Patch
    rate : float
        Sample rate in Hz, 44100 to 192000.
    quality : str
        "stage" (least delay) or "studio" (least aliasing).

    Raises
    ------
    ValueError
        If the rate or the quality is not one of those.
    """
    if not RATES[0] <= rate <= RATES[1]:
        raise ValueError(f"rate = {rate:g} Hz is outside {RATES[0]:g} to {RATES[1]:g} Hz")
    if quality not in QUALITIES:
        raise ValueError(f"quality = '{quality}' is not one of: {', '.join(QUALITIES)}")
    rate, patch = float(rate), heard(patch)
    widths = widen(patch, rate, quality)
    codes = {b.name: b.kind.build(setting(patch, b, rate * widths.factor(b.name), quality)) for b in patch.blocks}
    alignment = align(patch, widths, codes, rate, quality)
    schedule = order(patch, widths)
    found = slots(patch)
    emitted = emit(Passes(patch, widths, codes, alignment, schedule, found, rate, quality))
    return Plan(
        patch, rate, quality, schedule.blocks(), widths.regions, widths.width_hz, alignment.delay, found,
        emitted.source, emitted.state, emitted.memory, emitted.shows,
    )  # fmt: skip

"""What a kind of block is: its ports, its parameters, its law, and the code it becomes.

A kind is declared by a decorator on a function that returns its `Code` for one `Setting`:

    @kind("gain", about="…", ports=("x",), parameters=(Parameter("level", "dB", -80.0, 36.0, 0.0),),
          law="y = x · 10^(level/20)", source="definition of the decibel")
    def gain(setting):
        return Code(tick=tick, prepare=prepare)

The module is then named in the entry-point group ``rtfx.blocks`` (see `rtfx.blocks.table`), ours and other
people's alike.

Calling convention of the code (all functions are compiled with `rtfx.native.options.inlined`):

    prepare(*numbers, rate)                          -> a coefficient, or a tuple of them
    tick(*ports, [memory, at,] *coefficients, *state) -> (*outputs, *state)
    emerge([memory, at,] *coefficients, *state)       -> (*outputs,)         only where `breaks_loops`
    sweep(memory, source, target, many, *coefficients, *state) -> (*state,)  if there is one

*numbers* are the values of the `Parameter`s in declared order, in their own unit; *rate* (Hz) is the rate at
which `tick` runs, which is the oversampled one inside a region.  `memory[at:]` is the block's own memory.  With
`emerge`, what comes out is read first and `tick` only takes in: it returns the state alone.  A single value is
returned bare, not as a tuple of one.  `sweep` does what `tick` does for *many* samples at memory[source:], written to
memory[target:]; a region that holds nothing but this block runs it instead (see rtfx.native.lanewise).
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np

AUDIBLE_HZ = 20_000.0
"""Upper edge of the band that is kept free of aliases."""


@dataclass(frozen=True)
class Parameter:
    """A number with a unit and a range; it glides, and a control or a signal may move it.

    `unit` is one of "", "Hz", "dB", "s", "ratio"; `taper` "linear" or "log" is the scale on which it glides, on
    which a control travels and on which a following signal adds (log: in octaves).  A `fixed` parameter is settled
    when the patch is built: nothing moves it while it plays.
    """

    name: str
    unit: str
    low: float
    high: float
    default: float
    taper: str = "linear"
    about: str = ""
    fixed: bool = False

    def __post_init__(self) -> None:
        if not self.low <= self.default <= self.high:
            raise ValueError(f"parameter {self.name}: default {self.default} outside {self.low}..{self.high}")
        if self.taper == "log" and self.low <= 0:
            raise ValueError(f"parameter {self.name}: a log taper needs a range above 0, not from {self.low}")


@dataclass(frozen=True)
class Choice:
    """A parameter with a few named values; a change of choice is a new build."""

    name: str
    choices: tuple[str, ...]
    default: str
    about: str = ""


@dataclass(frozen=True)
class File:
    """A parameter that names a file of the player's; in a patch its path is meant from the patch's own folder."""

    name: str
    about: str = ""


@dataclass(frozen=True)
class Setting:
    """What a kind knows of the place it is built for.

    `choices` (with them the paths of files) and `values` are as the patch says; `reach` is the lowest and highest
    value each parameter can come to (its setting, its control's range, what follows it); `rate` (Hz) is the rate of
    the block itself; `quality` is "stage" or "studio".
    """

    choices: Mapping[str, str]
    values: Mapping[str, float]
    reach: Mapping[str, tuple[float, float]]
    rate: float
    quality: str
    tempo: float = 120.0
    """Beats a minute."""


@dataclass(frozen=True)
class Code:
    """The functions and the storage that a block becomes.  See the module's calling convention.

    `state` maps a name to its first value; an int stays an int (a position), a float a float.  `memory` is the
    first content of the block's own memory.  `delay` is the block's own latency in samples at its own rate.
    `shows` names states that a player may want to see while playing (a tracker's pitch).
    """

    tick: Callable[..., Any]
    prepare: Callable[..., Any] | None = None
    emerge: Callable[..., Any] | None = None
    sweep: Callable[..., Any] | None = None
    coefficients: int = 1
    state: Mapping[str, float | int] = field(default_factory=dict)
    memory: np.ndarray | None = None
    delay: int = 0
    shows: tuple[str, ...] = ()


Bandwidth = Callable[[Setting, Mapping[str, float]], float]
"""``rule(setting, {port: Hz}) -> Hz``: how wide the output is; its docstring says the rule in words."""


def unchanged(setting: Setting, inputs: Mapping[str, float]) -> float:
    """As wide as its widest input."""
    return max(inputs.values(), default=0.0)


def product(setting: Setting, inputs: Mapping[str, float]) -> float:
    """The bandwidths of its inputs together."""
    return sum(inputs.values())


def order(n: int) -> Bandwidth:
    """Return the rule for a polynomial of order *n*."""

    def times(setting: Setting, inputs: Mapping[str, float]) -> float:
        return n * max(inputs.values())

    times.__doc__ = f"{n} times the bandwidth of its input."
    return times


@dataclass(frozen=True)
class Kind:
    """A kind of block, as the table of kinds knows it."""

    name: str
    about: str
    ports: tuple[str, ...]
    parameters: tuple[Parameter | Choice | File, ...]
    law: str
    source: str
    build: Callable[[Setting], Code]
    bandwidth: Bandwidth = unchanged
    outputs: tuple[str, ...] = ("out",)
    linear: bool = True
    breaks_loops: bool = False
    base_rate_only: bool = False
    gives: tuple[float, float] = (-1.0, 1.0)
    module: str = ""

    @property
    def numbers(self) -> tuple[Parameter, ...]:
        """The parameters that are numbers, in declared order."""
        return tuple(p for p in self.parameters if isinstance(p, Parameter))

    @property
    def choices(self) -> tuple[Choice, ...]:
        """The parameters that are choices, in declared order."""
        return tuple(p for p in self.parameters if isinstance(p, Choice))

    @property
    def files(self) -> tuple[File, ...]:
        """The parameters that name files, in declared order."""
        return tuple(p for p in self.parameters if isinstance(p, File))


_declared: dict[str, Kind] = {}


def kind(
    name: str,
    *,
    about: str,
    law: str,
    source: str,
    ports: tuple[str, ...] = (),
    parameters: tuple[Parameter | Choice | File, ...] = (),
    bandwidth: Bandwidth = unchanged,
    outputs: tuple[str, ...] = ("out",),
    linear: bool = True,
    breaks_loops: bool = False,
    base_rate_only: bool = False,
    gives: tuple[float, float] = (-1.0, 1.0),
) -> Callable[[Callable[[Setting], Code]], Callable[[Setting], Code]]:
    """Declare a kind of block; the decorated function returns its `Code` for one `Setting`.

    Parameters
    ----------
    name : str
        As patches write it: lower case, words joined by "-".
    about, law, source : str
        What it does to the sound; its formula; where the formula is published.
    ports : tuple of str
        Audio inputs; one is called "x", a second "y".
    parameters : tuple of Parameter, Choice and File
    bandwidth : callable
        How wide the output is: see `Bandwidth`, and `unchanged`, `product`, `order`.
    outputs : tuple of str
        More than one only where a block makes stereo.
    linear : bool
        True if it adds no frequencies; it may then be drawn into the region around it.
    breaks_loops : bool
        True if its output depends on earlier inputs only (it has an `emerge`).
    base_rate_only : bool
        True if it is never run oversampled.
    gives : tuple of float
        Lowest and highest value of its outputs, as far as what follows them must count with.

    Raises
    ------
    ValueError
        If the name is taken by another module.
    """

    def declare(build: Callable[[Setting], Code]) -> Callable[[Setting], Code]:
        taken = _declared.get(name)
        if taken is not None and taken.module != build.__module__:
            raise ValueError(f"kind '{name}' of {build.__module__} is already declared by {taken.module}")
        _declared[name] = Kind(
            name, about, ports, parameters, law, source, build, bandwidth, outputs, linear, breaks_loops,
            base_rate_only, gives, build.__module__,
        )  # fmt: skip
        return build

    return declare

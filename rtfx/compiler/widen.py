"""First pass: how wide each signal becomes, and so where and how far the rate must be raised.

Products that would fold back under 20 kHz must be kept apart until a filter has removed them.  A block whose
output reaches B needs the smallest factor F with F·rate − B ≥ 20 kHz.  Blocks that need more than 1 form
regions; a region takes in what is linear between its blocks, so that the rate is raised once and not twice.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from rtfx.blocks.kind import AUDIBLE_HZ
from rtfx.compiler.graph import Graph
from rtfx.compiler.reach import setting
from rtfx.patch.model import INPUT, Patch

FACTORS = (1, 2, 4, 8, 16)


@dataclass(frozen=True)
class Region:
    """Blocks that run at `factor` times the rate, the block that asks for it, and how wide its output is."""

    blocks: frozenset[str]
    factor: int
    because: str
    width_hz: float


@dataclass(frozen=True)
class Widths:
    """What this pass found: the regions, and for each block the bandwidth of its output in Hz."""

    regions: tuple[Region, ...]
    width_hz: dict[str, float]

    def region_of(self, name: str) -> int | None:
        """Return the number of the region that block *name* is in, or None."""
        return next((i for i, region in enumerate(self.regions) if name in region.blocks), None)

    def factor(self, name: str) -> int:
        """Return how many times the rate block *name* runs at."""
        index = self.region_of(name)
        return 1 if index is None else self.regions[index].factor


def audible_hz(rate: float) -> float:
    """Return the edge of the band kept clean: 20 kHz, or what the filters keep at rates below 48 kHz."""
    return min(AUDIBLE_HZ, rate * 20 / 48)


def needed_factor(width_hz: float, rate: float) -> int:
    """Return the smallest factor for which a signal of *width_hz* does not fold back into the audible band."""
    clean = audible_hz(rate)
    return next((f for f in FACTORS if f * rate - width_hz >= clean), FACTORS[-1])


def widen(patch: Patch, rate: float, quality: str) -> Widths:
    """Return the regions of *patch* at *rate* (Hz) for *quality*, and the bandwidth of every block's output."""
    return _Widening(patch, rate, quality).run()


class _Widening:
    def __init__(self, patch: Patch, rate: float, quality: str) -> None:
        self.patch, self.rate = patch, rate
        self.graph = Graph(patch)
        self.block = {b.name: b for b in patch.blocks}
        self.setting = {b.name: setting(patch, b, rate, quality) for b in patch.blocks}
        self.width: dict[str, float] = {}
        self.groups: list[set[str]] = []

    def run(self) -> Widths:
        for group in self.graph.groups():
            if self.graph.is_loop(group):
                self._place_loop(group)
            else:
                self._place_block(next(iter(group)))
        self._draw_in_sources()
        regions = tuple(self._region(group) for group in self.groups)
        return Widths(regions, self.width)

    def _width_of(self, name: str, widths: dict[str, float]) -> float:
        """Bandwidth of one block's output, with *widths* for what lies in its region and base signals for the rest."""

        def arriving(source: str) -> float:
            if source == INPUT:
                return AUDIBLE_HZ
            if source in widths:
                return widths[source]
            inside = any(source in group for group in self.groups)
            return min(self.width.get(source, 0.0), AUDIBLE_HZ) if inside else self.width.get(source, 0.0)

        block = self.block[name]
        inputs = {port: arriving(wire.block) for port, wire in block.wires.items()}
        moved = sum(arriving(w.block) for follow in block.follows.values() for w in follow.wires)
        return block.kind.bandwidth(self.setting[name], inputs) + moved

    def _widths_within(self, group: Iterable[str], rounds: int = 1) -> dict[str, float]:
        """Bandwidths of a region's blocks, nothing being filtered between them; a loop goes round *rounds* times."""
        group = set(group)
        ordered = [n for g in self.graph.groups() for n in self.graph.names if n in g and n in group]
        widths: dict[str, float] = dict.fromkeys(ordered, 0.0)
        for _ in range(rounds):
            for name in ordered:
                widths[name] = self._width_of(name, widths)
        return widths

    def _factor(self, widths: dict[str, float]) -> int:
        return max(
            (needed_factor(w, self.rate) for n, w in widths.items() if not self.block[n].kind.linear),
            default=1,
        )

    def _place_block(self, name: str) -> None:
        alone = self._widths_within({name})
        self.width |= alone
        if self._factor(alone) == 1:
            return
        for group in self._unions(name):
            widths = self._widths_within(group)
            if all(w <= FACTORS[-1] * self.rate - audible_hz(self.rate) for w in widths.values()):
                self.width |= widths
                self.groups = [g for g in self.groups if not g & group] + [group]
                return
        self.groups.append({name})

    def _unions(self, name: str) -> list[set[str]]:
        """Regions that block *name* could join, as the whole set of blocks each would then have; widest first."""
        near = [g for g in self.groups if self._leads_to(g, name)]
        attempts = ([set().union(*near)] if len(near) > 1 else []) + near
        unions = []
        for attempt in attempts:
            core = attempt | {name}
            drawn_in = self.graph.between(core)
            whole = core | drawn_in
            if all(self._can_be_drawn_in(n) for n in drawn_in) and not self._follows_itself(whole):
                unions.append(whole)
        return unions

    def _leads_to(self, group: set[str], name: str) -> bool:
        """Tell whether a way leads from *group* to *name* through nothing but blocks that can be drawn in."""
        todo, seen = list(self.graph.ports[name]), set()
        while todo:
            source = todo.pop()
            if source in group:
                return True
            if source not in seen and self._can_be_drawn_in(source):
                seen.add(source)
                todo += self.graph.ports[source]
        return False

    def _can_be_drawn_in(self, name: str) -> bool:
        kind = self.block[name].kind
        taken = any(name in g for g in self.groups)
        return kind.linear and not kind.base_rate_only and not kind.breaks_loops and not taken

    def _follows_itself(self, group: set[str]) -> bool:
        return any(self.graph.follows[n] & group for n in group)

    def _place_loop(self, group: frozenset[str]) -> None:
        widths = self._widths_within(group, rounds=2)
        self.width |= widths
        if self._factor(widths) > 1:
            self._refuse_base_rate_only(group)
            self.groups.append(set(group))

    def _refuse_base_rate_only(self, group: frozenset[str]) -> None:
        for name in sorted(group):
            kind = self.block[name].kind
            if kind.base_rate_only:
                raise ValueError(
                    f"block '{name}': {kind.name} runs at the base rate only, and cannot stand in a loop with a "
                    "curve or a product that needs a higher one. Put it outside the loop."
                )

    def _draw_in_sources(self) -> None:
        """Let what makes its own sound run where it is used, if it is used in one region only."""
        pure = self._pure()
        for name in reversed([n for g in self.graph.groups() for n in g]):
            users = self.graph.fed_by[name]
            if name not in pure or not users or name in (self.patch.left.block, self.patch.right.block):
                continue
            for group in self.groups:
                if users <= group and not any(name in self.graph.follows[u] for u in users):
                    group.add(name)
                    break

    def _pure(self) -> set[str]:
        """Blocks that neither the guitar nor a region feeds."""
        pure: set[str] = set()
        for name in (n for g in self.graph.groups() for n in g):
            block = self.block[name]
            own = all(w.block in pure for w in block.wires.values())
            if own and self._can_be_drawn_in(name):
                pure.add(name)
        return pure

    def _region(self, group: set[str]) -> Region:
        bent = {n: self.width[n] for n in self.graph.names if n in group and not self.block[n].kind.linear}
        because = max(bent, key=bent.__getitem__)
        return Region(frozenset(group), self._factor(bent), because, bent[because])

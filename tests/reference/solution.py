"""A model's answers in SI from three grids, each twice as fine as the one before, with their second and fourth order
errors removed, and an estimate of what is left.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from .branch import Reached, Search, cold, follow, hottest, onto, tick_of, value_at, watched
from .chain import Grid, State, StuckError, nodes
from .laws import Array
from .model import BAR, Model

FINE_ENOUGH = 2e-7
MOST = 8  # times the first number of cells
BASE = "base"


class RunawayError(Exception):
    """No steady state that heating from cold leads to."""


class NothingError(Exception):
    """No state at all, even without sources."""


@dataclass(frozen=True)
class Found:
    """A number and what may be wrong with it."""

    value: float
    error: float


def romberg(three: list[Array]) -> tuple[Array, Array]:
    c, m, f = three
    one, two = (4 * m - c) / 3, (4 * f - m) / 3
    return (16 * two - one) / 15, np.abs((16 * two - one) / 15 - two)


class Solution:
    """A model's present state, and the end of any group of its layers' sources. Rough: on one coarse grid only."""

    def __init__(self, model: Model, probe: float | None = None, rough: bool = False) -> None:
        self.model, self.probe, self.rough = model, probe, rough
        self.zero = model.sinks[0]
        self.end_peak = self.zero  # highest temperature at the end last searched for
        self.everything = frozenset(i for i, _ in model.sources)
        tables = any(source.law.table for _, source in model.sources)
        self.cells = 64 if tables or model.shape == BAR else 32
        if rough:
            self.cells //= 2

    def grid(self, cells: int, group: frozenset[int]) -> Grid:
        return Grid(self.model, cells, self.zero, group)

    # --- the present state ---

    def _still(self, grid: Grid) -> State:
        try:
            state = follow(grid, cold(grid), 0.0, 0.0, 1.0)
        except StuckError as stuck:
            raise NothingError from stuck
        if self._backward(grid, state):
            raise NothingError
        return state

    @staticmethod
    def _backward(grid: Grid, state: State) -> bool:
        """Whether a resistivity is not positive somewhere."""
        laws = [(span.heat, span) for span in grid.electric if span.heat is not None]
        return any(bool(np.any(law.value(nodes(state.u, span)) <= 0.0)) for law, span in laws)

    @cached_property
    def _present(self) -> tuple[list[tuple[Grid, State]], dict[str, Found]]:
        first = self.grid(self.cells, self.everything)
        still = self._still(first)
        try:
            state = follow(first, still, 1.0, 0.0, 1.0)
        except StuckError as stuck:
            raise RunawayError from stuck
        if self._backward(first, state):
            raise NothingError
        pairs = [(first, state)]
        if self.rough:
            return pairs, {name: Found(value, 0.0) for name, value in self._measure(first, state).items()}

        def finer() -> None:
            grid, state = pairs[-1]
            new = self.grid(2 * grid.cells, self.everything)
            found, _ = new.newton(onto(state, grid, new))
            pairs.append((new, found))

        try:
            finer()
            finer()
            while True:
                measures = [self._measure(grid, state) for grid, state in pairs[-3:]]
                names = list(measures[0])
                best, error = romberg([np.array([one[name] for name in names]) for one in measures])
                found = {name: Found(float(v), float(e)) for name, v, e in zip(names, best, error, strict=True)}
                worst = max(one.error for name, one in found.items() if name.startswith("t "))
                if worst <= FINE_ENOUGH * self._scale(found) or pairs[-1][0].cells >= 4 * MOST * self.cells:
                    return pairs[-3:], found
                finer()
        except StuckError as stuck:
            raise RunawayError from stuck

    def _scale(self, found: dict[str, Found]) -> float:
        values = [one.value for name, one in found.items() if name.startswith("t ")]
        values += [sink - self.zero for sink in self.model.sinks]
        return max(values) - min(values)

    def _measure(self, grid: Grid, state: State) -> dict[str, float]:
        model, u = self.model, state.u
        out: dict[str, float] = {}
        made = 0.0
        for i, span in enumerate(grid.spans, 1):
            local = nodes(u, span)
            out[f"t peak {i}"], out[f"place {i}"] = hottest(grid, span, u)
            out[f"t low {i}"] = float(np.min(local))
            out[f"t mean {i}"] = float(local @ span.volumes / np.sum(span.volumes))
            out[f"t start {i}"], out[f"t end {i}"] = float(local[0]), float(local[-1])
            heat = grid.heat_per_volume(span, state)
            out[f"made {i}"] = 0.0 if heat is None else float(heat @ span.volumes)
            made += out[f"made {i}"]
            if span.electric >= 0 and span.heat is not None:
                out[f"square {i}"] = float(state.squares[span.electric])
                out[f"total {i}"] = float(span.heat.value(local) @ span.volumes)
        if self.probe is not None:
            span = next(one for one in grid.spans if self.probe <= one.places[-1] or one is grid.spans[-1])
            out["t probe"] = value_at(grid, span, u, tick_of(grid, span, self.probe))
        flow = grid.flows(u)
        out["left"] = self._outflow(grid, state, flow, left=True)
        out["right"] = self._outflow(grid, state, flow, left=False)
        out["side"] = float(np.sum(grid.side * grid.loss(model.side, u, 1.0)[0])) if model.shape == BAR else 0.0
        out["made"] = made
        return out

    def _outflow(self, grid: Grid, state: State, flow: Array, left: bool) -> float:
        """Heat leaving the body at an end: by what stands outside it, or, where it is held, from conservation inside."""
        model, u = self.model, state.u
        skin, node = (model.left, grid.body[0]) if left else (model.right, grid.body[1])
        if not skin.cools and skin.flux_in == 0.0:
            return 0.0 - grid._contact_heat(skin, state)
        contact = grid._contact_heat(skin, state)
        outer = 0 if left else grid.n - 1
        if outer != node:
            edge = 0 if left else grid.n - 2
            return float(flow[edge]) * (-1.0 if left else 1.0) - contact
        if skin.held is None:
            place = 0.0 if left else model.thickness
            return model.area(place) * float(grid.loss(skin, float(u[node]), 1.0)[0]) - contact
        span = grid.spans[0 if left else -1]
        heat = grid.heat_per_volume(span, state)
        end = 0 if left else -1
        half = 0.0 if heat is None else float(heat[end] * span.volumes[end])
        if model.shape == BAR:
            half -= float(grid.side[node] * grid.loss(model.side, float(u[node]), 1.0)[0])
        inside = float(flow[span.first]) if left else float(flow[span.last - 1])
        return half - inside if left else half + inside

    @property
    def found(self) -> dict[str, Found]:
        return self._present[1]

    def kelvin(self, name: str) -> Found:
        got = self.found[f"t {name}"]
        return Found(got.value + self.zero, got.error)

    def number(self, name: str) -> Found:
        return self.found[name]

    @cached_property
    def scale(self) -> float:
        """Largest difference among temperatures of the body, fluids, surroundings and held faces."""
        return self._scale(self.found)

    @cached_property
    def peak(self) -> tuple[int, Found]:
        layers = range(1, len(self.model.layers) + 1)
        best = max(layers, key=lambda i: self.found[f"t peak {i}"].value)
        return best, self.kelvin(f"peak {best}")

    @property
    def lowest(self) -> float:
        return min(self.kelvin(f"low {i}").value for i in range(1, len(self.model.layers) + 1))

    def mean(self) -> Found:
        parts = [self.model.volume(layer.start, layer.start + layer.thickness) for layer in self.model.layers]
        means = [self.kelvin(f"mean {i}") for i in range(1, len(parts) + 1)]
        whole = sum(parts)
        value = sum(v * one.value for v, one in zip(parts, means, strict=True)) / whole
        return Found(value, max(one.error for one in means))

    def watch(self, name: str) -> Found:
        """The temperature now that a limit watches."""
        if name == "left limit":
            return self.kelvin("start 1")
        if name == "right limit":
            return self.kelvin(f"end {len(self.model.layers)}")
        return self.peak[1] if name == "limit" else self.kelvin(f"peak {name.split()[1]}")

    def as_hot_elsewhere(self) -> bool:
        """Whether places far from the peak's are as hot but for rounding, or the peak is flat."""
        grid, state = self._present[0][-1]
        layer, peak = self.peak
        place = self.number(f"place {layer}").value
        near = 0.05 * self.model.layers[layer - 1].thickness
        top = peak.value - self.zero - 5e-6 * self.scale
        for span in grid.spans:
            hot = nodes(state.u, span) >= top
            if np.any(hot & (np.abs(span.places - place) > near)):
                return True
        return False

    # --- the size of the sources at the first limit ---

    def base(self, group: frozenset[int]) -> tuple[Grid, State]:
        """The coarse state with the group's sources at nothing and all others as they are."""
        grid = self.grid(self.cells, group)
        still = self._still(grid)
        if group == self.everything:
            return grid, still
        try:
            return grid, follow(grid, still, 0.0, 1.0, 1.0)
        except StuckError as stuck:
            raise RunawayError from stuck

    def end(self, group: frozenset[int], limits: dict[str, float]) -> tuple[str, Found, float]:
        """Which limit comes first ("runaway"; "" for none; BASE if broken at nothing), at which scale, and its rate.

        The rate is kelvin of the watched temperature for one of the scale (0 where it does not matter).
        """
        grid, base = self.base(group)
        watches = [(name, limit - self.zero) for name, limit in limits.items()]
        over = [watched(grid, name, base.u) - limit for name, limit in watches]
        sinks = [sink - self.zero for sink in self.model.sinks]
        spread = [*sinks, *(limit for _, limit in watches), float(np.max(base.u)), float(np.min(base.u))]
        scale = max(max(spread) - min(spread), 1e-3)
        if any(miss > 1e-9 * scale for miss in over):
            return BASE, Found(0.0, 0.0), 0.0
        search = Search(self.model, group, watches)
        got = search.first(grid, base, scale)
        if not got.name:
            return "", Found(0.0, 0.0), 0.0
        self.end_peak = float(np.max(got.state.u)) + self.zero
        if self.rough:
            return got.name, Found(got.state.size, 0.0), 0.0
        ends, grids = [got], [grid]
        while True:
            while len(ends) < 3:
                new = self.grid(2 * grids[-1].cells, group)
                ends.append(search.again(grids[-1], ends[-1], new))
                grids.append(new)
            best, error = romberg([np.array([one.state.size]) for one in ends[-3:]])
            if float(error[0]) <= FINE_ENOUGH * abs(float(best[0])) or grids[-1].cells >= 4 * MOST * self.cells:
                break
            ends, grids = ends[-2:], grids[-2:]
        return got.name, Found(float(best[0]), float(error[0])), self._rate(grids[-1], ends[-1])

    @staticmethod
    def _rate(grid: Grid, end: Reached) -> float:
        if end.name == "runaway":
            return 0.0
        step = 1e-6 * max(float(np.max(np.abs(end.state.u))), 1e-6)
        p = float(end.state.u[end.pin])
        other, _ = grid.newton(end.state, end.pin, p + step)
        change = other.size - end.state.size
        return (watched(grid, end.name, other.u) - watched(grid, end.name, end.state.u)) / change if change else 0.0

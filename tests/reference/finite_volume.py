"""Steady conduction through one layer with a uniform source, by finite volumes on a grid of one body.

Conservation only: nodes on a grid that includes both faces, control volumes that meet half way, exact geometric
conductances between nodes, sources summed over control volumes. The chain of nodes is eliminated as a ladder of
conductances (no subtraction, so neither very weak nor very strong films cost digits). Two grids, one twice as fine,
give the second-order error, which is then removed (Richardson). Per m² of a wall, per m of a cylinder, whole sphere.
"""

from __future__ import annotations

import math
from bisect import bisect_left
from collections.abc import Callable
from dataclasses import dataclass, field
from itertools import pairwise

CELLS = 300
WALL, CYLINDER, SPHERE = 0, 1, 2
# Gauss-Legendre points and weights on -1..1 (four points)
_A, _B = math.sqrt(3 / 7 - 2 / 7 * math.sqrt(6 / 5)), math.sqrt(3 / 7 + 2 / 7 * math.sqrt(6 / 5))
_WA, _WB = (18 + math.sqrt(30)) / 36, (18 - math.sqrt(30)) / 36
GAUSS = ((-_A, _WA), (_A, _WA), (-_B, _WB), (_B, _WB))


@dataclass(frozen=True)
class Face:
    """What stands at a face: temperatures in kelvin; nothing at all is an insulated face."""

    held: float | None = None
    film: float = 0.0
    fluid: float = 0.0
    flux_in: float = 0.0


@dataclass(frozen=True)
class Body:
    shape: int
    inner: float  # radius of the bore, 0 for a solid body or a wall
    thickness: float
    conductivity: float
    left: Face = field(default_factory=Face)
    right: Face = field(default_factory=Face)

    @property
    def solid(self) -> bool:
        return self.shape != WALL and self.inner == 0.0

    def area(self, place: float) -> float:
        """Area crossed at a distance from the left face (or the bore, or the middle)."""
        radius = self.inner + place
        return (1.0, 2.0 * math.pi * radius, 4.0 * math.pi * radius * radius)[self.shape]

    def volume(self, start: float, end: float) -> float:
        """Volume between two places, signed, without cancellation in thin shells."""
        a, b = self.inner + start, self.inner + end
        step = end - start
        if self.shape == WALL:
            return step
        return math.pi * step * (a + b) if self.shape == CYLINDER else 4 / 3 * math.pi * step * (a * a + a * b + b * b)

    def conductance(self, start: float, end: float) -> float:
        """Conductance between two places when no heat is made between them."""
        a, b = self.inner + start, self.inner + end
        step = end - start
        if self.shape == WALL:
            return self.conductivity / step
        if self.solid:  # the only heat that flows is what is made inside: area half way
            return self.conductivity * self.area((start + end) / 2) / step
        if self.shape == CYLINDER:
            return 2.0 * math.pi * self.conductivity / math.log1p(step / a)
        return 4.0 * math.pi * self.conductivity * a * b / step


def grid(body: Body, cells: int) -> list[float]:
    """Distances from the left face; even for walls and solid bodies, even in log radius for hollow ones."""
    if body.shape == WALL or body.solid:
        return [body.thickness * i / cells for i in range(cells + 1)]
    growth = math.log1p(body.thickness / body.inner)
    places = [body.inner * math.expm1(growth * i / cells) for i in range(cells + 1)]
    return [*places[:-1], body.thickness]


@dataclass(frozen=True)
class Field:
    """Temperatures above the reference, and heat flowing to the right, at the nodes."""

    rise: list[float]
    flow: list[float]


def solve(body: Body, places: list[float], source: float, reference: float, sinks: bool) -> Field:
    """One linear solve. With sinks False every fluid and held face is at the reference and no flux is put in."""
    last = len(places) - 1
    middles = [(places[i] + places[i + 1]) / 2 for i in range(last)]
    bounds = [0.0, *middles, places[last]]
    heat = [source * body.volume(bounds[i], bounds[i + 1]) for i in range(last + 1)]
    ground = [0.0] * (last + 1)
    link = [body.conductance(places[i], places[i + 1]) for i in range(last)]
    held: dict[int, float] = {}
    for node, face in ((0, body.left), (last, body.right)):
        if face.held is not None:
            held[node] = face.held - reference if sinks else 0.0
            continue
        area = body.area(places[node])
        ground[node] = face.film * area
        if sinks:
            heat[node] += area * (face.flux_in + (face.film * (face.fluid - reference) if face.film else 0.0))
    first = 0
    if 0 in held:
        first = 1
        ground[1] += link[0]
        heat[1] += link[0] * held[0]
    for i in range(first, last):
        total = ground[i] + link[i]
        ground[i + 1] += ground[i] * link[i] / total
        heat[i + 1] += link[i] * heat[i] / total
    rise = [0.0] * (last + 1)
    flow = [0.0] * (last + 1)
    rise[last] = held[last] if last in held else heat[last] / ground[last]
    for i in range(last - 1, -1, -1):
        if i in held:
            rise[i] = held[i]
            across = link[i] * (rise[i] - rise[i + 1])
        else:
            total = ground[i] + link[i]
            rise[i] = (heat[i] + link[i] * rise[i + 1]) / total
            across = link[i] * (heat[i] - ground[i] * rise[i + 1]) / total
        flow[i + 1] = across + source * body.volume(middles[i], places[i + 1])
        if i == 0:
            flow[0] = across - source * body.volume(0.0, middles[0])
    for node, face, sign in ((0, body.left, -1.0), (last, body.right, 1.0)):
        area = body.area(places[node])
        if node not in held and face.film * area < link[min(node, last - 1)]:
            put_in = face.flux_in + face.film * (face.fluid - reference) if sinks else 0.0
            flow[node] = sign * area * (face.film * rise[node] - put_in)
    return Field(rise, flow)


class OneGrid:
    """The solution on one grid as the sum of the faces' own field and the source times a unit field."""

    def __init__(self, body: Body, cells: int, reference: float) -> None:
        self.body = body
        self.places = grid(body, cells)
        self.still = solve(body, self.places, 0.0, reference, sinks=True)
        self.unit = solve(body, self.places, 1.0, reference, sinks=False)
        middles = [(a + b) / 2 for a, b in pairwise(self.places)]
        bounds = [0.0, *middles, self.places[-1]]
        shares = [body.volume(a, b) for a, b in pairwise(bounds)]
        whole = body.volume(0.0, body.thickness)
        self.mean_still = sum(v * t for v, t in zip(shares, self.still.rise, strict=True)) / whole
        self.mean_unit = sum(v * t for v, t in zip(shares, self.unit.rise, strict=True)) / whole

    def node(self, index: int, source: float) -> float:
        return self.still.rise[index] + source * self.unit.rise[index]

    def flow(self, index: int, source: float) -> float:
        return self.still.flow[index] + source * self.unit.flow[index]

    def mean(self, source: float) -> float:
        return self.mean_still + source * self.mean_unit

    def at(self, place: float, source: float, index: int | None = None) -> float:
        """Temperature at any place: from the nearest node along the heat flow that conservation gives."""
        if index is None:
            index = min(max(bisect_left(self.places, place), 0), len(self.places) - 1)
        node = self.places[index]
        half = (place - node) / 2
        if half == 0.0:
            return self.node(index, source)
        known = self.flow(index, source)
        fall = 0.0
        for point, weight in GAUSS:
            here = node + half * (1.0 + point)
            fall += weight * (known + source * self.body.volume(node, here)) / self.body.area(here)
        return self.node(index, source) - fall * half / self.body.conductivity

    def peak(self, source: float) -> tuple[float, float]:
        """Highest temperature and its place: where the heat flow turns from leftward to rightward."""
        last = len(self.places) - 1
        left, right = self.node(0, source), self.node(last, source)
        if source <= 0.0:
            return (right, self.places[last]) if right > left else (left, 0.0)
        if self.flow(0, source) >= 0.0:
            return left, 0.0
        if self.flow(last, source) <= 0.0:
            return right, self.places[last]
        low, high = 0, last
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (middle, high) if self.flow(middle, source) < 0.0 else (low, middle)
        start, end, known = self.places[low], self.places[high], self.flow(low, source)
        a, b = start, end
        for _ in range(60):
            middle = (a + b) / 2
            a, b = (middle, b) if known + source * self.body.volume(start, middle) < 0.0 else (a, middle)
        return self.at(a, source, low), a


class Solved:
    """A body whose state for any uniform source (W/m³) can be asked; temperatures in kelvin."""

    def __init__(self, body: Body, cells: int = CELLS) -> None:
        self.body = body
        sinks = [face.held for face in (body.left, body.right) if face.held is not None]
        sinks += [face.fluid for face in (body.left, body.right) if face.film]
        self.sinks = sinks
        self.reference = sinks[0]
        self.coarse = OneGrid(body, cells, self.reference)
        self.fine = OneGrid(body, 2 * cells, self.reference)

    def _better(self, ask: Callable[[OneGrid], float]) -> float:
        coarse, fine = ask(self.coarse), ask(self.fine)
        return fine + (fine - coarse) / 3.0

    def peak(self, source: float) -> float:
        return self.reference + self._better(lambda grid: grid.peak(source)[0])

    def peak_place(self, source: float) -> float:
        place = self._better(lambda grid: grid.peak(source)[1])
        return min(max(place, 0.0), self.body.thickness)

    def left(self, source: float) -> float:
        return self.reference + self._better(lambda grid: grid.node(0, source))

    def right(self, source: float) -> float:
        return self.reference + self._better(lambda grid: grid.node(len(grid.places) - 1, source))

    def mean(self, source: float) -> float:
        return self.reference + self._better(lambda grid: grid.mean(source))

    def at(self, place: float, source: float) -> float:
        return self.reference + self._better(lambda grid: grid.at(place, source))

    def lowest(self, source: float) -> float:
        grid = self.fine
        return self.reference + min(grid.node(i, source) for i in range(len(grid.places)))

    def left_out(self, source: float) -> float:
        return -self._better(lambda grid: grid.flow(0, source))

    def right_out(self, source: float) -> float:
        return self._better(lambda grid: grid.flow(len(grid.places) - 1, source))

    def made(self, source: float) -> float:
        return source * self.body.volume(0.0, self.body.thickness)

    def scale(self, source: float, *more: float) -> float:
        """Largest difference among peak, lowest, faces, fluids, held temperatures (and any more given)."""
        all_of_them = [self.peak(source), self.lowest(source), *self.sinks, *more]
        return max(all_of_them) - min(all_of_them)


def first_source(temperature: Callable[[float], float], limit: float, start: float) -> float | None:
    """Smallest source >= 0 at which a temperature that never falls with the source reaches its limit.

    By doubling, then bisection. None if no source reaches it; the caller makes sure it is not above at zero.
    """
    low, high = 0.0, start
    for _ in range(120):
        if temperature(high) >= limit:
            break
        low, high = high, 2.0 * high
    else:
        return None
    for _ in range(120):
        middle = (low + high) / 2
        if middle in (low, high):
            break
        low, high = (middle, high) if temperature(middle) < limit else (low, middle)
    return (low + high) / 2

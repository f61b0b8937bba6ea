"""From a problem to solved networks: blocks of cases, slices of layers, and nodes enough for every case's own temperatures.

A case's slices and nodes depend on that case alone. Thick round layers are sliced by their radius ratio. A layer in which the
temperature crosses points of a table is cut where it does, so that every slice is smooth: a cut that is off by δ costs δ², so
cutting again at the new crossings is enough. What stays unresolved gets more nodes, then thinner slices.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from ingle.collocation import CollocatedPort
from ingle.conductivities import Table
from ingle.fluids import KELVIN
from ingle.network_newton import Outcome, newton
from ingle.network_problem import NetworkProblem
from ingle.network_state import Border, State, Status, cold, usable
from ingle.network_sweep import Network, build, collocated, with_nodes
from ingle.shapes import Array, Shape

BLOCK = 2048
# Nodes of a slice and into how many a slice is split, by turns until a case is resolved.
LEVELS = ((6, 1), (12, 1), (24, 1), (48, 1), (48, 2), (48, 4), (48, 8), (48, 16), (48, 32))
# Up to how many decay lengths a slice may span at each level; beyond the last the finest is used. Solid bodies alone are smooth
# enough for the first.
_SPANS = (0.7, 8.0, 20.0, 45.0, 90.0, 180.0, 360.0, 720.0)
# The largest radius ratio of a slice of a cylinder or sphere.
RATIO = {Shape.CYLINDER: 3.0, Shape.SPHERE: 1.6}
# A case is resolved where its estimated error is below these shares of its rise and of its coldest temperature in kelvin.
OF_RISE, OF_KELVIN = 1e-11, 1e-13
_CUT_ROUNDS = 4
_CLOSE_CUTS = 1e-7


@dataclass(frozen=True)
class Part:
    """Cases solved together: ``rows`` of the problem they are, and where each ended."""

    rows: np.ndarray
    network: Network
    border: Border
    state: State
    status: np.ndarray
    steps: np.ndarray
    rising: Array

    @cached_property
    def multiples(self) -> list[Array]:
        """μ of each element."""
        return self.border.multiples(self.network, self.state)


def run(problem: NetworkProblem, border: Border, seeds: list[Part] | None = None) -> list[Part]:
    """Solve every case, from cold or from ``seeds`` (the parts of an earlier run of the same cases)."""
    parts: list[Part] = []
    for rows, cuts, seed in _grouped(problem, seeds, border.nodes):
        if seed is None and len(rows) == len(problem) <= BLOCK:
            return _resolve(problem, border, cuts, 0, 0, None)
        for start in range(0, len(rows), BLOCK):
            block = slice(start, start + BLOCK)
            these = rows[block]
            here = tuple(cut[:, block] for cut in cuts)
            inside = np.arange(len(rows))[block]
            seeding = None if seed is None else (seed[0].take(inside), seed[1].take(inside))
            found = _resolve(problem.take(these), border.take(these), here, 0, 0, seeding)
            parts += [Part(these[p.rows], p.network, p.border, p.state, p.status, p.steps, p.rising) for p in found]
    return parts


def plain_border_of(problem: NetworkProblem, scale: Array | None) -> Border:
    """The border of a problem at its own sources."""
    one = np.ones(len(problem))
    supplies = problem.supplies
    s = one if scale is None else scale
    given = [supply.given * (np.sqrt(s) if supply.driven else one) for supply in supplies]
    return Border(given, [False] * len(given), s)


Seed = tuple[Network, State]
Group = tuple[np.ndarray, tuple[Array, ...], Seed | None]


def _grouped(problem: NetworkProblem, seeds: list[Part] | None, by_nodes: bool) -> list[Group]:
    """Cases that share their slices, with the cuts between these."""
    if seeds is None:
        return [(rows, cuts, None) for rows, cuts in _sliced(problem, by_nodes)]
    groups: list[Group] = []
    for part in seeds:
        for rows, cuts in _sliced(problem.take(part.rows), by_nodes):
            groups.append((part.rows[rows], cuts, (part.network.take(rows), part.state.take(rows))))
    return groups


def _sliced(problem: NetworkProblem, by_nodes: bool) -> list[tuple[np.ndarray, tuple[Array, ...]]]:
    """Rows with their cuts: thick round layers in slices of equal radius ratio."""
    n = len(problem)
    none = np.zeros((0, n))
    first = 1 if problem.solid else 0
    if problem.shape == Shape.WALL or not any(collocated(problem.shape, layer, by_nodes) for layer in problem.layers[first:]):
        return [(np.arange(n), (none,) * len(problem.layers))]
    most = RATIO[problem.shape]
    counts, radii = [], []
    r = np.zeros(n) if problem.inner is None else problem.inner
    for index, layer in enumerate(problem.layers):
        after = r + layer.thickness
        sliceable = collocated(problem.shape, layer, by_nodes) and not (problem.solid and index == 0)
        ratio = after / np.where(r > 0.0, r, 1.0)
        count = np.ceil(np.log(ratio) / np.log(most) - 1e-12) if sliceable else np.ones(n)
        counts.append(np.clip(count, 1, 60).astype(np.intp))
        radii.append((r, ratio))
        r = after
    if all((count == count[0]).all() for count in counts):
        keys, which = np.stack(counts)[:, :1], np.zeros(n, dtype=np.intp)
    else:
        keys, which = np.unique(np.stack(counts), axis=1, return_inverse=True)
    groups = []
    for g, key in enumerate(keys.T):
        rows = np.flatnonzero(which.ravel() == g)
        cuts = []
        for (start, ratio), slices in zip(radii, key.tolist(), strict=True):
            share = np.arange(1, slices)[:, None] / slices
            cuts.append(start[rows] * np.expm1(np.log(ratio[rows]) * share) if slices > 1 else np.zeros((0, len(rows))))
        groups.append((rows, tuple(cuts)))
    return groups


def _resolve(
    problem: NetworkProblem, border: Border, cuts: tuple[Array, ...], level: int, rounds: int, seed: Seed | None
) -> list[Part]:  # fmt: skip
    if seed is not None:
        N, split = LEVELS[level]
        finer = tuple(_split(cut, layer.thickness, split) for cut, layer in zip(cuts, problem.layers, strict=True))
        network = build(problem, N, finer, border.nodes)
        return _from(problem, replace(border, opening=None), cuts, level, rounds, network, transferred(*seed, network))
    network = build(problem, 0, cuts, border.nodes)
    if level == 0 and any(isinstance(e.port, CollocatedPort) for e in network.elements):
        needed = _level_needed(network, border, cold(network, border))
        level = int(needed[0])
        if np.count_nonzero(needed != level):
            parts = []
            for start in np.unique(needed).tolist():
                rows = np.flatnonzero(needed == start)
                same = tuple(cut[:, rows] for cut in cuts)
                found = _cold_start(problem.take(rows), border.take(rows), same, start, rounds, network.take(rows))
                parts += [_renumbered(p, rows) for p in found]
            return parts
    return _cold_start(problem, border, cuts, level, rounds, network)


def _cold_start(
    problem: NetworkProblem, border: Border, cuts: tuple[Array, ...], level: int, rounds: int, network: Network
) -> list[Part]:  # fmt: skip
    """From cold on the meshes of a level; ``network`` has no nodes yet."""
    N, split = LEVELS[level]
    if split > 1:
        finer = tuple(_split(cut, layer.thickness, split) for cut, layer in zip(cuts, problem.layers, strict=True))
        network = build(problem, N, finer, border.nodes)
    else:
        with_nodes(network, N)
    return _from(problem, border, cuts, level, rounds, network, cold(network, border))


def _level_needed(network: Network, border: Border, state: State) -> np.ndarray:
    """The level that each case's decay lengths call for: too few nodes would look like instability."""
    x: Array | None = None
    least = 0
    for element, mu in zip(network.elements, border.multiples(network, state), strict=True):
        if isinstance(element.port, CollocatedPort):
            here = element.port.stiffness(mu)
            x = here if x is None else np.maximum(x, here)
            least = least if element.port.solid else 1
    assert x is not None
    return np.maximum(np.searchsorted(_SPANS, x), least)


def _from(
    problem: NetworkProblem, border: Border, cuts: tuple[Array, ...], level: int, rounds: int, network: Network, state: State
) -> list[Part]:  # fmt: skip
    """Newton's method from a state, and again with finer slices or better cuts for the cases that need them."""
    outcome: Outcome = newton(network, border, state)
    everyone = np.arange(len(problem))
    solved = outcome.status == Status.SOLVED
    if not np.count_nonzero(solved) or not any(isinstance(e.port, CollocatedPort) for e in network.elements):
        return [Part(everyone, network, border, state, outcome.status, outcome.steps, outcome.rising)]
    whole = Part(everyone, network, border, state, outcome.status, outcome.steps, outcome.rising)
    parts: list[Part] = []
    crossed = _crossings(problem, network, state, cuts, border.nodes) if rounds < _CUT_ROUNDS else None
    # On a floor there is no answer to refine.
    rough = solved & _unresolved(whole)
    if np.count_nonzero(rough):
        held = usable(network, border, state)
        rough = rough if held is None else rough & held
    if crossed is None and not np.count_nonzero(rough):
        return [whole]
    recut = np.zeros(len(problem), dtype=bool)
    if crossed is not None:
        for rows, new_cuts in crossed:
            keep = solved[rows]
            mine = rows[keep]
            if not len(mine):
                continue
            recut[mine] = True
            shorter = tuple(cut[:, keep] for cut in new_cuts)
            here = (network.take(mine), state.take(mine))
            part = _resolve(problem.take(mine), border.take(mine), shorter, level, rounds + 1, here)
            parts += [_renumbered(p, mine) for p in part]
    rough &= ~recut
    if rough.any() and level + 1 < len(LEVELS):
        rows = np.flatnonzero(rough)
        same = tuple(cut[:, rows] for cut in cuts)
        part = _resolve(problem.take(rows), border.take(rows), same, level + 1, rounds, (network.take(rows), state.take(rows)))
        parts += [_renumbered(p, rows) for p in part]
        rough[:] = False
    else:
        # Nothing finer is at hand: say so rather than give digits that are not known.
        outcome.status[rough] = Status.UNRESOLVED
    seen = np.zeros(len(problem), dtype=bool)
    for p in parts:
        seen[p.rows] = True
    if seen.all():
        return parts
    rest = everyone if not seen.any() else np.flatnonzero(~seen)
    if seen.any():
        network, border, state = network.take(rest), border.take(rest), state.take(rest)
    parts.append(Part(rest, network, border, state, outcome.status[rest], outcome.steps[rest], outcome.rising[rest]))
    return parts


def _renumbered(part: Part, rows: np.ndarray) -> Part:
    return Part(rows[part.rows], part.network, part.border, part.state, part.status, part.steps, part.rising)


def _split(cuts: Array, thickness: Array, pieces: int) -> Array:
    """Every slice in ``pieces`` equal ones."""
    if pieces == 1:
        return cuts
    places = np.concatenate([np.zeros((1, len(thickness))), cuts, thickness[None]])
    between = [places[:-1] + (places[1:] - places[:-1]) * (i / pieces) for i in range(pieces)]
    return np.stack(between, axis=1).reshape(-1, len(thickness))[1:]


def _unresolved(part: Part) -> np.ndarray:
    """Where the nodes are too few for the accuracy asked."""
    network, state = part.network, part.state
    size = np.abs(state.faces).max(axis=0)
    error: Array | float = 0.0
    for element, mu, theta in zip(network.elements, part.multiples, state.theta, strict=True):
        port = element.port
        if isinstance(port, CollocatedPort) and theta is not None:
            port.hold(mu, theta)
            low, high = port.span(theta)
            size = np.maximum(size, np.maximum(-low, high))
            error = np.maximum(error, port.unresolved(mu, theta))
    return np.asarray(error > OF_RISE * size + OF_KELVIN * np.abs(network.zero + KELVIN))


def _crossings(
    problem: NetworkProblem, network: Network, state: State, cuts: tuple[Array, ...], by_nodes: bool
) -> list[tuple[np.ndarray, tuple[Array, ...]]] | None:  # fmt: skip
    """Cases whose cuts should move to where the temperature crosses a table's points, grouped by how many cuts they have."""
    found: list[tuple[np.ndarray, np.ndarray, Array]] = []  # layer, row, place
    for index, layer in enumerate(problem.layers):
        tables = [t for t in (layer.conductivity.table, layer.source.table) if t is not None]
        if not tables or not collocated(problem.shape, layer, by_nodes):
            continue
        for e, element in enumerate(network.elements):
            port, theta = element.port, state.theta[e]
            if element.layer != index or not isinstance(port, CollocatedPort) or theta is None:
                continue
            for table in tables:
                rows, places = _crossed(port, table.shifted(network.zero), state.Ta[e], state.Tb[e], theta)
                places = places + element.offset[rows]
                found.append((np.full(len(rows), index), rows, places))
    if not found:
        return None
    layers, rows, places = (np.concatenate(x) for x in zip(*found, strict=True))
    if not len(rows):
        return None
    order = np.lexsort((places, layers, rows))
    layers, rows, places = layers[order], rows[order], places[order]
    crossing = np.unique(rows)
    first, last = np.searchsorted(rows, crossing), np.searchsorted(rows, crossing, side="right")
    bounds = dict(zip(crossing.tolist(), zip(first.tolist(), last.tolist(), strict=True), strict=True))
    groups: dict[tuple[int, ...], tuple[list[int], list[list[Array]]]] = {}
    for given, base in _sliced(problem, by_nodes):
        for at, row in enumerate(given.tolist()):
            if row not in bounds:
                continue
            mine = slice(*bounds[row])
            new: list[Array] = []
            moved = False
            for index, layer in enumerate(problem.layers):
                d = layer.thickness[row]
                wanted = np.sort(np.concatenate([base[index][:, at], places[mine][layers[mine] == index]]))
                apart = np.diff(wanted, prepend=0.0) > _CLOSE_CUTS * d
                wanted = wanted[apart & (d - wanted > _CLOSE_CUTS * d)]
                old = cuts[index][:, row]
                moved |= len(old) != len(wanted) or bool((np.abs(old - wanted) > 1e-8 * d).any())
                new.append(wanted)
            if moved:
                group = groups.setdefault(tuple(len(x) for x in new), ([], []))
                group[0].append(row)
                group[1].append(new)
    regrouped = []
    for members, lists in groups.values():
        stacked = tuple(np.stack([new[index] for new in lists], axis=1) for index in range(len(problem.layers)))
        regrouped.append((np.asarray(members), stacked))
    return regrouped


def _crossed(port: CollocatedPort, table: Table, Ta: Array, Tb: Array, theta: Array) -> tuple[np.ndarray, Array]:
    """Rows and places [m from the slice's left face] where the temperature crosses a point of the table inside the slice."""
    T, x = port.profile(Ta, Tb, theta)
    rows_found, places = [], []
    for point in range(table.T.shape[1]):
        level = table.T[:, point]
        above = level < T
        interval, row = np.nonzero(above[1:] != above[:-1])
        if not len(row):
            continue
        part = port.take(row)
        low, high = x[interval], x[interval + 1]
        falling = above[interval, row]
        for _ in range(50):
            middle = (low + high) / 2.0
            over = part.inside(Ta[row], Tb[row], theta[:, row], middle) > level[row]
            left = over == falling
            low, high = np.where(left, middle, low), np.where(left, high, middle)
        rows_found.append(row)
        places.append(part.distance((low + high) / 2.0))
    if not rows_found:
        return np.zeros(0, dtype=np.intp), np.zeros(0)
    return np.concatenate(rows_found), np.concatenate(places)


def transferred(old: Network, state: State, new: Network) -> State:
    """The same temperatures on another network of the same cases."""
    elements = old.elements
    faces: list[Array] = []
    insides: list[Array | None] = []
    # Multiples do not matter to where the insides are.
    one = np.ones_like(old.zero)

    def read(layer: int, s: Array) -> Array:
        pieces = [e for e, element in enumerate(elements) if element.layer == layer]
        T = np.zeros_like(s)
        for e in pieces:
            element = elements[e]
            port = element.port
            local = np.clip(s - element.offset, 0.0, port.d)
            theta = state.theta[e]
            if isinstance(port, CollocatedPort) and theta is not None:
                here = port.inside(state.Ta[e], state.Tb[e], theta, port.place(local))
            else:
                here = port.at(state.Ta[e], state.Tb[e], one, theta, local).T
            T = np.where(s >= element.offset, here, T)
        return T

    for element in new.elements:
        port = element.port
        start, end = element.offset, element.offset + port.d
        faces += [read(element.layer, start), read(element.layer, end)]
        if isinstance(port, CollocatedPort):
            T = np.stack([read(element.layer, start + s) for s in port.node_distances()])
            insides.append(port.map.lift(T)[0])
        else:
            insides.append(None)
    return State(np.stack(faces), insides, [x.copy() for x in state.surfaces], [x.copy() for x in state.mu])

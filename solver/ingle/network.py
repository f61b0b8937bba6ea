"""The network engine's entrance: steady states of layered bodies whose sources and conductivities depend on temperature.

    k(T) layers, sources q(T), joints, faces, side losses  →  temperatures, heats, peaks, means

Every layer is a two-port (``ports`` in closed form, ``collocation`` otherwise); the chain of them is swept inside Newton's
method (``network_sweep``, ``network_newton``) on all cases at once, started cold. Heats are Q = r^m q″ as in ``march``.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.collocation import CollocatedPort
from ingle.network_newton import Status
from ingle.network_problem import NetworkFace, NetworkLayer, NetworkProblem, Supply
from ingle.network_run import Part, plain_border_of, run
from ingle.network_trace import traced
from ingle.ports import Reading
from ingle.shapes import Array, solid_volume, volume

__all__ = [
    "CEILING", "NetworkFace", "NetworkLayer", "NetworkPeak", "NetworkProblem", "NetworkState", "Status", "Supply",
    "mean", "peak", "solve_network", "state_of", "temperature",
]  # fmt: skip

# Hotter than any solid stays solid [°C]; a rising resistivity with radiation has some steady state at any source.
CEILING = 10_000.0


@dataclass(frozen=True)
class NetworkState:
    """Solved cases; every number is NaN where ``status`` is not SOLVED.

    ``left``, ``right`` [layers × n, °C]: temperatures of each layer's faces (the left one of a solid body's first layer is its
    centre's); ``surfaces`` [2 × n, °C]: of the outermost surfaces, beyond the faces' resistances. ``Q_left``, ``Q_right``
    [layers × n]: r^m q″ rightward or outward at the layers' faces; ``made`` [layers × n]: ∫ q r^m dr, side losses taken off.
    ``imbalance`` [n]: what the faces' laws are short of, in the measure of Q, beyond the rounding of
    the temperatures in °C they are given. ``lowest`` [n, °C]. ``root_mu`` [groups × n]: a
    group's √μ (field E [V/m], or a bar's current [A]); ``totals`` [groups × n]: its Σ weight ∫ g r^m dr. ``steps`` [n]: Newton
    steps, of the last of any finer meshes. ``parts``, ``tops``: the solved networks and the peaks of their elements.
    """

    problem: NetworkProblem
    parts: tuple[Part, ...]
    tops: tuple[tuple[Reading, ...], ...]
    status: np.ndarray
    left: Array
    right: Array
    surfaces: Array
    Q_left: Array
    Q_right: Array
    made: Array
    imbalance: Array
    lowest: Array
    root_mu: Array
    totals: Array
    steps: np.ndarray


@dataclass(frozen=True)
class NetworkPeak:
    """The highest temperature ``T`` [°C], its ``layer`` (from 0) and ``place`` [m]: from a wall's left face, or a radius."""

    T: Array
    place: Array
    layer: np.ndarray


def solve_network(problem: NetworkProblem, scale: Array | None = None) -> NetworkState:
    """The steady state reached from zero source, of every case.

    ``scale`` [n] multiplies the driven sources (1 if None). Status: RUNAWAY where that state does not exist at this source;
    NO_OUTLET; FLOORED_K where a conductivity or resistivity falling linearly reaches its floor; TOO_HOT beyond ``CEILING``;
    UNRESOLVED where a layer spans hundreds of decay lengths; NOT_CONVERGED otherwise. Accurate to 1e-9 of the rise or 1e-12 of
    the temperature in kelvin. Source: Fourier's law, conservation of heat; two-ports in closed form or by Gauss collocation.
    """
    with np.errstate(all="ignore"):  # overflow and 0/0 in trials are looked for in the results
        parts = run(problem, plain_border_of(problem, scale)) if problem.has_outlet else []
        parts = traced(problem, scale, parts)
        return state_of(problem, parts)


def state_of(problem: NetworkProblem, parts: list[Part]) -> NetworkState:
    """The public state of what a run ended with."""
    n, layers, groups = len(problem), len(problem.layers), len(problem.supplies)
    status = np.full(n, Status.NOT_CONVERGED if problem.has_outlet else Status.NO_OUTLET, dtype=np.int8)
    steps = np.zeros(n, dtype=np.int8)
    left, right, Q_left, Q_right, made = (np.full((layers, n), np.nan) for _ in range(5))
    surfaces, root_mu, totals = np.full((2, n), np.nan), np.full((groups, n), np.nan), np.full((groups, n), np.nan)
    imbalance, lowest = np.full(n, np.nan), np.full(n, np.nan)
    every_top = []
    for part in parts:
        rows, state, network, zero = part.rows, part.state, part.network, part.network.zero
        elements = network.elements
        multiples = part.border.multiples(network, state)
        tops = tuple(element.port.peak(state.Ta[e], state.Tb[e], multiples[e], state.theta[e]) for e, element in enumerate(elements))
        every_top.append(tops)
        here = _judged(part, tops)
        good = here == Status.SOLVED
        status[rows], steps[rows] = here, part.steps
        Q, heats, short = _heats(part, multiples)
        kept = rows[good]
        sums = np.zeros((groups, len(rows)))
        low = np.minimum(np.min(state.Ta, axis=0), np.min(state.Tb, axis=0))
        for e, element in enumerate(elements):
            port, index = element.port, element.layer
            first = e == 0 or elements[e - 1].layer != index
            start, end = zero + state.Ta[e], zero + state.Tb[e]
            if port.solid:
                start = zero + port.at(state.Ta[e], state.Tb[e], multiples[e], state.theta[e], np.zeros_like(zero)).T
                low = np.minimum(np.where(low == state.Ta[e], state.Tb[e], low), np.minimum(start - zero, state.Tb[e]))
            if isinstance(port, CollocatedPort):
                theta = state.theta[e]
                low = np.minimum(low, port.span(theta)[0])
            if first:
                left[index, kept], Q_left[index, kept] = start[good], Q[e][good]
                made[index, kept] = 0.0
            right[index, kept], Q_right[index, kept] = end[good], Q[e + 1][good]
            made[index, kept] += heats[e][good]
            group, weight = port.source.group, port.source.weight
            if group is not None and weight is not None:
                sums[group] += weight * port.shape_sum(state.Ta[e], state.Tb[e], multiples[e], state.theta[e])
        for g in range(groups):
            root_mu[g, kept] = np.sqrt(state.mu[g][good])
            totals[g, kept] = sums[g][good]
        for side, (end_of, T) in enumerate(((network.left, state.Ta[0]), (network.right, state.Tb[-1]))):
            outermost = T if end_of is None or end_of.law is None else state.surfaces[side]
            if end_of is not None and end_of.held is not None:
                outermost = end_of.held
            elif end_of is not None and end_of.law is None:
                outermost = T + end_of.R * end_of.flux
            surfaces[side, kept] = (zero + outermost)[good]
        imbalance[kept], lowest[kept] = short[good], (zero + low)[good]
    return NetworkState(
        problem, tuple(parts), tuple(every_top), status, left, right, surfaces, Q_left, Q_right, made, imbalance, lowest, root_mu,
        totals, steps,
    )  # fmt: skip


def _judged(part: Part, tops: tuple[Reading, ...]) -> np.ndarray:
    """The part's status, with answers refused that lie on a floor or beyond the ceiling."""
    status, state = part.status.copy(), part.state
    solved = status == Status.SOLVED
    for e, (element, top) in enumerate(zip(part.network.elements, tops, strict=True)):
        port, Tb = element.port, state.Tb[e]
        low = Tb if port.solid else np.minimum(state.Ta[e], Tb)
        inside = port.span(state.theta[e])
        if inside is not None:
            low = np.minimum(low, inside[0])
        hot = top.T + part.network.zero > CEILING
        floored = ~port.conductivity_usable(low, top.T)
        if hot.any() or floored.any():
            status[solved & hot] = Status.TOO_HOT
            status[solved & floored] = Status.FLOORED_K
    return status


def _heats(part: Part, multiples: list[Array]) -> tuple[list[Array], list[Array], Array]:
    """Heats at the elements' faces, what each element makes, and what the ends' laws are short of.

    Each resistance on the way gives a heat of its own, exact but for the rounding of the temperatures at its ends, which
    matters the less the larger it is; so the heat entering is their mean, weighted by the resistances.
    """
    network, state = part.network, part.state
    through = [
        element.port.through(state.Ta[e], state.Tb[e], multiples[e], state.theta[e]) for e, element in enumerate(network.elements)
    ]
    made = [own for _, own in through]
    total = np.zeros_like(network.zero)
    weights, sums = np.zeros_like(total), np.zeros_like(total)
    exact: Array | None = total if network.left is None else None
    ends: list[tuple[Array, Array, Array | float]] = []
    for end, T, surface in ((network.left, state.Ta[0], state.surfaces[0]), (network.right, state.Tb[-1], state.surfaces[1])):
        if end is None:
            ends.append((total, total, 0.0))
            continue
        P, B, A = end.relation(T, surface)
        resistance = np.minimum(P / np.where(B > 0.0, B, 1e-300), 1e290)
        # What the rounding of a temperature in °C makes of the law's flux.
        noise = 0.0 if end.law is None else 4e-16 * B * (np.abs(surface) + np.abs(end.zero) + 273.15)
        ends.append((np.where(P > 0.0, A / np.where(P > 0.0, P, 1.0), 0.0), resistance, noise))
        if end.held is None and end.law is None and exact is None:
            exact = end.flux if end is network.left else -end.flux - _sum(made)
    for e, (Qa, own) in enumerate(through):
        element = network.elements[e]
        if not element.port.solid:
            R = element.port.resistance(state.Ta[e], state.Tb[e])
            weights, sums = weights + R, sums + R * (Qa - total)
            if e > 0 and element.joint is not None:
                sums = sums + (state.Tb[e - 1] - state.Ta[e] - element.joint * total)
                weights = weights + element.joint
        total = total + own
    left_heat, left_R, left_noise = ends[0]
    right_heat, right_R, right_noise = ends[1]
    if exact is None:
        most = np.maximum(np.maximum(left_R, right_R), 1e-290)
        scaled_left, scaled_right = left_R / most, right_R / most
        Q0 = sums / most - scaled_left * left_heat + scaled_right * (right_heat - total)
        Q0 = Q0 / (weights / most + scaled_left + scaled_right)
    else:
        Q0 = exact
    Q = [Q0]
    for own in made:
        Q.append(Q[-1] + own)
    short = np.zeros_like(Q0)
    for R, heat, here, noise in ((left_R, left_heat, -Q[0], left_noise), (right_R, right_heat, Q[-1], right_noise)):
        # A held face without a resistance takes any heat, and a centre none.
        short = np.where(R > 0.0, np.maximum(short, np.abs(heat - here) - noise), short)
    return Q, made, short


def _sum(parts: list[Array]) -> Array:
    total = parts[0]
    for x in parts[1:]:
        total = total + x
    return total


def _origin(problem: NetworkProblem, layer: int) -> Array:
    """The coordinate of a layer's left face."""
    start = np.zeros(len(problem)) if problem.inner is None else problem.inner.copy()
    for before in problem.layers[:layer]:
        start = start + before.thickness
    return start


def peak(state: NetworkState, layer: int | None = None) -> NetworkPeak:
    """The highest temperature in the body, or in one layer; of two equal ones the left. NaN where not solved."""
    n = len(state.status)
    T, place, where = np.full(n, np.nan), np.full(n, np.nan), np.zeros(n, dtype=np.intp)
    with np.errstate(all="ignore"):
        for part, tops in zip(state.parts, state.tops, strict=True):
            best = np.full(len(part.rows), -np.inf)
            spot = np.zeros(len(part.rows))
            which = np.zeros(len(part.rows), dtype=np.intp)
            for e, element in enumerate(part.network.elements):
                if layer is not None and element.layer != layer:
                    continue
                top = tops[e]
                higher = best < top.T
                best = np.where(higher, top.T, best)
                s = _origin(state.problem, element.layer)[part.rows] + element.offset + top.s
                spot = np.where(higher, s, spot)
                which = np.where(higher, element.layer, which)
            good = state.status[part.rows] == Status.SOLVED
            rows = part.rows[good]
            T[rows], place[rows], where[rows] = (part.network.zero + best)[good], spot[good], which[good]
    return NetworkPeak(T, place, where)


def temperature(state: NetworkState, layer: int, place: Array) -> Array:
    """Temperature [°C] in a layer at a distance ``place`` [m] from its left face, or from the centre; NaN outside it."""
    T = np.full(len(state.status), np.nan)
    d = state.problem.layers[layer].thickness
    slack = 1e-9 * d
    inside = (place >= -slack) & (place <= d + slack) & (state.status == Status.SOLVED)
    with np.errstate(all="ignore"):
        for part in state.parts:
            s = np.clip(place[part.rows], 0.0, d[part.rows])
            here = np.full(len(part.rows), np.nan)
            found, multiples = part.state, part.border.multiples(part.network, part.state)
            for e, element in enumerate(part.network.elements):
                if element.layer == layer:
                    local = np.clip(s - element.offset, 0.0, element.port.d)
                    T_here = element.port.at(found.Ta[e], found.Tb[e], multiples[e], found.theta[e], local).T
                    here = np.where(s >= element.offset, T_here, here)
            T[part.rows] = part.network.zero + here
    return np.where(inside, T, np.nan)


def mean(state: NetworkState, layer: int | None = None) -> Array:
    """Mean temperature over the volume of the body, or of one layer [°C]."""
    result = np.full(len(state.status), np.nan)
    problem = state.problem
    with np.errstate(all="ignore"):
        for part in state.parts:
            total, size = np.zeros(len(part.rows)), np.zeros(len(part.rows))
            multiples = part.border.multiples(part.network, part.state)
            for index, each in enumerate(problem.layers):
                if layer is not None and index != layer:
                    continue
                d, r = each.thickness[part.rows], _origin(problem, index)[part.rows]
                solid = problem.solid and index == 0
                size = size + (solid_volume(problem.shape, d) if solid else volume(problem.shape, r, d))
            for e, element in enumerate(part.network.elements):
                if layer is None or element.layer == layer:
                    state_e = part.state
                    total = total + element.port.sum(state_e.Ta[e], state_e.Tb[e], multiples[e], state_e.theta[e])
            result[part.rows] = part.network.zero + total / size
    return np.where(state.status == Status.SOLVED, result, np.nan)


def shape_sum(state: NetworkState, layer: int) -> Array:
    """∫ g r^m dr of a layer's source law g, side losses apart; NaN where not solved."""
    result = np.full(len(state.status), np.nan)
    with np.errstate(all="ignore"):
        for part in state.parts:
            total, multiples, found = np.zeros(len(part.rows)), part.border.multiples(part.network, part.state), part.state
            for e, element in enumerate(part.network.elements):
                if element.layer == layer:
                    total = total + element.port.shape_sum(found.Ta[e], found.Tb[e], multiples[e], found.theta[e])
            result[part.rows] = total
    return np.where(state.status == Status.SOLVED, result, np.nan)


def low(state: NetworkState, layer: int) -> Array:
    """The lowest temperature of a layer [°C]; NaN where not solved."""
    T = np.full(len(state.status), np.nan)
    with np.errstate(all="ignore"):
        for part in state.parts:
            least = np.full(len(part.rows), np.inf)
            multiples, found = part.border.multiples(part.network, part.state), part.state
            for e, element in enumerate(part.network.elements):
                if element.layer != layer:
                    continue
                port, start = element.port, found.Ta[e]
                if port.solid:
                    start = port.at(found.Ta[e], found.Tb[e], multiples[e], found.theta[e], np.zeros_like(start)).T
                least = np.minimum(least, np.minimum(start, found.Tb[e]))
                inside = port.span(found.theta[e])
                if inside is not None:
                    least = np.minimum(least, inside[0])
            T[part.rows] = part.network.zero + least
    return np.where(state.status == Status.SOLVED, T, np.nan)

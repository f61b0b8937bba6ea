"""The network engine's entrance: steady states of layered bodies whose sources and conductivities depend on temperature.

    k(T) layers, sources q(T), joints, faces, side losses  →  temperatures, heats, peaks, means

Every layer is a two-port (``ports`` in closed form, ``collocation`` otherwise); the chain of them is swept inside Newton's
method (``network_sweep``, ``network_newton``) on all cases at once, started cold. Heats are Q = r^m q″ as in ``march``.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from ingle.fluids import KELVIN
from ingle.network_problem import NetworkFace, NetworkLayer, NetworkProblem, Supply
from ingle.network_readings import heats_of, judged, peaks_of, supplied_of, temperatures_of
from ingle.network_run import Part, plain_border_of, run
from ingle.network_state import Status
from ingle.network_trace import traced
from ingle.ports import Reading
from ingle.shapes import Array, solid_volume, volume

__all__ = [
    "CEILING", "NetworkFace", "NetworkLayer", "NetworkPeak", "NetworkProblem", "NetworkState", "Status", "Supply",
    "mean", "peak", "solve_network", "state_of", "temperature",
]  # fmt: skip

# Hotter than any solid stays solid [°C]; a rising resistivity with radiation has some steady state at any source.
CEILING = 10_000.0
_SAME = 1e-14


@dataclass(frozen=True)
class NetworkState:
    """Solved cases; every number is NaN where ``status`` is not SOLVED. What is not asked for is not worked out.

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
    steps: np.ndarray

    @property
    def left(self) -> Array:
        """Temperatures of the layers' left faces, or centre [layers × n, °C]."""
        return self._temperatures[0]

    @property
    def right(self) -> Array:
        """Temperatures of the layers' right faces [layers × n, °C]."""
        return self._temperatures[1]

    @property
    def surfaces(self) -> Array:
        """Temperatures of the outermost surfaces [2 × n, °C]."""
        return self._temperatures[2]

    @property
    def lowest(self) -> Array:
        """The lowest temperature [n, °C]."""
        lowest: Array = self._temperatures[3][0]
        return lowest

    @property
    def Q_left(self) -> Array:
        """r^m q″ at the layers' left faces [layers × n]."""
        return self._heats[0]

    @property
    def Q_right(self) -> Array:
        """r^m q″ at the layers' right faces [layers × n]."""
        return self._heats[1]

    @property
    def made(self) -> Array:
        """∫ q r^m dr of each layer, side losses taken off [layers × n]."""
        return self._heats[2]

    @property
    def imbalance(self) -> Array:
        """What the faces' laws are short of [n]."""
        short: Array = self._heats[3][0]
        return short

    @property
    def root_mu(self) -> Array:
        """√μ of each group [groups × n]."""
        return self._supplied[0]

    @property
    def totals(self) -> Array:
        """Σ weight ∫ g r^m dr of each group [groups × n]."""
        return self._supplied[1]

    @cached_property
    def _temperatures(self) -> list[Array]:
        layers = len(self.problem.layers)
        return self._gathered((layers, layers, 2, 1), temperatures_of)

    @cached_property
    def _heats(self) -> list[Array]:
        layers = len(self.problem.layers)
        return self._gathered((layers, layers, layers, 1), heats_of)

    @cached_property
    def _supplied(self) -> list[Array]:
        groups = len(self.problem.supplies)
        return self._gathered((groups, groups), supplied_of)

    def _gathered(self, sizes: tuple[int, ...], of: Callable[[Part], list[list[Array]]]) -> list[Array]:
        """Lists of arrays of every part, put together over all cases."""
        n = len(self.status)
        found = [np.full((size, n), np.nan) for size in sizes]
        with np.errstate(all="ignore"):
            for part in self.parts:
                for mine, values in zip(found, of(part), strict=True):
                    for row, value in zip(mine, values, strict=True):
                        row[part.rows] = value
        bad = self.status != Status.SOLVED
        if np.count_nonzero(bad):
            for mine in found:
                mine[:, bad] = np.nan
        return found


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
    n = len(problem)
    status = np.full(n, Status.NOT_CONVERGED if problem.has_outlet else Status.NO_OUTLET, dtype=np.int8)
    steps = np.zeros(n, dtype=np.int8)
    every_top = []
    for part in parts:
        tops = peaks_of(part)
        every_top.append(tops)
        status[part.rows], steps[part.rows] = judged(part, tops, CEILING), part.steps
    return NetworkState(problem, tuple(parts), tuple(every_top), status, steps)


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
            best: Array | None = None
            for element, top in zip(part.network.elements, tops, strict=True):
                if layer is not None and element.layer != layer:
                    continue
                s = element.offset + top.s
                if element.layer or state.problem.inner is not None:
                    s = s + _origin(state.problem, element.layer)[part.rows]
                if best is None:
                    best, spot, which = top.T, s, np.full(len(part.rows), element.layer)
                    continue
                # Two sides of a touching joint are one temperature but for rounding.
                higher = best + _SAME * (np.abs(best) + np.abs(part.network.zero) + KELVIN) < top.T
                best, spot = np.maximum(best, top.T), np.where(higher, s, spot)
                which = np.where(higher, element.layer, which)
            if best is not None:
                T[part.rows], place[part.rows], where[part.rows] = part.network.zero + best, spot, which
    bad = state.status != Status.SOLVED
    if np.count_nonzero(bad):
        T[bad], place[bad], where[bad] = np.nan, np.nan, 0
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
            found, multiples = part.state, part.multiples
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
            multiples = part.multiples
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
            total, multiples, found = np.zeros(len(part.rows)), part.multiples, part.state
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
            multiples, found = part.multiples, part.state
            for e, element in enumerate(part.network.elements):
                if element.layer != layer:
                    continue
                port, start = element.port, found.Ta[e]
                if port.solid:
                    start = port.centre(found.Tb[e], multiples[e], found.theta[e])
                least = np.minimum(least, np.minimum(start, found.Tb[e]))
                inside = port.span(found.theta[e])
                if inside is not None:
                    least = np.minimum(least, inside[0])
            T[part.rows] = part.network.zero + least
    return np.where(state.status == Status.SOLVED, T, np.nan)

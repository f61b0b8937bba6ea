"""Whether a colder steady state may lie below the one that Newton's method found.

Newton's steps from cold stay below the lowest state where the source curves upward and the losses are linear. Elsewhere they may
step over it. Two states differ by a solution of a linear problem whose slopes are means of the true ones, so there is only one
where even the steepest source slope met on the way, with the least conductivity and the losses' slopes in the cold, is stable.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.conductivities import Conductivity, Table
from ingle.heat_sources import HeatSource, SourceLaw
from ingle.network_problem import NetworkLayer, NetworkProblem
from ingle.network_run import Part, plain_border_of, run
from ingle.network_state import Status
from ingle.shapes import Array

_BENDING = (SourceLaw.TABLE, SourceLaw.PER_TABLE, SourceLaw.PER_SLOPED, SourceLaw.ARRHENIUS)
_TABLES = (SourceLaw.TABLE, SourceLaw.PER_TABLE)


@dataclass(frozen=True)
class Strides:
    """The longest step [K] of a path, while it is below ``reach`` [K above the coldest]."""

    length: Array
    reach: Array


def strides(problem: NetworkProblem) -> Strides | None:
    """A quarter of the shortest segment of the sources' tables, but at most some forty steps; None without tables."""
    tables = [layer.source.table for layer in problem.layers if layer.source.table is not None]
    if not tables:
        return None
    shortest, reach = np.full(len(problem), np.inf), np.zeros(len(problem))
    for table in tables:
        # Rows of fewer points are padded with points that hold the last value.
        real = np.diff(table.y, axis=1) != 0.0
        gaps = np.where(real, np.diff(table.T, axis=1), np.inf)
        shortest = np.minimum(shortest, gaps.min(axis=1, initial=np.inf))
        last = np.where(real, table.T[:, 1:], -np.inf).max(axis=1, initial=-np.inf)
        reach = np.maximum(reach, last - problem.coldest)
    return Strides(np.maximum(shortest / 4.0, reach / 40.0), 1.2 * reach)


def bending(problem: NetworkProblem) -> bool:
    """Whether a source's slope changes with temperature, so that there may be several states."""
    return any(layer.source.law in _BENDING for layer in problem.layers)


def maybe_another(problem: NetworkProblem, part: Part) -> np.ndarray:
    """The cases of a part that are solved, but for which a colder state is not ruled out."""
    solved: np.ndarray = part.status == Status.SOLVED
    laws = [layer.source.law for layer in problem.layers if layer.source.group is None]
    grouped = any(layer.source.group is not None and layer.source.law in _TABLES for layer in problem.layers)
    bends = any(law in _BENDING for law in laws)
    if not (grouped or bends) or not solved.any():
        return np.zeros_like(solved)
    hot = [_hottest(part, number) for number in range(len(problem.layers))]
    if _linear_losses(problem) and not grouped:
        past = np.zeros_like(solved)
        for layer, T in zip(problem.layers, hot, strict=True):
            if layer.source.table is not None:
                past |= _first_bend(layer.source)[part.rows] < T
        solved = solved & past
    doubted = np.zeros_like(solved)
    rows = np.flatnonzero(solved)
    if grouped:
        return solved
    if len(rows):
        here = problem.take(part.rows[rows])
        steepest = _steepest(here, [T[rows] for T in hot])
        for found in run(steepest, plain_border_of(steepest, None)):
            doubted[rows[found.rows]] = found.status != Status.SOLVED
    return doubted


def _linear_losses(problem: NetworkProblem) -> bool:
    surfaces = (face.law for face in (problem.left, problem.right))
    plain = all(layer.conductivity.constant and (layer.side is None or layer.side.linear) for layer in problem.layers)
    laws = all(law is None or getattr(law, "linear", False) for law in surfaces)
    return plain and bool(laws)


def _hottest(part: Part, number: int) -> Array:
    """The highest temperature [°C] of a layer."""
    T: Array = np.full(len(part.rows), -np.inf)
    for e, element in enumerate(part.network.elements):
        if element.layer == number:
            T = np.maximum(T, np.maximum(part.state.Ta[e], part.state.Tb[e]))
            inside = element.port.span(part.state.theta[e])
            T = T if inside is None else np.maximum(T, inside[1])
    hottest: Array = part.network.zero + T
    return hottest


def _slopes(source: HeatSource) -> tuple[Array, Array]:
    """dg/dT of a table's segments at their left and right ends."""
    table = source.table
    assert table is not None
    slopes = np.diff(table.y, axis=1) / np.diff(table.T, axis=1)
    if source.law == SourceLaw.TABLE:
        return slopes, slopes
    return -slopes / (table.y[:, :-1] * table.y[:, :-1]), -slopes / (table.y[:, 1:] * table.y[:, 1:])


def _first_bend(source: HeatSource) -> Array:
    """The lowest point [°C] of a table at which a rising source begins to rise less."""
    assert source.table is not None
    none = np.zeros((len(source.table.T), 1))
    at_left, at_right = _slopes(source)
    before, after = np.hstack([none, at_right]), np.hstack([at_left, none])
    first: Array = np.where((before > 0.0) & (after < before), source.table.T, np.inf).min(axis=1)
    return first


def _steepest(problem: NetworkProblem, hot: list[Array]) -> NetworkProblem:
    """The same body with the steepest source slope and the least conductivity between the coldest and these temperatures."""
    cold, layers = problem.coldest, []
    for layer, top in zip(problem.layers, hot, strict=True):
        slope = np.maximum(layer.source.scale * _steepest_slope(layer.source, cold, top), 0.0)
        source = HeatSource(slope, SourceLaw.SLOPED, np.ones_like(cold), cold)
        k = Conductivity(_least(layer.conductivity, cold, top))
        layers.append(NetworkLayer(layer.thickness, k, source, layer.side, layer.joint))
    return NetworkProblem(
        problem.shape, tuple(layers), problem.left, problem.right, cold, problem.inner, (), problem.numbers
    )  # fmt: skip


def _steepest_slope(source: HeatSource, cold: Array, hot: Array) -> Array:
    if source.law == SourceLaw.EVEN:
        return np.zeros_like(cold)
    if source.table is not None:
        at_left, at_right = _slopes(source)
        T = source.table.T
        met = (T[:, 1:] > cold[:, None]) & (T[:, :-1] < hot[:, None])
        steepest: Array = np.where(met, np.maximum(at_left, at_right), 0.0).max(axis=1, initial=0.0)
        return steepest
    if source.law == SourceLaw.ARRHENIUS:
        assert source.activation is not None
        # E/R (1/T)² exp(−E/(R T)) is steepest at T = E/2R.
        hot = np.minimum(hot, np.maximum(source.activation / 2.0 - source.kelvin, cold))
    return np.maximum(source.at(cold)[1], source.at(hot)[1])


def _least(k: Conductivity, cold: Array, hot: Array) -> Array:
    least = np.minimum(k.at(cold), k.at(hot))
    return least if k.table is None else np.minimum(least, _least_of(k.table, cold, hot))


def _least_of(table: Table, cold: Array, hot: Array) -> Array:
    within = (cold[:, None] - table.T) * (hot[:, None] - table.T) < 0.0
    least: Array = np.where(within, table.y, np.inf).min(axis=1)
    return least

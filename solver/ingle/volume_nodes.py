"""Nodes for sums over a layer's volume, close together where its temperature changes fast and apart at the corners of k(T).

A share x from 0 to 1 counts places in a layer: even in r of a wall or solid body, in ln r of a hollow one, since a thick shell's
temperature changes most near its bore, which has little of the volume.
"""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

import numpy as np

from ingle.conductivities import Conductivity
from ingle.shapes import Array, Shape, area, depth_of_volume, path, source_path

# Between two corners the temperature is smooth; 30 nodes are good to 1e-9 of the rise where k changes eightfold in between.
_SMOOTH, _PIECE = np.polynomial.legendre.leggauss(32), np.polynomial.legendre.leggauss(30)
# A cut that is off by δ costs δ².
_HALVINGS = 24


def spot(shape: Shape, a: Array, d: Array, solid: bool, x: Array | float) -> tuple[Array, Array]:
    """The distance s from a layer's left face or centre at a share x, and r^m dr/dx there."""
    if solid or shape == Shape.WALL:
        s = d * x
        return s, d * (area(shape, s) if solid else 1.0)
    log = np.log1p(d / a)
    s = np.minimum(a * np.expm1(log * x), d)
    r = a + s
    return s, log * r * area(shape, r)


def nodes(
    shape: Shape, a: Array, d: Array, solid: bool, k: Conductivity, T0: Array, Q0: Array, q: Array
) -> Iterator[tuple[Array, Array]]:  # fmt: skip
    """Distances from the left face or centre, and the weights r^m dr of a sum over the volume.

    T0, Q0: temperature and heat at the left face or centre; q: what the layer makes per volume.
    """
    if k.table is None:
        for x, w in zip(*_SMOOTH, strict=True):
            s, dV = spot(shape, a, d, solid, (1.0 + x) / 2.0)
            yield s, (w / 2.0) * dV
        return
    edges = _edges(shape, a, d, solid, k, T0, Q0, q)
    for low, high in pairwise(edges):
        if not np.count_nonzero(high > low):
            continue
        for x, w in zip(*_PIECE, strict=True):
            s, dV = spot(shape, a, d, solid, low + (high - low) * ((1.0 + x) / 2.0))
            yield s, (w / 2.0) * (high - low) * dV


def _edges(shape: Shape, a: Array, d: Array, solid: bool, k: Conductivity, T0: Array, Q0: Array, q: Array) -> Array:
    """Shares of 0, of the places where the temperature passes a point of the table of k, and of 1, in order."""
    assert k.table is not None
    one = np.ones_like(d)
    turn = 0.0 * one
    if not solid:
        # Where heat turns, so does the temperature: each side is passed on its own.
        V = -Q0 / np.where(q == 0.0, 1.0, q)
        s = np.clip(depth_of_volume(shape, a, np.maximum(V, 0.0)), 0.0, d)
        share = s / d if shape == Shape.WALL else np.log1p(s / a) / np.log1p(d / a)
        turn = np.where((V > 0.0) & (q != 0.0) & np.isfinite(share), share, 0.0)
    levels = np.stack([k.integral(T0, k.table.T[:, point]) for point in range(k.table.T.shape[1])])

    def passed(x: Array) -> np.ndarray:
        s, _ = spot(shape, a, d, solid, x)
        fall = q * (s * s) / (2.0 * (shape + 1.0)) if solid else Q0 * path(shape, a, s) + q * source_path(shape, a, s)
        above: np.ndarray = -fall > levels
        return above

    found = [0.0 * one[None], turn[None], one[None]]
    for start, end in ((0.0 * one, turn), (turn, one)):
        low, high = start + 0.0 * levels, end + 0.0 * levels
        before = passed(low)
        for _ in range(_HALVINGS):
            middle = (low + high) / 2.0
            same = passed(middle) == before
            low, high = np.where(same, middle, low), np.where(same, high, middle)
        found.append((low + high) / 2.0)
    return np.sort(np.concatenate(found), axis=0)

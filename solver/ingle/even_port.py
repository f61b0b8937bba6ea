"""The two-port of a layer whose source does not depend on temperature: closed, for every shape and k(T)."""

from __future__ import annotations

from typing import Self

import numpy as np

from ingle.heat_sources import HeatSource
from ingle.kirchhoff import Kirchhoff
from ingle.ports import Bound, Port, PortModel, Reading, bound_port
from ingle.shapes import (
    Array,
    Shape,
    depth_of_volume,
    path,
    solid_source_path,
    solid_source_square,
    solid_volume,
    source_path,
    source_square,
    volume,
)
from ingle.volume_nodes import nodes


class EvenPort(Port):
    """θa − θb = Qa W + q D and Qb = Qa + q V, with θ = ∫ k dT and W, V, D of ``ingle.shapes``."""

    def __init__(self, shape: Shape, a: Array, d: Array, map_: Kirchhoff, source: HeatSource, solid: bool) -> None:
        self.shape, self.a, self.d, self.map, self.k, self.source, self.solid = shape, a, d, map_, map_.k, source, solid
        self.V = solid_volume(shape, d) if solid else volume(shape, a, d)
        self.D = solid_source_path(shape, d) if solid else source_path(shape, a, d)
        self.W = None if solid else path(shape, a, d)

    @property
    def floors(self) -> bool:
        """See ``Port``."""
        return self.map.floors

    def volume(self) -> Array:
        """See ``Port``."""
        return self.V

    def bound(self, mu: Array) -> Bound | None:
        """See ``Port``."""
        if not self.map.constant:
            return None
        q, k = mu * self.source.scale, self.map.at(self.d)
        made = q * self.V
        hottest = np.abs(q) * self.D / k
        if self.W is None:
            zero = np.zeros_like(q)
            return bound_port(None, zero, made, (None, None, None, zero), hottest)
        entering = -q * self.D / self.W
        return bound_port(k / self.W, entering, entering + made, (None, None, None, None), hottest)

    def model(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, border: bool) -> PortModel:
        """See ``Port``."""
        del theta
        s = self.source.scale
        q, zero = mu * s, np.zeros_like(Tb)
        if self.W is None:
            Qa = aa = ab = ba = bb = zero
            al = zero
        else:
            Qa = (self.map.between(Ta, Tb) - q * self.D) / self.W
            aa = ba = self.map.at(Ta) / self.W
            ab = bb = -self.map.at(Tb) / self.W
            al = -s * self.D / self.W
        Qb = Qa + q * self.V
        if not border:
            return PortModel(Qa, Qb, aa, ab, ba, bb)
        return PortModel(Qa, Qb, aa, ab, ba, bb, None, al, al + s * self.V, self.V, zero, zero, zero)

    def at(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, s: Array, model: PortModel | None = None) -> Reading:
        """See ``Port``."""
        del theta
        scale = self.source.scale
        if self.W is None:
            D = self.D - s * s / (2.0 * (self.shape + 1.0))
            T = self.k.end(Tb, mu * scale * D)
            if model is None:
                return Reading(T, s)
            k = self.map.at(T)
            return Reading(T, s, 0.0, self.map.at(Tb) / k, scale * D / k)
        share = path(self.shape, self.a, s) / self.W
        D = self.D * share - source_path(self.shape, self.a, s)
        # From the nearer face, so that the face's own temperature keeps its digits.
        fall = self.map.between(Ta, Tb)
        near = share <= 0.5
        T = self.k.end(np.where(near, Ta, Tb), mu * scale * D + np.where(near, -share, 1.0 - share) * fall)
        if model is None:
            return Reading(T, s)
        k = self.map.at(T)
        return Reading(T, s, (1.0 - share) * self.map.at(Ta) / k, share * self.map.at(Tb) / k, scale * D / k)

    def peak(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel | None = None) -> Reading:
        """See ``Port``."""
        q = self.source.scale * mu
        if self.W is None:
            return self.at(Ta, Tb, mu, theta, np.where(q >= 0.0, 0.0, self.d), model)
        Qa = (self.map.between(Ta, Tb) - q * self.D) / self.W
        inside = (Qa < 0.0) & (Qa + q * self.V > 0.0)
        if not np.count_nonzero(inside):
            at_left = Ta >= Tb
            left = at_left.astype(np.float64)
            return Reading(np.where(at_left, Ta, Tb), np.where(at_left, 0.0, self.d), left, 1.0 - left, 0.0)
        V = np.where(inside, -Qa / np.where(inside, q, 1.0), 0.0)
        turn = np.minimum(depth_of_volume(self.shape, self.a, V), self.d)
        return self.at(Ta, Tb, mu, theta, np.where(inside, turn, np.where(Ta >= Tb, 0.0, self.d)), model)

    def centre(self, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """See ``Port``."""
        del theta
        return self.k.end(Tb, mu * self.source.scale * self.D)

    def through(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> tuple[Array, Array]:
        """See ``Port``."""
        del theta
        q = mu * self.source.scale
        Qa = np.zeros_like(Tb) if self.W is None else (self.map.between(Ta, Tb) - q * self.D) / self.W
        return Qa, q * self.V

    def resistance(self, Ta: Array, Tb: Array) -> Array:
        """See ``Port``."""
        W = np.zeros_like(Tb) if self.W is None else self.W
        return W / self.map.at(Ta) if self.map.constant else W / np.sqrt(self.map.at(Ta) * self.map.at(Tb))

    def conductivity_usable(self, low: Array, high: Array) -> np.ndarray | None:
        """See ``Port``."""
        return self.k.usable(low, high) if self.floors else None

    def sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """See ``Port``. In closed form where k is constant, by Gauss' rule otherwise."""
        q = mu * self.source.scale
        if self.map.constant:
            k = self.map.at(Tb)
            if self.W is None:
                return self.V * Tb + q * solid_source_square(self.shape, self.d) / k
            Qa = (self.map.between(Ta, Tb) - q * self.D) / self.W
            conducted = Qa * source_path(self.shape, self.a + self.d, -self.d)
            return self.V * Ta - (conducted + q * (self.V * self.D - source_square(self.shape, self.a, self.d))) / k
        if self.W is None:
            T0, Qa = self.centre(Tb, mu, theta), np.zeros_like(Tb)
        else:
            T0, Qa = Ta, (self.map.between(Ta, Tb) - q * self.D) / self.W
        total = np.zeros_like(Tb)
        for s, dV in nodes(self.shape, self.a, self.d, self.solid, self.k, T0, Qa, q):
            total = total + dV * self.at(Ta, Tb, mu, theta, s).T
        return total

    def take(self, rows: np.ndarray) -> Self:
        """See ``Port``."""
        port = object.__new__(type(self))
        port.shape, port.solid = self.shape, self.solid
        port.a, port.d, port.V, port.D = self.a[rows], self.d[rows], self.V[rows], self.D[rows]
        port.W = None if self.W is None else self.W[rows]
        port.map, port.source = self.map.take(rows), self.source.take(rows)
        port.k = port.map.k
        return port

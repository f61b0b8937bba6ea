"""The two-port of a plane layer or bar with constant k and a source linear in temperature: closed, for sources of both signs."""

from __future__ import annotations

from typing import Self

import numpy as np

from ingle.analytic import cosine, cubic, half_tangent, sine
from ingle.heat_sources import HeatSource
from ingle.ports import Bound, Port, PortModel, Reading, bound_port
from ingle.shapes import Array


class PlanePort(Port):
    """A plane layer or bar with constant k and q = A + S T, linear in the temperature.

    T″ = −(A + S T)/k, with z = S d²/k. ``A`` and ``S`` are the source's, times μ, less the side film's. Source: the general
    solution in sin and cos (z > 0) or sinh and cosh (z < 0).
    """

    def __init__(self, d: Array, k: Array, source: HeatSource, side_fluid: Array | None, side: Array | None) -> None:
        """``side`` (P/A) h [W/(m³·K)] of a side film to ``side_fluid``."""
        self.d, self.k, self.source, self.side, self.side_fluid = d, k, source, side, side_fluid
        self.A1, self.S1 = source.linear_in_rise()

    def volume(self) -> Array:
        """See ``Port``."""
        return self.d

    def _source(self, mu: Array) -> tuple[Array, Array, Array]:
        """A, S and z."""
        A, S = mu * self.A1, mu * self.S1
        if self.side is not None and self.side_fluid is not None:
            A, S = A + self.side * self.side_fluid, S - self.side
        return A, S, S * (self.d * self.d) / self.k

    def model(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, border: bool) -> PortModel:
        """See ``Port``."""
        del theta
        d, k = self.d, self.k
        A, S, z = self._source(mu)
        G, t = 1.0 / sine(z), half_tangent(z)
        g, c = k / d * G, d * t / 2.0
        qa, qb, fall = A + S * Ta, A + S * Tb, g * (Ta - Tb)
        parts = (fall - c * qa, fall + c * qb, g - c * S, -g, g, c * S - g)
        negatives = _unstable_modes(z)
        if not border:
            return PortModel(*parts, negatives)
        dz = self.S1 * (d * d) / k
        # Derivatives serve Newton's steps alone, for which a few digits do near z = 0.
        near = np.abs(z) < 1e-4
        twice = np.where(near, 1.0, 2.0 * z)
        dt = np.where(near, 1.0 / 12.0 + z / 60.0, (1.0 - t + z * (t * t) / 4.0) / twice) * dz
        dG = np.where(near, 1.0 / 6.0 + z * (7.0 / 180.0), G * (1.0 - (1.0 - z * (t * t) / 4.0) / t) / twice) * dz
        dfall = k / d * dG * (Ta - Tb)
        al = dfall - d / 2.0 * (dt * qa + t * (self.A1 + self.S1 * Ta))
        bl = dfall + d / 2.0 * (dt * qb + t * (self.A1 + self.S1 * Tb))
        return PortModel(*parts, negatives, al, bl)

    def bound(self, mu: Array) -> Bound:
        """See ``Port``."""
        d, k = self.d, self.k
        A, S, z = self._source(mu)
        g, c = k / d / sine(z), d * half_tangent(z) / 2.0
        own, slope = c * A, c * S
        return bound_port(g, -own, own, (-slope, None, None, slope), np.abs(own) * d / k, _unstable_modes(z))

    def at(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, s: Array, model: PortModel | None = None) -> Reading:
        """T = Ta S(1 − ξ) + Tb S(ξ) + A d²/k P(ξ): S = sin(xξ)/sin x, P = 2 sin(xξ/2) sin(x(1 − ξ)/2)/[z cos(x/2)]."""
        del theta
        A, _, z = self._source(mu)
        xi = s / self.d
        eta = 1.0 - xi
        S_a, S_b, P = _share(z, eta), _share(z, xi), _hump(z, xi, eta)
        scale = self.d * self.d / self.k
        T = Ta * S_a + Tb * S_b + A * scale * P
        if model is None:
            return Reading(T, s)
        dz = self.S1 * scale
        third, G = cubic(z), 1.0 / sine(z)
        dS_a = G * (S_a * third - eta * eta * eta * cubic(z * eta * eta)) / 2.0
        dS_b = G * (S_b * third - xi * xi * xi * cubic(z * xi * xi)) / 2.0
        wa, wb = z * xi * xi / 4.0, z * eta * eta / 4.0
        dP = P * (half_tangent(z) / 8.0 - (xi * xi * cubic(wa) / sine(wa) + eta * eta * cubic(wb) / sine(wb)) / 8.0)
        slope = self.A1 * scale * P + dz * (Ta * dS_a + Tb * dS_b + A * scale * dP)
        return Reading(T, s, S_a, S_b, slope)

    def peak(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel | None = None) -> Reading:
        """Where the heat turns, if it does inside: tan(xξ)/x = p or tanh(xξ)/x = p, with p = Q/(d q) at the hotter face.

        q² + S Q²/k is the same at every place, so that q = √(q² + S Q²/k) of a face where Q = 0, and the rise over that face is
        (Q²/k)/(q + √…) without cancellation. Source: the equation multiplied by dT/dr and integrated once.
        """
        A, S, z = self._source(mu)
        if model is None:
            Qa, own = self.through(Ta, Tb, mu, theta)
            Qb = Qa + own
        else:
            Qa, Qb = model.Qa, model.Qb
        inside = (Qa < 0.0) & (Qb > 0.0)
        right = Ta < Tb
        T, Q = np.maximum(Ta, Tb), np.where(right, Qb, -Qa)
        q = np.where(inside, A + S * T, 1.0)
        square = Q * Q / self.k
        top = np.sqrt(np.maximum(q * q + S * square, 0.0))
        rise = square / (q + top)
        x = np.sqrt(np.abs(z)) + 1e-150
        xi = np.arctan2(x * Q, self.d * q) / x
        shrinks = z < 0.0
        if np.count_nonzero(shrinks):
            xi = np.where(shrinks, np.arctanh(np.clip(x * Q / (self.d * q), -1.0, 1.0 - 1e-16)) / x, xi)
        xi = np.minimum(np.maximum(xi, 0.0), 1.0)
        s = np.where(inside, np.where(right, 1.0 - xi, xi), right) * self.d
        highest = np.where(inside, T + rise, T)
        if model is None:
            found = Reading(highest, s)
        else:
            by_mu = 0.0 if model.al is None or model.bl is None else np.where(right, model.bl, model.al)
            per = np.where(inside, np.where(right, Qb, Qa) / (self.k * top), 0.0)
            kept, drop = np.where(inside, q / top, 1.0), np.where(inside, rise / top, 0.0)
            a = per * np.where(right, model.ba, model.aa) + np.where(right, 0.0, kept)
            b = per * np.where(right, model.bb, model.ab) + np.where(right, kept, 0.0)
            own = drop * (self.A1 + self.S1 * (T + rise / 2.0))
            found = Reading(highest, s, a, b, per * by_mu - own)
        # A long fin's √… is a small difference: its peak is read at its place.
        long = inside & (z < -1.0)
        if not np.count_nonzero(long):
            return found
        read = self.at(Ta, Tb, mu, theta, s, model)
        return Reading(*(np.where(long, there, here) for there, here in zip(read[:5], found[:5], strict=True)))

    def through(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> tuple[Array, Array]:
        """See ``Port``."""
        del theta
        A, S, z = self._source(mu)
        c = self.d * half_tangent(z) / 2.0
        Qa = self.k / self.d / sine(z) * (Ta - Tb) - c * (A + S * Ta)
        return Qa, c * (2.0 * A + S * (Ta + Tb))

    def resistance(self, Ta: Array, Tb: Array) -> Array:
        """See ``Port``."""
        del Ta, Tb
        return self.d / self.k

    def sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """See ``Port``."""
        del theta
        A, _, z = self._source(mu)
        M = cubic(z / 4.0) / (4.0 * cosine(z / 4.0))
        return self.d * (half_tangent(z) / 2.0 * (Ta + Tb) + A * (self.d * self.d) / self.k * M)

    def take(self, rows: np.ndarray) -> Self:
        """See ``Port``."""
        side, fluid = (None if x is None else x[rows] for x in (self.side, self.side_fluid))
        return type(self)(self.d[rows], self.k[rows], self.source.take(rows), fluid, side)


def _unstable_modes(z: Array) -> np.ndarray | None:
    """How many of the layer's own modes grow while both faces are held; None where no case has any."""
    if not np.count_nonzero(z >= np.pi * np.pi):
        return None
    return np.where(z > 0.0, np.floor(np.sqrt(np.maximum(z, 0.0)) / np.pi), 0.0).astype(np.intp)


def _share(z: Array, xi: Array) -> Array:
    """sin(xξ)/sin x or sinh(xξ)/sinh x, the latter by falling exponentials."""
    if np.count_nonzero(z >= 0.0) == z.size:
        return xi * sine(z * xi * xi) / sine(z)
    x = np.sqrt(np.maximum(-z, 1e-300))
    falling = np.exp(-x * (1.0 - xi)) * np.expm1(-2.0 * x * xi) / np.expm1(-2.0 * x)
    return np.where(z >= 0.0, xi * sine(z * xi * xi) / sine(z), falling)


def _hump(z: Array, xi: Array, eta: Array) -> Array:
    """P of ``PlanePort.at``; ξ(1 − ξ)/2 at z = 0."""
    plain = xi * eta / 2.0 * sine(z * xi * xi / 4.0) * sine(z * eta * eta / 4.0) / cosine(z / 4.0)
    if np.count_nonzero(z >= -1.0) == z.size:
        return plain
    x = np.sqrt(np.maximum(-z, 1.0))
    falling = np.expm1(-x * xi) * np.expm1(-x * eta) / (1.0 + np.exp(-x)) / (x * x)
    return np.where(z >= -1.0, plain, falling)

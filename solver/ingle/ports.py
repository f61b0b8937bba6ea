"""Two-ports of layers in closed form: the heats through a layer's faces as functions of its faces' temperatures.

Heats are Q = r^m q″, counted rightward or outward; a and b are a layer's left (inner) and right (outer) face. Temperatures
are rises over a zero of each case. Every port answers with a linear model about the present temperatures, exact in the
derivatives, to which a network of layers, joints and faces is swept together.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.analytic import cosine, cubic, cubic_slope, half_tangent, sine
from ingle.conductivities import Conductivity
from ingle.heat_sources import HeatSource
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


@dataclass(frozen=True)
class PortModel:
    """Qa and Qb with their derivatives: ``aa`` ∂Qa/∂Ta, ``ab`` ∂Qa/∂Tb, ``al`` ∂Qa/∂μ and so on.

    ``negatives`` counts the layer's own modes that are unstable while both faces are held. ``F`` = ∫ g r^m dr with its
    derivatives, where asked for. ``inner`` is what the port keeps to move its inside along with its faces.
    """

    Qa: Array
    Qb: Array
    aa: Array
    ab: Array
    ba: Array
    bb: Array
    negatives: np.ndarray
    al: Array | None = None
    bl: Array | None = None
    F: Array | None = None
    Fa: Array | None = None
    Fb: Array | None = None
    Fl: Array | None = None
    inner: tuple[Array, ...] = ()


@dataclass(frozen=True)
class Reading:
    """A temperature inside a layer: its rise ``T`` at a distance ``s`` [m] from the layer's left face or the centre.

    ``a``, ``b``, ``l``: derivatives to Ta, Tb and μ at that place. ``move``: by how much the inside's own residual will move it.
    """

    T: Array
    s: Array
    a: Array
    b: Array
    l: Array  # noqa: E741 - λ
    move: Array | float = 0.0


class Port:
    """What every layer's port can do. ``Ta`` and ``Tb`` are rises, ``mu`` multiplies the source, θ is the port's inside."""

    solid: bool = False
    d: Array
    source: HeatSource

    def start(self) -> Array | None:
        """The inside of a body that is cold throughout."""
        return None

    def model(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, border: bool) -> PortModel:
        """The linear model; with ``border`` also the derivatives to μ, and F."""
        raise NotImplementedError

    def moved(self, theta: Array | None, model: PortModel, da: Array, db: Array, dl: Array | None) -> Array | None:
        """The inside after the faces moved by da and db and μ by dl."""
        del model, da, db, dl
        return theta

    def at(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, s: Array, model: PortModel | None = None) -> Reading:
        """The temperature at s, with its derivatives if the model at these temperatures is given."""
        raise NotImplementedError

    def peak(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel | None = None) -> Reading:
        """The highest temperature in the layer, with its derivatives as ``at``."""
        raise NotImplementedError

    def typical(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel) -> Reading:
        """A temperature that any warming of the layer raises: at half depth, or a mean over nodes."""
        return self.at(Ta, Tb, mu, theta, self.d / 2.0, model)

    def sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """∫ T r^m dr over the layer."""
        raise NotImplementedError

    def through(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> tuple[Array, Array]:
        """Qa, and the layer's own net heat Qb − Qa, at a settled state."""
        model = self.model(Ta, Tb, mu, theta, False)
        return model.Qa, model.Qb - model.Qa

    def shape_sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """F = ∫ g r^m dr at a settled state."""
        F = self.model(Ta, Tb, mu, theta, True).F
        assert F is not None
        return F

    def resistance(self, Ta: Array, Tb: Array) -> Array:
        """About W/k, for weights."""
        raise NotImplementedError

    def conductivity_usable(self, low: Array, high: Array) -> np.ndarray:
        """False where k reaches its floor between two rises."""
        del high
        return np.ones(len(low), dtype=bool)

    def span(self, theta: Array | None) -> tuple[Array, Array] | None:
        """Lowest and highest rise inside, where they can lie beyond those at the faces and at the peak."""
        del theta
        return None

    def take(self, rows: np.ndarray) -> Port:
        """The port of some of the cases."""
        raise NotImplementedError


class EvenPort(Port):
    """A layer whose source does not depend on temperature; any shape and k(T).

    θa − θb = Qa W + q D and Qb = Qa + q V, with θ = ∫ k dT and W, V, D of ``ingle.shapes``.
    """

    def __init__(self, shape: Shape, a: Array, d: Array, k: Conductivity, source: HeatSource, solid: bool) -> None:
        self.shape, self.a, self.d, self.k, self.source, self.solid = shape, a, d, k, source, solid
        self.V = solid_volume(shape, d) if solid else volume(shape, a, d)
        self.D = solid_source_path(shape, d) if solid else source_path(shape, a, d)
        self.W = None if solid else path(shape, a, d)
        self.none = np.zeros(len(d), dtype=np.intp)

    def model(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, border: bool) -> PortModel:
        """See ``Port``."""
        del theta
        s = self.source.scale
        q, zero = mu * s, np.zeros_like(Tb)
        if self.W is None:
            Qa = aa = ab = ba = bb = zero
            al = zero
        else:
            Qa = (self.k.integral(Tb, Ta) - q * self.D) / self.W
            aa = ba = self.k.at(Ta) / self.W
            ab = bb = -self.k.at(Tb) / self.W
            al = -s * self.D / self.W
        Qb = Qa + q * self.V
        if not border:
            return PortModel(Qa, Qb, aa, ab, ba, bb, self.none)
        return PortModel(Qa, Qb, aa, ab, ba, bb, self.none, al, al + s * self.V, self.V, zero, zero, zero)

    def at(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, s: Array, model: PortModel | None = None) -> Reading:
        """See ``Port``."""
        del theta
        scale, none = self.source.scale, np.zeros_like(Tb)
        if self.W is None:
            D = self.D - s * s / (2.0 * (self.shape + 1.0))
            T = self.k.end(Tb, mu * scale * D)
            if model is None:
                return Reading(T, s, none, none, none)
            k = self.k.at(T)
            return Reading(T, s, none, self.k.at(Tb) / k, scale * D / k)
        share = path(self.shape, self.a, s) / self.W
        D = self.D * share - source_path(self.shape, self.a, s)
        # From the nearer face, so that the face's own temperature keeps its digits.
        fall = self.k.integral(Tb, Ta)
        near = share <= 0.5
        T = self.k.end(np.where(near, Ta, Tb), mu * scale * D + np.where(near, -share, 1.0 - share) * fall)
        k = self.k.at(T)
        return Reading(T, s, (1.0 - share) * self.k.at(Ta) / k, share * self.k.at(Tb) / k, scale * D / k)

    def peak(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel | None = None) -> Reading:
        """See ``Port``."""
        if self.W is None:
            return self.at(Ta, Tb, mu, theta, np.where(self.source.scale * mu > 0.0, 0.0, self.d), model)
        q = self.source.scale * mu
        Qa = (self.k.integral(Tb, Ta) - q * self.D) / self.W
        inside = (Qa < 0.0) & (Qa + q * self.V > 0.0)
        V = np.where(inside, -Qa / np.where(inside, q, 1.0), 0.0)
        turn = np.minimum(depth_of_volume(self.shape, self.a, V), self.d)
        return self.at(Ta, Tb, mu, theta, np.where(inside, turn, np.where(Ta >= Tb, 0.0, self.d)), model)

    def through(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> tuple[Array, Array]:
        """See ``Port``."""
        del theta
        made = mu * self.source.scale * self.V
        Qa = np.zeros_like(Tb) if self.W is None else (self.k.integral(Tb, Ta) - mu * self.source.scale * self.D) / self.W
        return Qa, made

    def resistance(self, Ta: Array, Tb: Array) -> Array:
        """See ``Port``."""
        W = np.zeros_like(Tb) if self.W is None else self.W
        return W / np.sqrt(self.k.at(Ta) * self.k.at(Tb))

    def conductivity_usable(self, low: Array, high: Array) -> np.ndarray:
        """See ``Port``."""
        return self.k.usable(low, high)

    def sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """See ``Port``. In closed form where k is constant, by Gauss' rule in r^(m + 1) or ln r otherwise."""
        q = mu * self.source.scale
        if self.k.constant:
            k = self.k.at(Tb)
            if self.W is None:
                return self.V * Tb + q * solid_source_square(self.shape, self.d) / k
            Qa = (self.k.integral(Tb, Ta) - q * self.D) / self.W
            conducted = Qa * source_path(self.shape, self.a + self.d, -self.d)
            return self.V * Ta - (conducted + q * (self.V * self.D - source_square(self.shape, self.a, self.d))) / k
        total = np.zeros_like(Tb)
        span = None if self.W is None or self.shape == Shape.WALL else np.log1p(self.d / self.a)
        for x, w in _GAUSS:
            if span is None:
                s = self.d * x
                dV = w * self.d * (s**self.shape if self.W is None else 1.0)
            else:
                s = np.minimum(self.a * np.expm1(span * x), self.d)
                dV = w * span * (self.a + s) ** (self.shape + 1.0)
            total = total + dV * self.at(Ta, Tb, mu, theta, s).T
        return total

    def take(self, rows: np.ndarray) -> EvenPort:
        """See ``Port``."""
        return EvenPort(self.shape, self.a[rows], self.d[rows], self.k.take(rows), self.source.take(rows), self.solid)


_nodes, _weights = np.polynomial.legendre.leggauss(20)
_GAUSS = [((1.0 + x) / 2.0, w / 2.0) for x, w in zip(_nodes.tolist(), _weights.tolist(), strict=True)]


class PlanePort(Port):
    """A plane layer or bar with constant k and q = A + S T, linear in the temperature.

    T″ = −(A + S T)/k, with z = S d²/k. ``A`` and ``S`` are the source's, times μ, less the side film's. Source: the general
    solution in sin and cos (z > 0) or sinh and cosh (z < 0).
    """

    def __init__(self, d: Array, k: Array, source: HeatSource, side_fluid: Array | None, side: Array | None) -> None:
        """``side`` (P/A) h [W/(m³·K)] of a side film to ``side_fluid``."""
        self.d, self.k, self.source, self.side, self.side_fluid = d, k, source, side, side_fluid
        slope = np.zeros_like(d) if source.slope is None else source.slope
        reference = np.zeros_like(d) if source.reference is None else source.reference
        self.beta, self.base = slope, 1.0 - slope * reference
        self.A1, self.S1 = source.scale * self.base, source.scale * slope
        self.none = np.zeros(len(d), dtype=np.intp)

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
        negatives = self.none
        if (z >= np.pi * np.pi).any():
            negatives = np.where(z > 0.0, np.floor(np.sqrt(np.maximum(z, 0.0)) / np.pi), 0.0).astype(np.intp)
        if not border:
            return PortModel(*parts, negatives)
        dz = self.S1 * (d * d) / k
        third, quarter = cubic(z), cosine(z / 4.0)
        dG = G * G * third / 2.0 * dz
        w = z / 4.0
        # t = 1 + z M with M = cubic(z/4)/(4 cos(x/2)); M is also the mean of P, see ``at``.
        M = cubic(w) / (4.0 * quarter)
        dM = (cubic_slope(w) / quarter + cubic(w) * sine(w) / (2.0 * quarter * quarter)) / 16.0 * dz
        dt = M * dz + z * dM
        dfall = k / d * dG * (Ta - Tb)
        al = dfall - d / 2.0 * (dt * qa + t * (self.A1 + self.S1 * Ta))
        bl = dfall + d / 2.0 * (dt * qb + t * (self.A1 + self.S1 * Tb))
        P = d * d / k
        sum_T = d * (t / 2.0 * (Ta + Tb) + A * P * M)
        dsum = d * (dt / 2.0 * (Ta + Tb) + self.A1 * P * M + A * P * dM)
        F = self.base * d + self.beta * sum_T
        Fa = self.beta * d * t / 2.0
        return PortModel(*parts, negatives, al, bl, F, Fa, Fa, self.beta * dsum)

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
            none = np.zeros_like(T)
            return Reading(T, s, none, none, none)
        dz = self.S1 * scale
        third, G = cubic(z), 1.0 / sine(z)
        dS_a = G * (S_a * third - eta * eta * eta * cubic(z * eta * eta)) / 2.0
        dS_b = G * (S_b * third - xi * xi * xi * cubic(z * xi * xi)) / 2.0
        wa, wb = z * xi * xi / 4.0, z * eta * eta / 4.0
        dP = P * (half_tangent(z) / 8.0 - (xi * xi * cubic(wa) / sine(wa) + eta * eta * cubic(wb) / sine(wb)) / 8.0)
        slope = self.A1 * scale * P + dz * (Ta * dS_a + Tb * dS_b + A * scale * dP)
        return Reading(T, s, S_a, S_b, slope)

    def peak(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel | None = None) -> Reading:
        """Where the heat turns, if it does inside: tan(xξ)/x = N/D or tanh(xξ)/x = N/D."""
        A, S, z = self._source(mu)
        heats = self.model(Ta, Tb, mu, theta, False) if model is None else model
        inside = (heats.Qa < 0.0) & (heats.Qb > 0.0)
        Ua = A + S * Ta
        half = sine(z / 4.0)
        N = (Tb - Ta) * self.k / (self.d * self.d) + Ua / 2.0 * half * half
        D = Ua * sine(z)
        x = np.sqrt(np.abs(z))
        y = np.where(x == 0.0, 1e-150, x)
        circular = np.arctan2(y * N, D) / y
        ratio = np.clip(y * N / np.where(D == 0.0, 1.0, D), -1.0, 1.0 - 1e-16)
        xi = np.where(z >= 0.0, circular, np.arctanh(ratio) / y)
        xi = np.clip(np.where(inside, xi, np.where(Ta >= Tb, 0.0, 1.0)), 0.0, 1.0)
        return self.at(Ta, Tb, mu, theta, xi * self.d, model)

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

    def take(self, rows: np.ndarray) -> PlanePort:
        """See ``Port``."""
        side, fluid = (None if x is None else x[rows] for x in (self.side, self.side_fluid))
        return PlanePort(self.d[rows], self.k[rows], self.source.take(rows), fluid, side)


def _share(z: Array, xi: Array) -> Array:
    """sin(xξ)/sin x or sinh(xξ)/sinh x, the latter by falling exponentials."""
    if (z >= 0.0).all():
        return xi * sine(z * xi * xi) / sine(z)
    x = np.sqrt(np.maximum(-z, 1e-300))
    falling = np.exp(-x * (1.0 - xi)) * np.expm1(-2.0 * x * xi) / np.expm1(-2.0 * x)
    return np.where(z >= 0.0, xi * sine(z * xi * xi) / sine(z), falling)


def _hump(z: Array, xi: Array, eta: Array) -> Array:
    """P of ``PlanePort.at``; ξ(1 − ξ)/2 at z = 0."""
    plain = xi * eta / 2.0 * sine(z * xi * xi / 4.0) * sine(z * eta * eta / 4.0) / cosine(z / 4.0)
    if (z >= -1.0).all():
        return plain
    x = np.sqrt(np.maximum(-z, 1.0))
    falling = np.expm1(-x * xi) * np.expm1(-x * eta) / (1.0 + np.exp(-x)) / (x * x)
    return np.where(z >= -1.0, plain, falling)

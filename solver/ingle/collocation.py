"""A layer's two-port by collocation, for any k(T), source and shape: spectral in the number of nodes.

Hollow and plane layers: with η = ∫ dr/(r^m W) from 0 to 1 and θ = ∫ k dT every shape obeys θ″ = −f, f = W² r^{2m} q, so one
Green matrix serves all. Solid bodies: with s = r²/R² and one matrix a shape. Nodes are Gauss points, so the heats through
the faces are twice as accurate as the inside.

Newton's method is carried out on w, the source at the nodes linearised about the present θ: w = f + σ(θ* − θ) with σ = df/dθ and
θ* = α θa + β θb + Green w. So (1 − σ Green) w = f + σ(α θa + β θb − θ), and the heats are sums of w. Arrays are nodes × cases;
sums over nodes run in one order, so that a case alone gets the same bits as among many.
"""

from __future__ import annotations

from typing import Self

import numpy as np

from ingle.collocation_readings import CollocatedReadings
from ingle.collocation_rule import added, combine, rule, weigh
from ingle.heat_sources import HeatSource, SideLoss, SourceLaw
from ingle.kirchhoff import Kirchhoff
from ingle.ports import Bound, PortModel, bound_port
from ingle.shapes import Array, Shape, path


class CollocatedPort(CollocatedReadings):
    """A layer of any shape with any k(T), source and side loss; θ at the nodes is its inside."""

    def __init__(
        self, shape: Shape, a: Array, d: Array, map_: Kirchhoff, source: HeatSource, side: SideLoss | None, solid: bool, N: int = 0
    ) -> None:
        """Without nodes (N = 0) the port knows no more than how many it needs."""
        self.shape, self.a, self.d, self.map, self.k, self.source, self.side, self.solid = (
            shape,
            a,
            d,
            map_,
            map_.k,
            source,
            side,
            solid,
        )
        m = int(shape)
        if solid:
            self.W = np.zeros_like(d)
            self.heat = 2.0 * d if m == 2 else np.full_like(d, 2.0)
        else:
            self.W = path(shape, a, d)
            self.heat = 1.0 / self.W
        linear = source.law in (SourceLaw.EVEN, SourceLaw.SLOPED) and (side is None or side.linear)
        self.linear = linear and map_.constant
        if N:
            self.set_nodes(N)

    def set_nodes(self, N: int) -> None:
        """Give the port its nodes."""
        self.N, self.rule = N, rule(N, int(self.shape) if self.solid else None)
        m, d = int(self.shape), self.d
        if self.solid:
            self.stretch = np.zeros((N, len(d))) + d * d / 4.0
        else:
            r = self._radius(self.rule.x[:, None])
            self.stretch = self.W * self.W * (r * r if m == 1 else (r * r) * (r * r)) if m else np.zeros((N, len(d))) + d * d

    def start(self) -> Array:
        """See ``Port``."""
        return np.zeros((self.N, len(self.d)))

    def _columns(self, sigma: Array, first: Array, last: Array | None) -> tuple[Array, Array]:
        """The solutions w of (1 − σ Green) w = first, σα, σβ, last, seen by ``Rule.lines``: columns × lines × cases; the matrix."""
        R, (N, n) = self.rule, first.shape
        columns = np.empty((n, N, 3 - self.solid + (last is not None)))
        columns[:, :, 0] = first.T
        slopes = sigma.T
        if self.solid:
            columns[:, :, 1] = slopes
        else:
            columns[:, :, 1] = slopes * R.alpha
            columns[:, :, 2] = slopes * R.beta
        if last is not None:
            columns[:, :, -1] = last.T
        matrix = np.empty((n, N, N))
        np.multiply(slopes[:, :, None], R.turned, out=matrix)
        matrix.reshape(n, N * N)[:, :: N + 1] += 1.0
        seen: Array = np.ascontiguousarray(np.matmul(R.lines, _solved(matrix, columns)).transpose(2, 1, 0))
        return seen, matrix

    def _unstable(self, sigma: Array, seen: Array, matrix: Array) -> np.ndarray | None:
        """How many of the layer's own modes grow while both faces are held; None where no case has any."""
        steep = np.maximum.reduce(sigma, axis=0) >= self.rule.safe
        if not np.count_nonzero(steep):
            return None
        # With both faces raised alike, a stable inside rises everywhere.
        own = seen[1, : self.N] if self.solid else seen[1, : self.N] + seen[2, : self.N]
        unstable = steep & ~(own.min(axis=0) > -1.0)
        if not np.count_nonzero(unstable):
            return None
        negatives = np.zeros(len(unstable), dtype=np.intp)
        negatives[unstable] = _count_negative(matrix[unstable])
        return negatives

    def bound(self, mu: Array) -> Bound | None:
        """See ``Port``."""
        if not self.linear:
            return None
        k, C, N = self.map.at(self.d), self.heat, self.N
        A, S = self.source.linear_in_rise()
        A, S = mu * A, mu * S
        if self.side is not None:
            loss = self.side.conductance()
            S = S - loss
            if self.side.fluid is not None:
                A = A + loss * self.side.fluid
        sigma = self.stretch * (S / k)
        seen, matrix = self._columns(sigma, self.stretch * A, None)
        negatives = self._unstable(sigma, seen, matrix)
        hottest = np.maximum.reduce(np.abs(seen[0, :N]), axis=0) / k
        if self.solid:
            made, by_b = C * seen[0, N], C * (seen[1, N] * k)
            alone = (seen[0, :N], None, (1.0 + seen[1, :N]) * k)
            return bound_port(None, np.zeros_like(k), made, (None, None, None, by_b), hottest, negatives, alone)
        from_a, from_b = self.rule.toward
        to_a, to_b, g = C * seen[:, N], C * seen[:, N + 1], C * k
        inside = (seen[0, :N], (from_a + seen[1, :N]) * k, (from_b + seen[2, :N]) * k)
        terms = (-to_a[1] * k, -to_a[2] * k, to_b[1] * k, to_b[2] * k)
        return bound_port(g, -to_a[0], to_b[0], terms, hottest, negatives, inside)

    def model(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, border: bool) -> PortModel:
        """See ``Port``. The inside is condensed: its own residual is already moved away in Qa and Qb."""
        assert theta is not None
        R, N, C = self.rule, self.N, self.heat
        T, k = self.map.read(theta)
        g, slope = self.source.at(T)
        per_mu = self.source.scale * g
        q, dq = mu * per_mu, mu * self.source.scale * slope
        if self.side is not None:
            lost, change = self.side.at(T)
            q, dq = q - lost, dq - change
        sigma = self.stretch * (dq / k)
        theta_b, kb = self.map.lift(Tb)
        if self.solid:
            lined = theta_b
        else:
            theta_a, ka = self.map.lift(Ta)
            from_a, from_b = R.toward
            lined = from_a * theta_a + from_b * theta_b
        short = lined - theta
        last = self.stretch * per_mu if border else None
        seen, matrix = self._columns(sigma, self.stretch * q + sigma * short, last)
        negatives = self._unstable(sigma, seen, matrix)
        v_short, hottest = short + seen[0, :N], np.maximum.reduce(np.abs(T), axis=0)
        if self.solid:
            v_b = (1.0 + seen[1, :N]) * kb
            zero = np.zeros_like(Tb)
            Qa, aa, ab, ba = zero, zero, zero, zero
            Qb, bb = C * seen[0, N], C * (seen[1, N] * kb)
            v_a = v_b
        else:
            v_a, v_b = (from_a + seen[1, :N]) * ka, (from_b + seen[2, :N]) * kb
            to_a, to_b = C * seen[:, N], C * seen[:, N + 1]
            fall = C * self.map.between(Ta, Tb)
            Qa, Qb = fall - to_a[0], fall + to_b[0]
            aa, ba = (C - to_a[1]) * ka, (C + to_b[1]) * ka
            ab, bb = (0.0 - C - to_a[2]) * kb, (to_b[2] - C) * kb
        if not border:
            return PortModel(Qa, Qb, aa, ab, ba, bb, negatives, inner=(v_short, v_a, v_b), hottest=hottest)
        v_l = seen[-1, :N]
        al, bl = (zero, C * seen[-1, N]) if self.solid else (-to_a[-1], to_b[-1])
        inner = (v_short, v_a, v_b, v_l)
        volume = self._volumes()
        F = weigh(volume, g)
        if self.source.group is None:
            return PortModel(Qa, Qb, aa, ab, ba, bb, negatives, al, bl, F, F, F, F, inner, hottest)
        change = volume * slope / k
        more = added(change * np.stack(inner))
        return PortModel(Qa, Qb, aa, ab, ba, bb, negatives, al, bl, F + more[0], more[1], more[2], more[3], inner, hottest)

    def moved(
        self, theta: Array | None, model: PortModel, da: Array, db: Array, dl: Array | None
    ) -> tuple[Array | None, Array | None]:
        """See ``Port``."""
        assert theta is not None
        inner = model.inner
        move = inner[0] + inner[2] * db
        if not self.solid:
            move = move + inner[1] * da
        if dl is not None:
            move = move + inner[3] * dl
        return theta + move, np.maximum.reduce(np.abs(move), axis=0) / self.map.cold

    def stiffness(self, mu: Array) -> Array:
        """x = √max|dq/dT| d/√k of the cold layer: how many decay lengths or radians it spans."""
        cold = np.zeros_like(self.d)
        m = int(self.shape)
        if self.solid or m == 0:
            reach = self.d
        else:
            b = self.a + self.d
            reach = self.W * (b if m == 1 else b * b)
        x: Array = reach * np.sqrt(np.abs(self._net(cold, mu)[1]) / self.map.at(cold))
        return x

    def unresolved(self, mu: Array, theta: Array) -> Array:
        """About how far T is off for want of nodes [K], from the last coefficients of f."""
        _, k, q = self._picture(mu, theta)
        tail = np.abs(combine(self.rule.tail, self.stretch * q))
        least = k if k.ndim == 1 else np.minimum.reduce(k, axis=0)
        worst: Array = (tail[0] + tail[1]) / (4.0 * self.N * self.N) / least
        return worst

    def take(self, rows: np.ndarray) -> Self:
        """See ``Port``."""
        port = object.__new__(type(self))
        port.shape, port.solid, port.linear = self.shape, self.solid, self.linear
        port.a, port.d, port.W, port.heat = self.a[rows], self.d[rows], self.W[rows], self.heat[rows]
        port.map, port.source = self.map.take(rows), self.source.take(rows)
        port.k = port.map.k
        port.side = None if self.side is None else self.side.take(rows)
        if self.N:
            port.N, port.rule = self.N, self.rule
            port.stretch = self.stretch[:, rows]
        return port


def _solved(matrix: Array, columns: Array) -> Array:
    """Every case's own system; NaN where it is singular."""
    try:
        return np.asarray(np.linalg.solve(matrix, columns), dtype=np.float64)
    except np.linalg.LinAlgError:
        moves: Array = np.full(columns.shape, np.nan)
        for row in range(len(matrix)):
            try:
                moves[row] = np.linalg.solve(matrix[row], columns[row])
            except np.linalg.LinAlgError:
                continue
    return moves


def _count_negative(matrix: Array) -> np.ndarray:
    """Negative eigenvalues of 1 − σ Green, whose eigenvalues are real where σ keeps its sign."""
    finite = np.asarray(np.isfinite(matrix).all(axis=(1, 2)))
    eigenvalues = np.linalg.eigvals(np.where(finite[:, None, None], matrix, 0.0))
    count = (eigenvalues.real < 0.0).sum(axis=1)
    return np.where(finite, np.maximum(count, 1), 99)

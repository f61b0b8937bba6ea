"""A layer's two-port by collocation, for any k(T), source and shape: spectral in the number of nodes.

Hollow and plane layers: with η = ∫ dr/(r^m W) from 0 to 1 and θ = ∫ k dT every shape obeys θ″ = −f, f = W² r^{2m} q, so one
Green matrix serves all. Solid bodies: with s = r²/R² and one matrix a shape. Nodes are Gauss points, so the heats through
the faces are twice as accurate as the inside. Arrays are nodes × cases, and sums over nodes run in one order, so that a case
alone gets the same bits as among many.
"""

from __future__ import annotations

import numpy as np

from ingle.collocation_rule import barycentric, combine, rule, weigh
from ingle.conductivities import Conductivity
from ingle.heat_sources import HeatSource, SideLoss
from ingle.ports import Port, PortModel, Reading
from ingle.shapes import Array, Shape, path


class CollocatedPort(Port):
    """A layer of any shape with any k(T), source and side loss; θ at the nodes is its inside."""

    def __init__(
        self, shape: Shape, a: Array, d: Array, k: Conductivity, source: HeatSource, side: SideLoss | None, solid: bool, N: int
    ) -> None:
        self.shape, self.a, self.d, self.k, self.source, self.side, self.solid = shape, a, d, k, source, side, solid
        self.rule = rule(N, int(shape) if solid else None)
        self.N = N
        x = self.rule.x[:, None]
        m = int(shape)
        self.no_source = np.zeros((N, len(d)))
        if solid:
            self.W = np.zeros_like(d)
            self.stretch = np.broadcast_to(d * d / 4.0, (N, len(d)))
            self.heat = 2.0 * d ** (m - 1.0) if m != 1 else np.full_like(d, 2.0)
        else:
            self.W = path(shape, a, d)
            r = self._radius(x)
            self.stretch = self.W * self.W * (r**2 if m == 1 else r**4 if m == 2 else 1.0) + self.no_source
            self.heat = 1.0 / self.W

    def _radius(self, eta: Array) -> Array:
        """r at η."""
        if self.shape == Shape.CYLINDER:
            return self.a * np.exp(self.W * eta)
        if self.shape == Shape.SPHERE:
            return self.a / (1.0 - self.a * self.W * eta)
        return self.a + self.d * eta

    def place(self, s: Array) -> Array:
        """η or s of the rule at a distance s."""
        if self.solid:
            return (s / self.d) ** 2
        return path(self.shape, self.a, s) / self.W

    def distance(self, x: Array) -> Array:
        """The distance at η or s of the rule."""
        if self.solid:
            return self.d * np.sqrt(x)
        if self.shape == Shape.CYLINDER:
            return np.minimum(self.a * np.expm1(self.W * x), self.d)
        if self.shape == Shape.SPHERE:
            u = self.a * self.W * x
            return np.minimum(self.a * u / (1.0 - u), self.d)
        return self.d * x

    def start(self) -> Array:
        """See ``Port``."""
        return np.zeros((self.N, len(self.d)))

    def _net(self, T: Array, mu: Array) -> tuple[Array, Array, Array]:
        """q, dq/dT and dq/dμ at the nodes."""
        g, slope = self.source.at(T)
        per_mu = self.source.scale * g
        q, dq = mu * per_mu, mu * self.source.scale * slope
        if self.side is not None:
            lost, change = self.side.at(T)
            q, dq = q - lost, dq - change
        return q, dq, per_mu

    def model(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, border: bool) -> PortModel:
        """See ``Port``. The inside is condensed: its own residual is already moved away in Qa and Qb."""
        assert theta is not None
        R, k, zero = self.rule, self.k, np.zeros_like(Tb)
        T = k.end(zero, theta)
        q, dq, per_mu = self._net(T, mu)
        f, sigma, h = self.stretch * q, self.stretch * dq / k.at(T), self.stretch * per_mu
        ka, kb = k.at(Ta), k.at(Tb)
        theta_a, theta_b = k.integral(zero, Ta), k.integral(zero, Tb)
        alpha, beta = R.alpha[:, None], R.beta[:, None]
        short = alpha * theta_a + beta * theta_b + combine(R.Green, f) - theta
        n = len(self.d)
        columns = np.empty((n, self.N, 4 if border else 3))
        columns[:, :, 0] = short.T
        columns[:, :, 1] = R.alpha
        columns[:, :, 2] = R.beta
        if border:
            columns[:, :, 3] = combine(R.Green, h).T
        matrix = R.Green * -sigma.T[:, None, :]
        matrix.reshape(n, -1)[:, :: self.N + 1] += 1.0
        moves = _solved(matrix, columns).transpose(2, 1, 0)
        v_short, v_a, v_b = moves[0], moves[1], moves[2]
        # With both faces raised alike, a stable inside rises everywhere; where no source grows it is stable anyway.
        unstable = ~((v_a + v_b).min(axis=0) > 0.0) & (sigma.max(axis=0) > 0.0)
        negatives = np.zeros(n, dtype=np.intp)
        if unstable.any():
            negatives[unstable] = _count_negative(matrix[unstable])
        C, toward_a, toward_b = self.heat, R.toward_a, R.toward_b
        moved = f + sigma * v_short
        if self.solid:
            toward_b = R.weights
            Qa = aa = ab = ba = zero
            Qb = C * weigh(toward_b, moved)
            bb = C * weigh(toward_b, sigma * v_b) * kb
        else:
            drop = k.integral(Tb, Ta)
            Qa = C * (drop - weigh(toward_a, moved))
            Qb = C * (drop + weigh(toward_b, moved))
            to_a, to_b = sigma * v_a, sigma * v_b
            aa, ba = C * (1.0 - weigh(toward_a, to_a)) * ka, C * (1.0 + weigh(toward_b, to_a)) * ka
            ab, bb = C * (-1.0 - weigh(toward_a, to_b)) * kb, C * (weigh(toward_b, to_b) - 1.0) * kb
        v_a, v_b = v_a * ka, v_b * kb
        if not border:
            return PortModel(Qa, Qb, aa, ab, ba, bb, negatives, inner=(v_short, v_a, v_b))
        v_l = moves[3]
        to_l = h + sigma * v_l
        al = zero if self.solid else -C * weigh(toward_a, to_l)
        bl = C * weigh(toward_b, to_l)
        g, slope = self.source.at(T)
        volume = self._volumes()
        change = volume * slope / k.at(T)
        F = weigh(volume, g) + weigh(change, v_short)
        return PortModel(
            Qa, Qb, aa, ab, ba, bb, negatives, al, bl,
            F, weigh(change, v_a), weigh(change, v_b), weigh(change, v_l), (v_short, v_a, v_b, v_l),
        )  # fmt: skip

    def _volumes(self) -> Array:
        """Weights of ∫ · r^m dr."""
        return self.rule.weights[:, None] * (self.heat * self.stretch)

    def moved(self, theta: Array | None, model: PortModel, da: Array, db: Array, dl: Array | None) -> Array | None:
        """See ``Port``."""
        assert theta is not None
        after = theta + model.inner[0] + model.inner[1] * da + model.inner[2] * db
        return after if dl is None else after + model.inner[3] * dl

    def _all(self, Ta: Array, Tb: Array, mu: Array, theta: Array) -> Array:
        """θ at both ends and the nodes."""
        zero = np.zeros_like(Tb)
        b = self.k.integral(zero, Tb)
        if self.solid:
            q, _, _ = self._net(self.k.end(zero, theta), mu)
            a = b + weigh(self.rule.centre, self.stretch * q)
        else:
            a = self.k.integral(zero, Ta)
        return np.concatenate([a[None], theta, b[None]])

    def _shares(self, x: Array) -> Array:
        """Weights of θ at both ends and the nodes for θ at x: barycentric."""
        return barycentric(self.rule.ends, self.rule.bary, x)

    def _read(self, Ta: Array, Tb: Array, mu: Array, theta: Array, x: Array, model: PortModel | None) -> Reading:
        shares, none = self._shares(x), np.zeros_like(Tb)
        T = self.k.end(none, weigh(shares, self._all(Ta, Tb, mu, theta)))
        if model is None:
            return Reading(T, self.distance(x), none, none, none)
        # Moves of θ at the nodes: by the inside's own residual, then a kelvin of each face, then μ where it is unknown.
        moves = [weigh(shares[1:-1], v) for v in model.inner]
        if self.solid:
            # The centre follows the source and face b.
            T_nodes = self.k.end(none, theta)
            _, dq, per_mu = self._net(T_nodes, mu)
            sigma = self.stretch * dq / self.k.at(T_nodes)
            moves = [move + shares[0] * weigh(self.rule.centre, sigma * v) for move, v in zip(moves, model.inner, strict=True)]
            moves[2] = moves[2] + (shares[0] + shares[-1]) * self.k.at(Tb)
            if len(moves) > 3:
                moves[3] = moves[3] + shares[0] * weigh(self.rule.centre, self.stretch * per_mu)
        else:
            moves[1] = moves[1] + shares[0] * self.k.at(Ta)
            moves[2] = moves[2] + shares[-1] * self.k.at(Tb)
        k = self.k.at(T)
        slope = moves[3] / k if len(moves) > 3 else none
        return Reading(T, self.distance(x), moves[1] / k, moves[2] / k, slope, moves[0] / k)

    def at(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, s: Array, model: PortModel | None = None) -> Reading:
        """See ``Port``."""
        assert theta is not None
        return self._read(Ta, Tb, mu, theta, self.place(s), model)

    def typical(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel) -> Reading:
        """See ``Port``."""
        del Ta, mu
        assert theta is not None
        none = np.zeros_like(Tb)
        T = self.k.end(none, theta)
        weights = (self.rule.weights / self.rule.weights.sum())[:, None] / self.k.at(T)
        moves = [weigh(weights, v) for v in model.inner]
        slope = moves[3] if len(moves) > 3 else none
        mean = weigh(self.rule.weights / self.rule.weights.sum(), T)
        return Reading(mean, self.d / 2.0, moves[1], moves[2], slope, moves[0])

    def peak(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel | None = None) -> Reading:
        """The stationary point of the interpolant beside its highest node, by Newton's method kept between neighbours."""
        assert theta is not None
        R = self.rule
        values = self._all(Ta, Tb, mu, theta)
        slopes = combine(R.D, values)
        bends = combine(R.D, slopes)
        n, rows = len(self.d), np.arange(len(self.d))
        j = np.argmax(values, axis=0)
        right = slopes[j, rows] > 0.0
        low = R.ends[np.where(right, j, np.maximum(j - 1, 0))]
        high = R.ends[np.where(right, np.minimum(j + 1, self.N + 1), j)]
        x = R.ends[j] + np.zeros(n)
        for _ in range(6):
            shares = self._shares(x)
            slope, bend = weigh(shares, slopes), weigh(shares, bends)
            low, high = np.where(slope > 0.0, x, low), np.where(slope > 0.0, high, x)
            step = x - slope / np.where(bend == 0.0, 1.0, bend)
            x = np.where((bend < 0.0) & (step >= low) & (step <= high), step, (low + high) / 2.0)
        # A face keeps its own digits where nothing inside is hotter.
        inside = weigh(self._shares(x), values) > values[j, rows]
        return self._read(Ta, Tb, mu, theta, np.where(inside, x, R.ends[j]), model)

    def inside(self, Ta: Array, Tb: Array, theta: Array, x: Array) -> Array:
        """The rise at a place of the rule by the interpolant alone; a solid body's centre by its nearest nodes."""
        none = np.zeros_like(Tb)
        b = self.k.integral(none, Tb)
        if not self.solid:
            values = np.concatenate([self.k.integral(none, Ta)[None], theta, b[None]])
            return self.k.end(none, weigh(self._shares(x), values))
        values = np.concatenate([theta, b[None]])
        return self.k.end(none, weigh(barycentric(self.rule.ends[1:], self.rule.bary_solid, x), values))

    def profile(self, Ta: Array, Tb: Array, theta: Array) -> tuple[Array, Array]:
        """Rises at both ends and the nodes, and the places of the rule they are at."""
        x = self.rule.ends
        T = [self.inside(Ta, Tb, theta, np.full_like(Tb, place)) for place in x.tolist()]
        return np.stack(T), x

    def node_distances(self) -> Array:
        """Distances of the nodes: nodes × cases."""
        distances: Array = self.distance(self.rule.x[:, None] + np.zeros_like(self.d))
        return distances

    def sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """See ``Port``."""
        del Ta, mu
        assert theta is not None
        return weigh(self._volumes(), self.k.end(np.zeros_like(Tb), theta))

    def through(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> tuple[Array, Array]:
        """See ``Port``."""
        assert theta is not None
        q, _, _ = self._net(self.k.end(np.zeros_like(Tb), theta), mu)
        made = weigh(self._volumes(), q)
        if self.solid:
            return np.zeros_like(Tb), made
        return self.heat * (self.k.integral(Tb, Ta) - weigh(self.rule.toward_a, self.stretch * q)), made

    def shape_sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """See ``Port``."""
        del Ta, mu
        assert theta is not None
        return weigh(self._volumes(), self.source.at(self.k.end(np.zeros_like(Tb), theta))[0])

    def resistance(self, Ta: Array, Tb: Array) -> Array:
        """See ``Port``."""
        return self.W / np.sqrt(self.k.at(Ta) * self.k.at(Tb))

    def conductivity_usable(self, low: Array, high: Array) -> np.ndarray:
        """See ``Port``."""
        held: np.ndarray = self.k.usable(low, high) & self.source.usable(low) & self.source.usable(high)
        return held

    def span(self, theta: Array | None) -> tuple[Array, Array]:
        """See ``Port``."""
        assert theta is not None
        T = self.k.end(np.zeros_like(self.d), theta)
        return T.min(axis=0), T.max(axis=0)

    def stiffness(self, mu: Array) -> Array:
        """x = √max|dq/dT| d/√k of the cold layer: how many decay lengths or radians it spans."""
        cold = np.zeros((self.N, len(self.d)))
        sigma = self.stretch * self._net(cold, mu)[1] / self.k.at(cold)
        x: Array = np.sqrt(np.abs(sigma).max(axis=0)) * (2.0 if self.solid else 1.0)
        return x

    def unresolved(self, mu: Array, theta: Array) -> Array:
        """About how far T is off for want of nodes [K], from the last coefficients of f."""
        T = self.k.end(np.zeros_like(self.d), theta)
        f = self.stretch * self._net(T, mu)[0]
        tail = np.abs(combine(self.rule.tail, f))
        worst: Array = (tail[0] + tail[1]) / (4.0 * self.N * self.N) / self.k.at(T).min(axis=0)
        return worst

    def take(self, rows: np.ndarray) -> CollocatedPort:
        """See ``Port``."""
        side = None if self.side is None else self.side.take(rows)
        return CollocatedPort(
            self.shape, self.a[rows], self.d[rows], self.k.take(rows), self.source.take(rows), side, self.solid, self.N
        )


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
    """Negative eigenvalues of 1 − Green σ, whose eigenvalues are real where σ keeps its sign."""
    finite = np.asarray(np.isfinite(matrix).all(axis=(1, 2)))
    eigenvalues = np.linalg.eigvals(np.where(finite[:, None, None], matrix, 0.0))
    count = (eigenvalues.real < 0.0).sum(axis=1)
    return np.where(finite, np.maximum(count, 1), 99)

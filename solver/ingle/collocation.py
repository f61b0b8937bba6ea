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

from ingle.collocation_rule import Rule, added, barycentric, combine, rule, weigh
from ingle.heat_sources import HeatSource, SideLoss, SourceLaw
from ingle.kirchhoff import Kirchhoff
from ingle.ports import Bound, Port, PortModel, Reading, bound_port
from ingle.shapes import Array, Shape, path, solid_volume, volume


class CollocatedPort(Port):
    """A layer of any shape with any k(T), source and side loss; θ at the nodes is its inside."""

    N: int = 0
    rule: Rule
    stretch: Array

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
        self._volume: Array | None = None
        self._held: tuple[Array, Array, Array, Array, Array] | None = None
        if N:
            self.set_nodes(N)

    def set_nodes(self, N: int) -> None:
        """Give the port its nodes."""
        self.N, self.rule = N, rule(N, int(self.shape) if self.solid else None)
        m, d = int(self.shape), self.d
        if self.solid:
            self.stretch = np.broadcast_to(d * d / 4.0, (N, len(d)))
        else:
            r = self._radius(self.rule.x[:, None])
            self.stretch = self.W * self.W * (r * r if m == 1 else (r * r) * (r * r)) if m else np.broadcast_to(d * d, (N, len(d)))

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

    @property
    def floors(self) -> bool:
        """See ``Port``."""
        return self.map.floors or self.source.law == SourceLaw.PER_SLOPED

    def volume(self) -> Array:
        """See ``Port``."""
        return solid_volume(self.shape, self.d) if self.solid else volume(self.shape, self.a, self.d)

    def start(self) -> Array:
        """See ``Port``."""
        return np.zeros((self.N, len(self.d)))

    def hold(self, mu: Array, theta: Array | None) -> None:
        """Keep T, k and q of an inside that stays as it is, for the readings that follow."""
        assert theta is not None
        T, k = self.map.read(theta)
        self._held = (theta, mu, T, k, self._net(T, mu)[0])

    def _picture(self, mu: Array, theta: Array) -> tuple[Array, Array, Array]:
        """T, k and q at the nodes."""
        if self._held is None or self._held[0] is not theta or self._held[1] is not mu:
            T, k = self.map.read(theta)
            return T, k, self._net(T, mu)[0]
        return self._held[2:]

    def _net(self, T: Array, mu: Array) -> tuple[Array, Array, Array]:
        """q, dq/dT and dq/dμ at the nodes."""
        g, slope = self.source.at(T)
        per_mu = self.source.scale * g
        q, dq = mu * per_mu, mu * self.source.scale * slope
        if self.side is not None:
            lost, change = self.side.at(T)
            q, dq = q - lost, dq - change
        return q, dq, per_mu

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

    def _volumes(self) -> Array:
        """Weights of ∫ · r^m dr."""
        if self._volume is None:
            self._volume = self.rule.weights[:, None] * (self.heat * self.stretch)
        return self._volume

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

    def _all(self, Ta: Array, Tb: Array, mu: Array, theta: Array) -> Array:
        """θ at both ends and the nodes."""
        b, _ = self.map.lift(Tb)
        if self.solid:
            _, _, q = self._picture(mu, theta)
            a = b + weigh(self.rule.centre, self.stretch * q)
        else:
            a, _ = self.map.lift(Ta)
        return np.concatenate([a[None], theta, b[None]])

    def _shares(self, x: Array) -> Array:
        """Weights of θ at both ends and the nodes for θ at x: barycentric."""
        return barycentric(self.rule.ends, self.rule.bary, x)

    def _read(self, values: Array, Tb: Array, mu: Array, x: Array, model: PortModel | None, Ta: Array) -> Reading:
        """The temperature at a place of the rule, from θ at both ends and the nodes."""
        if model is None and not np.count_nonzero((x > 0.0) & (x < 1.0)):
            return Reading(self.map.read(np.where(x == 0.0, values[0], values[-1]))[0], self.distance(x))
        shares = self._shares(x)
        T, k = self.map.read(weigh(shares, values))
        if model is None:
            return Reading(T, self.distance(x))
        # Moves of θ at the nodes: by the inside's own residual, then a kelvin of each face, then μ where it is unknown.
        moves = list(added(shares[1:-1] * np.stack(model.inner)))
        kb = self.map.at(Tb)
        if self.solid:
            # The centre follows the source and face b.
            T_nodes, k_nodes = self.map.read(values[1:-1])
            _, dq, per_mu = self._net(T_nodes, mu)
            sigma = self.stretch * (dq / k_nodes)
            at_centre = added(self.rule.centre[:, None] * (sigma * np.stack(model.inner)))
            moves = [move + shares[0] * more for move, more in zip(moves, at_centre, strict=True)]
            moves[2] = moves[2] + (shares[0] + shares[-1]) * kb
            if len(moves) > 3:
                moves[3] = moves[3] + shares[0] * weigh(self.rule.centre, self.stretch * per_mu)
            moves[1] = 0.0 * Tb
        else:
            moves[1] = moves[1] + shares[0] * self.map.at(Ta)
            moves[2] = moves[2] + shares[-1] * kb
        slope = moves[3] / k if len(moves) > 3 else 0.0
        return Reading(T, self.distance(x), moves[1] / k, moves[2] / k, slope, moves[0] / k)

    def at(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, s: Array, model: PortModel | None = None) -> Reading:
        """See ``Port``."""
        assert theta is not None
        return self._read(self._all(Ta, Tb, mu, theta), Tb, mu, self.place(s), model, Ta)

    def typical(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel) -> Reading:
        """See ``Port``."""
        del Ta, Tb, mu
        assert theta is not None
        T, k = self.map.read(theta)
        shares = (self.rule.weights / self.rule.weights.sum())[:, None]
        moves = added((shares / k) * np.stack(model.inner))
        slope = moves[3] if len(moves) > 3 else 0.0
        return Reading(added(shares * T), self.d / 2.0, 0.0 if self.solid else moves[1], moves[2], slope, moves[0])

    def peak(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel | None = None) -> Reading:
        """The stationary point of the interpolant beside its highest node, by Newton's method kept between neighbours."""
        assert theta is not None
        R = self.rule
        values = self._all(Ta, Tb, mu, theta)
        slopes = combine(R.D, values)
        j = values.argmax(axis=0)
        x = R.ends[j]
        rows = np.arange(len(j))
        right = slopes[j, rows] > 0.0
        inner = np.flatnonzero(np.where(right, j <= self.N, j > 0))
        if len(inner):
            x[inner] = self._turn(values[:, inner], slopes[:, inner], j[inner], right[inner])
        return self._read(values, Tb, mu, x, model, Ta)

    def _turn(self, values: Array, slopes: Array, j: np.ndarray, right: np.ndarray) -> Array:
        """Where the interpolant is highest, of cases whose highest node is j and whose θ rises there to the ``right``, or falls."""
        R, rows = self.rule, np.arange(len(j))
        bends = combine(R.D, slopes)
        low = R.ends[np.where(right, j, np.maximum(j - 1, 0))]
        high = R.ends[np.where(right, np.minimum(j + 1, self.N + 1), j)]
        x = R.ends[j]
        slope, bend = slopes[j, rows], bends[j, rows]
        for trial in range(5):
            if trial:
                shares = self._shares(x)
                slope, bend = weigh(shares, slopes), weigh(shares, bends)
            low, high = np.where(slope > 0.0, x, low), np.where(slope > 0.0, high, x)
            step = x - slope / np.where(bend == 0.0, 1.0, bend)
            x = np.where((bend < 0.0) & (step >= low) & (step <= high), step, (low + high) / 2.0)
        # A face keeps its own digits where nothing inside is hotter.
        turn: Array = np.where(weigh(self._shares(x), values) > values[j, rows], x, R.ends[j])
        return turn

    def inside(self, Ta: Array, Tb: Array, theta: Array, x: Array) -> Array:
        """The rise at a place of the rule by the interpolant alone; a solid body's centre by its nearest nodes."""
        b, _ = self.map.lift(Tb)
        if not self.solid:
            values = np.concatenate([self.map.lift(Ta)[0][None], theta, b[None]])
            return self.map.read(weigh(self._shares(x), values))[0]
        values = np.concatenate([theta, b[None]])
        return self.map.read(weigh(barycentric(self.rule.ends[1:], self.rule.bary_solid, x), values))[0]

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
        del Ta, Tb, mu
        assert theta is not None
        return weigh(self._volumes(), self.map.read(theta)[0])

    def centre(self, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """See ``Port``."""
        assert theta is not None
        _, _, q = self._picture(mu, theta)
        return self.map.read(self.map.lift(Tb)[0] + weigh(self.rule.centre, self.stretch * q))[0]

    def through(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> tuple[Array, Array]:
        """See ``Port``."""
        assert theta is not None
        _, _, q = self._picture(mu, theta)
        made = weigh(self._volumes(), q)
        if self.solid:
            return np.zeros_like(Tb), made
        return self.heat * (self.map.between(Ta, Tb) - weigh(self.rule.toward_a, self.stretch * q)), made

    def shape_sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """See ``Port``."""
        del Ta, Tb, mu
        assert theta is not None
        return weigh(self._volumes(), self.source.at(self.map.read(theta)[0])[0])

    def resistance(self, Ta: Array, Tb: Array) -> Array:
        """See ``Port``."""
        return self.W / self.map.at(Ta) if self.map.constant else self.W / np.sqrt(self.map.at(Ta) * self.map.at(Tb))

    def conductivity_usable(self, low: Array, high: Array) -> np.ndarray | None:
        """See ``Port``."""
        held = self.k.usable(low, high) if self.map.floors else None
        if self.source.law != SourceLaw.PER_SLOPED:
            return held
        sourced: np.ndarray = self.source.usable(low) & self.source.usable(high)
        return sourced if held is None else held & sourced

    def span(self, theta: Array | None) -> tuple[Array, Array]:
        """See ``Port``."""
        assert theta is not None
        T = self._held[2] if self._held is not None and self._held[0] is theta else self.map.read(theta)[0]
        return np.minimum.reduce(T, axis=0), np.maximum.reduce(T, axis=0)

    def apart(self, theta: Array, other: Array) -> Array:
        """See ``Port``."""
        largest: Array = np.maximum.reduce(np.abs(theta - other), axis=0)
        return largest / self.map.cold

    def reach(self, Ta: Array, Tb: Array, theta: Array | None) -> Array | None:
        """See ``Port``."""
        if self.source.law != SourceLaw.ARRHENIUS:
            return None
        coolest = Tb if self.solid else np.minimum(Ta, Tb)
        return self.source.reach(np.minimum(coolest, self.span(theta)[0]))

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
        port.shape, port.solid, port.linear, port._volume, port._held = self.shape, self.solid, self.linear, None, None
        port.a, port.d, port.W, port.heat = self.a[rows], self.d[rows], self.W[rows], self.heat[rows]
        port.map, port.source = self.map.take(rows), self.source.take(rows)
        port.k = port.map.k
        port.side = None if self.side is None else self.side.take(rows)
        if self.N:
            port.N, port.rule = self.N, self.rule
            flat = self.stretch.strides[0] == 0
            port.stretch = np.broadcast_to(self.stretch[0, rows], (self.N, len(rows))) if flat else self.stretch[:, rows]
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

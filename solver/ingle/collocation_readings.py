"""What a collocated layer tells of a settled state: temperatures anywhere, its peak, its heats and sums.

Arrays are nodes × cases; sums over nodes run in one order, so that a case alone gets the same bits as among many.
"""

from __future__ import annotations

import numpy as np

from ingle.collocation_rule import Rule, added, barycentric, combine, weigh
from ingle.conductivities import Conductivity
from ingle.heat_sources import SideLoss, SourceLaw
from ingle.kirchhoff import Kirchhoff
from ingle.ports import Port, PortModel, Reading
from ingle.shapes import Array, Shape, path, solid_volume, volume


class CollocatedReadings(Port):
    """The readings of a layer whose θ = ∫ k dT is known at its nodes and faces."""

    shape: Shape
    a: Array
    W: Array
    heat: Array
    map: Kirchhoff
    k: Conductivity
    side: SideLoss | None
    N: int = 0
    rule: Rule
    stretch: Array
    _volume: Array | None = None
    _held: tuple[Array, Array, Array, Array, Array] | None = None

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

    def _volumes(self) -> Array:
        """Weights of ∫ · r^m dr."""
        if self._volume is None:
            self._volume = self.rule.weights[:, None] * (self.heat * self.stretch)
        return self._volume

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

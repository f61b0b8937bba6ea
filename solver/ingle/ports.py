"""Two-ports of layers in closed form: the heats through a layer's faces as functions of its faces' temperatures.

Heats are Q = r^m q″, counted rightward or outward; a and b are a layer's left (inner) and right (outer) face. Temperatures
are rises over a zero of each case. Every port answers with a linear model about the present temperatures, exact in the
derivatives, to which a network of layers, joints and faces is swept together.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from ingle.heat_sources import HeatSource, SourceLaw
from ingle.shapes import Array


class PortModel(NamedTuple):
    """Qa and Qb with their derivatives: ``aa`` ∂Qa/∂Ta, ``ab`` ∂Qa/∂Tb, ``al`` ∂Qa/∂μ and so on.

    ``negatives`` counts the layer's own modes that are unstable while both faces are held, None where no case has any. ``F`` =
    ∫ g r^m dr with its derivatives, where asked for. ``inner`` is what the port keeps to move its inside along with its faces;
    ``hottest``: about the largest rise inside, without sign.
    """

    Qa: Array
    Qb: Array
    aa: Array
    ab: Array
    ba: Array
    bb: Array
    negatives: np.ndarray | None = None
    al: Array | None = None
    bl: Array | None = None
    F: Array | None = None
    Fa: Array | None = None
    Fb: Array | None = None
    Fl: Array | None = None
    inner: tuple[Array, ...] = ()
    hottest: Array | None = None


class Reading(NamedTuple):
    """A temperature inside a layer: its rise ``T`` at a distance ``s`` [m] from the layer's left face or the centre.

    ``a``, ``b``, ``l``: derivatives to Ta, Tb and μ at that place, where asked for. ``move``: by how much the inside's own
    residual will move it.
    """

    T: Array
    s: Array
    a: Array | float = 0.0
    b: Array | float = 0.0
    l: Array | float = 0.0  # noqa: E741 - λ
    move: Array | float = 0.0


class Port:
    """What every layer's port can do. ``Ta`` and ``Tb`` are rises, ``mu`` multiplies the source, θ is the port's inside."""

    solid: bool = False
    d: Array
    source: HeatSource

    @property
    def floors(self) -> bool:
        """Whether a conductivity or resistivity may fall to its floor."""
        return False

    def volume(self) -> Array:
        """∫ r^m dr."""
        raise NotImplementedError

    def start(self) -> Array | None:
        """The inside of a body that is cold throughout."""
        return None

    def model(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, border: bool) -> PortModel:
        """The linear model; with ``border`` also the derivatives to μ, and F."""
        raise NotImplementedError

    def bound(self, mu: Array) -> Bound | None:
        """The port at a multiple that stays, where it is then linear in its faces' temperatures; None where it is not."""
        del mu
        return None

    def moved(
        self, theta: Array | None, model: PortModel, da: Array, db: Array, dl: Array | None
    ) -> tuple[Array | None, Array | None]:
        """The inside after the faces moved by da and db and μ by dl, and its largest move; None where there is no inside."""
        del model, da, db, dl
        return theta, None

    def at(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, s: Array, model: PortModel | None = None) -> Reading:
        """The temperature at s, with its derivatives if the model at these temperatures is given."""
        raise NotImplementedError

    def peak(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel | None = None) -> Reading:
        """The highest temperature in the layer, with its derivatives as ``at``."""
        raise NotImplementedError

    def typical(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None, model: PortModel) -> Reading:
        """A temperature that any warming of the layer raises: at half depth, or a mean over nodes."""
        return self.at(Ta, Tb, mu, theta, self.d / 2.0, model)

    def apart(self, theta: Array, other: Array) -> Array:
        """About how far two insides are apart, in kelvin."""
        raise NotImplementedError

    def reach(self, Ta: Array, Tb: Array, theta: Array | None) -> Array | None:
        """The rise of its coolest place over which the source grows by about a factor e²; None where that is no concern."""
        del Ta, Tb, theta
        return None

    def hold(self, mu: Array, theta: Array | None) -> None:
        """Be ready for many readings of one settled state."""

    def centre(self, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """The rise at a solid body's centre."""
        return self.at(Tb, Tb, mu, theta, np.zeros_like(Tb)).T

    def sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """∫ T r^m dr over the layer."""
        raise NotImplementedError

    def through(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> tuple[Array, Array]:
        """Qa, and the layer's own net heat Qb − Qa, at a settled state."""
        raise NotImplementedError

    def shape_sum(self, Ta: Array, Tb: Array, mu: Array, theta: Array | None) -> Array:
        """F = ∫ g r^m dr at a settled state; of a law linear in T from ∫ T r^m dr."""
        if self.source.law == SourceLaw.EVEN:
            return self.volume() + np.zeros_like(Tb)
        g, slope = self.source.at(np.zeros_like(Tb))
        return g * self.volume() + slope * self.sum(Ta, Tb, mu, theta)

    def resistance(self, Ta: Array, Tb: Array) -> Array:
        """About W/k, for weights."""
        raise NotImplementedError

    def conductivity_usable(self, low: Array, high: Array) -> np.ndarray | None:
        """False where a conductivity or resistivity reaches its floor between two rises; None where it never does."""
        del low, high
        return None

    def span(self, theta: Array | None) -> tuple[Array, Array] | None:
        """Lowest and highest rise inside, where they can lie beyond those at the faces and at the peak."""
        del theta
        return None

    def take(self, rows: np.ndarray) -> Port:
        """The port of some of the cases."""
        raise NotImplementedError


@dataclass(frozen=True)
class Bound:
    """A port that is linear in its faces' temperatures, while its multiple stays: its model needs no more than a few products.

    Qa = g(Ta − Tb) + A + ``a_a`` Ta + ``a_b`` Tb and Qb likewise; the same product g(Ta − Tb) in both keeps the digits of close
    temperatures. ``g`` is None where solid. ``inside``: what θ at the nodes is made of, its own, by Ta and by Tb.
    """

    g: Array | None
    A: Array
    B: Array
    a_a: Array | None
    a_b: Array | None
    b_a: Array | None
    b_b: Array | None
    slopes: tuple[Array, Array, Array, Array]
    hottest: Array
    negatives: np.ndarray | None = None
    inside: tuple[Array, Array | None, Array] | None = None

    def model(self, Ta: Array, Tb: Array) -> PortModel:
        """The linear model at the faces' temperatures."""
        if self.g is None:
            assert self.b_b is not None
            return PortModel(self.A, self.B + self.b_b * Tb, *self.slopes, self.negatives, hottest=self.hottest)
        fall = self.g * (Ta - Tb)
        Qa, Qb = fall + self.A, fall + self.B
        if self.a_a is not None:
            Qa = Qa + self.a_a * Ta
        if self.a_b is not None:
            Qa = Qa + self.a_b * Tb
        if self.b_a is not None:
            Qb = Qb + self.b_a * Ta
        if self.b_b is not None:
            Qb = Qb + self.b_b * Tb
        return PortModel(Qa, Qb, *self.slopes, self.negatives, hottest=self.hottest)

    def settled(self, Ta: Array, Tb: Array) -> Array | None:
        """The inside at the faces' temperatures."""
        if self.inside is None:
            return None
        own, by_a, by_b = self.inside
        theta = own + by_b * Tb
        return theta if by_a is None else theta + by_a * Ta

    def take(self, rows: np.ndarray) -> Bound:
        """The port of some of the cases; its inside is told by that of all of them."""
        g, a_a, a_b, b_a, b_b = (None if x is None else x[rows] for x in (self.g, self.a_a, self.a_b, self.b_a, self.b_b))
        first, second, third, fourth = (x[rows] for x in self.slopes)
        negatives = None if self.negatives is None else self.negatives[rows]
        return Bound(g, self.A[rows], self.B[rows], a_a, a_b, b_a, b_b, (first, second, third, fourth), self.hottest[rows], negatives)


def bound_port(
    g: Array | None, A: Array, B: Array, terms: tuple[Array | None, Array | None, Array | None, Array | None], hottest: Array,
    negatives: np.ndarray | None = None, inside: tuple[Array, Array | None, Array] | None = None,
) -> Bound:  # fmt: skip
    """A bound port with its slopes: ``terms`` are what Ta and Tb add to Qa, then to Qb, beyond g(Ta − Tb)."""
    if g is None:
        assert terms[3] is not None
        zero = np.zeros_like(A)
        slopes = (zero, zero, zero, terms[3])
    else:
        parts = [part if x is None else part + x for part, x in zip((g, -g, g, -g), terms, strict=True)]
        slopes = (parts[0], parts[1], parts[2], parts[3])
    return Bound(g, A, B, *terms, slopes, hottest, negatives, inside)

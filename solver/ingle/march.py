"""The march: outward from the left face or the centre, layer by layer, until the right face's law is met.

Carried outward are the temperature, as a rise over one sink's temperature so that small rises keep their digits, and the
heat Q = r^m q″, with their derivatives to the one unknown u. The unknown is the rise of the outermost left surface (film,
radiation, flux, centre) or the heat entering there (held). The residual of the right face's law is monotone in u, so its
root is unique and easily bracketed. With constant conductivity and linear faces it is linear, and one Newton step from
zero is exact; otherwise Newton's method is kept inside the bracket, all cases at once, those that are done dropped.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.cases import Cases, FaceKind, Rows, Structure, take
from ingle.conductivities import Conductivity
from ingle.fluids import KELVIN
from ingle.shapes import Array, Shape, area, path, solid_source_path, solid_volume, source_path, volume
from ingle.surfaces import Surface, sink_of, surface

MOST_STEPS = 120


@dataclass(frozen=True)
class LayerSteps:
    """A layer from a to b: thickness d, V, W and D of ``ingle.shapes`` (W None where solid), k, and the joint beyond it.

    ``a`` and ``b`` are places: from the left face of a wall, else radii. ``joint`` is R/r^m [m²·K/W over r^m] or None.
    """

    a: Array
    d: Array
    b: Array
    V: Array
    W: Array | None
    D: Array
    k: Array | Conductivity
    joint: Array | None

    def take(self, rows: Rows) -> LayerSteps:
        """The same layer for some of the cases."""
        return take(self, rows)


@dataclass(frozen=True)
class Problem:
    """Cases of one structure ready to be marched; ``area_left`` and ``area_right`` are r^m of the body's faces."""

    structure: Structure
    layers: tuple[LayerSteps, ...]
    left: Surface
    right: Surface
    sink: Array
    area_left: Array
    area_right: Array

    @property
    def linear(self) -> bool:
        """Whether the residual is linear in the unknown."""
        kinds = (self.structure.left, self.structure.right)
        return FaceKind.SURFACE not in kinds and all(isinstance(layer.k, np.ndarray) for layer in self.layers)

    def take(self, rows: Rows) -> Problem:
        """Some of the cases."""
        return take(self, rows)


@dataclass(frozen=True)
class Ends:
    """Rises and heats at both ends of a layer."""

    T0: Array
    Q0: Array
    T1: Array
    Q1: Array

    def take(self, rows: Rows) -> Ends:
        """The same layer for some of the cases."""
        return take(self, rows)


@dataclass(frozen=True)
class State:
    """The steady state of a group: temperatures are ``sink`` + rise [°C], heats are r^m q″ outward, a layer after another.

    ``imbalance`` is what the right face's law is short of, as heat in the same measure.
    """

    problem: Problem
    q: tuple[Array, ...]
    u: Array
    ends: tuple[Ends, ...]
    imbalance: Array

    @property
    def sink(self) -> Array:
        """What rises are counted from, °C."""
        return self.problem.sink

    @property
    def rise_left(self) -> Array:
        """Rise of the body's left face, or centre."""
        return self.ends[0].T0

    @property
    def rise_right(self) -> Array:
        """Rise of the body's right face."""
        return self.ends[-1].T1

    @property
    def Q_left(self) -> Array:
        """Heat entering at the left face."""
        return self.ends[0].Q0

    @property
    def Q_right(self) -> Array:
        """Heat leaving at the right face."""
        return self.ends[-1].Q1


def problem_of(cases: Cases, structure: Structure) -> Problem:
    """Integrals and laws that do not depend on the sources."""
    shape, zero = structure.shape, np.zeros(len(cases))
    left_sink, right_sink = sink_of(cases.left, structure.left), sink_of(cases.right, structure.right)
    sink = left_sink if left_sink is not None else (right_sink if right_sink is not None else zero)
    layers: list[LayerSteps] = []
    place = zero if shape == Shape.WALL or cases.inner is None or structure.solid else cases.inner
    for number, layer in enumerate(cases.layers):
        a, d = place, layer.thickness
        place = a + d
        R = cases.joints[number] if number < len(cases.joints) else None
        joint = None if R is None else np.where(np.isnan(R), 0.0, R) / area(shape, place)
        k = layer.conductivity
        k = k.k0 if isinstance(k, Conductivity) and k.constant and k.k0 is not None else k
        if structure.solid and number == 0:
            layers.append(LayerSteps(a, d, place, solid_volume(shape, d), None, solid_source_path(shape, d), k, joint))
        else:
            layers.append(LayerSteps(a, d, place, volume(shape, a, d), path(shape, a, d), source_path(shape, a, d), k, joint))
    ones = zero + 1.0
    return Problem(
        structure, tuple(layers), surface(cases.left, structure.left, sink), surface(cases.right, structure.right, sink), sink,
        ones * area(shape, layers[0].a), ones * area(shape, place),
    )  # fmt: skip


def start(problem: Problem, u: Array) -> tuple[Array, Array, Array, Array]:
    """T₀, Q₀ and their derivatives to u at the body's left face."""
    kind, A, R = problem.structure.left, problem.area_left, problem.left.resistance
    zero = np.zeros_like(u)
    if kind == FaceKind.HELD:
        over = zero if R is None else R / A
        return -over * u, u, -over, zero + 1.0
    if kind == FaceKind.FLUX:
        flux = problem.left.flux
        return u, zero if flux is None or problem.structure.solid else A * flux, zero + 1.0, zero
    phi, slope = problem.left.leaving(u)
    if R is None:
        return u, -A * phi, zero + 1.0, -A * slope
    return u + R * phi, -A * phi, 1.0 + R * slope, -A * slope


Tangent = tuple[Array, Array]


def across(layer: LayerSteps, sink: Array, T: Array, Q: Array, q: Array) -> tuple[Array, Array]:
    """T₁ and Q₁ beyond a layer: ∫k dT = −(Q₀W + qD), Q₁ = Q₀ + qV."""
    fall = q * layer.D if layer.W is None else Q * layer.W + q * layer.D
    if isinstance(layer.k, Conductivity):
        T0 = sink + T
        return T + (layer.k.end(T0, -fall) - T0), Q + q * layer.V
    return T - fall / layer.k, Q + q * layer.V


def carried(layer: LayerSteps, sink: Array, ends: Ends, tangent: Tangent, more: Array | float = 0.0) -> Tangent:
    """A tangent (dT, dQ) beyond a layer: k₁dT₁ = k₀dT₀ − dQ₀W − dq D, dQ₁ = dQ₀ + dq V, with dq = ``more``."""
    dT, dQ = tangent
    dI = more * layer.D if layer.W is None else dQ * layer.W + more * layer.D
    if isinstance(layer.k, Conductivity):
        return (layer.k.at(sink + ends.T0) * dT - dI) / layer.k.at(sink + ends.T1), dQ + more * layer.V
    return dT - dI / layer.k, dQ + more * layer.V


def beyond(layer: LayerSteps, T: Array, Q: Array) -> Array:
    """The temperature on the far side of the joint beyond a layer."""
    return T if layer.joint is None else T - layer.joint * Q


def finish(problem: Problem, T: Array, Q: Array, tangents: list[tuple[Array, Array]]) -> tuple[Array, list[Array]]:
    """The residual of the right face's law and its derivatives along tangents (dT, dQ)."""
    kind, A, R = problem.structure.right, problem.area_right, problem.right.resistance
    if kind == FaceKind.FLUX:
        flux = problem.right.flux
        return (Q if flux is None else Q + A * flux), [dQ for _, dQ in tangents]
    Ts = T if R is None else T - R * Q / A
    dTs = [dT if R is None else dT - R * dQ / A for dT, dQ in tangents]
    if kind == FaceKind.HELD:
        assert problem.right.held is not None
        return Ts - problem.right.held, dTs
    phi, slope = problem.right.leaving(Ts)
    return Q - A * phi, [dQ - A * slope * dT for (_, dQ), dT in zip(tangents, dTs, strict=True)]


@dataclass(frozen=True)
class _Trail:
    ends: tuple[Ends, ...]
    residual: Array
    slope: Array
    tangent: Tangent


def _march(problem: Problem, q: tuple[Array, ...], u: Array) -> _Trail:
    T, Q, dT, dQ = start(problem, u)
    ends: list[Ends] = []
    for layer, source in zip(problem.layers, q, strict=True):
        T1, Q1 = across(layer, problem.sink, T, Q, source)
        ends.append(Ends(T, Q, T1, Q1))
        dT, dQ = carried(layer, problem.sink, ends[-1], (dT, dQ))
        T, Q, dT = beyond(layer, T1, Q1), Q1, beyond(layer, dT, dQ)
    residual, [slope] = finish(problem, T, Q, [(dT, dQ)])
    return _Trail(tuple(ends), residual, slope, (dT, dQ))


def solve(problem: Problem, q: tuple[Array, ...], guess: Array | None = None) -> State:
    """The steady state for sources q [W/m³], one array a layer. ``guess`` is an unknown to begin from."""
    zero = np.zeros_like(problem.sink)
    if not problem.structure.settles:
        trail = _march(problem, q, zero)
        return State(problem, q, zero, trail.ends, zero)
    if problem.linear:
        trail = _march(problem, q, zero)
        u = -trail.residual / trail.slope
    else:
        u = _root(problem, q, zero if guess is None else guess)
    trail = _march(problem, q, u)
    ends = trail.ends
    if problem.structure.right == FaceKind.HELD:  # the face is where it is held, not a rounding away
        held, R = problem.right.held, problem.right.resistance
        assert held is not None
        last = ends[-1]
        exact = held
        if R is not None:
            over = R / problem.area_right
            # Beyond a resistance larger than the body's the heat is the small difference, and the march's own temperature the better.
            exact = np.where(2.0 * over > _body_resistance(problem), last.T1, held + over * last.Q1)
        ends = (*ends[:-1], Ends(last.T0, last.Q0, exact, last.Q1))
    elif problem.structure.right == FaceKind.FILM:
        ends = (*ends[:-1], _by_its_film(problem, ends[-1]))
    return State(problem, q, u, ends, _as_heat(problem, trail))


def _by_its_film(problem: Problem, last: Ends) -> Ends:
    """The right end by its film's law where the body resists more than the film: the march's rise is then a small difference."""
    side, A = problem.right, problem.area_right
    assert side.film is not None
    assert side.fluid is not None
    flux = 0.0 if side.flux is None else A * side.flux
    T = side.fluid + (last.Q1 + flux) / (A * side.film)
    if side.resistance is not None:
        T = T + side.resistance * last.Q1 / A
    return Ends(last.T0, last.Q0, np.where(A * side.film * _body_resistance(problem) > 1.0, T, last.T1), last.Q1)


def _body_resistance(problem: Problem) -> Array:
    """Roughly what the body resists, in the measure of Q: W/k, or D/(kV) from a solid centre."""
    R = np.zeros_like(problem.sink)
    for layer in problem.layers:
        R = R + (layer.D / layer.V if layer.W is None else layer.W) / _k_of(layer, problem.sink)
        R = R if layer.joint is None else R + layer.joint
    for side, A in ((problem.left, problem.area_left), (problem.right, problem.area_right)):
        if side.resistance is not None:
            R = R + np.where(A > 0.0, side.resistance / np.where(A > 0.0, A, 1.0), 0.0)
    return R


def _root(problem: Problem, q: tuple[Array, ...], u: Array) -> Array:
    """Newton's method inside a bracket that closes; bisection (in kelvin, by the geometric mean) where it is slow."""
    u = u.copy()
    kind = problem.structure.left
    rising = (kind == FaceKind.HELD) != (problem.structure.right == FaceKind.HELD)
    sign = 1.0 if rising else -1.0
    of_heat = kind == FaceKind.HELD
    coldest = np.full_like(u, -np.inf) if of_heat else -(problem.sink + KELVIN)
    low, high = coldest.copy(), np.full_like(u, np.inf)
    before = np.full_like(u, np.inf)
    rows, part, sources = np.arange(len(u)), problem, q
    for _ in range(MOST_STEPS):
        trail = _march(part, sources, u[rows])
        g, slope, here = sign * trail.residual, np.abs(trail.slope), u[rows]
        low[rows] = np.where(g < 0.0, np.maximum(low[rows], here), low[rows])
        high[rows] = np.where(g > 0.0, np.minimum(high[rows], here), high[rows])
        step = -g / slope
        new = here + step
        lo, hi = low[rows], high[rows]
        middle = _middle(lo, hi, coldest[rows], of_heat)
        slow = (np.abs(g) > 0.5 * np.abs(before[rows])) & np.isfinite(middle)
        outside = ~((new > lo) & (new < hi)) & np.isfinite(middle)
        settled = np.abs(step) <= 1e-11 * np.abs(here)
        settled |= (g == 0.0) | ~np.isfinite(g)
        new = np.where(settled, np.where(np.isfinite(step), here + step, here), np.where(slow | outside, middle, new))
        before[rows] = np.abs(g)
        u[rows] = new
        if settled.all():
            break
        if settled.any():
            keep = np.flatnonzero(~settled)
            rows, part, sources = rows[keep], part.take(keep), tuple(s[keep] for s in sources)
    return u


def _middle(low: Array, high: Array, coldest: Array, of_heat: bool) -> Array:
    """A point between the ends of a bracket; NaN or infinite while it is open."""
    if of_heat:
        return (low + high) / 2.0
    # Rises span many decades: halve the logarithm of the height above the coldest possible.
    floor = 1e-3
    lo, hi = np.maximum(low - coldest, floor), np.maximum(high - coldest, floor)
    return np.where(np.isfinite(high), coldest + np.sqrt(lo * hi), np.nan)


def _as_heat(problem: Problem, trail: _Trail) -> Array:
    """The residual as heat: a temperature the far face is short of, over the resistances on the way."""
    kind = problem.structure.right
    if kind == FaceKind.FLUX:
        return trail.residual
    dT, dQ = trail.tangent
    R = np.where(dQ != 0.0, -dT / np.where(dQ != 0.0, dQ, 1.0), np.inf)
    R = np.where(np.isfinite(R), R, _body_resistance(problem))
    if kind == FaceKind.HELD:
        return trail.residual / R
    G = np.abs((trail.slope - dQ) / np.where(dT != 0.0, dT, 1.0))
    return trail.residual / (1.0 + G * R)


def _k_of(layer: LayerSteps, T: Array) -> Array:
    return layer.k.at(T) if isinstance(layer.k, Conductivity) else layer.k

"""Steady states by another method than the solver's: Gauss collocation of T and Q themselves, all of a body at once.

With Q = r^m q″ outward, T(r) = T₀ − ∫Q/(k r^m) dr and Q(r) = Q₀ + ∫r^m q dr, each joint a drop R Q/r^m. Both integrals are taken
exactly of the polynomials through ten Gauss points an element; Newton's method has T at all points, T₀ and Q₀ as its unknowns.
Sources are turned up from nothing in steps, so that the state reached from cold is found. Elements end where a text table turns.
Source of the method: collocation at Gauss points (Ascher, Mattheij & Russell, SIAM 1995). Nothing here knows of headings.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from numpy.polynomial import legendre

STAGES = 10
Pairs = Callable[[np.ndarray], tuple[np.ndarray, np.ndarray]]


def _rule() -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Gauss points on 0 … 1, their weights, and the integrals from 0 to each point of each point's Lagrange polynomial."""
    x, w = legendre.leggauss(STAGES)
    # The Lagrange polynomials in Legendre ones: their coefficients are w_j P_n(x_j) (2n + 1)/2.
    V = legendre.legvander(x, STAGES)
    upto = np.empty((STAGES, STAGES))
    upto[:, 0] = x + 1.0
    for n in range(1, STAGES):
        upto[:, n] = (V[:, n + 1] - V[:, n - 1]) / (2 * n + 1)
    coefficients = V[:, :STAGES] * w[:, None] * (2 * np.arange(STAGES) + 1) / 2.0
    return (x + 1.0) / 2.0, w / 2.0, upto @ coefficients.T / 2.0


C, W, A = _rule()


@dataclass(frozen=True)
class Property:
    """A number y₀[1 + slope (T − reference)], or straight between points and held beyond them."""

    y0: float = 0.0
    slope: float = 0.0
    reference: float = 20.0
    points: tuple[tuple[float, float], ...] = ()

    def __call__(self, T: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        if not self.points:
            return self.y0 * (1.0 + self.slope * (T - self.reference)), np.full_like(T, self.y0 * self.slope)
        x, y = np.array(self.points).T
        slopes = np.concatenate([[0.0], np.diff(y) / np.diff(x), [0.0]])
        return np.interp(T, x, y), slopes[np.searchsorted(x, T)]

    def text(self) -> str:
        """As a text table."""
        return "; ".join(f"{x!r}:{y!r}" for x, y in self.points)


@dataclass(frozen=True)
class Source:
    """q = c a² f(T), f the ``law`` or one over it: a is ``known``, or a ∫f r^m dr is the ``total``."""

    law: Property
    c: float = 1.0
    known: float | None = 1.0
    total: float | None = None
    inverse: bool = False

    def f(self, T: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        y, slope = self.law(T)
        return (1.0 / y, -slope / (y * y)) if self.inverse else (y, slope)


@dataclass(frozen=True)
class Stratum:
    """One layer, and the area resistance of the joint beyond it. ``side``: heat lost per volume, with its derivative."""

    d: float
    k: Property
    source: Source
    joint: float = 0.0
    side: Pairs | None = None


@dataclass(frozen=True)
class Rim:
    """A face: held, or the flux its law takes at its outermost surface; ``contact``: heat set free there per area and a²."""

    held: float | None = None
    law: Pairs | None = None
    resistance: float = 0.0
    contact: float = 0.0


@dataclass(frozen=True)
class Bulk:
    """A body of shape m from the place a on; with m > 0 and a = 0 it is solid."""

    m: int
    a: float
    layers: tuple[Stratum, ...]
    left: Rim
    right: Rim
    coldest: float


@dataclass
class Found:
    """Temperatures, r^m q″ at both faces (contacts not in it), heat made and lost by the sides per measure, a and F by layers."""

    peak: float
    left: float
    right: float
    means: list[float]
    heat_left: float
    heat_right: float
    made: float
    side: float
    amplitude: list[float]
    F: list[float]
    place: np.ndarray = field(repr=False)
    T: np.ndarray = field(repr=False)


class Mesh:
    """Points, weights and the integrals up to each point."""

    def __init__(self, bulk: Bulk, cuts: list[np.ndarray]) -> None:
        starts, widths, owner, place = [], [], [], bulk.a
        for i, (layer, inside) in enumerate(zip(bulk.layers, cuts, strict=True)):
            ends = np.concatenate([[0.0], inside, [layer.d]]) + place
            starts += ends[:-1].tolist()
            widths += np.diff(ends).tolist()
            owner += [i] * (len(ends) - 1)
            place += layer.d
        h, self.starts, self.owner = np.array(widths), np.array(starts), np.repeat(owner, STAGES)
        n = len(h) * STAGES
        self.h, self.end = h, place
        self.r = (self.starts[:, None] + h[:, None] * C).ravel()
        self.w = (h[:, None] * W).ravel()
        before = np.repeat(np.arange(len(h)), STAGES)
        self.B = np.where(before[:, None] > before[None, :], self.w[None, :], 0.0)
        for e in range(len(h)):
            rows = slice(e * STAGES, (e + 1) * STAGES)
            self.B[rows, rows] = h[e] * A
        self.measure = self.r**bulk.m
        # How much of the heat at each joint drops before each point: rows of the last layer's end besides.
        self.drops = np.zeros((n + 1, n + 1))  # of Q₀ (last column) and r^m q
        place = bulk.a
        for i, layer in enumerate(bulk.layers[:-1]):
            place += layer.d
            later = np.append(self.owner > i, True)
            passed = np.append(np.where(self.owner <= i, self.w, 0.0), 1.0)
            self.drops += layer.joint / place**bulk.m * later[:, None] * passed[None, :]


class Newton:
    """One body on one mesh at one multiple of its sources."""

    def __init__(self, bulk: Bulk, mesh: Mesh) -> None:
        self.bulk, self.mesh, self.n = bulk, mesh, len(mesh.r)

    def sources(self, T: np.ndarray, scale: float) -> tuple[np.ndarray, np.ndarray, list[float], list[float], list[np.ndarray]]:
        """q, its derivatives to all T, a and F of each layer, and the derivatives of a²."""
        mesh, n = self.mesh, self.n
        q, dq = np.zeros(n), np.zeros((n, n))
        amplitude, sums, changes = [], [], []
        for i, layer in enumerate(self.bulk.layers):
            mine = np.flatnonzero(mesh.owner == i)
            f, slope = layer.source.f(T[mine])
            weight = mesh.w[mine] * mesh.measure[mine]
            F = float(weight @ f)
            source, change = layer.source, np.zeros(n)
            if source.total is None:
                assert source.known is not None
                square = scale * source.known**2
            else:
                square = scale * (source.total / F) ** 2
                change[mine] = -2.0 * square / F * slope * weight
            q[mine] = source.c * square * f
            dq[mine] = source.c * f[:, None] * change
            dq[mine, mine] += source.c * square * slope
            if layer.side is not None:
                lost, more = layer.side(T[mine])
                q[mine] -= lost
                dq[mine, mine] -= more
            amplitude.append(float(np.sqrt(square)))
            sums.append(F)
            changes.append(change)
        return q, dq, amplitude, sums, changes

    def residual(self, x: np.ndarray, scale: float) -> tuple[np.ndarray, np.ndarray]:
        """Of T at all points, T₀ and Q₀: what is not met, and its derivatives."""
        bulk, mesh, n = self.bulk, self.mesh, self.n
        T, T0, Q0 = x[:n], x[n], x[n + 1]
        q, dq, amplitude, _, changes = self.sources(T, scale)
        k, dk = np.empty(n), np.empty(n)
        for i, layer in enumerate(bulk.layers):
            mine = mesh.owner == i
            k[mine], dk[mine] = layer.k(T[mine])
        rq, drq = mesh.measure * q, mesh.measure[:, None] * dq
        upto = np.vstack([mesh.B, mesh.w])  # to every point, and to the end
        Q, dQ = Q0 + mesh.B @ rq, mesh.B @ drq
        g = 1.0 / (k * mesh.measure)
        drop = mesh.drops[:, :n] @ rq + mesh.drops[:, n] * Q0
        T_all = T0 - upto @ (Q * g) - drop
        d_all = -upto @ (g[:, None] * dQ - np.diag(Q * g * dk / k)) - mesh.drops[:, :n] @ drq
        d_Q0 = -upto @ g - mesh.drops[:, n]
        out, J = np.zeros(n + 2), np.zeros((n + 2, n + 2))
        out[:n] = T - T_all[:n]
        J[:n, :n] = np.eye(n) - d_all[:n]
        J[:n, n], J[:n, n + 1] = -1.0, -d_Q0[:n]
        ends = (
            (bulk.left, T0, -Q0, bulk.a, np.append(np.zeros(n), [1.0, 0.0]), np.append(np.zeros(n), [0.0, -1.0]), 0),
            (
                bulk.right, T_all[n], Q0 + mesh.w @ rq, mesh.end, np.append(d_all[n], [1.0, d_Q0[n]]),
                np.append(mesh.w @ drq, [0.0, 1.0]), len(bulk.layers) - 1,
            ),
        )  # fmt: skip
        for row, (rim, temperature, heat, place, dT, dheat, layer) in enumerate(ends):
            if row == 0 and bulk.m and not bulk.a:
                out[n], J[n, n + 1] = Q0, 1.0
                continue
            area = place**bulk.m
            leaving = heat / area + rim.contact * amplitude[layer] ** 2
            dleaving = dheat / area + rim.contact * np.append(changes[layer], [0.0, 0.0])
            surface, dsurface = temperature - rim.resistance * leaving, dT - rim.resistance * dleaving
            if rim.held is not None:
                out[n + row], J[n + row] = surface - rim.held, dsurface
            else:
                flux, slope = (0.0, 0.0) if rim.law is None else (float(y[0]) for y in rim.law(np.array([surface])))
                out[n + row], J[n + row] = leaving - flux, dleaving - slope * dsurface
        return out, J

    def solve(self, x: np.ndarray, scale: float) -> np.ndarray | None:
        """Newton's method from x; None where it does not settle."""
        for _ in range(25):
            out, J = self.residual(x, scale)
            # Rows in watts are brought to the size of those in kelvin.
            size = np.max(np.abs(J), axis=1)
            step = np.linalg.solve(J / size[:, None], -out / size)
            x = x + step
            if not np.isfinite(x).all() or any((layer.k(x[: self.n])[0] <= 0.0).any() for layer in self.bulk.layers):
                return None
            rise = np.max(np.abs(x[:-1] - self.bulk.coldest))
            if np.max(np.abs(step[:-1])) <= 1e-12 * rise + 1e-13:
                return x
        return None


def _read(bulk: Bulk, mesh: Mesh, newton: Newton, x: np.ndarray) -> Found:
    n = newton.n
    T, T0, Q0 = x[:n], float(x[n]), float(x[n + 1])
    q, _, amplitude, sums, _ = newton.sources(T, 1.0)
    rq = mesh.measure * q
    lost = np.zeros(n)
    means = []
    for i, layer in enumerate(bulk.layers):
        mine = mesh.owner == i
        weight = mesh.w[mine] * mesh.measure[mine]
        means.append(float(weight @ T[mine] / weight.sum()))
        if layer.side is not None:
            lost[mine] = layer.side(T[mine])[0]
    side = float(mesh.w @ (mesh.measure * lost))
    Q_end = Q0 + float(mesh.w @ rq)
    k_all = np.concatenate([layer.k(T[mesh.owner == i])[0] for i, layer in enumerate(bulk.layers)])
    Q = Q0 + mesh.B @ rq
    flow = Q / (k_all * mesh.measure)
    end = T0 - float(mesh.w @ flow) - float(mesh.drops[n, :n] @ rq) - mesh.drops[n, n] * Q0
    peak = max(T0, end, _highest(mesh, T, flow))
    return Found(peak, T0, end, means, -Q0, Q_end, Q_end - Q0 + side, side, amplitude, sums, mesh.r, T)


def _highest(mesh: Mesh, T: np.ndarray, flow: np.ndarray) -> float:
    """The greatest of the polynomials through each element's points, by dense sampling around the best one and a parabola's top."""
    best = float(T.max())
    for e in range(len(mesh.h)):
        rows = slice(e * STAGES, (e + 1) * STAGES)
        if T[rows].max() < T.max() - abs(flow).max() * mesh.h.max():
            continue
        fit = legendre.Legendre.fit(C, T[rows], STAGES - 1, domain=[0, 1])
        roots = fit.deriv().roots()
        inside = roots[(abs(roots.imag) < 1e-7) & (roots.real >= 0) & (roots.real <= 1)].real
        best = max([best, float(fit(0.0)), float(fit(1.0)), *fit(inside).tolist()])
    return best


def _corners(layer: Stratum) -> list[float]:
    return [x for law in (layer.k, layer.source.law) for x, _ in law.points]


def _cut(bulk: Bulk, mesh: Mesh, T: np.ndarray, plain: list[np.ndarray]) -> list[np.ndarray]:
    """The elements' ends with the places where a layer's temperature passes a table's corner."""
    cuts, place = [], bulk.a
    for i, (layer, even) in enumerate(zip(bulk.layers, plain, strict=True)):
        mine = np.flatnonzero(mesh.owner == i)
        found = []
        for e in range(len(mine) // STAGES):
            rows = mine[e * STAGES : (e + 1) * STAGES]
            fit = legendre.Legendre.fit(C, T[rows], STAGES - 1, domain=[0, 1])
            for corner in _corners(layer):
                roots = (fit - corner).roots()
                # A place found before is an element's end now, to rounding.
                good = roots[(abs(roots.imag) < 1e-9) & (roots.real >= -1e-6) & (roots.real <= 1 + 1e-6)].real
                found += (mesh.r[rows[0]] + (good - C[0]) * mesh.h[mine[0] // STAGES + e] - place).tolist()
        inner = np.array(sorted(x for x in found if 1e-6 * layer.d < x < (1 - 1e-6) * layer.d))
        inner = inner[np.append(True, np.diff(inner) > 1e-6 * layer.d)] if len(inner) else inner
        near = [x for x in even if not len(inner) or np.min(np.abs(inner - x)) > 0.02 * layer.d]
        cuts.append(np.sort(np.concatenate([near, inner])))
        place += layer.d
    return cuts


def solve_bulk(bulk: Bulk, finer: int = 1) -> Found | None:
    """The state reached from cold, None where none is found; ``finer``: so many times the elements."""
    elements = finer * (8 if any(_corners(layer) for layer in bulk.layers) else 5)
    plain, place = [], bulk.a
    for layer in bulk.layers:
        share = np.arange(1, elements) / elements
        if layer.side is not None:
            # A law of natural convection begins with infinite curvature where an end is as cold as the fluid.
            near = 10.0 ** np.arange(-5, -1)
            share = np.concatenate([near, np.linspace(0.04, 0.96, 2 * elements), 1.0 - near[::-1]])
        outer = place + layer.d
        wide = bulk.m > 0 and place > 0.0 and outer > 2.0 * place
        plain.append(place * ((outer / place) ** share - 1.0) if wide else share * layer.d)
        place = outer
    mesh = Mesh(bulk, plain)
    newton = Newton(bulk, mesh)
    x = np.append(np.full(newton.n + 1, bulk.coldest + 1e-3), 0.0)
    done, step = 0.0, 0.25
    at: np.ndarray | None = newton.solve(x, 0.0)
    while at is not None and done < 1.0:
        tried = newton.solve(at, min(done + step, 1.0))
        if tried is None:
            step /= 4.0
            if step < 1e-3:
                return None
            continue
        at, done = tried, min(done + step, 1.0)
    if at is None:
        return None
    if any(_corners(layer) for layer in bulk.layers):
        for _ in range(4):
            finer = Mesh(bulk, _cut(bulk, mesh, at[: newton.n], plain))
            T = np.interp(finer.r, mesh.r, at[: newton.n])
            x = np.append(T, at[newton.n :])
            mesh, newton = finer, Newton(bulk, finer)
            at = newton.solve(x, 1.0)
            if at is None:
                return None
    return _read(bulk, mesh, newton, at)

"""Random bodies for the network engine, and their steady states by another method: shooting with an explicit integrator.

The reference integrates T′ = −Q/(k r^m), Q′ = r^m q outward with an eighth-order Runge-Kutta method and finds the unknown at
the left face by the secant method, continued from zero source to the full one, so that it stays on the branch from cold. Sizes,
conductivities and sources are drawn, not taken from anywhere.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from ingle.conductivities import Conductivity, Table
from ingle.heat_sources import HeatSource, SideLoss, SourceLaw
from ingle.network import NetworkFace, NetworkLayer, NetworkProblem
from ingle.shapes import Shape
from scipy.integrate import solve_ivp

SIGMA = 5.670374419e-8  # W/(m²·K⁴): SI 2019


@dataclass
class Law:
    """Film, radiation and a flux put in."""

    film: np.ndarray
    fluid: np.ndarray
    emissivity: np.ndarray
    surroundings: np.ndarray
    flux: np.ndarray

    def __call__(self, T: np.ndarray, rows: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        K, S = T + 273.15, self.surroundings[rows] + 273.15
        warm = np.where(K >= 0, (K - S) * (K + S) * (K * K + S * S), K * np.abs(K) * K * K - S**4)
        flux = self.film[rows] * (T - self.fluid[rows]) + self.emissivity[rows] * SIGMA * warm - self.flux[rows]
        return flux, self.film[rows] + 4.0 * self.emissivity[rows] * SIGMA * np.abs(K) ** 3


def draw_k(draw: np.random.Generator, kind: str, n: int) -> Conductivity:
    k0 = 10.0 ** draw.uniform(-1.0, 2.0, n)
    if kind == "constant":
        return Conductivity(k0)
    if kind == "sloped":
        return Conductivity(k0, draw.uniform(-5e-4, 3e-3, n), draw.uniform(0.0, 50.0, n))
    T = np.cumsum(draw.uniform(40.0, 200.0, (n, 4)), axis=1) - 50.0
    return Conductivity(table=Table(T, k0[:, None] * 2.0 ** draw.uniform(-1.0, 1.0, (n, 4))))


def draw_source(draw: np.random.Generator, law: SourceLaw, s: np.ndarray, n: int) -> HeatSource:
    """Mild enough that most bodies stay below runaway."""
    reference = draw.uniform(0.0, 50.0, n)
    if law in (SourceLaw.EVEN, SourceLaw.SLOPED, SourceLaw.PER_SLOPED):
        slope = draw.uniform(-1e-3, 4e-3, n)
        return HeatSource(s, law, slope, reference, driven=True)
    if law == SourceLaw.ARRHENIUS:
        return HeatSource(s, law, reference=reference + 20.0, activation=draw.uniform(500.0, 3000.0, n), driven=True)
    T = np.cumsum(draw.uniform(40.0, 200.0, (n, 4)), axis=1) - 50.0
    return HeatSource(s, law, table=Table(T, 2.0 ** draw.uniform(-0.7, 0.7, (n, 4))), driven=True)


def draw_face(draw: np.random.Generator, kind: str, n: int, h: np.ndarray) -> NetworkFace:
    sink = draw.uniform(0.0, 60.0, n)
    R = np.where(np.arange(n) % 2, 0.3 / h, 0.0)
    if kind == "held":
        return NetworkFace(held=sink, resistance=R)
    if kind == "law":
        law = Law(h, sink, draw.uniform(0.0, 0.9, n), sink + draw.uniform(0, 10, n), np.where(np.arange(n) % 3, 0.0, 5.0 * h))
        return NetworkFace(law=law, resistance=R)
    return NetworkFace(flux=np.where(np.arange(n) % 2, 0.0, draw.uniform(-1.0, 3.0, n) * h))


def draw_problem(
    seed: int, shape: Shape, solid: bool, laws: list[SourceLaw], ks: list[str], left: str, right: str, n: int, bar: bool = False
) -> NetworkProblem:
    draw = np.random.default_rng([seed, shape, solid, len(laws)])
    layers, total = [], 0.0
    inner = None if solid or shape == Shape.WALL else 10.0 ** draw.uniform(-3.0, -1.0, n)
    thickness = [10.0 ** draw.uniform(-3.0, -1.5, n) for _ in laws]
    whole = sum(thickness)
    h = 10.0 ** draw.uniform(0.5, 2.5, n)
    rise = 10.0 ** draw.uniform(0.0, 2.2, n)
    for d, law, kind in zip(thickness, laws, ks, strict=True):
        k = draw_k(draw, kind, n)
        typical = k.at(np.full(n, 50.0))
        s = rise / (whole * d / typical + whole / h) / len(laws) * draw.choice([0.0, 1.0, 1.0], n)
        side = None
        if bar:
            ratio = 10.0 ** draw.uniform(-1, 1, n) * typical / (d * d) / h
            T = draw.uniform(0.0, 40.0, n)
            side = SideLoss(
                ratio, h, T, draw.uniform(0, 1, n) if law != SourceLaw.SLOPED else None, T if law != SourceLaw.SLOPED else None
            )
        layers.append(NetworkLayer(d, k, draw_source(draw, law, s, n), side, draw.uniform(0.0, 0.3, n) / h))
        total = total + d
    faces = draw_face(draw, left, n, h), draw_face(draw, right, n, h)
    coldest = np.full(n, np.inf)
    for face in faces if not solid else faces[1:]:
        for T in (face.held, *((face.law.fluid, face.law.surroundings) if face.law is not None else ())):
            coldest = coldest if T is None else np.minimum(coldest, T)
    for layer in layers:
        if layer.side is not None:
            coldest = np.minimum(coldest, layer.side.fluid)
    return NetworkProblem(shape, tuple(layers), *faces, coldest, inner)


class Shot:
    """One row by shooting."""

    def __init__(self, problem: NetworkProblem, row: int, tolerance: float = 1e-12) -> None:
        self.p, self.row, self.rows, self.tolerance = problem.take(np.array([row])), row, np.array([0]), tolerance
        self.number = np.array([row])

    def _q(self, layer: NetworkLayer, T: float, scale: float) -> float:
        at = np.array([T])
        q = scale * layer.source.scale[0] * layer.source.at(at)[0][0]
        return q - (layer.side.at(at)[0][0] if layer.side is not None else 0.0)

    def shoot(self, u: float, scale: float) -> tuple[float, list[Any]]:
        """The right face's residual over its own scale, and the layers' trajectories."""
        p, m = self.p, int(self.p.shape)
        r = 0.0 if p.inner is None else float(p.inner[0])
        left = p.left
        if p.solid:
            T, Q = u, 0.0
        elif left.held is not None:
            Q = u
            T = left.held[0] - Q / r**m * (0.0 if left.resistance is None else left.resistance[0])
        elif left.law is not None:
            leaving = left.law(np.array([u]), self.number)[0][0]
            T = u + leaving * (0.0 if left.resistance is None else left.resistance[0])
            Q = -leaving * r**m
        else:
            T, Q = u, (0.0 if left.flux is None else left.flux[0]) * r**m
        tracks = []
        for index, layer in enumerate(p.layers):
            end = r + layer.thickness[0]
            start = r
            if p.solid and index == 0:
                start = 1e-6 * end  # a series carries the centre that far
                q0 = self._q(layer, T, scale)
                Q = q0 * start ** (m + 1) / (m + 1)
                T -= q0 * start**2 / (2 * (m + 1)) / layer.conductivity.at(np.array([T]))[0]
            q_of = lambda T, layer=layer: self._q(layer, T, scale)  # noqa: E731
            k_of = lambda T, layer=layer: layer.conductivity.at(np.array([T]))[0]  # noqa: E731

            def rhs(x: float, y: np.ndarray, q_of: Any = q_of, k_of: Any = k_of) -> list[float]:
                area = x**m
                return [-y[1] / area / k_of(y[0]), area * q_of(y[0])]

            whole = max(abs(Q), abs(self._q(layer, T, scale)) * end ** (m + 1), 1e-300)
            track = solve_ivp(
                rhs,
                (start, end),
                [T, Q],
                "DOP853",
                rtol=self.tolerance,
                atol=[1e-12, 1e-13 * whole],
                dense_output=True,
                max_step=(end - start) / 12,
            )
            tracks.append((start, end, track.sol, (T, Q), track.y[:, -1]))
            T, Q = track.y[:, -1]
            r = end
            if index + 1 < len(p.layers) and layer.joint is not None:
                T -= layer.joint[0] / r**m * Q
        right = p.right
        R = 0.0 if right.resistance is None else right.resistance[0]
        flux = Q / r**m
        if right.held is not None:
            residual = T - R * flux - right.held[0]
        elif right.law is not None:
            residual = flux - right.law(np.array([T - R * flux]), self.number)[0][0]
        else:
            residual = flux + (0.0 if right.flux is None else right.flux[0])
        return residual, tracks

    def solve(self, guesses: tuple[float, float], scales: np.ndarray) -> list[Any]:
        u0, u1 = guesses
        tracks: list[Any] = []
        for scale in scales:
            f0, _ = self.shoot(u0, scale)
            f1, tracks = self.shoot(u1, scale)
            for _ in range(40):
                if f1 == f0:
                    break
                u2 = u1 - f1 * (u1 - u0) / (f1 - f0)
                u0, f0, u1 = u1, f1, u2
                f1, tracks = self.shoot(u1, scale)
                if abs(u1 - u0) <= 1e-11 * (1.0 + abs(u1)):
                    break
            u0 = u1 - 1e-3 * (1.0 + abs(u1))
        return tracks

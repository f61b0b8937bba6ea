"""Layered bodies at 60 digits, and random ones to compare them on.

Each layer has the two constants of ``exact.Exact``; the faces' and joints' laws make one linear system of them, which no
march goes through. Radiation is a flux put in at the outermost surface, found by Newton's method on that surface's
temperature. Sizes, conductivities, joints, films and sources are drawn, not taken from anywhere.
"""

from __future__ import annotations

from typing import Any

import mpmath as mp
import numpy as np
from exact import Exact, span
from ingle import Cases, Face, Layer, Shape

SIGMA = mp.mpf("5.670374419e-8")  # CODATA 2018
ZERO = mp.mpf("273.15")
# What is prescribed at a face: see ``draw_face``.
FACES = ("held", "held behind", "film", "film behind", "film and flux", "flux", "both", "both behind", "flux and radiation")
SINKS = FACES[:5] + FACES[6:8]


def draw_face(draw: np.random.Generator, kind: str, n: int, size: np.ndarray, k: np.ndarray, rise: np.ndarray) -> Face:
    """``behind`` is behind a resistance; ``both`` a film beside radiation. Biot numbers from 1e-3 to 1e3."""
    sink = draw.uniform(-50.0, 400.0, n)
    film = 10.0 ** draw.uniform(-3.0, 3.0, n) * k / size
    flux = draw.choice([-0.05, 1.0], n) * rise * k / size * 10.0 ** draw.uniform(-2.0, 0.0, n)
    R = 10.0 ** draw.uniform(-3.0, 2.0, n) * size / k if "behind" in kind else None
    glow = draw.uniform(0.01, 1.0, n), draw.uniform(-50.0, 400.0, n)
    if kind.startswith("held"):
        return Face(held=sink, resistance=R)
    if kind == "flux":
        return Face(flux=flux)
    if kind == "flux and radiation":
        return Face(None, None, None, flux, *glow)
    if kind.startswith("both"):
        return Face(None, film, sink, None, *glow, R)
    return Face(film=film, fluid=sink, flux=flux if kind == "film and flux" else None, resistance=R)


def draw_layers(seed: int, shape: Shape, bored: bool, left: str, right: str, n: int, count: int = 3) -> Cases:
    """Bodies of ``count`` layers: a joint of every kind, one of them nought and one not given; a source of each sign, or none."""
    draw = np.random.default_rng([seed, shape, bored, FACES.index(left), FACES.index(right)])
    size = 10.0 ** draw.uniform(-3.0, 0.0, n)
    d = [size * 10.0 ** draw.uniform(-2.0, 0.0, n) for _ in range(count)]
    k = [10.0 ** draw.uniform(-1.0, 2.0, n) for _ in range(count)]
    rise = 10.0 ** draw.uniform(-1.0, 2.5, n)
    q = [draw.choice([1.0, 1.0, 0.0, -0.05], n) * rise * kk / size**2 for kk in k]
    joints = [np.where(draw.random(n) < 0.2, np.nan, 10.0 ** draw.uniform(-3.0, 1.0, n) * size / k[0]) for _ in range(count - 1)]
    joints[0][::4] = 0.0
    inner = size * 10.0 ** draw.uniform(-2.0, 2.0, n) if bored and shape != Shape.WALL else None
    total = sum(d)
    probe = (0.0 if inner is None else inner) + draw.uniform(0.0, 1.0, n) * total
    hot_side = Face() if shape != Shape.WALL and not bored else draw_face(draw, left, n, size, k[0], rise)
    layers = tuple(Layer(*each) for each in zip(d, k, q, strict=True))
    return Cases(shape, layers, hot_side, draw_face(draw, right, n, size, k[-1], rise), inner, probe=probe, joints=tuple(joints))


def number(x: np.ndarray | None, row: int) -> Any:
    """An element, 0 where there is none."""
    return mp.mpf(0) if x is None or np.isnan(x[row]) else mp.mpf(float(x[row]))


def has(x: np.ndarray | None, row: int) -> bool:
    return x is not None and not np.isnan(x[row])


def law(face: Face, row: int, base: Any, only: str, more: Any) -> tuple[Any, Any, Any]:
    """α T + β q″ = γ at a body's face, q″ leaving; ``more`` is a flux put in besides. The outermost surface is at T − R q″."""
    R, sinks, fluxes = number(face.resistance, row), only in ("", "sinks"), only in ("", "flux")
    if has(face.held, row):
        return mp.mpf(1), -R, (number(face.held, row) - base) * sinks
    h = number(face.film, row)
    sink = (number(face.fluid, row) - base) * sinks if h else mp.mpf(0)
    return h, -1 - h * R, h * sink + number(face.flux, row) * fluxes + more


class ExactBody:
    """The constants of a row's layers, with fluxes ``more`` put in at the two outermost surfaces."""

    def __init__(self, cases: Cases, row: int, only: str = "", more: tuple[Any, Any] = (mp.mpf(0), mp.mpf(0))) -> None:
        self.m = int(cases.shape)
        self.row, self.cases = row, cases
        self.base = mp.mpf(0)
        if only:
            sinks = [number(x, row) for f in (cases.left, cases.right) for x in (f.held, f.fluid) if has(x, row)]
            self.base = sinks[0] if sinks else mp.mpf(0)
        place = number(cases.inner, row)
        solid = self.m > 0 and not place
        parts, trials = [], []
        for layer in cases.layers:
            d, k, q = (number(x, row) for x in (layer.thickness, layer.conductivity, layer.generation))
            q = q if only in ("", "source") else mp.mpf(0)
            parts.append(Exact(self.m, place, place + d, k, q, mp.mpf(0), mp.mpf(0)))
            trials.append(Exact(self.m, place, place + d, k, q, mp.mpf(0), mp.mpf(1)))
            place += d
        n = len(parts)
        A, z = mp.matrix(2 * n), mp.matrix(2 * n, 1)
        line = 0

        def put(terms: list[tuple[int, Any, Any]], known: Any) -> None:
            """Σ (t T + f Q) of layers at their given ends = known."""
            nonlocal line
            for i, r, (t, f) in terms:
                A[line, 2 * i] += t
                A[line, 2 * i + 1] += t * trials[i].w(r) - f * parts[i].k
                known -= t * parts[i].T(r) + f * parts[i].Q(r)
            z[line] = known
            line += 1

        if solid:
            A[line, 1], z[line] = 1, 0
            line += 1
        else:
            t, f, known = law(cases.left, row, self.base, only, more[0])
            put([(0, parts[0].a, (t, -f / parts[0].a ** self.m if self.m else -f))], known)
        for i in range(n - 1):
            r = parts[i].b
            R = number(cases.joints[i], row) / r**self.m
            put([(i, r, (mp.mpf(1), -R)), (i + 1, r, (mp.mpf(-1), mp.mpf(0)))], mp.mpf(0))
            put([(i, r, (mp.mpf(0), mp.mpf(1))), (i + 1, r, (mp.mpf(0), mp.mpf(-1)))], mp.mpf(0))
        t, f, known = law(cases.right, row, self.base, only, more[1])
        put([(n - 1, parts[-1].b, (t, f / parts[-1].b ** self.m))], known)
        x = mp.lu_solve(A, z)
        self.layers = [Exact(p.m, p.a, p.b, p.k, p.q, x[2 * i], x[2 * i + 1]) for i, p in enumerate(parts)]

    def surface(self, side: int) -> Any:
        """Temperature of an outermost surface."""
        layer, face = (self.layers[0], self.cases.left) if side == 0 else (self.layers[-1], self.cases.right)
        r, sign = (layer.a, -1) if side == 0 else (layer.b, 1)
        return layer.T(r) - number(face.resistance, self.row) * sign * layer.Q(r) / (r**self.m if r else 1)

    def span(self) -> Any:
        return max(span(layer) for layer in self.layers)


def exact_body(cases: Cases, row: int) -> tuple[ExactBody, Any, Any]:
    """A row's body, its rise (what source, sinks, fluxes and radiation each cause, added up) and its heat by the same."""
    radiating = [i for i, face in enumerate((cases.left, cases.right)) if face.emissivity is not None]
    none = ExactBody(cases, row)
    more = [mp.mpf(0), mp.mpf(0)]
    if radiating:
        # Surface temperatures by unit fluxes, then Newton from above, which a rising convex law takes straight down.
        bodies = [ExactBody(cases, row, more=tuple(mp.mpf(i == j) for j in (0, 1))) for i in radiating]
        start = [none.surface(i) + ZERO for i in radiating]
        M = mp.matrix([[body.surface(i) + ZERO - s for body in bodies] for i, s in zip(radiating, start, strict=True)])
        faces = [(cases.left, cases.right)[i] for i in radiating]
        es = [number(face.emissivity, row) * SIGMA for face in faces]
        hot = [number(face.surroundings, row) + ZERO for face in faces]
        T = mp.matrix([max(*start, *hot)] * len(radiating))
        for _ in range(200):
            g = mp.matrix([e * (h**4 - t**4) for e, h, t in zip(es, hot, T, strict=True)])
            short = T - mp.matrix(start) - M * g
            slope = mp.eye(len(T)) + M * mp.diag([4 * e * t**3 for e, t in zip(es, T, strict=True)])
            step = mp.lu_solve(slope, short)
            T -= step
            if mp.norm(step) < mp.mpf(10) ** (10 - mp.mp.dps) * mp.norm(T):
                break
        for i, e, h, t in zip(radiating, es, hot, T, strict=True):
            more[i] = e * (h**4 - t**4)
    body = ExactBody(cases, row, more=tuple(more))
    causes = [ExactBody(cases, row, only) for only in ("source", "sinks", "flux")]
    if radiating:
        causes.append(ExactBody(cases, row, "radiation", tuple(more)))
    rise = sum(cause.span() for cause in causes)
    heat = sum(max(max(abs(layer.Q(layer.a)), abs(layer.Q(layer.b))) for layer in cause.layers) for cause in causes)
    return body, rise, heat

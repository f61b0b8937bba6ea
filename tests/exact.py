"""Steady states at 60 digits, and random bodies to compare them on.

The integral of k r^−m (r^m T′)′ = −q has two constants, found here from the faces' laws; the solver never forms them. Sizes,
conductivities, films and sources are drawn, not taken from anywhere.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product
from typing import Any

import mpmath as mp
import numpy as np
from ingle import Cases, Face, FaceKind, Layer, Shape

DIGITS = 60
ROWS = 40
MEASURE = (1.0, 2.0 * np.pi, 4.0 * np.pi)
LINEAR = (FaceKind.FLUX, FaceKind.HELD, FaceKind.FILM)  # the faces with a solution in closed form
KINDS = [pair for pair in product(LINEAR, LINEAR) if pair != (FaceKind.FLUX, FaceKind.FLUX)]
TWO_FACES = [(shape, True, left, right) for shape in Shape for left, right in KINDS]
SOLID = [(shape, False, FaceKind.FLUX, right) for shape in (Shape.CYLINDER, Shape.SPHERE) for right in (FaceKind.HELD, FaceKind.FILM)]


def draw_face(draw: np.random.Generator, kind: FaceKind, n: int, flux: np.ndarray) -> Face:
    sink = draw.uniform(-50.0, 400.0, n)
    if kind == FaceKind.HELD:
        return Face(held=sink)
    if kind == FaceKind.FLUX:
        return Face(flux=flux)
    # Some filmed faces take a flux too.
    return Face(film=10.0 ** draw.uniform(-2.0, 7.0, n), fluid=sink, flux=np.where(np.arange(n) % 2, flux, np.nan))


def draw_cases(seed: int, shape: Shape, bored: bool, left: FaceKind, right: FaceKind, n: int = ROWS) -> Cases:
    """Films of Biot numbers from about 1e-8 to 1e8, bores from skins to a thousandth of the outside; a source of each sign."""
    draw = np.random.default_rng([seed, shape, bored, left, right])
    d = 10.0 ** draw.uniform(-4.0, 0.0, n)
    k = 10.0 ** draw.uniform(-2.0, 3.0, n)
    rise = 10.0 ** draw.uniform(-3.0, 3.0, n)
    q = np.where(np.arange(n) % 8 == 7, -0.05, 1.0) * rise * k / d**2
    flux = draw.choice([-0.05, 1.0], n) * q * d * 10.0 ** draw.uniform(-2.0, 1.0, n)
    a = d / 10.0 ** draw.uniform(-6.0, 3.0, n)
    share = draw.uniform(0.0, 1.0, n)
    inner = a if bored and shape != Shape.WALL else None
    probe = share * d if inner is None else inner + share * d
    faces = draw_face(draw, left, n, flux), draw_face(draw, right, n, flux[::-1].copy() * 1e-2)
    if not bored:
        faces = (Face(), faces[1])
    return Cases(shape, (Layer(d, k, q),), *faces, inner, probe=probe)


@dataclass(frozen=True)
class Exact:
    """T = C + E w(r) − q r²/[2(m+1)k], with r^m w′ = 1, in a body from a to b; heat outward Q = q r^(m+1)/(m+1) − kE."""

    m: int
    a: Any
    b: Any
    k: Any
    q: Any
    C: Any
    E: Any

    def w(self, r: Any) -> Any:
        if self.E == 0 or (self.m and not self.a):
            return mp.mpf(0)  # a solid body has E = 0
        return (r, mp.log(r / self.a) if self.m == 1 else 0, 1 / self.a - 1 / r if self.m == 2 else 0)[self.m]

    def T(self, r: Any) -> Any:
        return self.C + self.E * self.w(r) - self.q * r**2 / (2 * (self.m + 1) * self.k)

    def Q(self, r: Any) -> Any:
        return self.q * r ** (self.m + 1) / (self.m + 1) - self.k * self.E

    def extremes(self) -> list[Any]:
        """The faces' temperatures, and that of the place where no heat flows."""
        places = [self.a, self.b]
        if self.q != 0 and self.E / self.q >= 0:
            turn = ((self.m + 1) * self.k * self.E / self.q) ** (mp.mpf(1) / (self.m + 1))
            places += [turn] if self.a < turn < self.b else []
        return [self.T(r) for r in places]

    def peak(self) -> Any:
        return max(self.extremes())

    def lowest(self) -> Any:
        return min(self.extremes())

    def short_of_peak(self, place: Any) -> Any:
        """How much colder than the peak a place is, beyond what its own last digit makes."""
        r = min(max(place, self.a), self.b)
        steepest = max(abs(self.Q(x)) / (self.k * x**self.m) if x else mp.mpf(0) for x in (self.a, self.b))
        return max(self.peak() - self.T(r) - mp.mpf(4e-16) * self.b * steepest, mp.mpf(0))

    def mean(self) -> Any:
        a, b, m = self.a, self.b, self.m
        V = (b ** (m + 1) - a ** (m + 1)) / (m + 1)
        if self.E == 0:
            path = mp.mpf(0)
        elif m == 0:
            path = (b**2 - a**2) / 2
        elif m == 1:
            path = b**2 / 2 * mp.log(b / a) - (b**2 - a**2) / 4
        else:
            path = (b**3 - a**3) / (3 * a) - (b**2 - a**2) / 2
        square = (b ** (m + 3) - a ** (m + 3)) / (m + 3)
        return self.C + (self.E * path - self.q * square / (2 * (m + 1) * self.k)) / V


def law(face: Face, row: int) -> tuple[FaceKind, Any, Any, Any]:
    """Kind, sink, film and flux of one face of one case."""

    def one(x: np.ndarray | None) -> Any:
        return mp.mpf(0) if x is None or np.isnan(x[row]) else mp.mpf(float(x[row]))

    kind = FaceKind(int(np.broadcast_to(face.kinds(), row + 1)[row]))
    return kind, one(face.held if kind == FaceKind.HELD else face.fluid), one(face.film), one(face.flux)


def exact(cases: Cases, row: int, only: str = "") -> Exact:
    """The two constants from the two faces; ``only`` keeps one cause of temperature: source, sinks or flux."""
    layer = cases.layers[0]
    m = int(cases.shape)
    a = mp.mpf(0) if cases.inner is None else mp.mpf(float(cases.inner[row]))
    d, k, q = (mp.mpf(float(x[row])) for x in (layer.thickness, layer.conductivity, layer.generation))
    b = a + d
    faces = [law(cases.left, row), law(cases.right, row)]
    if only:
        q = q if only == "source" else mp.mpf(0)
        base = faces[0][1] if faces[0][0] != FaceKind.FLUX else faces[1][1]
        faces = [
            (kind, sink - base if only == "sinks" else mp.mpf(0), h, flux if only == "flux" else mp.mpf(0))
            for kind, sink, h, flux in faces
        ]
    trial = Exact(m, a, b, k, q, mp.mpf(0), mp.mpf(1))
    part = Exact(m, a, b, k, q, mp.mpf(0), mp.mpf(0))
    rows = []
    for (kind, sink, h, flux), r, inward in zip(faces, (a, b), (1, -1), strict=True):
        if inward == 1 and m and not a:
            rows.append((mp.mpf(0), mp.mpf(1), mp.mpf(0)))  # the centre: E = 0
            continue
        w, T0, Q0 = trial.w(r), part.T(r), part.Q(r)
        if kind == FaceKind.HELD:
            rows.append((mp.mpf(1), w, sink - T0))
        else:  # Q0 − kE = ± r^m [f + h (sink − C − E w − T0)]
            g = inward * r**m
            rows.append((g * h, g * h * w - k, g * (flux + h * (sink - T0)) - Q0))
    (x1, y1, z1), (x2, y2, z2) = rows
    det = x1 * y2 - x2 * y1
    return Exact(m, a, b, k, q, (z1 * y2 - z2 * y1) / det, (x1 * z2 - x2 * z1) / det)


def span(solution: Exact) -> Any:
    return max(abs(solution.T(r)) for r in (solution.a, solution.b)) + abs(solution.peak())

"""Conductivities that change with temperature: closed forms by Kirchhoff's integral, and a boundary value solver beside them.

With θ = ∫k dT every body of one layer solves k = 1 in θ, which ``exact.Exact`` has in closed form; T is then found from θ by
hand. Source: Kirchhoff's transformation (Carslaw & Jaeger 1959, section 1.6). Sizes and laws are chosen here.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import Any

import mpmath as mp
import numpy as np
import pytest
from exact import Exact
from exact_layers import FACES, SINKS, draw_layers
from ingle import Cases, Face, Layer, Shape, Status, steady
from ingle.conductivities import Conductivity, Table
from scipy.integrate import solve_bvp

ONE = np.ones(1)
SHAPES = pytest.mark.parametrize("shape", list(Shape), ids=lambda shape: shape.name.lower())
SIGMA = 5.670374419e-8  # CODATA 2018


@dataclass(frozen=True)
class Law:
    """k(T) as the solver takes it, θ(T) from 0 °C in kelvins of conductivity 1, and T(θ), at 40 digits."""

    k: Conductivity
    theta: Callable[[Any], Any]
    back: Callable[[Any], Any]


def linear(k0: float, slope: float, reference: float) -> Law:
    """k = k₀[1 + β (T − T₀)]: θ = k₀[(T − T₀) + β (T − T₀)²/2] but for a constant."""
    K, b, T0 = mp.mpf(k0), mp.mpf(slope), mp.mpf(reference)
    return Law(
        Conductivity(k0 * ONE, slope * ONE, reference * ONE),
        lambda T: K * ((T - T0) + b * (T - T0) ** 2 / 2),
        lambda th: T0 + (mp.sqrt(1 + 2 * b * th / K) - 1) / b,
    )


def tabled(*points: tuple[float, float]) -> Law:
    """Straight between its points and held beyond them: θ is a parabola a piece, T the root of one."""
    known = [(mp.mpf(T), mp.mpf(k)) for T, k in points]
    pieces = [(known[0][0] - 10**6, known[0][1], known[0][0], known[0][1])]
    pieces += [(*left, *right) for left, right in pairwise(known)]
    pieces += [(known[-1][0], known[-1][1], known[-1][0] + 10**6, known[-1][1])]
    starts = [mp.mpf(0)]
    for T0, k0, T1, k1 in pieces:
        starts.append(starts[-1] + (k0 + k1) / 2 * (T1 - T0))

    def theta(T: Any) -> Any:
        i = next(i for i, piece in enumerate(pieces) if piece[2] >= T)
        T0, k0, T1, k1 = pieces[i]
        return starts[i] + k0 * (T - T0) + (k1 - k0) / (T1 - T0) * (T - T0) ** 2 / 2

    def back(th: Any) -> Any:
        i = next(i for i in range(len(pieces)) if starts[i + 1] >= th)
        T0, k0, T1, k1 = pieces[i]
        c = (k1 - k0) / (T1 - T0)
        return T0 + ((th - starts[i]) / k0 if c == 0 else (mp.sqrt(k0**2 + 2 * c * (th - starts[i])) - k0) / c)

    T, k = np.array(points).T
    return Law(Conductivity(table=Table(T[None, :], k[None, :])), theta, back)


with mp.workdps(40):
    LAWS = {
        "rising": linear(2.0, 0.004, 20.0),
        "falling": linear(3.0, -0.0007, 50.0),
        "table": tabled((0.0, 1.0), (60.0, 2.5), (90.0, 2.5), (300.0, 0.8), (600.0, 1.1)),
        "one point": tabled((50.0, 1.7)),
    }


def corners_of(law: Law) -> list[float]:
    """The temperatures of a table's points."""
    return [] if law.k.table is None else law.k.table.T[0].tolist()


def halved(is_over: Callable[[Any], bool], low: Any, high: Any) -> Any:
    """Where the answer changes between two places."""
    at_low = is_over(low)
    for _ in range(50):
        middle = (low + high) / 2
        low, high = (middle, high) if is_over(middle) == at_low else (low, middle)
    return low


EACH_LAW = pytest.mark.parametrize("law", LAWS.values(), ids=LAWS)
BORES = {Shape.WALL: (0.0,), Shape.CYLINDER: (0.01, 0.5), Shape.SPHERE: (0.01, 0.5)}


@EACH_LAW
@SHAPES
def test_a_body_between_held_faces_is_kirchhoffs(shape: Shape, law: Law) -> None:
    """With a source of either sign and none; to 1e-12 of the rise, temperatures besides to 4e-16 of themselves."""
    d, hot, cold = 0.04, 180.0, 35.0
    for a in BORES[shape]:
        for q in (0.0, 6e5, -2e4):
            inner = a * ONE if shape else None
            place = (a + 0.3 * d) * ONE
            cases = Cases(shape, (Layer(d * ONE, law.k, q * ONE),), Face(held=hot * ONE), Face(held=cold * ONE), inner, probe=place)
            names = ("peak", "probe_temperature", "left_flux", "right_flux", "left_face", "right_face")
            got = {name: mp.mpf(float(value[0])) for name, value in steady(cases, names).values.items()}
            with mp.workdps(40):
                m, start, end = int(shape), mp.mpf(float(a)), mp.mpf(float(a)) + mp.mpf(d)
                alone = Exact(m, start, end, mp.mpf(1), mp.mpf(q), mp.mpf(0), mp.mpf(0))
                w = replace(alone, E=mp.mpf(1)).w
                left, right = law.theta(mp.mpf(hot)), law.theta(mp.mpf(cold))
                E = (right - alone.T(end) - left + alone.T(start)) / (w(end) - w(start))
                body = replace(alone, E=E)
                body = replace(body, C=left - body.T(start))
                want = {"peak": law.back(body.peak()), "left_face": mp.mpf(hot), "right_face": mp.mpf(cold)}
                want["probe_temperature"] = law.back(body.T(mp.mpf(float(place[0]))))
                rise = want["peak"] - law.back(body.lowest())
                for name, T in want.items():
                    assert abs(got[name] - T) <= mp.mpf(1e-12) * rise + mp.mpf(4e-16) * abs(T), (name, a, q)
                out = {"left_flux": -body.Q(start) / start**m, "right_flux": body.Q(end) / end**m}
                largest = max(abs(each) for each in out.values())
                for name, flux in out.items():
                    assert abs(got[name] - flux) <= mp.mpf(1e-12) * largest, (name, a, q)


@EACH_LAW
@SHAPES
def test_a_body_insulated_inside_rises_by_its_own_heat(shape: Shape, law: Law) -> None:
    """The face is at q size/(m + 1)/h over the fluid, the centre θ higher by q size²/[2(m + 1)]."""
    R, h, fluid = 0.03, 150.0, 15.0
    q = np.array([1e3, 1e5, 7e5])
    for source in q:
        cases = Cases(shape, (Layer(R * ONE, law.k, source * ONE),), Face(), Face(film=h * ONE, fluid=fluid * ONE))
        found = steady(cases, ("peak", "right_face")).values
        with mp.workdps(40):
            n = shape + 1
            face = mp.mpf(fluid) + mp.mpf(float(source)) * mp.mpf(R) / n / h
            centre = law.back(law.theta(face) + mp.mpf(float(source)) * mp.mpf(R) ** 2 / (2 * n))
            for name, T in (("right_face", face), ("peak", centre)):
                assert abs(mp.mpf(float(found[name][0])) - T) <= 1e-12 * (centre - fluid) + 4e-16 * abs(T), name


@EACH_LAW
@pytest.mark.parametrize("shape", [Shape.WALL, Shape.CYLINDER, Shape.SPHERE], ids=lambda shape: shape.name.lower())
@pytest.mark.parametrize("ratio", [1.5, 16.0, 200.0])
def test_the_mean_over_the_volume(shape: Shape, law: Law, ratio: float) -> None:
    """Against the integral of r^m T by quadrature between the corners of the law: 1e-10 of the rise."""
    a = 0.001
    b = ratio * a
    q = 2.0 * 60.0 / (b - a) ** 2
    inner = a * ONE if shape else None
    hot, cold = 150.0, 30.0
    cases = Cases(shape, (Layer((b - a) * ONE, law.k, q * ONE),), Face(held=hot * ONE), Face(held=cold * ONE), inner)
    got = steady(cases, ("mean", "layer_mean 1")).values
    with mp.workdps(20):
        m = int(shape)
        start = mp.mpf(a)
        end = start + mp.mpf(b - a)
        alone = Exact(m, start, end, mp.mpf(1), mp.mpf(q), mp.mpf(0), mp.mpf(0))
        w = replace(alone, E=mp.mpf(1)).w
        left, right = law.theta(mp.mpf(hot)), law.theta(mp.mpf(cold))
        body = replace(alone, E=(right - alone.T(end) - left + alone.T(start)) / (w(end) - w(start)))
        body = replace(body, C=left - body.T(start))
        # Gauss-Legendre over ln r (a wall: r), between the places where T passes a corner of the table.
        place = (lambda x: start * mp.exp(x)) if m else (lambda x: start + x)
        span = mp.log(end / start) if m else end - start
        edges = [span * i / 60 for i in range(61)]
        for corner in corners_of(law):
            over = [body.T(place(x)) > law.theta(corner) for x in edges[:61]]
            for i in range(60):
                if over[i] != over[i + 1]:
                    edges.append(halved(lambda x, c=corner: body.T(place(x)) > law.theta(c), edges[i], edges[i + 1]))
        nodes, weights = np.polynomial.legendre.leggauss(10)
        total = mp.mpf(0)
        for low, high in pairwise(sorted(edges)):
            for node, weight in zip(nodes, weights, strict=True):
                r = place(low + (high - low) * (mp.mpf(float(node)) + 1) / 2)
                total += law.back(body.T(r)) * (r ** (m + 1) if m else 1) * (high - low) * mp.mpf(float(weight)) / 2
        mean = float(total * (m + 1) / (end ** (m + 1) - start ** (m + 1)))
    assert got["mean"][0] == pytest.approx(mean, abs=120.0 * 1e-10)
    assert got["layer_mean 1"][0] == got["mean"][0]


def test_a_conductivity_that_falls_to_nothing_has_a_status() -> None:
    """k = 1 − 0.01 (T − 20): ∫k dT to where it ends is 50, which q L²/2k of an insulated wall reaches at q = 100/L²."""
    q = np.array([90.0, 110.0]) / 0.1**2
    two = np.ones(2)
    k = Conductivity(1.0 * two, -0.01 * two, 20.0 * two)
    found = steady(Cases(Shape.WALL, (Layer(0.1 * two, k, q),), Face(), Face(held=20.0 * two)), ("peak",))
    assert found.status.tolist() == [Status.SOLVED, Status.NO_CONDUCTIVITY]
    assert found.values["peak"][0] == pytest.approx(20.0 + 100.0 * (1.0 - 0.1**0.5), rel=1e-13)


# Whole bodies against a boundary value solver.

BODIES = [(Shape.WALL, True), (Shape.CYLINDER, True), (Shape.SPHERE, True), (Shape.CYLINDER, False), (Shape.SPHERE, False)]


def combined(seed: int, shape: Shape, bored: bool) -> Cases:
    """One body of three layers whose conductivities change, with faces drawn from every kind."""
    draw = np.random.default_rng([seed, shape, bored])
    while True:
        left, right = (str(draw.choice(FACES)) for _ in range(2))
        if (left in SINKS and bored) or right in SINKS:
            break
    cases = draw_layers(seed, shape, bored, left, right, 1)
    layers = tuple(
        Layer(
            layer.thickness, Conductivity(layer.conductivity, draw.uniform(-3e-4, 2e-3, 1), draw.uniform(0.0, 100.0, 1)),
            np.abs(layer.generation) * 0.3,
        )
        for layer in cases.layers
    )  # fmt: skip
    return replace(cases, layers=layers)


def leaving(face: Face, T: float) -> float:
    """Heat leaving an outermost surface by its law."""
    film = 0.0 if face.film is None else face.film[0] * (T - face.fluid[0])
    glow = 0.0 if face.emissivity is None else (
        face.emissivity[0] * SIGMA * ((T + 273.15) ** 4 - (face.surroundings[0] + 273.15) ** 4)
    )  # fmt: skip
    return film + glow - (0.0 if face.flux is None else face.flux[0])


def by_collocation(cases: Cases) -> tuple[np.ndarray, float]:
    """Temperatures at both ends of each layer and the peak; every layer runs over s from 0 to 1."""
    m, n = int(cases.shape), len(cases.layers)
    d = np.array([layer.thickness[0] for layer in cases.layers])
    start = (0.0 if cases.inner is None else cases.inner[0]) + np.concatenate([[0.0], np.cumsum(d)])
    solid = m > 0 and cases.inner is None
    q = np.array([layer.generation[0] for layer in cases.layers])

    # Kelvins, and heats of about as many: the solver's tolerances are of both alike.
    flux = float(cases.layers[-1].conductivity.k0[0] / d.sum())  # type: ignore[union-attr, index]
    heat = flux * start[-1] ** m

    def k(i: int, T: Any) -> Any:
        law = cases.layers[i].conductivity
        return law.k0[0] * (1.0 + law.slope[0] * (T - law.reference[0]))  # type: ignore[union-attr, index]

    def slopes(s: np.ndarray, y: np.ndarray) -> np.ndarray:
        rows = []
        for i in range(n):
            r = start[i] + d[i] * s
            outward = q[i] * r / (m + 1) if solid and i == 0 else heat * y[2 * i + 1] / r**m
            rows += [-d[i] * outward / k(i, y[2 * i]), d[i] * q[i] * r**m / heat]
        return np.array(rows)

    def ends(y0: np.ndarray, y1: np.ndarray) -> np.ndarray:
        gaps = []
        inside = start[0] ** m if start[0] else 1.0
        for face, T, out in ((cases.left, y0[0], -heat * y0[1] / inside), (cases.right, y1[-2], flux * y1[-1])):
            surface = T - (0.0 if face.resistance is None else face.resistance[0]) * out
            gaps.append(surface - face.held[0] if face.held is not None else (out - leaving(face, surface)) / flux)
        if solid:
            gaps[0] = y0[1]
        for i in range(n - 1):
            R = np.nan_to_num(cases.joints[i][0]) / start[i + 1] ** m  # type: ignore[index]
            gaps += [y1[2 * i + 1] - y0[2 * i + 3], y1[2 * i] - y0[2 * i + 2] - R * heat * y1[2 * i + 1]]
        return np.array(gaps)

    s = np.linspace(0.0, 1.0, 41)
    guess = np.zeros((2 * n, len(s)))
    guess[::2] = 150.0
    with np.errstate(all="ignore"):
        found = solve_bvp(slopes, ends, s, guess, tol=1e-9, bc_tol=1e-9, max_nodes=50_000)
    assert found.success, found.message
    T = np.array([[found.y[2 * i, 0], found.y[2 * i, -1]] for i in range(n)])
    return T, float(np.max(found.sol(np.linspace(0.0, 1.0, 20_001))[::2]))


@pytest.mark.parametrize(("shape", "bored"), BODIES, ids=lambda part: part.name.lower() if isinstance(part, Shape) else str(part))
def test_random_bodies_agree_with_a_boundary_value_solver(shape: Shape, bored: bool) -> None:
    """Temperatures of each layer's ends and the peak to 1e-8 of their spread, scipy's collocation being good to 1e-10 a layer."""
    for seed in range(6):
        cases = combined(seed, shape, bored)
        names = ("left_face", "joint_left 1", "joint_right 1", "joint_left 2", "joint_right 2", "right_face", "peak")
        found = steady(cases, names)
        assert found.status.tolist() == [Status.SOLVED], seed
        T, peak = by_collocation(cases)
        got = np.array([found.values[name][0] for name in names])
        spread = np.ptp(got) + 1.0
        assert np.abs(got[:-1] - T.ravel()).max() <= 1e-8 * spread, (seed, got, T)
        assert abs(got[-1] - peak) <= 1e-7 * spread, (seed, got[-1], peak)


@pytest.mark.parametrize(("shape", "bored"), BODIES, ids=lambda part: part.name.lower() if isinstance(part, Shape) else str(part))
def test_the_allowable_with_laws_of_conductivity(shape: Shape, bored: bool) -> None:
    """All sources scale together; put back they reach the limit to 1e-9 of the rise."""
    checked = 0
    for seed in range(12):
        cases = combined(seed, shape, bored)
        pattern = tuple(layer.generation + 1.0 for layer in cases.layers)

        def at(multiple: float, cases: Cases = cases, pattern: tuple[np.ndarray, ...] = pattern) -> Cases:
            layers = tuple(replace(layer, generation=multiple * p) for layer, p in zip(cases.layers, pattern, strict=True))
            return replace(cases, layers=layers, pattern=pattern)

        cold = steady(at(0.0), ("peak",)).values["peak"][0]
        limited = replace(at(0.0), limit=(cold + 80.0) * ONE)
        found = steady(limited, ("allowable_multiple", "lacking")).values
        if found["lacking"][0]:
            continue
        checked += 1
        back = steady(at(found["allowable_multiple"][0]), ("peak",)).values["peak"][0]
        assert back == pytest.approx(cold + 80.0, abs=1e-9 * 80.0), seed
    assert checked >= 10

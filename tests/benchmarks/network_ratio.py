"""How many times faster the network engine solves a case than scipy's solve_bvp does one row at tolerance 1e-8.

Three plane or hollow cylindrical layers with joints, a source that rises with temperature in the middle one, radiation and a film
at the right face, a film at the left; with constant k, and with k(T) in all layers. Both run on the same machine in the same
process. Beside it what common bodies cost, one row and many, and their allowable scale in peaks. Times are of the processor, so
that other work on the machine counts little; an addition of two one-element arrays is printed as a measure of it. Run as a
program: ``python tests/benchmarks/network_ratio.py``.
"""

from __future__ import annotations

import time
from collections.abc import Callable
from typing import Any

import numpy as np
from ingle.conductivities import Conductivity
from ingle.heat_sources import HeatSource, SideLoss, SourceLaw, radiation
from ingle.network import NetworkFace, NetworkLayer, NetworkProblem, Status, Supply, peak, solve_network
from ingle.network_scales import Limit, allowable_scale, turning_scale
from ingle.shapes import Shape
from scipy.integrate import solve_bvp

ROWS = 20_000
BVP_ROWS = 12


class FilmAndRadiation:
    """h(T − T_f) + εσ(T⁴ − T_f⁴)."""

    def __init__(self, film: np.ndarray, fluid: np.ndarray, emissivity: np.ndarray) -> None:
        self.film, self.fluid, self.emissivity = film, fluid, emissivity

    def __call__(self, T: np.ndarray, rows: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        fluid, film, emissivity = self.fluid[rows], self.film[rows], self.emissivity[rows]
        flux, slope = radiation(T + 273.15, fluid + 273.15)
        return film * (T - fluid) + emissivity * flux, film + emissivity * slope


def drawn(n: int, sloped_k: bool, shape: Shape) -> NetworkProblem:
    draw = np.random.default_rng(5)
    layers = []
    for index in range(3):
        k0 = 10.0 ** draw.uniform(-0.5, 1.5, n)
        k = Conductivity(k0, draw.uniform(-5e-4, 2e-3, n), np.full(n, 20.0)) if sloped_k else Conductivity(k0)
        d = 10.0 ** draw.uniform(-3.0, -2.0, n)
        slope, reference = np.full(n, 0.004), np.full(n, 20.0)
        source = HeatSource(draw.uniform(1e4, 2e5, n), SourceLaw.SLOPED, slope, reference, driven=True)
        if index != 1:
            source = HeatSource(np.zeros(n))
        layers.append(NetworkLayer(d, k, source, joint=draw.uniform(1e-5, 1e-3, n)))
    fluid = draw.uniform(10.0, 40.0, n)
    left = FilmAndRadiation(draw.uniform(5.0, 50.0, n), fluid, np.zeros(n))
    right = FilmAndRadiation(draw.uniform(5.0, 50.0, n), fluid, draw.uniform(0.1, 0.9, n))
    inner = None if shape == Shape.WALL else np.full(n, 0.01)
    return NetworkProblem(shape, tuple(layers), NetworkFace(law=left), NetworkFace(law=right), fluid, inner)


def by_collocation_of_scipy(problem: NetworkProblem, row: int) -> np.ndarray:
    """Left-face temperatures of the three layers; each layer is mapped to 0..1."""
    p, m = problem.take(np.array([row])), int(problem.shape)
    number = np.array([row])
    a = [0.0 if p.inner is None else float(p.inner[0])]
    for layer in p.layers:
        a.append(a[-1] + float(layer.thickness[0]))
    k_of = [(float(x.conductivity.k0[0]), 0.0 if x.conductivity.slope is None else float(x.conductivity.slope[0])) for x in p.layers]
    s, beta = float(p.layers[1].source.scale[0]), 0.004

    def rhs(x: np.ndarray, y: np.ndarray) -> np.ndarray:
        out = np.empty_like(y)
        for i in range(3):
            d = a[i + 1] - a[i]
            area = (a[i] + d * x) ** m
            k0, slope = k_of[i]
            out[2 * i] = -d * y[2 * i + 1] / area / (k0 * (1.0 + slope * (y[2 * i] - 20.0)))
            out[2 * i + 1] = d * area * s * (1.0 + beta * (y[2 * i] - 20.0)) if i == 1 else 0.0
        return out

    def ends(u: np.ndarray, v: np.ndarray) -> np.ndarray:
        joints = [float(x.joint[0]) for x in p.layers[:2]]
        return np.array(
            [
                u[1] / a[0] ** m + p.left.law(u[:1], number)[0][0],
                v[1] - u[3],
                v[0] - u[2] - v[1] / a[1] ** m * joints[0],
                v[3] - u[5],
                v[2] - u[4] - v[3] / a[2] ** m * joints[1],
                v[5] / a[3] ** m - p.right.law(v[4:5], number)[0][0],
            ]
        )

    guess = np.zeros((6, 5))
    guess[::2] = float(p.coldest[0]) + 10.0
    found = solve_bvp(rhs, ends, np.linspace(0.0, 1.0, 5), guess, tol=1e-8, max_nodes=20_000)
    assert found.success, found.message
    return found.y[::2, 0]


def arrhenius(n: int) -> NetworkProblem:
    """A solid cylinder with k(T), a film and, in every other row, radiation."""
    draw = np.random.default_rng(12)
    T, one = draw.uniform(0.0, 200.0, n), np.ones(n)
    source = HeatSource(10.0 * one, SourceLaw.ARRHENIUS, reference=T, activation=draw.uniform(8e3, 2e4, n), driven=True)
    law = FilmAndRadiation(10.0 ** draw.uniform(-2, 3, n), T, draw.uniform(0.0, 0.9, n) * (np.arange(n) % 2))
    layer = NetworkLayer(one, Conductivity(10.0 ** draw.uniform(-1, 1, n), draw.uniform(0.0, 2e-3, n), T), source)
    return NetworkProblem(Shape.CYLINDER, (layer,), NetworkFace(), NetworkFace(law=law), T)


def measure_turning(n: int) -> dict[str, float]:
    """What a turning point and an allowable scale cost, in solves at 60 % and 99 % of the turning point."""
    problem = arrhenius(n)
    turning_scale(problem.take(np.arange(50)))

    def timed(action: Callable[..., Any], *arguments: Any) -> tuple[Any, float]:
        start = time.process_time()
        result = action(*arguments)
        return result, time.process_time() - start

    turn, turning = timed(turning_scale, problem)
    _, easy = timed(solve_network, problem, 0.6 * turn.scale)
    _, near = timed(solve_network, problem, 0.99 * turn.scale)
    _, allowing = timed(allowable_scale, problem, (Limit(problem.coldest + 5.0),))
    names = ("us a case at 60 %", "us at 99 %", "turning over 60 %", "turning over 99 %", "allowable over 60 %")
    values = (easy / n * 1e6, near / n * 1e6, turning / easy, turning / near, allowing / easy)
    return dict(zip(names, values, strict=True))


class Film:
    """h(T − T_f)."""

    linear = True

    def __init__(self, film: np.ndarray, fluid: np.ndarray) -> None:
        self.film, self.fluid = film, fluid

    def __call__(self, T: np.ndarray, rows: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        film = self.film[rows]
        return film * (T - self.fluid[rows]), film + 0.0 * T


def common(n: int) -> dict[str, NetworkProblem]:
    """Bodies of everyday tables, each with a source that rises with temperature."""
    draw = np.random.default_rng(3)
    one, T = np.ones(n), draw.uniform(10.0, 40.0, n)
    R, rho = draw.uniform(0.002, 0.01, n), 1.7e-8
    copper = HeatSource(one / rho, SourceLaw.PER_SLOPED, 0.004 * one, 20.0 * one, None, None, True, 0, 2.0 * np.pi / rho * one)
    film = NetworkFace(law=Film(draw.uniform(20.0, 60.0, n), T))
    radiant = NetworkFace(law=FilmAndRadiation(draw.uniform(20.0, 60.0, n), T, draw.uniform(0.1, 0.9, n)))
    wire = NetworkLayer(R, Conductivity(380.0 * one), copper, joint=1e-4 * one)
    sleeve = NetworkLayer(0.3 * R, Conductivity(0.3 * one), HeatSource(0.0 * one))
    current = Supply(draw.uniform(400.0, 600.0, n) * (R / 0.005) ** 1.5, True)
    rising = HeatSource(draw.uniform(1e5, 3e5, n), SourceLaw.SLOPED, 0.003 * one, 20.0 * one, driven=True)
    d = draw.uniform(0.01, 0.02, n)
    slab = NetworkLayer(d, Conductivity(one), rising)
    warm = NetworkLayer(d, Conductivity(one, 1e-3 * one, 20.0 * one), rising)
    strip = NetworkLayer(10.0 * d, Conductivity(300.0 * one), rising, SideLoss(400.0 * one, draw.uniform(5.0, 20.0, n), T))
    free, held = NetworkFace(), NetworkFace(held=T)
    return {
        "wire with a current": NetworkProblem(Shape.CYLINDER, (wire, sleeve), free, film, T, supplies=(current,)),
        "solid winding, radiation": NetworkProblem(Shape.CYLINDER, (slab,), free, radiant, T),
        "solid winding, k(T)": NetworkProblem(Shape.CYLINDER, (warm,), free, radiant, T),
        "wall, film": NetworkProblem(Shape.WALL, (slab,), held, film, T),
        "bar, held ends": NetworkProblem(Shape.WALL, (strip,), held, held, T),
    }


def best(action: Callable[[], Any], times: int) -> float:
    """The shortest of some runs [s]."""
    found = []
    for _ in range(times):
        start = time.process_time()
        action()
        found.append(time.process_time() - start)
    return min(found)


def measure_common(n: int, times: int) -> None:
    x = np.ones(1)
    addition = best(lambda: [x + x for _ in range(1000)], 5) * 1e3
    for name, problem in common(n).items():
        top = peak(solve_network(problem)).T
        limits = (Limit(top + 10.0),)
        allowable_scale(problem, limits)
        one = best(lambda problem=problem: peak(solve_network(problem)), times)
        allowing = best(lambda problem=problem, limits=limits: allowable_scale(problem, limits), times)
        print(
            f"{name}, {n} rows: {one / n * 1e6:.3g} us a row with its peak ({one / n / addition * 1e6:.3g} additions),"
            f" allowable {allowing / one:.2f} peaks, answered {np.isfinite(top).mean():.3f}"
        )


def measure(sloped_k: bool, shape: Shape) -> dict[str, float]:
    problem = drawn(ROWS, sloped_k, shape)
    solve_network(problem.take(np.arange(50)))
    start = time.process_time()
    state = solve_network(problem)
    each = (time.process_time() - start) / ROWS
    assert (state.status == Status.SOLVED).all()
    start = time.process_time()
    top = peak(state)
    peaked = each + (time.process_time() - start) / ROWS
    start = time.process_time()
    errors = []
    for row in range(BVP_ROWS):
        T = by_collocation_of_scipy(problem, row)
        errors.append(np.max(np.abs(T - state.left[:, row])) / (top.T[row] - problem.coldest[row]))
    slow = (time.process_time() - start) / BVP_ROWS
    limit = Limit(np.full(ROWS, 120.0))
    allowable_scale(problem.take(np.arange(50)), (Limit(limit.value[:50]),))
    start = time.process_time()
    allowed = allowable_scale(problem, (limit,))
    allowing = (time.process_time() - start) / ROWS
    few = problem.take(np.arange(2000))
    start = time.process_time()
    turning_scale(few)
    turning = (time.process_time() - start) / 2000
    one = problem.take(np.array([0]))
    alone = best(lambda: peak(solve_network(one)), 60)
    one_limit = (Limit(limit.value[:1]),)
    alone_allowing = best(lambda: allowable_scale(one, one_limit), 30)
    return {
        "us a case": each * 1e6,
        "us with peak": peaked * 1e6,
        "ratio to solve_bvp": slow / each,
        "worst difference from solve_bvp over the rise": max(errors),
        "allowable over peak": allowing / peaked,
        "allowed": float(np.isfinite(allowed.scale).mean()),
        "turning over peak": turning / peaked,
        "us one case alone": alone * 1e6,
        "its allowable over peak": alone_allowing / alone,
    }


if __name__ == "__main__":
    for rows, repeats in ((1, 60), (2_000, 5), (100_000, 2)):
        measure_common(rows, repeats)
    print("Arrhenius, k(T), solid cylinder", {name: float(f"{value:.3g}") for name, value in measure_turning(2000).items()})
    for kind, sloped in (("constant k", False), ("k(T)", True)):
        for shape in (Shape.WALL, Shape.CYLINDER):
            print(kind, shape.name.lower(), {name: float(f"{value:.3g}") for name, value in measure(sloped, shape).items()})

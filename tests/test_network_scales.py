"""Allowable and turning scales of the network engine, against closed forms and printed criticals."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from ingle.conductivities import Conductivity
from ingle.heat_sources import HeatSource, SourceLaw
from ingle.network import NetworkFace, NetworkLayer, NetworkProblem, Status, Supply, peak, solve_network
from ingle.network_scales import RUNAWAY, Limit, allowable_scale, turning_scale
from ingle.shapes import Shape
from network_drawn import Law, draw_problem
from scipy.optimize import brentq
from scipy.special import j0, j1

pytestmark = pytest.mark.long  # half a minute; the engine's own tests beside it run always

L = SourceLaw
# First zeros of the insulated-middle problem with the face held: π/2, first zero of J₀ (Abramowitz & Stegun table 9.5), π.
FIRST_ZERO = (np.pi / 2.0, 2.404825557695773, np.pi)
# ζ tan ζ, ζ J₁/J₀, 1 − ζ cot ζ = Bi: the first roots of transient conduction's textbooks.
BIOT_LAW = (lambda z: z * np.tan(z), lambda z: z * j1(z) / j0(z), lambda z: 1.0 - z / np.tan(z))
# Frank-Kamenetskii's criticals of slab, cylinder, sphere: 0.878457679781, 2, 3.32199211834.
FRANK_KAMENETSKII = (0.878457679781, 2.0, 3.32199211834)


class Film:
    """h(T − T_f), which is linear and says so."""

    linear = True

    def __init__(self, h: np.ndarray, fluid: np.ndarray) -> None:
        self.h, self.fluid = h, fluid

    def __call__(self, T: np.ndarray, rows: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        return self.h[rows] * (T - self.fluid[rows]), self.h[rows] + 0.0 * T


def body(shape: Shape, source: HeatSource, face: NetworkFace, n: int, T: float = 20.0, supplies: tuple = ()) -> NetworkProblem:
    one = np.ones(n)
    return NetworkProblem(shape, (NetworkLayer(one, Conductivity(one), source),), NetworkFace(), face, T * one, supplies=supplies)


@pytest.mark.parametrize("shape", Shape)
def test_linear_sources_run_away_at_their_first_eigenvalue(shape: Shape) -> None:
    biots = np.array([0.1, 1.0, 10.0])
    first = FIRST_ZERO[shape]
    roots = [brentq(lambda z, b=b: BIOT_LAW[shape](z) - b, 1e-6, first - 1e-12, xtol=1e-15) for b in biots]
    source = HeatSource(np.ones(4), L.SLOPED, np.ones(4), 20.0 * np.ones(4), driven=True)
    filmed = body(
        shape,
        HeatSource(np.ones(3), L.SLOPED, np.ones(3), 20.0 * np.ones(3), driven=True),
        NetworkFace(law=Film(biots, 20.0 * np.ones(3))),
        3,
    )
    held = body(shape, source, NetworkFace(held=20.0 * np.ones(4)), 4)
    for problem, critical in ((filmed, np.array(roots) ** 2), (held, np.full(4, first**2))):
        assert turning_scale(problem).scale == pytest.approx(critical, rel=1e-12)
        assert (solve_network(problem, 0.999 * critical).status == Status.SOLVED).all()
        for beyond in (1.001, 1.5, 5.0, 11.0, 50.0):
            assert (solve_network(problem, beyond * critical).status == Status.RUNAWAY).all()


@pytest.mark.parametrize("shape", Shape)
def test_frank_kamenetskii_criticals_are_limits_of_the_arrhenius_source(shape: Shape) -> None:
    """With ε = RT/E the critical is δ(1 + ε + …): 1e-6 here, so 2e-6 is allowed."""
    one, T = np.ones(2), 300.0
    E = 1e6 * T
    source = HeatSource(T * T / E * one, L.ARRHENIUS, reference=(T - 273.15) * one, activation=E * one, driven=True)
    problem = body(shape, source, NetworkFace(held=(T - 273.15) * one), 2, T - 273.15)
    critical = turning_scale(problem).scale
    assert critical == pytest.approx(FRANK_KAMENETSKII[shape], rel=2e-6)
    assert (solve_network(problem, 0.999 * critical).status == Status.SOLVED).all()
    assert (solve_network(problem, 1.001 * critical).status == Status.RUNAWAY).all()


def test_the_bratu_state_is_the_cool_one() -> None:
    """Slab, θ = 2 ln[cosh a / cosh(a x)], δ = 2a²/cosh² a: the smaller root a at 40 digits."""
    T, E = 300.0, 3e12
    deltas = np.array([0.1, 0.5, 0.8, 0.878])
    one = np.ones(4)
    source = HeatSource(deltas * T * T / E, L.ARRHENIUS, reference=(T - 273.15) * one, activation=E * one)
    state = solve_network(body(Shape.WALL, source, NetworkFace(held=(T - 273.15) * one), 4, T - 273.15))
    for row, delta in enumerate(deltas):
        with mp.workdps(40):
            a = mp.findroot(
                lambda a, delta=delta: 2 * a * a / mp.cosh(a) ** 2 - mp.mpf(float(delta)),
                (mp.mpf("0.01"), mp.mpf("1.19")),
                "anderson",
            )
            theta = float(2 * mp.log(mp.cosh(a)))
        # 300 K holds 6e-14 K, and a unit of θ is 3e-8 K here.
        assert (state.left[0, row] - (T - 273.15)) * E / T**2 == pytest.approx(theta, rel=1e-4)


@pytest.mark.parametrize("shape", Shape)
def test_a_peak_limit_is_met_exactly(shape: Shape) -> None:
    limits = np.array([50.0, 100.0, 1000.0])
    source = HeatSource(np.ones(3), L.SLOPED, 0.004 * np.ones(3), 20.0 * np.ones(3), driven=True)
    problem = body(shape, source, NetworkFace(held=20.0 * np.ones(3)), 3)
    found = allowable_scale(problem, (Limit(limits),))
    assert found.governs.tolist() == [0, 0, 0]
    assert pytest.approx(limits, rel=1e-11) == peak(solve_network(problem, found.scale)).T
    if shape == Shape.WALL:
        # u = (1/cos x − 1)/α, x² = λα.
        x = np.arccos(1.0 / (1.0 + 0.004 * (limits - 20.0)))
        assert found.scale == pytest.approx(x * x / 0.004, rel=1e-12)


def test_limits_of_layers_and_faces_and_broken_ones() -> None:
    problem = draw_problem(9, Shape.CYLINDER, True, [L.SLOPED, L.EVEN], ["sloped", "constant"], "none", "law", 30)
    state = solve_network(problem)
    hot = (state.status == Status.SOLVED) & (problem.layers[0].source.scale > 0.0)
    problem = problem.take(np.flatnonzero(hot))
    n = len(problem)
    without = solve_network(problem, np.zeros(n))
    face = without.right[-1] + 7.0
    inner = peak(without, 0).T + 9.0
    found = allowable_scale(problem, (Limit(np.full(n, np.nan)), Limit(face, "right"), Limit(inner, 0)))
    assert ((found.governs == 1) | (found.governs == 2) | (found.governs == RUNAWAY)).all()
    again = solve_network(problem, found.scale)
    at_face, at_core = found.governs == 1, found.governs == 2
    assert again.right[-1][at_face] == pytest.approx(face[at_face], rel=1e-10)
    assert peak(again, 0).T[at_core] == pytest.approx(inner[at_core], rel=1e-10)
    assert (again.right[-1] <= face + 1e-9)[found.governs >= 0].all()
    broken = allowable_scale(problem, (Limit(without.right[-1] - 5.0, "right"),))
    assert (broken.broken == 0).all()
    assert np.isnan(broken.scale).all()


def test_a_limit_beyond_runaway_gives_the_turning_point() -> None:
    one, T = np.ones(1), 300.0
    source = HeatSource(one, L.ARRHENIUS, reference=(T - 273.15) * one, activation=10_000.0 * one, driven=True)
    problem = body(Shape.SPHERE, source, NetworkFace(held=(T - 273.15) * one), 1, T - 273.15)
    turning = turning_scale(problem).scale
    found = allowable_scale(problem, (Limit(300.0 * one),))
    assert found.governs.tolist() == [RUNAWAY]
    assert found.scale == pytest.approx(turning, rel=1e-9)


def test_a_current_runs_away_where_its_heat_outgrows_the_film() -> None:
    """Thin wire, so even inside: I² ρ₀α/(πR²) = 2πR h. The drop inside, Biot 1e-6, is left out."""
    one, R, h, rho, alpha = np.ones(1), 0.001, 1e-3, 1.7e-8, 0.004
    critical = np.sqrt(2.0 * np.pi * R * h * np.pi * R * R / (rho * alpha))
    source = HeatSource(one / rho, L.PER_SLOPED, alpha * one, 20.0 * one, group=0, weight=2.0 * np.pi / rho * one, driven=True)
    layer = NetworkLayer(R * one, Conductivity(1.0 * one), source)
    problem = NetworkProblem(
        Shape.CYLINDER, (layer,), NetworkFace(), NetworkFace(law=Film(h * one, 20.0 * one)), 20.0 * one, supplies=(Supply(one, True),)
    )
    assert np.sqrt(turning_scale(problem).scale) == pytest.approx(critical, rel=2e-6)
    found = allowable_scale(problem, (Limit(90.0 * one),))
    # I² ρ₀(1 + α·70)/(πR²) = 2πR h·70
    assert np.sqrt(found.scale) == pytest.approx(critical * np.sqrt(alpha * 70.0 / (1.0 + alpha * 70.0)), rel=2e-6)


@pytest.mark.parametrize("shape", Shape)
def test_random_turning_points_divide_answers_from_refusals(shape: Shape) -> None:
    draw = np.random.default_rng([12, shape])
    n = 60
    T = draw.uniform(0.0, 200.0, n)
    h, e = 10.0 ** draw.uniform(-2, 3, n), draw.uniform(0.0, 0.9, n) * (np.arange(n) % 2)
    k = Conductivity(10.0 ** draw.uniform(-1, 1, n), draw.uniform(0.0, 2e-3, n), T)
    source = HeatSource(np.full(n, 10.0), L.ARRHENIUS, reference=T, activation=draw.uniform(8e3, 2e4, n), driven=True)
    law = Law(h, T, e, T, 0.0 * T)
    problem = NetworkProblem(shape, (NetworkLayer(np.ones(n), k, source),), NetworkFace(), NetworkFace(law=law), T)
    turn = turning_scale(problem)
    assert np.isfinite(turn.scale).all()
    assert (solve_network(problem, 0.999 * turn.scale).status == Status.SOLVED).all()
    assert (solve_network(problem, 1.001 * turn.scale).status == Status.RUNAWAY).all()
    # The hot branch is far above; twice to a million times the turning point is refused as well.
    for beyond in (2.0, 1e2, 1e6):
        assert (solve_network(problem, beyond * turn.scale).status != Status.SOLVED).all()


def test_a_source_that_falls_never_runs_away() -> None:
    one = np.ones(1)
    source = HeatSource(one, L.PER_SLOPED, 0.004 * one, 20.0 * one, driven=True)
    problem = body(Shape.WALL, source, NetworkFace(held=20.0 * one), 1)
    assert np.isinf(turning_scale(problem).scale).all()


@pytest.mark.parametrize("shape", Shape)
def test_a_conductivity_that_falls_to_nothing_ends_the_scale(shape: Shape) -> None:
    """k₀(1 − βu), face held at u = 0: θ = λ/[2(m + 1)] at the middle, at most k₀/(2β) but for the floor's 1e-6 of it."""
    beta, one = np.array([1e-3, 5e-2]), np.ones(2)
    for slope in (None, 0.3 * beta, -0.3 * beta):
        law = (L.EVEN, None, None) if slope is None else (L.SLOPED, slope, 20.0 * one)
        layer = NetworkLayer(one, Conductivity(one, -beta, 20.0 * one), HeatSource(one, *law, driven=True))
        problem = NetworkProblem(shape, (layer,), NetworkFace(), NetworkFace(held=20.0 * one), 20.0 * one)
        turn = turning_scale(problem).scale
        if slope is None:
            assert turn == pytest.approx((shape + 1.0) / beta * (1.0 - 1e-6), rel=1e-4)
        assert (solve_network(problem, (1.0 - 1e-4) * turn).status == Status.SOLVED).all()
        assert np.isin(solve_network(problem, (1.0 + 1e-4) * turn).status, (Status.FLOORED_K, Status.RUNAWAY)).all()


def test_a_limit_at_a_held_face_is_no_search() -> None:
    """No source warms it: it is broken at once, or another limit, or none, governs."""
    one = np.ones(2)
    source = HeatSource(one, L.SLOPED, -0.001 * one, 20.0 * one, driven=True)
    problem = body(Shape.WALL, source, NetworkFace(held=20.0 * one), 2)
    found = allowable_scale(problem, (Limit(np.array([30.0, 10.0]), "right"), Limit(one * 50.0)))
    assert found.governs.tolist() == [1, 0]
    assert found.broken.tolist() == [-1, 0]
    assert pytest.approx(50.0, rel=1e-11) == peak(solve_network(problem, found.scale)).T[0]
    alone = allowable_scale(problem, (Limit(np.array([30.0, 10.0]), "right"),))
    assert alone.never.tolist() == [True, False]

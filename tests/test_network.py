"""The network engine against shooting, against closed forms, and against itself.

The reference is `network_drawn.Shot`: an explicit eighth-order integrator with the secant method, continued from a small source.
"""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from ingle.conductivities import Conductivity
from ingle.heat_sources import HeatSource, SideLoss, SourceLaw
from ingle.network import NetworkFace, NetworkLayer, NetworkProblem, Status, Supply, mean, peak, solve_network, temperature
from ingle.shapes import Shape
from network_drawn import Law, Shot, draw_problem
from scipy.optimize import brentq

L = SourceLaw
ROWS = 8
BODIES = [
    (Shape.WALL, False, [L.SLOPED], ["constant"], "law", "held", False),
    (Shape.WALL, False, [L.SLOPED, L.EVEN, L.SLOPED], ["constant"] * 3, "law", "law", False),
    (Shape.CYLINDER, True, [L.SLOPED, L.EVEN], ["constant"] * 2, "none", "law", False),
    (Shape.CYLINDER, True, [L.PER_SLOPED, L.EVEN], ["sloped", "sloped"], "none", "law", False),
    (Shape.SPHERE, True, [L.ARRHENIUS, L.EVEN, L.SLOPED], ["sloped", "table", "constant"], "none", "held", False),
    (Shape.CYLINDER, False, [L.SLOPED, L.EVEN, L.PER_SLOPED], ["sloped", "table", "sloped"], "flux", "law", False),
    (Shape.SPHERE, False, [L.ARRHENIUS, L.SLOPED], ["sloped", "sloped"], "law", "flux", False),
    (Shape.WALL, False, [L.ARRHENIUS, L.EVEN, L.PER_SLOPED], ["sloped", "table", "constant"], "held", "law", False),
    (Shape.CYLINDER, True, [L.TABLE, L.EVEN], ["constant", "table"], "none", "law", False),
    (Shape.CYLINDER, False, [L.TABLE, L.PER_TABLE], ["table", "sloped"], "held", "law", False),
    (Shape.WALL, False, [L.TABLE, L.SLOPED], ["table", "table"], "law", "held", False),
    (Shape.WALL, False, [L.SLOPED, L.SLOPED], ["constant", "sloped"], "held", "law", True),
    (Shape.WALL, False, [L.EVEN, L.PER_SLOPED], ["constant", "table"], "flux", "held", True),
]


def named(body: tuple) -> str:
    shape, solid, laws, ks, left, right, bar = body
    return "-".join(
        [shape.name.lower(), "solid" if solid else "open", *(x.name.lower() for x in laws), *ks, left, right, "bar" * bar]
    )


@pytest.mark.parametrize("body", BODIES, ids=named)
def test_layers_agree_with_shooting(body: tuple) -> None:
    """Face temperatures to 1e-10 of the rise, heats to 1e-9 of the largest; no peak lower than a sampled one."""
    *kind, bar = body
    problem = draw_problem(3, *kind, ROWS, bar=bar)
    state = solve_network(problem)
    top = peak(state)
    solved = 0
    for row in range(ROWS):
        if state.status[row] != Status.SOLVED:
            continue
        solved += 1
        shot = Shot(problem, row)
        start = state.left[0, row]
        if not problem.solid and problem.left.held is not None:
            start = state.Q_left[0, row]
        elif not problem.solid and problem.left.law is not None:
            start = state.surfaces[0, row]
        # The secant starts a tenth of a percent off.
        tracks = shot.solve((start * 1.001 + 1e-3, start), np.array([1.0]))
        rise = top.T[row] - problem.coldest[row] + 1e-9
        heat = max(np.abs(x[:, row]).max() for x in (state.Q_left, state.Q_right, state.made)) + 1e-12
        for layer, (a, b, path, _, end) in enumerate(tracks):
            assert abs(end[0] - state.right[layer, row]) <= 1e-10 * rise + 1e-12 * 300.0
            assert abs(end[1] - state.Q_right[layer, row]) <= 1e-9 * heat
            samples = np.linspace(a, b, 400)
            assert path(samples)[0].max() <= top.T[row] + 1e-9 * rise + 1e-10
            inner = 0.0 if problem.solid and layer == 0 else a
            depth = (b - inner) / 2.0
            assert abs(path(inner + depth)[0] - temperature(state, layer, np.full(ROWS, depth))[row]) <= 1e-9 * rise + 1e-10
    assert solved >= ROWS - 1


def test_the_state_is_the_one_reached_from_zero_source() -> None:
    """Shooting continued in ten steps from a tenth of the source ends at the same place."""
    problem = draw_problem(4, Shape.CYLINDER, True, [L.ARRHENIUS, L.EVEN], ["sloped", "constant"], "none", "law", 4)
    state = solve_network(problem)
    for row in range(4):
        if state.status[row] != Status.SOLVED:
            continue
        cold = float(problem.coldest[row])
        tracks = Shot(problem, row).solve((cold, cold + 0.1), np.linspace(0.1, 1.0, 10))
        assert tracks[-1][-1][0] == pytest.approx(state.right[-1, row], abs=1e-9)


@pytest.mark.parametrize("body", BODIES, ids=named)
def test_one_case_gets_the_same_bits_as_among_many(body: tuple) -> None:
    *kind, bar = body
    problem = draw_problem(5, *kind, 40, bar=bar)
    state = solve_network(problem)
    top, average = peak(state), mean(state)
    # Alone; and every other row, none of which has a resistance at its faces.
    for rows in ([0], [7], [39], list(range(0, 40, 2))):
        part = solve_network(problem.take(np.array(rows)))
        for name in ("status", "left", "right", "Q_left", "Q_right", "made", "imbalance", "surfaces", "lowest"):
            got, among = getattr(part, name), getattr(state, name)[..., rows]
            assert np.array_equal(got, among, equal_nan=True), (name, rows)
        assert np.array_equal(peak(part).T, top.T[rows], equal_nan=True)
        assert np.array_equal(mean(part), average[rows], equal_nan=True)


@pytest.mark.parametrize("body", BODIES, ids=named)
def test_heat_balances(body: tuple) -> None:
    *kind, bar = body
    state = solve_network(draw_problem(6, *kind, 200, bar=bar))
    good = state.status == Status.SOLVED
    heat = np.maximum(np.abs(state.Q_left).max(axis=0), np.abs(state.made).max(axis=0))[good]
    assert (state.imbalance[good] <= 1e-9 * heat).all()
    assert (np.abs(state.Q_left[1:] - state.Q_right[:-1])[:, good] <= 1e-14 * heat).all()


def test_a_long_fin_keeps_its_digits() -> None:
    """T = T_f + (T_b − T_f) cosh m(L − x)/cosh mL with an insulated tip, m L to 50: the textbook fin."""
    mL = np.array([0.01, 1.0, 10.0, 20.0, 50.0])
    one = np.ones(len(mL))
    for conductivity in (Conductivity(one), Conductivity(one, 0.0 * one, one)):  # in closed form; by nodes
        side = SideLoss(mL * mL, one, 20.0 * one)
        layer = NetworkLayer(one, conductivity, HeatSource(0.0 * one, L.SLOPED, 0.0 * one, one), side)
        problem = NetworkProblem(Shape.WALL, (layer,), NetworkFace(held=120.0 * one), NetworkFace(), 20.0 * one)
        state = solve_network(problem)
        assert state.status.tolist() == [0] * len(mL)
        assert state.Q_left[0] == pytest.approx(100.0 * mL * np.tanh(mL), rel=1e-12)
        assert state.right[0] - 20.0 == pytest.approx(100.0 / np.cosh(mL), abs=1e-10)
        assert temperature(state, 0, one * 0.1) - 20.0 == pytest.approx(100.0 * np.cosh(mL * 0.9) / np.cosh(mL), abs=1e-10)
        assert mean(state) - 20.0 == pytest.approx(100.0 * np.tanh(mL) / mL, rel=1e-11)


def test_more_nodes_converge_faster_than_any_power() -> None:
    """A hollow cylinder with Arrhenius source and k(T): each node gains about the same factor."""
    from ingle.network_newton import newton
    from ingle.network_run import plain_border_of
    from ingle.network_state import cold
    from ingle.network_sweep import build

    one = np.ones(1)
    source = HeatSource(6e4 * one, L.ARRHENIUS, reference=20.0 * one, activation=5000.0 * one)
    layer = NetworkLayer(0.02 * one, Conductivity(2.0 * one, 2e-3 * one, 20.0 * one), source)
    problem = NetworkProblem(Shape.CYLINDER, (layer,), NetworkFace(), NetworkFace(held=20.0 * one), 20.0 * one, inner=0.01 * one)
    found = []
    for N in (3, 5, 7, 9, 24):
        network = build(problem, N, (np.zeros((0, 1)),), False)
        border = plain_border_of(problem, None)
        state = cold(network, border)
        with np.errstate(all="ignore"):
            assert newton(network, border, state).status[0] == Status.SOLVED
        found.append(state.Ta[0][0])
    errors = np.abs(np.array(found[:-1]) - found[-1])
    gains = errors[:-1] / errors[1:]
    assert (gains > 50.0).all(), errors
    assert errors[-1] < 1e-9


def test_a_current_in_a_solid_conductor_is_the_integral_of_its_field() -> None:
    """A poor conductor: k 3 W/(m·K), slope 0.0025/K; checked by the field's own equation with E as a voltage."""
    amperes = np.array([10.0, 100.0, 300.0, 400.0])
    one = np.ones(4)

    def rod(scale: np.ndarray, group: int | None) -> NetworkProblem:
        weight = None if group is None else 2.0 * np.pi / 1e-5 * one
        source = HeatSource(scale, L.PER_SLOPED, 0.0025 * one, 20.0 * one, group=group, weight=weight)
        supplies = () if group is None else (Supply(amperes),)
        law = Law(2000.0 * one, 20.0 * one, 0.0 * one, 20.0 * one, 0.0 * one)
        layer = NetworkLayer(0.02 * one, Conductivity(3.0 * one), source)
        return NetworkProblem(Shape.CYLINDER, (layer,), NetworkFace(), NetworkFace(law=law), 20.0 * one, supplies=supplies)

    state = solve_network(rod(1e5 * one, 0))
    assert state.status.tolist() == [0] * 4
    assert state.root_mu[0] * state.totals[0] == pytest.approx(amperes, rel=1e-13)
    assert 2.0 * np.pi * state.made[0] == pytest.approx(state.root_mu[0] * amperes, rel=1e-13)
    again = solve_network(rod(state.root_mu[0] ** 2 / 1e-5, None))
    assert again.left[0] == pytest.approx(state.left[0], rel=1e-12)
    # With the same density everywhere the centre would be hotter: ρ J² grows where it is hot.
    J = amperes / (np.pi * 0.02**2)
    dense = NetworkProblem(
        Shape.CYLINDER,
        (NetworkLayer(0.02 * one, Conductivity(3.0 * one), HeatSource(1e-5 * J * J, L.SLOPED, 0.0025 * one, 20.0 * one)),),
        NetworkFace(), again.problem.right, 20.0 * one,
    )  # fmt: skip
    assert (solve_network(dense).left[0] - state.left[0])[-1] > 0.5


def test_a_voltage_along_a_bar_has_a_state_where_its_current_alone_would_run_away() -> None:
    """Both ends held, ρ = ρ₀(1 + αu): u = (1/cos(x/2) − 1)/α with U = I R₀ tan(x/2)/(x/2), x² = I²ρ₀αL²/(A²k)."""
    U = np.array([0.01, 0.1, 0.3, 1.0, 3.0])
    one = np.ones(len(U))
    A, length, rho, k, alpha = 1e-6, 0.1, 5.6e-8, 170.0, 0.0045
    source = HeatSource(rho / A**2 * one, L.SLOPED, alpha * one, 20.0 * one, group=0, weight=rho / A * one)
    ends = NetworkFace(held=20.0 * one)
    problem = NetworkProblem(
        Shape.WALL, (NetworkLayer(length * one, Conductivity(k * one), source),), ends, ends, 20.0 * one, supplies=(Supply(U),)
    )
    state = solve_network(problem)
    per = rho * alpha * length**2 / (A * A * k)
    for row, volts in enumerate(U):
        x = brentq(
            lambda x, volts=volts: np.sqrt(x * x / per) * rho * length / A * np.tan(x / 2) / (x / 2) - volts,
            1e-9,
            np.pi - 1e-9,
            xtol=1e-15,
        )
        assert peak(state).T[row] - 20.0 == pytest.approx((1.0 / np.cos(x / 2) - 1.0) / alpha, rel=1e-10)


@pytest.mark.parametrize("shape", Shape)
@pytest.mark.parametrize("solid", [True, False])
def test_means_are_integrals_of_the_temperature(shape: Shape, solid: bool) -> None:
    """Every kind of layer, against 120 Gauss points of the temperatures it answers; bores down to a thousandth."""
    if shape == Shape.WALL and solid:
        return
    one, m = np.ones(3), int(shape)
    inner = None if solid or shape == Shape.WALL else np.array([1.0, 0.1, 1e-3])
    layers = (
        NetworkLayer(one, Conductivity(2.0 * one), HeatSource(30.0 * one)),
        NetworkLayer(one, Conductivity(2.0 * one, 1e-3 * one, one), HeatSource(30.0 * one), joint=0.1 * one),
        NetworkLayer(one, Conductivity(2.0 * one), HeatSource(30.0 * one, L.SLOPED, 1e-3 * one, one)),
        NetworkLayer(one, Conductivity(2.0 * one, 1e-3 * one, one), HeatSource(30.0 * one, L.SLOPED, 1e-3 * one, one)),
    )
    x, w = np.polynomial.legendre.leggauss(10)
    for first in range(4):
        stack = layers[first:] + layers[:first]
        problem = NetworkProblem(shape, stack, NetworkFace(), NetworkFace(held=20.0 * one), 20.0 * one, inner)
        state = solve_network(problem)
        assert state.status.tolist() == [0, 0, 0]
        start = 0.0 * one if inner is None else inner
        for layer in range(4):
            total, volume = 0.0 * one, 0.0 * one
            # Twelve slices, thinner toward the bore.
            edges = np.concatenate([[0.0], np.geomspace(1e-3, 1.0, 12)])
            for low, high in pairwise(edges.tolist()):
                for place, weight in zip(x, w, strict=True):
                    s = (low + high + (high - low) * place) / 2.0 * one
                    dV = weight * (high - low) / 2.0 * (start + s) ** m
                    total, volume = total + dV * temperature(state, layer, s), volume + dV
            assert mean(state, layer) == pytest.approx(total / volume, rel=1e-9)
            start = start + 1.0


def test_rising_resistivity_with_radiation_is_no_runaway() -> None:
    """Its first pivot is negative when cold, yet losses that grow as T⁴ always catch up: the root of the heat balance of a foil."""
    P = np.array([1e3, 1e4, 1e5, 1e6])
    one = np.ones(len(P))
    law = Law(0.0 * one, 20.0 * one, 0.3 * one, 20.0 * one, 0.0 * one)
    layer = NetworkLayer(1e-6 * one, Conductivity(1e5 * one), HeatSource(P / 1e-6, L.SLOPED, 0.0045 * one, 20.0 * one))
    state = solve_network(NetworkProblem(Shape.WALL, (layer,), NetworkFace(), NetworkFace(law=law), 20.0 * one))
    for row, power in enumerate(P):
        T = brentq(
            lambda T, power=power: power * (1 + 0.0045 * (T - 20)) - 0.3 * 5.670374419e-8 * ((T + 273.15) ** 4 - 293.15**4), 20.0, 2e4
        )
        expected = Status.SOLVED if T < 10_000.0 else Status.TOO_HOT
        assert state.status[row] == expected
        if expected == Status.SOLVED:
            assert state.right[0, row] == pytest.approx(T, rel=1e-7)  # the foil's own drop is left out


def test_rows_without_an_outlet_or_on_a_floor_are_refused() -> None:
    one = np.ones(2)
    source = HeatSource(np.array([1e3, 1e6]), L.SLOPED, 0.0 * one, one)
    closed = NetworkProblem(Shape.WALL, (NetworkLayer(0.01 * one, Conductivity(one), source),), NetworkFace(), NetworkFace(), one)
    assert solve_network(closed).status.tolist() == [Status.NO_OUTLET] * 2
    falling = NetworkLayer(0.01 * one, Conductivity(one, -0.01 * one, 0.0 * one), source)
    state = solve_network(NetworkProblem(Shape.WALL, (falling,), NetworkFace(), NetworkFace(held=0.0 * one), 0.0 * one))
    assert state.status[0] == Status.SOLVED
    assert state.status[1] in (Status.FLOORED_K, Status.RUNAWAY)
    assert np.isnan(state.right[0, 1])

"""k(T), its integral and the integral's inverse, against 50-digit arithmetic on the drawn numbers themselves."""

from __future__ import annotations

from itertools import pairwise

import mpmath as mp
import numpy as np
import pytest
from ingle.conductivities import FLOOR, Conductivity, Table

N = 300


def constant(draw: np.random.Generator) -> Conductivity:
    return Conductivity(k0=10.0 ** draw.uniform(-2, 3, N))


def sloped(draw: np.random.Generator) -> Conductivity:
    """Slopes of both signs, and 0; several reach zero conductivity within the temperatures drawn below."""
    slope = draw.uniform(-4e-3, 4e-3, N)
    slope[::10] = 0.0
    return Conductivity(10.0 ** draw.uniform(-2, 3, N), slope, draw.uniform(-50, 100, N))


def tabled(draw: np.random.Generator) -> Conductivity:
    """Two to seven points a row, padded to seven."""
    T = np.cumsum(draw.uniform(1.0, 150.0, (N, 7)), axis=1) - 200.0
    y = 10.0 ** draw.uniform(-1, 2, (N, 7))
    points = draw.integers(2, 8, N)
    for row, p in enumerate(points):
        y[row, p:] = y[row, p - 1]
    return Conductivity(table=Table(T, y))


KINDS = pytest.mark.parametrize("kind", [constant, sloped, tabled])


def exact_k(k: Conductivity, row: int, T: mp.mpf) -> mp.mpf:
    if k.table is not None:
        points = [(mp.mpf(float(a)), mp.mpf(float(b))) for a, b in zip(k.table.T[row], k.table.y[row], strict=True)]
        if points[0][0] >= T:
            return points[0][1]
        for (T0, y0), (T1, y1) in pairwise(points):
            if T <= T1:
                return y0 + (y1 - y0) * (T - T0) / (T1 - T0)
        return points[-1][1]
    assert k.k0 is not None
    k0 = mp.mpf(float(k.k0[row]))
    if k.slope is None or k.reference is None:
        return k0
    return max(k0 * (1 + mp.mpf(float(k.slope[row])) * (T - mp.mpf(float(k.reference[row])))), k0 * mp.mpf(FLOOR))


def kinks(k: Conductivity, row: int) -> list[mp.mpf]:
    if k.table is not None:
        return [mp.mpf(float(T)) for T in k.table.T[row]]
    if k.slope is None or k.reference is None or k.slope[row] == 0.0:
        return []
    return [mp.mpf(float(k.reference[row])) + (mp.mpf(FLOOR) - 1) / mp.mpf(float(k.slope[row]))]


def exact_integral(k: Conductivity, row: int, T0: float, T1: float) -> mp.mpf:
    """The trapezium between neighbouring kinks, which is exact."""
    a, b = mp.mpf(float(T0)), mp.mpf(float(T1))
    low, high = min(a, b), max(a, b)
    places = [low, *sorted(T for T in kinks(k, row) if low < T < high), high]
    total = mp.fsum((exact_k(k, row, x) + exact_k(k, row, y)) / 2 * (y - x) for x, y in pairwise(places))
    return total if b >= a else -total


def drawn_ends(draw: np.random.Generator) -> tuple[np.ndarray, np.ndarray]:
    """Spans from a nanokelvin to a thousand kelvin, upward and downward."""
    T0 = draw.uniform(-300.0, 700.0, N)
    return T0, T0 + draw.choice([-1.0, 1.0], N) * 10.0 ** draw.uniform(-9, 3, N)


@KINDS
def test_integrals_keep_their_digits(kind) -> None:
    draw = np.random.default_rng(7)
    k = kind(draw)
    T0, T1 = drawn_ends(draw)
    I = k.integral(T0, T1)  # noqa: E741
    with mp.workdps(50):
        for row in range(N):
            exact = exact_integral(k, row, T0[row], T1[row])
            # The sloped form loses 1/FLOOR of its last digit next to its floor.
            assert abs(float(I[row]) - exact) <= 3e-13 * abs(exact), row
            start = exact_k(k, row, mp.mpf(float(T0[row])))
            assert abs(float(k.at(T0)[row]) - start) <= 3e-13 * start, row


@KINDS
def test_the_end_of_an_integral_is_exact(kind) -> None:
    draw = np.random.default_rng(8)
    k = kind(draw)
    T0, T1 = drawn_ends(draw)
    with mp.workdps(50):
        I = np.array([float(exact_integral(k, row, T0[row], T1[row])) for row in range(N)])  # noqa: E741
    found = k.end(T0, I)
    # A temperature holds 1.1e-16 of itself; what is left is of the span.
    slip = np.abs(found - T1) - 3e-16 * (np.abs(T0) + np.abs(T1))
    assert (slip <= 4e-13 * np.abs(T1 - T0)).all(), (slip / np.abs(T1 - T0)).max()


@KINDS
def test_one_case_gets_the_same_bits_as_among_many_and_at_many_places(kind) -> None:
    draw = np.random.default_rng(9)
    k = kind(draw)
    T0, T1 = drawn_ends(draw)
    places = np.stack([T0, T1, T0 + 1.0])
    I = k.integral(T0, places)  # noqa: E741
    for row in (0, 10, 137, N - 1):
        one = k.take(np.array([row]))
        for i in range(3):
            assert one.at(places[i, row : row + 1])[0] == k.at(places)[i, row]
            assert one.integral(T0[row : row + 1], places[i, row : row + 1])[0] == I[i, row]
            assert one.end(T0[row : row + 1], I[i, row : row + 1])[0] == k.end(T0, I)[i, row]


def test_a_table_has_the_slope_of_the_right_side_and_is_held_beyond_its_ends() -> None:
    table = Table(np.array([[0.0, 10.0, 20.0]]), np.array([[1.0, 3.0, 2.0]]))
    T = np.array([[-5.0], [0.0], [5.0], [10.0], [15.0], [20.0], [25.0]])
    assert table.at(T)[:, 0].tolist() == [1.0, 1.0, 2.0, 3.0, 2.5, 2.0, 2.0]
    assert table.slope(T)[:, 0] == pytest.approx([0.0, 0.2, 0.2, -0.1, -0.1, 0.0, 0.0])


def test_a_shifted_conductivity_counts_from_another_zero() -> None:
    zero = np.full(N, 30.0)
    for kind in (constant, sloped, tabled):
        k = kind(np.random.default_rng(10))
        T = np.linspace(-100.0, 500.0, N)
        assert k.shifted(zero).at(T - zero) == pytest.approx(k.at(T), rel=1e-12)


def test_an_answer_on_the_floor_is_not_usable() -> None:
    k = Conductivity(np.array([2.0, 2.0]), np.array([-0.01, -0.01]), np.array([0.0, 0.0]))
    assert k.usable(np.array([0.0, 0.0]), np.array([99.8, 99.95])).tolist() == [True, False]
    assert k.at(np.array([99.95, 150.0])).tolist() == [0.002, 0.002]


def test_a_conductivity_is_exactly_one_of_its_forms() -> None:
    one = np.array([1.0])
    with pytest.raises(ValueError, match=r"^a conductivity is k0, or k0 with slope and reference, or a table$"):
        Conductivity()
    with pytest.raises(ValueError, match=r"^a conductivity is k0, or k0 with slope and reference, or a table$"):
        Conductivity(one, slope=one)
    with pytest.raises(ValueError, match=r"^a table of conductivity takes no slope$"):
        Conductivity(slope=one, reference=one, table=Table(one[:, None], one[:, None]))

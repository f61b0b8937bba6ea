"""The integrals over a shell against their printed forms at 60 digits, from skins to nearly solid bodies.

Reached, over 1,800 shells of each shape with thickness/radius from 1e-12 to 1e12: 5e-16 for walls and spheres, 8e-15 for
cylinders outward and 1.8e-14 inward. Asserted with room for another machine's logarithm. Inward, a cylinder's ``path``
(which the march takes outward only) loses digits as a/b, since d/a is rounded before its logarithm.
"""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import mpmath as mp
import numpy as np
import pytest
from ingle import shapes
from ingle.shapes import MEASURE, Shape

DIGITS = 60
WITHIN = {Shape.WALL: 2e-15, Shape.CYLINDER: 5e-14, Shape.SPHERE: 2e-15}
NAMES = ("volume", "path", "source_path", "source_square")


def printed(shape: Shape, a: float, d: float) -> tuple[Any, Any, Any, Any]:
    """V, W, D and U integrated by hand: r^m, r^−m, V r^−m and V² r^−m from a to b, with V = (r^(m+1) − a^(m+1))/(m + 1)."""
    a, d = mp.mpf(a), mp.mpf(d)
    b = a + d
    if shape == Shape.WALL:
        return d, d, d**2 / 2, d**3 / 3
    if shape == Shape.CYLINDER:
        W = mp.log(b / a)
        square = b**2 - a**2
        return square / 2, W, square / 4 - a**2 * W / 2, (b**4 - a**4) / 16 - a**2 * square / 4 + a**4 * W / 4
    W = 1 / a - 1 / b
    square = b**2 - a**2
    return (b**3 - a**3) / 3, W, square / 6 - a**3 * W / 3, ((b**5 - a**5) / 5 - a**3 * square + a**6 * W) / 9


def shells(inward: bool) -> tuple[np.ndarray, np.ndarray]:
    """Radii and thicknesses; more of them where a cylinder's series hands over to its printed form."""
    draw = np.random.default_rng(5)
    if inward:  # from the outside to a bore of down to 1e-9 of it
        depth = np.concatenate([10.0 ** draw.uniform(-12.0, -0.3, 900), 1.0 - 10.0 ** draw.uniform(-9.0, -0.3, 300)])
    else:
        depth = 10.0 ** draw.uniform(-12.0, 12.0, 1200)
    depth = np.concatenate([depth, np.geomspace(0.05, 0.5, 600)])
    a = 10.0 ** draw.uniform(-6.0, 6.0, len(depth))
    return a, (-depth if inward else depth) * a


@pytest.mark.parametrize("inward", [False, True], ids=["outward", "inward"])
@pytest.mark.parametrize("shape", list(Shape), ids=lambda shape: shape.name.lower())
def test_integrals_keep_their_digits(shape: Shape, inward: bool) -> None:
    a, d = shells(inward)
    found = [getattr(shapes, name)(shape, a, d) for name in NAMES]
    worst: dict[str, tuple[float, float]] = dict.fromkeys(NAMES, (0.0, 0.0))
    with mp.workdps(DIGITS):
        for row in range(len(a)):
            for name, got, want in zip(NAMES, found, printed(shape, a[row], d[row]), strict=True):
                slip = float(abs((mp.mpf(got[row]) - want) / want))
                if name == "path" and inward:
                    slip *= (a[row] + d[row]) / a[row]
                worst[name] = max(worst[name], (slip, d[row] / a[row]))
    print(f"{shape.name} {'inward' if inward else 'outward'}: largest relative error and its d/a {worst}")
    assert all(slip <= WITHIN[shape] for slip, _ in worst.values()), worst


@pytest.mark.parametrize("shape", list(Shape), ids=lambda shape: shape.name.lower())
def test_printed_forms_are_the_integrals(shape: Shape) -> None:
    """The forms above against quadrature of their definitions, so that neither copies the other's slip."""
    with mp.workdps(30):
        a, d = mp.mpf("0.7"), mp.mpf("1.1")

        def V(r: Any) -> Any:
            return mp.quad(lambda s: s**shape, [a, r])

        integrals = (
            V(a + d),
            mp.quad(lambda r: r**-shape, [a, a + d]),
            mp.quad(lambda r: V(r) * r**-shape, [a, a + d]),
            mp.quad(lambda r: V(r) ** 2 * r**-shape, [a, a + d]),
        )
        forms = printed(shape, a, d)
    assert [float(abs(x - y) / y) for x, y in zip(forms, integrals, strict=True)] == pytest.approx([0.0] * 4, abs=1e-20)


@pytest.mark.parametrize("shape", list(Shape), ids=lambda shape: shape.name.lower())
def test_depth_of_a_volume_undoes_the_volume(shape: Shape) -> None:
    a, d = shells(inward=False)
    back = shapes.depth_of_volume(shape, a, shapes.volume(shape, a, d))
    assert np.max(np.abs(back / d - 1.0)) <= 4e-15


@pytest.mark.parametrize("shape", [Shape.CYLINDER, Shape.SPHERE], ids=["cylinder", "sphere"])
def test_a_vanishing_bore_approaches_the_solid_body(shape: Shape) -> None:
    """V, D and U approach those of the solid body as the bore's own volume vanishes, (a/R)^(m+1) ln(R/a) at most."""
    R = np.array([0.03])
    solid = [shapes.solid_volume(shape, R), shapes.solid_source_path(shape, R), shapes.solid_source_square(shape, R)]
    gaps = []
    for share in (1e-2, 1e-3, 1e-4):
        a = share * R
        bored = [f(shape, a, R - a) for f in (shapes.volume, shapes.source_path, shapes.source_square)]
        gaps.append([abs(x[0] / y[0] - 1.0) for x, y in zip(bored, solid, strict=True)])
        assert max(gaps[-1]) <= 8.0 * share**2 * np.log(1.0 / share)
    assert all(np.less(later, earlier).all() for earlier, later in pairwise(gaps))


def test_solid_integrals_by_hand() -> None:
    """R^(m+1)/(m+1), R²/[2(m+1)] and R^(m+3)/[(m+1)²(m+3)] at R = 2."""
    R = np.array([2.0])
    functions = (shapes.solid_volume, shapes.solid_source_path, shapes.solid_source_square)
    for shape, by_hand in ((Shape.CYLINDER, (2.0, 1.0, 1.0)), (Shape.SPHERE, (8 / 3, 2 / 3, 32 / 45))):
        assert [f(shape, R)[0] for f in functions] == pytest.approx(by_hand, rel=1e-15)


def test_areas_and_what_they_are_counted_in() -> None:
    """r^m, and the heat that r^m q″ stands for: a square metre of wall, a metre of cylinder, a whole sphere."""
    r = np.array([0.5, 3.0])
    assert shapes.area(Shape.WALL, r) == 1.0
    assert np.array_equal(shapes.area(Shape.CYLINDER, r), r)
    assert np.array_equal(shapes.area(Shape.SPHERE, r), r * r)
    assert [MEASURE[s] * shapes.area(s, r[1:]) for s in Shape] == pytest.approx([1.0, 2 * np.pi * 3.0, 4 * np.pi * 9.0], rel=1e-15)

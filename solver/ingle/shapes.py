"""Integrals over a wall, cylinder or sphere between two places, written so that thin shells keep their digits.

A place is a distance s from the left face of a wall (m = 0) or a radius r of a cylinder (m = 1) or sphere (m = 2), in
metres. Heat is carried as Q = r^m q″: heat per unit of wall area, per 2π metres of cylinder, per 4π of sphere, so that one
balance, dQ/dr = r^m q, serves all three. Every function is elementwise over arrays of cases, d ≥ 0.
"""

from __future__ import annotations

from collections.abc import Callable
from enum import IntEnum
from math import pi

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


class Shape(IntEnum):
    """The exponent m of the area, which grows as r^m."""

    WALL = 0
    CYLINDER = 1
    SPHERE = 2


# Q times this is heat per m² of wall, per metre of cylinder, or of the whole sphere.
MEASURE = (1.0, 2.0 * pi, 4.0 * pi)

# Σ wⁿ/(2n + 3) to n = 11: below 1e-17 at the largest w used, 0.04.
_ATANH_TAIL = tuple(1.0 / (2 * n + 3) for n in range(11, -1, -1))
_NEAR = 0.2


def area(shape: Shape, r: Array) -> Array | float:
    """r^m."""
    if shape == Shape.WALL:
        return 1.0
    return r if shape == Shape.CYLINDER else r * r


def volume(shape: Shape, a: Array, d: Array) -> Array:
    """V = ∫ r^m dr from a to a + d."""
    if shape == Shape.WALL:
        return d
    b = a + d
    if shape == Shape.CYLINDER:
        return d * (a + b) / 2.0
    return d * (a * a + a * b + b * b) / 3.0


def depth_of_volume(shape: Shape, a: Array, v: Array) -> Array:
    """The d at which ``volume(shape, a, d)`` is v."""
    if shape == Shape.WALL:
        return v
    if shape == Shape.CYLINDER:
        root: Array = np.sqrt(a * a + 2.0 * v)
        return 2.0 * v / (a + root)
    b: Array = np.cbrt(a * a * a + 3.0 * v)
    return 3.0 * v / (a * a + a * b + b * b)


def path(shape: Shape, a: Array, d: Array) -> Array:
    """W = ∫ dr/r^m from a to a + d."""
    if shape == Shape.WALL:
        return d
    if shape == Shape.CYLINDER:
        W: Array = np.log1p(d / a)
        return W
    return d / (a * (a + d))


def source_path(shape: Shape, a: Array, d: Array) -> Array:
    """D = ∫ V(r)/r^m dr from a to a + d, V counted from a."""
    if shape == Shape.WALL:
        return d * d / 2.0
    b = a + d
    if shape == Shape.SPHERE:
        return d * d * (a + a + b) / (6.0 * b)
    return _near_or_far(a, b, d, _cylinder_source_near, _cylinder_source_far)


def source_square(shape: Shape, a: Array, d: Array) -> Array:
    """U = ∫ V(r)²/r^m dr from a to a + d; the mean over the volume needs it."""
    if shape == Shape.WALL:
        return d * d * d / 3.0
    b = a + d
    if shape == Shape.SPHERE:
        return d * d * d * (b * b * b + 3.0 * a * b * b + 6.0 * a * a * b + 5.0 * a * a * a) / (45.0 * b)
    return _near_or_far(a, b, d, _cylinder_square_near, _cylinder_square_far)


def solid_volume(shape: Shape, R: Array) -> Array:
    """V of a solid body of radius R, R^(m+1)/(m + 1)."""
    return R * area(shape, R) / (shape + 1.0)


def solid_source_path(shape: Shape, R: Array) -> Array:
    """D of a solid body from its centre to R, R²/[2(m + 1)]."""
    return R * R / (2.0 * (shape + 1.0))


def solid_source_square(shape: Shape, R: Array) -> Array:
    """U of a solid body from its centre to R, R^(m+3)/[(m + 1)²(m + 3)]."""
    return R * R * R * area(shape, R) / ((shape + 1.0) * (shape + 1.0) * (shape + 3.0))


# Cylinder. With y = (b² − a²)/a² and z = y/(2 + y) = (b² − a²)/(b² + a²), log1p(y) = 2 artanh z = 2z + 2z³ S(z²),
# S(w) = Σ wⁿ/(2n + 3); put into D = a²[y − log1p(y)]/4 and U = a⁴[y²/2 − y + log1p(y)]/8 the leading terms cancel by
# hand, which leaves sums without cancellation for thin shells. Far from there the printed forms are accurate.

_Form = Callable[[Array, Array, Array], Array]


def _near_or_far(a: Array, b: Array, d: Array, near_form: _Form, far_form: _Form) -> Array:
    near = np.abs(d * (a + b)) <= _NEAR * (a * a + b * b)
    if near.all():
        return near_form(a, b, d)
    if not near.any():
        return far_form(a, b, d)
    return np.where(near, near_form(a, b, d), far_form(a, b, d))


def _artanh_tail(z: Array) -> Array:
    w = z * z
    total = w * _ATANH_TAIL[0] + _ATANH_TAIL[1]
    for coefficient in _ATANH_TAIL[2:]:
        total = total * w + coefficient
    return total


def _cylinder_source_near(a: Array, b: Array, d: Array) -> Array:
    s = a * a + b * b
    z = d * (a + b) / s
    return (z * z * s - 2.0 * a * a * z * z * z * _artanh_tail(z)) / 4.0


def _cylinder_source_far(a: Array, b: Array, d: Array) -> Array:
    return (d * (a + b) - 2.0 * a * a * np.log(b / a)) / 4.0


def _cylinder_square_near(a: Array, b: Array, d: Array) -> Array:
    s = a * a + b * b
    z = d * (a + b) / s
    return z * z * z * (s * s / 4.0 + a * a * (a * a) * _artanh_tail(z)) / 4.0


def _cylinder_square_far(a: Array, b: Array, d: Array) -> Array:
    g = d * (a + b)
    return (g * g / 2.0 - g * (a * a) + 2.0 * a * a * (a * a) * np.log(b / a)) / 8.0

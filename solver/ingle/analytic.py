"""Entire functions of z = ±x² that closed forms of linear sources are made of, accurate through z = 0.

For z > 0 they are circular, for z < 0 hyperbolic: one formula for sources that grow and for those that shrink with
temperature. With x = √|z|: sine = sin x/x or sinh x/x, cosine = cos x or cosh x, cubic = (sin x − x cos x)/x³ or
(x cosh x − sinh x)/x³.
"""

from __future__ import annotations

from math import factorial

import numpy as np

from ingle.shapes import Array

# cubic = Σ (−z)ⁿ (2n + 2)/(2n + 3)!; for |z| ≤ 1 the terms left out are below 1e-17.
_CUBIC = tuple((-1.0) ** n * (2 * n + 2) / factorial(2 * n + 3) for n in range(8, -1, -1))


def sine(z: Array) -> Array:
    """sin x/x for z = x², sinh x/x for z = −x²."""
    x = np.sqrt(np.abs(z))
    x = np.where(x == 0.0, 1e-150, x)
    if (z >= 0.0).all():
        return np.sin(x) / x
    if (z <= 0.0).all():
        return np.sinh(x) / x
    return np.where(z >= 0.0, np.sin(x), np.sinh(x)) / x


def cosine(z: Array) -> Array:
    """cos x for z = x², cosh x for z = −x²."""
    x = np.sqrt(np.abs(z))
    return np.where(z >= 0.0, np.cos(x), np.cosh(x))


def cubic(z: Array) -> Array:
    """(sin x − x cos x)/x³ for z = x², (x cosh x − sinh x)/x³ for z = −x²; 1/3 at 0."""
    near = np.abs(z) <= 1.0
    w = np.where(near, z, 0.0)
    series = np.full_like(w, _CUBIC[0])
    for coefficient in _CUBIC[1:]:
        series = series * w + coefficient
    far = np.where(near, 4.0, z)
    return np.where(near, series, (sine(far) - cosine(far)) / far)


def half_tangent(z: Array) -> Array:
    """t = tan(x/2)/(x/2) for z = x², tanh(x/2)/(x/2) for z = −x²."""
    y = np.sqrt(np.abs(z)) / 2.0
    y = np.where(y == 0.0, 1e-150, y)
    if (z >= 0.0).all():
        return np.tan(y) / y
    if (z <= 0.0).all():
        return np.tanh(y) / y
    return np.where(z >= 0.0, np.tan(y), np.tanh(y)) / y


def cubic_slope(z: Array) -> Array:
    """d/dz of ``cubic``."""
    near = np.abs(z) <= 1.0
    w = np.where(near, z, 0.0)
    series = np.full_like(w, 8 * _CUBIC[0])
    for power, coefficient in zip(range(7, 0, -1), _CUBIC[1:-1], strict=True):
        series = series * w + power * coefficient
    far = np.where(near, 4.0, z)
    return np.where(near, series, (sine(far) - 3.0 * cubic(far)) / (2.0 * far))

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

# Keeps 0/0 away and leaves every other x as it is.
_TINY = 1e-150


def sine(z: Array) -> Array:
    """sin x/x for z = x², sinh x/x for z = −x²."""
    x = np.sqrt(np.abs(z)) + _TINY
    shrinks = z < 0.0
    count = np.count_nonzero(shrinks)
    if not count:
        return np.asarray(np.sin(x) / x)
    if count == shrinks.size:
        return np.asarray(np.sinh(x) / x)
    return np.where(shrinks, np.sinh(x), np.sin(x)) / x


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
    y = np.sqrt(np.abs(z)) * 0.5 + _TINY
    shrinks = z < 0.0
    count = np.count_nonzero(shrinks)
    if not count:
        return np.asarray(np.tan(y) / y)
    if count == shrinks.size:
        return np.asarray(np.tanh(y) / y)
    return np.where(shrinks, np.tanh(y), np.tan(y)) / y

"""The constants of Gauss collocation: nodes, Green matrices and interpolation weights, and sums over nodes in one order."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from scipy.special import eval_jacobi, roots_jacobi

from ingle.shapes import Array

# Up to this many cases a running sum costs fewer calls than a loop over the nodes; both add in the same order.
_FEW = 16
# σ of a layer's first mode: θ″ = −σθ between held faces, sθ″ + (m + 1)/2 θ′ = −σθ in a solid body with its face held.
# 2.404825557695773: first zero of J₀, Abramowitz & Stegun table 9.5.
_FIRST_MODE = {None: np.pi * np.pi, 1: 2.404825557695773**2 / 4.0, 2: np.pi * np.pi / 4.0}


@dataclass(frozen=True)
class Rule:
    """The constants of N nodes: θ = α θa + β θb + Green f, and what its integrals need.

    ``x``: nodes in η or s; ``ends``: nodes with both ends; ``D``: derivative at those; ``bary``: barycentric weights
    (``bary_solid`` without the centre); ``weights``: of ∫ q r^m dr; ``toward_a``, ``toward_b``: of the heats; ``tail``: gives
    the last two coefficients of f; ``centre``: weights of θ at a solid body's centre. ``turned`` −Green, ``lines``: Green with
    the rows of the heats below it (of a solid body the heat outward and the centre); ``toward``: α and β as columns.
    ``safe``: while σ stays below, no mode of the layer grows with both faces held.
    """

    x: Array
    weights: Array
    Green: Array
    alpha: Array
    beta: Array
    toward_a: Array
    toward_b: Array
    ends: Array
    D: Array
    bary: Array
    bary_solid: Array
    tail: Array
    centre: Array
    turned: Array
    lines: Array
    toward: tuple[Array, Array]
    safe: float


@cache
def rule(N: int, solid_shape: int | None) -> Rule:
    """The rule of N nodes: for hollow layers, or for a solid body of a shape."""
    # The weight of ∫ q r^m dr in s is s^p.
    p = 0.0 if solid_shape is None else (solid_shape - 1.0) / 2.0
    y, w = roots_jacobi(N, 0.0, p)
    x, w = (1.0 + y) / 2.0, w / 2.0 ** (1.0 + p)
    P = _polynomials(x, N, p)
    norms = np.sqrt(P * P @ w)
    to_coefficients = P / norms[:, None] * w  # of the orthonormal polynomials

    def basis(t: Array) -> Array:
        """The Lagrange polynomial of every node at t: nodes × t."""
        values: Array = to_coefficients.T @ (_polynomials(t, N, p) / norms[:, None])
        return values

    g, v = roots_jacobi(N + 2, 0.0, 0.0)
    g, v = (1.0 + g) / 2.0, v / 2.0
    if solid_shape is None:
        # ∫₀ˣ η′(1 − x) ℓ dη′ + ∫ₓ¹ x(1 − η′) ℓ dη′
        below = [(1.0 - z) * (basis(z * g) @ (z * v * z * g)) for z in x]
        above = [z * (basis(z + (1.0 - z) * g) @ ((1.0 - z) ** 2 * v * (1.0 - g))) for z in x]
        Green = np.stack(below) + np.stack(above)
        alpha, beta = 1.0 - x, x
        ends = np.concatenate([[0.0], x, [1.0]])
        centre = np.zeros(N)
    else:
        # ∫ₓ¹ t^−(p+1) ∫₀ᵗ s^p ℓ ds dt; the inner integral is t^(p+1) times a polynomial.
        def column(z: float) -> Array:
            polynomial = np.stack([basis(t * x) @ w for t in z + (1.0 - z) * g], axis=1)
            outer: Array = polynomial @ ((1.0 - z) * v)
            return outer

        Green = np.stack([column(z) for z in x.tolist()])
        centre = column(0.0)
        alpha, beta = np.zeros(N), np.ones(N)
        ends = np.concatenate([[0.0], x, [1.0]])
    gaps = ends[:, None] - ends + np.eye(N + 2)
    bary_solid = 1.0 / np.prod(gaps[1:, 1:] * 4.0, axis=1)
    # Scaled so that the products stay within range.
    bary = 1.0 / np.prod(gaps * 4.0, axis=1)
    D = bary / bary[:, None] / gaps
    np.fill_diagonal(D, 0.0)
    np.fill_diagonal(D, -D.sum(axis=1))
    toward_a, toward_b = w * (1.0 - x), w * x
    heats = [toward_a, toward_b] if solid_shape is None else [w, centre]
    return Rule(
        x, w, Green, alpha, beta, toward_a, toward_b, ends, D, bary, bary_solid, to_coefficients[-2:], centre, -Green,
        np.ascontiguousarray(np.vstack([Green, *heats])), (alpha[:, None], beta[:, None]), 0.9 * _FIRST_MODE[solid_shape],
    )  # fmt: skip


def _polynomials(x: Array, N: int, p: float) -> Array:
    """Jacobi polynomials P_n^(0,p)(2x − 1) for n < N: n × x."""
    return np.stack([eval_jacobi(n, 0.0, p, 2.0 * x - 1.0) for n in range(N)])


def combine(matrix: Array, values: Array) -> Array:
    """matrix @ values for values of nodes × cases, summed node by node."""
    if values.shape[1] <= _FEW:
        few: Array = np.add.accumulate(matrix[:, :, None] * values, axis=1)[:, -1]
        return few
    total: Array = matrix[:, :1] * values[0]
    for j in range(1, len(values)):
        total += matrix[:, j : j + 1] * values[j]
    return total


def added(products: Array) -> Array:
    """The sum over the last axis but one, the nodes, in their order."""
    if products.shape[-1] <= _FEW:
        few: Array = np.add.accumulate(products, axis=-2)[..., -1, :]
        return few
    total: Array = products[..., 0, :].copy()
    for j in range(1, products.shape[-2]):
        total += products[..., j, :]
    return total


def weigh(weights: Array, values: Array) -> Array:
    """Σ weights · values over the nodes; weights one a node, or nodes × cases."""
    return added((weights[:, None] if weights.ndim == 1 else weights) * values)


def barycentric(places: Array, weights: Array, x: Array) -> Array:
    """Weights of values at ``places`` for the interpolant at x: places × cases."""
    gap = x - places[:, None]
    hit = gap == 0.0
    parts = weights[:, None] / np.where(hit, 1.0, gap)
    parts = np.where(hit.any(axis=0), hit.astype(np.float64), parts)
    shares: Array = parts / weigh(np.ones(len(parts)), parts)
    return shares

"""The scale at which a limit is reached, between two scales: slow, sure, and only for what Newton's method did not find.

How far the warmest limit is passed rises with the scale λ of the driven sources on the branch reached from cold, so its root is
bracketed; a state that is gone, or hotter than any solid, counts as past every limit.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ingle.network import NetworkState, peak, solve_network
from ingle.network_newton import Status
from ingle.network_problem import NetworkProblem
from ingle.shapes import Array

Where = int | str | None

_MOST_STEPS = 80
_MOST_DOUBLINGS = 120
# How near the turning point a limit is still looked for.
_SHORT = 1e-7


@dataclass(frozen=True)
class Bracketed:
    """``scale`` λ at which limit number ``which`` is reached, NaN and -1 where none is below the upper end."""

    scale: Array
    which: np.ndarray


def bracketed(problem: NetworkProblem, limits: Sequence[tuple[Array, Where]], top: Array) -> Bracketed:
    """The least λ below ``top`` at which a limit is reached; ``top`` is a turning point, or infinite.

    ``limits``: temperatures [°C; NaN where a case has none] and of what each is, as in ``temperature_of``.
    """
    n = len(problem)
    low, e_low = np.zeros(n), _excess(problem, limits, np.zeros(n))[0]
    high = np.where(np.isfinite(top), top * (1.0 - _SHORT), 1.0)
    e_high = _excess(problem, limits, high)[0]
    grows = ~np.isfinite(top) & (e_high <= 0.0)
    for _ in range(_MOST_DOUBLINGS):
        rows = np.flatnonzero(grows)
        if not len(rows):
            break
        low[rows], e_low[rows] = high[rows], e_high[rows]
        high[rows] *= 4.0
        e_high[rows] = _excess(problem.take(rows), _taken(limits, rows), high[rows])[0]
        grows[rows] = e_high[rows] <= 0.0
    found = (e_low <= 0.0) & (e_high > 0.0)
    which = np.full(n, -1)
    live = np.flatnonzero(found)
    for step in range(_MOST_STEPS):
        if not len(live):
            break
        a, b, fa, fb = low[live], high[live], e_low[live], e_high[live]
        secant = b - fb * (b - a) / (fb - fa)
        middle = np.where(a > 0.0, np.sqrt(a * b), b / 16.0) if step % 3 == 2 else (a + b) / 2.0
        trial = np.where(np.isfinite(fb) & (secant > a) & (secant < b) & (step % 3 != 2), secant, middle)
        e, limit = _excess(problem.take(live), _taken(limits, live), trial)
        over = ~(e <= 0.0)
        # Anderson and Björck: the end that stays is weighed less, or the secant would creep.
        share = np.where(over, 1.0 - e / fb, 1.0 - e / fa)
        share = np.where((share > 0.0) & np.isfinite(share), share, 0.5)
        high[live], e_high[live] = np.where(over, trial, b), np.where(over, e, fb * share)
        low[live], e_low[live] = np.where(over, a, trial), np.where(over, fa * share, e)
        which[live] = np.where(np.isfinite(e), limit, which[live])
        done = (np.abs(e) <= 1e-12 * (1.0 + np.abs(problem.coldest[live] + 273.15))) | (high[live] - low[live] <= 1e-13 * high[live])
        low[live] = np.where(done & np.isfinite(e), trial, low[live])
        live = live[~done]
    return Bracketed(np.where(found & (which >= 0), low, np.nan), np.where(found, which, -1))


def temperature_of(state: NetworkState, where: Where) -> Array:
    """The temperature a limit is about: the peak of the body (None) or of a layer (from 0), or the body's left or right face."""
    if isinstance(where, str):
        ends: Array = state.left[0] if where == "left" else state.right[-1]
        return ends
    T: Array = peak(state, where).T
    return T


def _taken(limits: Sequence[tuple[Array, Where]], rows: np.ndarray) -> list[tuple[Array, Where]]:
    return [(value[rows], where) for value, where in limits]


def _excess(problem: NetworkProblem, limits: Sequence[tuple[Array, Where]], scale: Array) -> tuple[Array, np.ndarray]:
    """By how much the limit most passed is passed, and which it is; infinite where there is no state."""
    state = solve_network(problem, scale)
    excess, which = np.full(len(problem), -np.inf), np.full(len(problem), -1)
    for number, (value, where) in enumerate(limits):
        over = temperature_of(state, where) - value
        more = over > excess
        excess, which = np.where(more, over, excess), np.where(more, number, which)
    gone = (state.status == Status.RUNAWAY) | (state.status == Status.TOO_HOT) | (state.status == Status.FLOORED_K)
    return np.where(state.status == Status.SOLVED, excess, np.where(gone, np.inf, np.nan)), which

"""The source at which a temperature limit is first reached.

Sources that scale together are λ times a pattern; everything else stays. How far each watched temperature (the peak, a
layer's peak, a face) is above its limit rises with λ, so the largest of these excesses has one root, the first limit
reached. Its slope comes from the tangent of the state to λ; a peak's place does not count, since the temperature there is
stationary. Newton's method is kept inside a bracket. With constant conductivity and linear faces the excess is convex (the
highest of many straight lines), and Newton falls to the root from above without overshooting.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ingle.cases import Cases
from ingle.conductivities import Conductivity
from ingle.field import Extremes, extremes
from ingle.march import LayerSteps, Problem, State, Tangent, beyond, carried, finish, solve, start
from ingle.shapes import Array, path, solid_source_path, source_path

_MOST_STEPS = 200

# Which limit governs; 0 is none, layer n's own limit is LAYER_LIMIT + n.
PEAK_LIMIT, LEFT_LIMIT, RIGHT_LIMIT, LAYER_LIMIT = 1, 2, 3, 3
# Why there is no allowable source.
NO_LIMIT, BROKEN_WITHOUT_SOURCE, NEVER_REACHED, NO_STATE, NOT_FOUND = 1, 2, 3, 4, 5


@dataclass(frozen=True)
class Allowable:
    """``multiple`` λ of the pattern, NaN where there is none; ``governs`` which limit; ``lacking`` why there is none, else 0."""

    multiple: Array
    governs: np.ndarray
    lacking: np.ndarray


def excesses(cases: Cases, state: State, top: Extremes) -> list[tuple[int, Array]]:
    """Each limit's number, and how many kelvin its temperature is above it (NaN where a case has not that limit)."""
    found = []
    for number, limit, rise in (
        (PEAK_LIMIT, cases.limit, top.peak),
        (LEFT_LIMIT, cases.left_limit, state.rise_left),
        (RIGHT_LIMIT, cases.right_limit, state.rise_right),
    ):
        if limit is not None:
            found.append((number, rise - (limit - state.sink)))
    for layer, limit in enumerate(cases.layer_limits):
        if limit is not None:
            found.append((LAYER_LIMIT + layer + 1, top.by_layer[layer] - (limit - state.sink)))
    return found


def worst(found: list[tuple[int, Array]], n: int) -> tuple[Array, np.ndarray]:
    """The largest excess of each case and the limit it belongs to; NaN and 0 where there is no limit."""
    excess, which = np.full(n, np.nan), np.zeros(n, np.int8)
    for number, each in found:
        more = (each > excess) | (np.isnan(excess) & ~np.isnan(each))
        excess, which = np.where(more, each, excess), np.where(more, number, which).astype(np.int8)
    return excess, which


def allowable(cases: Cases, problem: Problem, q: tuple[Array, ...], pattern: tuple[Array, ...]) -> Allowable:
    """The least λ from zero up at which a limit is reached; q are the sources now, of which the pattern's scale."""
    n = len(cases)
    fixed = tuple(np.where(p != 0.0, 0.0, each) for each, p in zip(q, pattern, strict=True))

    def at(rows: np.ndarray, part: Problem, multiple: Array, guess: Array | None) -> State:
        return solve(part, tuple(f[rows] + multiple * p[rows] for f, p in zip(fixed, pattern, strict=True)), guess)

    every = np.arange(n)
    nothing = at(every, problem, np.zeros(n), None)
    cold, broken_by = worst(excesses(cases, nothing, extremes(nothing)), n)
    limited, broken = ~np.isnan(cold), cold > 0.0
    low, high = np.zeros(n), np.full(n, np.inf)
    multiple = np.where(limited & ~broken, _first_guess(problem, pattern, -cold), np.nan)
    governs = broken_by.copy()
    never = np.zeros(n, bool)
    rows = np.flatnonzero(np.isfinite(multiple) & (cold < 0.0))
    multiple[limited & (cold == 0.0)] = 0.0
    u = nothing.u.copy()
    for step in range(_MOST_STEPS):
        if not len(rows):
            break
        part, some = problem.take(rows), cases.take(rows)
        state = at(rows, part, multiple[rows], None if problem.linear else u[rows])
        u[rows] = state.u
        top = extremes(state)
        excess, which = worst(excesses(some, state, top), len(rows))
        slope = _slope(part, state, top, which, tuple(p[rows] for p in pattern))
        here = multiple[rows]
        low[rows] = np.where(excess <= 0.0, np.maximum(low[rows], here), low[rows])
        high[rows] = np.where(excess > 0.0, np.minimum(high[rows], here), high[rows])
        flat = ~(slope > 0.0)
        new = here - excess / np.where(flat, 1.0, slope)
        lo, hi = low[rows], high[rows]
        middle = np.where(np.isfinite(hi), (lo + hi) / 2.0, 4.0 * np.maximum(here, lo))
        inside = (new > lo) & (new < hi) & ~flat & np.isfinite(new)
        small = ~flat & (np.abs(new - here) <= 4e-16 * here)
        better = np.where(inside | small, new, middle)
        # Bisection beside Newton where that has been slow for long.
        better = np.where(small, here, better) if step < 60 else np.where(small, here, middle)
        governs[rows] = which
        done = small | (excess == 0.0) | (np.isfinite(hi) & ((hi - lo) <= 4e-16 * hi))
        lost = ~np.isfinite(excess) | (better > 1e60) | ((step > 40) & flat & ~np.isfinite(hi))
        never[rows] |= lost
        multiple[rows] = better
        rows = rows[~(done | lost)]
    lacking = np.where(~limited, NO_LIMIT, np.where(broken, BROKEN_WITHOUT_SOURCE, np.where(never, NEVER_REACHED, 0)))
    return Allowable(np.where(lacking == 0, multiple, np.nan), governs, lacking.astype(np.int8))


def _first_guess(problem: Problem, pattern: tuple[Array, ...], room: Array) -> Array:
    """Roughly the multiple that warms the body by ``room``: heat through half its resistance and through its faces."""
    warm = np.zeros_like(room)
    for layer, p in zip(problem.layers, pattern, strict=True):
        k = layer.k.at(problem.sink) if isinstance(layer.k, Conductivity) else layer.k
        warm = warm + np.abs(p) * layer.D / k / 4.0
    return np.where(warm > 0.0, room / np.where(warm > 0.0, warm, 1.0), 1.0)


def _slope(problem: Problem, state: State, top: Extremes, which: np.ndarray, pattern: tuple[Array, ...]) -> Array:
    """How much the watched temperature rises with λ: the unknown moves so that the far face's law stays met."""
    sink, shape = problem.sink, problem.structure.shape
    _, _, dT, dQ = start(problem, state.u)
    zero = np.zeros_like(state.u)
    by_u: Tangent = (dT, dQ)
    by_source: Tangent = (zero, zero)
    for layer, ends, p in zip(problem.layers, state.ends, pattern, strict=True):
        by_u = _past(layer, carried(layer, sink, ends, by_u))
        by_source = _past(layer, carried(layer, sink, ends, by_source, p))
    far = beyond(problem.layers[-1], state.rise_right, state.Q_right)
    _, (r_u, r_source) = finish(problem, far, state.Q_right, [by_u, by_source])
    du = -r_source / r_u
    tangent: Tangent = (dT * du, dQ * du)
    slope = np.where(which == LEFT_LIMIT, tangent[0], zero)
    for number, (layer, ends, p) in enumerate(zip(problem.layers, state.ends, pattern, strict=True)):
        s = np.clip(top.places[number] - layer.a, 0.0, layer.d)
        W = None if layer.W is None else path(shape, layer.a, s)
        D = solid_source_path(shape, s) if W is None else source_path(shape, layer.a, s)
        to_peak = replace(layer, W=W, D=D)
        at_peak = replace(ends, T1=top.by_layer[number])
        watched = ((which == PEAK_LIMIT) & (top.layer == number + 1.0)) | (which == LAYER_LIMIT + number + 1)
        slope = np.where(watched, carried(to_peak, sink, at_peak, tangent, p)[0], slope)
        tangent = carried(layer, sink, ends, tangent, p)
        if number == len(problem.layers) - 1:
            slope = np.where(which == RIGHT_LIMIT, tangent[0], slope)
        tangent = _past(layer, tangent)
    return slope


def _past(layer: LayerSteps, tangent: Tangent) -> Tangent:
    return beyond(layer, *tangent), tangent[1]

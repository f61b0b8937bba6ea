"""The generation at which a temperature limit is first reached.

With constant conductivity the temperature everywhere is linear in the source, T = A + qB with B ≥ 0, so a face's limit
gives its q at once. The peak is the highest of many such lines: it rises with q and is convex, so Newton's method started
at or above the root falls to it without overshooting. Its slope is B at the peak's place (the place itself does not count,
because the temperature there is stationary). A start above the root: the line of the place where B is largest.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.cases import Cases, Face, Structure
from ingle.field import extremes, rise_at
from ingle.march import State, Steps, solve
from ingle.shapes import Array

_MOST_STEPS = 60

# Which limit governs; 0 is none.
PEAK_LIMIT, LEFT_LIMIT, RIGHT_LIMIT = 1, 2, 3
# Why there is no allowable source.
NO_LIMIT, BROKEN_WITHOUT_SOURCE, NEVER_REACHED = 1, 2, 3


@dataclass(frozen=True)
class Allowable:
    """``generation`` q [W/m³], NaN where there is none; ``governs`` which limit; ``lacking`` why there is none, else 0."""

    generation: Array
    governs: np.ndarray
    lacking: np.ndarray


def allowable(cases: Cases, structure: Structure, steps: Steps) -> Allowable:
    """The least source from zero up at which a limit is reached, for one structure's cases."""
    zero = np.zeros_like(steps.d)
    best = np.full_like(steps.d, np.inf)
    governs = np.zeros(len(steps.d), dtype=np.int8)
    broken = np.zeros(len(steps.d), dtype=np.int8)  # by which limit
    limited = np.zeros(len(steps.d), dtype=bool)
    A = solve(cases, structure, steps, zero)
    B = solve(_without_sinks(cases), structure, steps, zero + 1.0)

    def first(q: Array, given: np.ndarray, over: np.ndarray, which: int) -> None:
        nonlocal best, governs, broken, limited
        limited = limited | given
        broken = np.where((broken == 0) & given & over, which, broken).astype(np.int8)
        sooner = given & (q < best)
        best = np.where(sooner, q, best)
        governs = np.where(sooner, which, governs).astype(np.int8)

    for which, limit, rise, slope in (
        (LEFT_LIMIT, cases.left_limit, A.rise_left, B.rise_left),
        (RIGHT_LIMIT, cases.right_limit, A.rise_right, B.rise_right),
    ):
        if limit is not None:
            room = limit - A.sink - rise
            reaches = slope > 0.0
            q = np.where(reaches, room / np.where(reaches, slope, 1.0), np.inf)
            first(q, ~np.isnan(limit), room < 0.0, which)
    if cases.limit is not None:
        given = ~np.isnan(cases.limit)
        room = cases.limit - A.sink
        over = extremes(A).peak > room
        q = _peak_root(cases, structure, steps, A, B, np.where(given & ~over, room, np.nan))
        first(q, given, over, PEAK_LIMIT)

    lacking = np.where(~limited, NO_LIMIT, np.where(broken > 0, BROKEN_WITHOUT_SOURCE, 0))
    lacking = np.where((lacking == 0) & np.isinf(best), NEVER_REACHED, lacking).astype(np.int8)
    return Allowable(np.where(lacking == 0, best, np.nan), np.where(broken > 0, broken, governs), lacking)


def _without_sinks(cases: Cases) -> Cases:
    """The same bodies with every sink at 0 °C and no flux in: their temperature is the response to the source alone."""

    def bare(face: Face) -> Face:
        def zero(x: Array | None) -> Array | None:
            return None if x is None else x * 0.0

        return Face(zero(face.held), face.film, zero(face.fluid), None)

    return Cases(cases.shape, cases.layers, bare(cases.left), bare(cases.right), cases.inner)


def _peak_root(cases: Cases, structure: Structure, steps: Steps, A: State, B: State, room: Array) -> Array:
    """The q at which the peak's rise equals ``room``; NaN where that is NaN."""
    hottest = extremes(B)
    q = np.maximum((room - rise_at(A, hottest.place)) / hottest.peak, 0.0)
    open_rows = np.flatnonzero(~np.isnan(q))
    for _ in range(_MOST_STEPS):
        if not len(open_rows):
            break
        part = cases.take(open_rows)
        near = _take(steps, open_rows)
        here = solve(part, structure, near, q[open_rows])
        top = extremes(here)
        slope = rise_at(_pick(B, near, open_rows), top.place)
        step = (top.peak - room[open_rows]) / np.where(slope > 0.0, slope, np.inf)
        better = np.maximum(q[open_rows] - step, 0.0)
        moved = np.abs(better - q[open_rows]) > 4e-16 * q[open_rows]
        # Falling towards the root from above, so a step upward is rounding and the row is done.
        q[open_rows] = np.where(step > 0.0, better, q[open_rows])
        open_rows = open_rows[moved & (step > 0.0)]
    return q


def _take(steps: Steps, rows: np.ndarray) -> Steps:
    W = None if steps.W is None else steps.W[rows]
    return Steps(steps.a[rows], steps.d[rows], steps.b[rows], steps.k[rows], steps.V[rows], W, steps.D[rows])


def _pick(state: State, steps: Steps, rows: np.ndarray) -> State:
    return State(
        state.structure, steps, state.q[rows], state.sink[rows], state.rise_left[rows], state.rise_right[rows],
        state.Q_left[rows], state.Q_right[rows], state.imbalance[rows], state.F_left[rows], state.F_right[rows],
        state.settled,
    )  # fmt: skip

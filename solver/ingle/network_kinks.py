"""The turning point of a case whose source is a table: λ has a corner where the temperature passes a point, so D jumps there.

The sign of D is bisected, each try on slices that are cut where the temperature crosses the table's points.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from ingle.network_problem import NetworkProblem
from ingle.network_run import Part, run
from ingle.network_state import Status
from ingle.network_trace import held_border
from ingle.shapes import Array

_OUTWARD, _INWARD = 12, 26
_FIRST = 2e-4  # of τ


def tabled(problem: NetworkProblem) -> bool:
    """Whether a driven source is a table."""
    return any(layer.source.table is not None and layer.source.driven for layer in problem.layers)


def sharpened(problem: NetworkProblem, seed: Part, T0: Array, tau: Array, scale: Array) -> tuple[Array, Array]:
    """λ and τ at the turning point near ``tau``; as they were where no bracket is found."""
    n = len(tau)
    low, high = np.full(n, np.nan), np.full(n, np.nan)
    best, place = scale.copy(), tau.copy()
    trial, step = tau.copy(), np.full(n, _FIRST)
    live = np.arange(n)
    for turn in range(_OUTWARD + _INWARD):
        found, rises = _tried(problem.take(live), seed, live, T0[live] + trial[live])
        up = rises > 0.0
        low[live] = np.where(up, trial[live], low[live])
        high[live] = np.where(up, high[live], trial[live])
        # λ on the rising side is below the turning point's, and the nearer the bracket the closer.
        best[live], place[live] = np.where(up, found, best[live]), np.where(up, trial[live], place[live])
        bracketed = ~np.isnan(low) & ~np.isnan(high)
        step[~bracketed] *= 2.0
        outward = np.where(np.isnan(high), low * (1.0 + step), high * (1.0 - step))
        trial = np.where(bracketed, (low + high) / 2.0, outward)
        done = (bracketed & (high - low <= 1e-9 * high)) | (~bracketed & (turn >= _OUTWARD))
        live = np.flatnonzero(~done)
        if not len(live):
            break
    settled = ~np.isnan(low) & ~np.isnan(high) & ~(high - low > 1e-6 * high)
    return np.where(settled, best, scale), np.where(settled, place, tau)


def _tried(problem: NetworkProblem, seed: Part, rows: np.ndarray, target: Array) -> tuple[Array, Array]:
    """λ and dλ/dT where a temperature is held; where there is no state λ is taken to fall."""
    n = len(target)
    scale, rising = np.full(n, np.nan), np.full(n, -1.0)
    network, state = seed.network.take(rows), seed.state.take(rows)
    here = replace(seed, rows=np.arange(n), network=network, state=state, border=seed.border.take(rows))
    for part in run(problem, replace(held_border(problem, n), target=target), [here]):
        good = (part.status == Status.SOLVED) & np.isfinite(part.rising)
        scale[part.rows] = part.state.mu[-1]
        rising[part.rows] = np.where(good, part.rising, -1.0)
    return scale, rising

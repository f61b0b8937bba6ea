"""The scale at which a limit is first reached, found by walking the path from cold: for what Newton's method did not find at once.

A temperature in the middle of the heat is held and raised step by step, as in ``network_trace``, until a limit is passed or the
scale λ falls; then the step is halved. From the last state before the limit, Newton's method finds the limit itself.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ingle.fluids import KELVIN
from ingle.network_newton import newton
from ingle.network_problem import NetworkProblem
from ingle.network_run import Part, run
from ingle.network_state import Border, Control, State, Status, usable
from ingle.network_sweep import Network
from ingle.network_trace import FAR, held_border, some, start_of_path
from ingle.network_unique import strides
from ingle.shapes import Array

_MOST_STEPS = 150
_FIRST = 0.01  # of the temperature in kelvin
# How near a limit is walked before Newton's method takes over.
_NEAR = 1e-3

Watched = tuple[Array, Control]  # a limit [°C; NaN where a case has none], and the temperature it is about


def walked(problem: NetworkProblem, limits: Sequence[Watched]) -> tuple[Array, np.ndarray]:
    """λ of the limit reached first, and its number; NaN and -1 where λ falls before any is, or none ever is."""
    n = len(problem)
    scale, which = np.full(n, np.nan), np.full(n, -1)
    given = [supply.given * (0.0 if supply.driven else 1.0) for supply in problem.supplies]
    for base in run(problem, Border(given, [False] * len(given), np.zeros(n), by_nodes=True)):
        good = base.status == Status.SOLVED
        if good.any():
            part = some(base, good)
            here = problem.take(part.rows)
            scale[part.rows], which[part.rows] = _walk(here, part, [(value[part.rows], control) for value, control in limits])
    return scale, which


def _passed(network: Network, border: Border, state: State, limits: Sequence[Watched]) -> tuple[Array, np.ndarray]:
    """By how much the limit most passed is passed, and which it is."""
    multiples, owners = border.multiples(network, state), border.of(network)
    models = [
        element.port.model(state.Ta[e], state.Tb[e], multiples[e], state.theta[e], owners[e] is not None)
        for e, element in enumerate(network.elements)
    ]
    excess, which = np.full(len(network.zero), -np.inf), np.full(len(network.zero), -1)
    for number, (value, control) in enumerate(limits):
        over = network.zero + control(network, state, multiples, models).T - value
        more = over > excess
        excess, which = np.where(more, over, excess), np.where(more, number, which)
    return excess, which


def _walk(problem: NetworkProblem, base: Part, limits: Sequence[Watched]) -> tuple[Array, np.ndarray]:
    n, network = len(problem), base.network
    border = held_border(problem, n)
    state, T0 = start_of_path(network, border, base.state)
    stride = strides(problem)
    low, high, scale_low = np.zeros(n), np.full(n, np.inf), np.zeros(n)
    step = _FIRST * (network.zero + KELVIN + T0)
    kept = state.take(np.arange(n))
    which, excess_low = np.full(n, -1), np.full(n, -np.inf)
    live = np.arange(n)
    for _ in range(_MOST_STEPS):
        tau = np.where(np.isfinite(high[live]), (low[live] + high[live]) / 2.0, low[live] + step[live])
        here, mesh, edge = kept.take(live), network.take(live), border.take(live)
        outcome = newton(mesh, replace(edge, target=T0[live] + tau), here)
        free = usable(mesh, edge, here)
        sound = (outcome.status == Status.SOLVED) & (here.mu[-1] > scale_low[live]) & (outcome.rising > 0.0)
        sound = sound if free is None else sound & free
        excess, limit = _passed(mesh, edge, here, [(value[live], control) for value, control in limits])
        on = sound & (excess <= 0.0)
        rows = live[on]
        low[rows], scale_low[rows], excess_low[rows] = tau[on], here.mu[-1][on], excess[on]
        kept.put(rows, here.take(np.flatnonzero(on)))
        high[live[~on]] = tau[~on]
        # What stopped the last step: a limit, or the end of the path.
        which[live[~on]] = np.where(sound & (excess > 0.0), limit, -1)[~on]
        step[rows] *= 2.0
        if stride is not None:
            step = np.where(low < stride.reach, np.minimum(step, stride.length), step)
        close = np.isfinite(high) & (high - low <= _NEAR * np.maximum(low, 1e-3 * step) * np.where(which >= 0, 1.0, 1e-6))
        live = np.flatnonzero(~close & ~(low > FAR))
        if not len(live):
            break
    scale = np.full(n, np.nan)
    for number, (value, control) in enumerate(limits):
        rows = np.flatnonzero(which == number)
        if not len(rows):
            continue
        seed = Part(np.arange(len(rows)), network.take(rows), border.take(rows), kept.take(rows), np.zeros(len(rows), dtype=np.int8),
                    base.steps[rows], base.rising[rows])  # fmt: skip
        target = value[rows] - problem.coldest[rows]
        aimed = replace(held_border(problem.take(rows), len(rows)), control=control, target=target)
        for part in run(problem.take(rows), aimed, [seed]):
            found = part.state.mu[-1]
            fine = (part.status == Status.SOLVED) & (part.rising > 0.0) & (found >= scale_low[rows[part.rows]] * (1.0 - 1e-6))
            scale[rows[part.rows]] = np.where(fine, found, np.nan)
    return scale, np.where(np.isnan(scale), -1, which)

"""By how much the driven sources may be multiplied: until a temperature limit, and until the turning point.

A limit's temperature is held and the scale λ is the unknown, so one Newton solve gives the answer, regular through the turning
point; where λ falls with the temperature held there, the turning point is the answer instead.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ingle.network import peak, solve_network
from ingle.network_controls import face, hottest, middle
from ingle.network_newton import Border, Control, Status, newton, usable
from ingle.network_problem import NetworkProblem
from ingle.network_run import Part, run
from ingle.network_trace import FAR, _some, follow, held_border, is_linear, refollowing, start_of_path
from ingle.shapes import Array

RUNAWAY = -1  # governs: the turning point, not a limit
_POLISH = 8


@dataclass(frozen=True)
class Limit:
    """A highest allowed temperature [°C], NaN where a case has none: of the ``body``, a ``layer`` (from 0), or a ``face``.

    ``where`` is None for the body, a layer's number, or "left" or "right" for the body's own face there.
    """

    value: Array
    where: int | str | None = None

    def control(self) -> Control:
        """The temperature it is about."""
        if isinstance(self.where, str):
            return face(0 if self.where == "left" else 1)
        return hottest(self.where)


@dataclass(frozen=True)
class AllowableScale:
    """``scale`` λ, NaN where there is none; ``governs``: the number of the limit reached first, ``RUNAWAY``, or -2 for none.

    ``broken``: the number of a limit that is passed without any driven source, else -1. ``never``: no limit is ever reached
    and nothing runs away.
    """

    scale: Array
    governs: np.ndarray
    broken: np.ndarray
    never: np.ndarray


@dataclass(frozen=True)
class TurningScale:
    """``scale`` λ above which the state reached from cold is gone, infinite where there is none; NaN where not found.

    ``rise`` [K]: by how much the middle of the driven layers is then warmer than without these sources. ``status``: of the
    state without the driven sources.
    """

    scale: Array
    rise: Array
    status: np.ndarray


def allowable_scale(problem: NetworkProblem, limits: tuple[Limit, ...]) -> AllowableScale:
    """The scale of the driven sources at which the first limit is reached, never beyond runaway.

    Accurate to 1e-9 of the rise. A case without any limit gets NaN and governs -2.
    """
    n = len(problem)
    scale = np.full(n, np.inf)
    governs = np.full(n, -2, dtype=np.int8)
    broken = np.full(n, -1, dtype=np.int8)
    with np.errstate(all="ignore"):
        beyond = np.zeros(n, dtype=bool)
        unsure = np.zeros(n, dtype=bool)
        for number, limit in enumerate(limits):
            rows = np.flatnonzero(~np.isnan(limit.value))
            if not len(rows):
                continue
            found, rising, good = _held(problem.take(rows), limit, limit.value[rows])
            unsure[rows] |= ~good | (found < 0.0)
            beyond[rows] |= good & (found >= 0.0) & ~(rising > 0.0)
            lower = good & (found >= 0.0) & (rising > 0.0) & (found < scale[rows])
            scale[rows[lower]], governs[rows[lower]] = found[lower], number
        doubt = np.flatnonzero(unsure)
        if len(doubt):
            _check_sourceless(problem, limits, doubt, broken)
            never_sure = doubt[broken[doubt] < 0]
            beyond[never_sure] |= True
        scale[broken >= 0] = np.nan
        governs[broken >= 0] = -2
        beyond &= broken < 0
        beyond |= _doubted(problem, scale, limits, governs)
        rows = np.flatnonzero(beyond)
        if len(rows):
            most = turning_scale(problem.take(rows))
            sooner = ~(most.scale > scale[rows]) | (governs[rows] < 0)
            # A limit found on the far side of a turning point does not count.
            take = rows[sooner]
            scale[take], governs[take] = most.scale[sooner], RUNAWAY
    never = np.isinf(scale) & (governs == RUNAWAY)
    governs[never] = -2
    governs[broken >= 0] = broken[broken >= 0]
    scale[np.isinf(scale)] = np.nan
    return AllowableScale(scale, governs, broken, never)


def _held(problem: NetworkProblem, limit: Limit, value: Array) -> tuple[Array, Array, np.ndarray]:
    """λ at which a limit's temperature is its value, dλ/dT there, and whether it was found."""
    n = len(problem)
    scale, rising, good = np.full(n, np.nan), np.full(n, np.nan), np.zeros(n, dtype=bool)
    base = held_border(problem, n)
    target = value - problem.coldest
    # The hottest place of a body without source may be a held face, which no source warms: hence the opening.
    for part in run(problem, replace(base, control=limit.control(), target=target, opening=middle)):
        rows = part.rows
        scale[rows], rising[rows] = part.state.mu[-1], part.rising
        good[rows] = part.status == Status.SOLVED
    return scale, rising, good


def _check_sourceless(problem: NetworkProblem, limits: tuple[Limit, ...], rows: np.ndarray, broken: np.ndarray) -> None:
    """Mark the cases whose limits are passed without the driven sources."""
    part = problem.take(rows)
    state = solve_network(part, np.zeros(len(rows)))
    for number, limit in reversed(list(enumerate(limits))):
        if isinstance(limit.where, str):
            T = state.left[0] if limit.where == "left" else state.right[-1]
        else:
            T = peak(state, limit.where).T
        broken[rows[limit.value[rows] < T]] = number


def _doubted(problem: NetworkProblem, scale: Array, limits: tuple[Limit, ...], governs: np.ndarray) -> np.ndarray:
    """Where the state at the scale found is not the one reached from cold."""
    doubted = np.zeros(len(scale), dtype=bool)
    if is_linear(problem):
        return doubted
    rows = np.flatnonzero(governs >= 0)
    if not len(rows):
        return doubted
    state = solve_network(problem.take(rows), scale[rows] * (1.0 - 1e-9))
    for number, limit in enumerate(limits):
        mine = governs[rows] == number
        if not mine.any():
            continue
        if isinstance(limit.where, str):
            T = state.left[0] if limit.where == "left" else state.right[-1]
        else:
            T = peak(state, limit.where).T
        rise = np.abs(limit.value[rows] - problem.coldest[rows])
        off = ~(np.abs(T - limit.value[rows]) <= 1e-3 * rise + 1e-6)
        doubted[rows[mine & off & (state.status != Status.TOO_HOT)]] = True
    return doubted


def turning_scale(problem: NetworkProblem) -> TurningScale:
    """The scale of the driven sources at the turning point, or first eigenvalue where all is linear; to 1e-6 of itself."""
    n = len(problem)
    scale, rise, status = np.full(n, np.nan), np.full(n, np.nan), np.full(n, Status.NO_OUTLET, dtype=np.int8)
    if not problem.has_outlet:
        return TurningScale(scale, rise, status)
    zero = np.zeros(n)
    given = [supply.given * (0.0 if supply.driven else 1.0) for supply in problem.supplies]
    with np.errstate(all="ignore"):
        for base in run(problem, Border(given, [False] * len(given), zero, by_nodes=True)):
            status[base.rows] = base.status
            good = base.status == Status.SOLVED
            if not good.any():
                continue
            part = _some(base, good)
            here = problem.take(part.rows)
            border = held_border(here, len(part.rows))
            if is_linear(problem):
                scale[part.rows] = _eigenvalue(part, border)
                rise[part.rows] = np.inf
                continue
            turn = follow(part.network, border, part.state, None)
            value, tau = turn.scale.copy(), turn.tau.copy()
            endless = ~turn.turned & (turn.tau >= FAR)
            value[~turn.turned] = np.nan
            again = turn.floored.copy()
            # An asymptote is beyond every temperature; a fold is found again on a mesh fine enough for it.
            rows = np.flatnonzero(turn.turned & ~turn.floored & (turn.tau < FAR))
            if len(rows):
                seed = Part(
                    np.arange(len(rows)), part.network.take(rows), border.take(rows), turn.state.take(rows),
                    np.zeros(len(rows), dtype=np.int8), part.steps[rows], part.rising[rows],
                )  # fmt: skip
                value[rows], tau[rows], again[rows] = _refined(here.take(rows), seed, turn.T0[rows], tau[rows], value[rows])
            rows = np.flatnonzero(again)
            if len(rows):
                value[rows] = _followed_again(here.take(rows), _some(part, again), turn.T0[rows], turn.tau[rows], turn.scale[rows])
            value[endless] = np.inf
            scale[part.rows], rise[part.rows] = value, tau
    return TurningScale(scale, rise, status)


def _refined(problem: NetworkProblem, seed: Part, T0: Array, tau: Array, scale: Array) -> tuple[Array, Array, np.ndarray]:
    """λ and τ at the turning point on resolved meshes, by the secant method on D; and where that did not settle."""
    n = len(tau)
    border = held_border(problem, n)
    tau, scale, loose = tau.copy(), scale.copy(), np.ones(n, dtype=bool)
    for part in run(problem, replace(border, target=T0 + tau), [seed]):
        rows = part.rows
        good = part.status == Status.SOLVED
        edge = border.take(rows)
        state, here = part.state, tau[rows]
        D = part.rising * here / state.mu[-1]
        best = np.where(good, state.mu[-1], scale[rows])
        # D falls by about 1 per share of τ.
        slope = np.full(len(rows), -1.0)
        for _ in range(_POLISH):
            open_rows = good & np.isfinite(D) & (np.abs(D) > 1e-5) & (np.abs(D) < 5.0)
            if not open_rows.any():
                break
            step = np.where(open_rows, np.clip(-D / slope, -0.2, 0.2), 0.0)
            trial = here * (1.0 + step)
            outcome = newton(part.network, replace(edge, target=T0[rows] + trial), state)
            state = outcome.state
            D_new = outcome.rising * trial / state.mu[-1]
            held = usable(part.network, state)
            fine = open_rows & (outcome.status == Status.SOLVED) & np.isfinite(D_new)
            fine = fine if held is None else fine & held
            change = (D_new - D) / np.where(step == 0.0, 1.0, step)
            slope = np.where(fine & (change < 0.0), change, slope)
            best = np.where(fine, state.mu[-1], best)
            here, D = np.where(fine, trial, here), np.where(fine, D_new, np.where(open_rows, np.nan, D))
        scale[rows], tau[rows] = best, here
        loose[rows] = ~good | ~(np.abs(D) <= 1e-3)
    return scale, tau, loose


def _followed_again(problem: NetworkProblem, base: Part, T0: Array, tau: Array, scale: Array) -> Array:
    """λ where a conductivity reaches its floor, by following the whole path again on meshes fine enough just below it."""
    scale = scale.copy()
    border = held_border(problem, len(tau))
    for part in refollowing(problem, base, T0 + 0.99 * tau):
        turn = follow(part.network, border.take(part.rows), part.state, None)
        scale[part.rows[turn.turned]] = turn.scale[turn.turned]
    return scale


def _eigenvalue(base: Part, border: Border) -> Array:
    """λ as the held temperature goes to infinity; infinite where λ then has no bound."""
    state, T0 = start_of_path(base.network, border, base.state)
    size = base.network.zero + 273.15
    found = []
    for factor, growth in ((1.0, 0.0), (4.0, 4.0), (16.0, 4.0), (256.0, 16.0), (1e5, 1e5 / 256.0), (1e8, 1e3), (2e8, 2.0)):
        if growth:
            for rise in (*state.Ta, *state.Tb, *state.surfaces):
                rise *= growth
            state.theta[:] = [None if x is None else x * growth for x in state.theta]
        outcome = newton(base.network, replace(border, target=T0 + factor * size), state)
        state = outcome.state
        ok = (outcome.status == Status.SOLVED) & (state.mu[-1] > 0.0) & (outcome.rising > 0.0)
        found.append(np.where(ok, state.mu[-1], np.nan))
    # 1/λ is smooth in 1/τ.
    inverse = 2.0 / found[-1] - 1.0 / found[-2]
    grows = found[-1] > 1.5 * found[-2]
    value: Array = np.where(grows, np.inf, 1.0 / inverse)
    return value

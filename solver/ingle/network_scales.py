"""By how much the driven sources may be multiplied: until a temperature limit, and until the turning point.

A limit's temperature is held and the scale λ is the unknown, so one Newton solve gives the answer, regular through the turning
point; where λ falls with the temperature held there, the turning point is the answer instead.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ingle.heat_sources import SourceLaw
from ingle.network import NetworkState, peak, solve_network
from ingle.network_controls import face, hottest, middle
from ingle.network_kinks import sharpened, tabled
from ingle.network_newton import newton
from ingle.network_problem import NetworkProblem
from ingle.network_run import Part, run
from ingle.network_state import Border, Control, State, Status, cold, usable
from ingle.network_sweep import collocated
from ingle.network_trace import FAR, follow, held_border, is_linear, some, start_of_path
from ingle.network_unique import bending, strides
from ingle.network_walk import walked
from ingle.shapes import Array

RUNAWAY = -1  # governs: the turning point, not a limit
_POLISH = 8
# Halves a bracket of a twentieth to 1e-4.
_HALVINGS = 9


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
        unreachable = np.zeros(n, dtype=bool)
        held: list[tuple[int, Part]] = []
        for number, limit in enumerate(limits):
            given = ~np.isnan(limit.value)
            outright = _held_outright(problem, limit)
            if outright is not None:
                T, direct = outright
                # No source warms such a face.
                passed = direct & (limit.value < T) & (broken < 0)
                broken[passed] = number
                unreachable |= direct & given
                given &= ~direct
            count = np.count_nonzero(given)
            if not count:
                continue
            for part in _held(problem, limit, None if count == n else np.flatnonzero(given)):
                rows, found = part.rows, part.state.mu[-1]
                good = (part.status == Status.SOLVED) & (found >= 0.0)
                rises = good & (part.rising > 0.0)
                # A limit below the source-free state may be met on a far branch, where λ falls.
                unsure[rows] |= ~rises
                beyond[rows] |= good & ~rises
                lower = rises & (found < scale[rows])
                scale[rows[lower]], governs[rows[lower]] = found[lower], number
                held.append((number, part))
        beyond |= unreachable & (governs < 0)
        doubt = np.flatnonzero(unsure & (broken < 0))
        if len(doubt):
            _check_sourceless(problem, limits, doubt, broken)
            beyond[doubt[broken[doubt] < 0]] = True
        scale[broken >= 0] = np.nan
        governs[broken >= 0] = -2
        beyond &= broken < 0
        if not is_linear(problem):
            # A limit found on a branch beyond a turning point is none.
            # Newton's steps from cold may come there too, over a bend of the source.
            asked = np.flatnonzero(governs >= 0) if bending(problem) else _unlike_cold(held, governs)
            elsewhere = _doubted(problem, asked, scale, limits, governs)
            scale[elsewhere], governs[elsewhere] = np.inf, -2
            unsure[elsewhere] = True
            beyond[elsewhere] = True
        rows = np.flatnonzero(beyond)
        if len(rows):
            most = turning_scale(problem.take(rows))
            sooner = ~(most.scale > scale[rows]) | (governs[rows] < 0)
            # A limit found on the far side of a turning point does not count.
            take = rows[sooner]
            scale[take], governs[take] = most.scale[sooner], RUNAWAY
            # One that was not found may still be the first to be passed.
            take = rows[unsure[rows]]
            if len(take):
                found, which = walked(problem.take(take), [(limit.value[take], limit.control()) for limit in limits])
                hit = (which >= 0) & ~(found > scale[take])
                before = scale[take].copy(), governs[take].copy()
                scale[take[hit]], governs[take[hit]] = found[hit], which[hit]
                # The walk may have stepped over a turning point too.
                over = np.isin(take, _doubted(problem, take[hit], scale, limits, governs))
                scale[take[over]], governs[take[over]] = before[0][over], before[1][over]
    never = np.isinf(scale) & (governs == RUNAWAY)
    governs[never] = -2
    governs[broken >= 0] = broken[broken >= 0]
    scale[np.isinf(scale)] = np.nan
    return AllowableScale(scale, governs, broken, never)


def _held_outright(problem: NetworkProblem, limit: Limit) -> tuple[Array, np.ndarray] | None:
    """The temperature at which a limit's face is held, and where it is without a resistance; None where it is not at all."""
    if not isinstance(limit.where, str):
        return None
    side = problem.left if limit.where == "left" else problem.right
    if side.held is None:
        return None
    return side.held, np.ones(len(problem), dtype=bool) if side.resistance is None else side.resistance == 0.0


def _held(problem: NetworkProblem, limit: Limit, rows: np.ndarray | None) -> list[Part]:
    """The states at which a limit's temperature is its value, of some cases or all; λ is their last multiple."""
    part = problem if rows is None else problem.take(rows)
    value = limit.value if rows is None else limit.value[rows]
    # The hottest place of a body without source may be a held face, which no source warms: hence the opening.
    border = replace(
        held_border(part, len(part)), control=limit.control(), target=value - part.coldest, opening=middle, by_nodes=False
    )  # fmt: skip
    parts = run(part, border)
    if not border.nodes and any(collocated(part.shape, layer, True) != collocated(part.shape, layer, False) for layer in part.layers):
        # Closed forms that were led astray: nodes hold on to the mode of the cold state.
        parts = [piece for each in parts for piece in _by_nodes_where_lost(part, border, each)]
    return parts if rows is None else [replace(p, rows=rows[p.rows]) for p in parts]


def _by_nodes_where_lost(problem: NetworkProblem, border: Border, part: Part) -> list[Part]:
    good = (part.status == Status.SOLVED) & (part.state.mu[-1] >= 0.0) & (part.rising > 0.0)
    if np.count_nonzero(good) == len(good):
        return [part]
    lost = part.rows[~good]
    again = run(problem.take(lost), replace(border.take(lost), by_nodes=True))
    return [*([some(part, good)] if good.any() else []), *(replace(p, rows=lost[p.rows]) for p in again)]


def _unlike_cold(held: list[tuple[int, Part]], governs: np.ndarray) -> np.ndarray:
    """Cases whose state at their limit is not soon reached from cold at that scale."""
    unlike: list[np.ndarray] = []
    for number, part in held:
        mine = governs[part.rows] == number
        if not np.count_nonzero(mine):
            continue
        here = part if np.count_nonzero(mine) == len(mine) else some(part, mine)
        state, groups = here.state, len(here.border.given)
        border = Border(here.border.given, [False] * groups, state.mu[-1], by_nodes=here.border.by_nodes)
        border = replace(border, given=[
            x * np.sqrt(state.mu[-1]) if driven else x for x, driven in zip(here.border.given, here.border.driven, strict=True)
        ])  # fmt: skip
        near = State(state.faces, state.theta, state.surfaces, state.mu[:groups])
        outcome = newton(here.network, border, cold(here.network, border), near)
        off = np.abs(outcome.state.faces - state.faces).max(axis=0) > 0.05 * np.abs(state.faces).max(axis=0)
        bad = (outcome.status != Status.SOLVED) | off
        unlike.append(here.rows[bad])
    return np.concatenate(unlike) if unlike else np.zeros(0, dtype=np.intp)


def _check_sourceless(problem: NetworkProblem, limits: tuple[Limit, ...], rows: np.ndarray, broken: np.ndarray) -> None:
    """Mark the cases whose limits are passed without the driven sources."""
    part = problem.take(rows)
    state = solve_network(part, np.zeros(len(rows)))
    for number, limit in reversed(list(enumerate(limits))):
        T = temperature_of(state, limit.where)
        broken[rows[limit.value[rows] < T]] = number


def temperature_of(state: NetworkState, where: int | str | None) -> Array:
    """The temperature a limit is about: the peak of the body (None) or of a layer (from 0), or the body's left or right face."""
    if isinstance(where, str):
        ends: Array = state.left[0] if where == "left" else state.right[-1]
        return ends
    return peak(state, where).T


def _doubted(
    problem: NetworkProblem, rows: np.ndarray, scale: Array, limits: tuple[Limit, ...], governs: np.ndarray
) -> np.ndarray:  # fmt: skip
    """Which of some cases have another state at the scale found than the one reached from cold."""
    doubted = np.zeros(len(scale), dtype=bool)
    if not len(rows):
        return np.flatnonzero(doubted)
    state = solve_network(problem.take(rows), scale[rows] * (1.0 - 1e-9))
    for number, limit in enumerate(limits):
        mine = governs[rows] == number
        if not mine.any():
            continue
        T = temperature_of(state, limit.where)
        rise = np.abs(limit.value[rows] - problem.coldest[rows])
        off = ~(np.abs(T - limit.value[rows]) <= 1e-3 * rise + 1e-6)
        doubted[rows[mine & off & (state.status != Status.TOO_HOT)]] = True
    return np.flatnonzero(doubted)


def turning_scale(problem: NetworkProblem) -> TurningScale:
    """The scale of the driven sources at the turning point, or first eigenvalue where all is linear; to 1e-6 of itself.

    Where a conductivity reaches its floor first: that scale, to 1e-4.
    """
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
            steady = good & _never_grows(problem)[base.rows]
            scale[base.rows[steady]], rise[base.rows[steady]] = np.inf, np.inf
            good &= ~steady
            if not good.any():
                continue
            part = some(base, good)
            here = problem.take(part.rows)
            border = held_border(here, len(part.rows))
            if is_linear(problem):
                scale[part.rows] = _eigenvalue(part, border)
                rise[part.rows] = np.inf
                continue
            turn = follow(part.network, border, part.state, None, strides(here))
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
                if tabled(here):
                    value[rows], tau[rows] = sharpened(here.take(rows), seed, turn.T0[rows], tau[rows], value[rows])
            rows = np.flatnonzero(again)
            if len(rows):
                value[rows] = _floored(here.take(rows), turn.scale[rows])
            value[endless] = np.inf
            scale[part.rows], rise[part.rows] = value, tau
    return TurningScale(scale, rise, status)


def _never_grows(problem: NetworkProblem) -> np.ndarray:
    """Where no source grows with temperature and no conductivity can fall to nothing, so that every scale has its one state."""
    flat = np.full(len(problem), not problem.supplies)
    for layer in problem.layers:
        source, k = layer.source, layer.conductivity
        if source.law == SourceLaw.SLOPED and source.slope is not None:
            flat &= source.slope <= 0.0
        elif source.law == SourceLaw.PER_SLOPED and source.slope is not None:
            flat &= source.slope >= 0.0
        elif source.law != SourceLaw.EVEN:
            flat &= False
        if k.slope is not None:
            flat &= k.slope >= 0.0
    return flat


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
            held = usable(part.network, edge, state)
            fine = open_rows & (outcome.status == Status.SOLVED) & np.isfinite(D_new)
            fine = fine if held is None else fine & held
            change = (D_new - D) / np.where(step == 0.0, 1.0, step)
            slope = np.where(fine & (change < 0.0), change, slope)
            best = np.where(fine, state.mu[-1], best)
            here, D = np.where(fine, trial, here), np.where(fine, D_new, np.where(open_rows, np.nan, D))
        scale[rows], tau[rows] = best, here
        loose[rows] = ~good | ~(np.abs(D) <= 1e-3)
    return scale, tau, loose


def _floored(problem: NetworkProblem, scale: Array) -> Array:
    """λ where a conductivity reaches its floor: between a scale that has an answer and one that has none; NaN where that fails.

    The temperature there is a square root of place, which no mesh resolves well; the answers themselves say where they end.
    """
    exists = (Status.SOLVED, Status.UNRESOLVED)
    low, high = 0.975 * scale, 1.025 * scale
    found = (solve_network(problem, low).status == Status.SOLVED) & ~np.isin(solve_network(problem, high).status, exists)
    rows = np.flatnonzero(found)
    part = problem.take(rows)
    low, high = low[rows], high[rows]
    for _ in range(_HALVINGS):
        middle = (low + high) / 2.0
        solved = np.isin(solve_network(part, middle).status, exists)
        low, high = np.where(solved, middle, low), np.where(solved, high, middle)
    value = np.full(len(scale), np.nan)
    value[rows] = (low + high) / 2.0
    return value


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

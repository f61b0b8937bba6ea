"""The path of steady states from zero source upward, followed by a held temperature, through which λ passes smoothly.

With τ the rise of the held temperature over that without source, D = d ln λ/d ln τ is 1 at the start and 0 at the turning
point. Newton's method from a cold start refuses a case as soon as a pivot is not positive; where losses grow faster than
linearly, or sources slower, that can be a false alarm, and this path decides: the case is solved where λ reaches 1 before D
reaches 0, and a runaway otherwise. The turning point itself is the same search with λ without a goal.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ingle.heat_sources import SourceLaw
from ingle.network_controls import middle
from ingle.network_newton import newton
from ingle.network_problem import NetworkProblem, Supply
from ingle.network_run import Part, run, transferred
from ingle.network_state import Border, State, Status, usable
from ingle.network_sweep import Network
from ingle.network_unique import Strides, bending, maybe_another, strides
from ingle.shapes import Array

_MOST_TURNS = 60
# λ is flat at its turning point: this D leaves it wrong by less than 1e-8 of itself.
_FLAT = 1e-5
# First rise tried, as a share of the temperature in kelvin.
_FIRST = 0.03
# A path whose λ still grows at this rise [K] is endless. One whose λ has all but ceased to, as λ∞(1 − cτ^−p), is followed to the
# second, where λ/(1 − D/p) is λ∞ to about D².
FAR, _SATURATED = 2.0e4, 1.0e7


@dataclass(frozen=True)
class Turn:
    """Where following a path ended, for some cases: ``tau`` [K], λ, D; ``T0`` the held rise without source.

    ``turned``: at the turning point; ``reached``: at the goal; else neither was found. ``floored``: what ends the path is a
    conductivity or resistivity that reaches its floor.
    """

    tau: Array
    scale: Array
    D: Array
    T0: Array
    turned: np.ndarray
    reached: np.ndarray
    floored: np.ndarray
    network: Network
    border: Border
    state: State


@dataclass
class _Tries:
    """What has been tried: the bracket of the turning point or goal, the last two usable tries, D and λ at ``low``."""

    low: Array
    high: Array
    D_low: Array
    scale_low: Array
    tau: Array
    D: Array
    scale: Array
    tau_before: Array
    D_before: Array

    def take(self, rows: np.ndarray) -> _Tries:
        return _Tries(*(x[rows] for x in vars(self).values()))


def all_driven(problem: NetworkProblem) -> NetworkProblem:
    """The same problem with every source driven."""
    layers = tuple(replace(layer, source=replace(layer.source, driven=True)) for layer in problem.layers)
    return replace(problem, layers=layers, supplies=tuple(Supply(supply.given, True) for supply in problem.supplies))


def held_border(problem: NetworkProblem, n: int) -> Border:
    """The border with the scale sought and the middle held, before a target is set."""
    given = [supply.given for supply in problem.supplies]
    return Border(given, [supply.driven for supply in problem.supplies], np.ones(n), middle, np.zeros(n), by_nodes=True)


def start_of_path(network: Network, border: Border, state: State) -> tuple[State, Array]:
    """The source-free state with room for λ, and its held temperature."""
    zero = np.zeros_like(network.zero)
    groups = len(border.given)
    mu = [x.copy() for x in state.mu[:groups]] + [zero.copy()]
    opened = State(state.faces, state.theta, state.surfaces, mu)
    multiples = border.multiples(network, opened)
    owners = border.of(network)
    models = [
        element.port.model(opened.Ta[e], opened.Tb[e], multiples[e], opened.theta[e], owners[e] is not None)
        for e, element in enumerate(network.elements)
    ]
    return opened, middle(network, opened, multiples, models).T


def follow(network: Network, border: Border, base: State, goal: Array | None, strides: Strides | None = None) -> Turn:
    """Follow every case's path from its source-free state until λ is ``goal`` or turns.

    ``strides``: no step is longer, for behind a table's point λ may turn and rise again at once.
    """
    state, T0 = start_of_path(network, border, base)
    n = len(T0)
    tau = _FIRST * (network.zero + 273.15 + T0)
    if strides is not None:
        tau = np.minimum(tau, strides.length)
    one, zero = np.ones(n), np.zeros(n)
    tries = _Tries(*(x.copy() for x in (zero, zero + np.inf, one, one, tau, one, zero, zero, one)))
    kept, final = state.take(np.arange(n)), state.take(np.arange(n))  # where the next try starts; the last usable one
    turned, reached, floored = np.zeros(n, dtype=bool), np.zeros(n, dtype=bool), np.zeros(n, dtype=bool)
    live = np.arange(n)
    falls = any(element.port.floors for element in network.elements)
    for turn in range(_MOST_TURNS):
        here = kept.take(live)
        net, edge = network.take(live), replace(border.take(live), target=T0[live] + tau[live])
        outcome = newton(net, edge, here)
        scale = here.mu[-1]
        D = outcome.rising * tau[live] / scale
        free = usable(net, edge, here)
        held = np.ones(len(live), dtype=bool) if free is None else free
        sound = (outcome.status == Status.SOLVED) & np.isfinite(D) & (scale > 0.0) & held
        over = np.zeros(len(live), dtype=bool) if goal is None else sound & (scale >= goal[live])
        up = sound & (D > 0.0) & ~over
        # Where λ rose by much less than its slopes at both ends say, it fell in between: try there first.
        low, D_low = tries.low[live], tries.D_low[live]
        mean = np.log(scale / tries.scale_low[live]) / np.log(tau[live] / low)
        skipped = sound & (D > 0.0) & (low > 0.0) & (mean < 0.6 * np.minimum(D, D_low))
        fold = skipped & (tau[live] <= 1.001 * low)
        back = skipped & ~fold
        up &= ~skipped
        over &= ~skipped
        rows = live[up]
        tries.scale_low[rows] = scale[up]
        tries.low[rows], tries.D_low[rows] = tau[rows], D[up]
        kept.put(rows, here.take(np.flatnonzero(up)))
        rows = live[~up & ~back]
        tries.high[rows] = tau[rows]
        floored[rows] = (~held & (outcome.status == Status.SOLVED))[~up & ~back]
        sound &= ~back
        rows = live[sound]
        final.put(rows, here.take(np.flatnonzero(sound)))
        tries.tau_before[rows], tries.D_before[rows] = tries.tau[rows], tries.D[rows]
        tries.tau[rows], tries.D[rows], tries.scale[rows] = tau[rows], D[sound], scale[sound]
        # Done where λ is flat, where the bracket cannot change it any more, at the goal, or far beyond any solid.
        low, high = tries.low[live], tries.high[live]
        bounded, width = np.isfinite(high), high - low
        flat = sound & (np.abs(D) <= _FLAT)
        flat |= bounded & ((tries.D_low[live] * width <= 1e-9 * low) | (width <= 1e-13 * high))
        if goal is not None:
            flat &= ~(sound & (scale > goal[live])) | (width <= 1e-13 * high)
        at_goal = np.zeros(len(live), dtype=bool) if goal is None else sound & (D > 0.0) & (np.abs(scale / goal[live] - 1.0) <= 1e-6)
        reached[live[at_goal]] = True
        # A bracket that closes on a λ that grows without end is no turning point.
        endless = flat & (tries.D_low[live] > 0.5) & ~floored[live] & ~(sound & (np.abs(D) <= _FLAT))
        turned[live[flat & ~at_goal & ~endless]] = True
        # Where the steps fail long before any solid would melt, that is a conductivity near its floor, or not known.
        early = endless & (low < FAR / 10.0)
        tries.tau[live[endless & ~early]] = np.inf
        if falls:
            turned[live[early]] = floored[live[early]] = True
        far = up & (tau[live] >= FAR) & ((D > 0.5) | (tau[live] >= _SATURATED))
        saturated = live[far & (D < 1e-2)]
        turned[saturated] = True
        p = np.log(tries.D_before / tries.D) / np.log(tries.tau / tries.tau_before)
        tries.scale[saturated] /= 1.0 - (tries.D / p)[saturated]
        stop = at_goal | flat | far
        live = live[~stop]
        if not len(live):
            break
        step = _next(tries.take(live), None if goal is None else goal[live], turn)
        if strides is not None:
            low = tries.low[live]
            step = np.where(low < strides.reach[live], np.minimum(step, low + strides.length[live]), step)
        again = back[~stop]
        tau[live] = np.where(again, np.sqrt(tries.low[live] * tau[live]), step)
    return Turn(tries.tau, tries.scale, tries.D, T0, turned, reached, turned & floored, network, border, final)


def _next(tries: _Tries, goal: Array | None, turn: int) -> Array:
    """The next τ: where D, as a straight line, is 0, or where λ, as a power of τ, is the goal; kept between low and high."""
    low, high, tau, D = tries.low, tries.high, tries.tau, tries.D
    bounded = np.isfinite(high)
    half = np.where(bounded, (low + high) / 2.0, np.where(low > 0.0, 2.0 * low, tau / 4.0))
    fall = tries.D_before - D
    secant = tau + (tau - tries.tau_before) * D / np.where(fall == 0.0, np.nan, fall)
    # D falls from 1 at τ = 0; on a straight line it is 0 here.
    first = low / np.maximum(1.0 - np.minimum(tries.D_low, 1.0), 0.125)
    if turn > 2:
        # It proved to be no straight line.
        first = np.maximum(first, np.where(low > FAR / 8.0, 8.0, 2.0) * low)
    aim = np.where(bounded, secant, first)
    if goal is not None:
        passed = bounded & (tries.scale >= goal)
        aim = np.where(passed, half, aim)
        steep = D > 0.02
        power = np.log(goal / np.where(tries.scale > 0.0, tries.scale, 1.0)) / np.where(steep, D, 1.0)
        to_goal = tau * np.exp(np.clip(power, -3.0, 2.0))
        aim = np.where(steep, np.where(bounded, to_goal, np.minimum(to_goal, 8.0 * np.maximum(low, tau))), aim)
    lost = ~((aim > low) & (aim < high)) | (bounded & (turn % 8 == 7))
    return np.where(lost, half, aim)


def traced(problem: NetworkProblem, scale: Array | None, parts: list[Part]) -> list[Part]:
    """The parts of a run, with every doubtful runaway settled by following its path."""
    if not bending(problem) and not any(np.count_nonzero(part.status) for part in parts):
        return parts  # all solved, and there is no other state to be stepped over
    # Where only the sources curve, and upward, Newton's steps from cold stay below the state sought, so that a pivot that is not
    # positive on the way is proof.
    linear = is_linear(problem, (SourceLaw.EVEN, SourceLaw.SLOPED, SourceLaw.ARRHENIUS))
    doubtful = [part.status == Status.NOT_CONVERGED for part in parts]
    if not linear:
        doubtful = [lost | (part.status == Status.RUNAWAY) for lost, part in zip(doubtful, parts, strict=True)]
    doubtful = [lost | maybe_another(problem, part) for lost, part in zip(doubtful, parts, strict=True)]
    if not any(d.any() for d in doubtful):
        return parts
    rows = np.sort(np.concatenate([part.rows[d] for part, d in zip(parts, doubtful, strict=True)]))
    rest = [some(part, ~d) for part, d in zip(parts, doubtful, strict=True) if (~d).any()]
    hard = problem.take(rows)
    if scale is not None:
        hard = scaled(hard, scale[rows])
    settled: list[Part] = []
    one = np.ones(len(rows))
    driven = all_driven(hard)
    base_border = Border([supply.given * 0.0 for supply in driven.supplies], [False] * len(driven.supplies), 0.0 * one, by_nodes=True)
    for base in run(driven, base_border):
        good = base.status == Status.SOLVED
        if not good.all():
            settled.append(some(base, ~good))
            base = some(base, good)
        held = usable(base.network, base.border, base.state)
        if held is not None and not held.all():
            # On its floor before any source: warmer states are no better.
            floored = some(base, ~held)
            floored.status[:] = Status.FLOORED_K
            settled.append(floored)
            base = some(base, held)
        if not len(base.rows):
            continue
        settled += _settled(driven.take(base.rows), base, coarse=True)
    return rest + [replace(part, rows=rows[part.rows]) for part in settled]


def _settled(problem: NetworkProblem, base: Part, coarse: bool) -> list[Part]:
    """Solved, runaway or too hot: every case of a source-free part, whose rows are numbers elsewhere.

    A turning point not far below the goal may be the mesh's own: those cases are followed again on a finer one.
    """
    n = len(base.rows)
    one, supplies = np.ones(n), problem.supplies
    turn = follow(base.network, held_border(problem, n), base.state, one, strides(problem))
    status = np.where(turn.turned, Status.RUNAWAY, np.where(turn.reached, Status.SOLVED, Status.NOT_CONVERGED)).astype(np.int8)
    status[~turn.turned & ~turn.reached & (turn.tau >= FAR)] = Status.TOO_HOT
    status[turn.floored] = Status.FLOORED_K
    fixed = Border([supply.given for supply in supplies], [False] * len(supplies), one)
    found = turn.state
    state = State(found.faces, found.theta, found.surfaces, found.mu[: len(supplies)])
    seed = Part(base.rows, base.network, fixed, state, status, base.steps, base.rising)
    near = turn.turned & (turn.scale > 0.7) & (turn.tau < FAR) if coarse else np.zeros(n, dtype=bool)
    parts: list[Part] = []
    if near.any():
        rows = np.flatnonzero(near)
        for finer in refollowing(problem.take(rows), some(base, near), turn.T0[rows] + 0.99 * turn.tau[rows]):
            mine = rows[finer.rows]
            parts += _settled(problem.take(mine), replace(finer, rows=base.rows[mine]), coarse=False)
        near &= np.isin(base.rows, np.concatenate([part.rows for part in parts])) if parts else False
    reached = status == Status.SOLVED
    if (~reached & ~near).any():
        parts.append(some(seed, ~reached & ~near))
    if reached.any():
        last = some(seed, reached)
        polished = run(problem.take(np.flatnonzero(reached)), last.border, [replace(last, rows=np.arange(len(last.rows)))])
        parts += [replace(p, rows=last.rows[p.rows]) for p in polished]
    return parts


def refollowing(problem: NetworkProblem, base: Part, target: Array) -> list[Part]:
    """Source-free parts on the meshes that the state at ``target`` calls for; cases without such a state are left out."""
    finer = []
    for part in run(problem, replace(held_border(problem, len(target)), target=target)):
        rows = np.flatnonzero(part.status == Status.SOLVED)
        if len(rows):
            network, mine = part.network.take(rows), part.rows[rows]
            start = transferred(base.network.take(mine), base.state.take(mine), network)
            border = base.border.take(mine)
            finer.append(Part(mine, network, border, start, base.status[mine], base.steps[mine], base.rising[mine]))
    return finer


def scaled(problem: NetworkProblem, scale: Array) -> NetworkProblem:
    """The problem with its driven sources multiplied for good."""
    layers = tuple(
        replace(layer, source=replace(layer.source, scale=layer.source.scale * scale))
        if layer.source.driven and layer.source.group is None
        else layer
        for layer in problem.layers
    )
    supplies = tuple(Supply(s.given * np.sqrt(scale), s.driven) if s.driven else s for s in problem.supplies)
    left, right = (
        face if face.contact is None or source.group is not None or not source.driven else replace(face, contact=face.contact * scale)
        for face, source in ((problem.left, problem.layers[0].source), (problem.right, problem.layers[-1].source))
    )
    return replace(problem, layers=layers, left=left, right=right, supplies=supplies)


def is_linear(problem: NetworkProblem, laws: tuple[SourceLaw, ...] = (SourceLaw.EVEN, SourceLaw.SLOPED)) -> bool:
    """Whether everything but sources of other ``laws`` is linear in the temperatures, for every case.

    A surface law says of itself that it is by an attribute ``linear``.
    """
    surfaces = (face.law for face in (problem.left, problem.right))
    if problem.supplies or not all(law is None or getattr(law, "linear", False) for law in surfaces):
        return False
    return all(
        layer.conductivity.constant and layer.source.law in laws and (layer.side is None or layer.side.linear)
        for layer in problem.layers
    )


def some(part: Part, keep: np.ndarray) -> Part:
    """Some of a part's cases."""
    rows = np.flatnonzero(keep)
    return Part(
        part.rows[rows], part.network.take(rows), part.border.take(rows), part.state.take(rows), part.status[rows], part.steps[rows],
        part.rising[rows],
    )  # fmt: skip

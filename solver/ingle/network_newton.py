"""Newton's method on a network: every case at once, started cold, the sweep inside, the unknown multiples as its border.

Borders are one row each: a supply's (√μ times its sum is what is given) and, where a scale λ is sought, a temperature that is
held at its target. Held temperatures make the path regular through its turning point.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from enum import IntEnum

import numpy as np

from ingle.network_sweep import Network, Sweep, sweep
from ingle.ports import PortModel
from ingle.shapes import Array

MOST_STEPS = 40

# Stands for the move of a step that was shortened, which is no sign of nearness.
SHORTENED = 1e300


class Status(IntEnum):
    """How a case ended."""

    SOLVED = 0
    RUNAWAY = 1  # the state reached from cold does not exist at this source
    NO_OUTLET = 2  # heat can leave nowhere
    NOT_CONVERGED = 3
    FLOORED_K = 4  # a conductivity or resistivity that falls linearly would reach zero on the way
    TOO_HOT = 5  # beyond ``CEILING``
    UNRESOLVED = 6  # a layer spans more decay lengths than the finest mesh resolves


@dataclass
class State:
    """Rises at the elements' faces, their insides, the ends' outermost surfaces, and the unknown multiples."""

    Ta: list[Array]
    Tb: list[Array]
    theta: list[Array | None]
    surfaces: list[Array]
    mu: list[Array]

    def take(self, rows: np.ndarray) -> State:
        """The state of some of the cases."""
        theta = [None if x is None else x[:, rows] for x in self.theta]
        Ta, Tb, surfaces, mu = ([x[rows] for x in part] for part in (self.Ta, self.Tb, self.surfaces, self.mu))
        return State(Ta, Tb, theta, surfaces, mu)

    def arrays(self) -> list[Array]:
        """Every array of the state, cases along the last axis."""
        return [*self.Ta, *self.Tb, *(x for x in self.theta if x is not None), *self.surfaces, *self.mu]

    def put(self, rows: np.ndarray, other: State) -> None:
        """Write another state into some of the cases."""
        for mine, theirs in zip(self.arrays(), other.arrays(), strict=True):
            mine[..., rows] = theirs


@dataclass(frozen=True)
class Hold:
    """A temperature that is held: its rise, and derivatives to each element's Ta, Tb and μ (None where it has none)."""

    T: Array
    a: list[Array | None]
    b: list[Array | None]
    l: list[Array | None]  # noqa: E741 - λ


Control = Callable[[Network, State, list[Array], list[PortModel]], Hold]


@dataclass(frozen=True)
class Border:
    """What multiplies the sources: groups with ``given`` and ``driven`` of each supply, and the scale where it is not sought.

    ``control`` and ``target`` [rise]: λ is sought at which that temperature is the target. ``opening``: what is held instead in
    the first step from cold, where the control may not feel the sources yet. ``by_nodes``: plane layers are collocated too; a
    closed form jumps from mode to mode with the multiple, which nodes hold on to.
    """

    given: list[Array]
    driven: list[bool]
    scale: Array
    control: Control | None = None
    target: Array | None = None
    opening: Control | None = None
    by_nodes: bool = False

    @property
    def count(self) -> int:
        """How many multiples are unknown."""
        return len(self.given) + (self.control is not None)

    @property
    def nodes(self) -> bool:
        """Whether plane layers are collocated."""
        return self.by_nodes or self.count > 0

    def take(self, rows: np.ndarray) -> Border:
        """The border of some of the cases."""
        target = None if self.target is None else self.target[rows]
        return Border([x[rows] for x in self.given], self.driven, self.scale[rows], self.control, target, self.opening, self.by_nodes)

    def of(self, network: Network) -> list[int | None]:
        """Which unknown multiplies each element."""
        owners: list[int | None] = []
        for element in network.elements:
            source = element.port.source
            free = len(self.given) if source.driven and self.control is not None else None
            owners.append(source.group if source.group is not None else free)
        return owners

    def multiples(self, network: Network, state: State) -> list[Array]:
        """μ of each element."""
        one = np.ones_like(self.scale)
        values = []
        for element, owner in zip(network.elements, self.of(network), strict=True):
            values.append(state.mu[owner] if owner is not None else (self.scale if element.port.source.driven else one))
        return values


@dataclass(frozen=True)
class Outcome:
    """Where Newton's method ended. ``rising`` dλ/dT of the held temperature; NaN where none is held."""

    state: State
    status: np.ndarray
    steps: np.ndarray
    rising: Array


def cold(network: Network, border: Border) -> State:
    """Every temperature at the case's zero."""
    elements = network.elements
    zero = np.zeros_like(network.zero)
    state = State(
        [zero.copy() for _ in elements], [zero.copy() for _ in elements], [e.port.start() for e in elements],
        [zero.copy(), zero.copy()], [zero.copy() for _ in range(border.count)],
    )  # fmt: skip
    if border.given:
        sums = [zero] * len(border.given)
        for e, element in enumerate(elements):
            group = element.port.source.group
            if group is not None and element.port.source.weight is not None:
                F = element.port.model(zero, zero, zero, state.theta[e], True).F
                assert F is not None
                sums[group] = sums[group] + element.port.source.weight * F
        for g, total in enumerate(sums):
            state.mu[g] = border.scale * (border.given[g] / total) ** 2
    return state


def usable(network: Network, state: State) -> np.ndarray:
    """False where a conductivity or resistivity lies on its floor."""
    held = np.ones(len(network.zero), dtype=bool)
    for e, element in enumerate(network.elements):
        port = element.port
        Ta = state.Tb[e] if port.solid else state.Ta[e]
        low, high = np.minimum(Ta, state.Tb[e]), np.maximum(Ta, state.Tb[e])
        inside = port.span(state.theta[e])
        if inside is not None:
            low, high = np.minimum(low, inside[0]), np.maximum(high, inside[1])
        held &= port.conductivity_usable(low, high)
    return held


def newton(network: Network, border: Border, state: State) -> Outcome:
    """From ``state``, which is changed, to the steady state of every case."""
    n = len(network.zero)
    status = np.full(n, Status.NOT_CONVERGED, dtype=np.int8)
    steps = np.zeros(n, dtype=np.int8)
    rising = np.full(n, np.nan)
    live = np.arange(n)
    part, here, edge = network, state, border
    before = np.zeros(n)
    open_rows = np.ones(n, dtype=bool)
    for step in range(MOST_STEPS):
        first = step == 0 and border.opening is not None
        moved, moved_by, size, bad, slope = _step(part, replace(edge, control=border.opening) if first else edge, here)
        absolute = np.abs(part.zero) + size
        settled = moved_by * (moved_by / before) ** 2 <= 1e-14 * size + 1e-16 * absolute
        settled &= moved_by <= 1e-6 * size
        settled |= moved_by <= 2e-13 * size + 4e-16 * absolute
        settled |= (moved_by >= 0.5 * before) & (moved_by <= 1e-9 * size)
        lost = ~np.isfinite(moved_by)
        done = open_rows & (settled | bad | lost)
        for mine, theirs in zip(here.arrays(), moved.arrays(), strict=True):
            np.copyto(mine, theirs, where=open_rows & ~lost & ~bad)
        rows = live[done]
        status[rows] = np.where(bad, Status.RUNAWAY, np.where(lost, Status.NOT_CONVERGED, Status.SOLVED))[done]
        steps[rows] = step + 1
        rising[rows] = slope[done]
        open_rows &= ~done
        before = np.where(moved_by < SHORTENED, moved_by, 0.0)
        left = int(open_rows.sum())
        if left == 0:
            break
        if left < 0.7 * len(open_rows):
            if here is not state:
                state.put(live, here)
            live, keep = live[open_rows], np.flatnonzero(open_rows)
            part, edge, here, before = part.take(keep), edge.take(keep), here.take(keep), before[keep]
            open_rows = np.ones(left, dtype=bool)
    if here is not state:
        state.put(live, here)
    return Outcome(state, status, steps, rising)


def _step(network: Network, border: Border, state: State) -> tuple[State, Array, Array, np.ndarray, Array]:
    """One step: the moved state, the largest move [K], the largest rise, where there is runaway, and dλ/dT."""
    elements, count, owners = network.elements, border.count, border.of(network)
    multiples = border.multiples(network, state)
    models = [
        element.port.model(state.Ta[e], state.Tb[e], multiples[e], state.theta[e], owners[e] is not None)
        for e, element in enumerate(elements)
    ]
    left = None if network.left is None else network.left.relation(state.Ta[0], state.surfaces[0])
    right = network.right.relation(state.Tb[-1], state.surfaces[1])
    swept = sweep(network, models, owners, count, state.Ta, state.Tb, (left, right))
    unstable = swept.negatives > 0
    slope = np.full_like(network.zero, np.nan)
    moves: list[Array] = []
    if count:
        M, short = _border_rows(network, border, state, multiples, models, swept, owners)
        moves = _small_solve(M, short)
        unstable, slope = _judged(M, swept.negatives, len(border.given), border.control is not None)
    da = [_along(swept.a[e], moves) for e in range(len(elements))]
    db = [_along(swept.b[e], moves) for e in range(len(elements))]
    shift = [None if owner is None else moves[owner] for owner in owners]
    theta: list[Array | None] = []
    biggest = size = np.zeros_like(network.zero)
    # The part of the step that no source grows too much over; None where it is whole in every case.
    part: Array | None = None
    for e, element in enumerate(elements):
        port = element.port
        inside = port.moved(state.theta[e], models[e], da[e], db[e], shift[e])
        theta.append(inside)
        largest = np.maximum(np.abs(da[e]), np.abs(db[e]))
        size = np.maximum(size, np.maximum(np.abs(state.Ta[e] + da[e]), np.abs(state.Tb[e] + db[e])))
        before, after = port.span(state.theta[e]), port.span(inside)
        coolest = np.minimum(state.Ta[e], state.Tb[e])
        if before is not None and after is not None:
            largest = np.maximum(largest, np.maximum(np.abs(after[0] - before[0]), np.abs(after[1] - before[1])))
            size = np.maximum(size, np.maximum(np.abs(after[0]), np.abs(after[1])))
            coolest = np.minimum(coolest, before[0])
        reach = port.source.reach(coolest)
        if reach is not None:
            share = np.where(multiples[e] * port.source.scale > 0.0, np.minimum(reach / np.maximum(largest, 1e-300), 1.0), 1.0)
            part = share if part is None else np.minimum(part, share)
        biggest = np.maximum(biggest, largest)
    for multiple, move in zip(state.mu, moves, strict=True):
        biggest = np.maximum(biggest, np.abs(move) / np.maximum(np.abs(multiple + move), 1e-300) * size)
    if part is not None and (part >= 1.0).all():
        part = None

    def along(old: Array, move: Array) -> Array:
        return old + move if part is None else old + part * move

    Ta = [along(x, y) for x, y in zip(state.Ta, da, strict=True)]
    Tb = [along(x, y) for x, y in zip(state.Tb, db, strict=True)]
    if part is not None:
        theta = [
            None if new is None or old is None else np.where(part >= 1.0, new, old + part * (new - old))
            for new, old in zip(theta, state.theta, strict=True)
        ]
    surfaces = []
    for end, relation, T, move, surface in (
        (network.left, left, state.Ta[0], da[0], state.surfaces[0]),
        (network.right, right, state.Tb[-1], db[-1], state.surfaces[1]),
    ):
        if end is None or relation is None or end.law is None:
            surfaces.append(surface)
            continue
        P, B, A = relation
        shift_out = T + move - end.R * ((B * move + A) / P) - surface
        biggest = np.maximum(biggest, np.abs(shift_out))
        surfaces.append(along(surface, shift_out))
    mu = [along(x, y) for x, y in zip(state.mu, moves, strict=True)]
    total = biggest
    for x in (*Ta, *Tb, *mu):
        total = total + x
    finite = np.isfinite(total)
    if part is not None:
        biggest = np.where(part >= 1.0, biggest, SHORTENED)
    return State(Ta, Tb, theta, surfaces, mu), np.where(finite, biggest, np.nan), size, unstable & finite, slope


def _along(columns: list[Array], moves: list[Array]) -> Array:
    total = columns[0]
    for column, move in zip(columns[1:], moves, strict=True):
        total = total + column * move
    return total


def _border_rows(
    network: Network, border: Border, state: State, multiples: list[Array], models: list[PortModel], swept: Sweep,
    owners: list[int | None],
) -> tuple[list[list[Array]], list[Array]]:  # fmt: skip
    """M and what is short: Σ M δμ = short, a row for each supply and one for the held temperature."""
    count, groups = border.count, len(border.given)
    zero = np.zeros_like(network.zero)
    M: list[list[Array]] = []
    short: list[Array] = []
    for g in range(groups):
        F, move, change = zero, zero, [zero] * count
        for e, element in enumerate(network.elements):
            source, model, owner = element.port.source, models[e], owners[e]
            if source.group != g or source.weight is None or model.F is None or model.Fa is None or model.Fb is None:
                continue
            w = source.weight
            F = F + w * model.F
            move = move + w * (model.Fa * swept.a[e][0] + model.Fb * swept.b[e][0])
            for j in range(count):
                change[j] = change[j] + w * (model.Fa * swept.a[e][j + 1] + model.Fb * swept.b[e][j + 1])
            if owner is not None and model.Fl is not None:
                change[owner] = change[owner] + w * model.Fl
        per = (border.given[g] / F) ** 2
        sought = border.control is not None and border.driven[g]
        scale = state.mu[groups] if sought else (border.scale if border.driven[g] else 1.0)
        aim = scale * per
        row = [2.0 * aim / F * x for x in change]
        row[g] = row[g] + 1.0
        if sought:
            row[groups] = row[groups] - per
        M.append(row)
        short.append(aim - state.mu[g] - 2.0 * aim / F * move)
    if border.control is not None and border.target is not None:
        hold = border.control(network, state, multiples, models)
        T, row = hold.T, [zero] * count
        for e, owner in enumerate(owners):
            for derivative, columns in ((hold.a[e], swept.a[e]), (hold.b[e], swept.b[e])):
                if derivative is not None:
                    T = T + derivative * columns[0]
                    row = [x + derivative * column for x, column in zip(row, columns[1:], strict=True)]
            slope = hold.l[e]
            if owner is not None and slope is not None:
                row[owner] = row[owner] + slope
        M.append(row)
        short.append(border.target - T)
    return M, short


def _small_solve(M: list[list[Array]], short: list[Array]) -> list[Array]:
    if len(M) == 1:
        return [short[0] / M[0][0]]
    if len(M) == 2:
        (a, b), (c, d) = M
        det = a * d - b * c
        return [(d * short[0] - b * short[1]) / det, (a * short[1] - c * short[0]) / det]
    matrix = np.stack([np.stack(row, axis=-1) for row in M], axis=-2)
    right = np.stack(short, axis=-1)[..., None]
    usable = np.isfinite(matrix).all(axis=(1, 2)) & (np.abs(np.linalg.det(np.nan_to_num(matrix))) > 0.0)
    safe = np.where(usable[:, None, None], matrix, np.eye(len(M)))
    solved = np.where(usable[:, None, None], np.linalg.solve(safe, right), np.nan)
    return [solved[:, j, 0] for j in range(len(M))]


def _determinant(M: list[list[Array]], size: int) -> Array | float:
    if size == 0:
        return 1.0
    if size == 1:
        return M[0][0]
    if size == 2:
        return M[0][0] * M[1][1] - M[0][1] * M[1][0]
    matrix = np.stack([np.stack(row[:size], axis=-1) for row in M[:size]], axis=-2)
    return np.asarray(np.linalg.det(np.nan_to_num(matrix)))


def _judged(M: list[list[Array]], negatives: np.ndarray, groups: int, sought: bool) -> tuple[np.ndarray, Array]:
    """Where the state is unstable at its fixed inputs, and dλ/dT where λ is sought.

    A supply that is fixed can make one otherwise unstable mode stable (and the reverse): the sign of its border counts.
    """
    sign = np.where(negatives % 2 == 0, 1.0, -1.0)
    inner = _determinant(M, groups)
    unstable = (negatives > groups) | ~(sign * inner > 0.0)
    if not sought:
        return unstable, np.full(len(negatives), np.nan)
    slope = inner / _determinant(M, groups + 1)
    # While a temperature is held nothing runs away; an unstable state is told by a falling scale.
    return np.zeros(len(negatives), dtype=bool), np.where(unstable, -np.abs(slope), slope)

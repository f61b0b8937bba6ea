"""Newton's method on a network: every case at once, started cold, the sweep inside, the unknown multiples as its border.

Borders are one row each: a supply's (√μ times its sum is what is given) and, where a scale λ is sought, a temperature that is
held at its target. Held temperatures make the path regular through its turning point.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.network_border import border_rows, judge, small_solve
from ingle.network_state import Border, Control, State, Status
from ingle.network_sweep import Network, sweep
from ingle.ports import Bound, PortModel
from ingle.shapes import Array

MOST_STEPS = 40

# Stands for the move of a step that was shortened, which is no sign of nearness.
SHORTENED = 1e300

# A state that is this share of its rise from a known one is taken for it: Newton's steps shrink as squares.
_NEAR = 0.02


@dataclass(frozen=True)
class Outcome:
    """Where Newton's method ended. ``rising`` dλ/dT of the held temperature; NaN where none is held."""

    state: State
    status: np.ndarray
    steps: np.ndarray
    rising: Array


class Ready:
    """A network and border made ready for steps: what stays the same from step to step is worked out once.

    ``bounds``: the ports that are linear in their faces while their multiple is known.
    """

    def __init__(self, network: Network, border: Border, state: State, bounds: list[Bound | None] | None = None) -> None:
        self.network, self.border, self.owners = network, border, border.of(network)
        self.ports = [element.port for element in network.elements]
        known = border.multiples(network, state)
        self.known = [mu if owner is None else None for mu, owner in zip(known, self.owners, strict=True)]
        if bounds is None:
            # A held temperature is read inside the layers, which a bound port fills in only at the end.
            read = border.control is not None
            bounds = [
                None if mu is None or (read and port.start() is not None) else port.bound(mu)
                for mu, port in zip(self.known, self.ports, strict=True)
            ]
        self.bounds = bounds
        self.rounding = 4e-16 * np.abs(network.zero)

    def take(self, rows: np.ndarray, state: State) -> Ready:
        """The same for some of the cases, whose state is given."""
        bounds = [None if bound is None else bound.take(rows) for bound in self.bounds]
        return Ready(self.network.take(rows), self.border.take(rows), state, bounds)

    def multiples(self, state: State) -> list[Array]:
        """μ of each element."""
        values: list[Array] = []
        for mu, owner in zip(self.known, self.owners, strict=True):
            if mu is None:
                assert owner is not None
                mu = state.mu[owner]
            values.append(mu)
        return values

    def settle(self, state: State) -> None:
        """Fill in the insides of bound ports."""
        for e, bound in enumerate(self.bounds):
            if bound is not None and bound.inside is not None:
                state.theta[e] = bound.settled(state.faces[2 * e], state.faces[2 * e + 1])


def newton(network: Network, border: Border, state: State, near: State | None = None) -> Outcome:
    """From ``state``, which is changed, to the steady state of every case; or, where given, until it is surely at ``near``."""
    n = len(network.zero)
    steps = np.zeros(n, dtype=np.int8)
    status = steps + np.int8(Status.NOT_CONVERGED)
    sought = border.control is not None
    rising = np.full(n, np.nan)
    live: np.ndarray | None = None  # None: everyone
    everyone = ready = Ready(network, border, state)
    here = state
    before: Array = np.zeros(n)
    open_rows: np.ndarray | None = None  # None: all that live
    for step in range(MOST_STEPS):
        control = border.opening if step == 0 and border.opening is not None else border.control
        moved, moved_by, size, bad, slope = _step(ready, control, here)
        settled = _settled(moved_by, size, before, ready.rounding)
        if near is not None:
            arrived = _arrived(ready, moved, near if live is None else near.take(live), size)
            settled = arrived if settled is None else settled | arrived
        finite = np.isfinite(moved_by)
        lost = None if np.count_nonzero(finite) == finite.size else ~finite
        if step == 0 and border.opening is not None:
            _ease(ready, moved)
        done = settled
        for ended in (bad, lost):
            if ended is not None:
                done = ended if done is None else done | ended
        if done is None:
            here.follow(moved, open_rows)
        else:
            keep = open_rows
            for ended in (bad, lost):
                if ended is not None:
                    keep = ~ended if keep is None else keep & ~ended
            here.follow(moved, keep)
            if open_rows is not None:
                done = done & open_rows
            count = int(np.count_nonzero(done))
            if count:
                ends = np.zeros(len(done), dtype=np.int8)  # solved
                if lost is not None:
                    ends[lost] = Status.NOT_CONVERGED
                if bad is not None:
                    ends[bad] = Status.RUNAWAY
                rows = np.flatnonzero(done)
                mine = rows if live is None else live[rows]
                status[mine], steps[mine] = ends[rows], step + 1
                if sought and slope is not None:
                    rising[mine] = slope[rows]
                open_rows = ~done if open_rows is None else open_rows & ~done
                left = int(np.count_nonzero(open_rows))
                if left == 0:
                    break
                if left < 0.7 * len(open_rows):
                    if live is not None:
                        state.put(live, here)
                    keep = np.flatnonzero(open_rows)
                    live = keep if live is None else live[keep]
                    here = here.take(keep)
                    ready, moved_by = ready.take(keep, here), moved_by[keep]
                    open_rows = None
        before = np.where(moved_by < SHORTENED, moved_by, 0.0)
    if live is not None:
        state.put(live, here)
    everyone.settle(state)
    return Outcome(state, status, steps, rising)


def _arrived(ready: Ready, state: State, near: State, size: Array) -> np.ndarray:
    """Where a state is at another one, but for steps that are then certain."""
    off = np.maximum.reduce(np.abs(state.faces - near.faces), axis=0)
    for port, bound, theta, other in zip(ready.ports, ready.bounds, state.theta, near.theta, strict=True):
        if bound is None and theta is not None and other is not None:
            off = np.maximum(off, port.apart(theta, other))
    arrived: np.ndarray = off <= _NEAR * size
    return arrived


def _ease(ready: Ready, state: State) -> None:
    """Take back from λ what warm sources give more than the cold ones of the first step, so that the next one starts closer."""
    target = ready.border.target
    assert target is not None
    cold: Array | float = 0.0
    warm: Array | float = 0.0
    for e, port in enumerate(ready.ports):
        source = port.source
        if not source.driven or source.group is not None:
            continue
        Tb = state.faces[2 * e + 1]
        T = Tb if port.solid else (state.faces[2 * e] + Tb) / 2.0
        T = T + 0.6 * np.maximum(target - T, 0.0)
        size = source.scale * port.volume()
        cold = cold + size * source.at(np.zeros_like(T))[0]
        warm = warm + size * source.at(T)[0]
    if isinstance(cold, float) or isinstance(warm, float):
        return
    share = cold / warm
    state.mu[-1] = np.where((share > 0.02) & (share < 1.5), state.mu[-1] * share, state.mu[-1])


def _settled(moved_by: Array, size: Array, before: Array, rounding: Array) -> np.ndarray | None:
    """Where a step was the last one needed; None where it was nowhere. ``rounding``: of a temperature in °C."""
    near = moved_by <= 1e-6 * size + rounding
    if not np.count_nonzero(near):
        return None
    # Newton's steps shrink as squares: the next one would be moved³/before² at most.
    ratio = moved_by / before
    last = (moved_by * (ratio * ratio) <= 1e-14 * size + 0.25 * rounding) & (moved_by <= 1e-6 * size)
    last |= moved_by <= 2e-13 * size + rounding
    # Laws are given temperatures in °C, and radiation counts in kelvin: steps of their rounding may go on for ever.
    last |= (ratio >= 0.5) & np.isfinite(ratio) & (moved_by <= 1e-9 * size + 4.0 * rounding + 4e-13)
    return last


def _step(
    ready: Ready, control: Control | None, state: State
) -> tuple[State, Array, Array, np.ndarray | None, Array | None]:  # fmt: skip
    """One step: the moved state, the largest move [K], the largest rise, where there is runaway (or None), and dλ/dT."""
    network, border, owners = ready.network, ready.border, ready.owners
    count, faces = border.count, state.faces
    multiples = ready.multiples(state)
    models: list[PortModel] = []
    for e, (port, bound) in enumerate(zip(ready.ports, ready.bounds, strict=True)):
        Ta, Tb = faces[2 * e], faces[2 * e + 1]
        models.append(
            port.model(Ta, Tb, multiples[e], state.theta[e], owners[e] is not None) if bound is None else bound.model(Ta, Tb)
        )
    outside = network.seen_from_outside(models, multiples, owners)
    left = None if network.left is None else network.left.relation(faces[0], state.surfaces[0])
    right = network.right.relation(faces[-1], state.surfaces[1])
    swept = sweep(network, outside, owners, count, faces, (left, right))
    bad, slope = swept.negatives, None
    moves: list[Array] = []
    if count:
        M, short = border_rows(network, border, control, state, multiples, models, swept, owners)
        moves = small_solve(M, short)
        bad, slope = judge(M, swept.negatives, len(border.given), border.control is not None)
    elif bad is not None:
        bad = bad > 0
    move = np.empty(faces.shape)
    for e, (a, b) in enumerate(zip(swept.a, swept.b, strict=True)):
        move[2 * e], move[2 * e + 1] = _along(a, moves), _along(b, moves)
    after = faces + move
    biggest, size = np.maximum.reduce(np.abs(move), axis=0), np.maximum.reduce(np.abs(after), axis=0)
    if border.target is not None:
        # A held temperature inside may be the only one that is not zero.
        size = np.maximum(size, np.abs(border.target))
    theta: list[Array | None] = []
    # The part of the step that no source grows too much over; None where it is whole in every case.
    part: Array | None = None
    for e, (port, model) in enumerate(zip(ready.ports, models, strict=True)):
        if model.hottest is not None:
            size = np.maximum(size, model.hottest)
        if ready.bounds[e] is not None:
            theta.append(state.theta[e])
            continue
        owner = owners[e]
        inside, largest = port.moved(state.theta[e], model, move[2 * e], move[2 * e + 1], None if owner is None else moves[owner])
        theta.append(inside)
        if largest is None:
            continue
        biggest = np.maximum(biggest, largest)
        reach = port.reach(faces[2 * e], faces[2 * e + 1], state.theta[e])
        if reach is not None:
            largest = np.maximum(largest, np.maximum(np.abs(move[2 * e]), np.abs(move[2 * e + 1])))
            share = np.where(multiples[e] * port.source.scale > 0.0, np.minimum(reach / np.maximum(largest, 1e-300), 1.0), 1.0)
            part = share if part is None else np.minimum(part, share)
    mu: list[Array] = []
    for multiple, shift in zip(state.mu, moves, strict=True):
        new = multiple + shift
        mu.append(new)
        biggest = np.maximum(biggest, np.abs(shift) / np.maximum(np.abs(new), 1e-300) * size)
    surfaces = list(state.surfaces)
    for side, (end, relation, T, dT) in enumerate(
        ((network.left, left, faces[0], move[0]), (network.right, right, faces[-1], move[-1]))
    ):
        if end is None or relation is None or end.law is None or end.R is None:
            continue
        P, B, A = relation
        shift = T + dT - end.R * ((B * dT + A) / P) - surfaces[side]
        biggest = np.maximum(biggest, np.abs(shift))
        surfaces[side] = surfaces[side] + shift
    if part is not None and np.count_nonzero(part < 1.0):
        biggest = _shorten(part, state, after, theta, surfaces, mu, biggest)
    for x in mu:
        biggest = biggest + 0.0 * x
    return State(after, theta, surfaces, mu), biggest, size, bad, slope


def _shorten(
    part: Array, state: State, faces: Array, theta: list[Array | None], surfaces: list[Array], mu: list[Array], biggest: Array
) -> Array:  # fmt: skip
    """Take back all but a part of a step, in place, and say so instead of how far it moved."""
    whole = part >= 1.0
    faces[:] = np.where(whole, faces, state.faces + part * (faces - state.faces))
    for new, old in ((theta, state.theta), (surfaces, state.surfaces), (mu, state.mu)):
        for index, (after, before) in enumerate(zip(new, old, strict=True)):
            if after is not None and before is not None and after is not before:
                new[index] = np.where(whole, after, before + part * (after - before))
    return np.where(whole | ~np.isfinite(biggest), biggest, SHORTENED)


def _along(columns: list[Array], moves: list[Array]) -> Array:
    total = columns[0]
    for column, move in zip(columns[1:], moves, strict=True):
        total = total + column * move
    return total

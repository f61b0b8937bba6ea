"""Following the state from cold: the present one, the size of the sources at a limit, and where no state is left."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cache

import numpy as np
from scipy.optimize import brentq

from .chain import Grid, Span, State, StuckError, nodes
from .laws import Array
from .model import BAR, Model

FIRST_STEP, LEAST_STEP = 1.0, 1e-5
SHARP, BLUNT = 1e-12, 1e-8  # of a limit's root, and of a turn's, whose size hardly hangs on its place
FAR = 1e9  # a rise of this many kelvin counts as boundless


def cold(grid: Grid) -> State:
    return State(np.zeros(grid.n), np.zeros(len(grid.electric)), 0.0, 0.0, 0.0)


def _between(a: State, b: State, part: float) -> tuple[float, float, float]:
    return a.size + part * (b.size - a.size), a.rest + part * (b.rest - a.rest), a.drive + part * (b.drive - a.drive)


def too_far(grid: Grid, moved: float, found: State) -> bool:
    """Whether a step is so long that it may have passed over a turn that a text table makes."""
    return moved > grid.stride and moved > 0.03 * float(np.max(np.abs(found.u)))


def follow(grid: Grid, start: State, size: float, rest: float, drive: float) -> State:
    """The state at other factors, continued from `start` by steps small enough to stay on its branch."""
    end = replace(start, size=size, rest=rest, drive=drive)
    state, before, done, last, step = start, start, 0.0, 0.0, FIRST_STEP
    while done < 1.0:
        aim = min(1.0, done + step)
        ahead = (aim - done) / (done - last) if done > last else 0.0
        guess = State(
            state.u + ahead * (state.u - before.u),
            np.maximum(state.squares + ahead * (state.squares - before.squares), 0.0),
            *_between(start, end, aim),
        )
        try:
            # the very first guess is the old state, so that one Newton step is the tangent's prediction
            if not ahead:
                du, dsquares, _, _ = grid.step(guess, None, 0.0)
                guess = replace(guess, u=guess.u + du, squares=guess.squares + dsquares)
            found, _ = grid.newton(guess)
            moved = float(np.max(np.abs(found.u - state.u)))
            missed = float(np.max(np.abs(found.u - guess.u)))
            if missed > 0.35 * moved + 1e-9 or too_far(grid, moved, found) or not grid.stable(found):
                raise StuckError
        except StuckError:
            step = (aim - done) / 3.0
            if step < LEAST_STEP:
                if rest == start.rest and drive == start.drive:
                    return onward(grid, state, size)
                raise
            continue
        before, state, last, done = state, found, done, aim
        step *= 1.0 if missed > 0.15 * moved else 2.5
    return state


def onward(grid: Grid, state: State, size: float) -> State:
    """The state at a greater size, reached by the temperature of the fastest node; no further than a turn."""
    _, tangent = grid.newton(state)
    pin = int(np.argmax(np.abs(tangent[:-1])))
    sign = 1.0 if tangent[pin] > 0 else -1.0
    step = 0.01 * max(float(np.max(np.abs(state.u))), 1e-6)
    for _ in range(2000):
        try:
            found, slope = grid.newton(state, pin, float(state.u[pin]) + sign * min(step, grid.stride))
            if sign * slope[-1] <= 0.0 and found.size < size:
                # the turn may lie beyond the size asked for
                if step < 1e-6 * max(float(np.max(np.abs(state.u))), 1e-6):
                    raise StuckError
                step /= 4.0
                continue
        except StuckError:
            step /= 4.0
            if step < 1e-7 * max(float(np.max(np.abs(state.u))), 1e-6):
                raise
            continue
        if found.size >= size:
            part = (size - state.size) / (found.size - state.size)
            squares = state.squares + part * (found.squares - state.squares)
            guess = replace(state, u=state.u + part * (found.u - state.u), squares=squares, size=size)
            there, _ = grid.newton(guess)
            if not grid.stable(there):
                raise StuckError
            return there
        state = found
        step *= 1.5
    raise StuckError


def onto(state: State, coarse: Grid, fine: Grid) -> State:
    """The same state on another grid."""
    u = np.empty(fine.n)
    for one, two in zip(coarse.spans, fine.spans, strict=True):
        old = np.arange(coarse.cells + 1) / coarse.cells
        new = np.arange(fine.cells + 1) / fine.cells
        u[two.first : two.last + 1] = np.interp(new, old, nodes(state.u, one))
    u[0], u[-1] = state.u[0], state.u[-1]
    return replace(state, u=u)


# --- what a limit watches ---


def inverted(span: Span, whole: float, near: float) -> float:
    """The temperature whose integral of k is `whole`."""
    u = near
    for _ in range(40):
        at = np.array([u])
        step = (whole - float(span.law.integral(at)[0])) / float(span.law.value(at)[0])
        u += step
        if abs(step) <= 1e-14 * abs(u):
            break
    return u


def fitted(span: Span, u: Array, tick: float, cells: int) -> tuple[Array, int]:
    """Polynomial (in node numbers) of the integral of k through the five nodes about a place, and the first of them."""
    first = min(max(round(tick) - 2, 0), cells - 4)
    local = nodes(u, span)[first : first + 5]
    middle = float(local[2])
    whole = span.law.integral(local) - float(span.law.integral(np.array([middle]))[0])
    matrix = np.vander(np.arange(-2.0, 3.0), 5)
    return np.linalg.solve(matrix, whole), first + 2


def value_at(grid: Grid, span: Span, u: Array, tick: float) -> float:
    poly, middle = fitted(span, u, tick, grid.cells)
    base = float(span.law.integral(nodes(u, span)[middle : middle + 1])[0])
    near = float(nodes(u, span)[min(max(round(tick), 0), grid.cells)])
    return inverted(span, base + float(np.polyval(poly, tick - middle)), near)


def place_of(grid: Grid, span: Span, tick: float) -> float:
    """Place of a fractional node number."""
    cells, model = grid.cells, grid.model
    part = tick / cells
    start, end = float(span.places[0]), float(span.places[-1])
    if part <= 0.0 or part >= 1.0:
        return start if part <= 0.0 else end
    low = min(int(tick), cells - 1)
    ratio = np.array([part])
    trial = grid._places(start, end - start, cells)[low : low + 2]
    if model.shape == BAR:
        return float((end - start) * np.sin(0.5 * np.pi * ratio[0]) ** 2)
    if model.shape == 0 or model.inner + start == 0.0:
        return start + (end - start) * part
    a, b = model.inner + float(trial[0]), model.inner + float(trial[1])
    return float(trial[0]) + a * float(np.expm1(np.log1p((b - a) / a) * (tick - low)))


def tick_of(grid: Grid, span: Span, place: float) -> float:
    start, end, model = float(span.places[0]), float(span.places[-1]), grid.model
    part = (place - start) / (end - start)
    if model.shape == BAR:
        return grid.cells * float(2 / np.pi * np.arcsin(np.sqrt(min(max(part, 0.0), 1.0))))
    if model.shape == 0 or model.inner + start == 0.0:
        return grid.cells * part
    a = model.inner + start
    return grid.cells * float(np.log1p((place - start) / a) / np.log1p((end - start) / a))


def hottest(grid: Grid, span: Span, u: Array) -> tuple[float, float]:
    """Highest temperature of a layer and its place."""
    local = nodes(u, span)
    i = int(np.argmax(local))
    best, tick = float(local[i]), float(i)
    if grid.model.solid and span is grid.spans[0] and i == 0:
        return best, 0.0
    poly, middle = fitted(span, u, float(i), grid.cells)
    base = float(span.law.integral(local[middle : middle + 1])[0])
    low, high = max(i - 1, 0), min(i + 1, grid.cells)
    top = float(np.polyval(poly, i - middle))
    for root in np.roots(np.polyder(poly)) if np.all(np.isfinite(poly)) and np.any(poly[:-1]) else ():
        if abs(root.imag) < 1e-9 and low < root.real + middle < high:
            here = float(np.polyval(poly, root.real))
            if here > top:
                top, tick = here, float(root.real) + middle
    if tick != i:
        best = max(inverted(span, base + top, best), best)
    return best, place_of(grid, span, tick)


Watch = tuple[str, float]  # a limit's name and its kelvin above the zero


def watched(grid: Grid, name: str, u: Array) -> float:
    if name == "left limit":
        return float(u[grid.body[0]])
    if name == "right limit":
        return float(u[grid.body[1]])
    spans = grid.spans if name == "limit" else [grid.spans[int(name.split()[1]) - 1]]
    return max(hottest(grid, span, u)[0] for span in spans)


@dataclass(frozen=True)
class Reached:
    """Where the sources' scale ends: at a limit, at the turn of the branch, or nowhere (name "")."""

    name: str
    state: State
    pin: int
    boundless: bool = False


def _root(ask: Callable[[float], tuple[float, State]], a: float, b: float, fine: float) -> State:
    """State at the root between two parameters of unlike sign, to a part `fine` of the larger one."""
    states: dict[float, State] = {}

    def value(p: float) -> float:
        f, states[p] = ask(p)
        return f

    fa, fb = ask(a)[0], ask(b)[0]
    if (fa < 0.0) == (fb < 0.0):  # the root is within rounding of an end
        return ask(a if abs(fa) < abs(fb) else b)[1]
    root = brentq(value, a, b, xtol=fine * max(abs(a), abs(b)), rtol=1e-14, maxiter=100)
    return states[root] if root in states else ask(root)[1]


class Search:
    """First limit or turn on a coarse grid, then the same on finer ones."""

    def __init__(self, model: Model, group: frozenset[int], watches: list[Watch]) -> None:
        self.model, self.group, self.watches = model, group, watches

    def over(self, grid: Grid, state: State) -> list[str]:
        return [name for name, limit in self.watches if watched(grid, name, state.u) > limit]

    def _crossing(self, grid: Grid, pin: int, a: State, b: State, names: list[str]) -> Reached:
        """The first of the limits crossed between two neighbouring states."""
        limits = dict(self.watches)
        best: Reached | None = None
        for name in names:
            near = {float(a.u[pin]): a, float(b.u[pin]): b}

            @cache
            def ask(p: float, name: str = name, near: dict[float, State] = near) -> tuple[float, State]:
                guess = near[min(near, key=lambda one: abs(one - p))]
                found, _ = grid.newton(guess, pin, p)
                near[p] = found
                return watched(grid, name, found.u) - limits[name], found

            state = _root(ask, float(a.u[pin]), float(b.u[pin]), SHARP)
            if best is None or state.size < best.state.size:
                best = Reached(name, state, pin)
        assert best is not None
        return best

    def first(self, grid: Grid, base: State, scale: float) -> Reached:
        """From a base state at size 0 upward. Raises StuckError where a limit is broken at the base."""
        _, tangent = grid.newton(base)
        fastest = float(np.max(np.abs(tangent[:-1])))
        if fastest == 0.0:
            return Reached("", base, 0)
        state, before, step = base, base, 0.2 * scale / fastest
        last_step = 0.0
        while True:
            ahead = step / last_step if last_step else 0.0
            guess = replace(
                state,
                u=state.u + (ahead * (state.u - before.u) if ahead else step * tangent[:-1]),
                squares=np.maximum(state.squares + ahead * (state.squares - before.squares), 0.0),
                size=state.size + step,
            )
            try:
                found, tangent_new = grid.newton(guess)
                moved = float(np.max(np.abs(found.u - state.u)))
                missed = float(np.max(np.abs(found.u - guess.u)))
                if missed > 0.35 * moved + 1e-9 or too_far(grid, moved, found) or not grid.stable(found):
                    raise StuckError
            except StuckError:
                step /= 3.0
                if step < 1e-3 * max(state.size, 1e-12 * scale / fastest):
                    return self._by_pin(grid, state)
                continue
            names = self.over(grid, found)
            if names:
                rates = np.abs(tangent_new[:-1])
                try:
                    return self._crossing(grid, int(np.argmax(rates)), state, found, names)
                except StuckError:
                    step /= 3.0
                    if step < 1e-9 * found.size:
                        raise
                    continue
            if float(np.max(np.abs(found.u))) > FAR or found.size > 1e60:
                return Reached("", found, 0)
            before, state, tangent, last_step = state, found, tangent_new, step
            step *= 1.2 if missed > 0.15 * moved else 2.5

    def _by_pin(self, grid: Grid, state: State) -> Reached:
        """Onward by the temperature of the fastest node, to the turn of the branch."""
        _, tangent = grid.newton(state)
        pin = int(np.argmax(np.abs(tangent[:-1])))
        sign = 1.0 if tangent[pin] > 0 else -1.0
        step = min(0.02 * max(float(np.max(np.abs(state.u))), 1e-3), grid.stride)
        while True:
            p = float(state.u[pin]) + sign * step
            try:
                found, slope = grid.newton(state, pin, p)
            except StuckError:
                step /= 4.0
                if step < 1e-9 * max(float(np.max(np.abs(state.u))), 1e-6):
                    raise
                continue
            turned = sign * slope[-1] <= 0.0
            names = self.over(grid, found)
            if names:
                try:
                    got = self._crossing(grid, pin, state, found, names)
                    _, slope = grid.newton(got.state, pin, float(got.state.u[pin]))
                except StuckError:
                    step /= 4.0
                    if step < 1e-9 * max(float(np.max(np.abs(state.u))), 1e-6):
                        raise
                    continue
                if sign * slope[-1] > 0.0:
                    return got
                turned = True
            if turned:
                return Reached("runaway", self.turn(grid, state, pin, float(state.u[pin]), p), pin)
            if abs(p) > FAR:
                return Reached("runaway", replace(found, size=found.size + p * float(slope[-1])), pin, boundless=True)
            state = found
            step *= 1.5

    def turn(self, grid: Grid, near: State, pin: int, a: float, b: float) -> State:
        """The state of greatest size between two pinned temperatures."""
        known = {float(near.u[pin]): near}

        @cache
        def ask(p: float) -> tuple[float, State]:
            guess = known[min(known, key=lambda one: abs(one - p))]
            found, slope = grid.newton(guess, pin, p)
            known[p] = found
            return float(slope[-1]), found

        return _root(ask, a, b, BLUNT)

    def again(self, coarse: Grid, got: Reached, fine: Grid) -> Reached:
        """The same end on a finer grid."""
        limits = dict(self.watches)
        pin = self._same(coarse, got.pin, fine)
        start = onto(got.state, coarse, fine)
        p = float(start.u[pin])
        wide = 1e-5 * max(float(np.max(np.abs(start.u))), 1e-9)
        if got.boundless:
            state, slope = fine.newton(start, pin, p)
            return Reached(got.name, replace(state, size=state.size + p * float(slope[-1])), pin, boundless=True)
        known = {p: start}

        @cache
        def ask(at: float) -> tuple[float, State]:
            guess = known[min(known, key=lambda one: abs(one - at))]
            found, slope = fine.newton(guess, pin, at)
            known[at] = found
            if got.name == "runaway":
                return -float(slope[-1]), found
            return watched(fine, got.name, found.u) - limits[got.name], found

        middle, _ = ask(p)
        direction = 1.0 if middle < 0.0 else -1.0
        for _ in range(14):
            try:
                other, _ = ask(p + direction * wide)
            except StuckError:
                break
            if (other < 0.0) != (middle < 0.0):
                ends = (p, p + direction * wide)
                return Reached(got.name, _root(ask, *ends, BLUNT if got.name == "runaway" else SHARP), pin)
            wide *= 3.0
        raise StuckError

    @staticmethod
    def _same(coarse: Grid, pin: int, fine: Grid) -> int:
        for one, two in zip(coarse.spans, fine.spans, strict=True):
            if one.first <= pin <= one.last:
                return two.first + round((pin - one.first) / coarse.cells * fine.cells)
        return 0 if pin == 0 else fine.n - 1

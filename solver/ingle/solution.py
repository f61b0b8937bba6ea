"""The solved cases of one structure; each quantity is worked out when first asked for."""

from __future__ import annotations

from enum import IntEnum
from functools import cached_property

import numpy as np

from ingle import field
from ingle.allowable import NO_STATE, Allowable, allowable, excesses, worst
from ingle.cases import Cases, Structure
from ingle.conductivities import Conductivity
from ingle.film_laws import Film, film
from ingle.march import Problem, State, problem_of, solve
from ingle.shapes import Array
from ingle.surfaces import Surface

ABSOLUTE_ZERO = -273.15
# A state whose heats are out of balance by more than this is not answered.
_UNBALANCED = 1e-8


class Status(IntEnum):
    """Why a case has no answer."""

    SOLVED = 0
    NO_OUTLET = 1  # no face lets heat out, so there is no steady state
    BELOW_ABSOLUTE_ZERO = 2
    OVERFLOW = 3  # beyond the range of floating-point numbers
    NO_CONDUCTIVITY = 4  # the conductivity falls to zero within the body
    NOT_BALANCED = 5  # no state was found whose heats balance


class Solution:
    """The solved cases of one structure. Arrays, one case an element; temperatures in °C."""

    def __init__(self, cases: Cases, structure: Structure) -> None:
        self.cases, self.structure = cases, structure

    @cached_property
    def problem(self) -> Problem:
        """Integrals over the layers and the laws of the faces."""
        return problem_of(self.cases, self.structure)

    @cached_property
    def sources(self) -> tuple[Array, ...]:
        """Each layer's generation."""
        return tuple(layer.generation for layer in self.cases.layers)

    @cached_property
    def state(self) -> State:
        """The march's result at the cases' own sources."""
        return solve(self.problem, self.sources)

    @cached_property
    def extremes(self) -> field.Extremes:
        """Peak, its place and layer, each layer's peak, and the lowest temperature."""
        return field.extremes(self.state)

    @cached_property
    def status(self) -> np.ndarray:
        """A ``Status`` for each case."""
        if not self.structure.settles:
            return np.full(len(self.cases), Status.NO_OUTLET, dtype=np.int8)
        return status_of(self.problem, self.state, self.extremes)

    @cached_property
    def pattern(self) -> tuple[Array, ...]:
        """What one multiple of the scaled sources makes in each layer, W/m³."""
        return self.cases.pattern or (np.ones(len(self.cases)), *(np.zeros(len(self.cases)) for _ in self.cases.layers[1:]))

    @cached_property
    def allowable(self) -> Allowable:
        """The multiple of the pattern at which the first limit is reached."""
        if not self.structure.settles:
            none = np.zeros(len(self.cases), dtype=np.int8)
            return Allowable(np.full(len(self.cases), np.nan), none, none)
        found = allowable(self.cases, self.problem, self.sources, self.pattern)
        if self.problem.linear:
            return found
        # The state there must itself be one that is answered: a conductivity may fall to zero before the limit.
        rest = (np.where(p != 0.0, 0.0, q) for q, p in zip(self.sources, self.pattern, strict=True))
        multiple = np.where(found.lacking == 0, found.multiple, 0.0)
        state = solve(self.problem, tuple(f + multiple * p for f, p in zip(rest, self.pattern, strict=True)))
        bad = (status_of(self.problem, state, field.extremes(state)) != Status.SOLVED) & (found.lacking == 0)
        lacking = np.where(bad, NO_STATE, found.lacking).astype(np.int8)
        return Allowable(np.where(bad, np.nan, found.multiple), found.governs, lacking)

    @cached_property
    def cold_broken(self) -> np.ndarray:
        """The limit most passed with the scaled sources at 0; 0 where none is."""
        if not self.structure.settles:
            return np.zeros(len(self.cases), np.int8)
        rest = tuple(np.where(p != 0.0, 0.0, q) for q, p in zip(self.sources, self.pattern, strict=True))
        cold = solve(self.problem, rest)
        excess, which = worst(excesses(self.cases, cold, field.extremes(cold)), len(self.cases))
        return np.where(excess > 0.0, which, 0)

    @cached_property
    def rooms(self) -> Array:
        """Kelvin left before each limit, by its number less 1; infinite where there is none."""
        rooms = np.full((3 + len(self.cases.layers), len(self.cases)), np.inf)
        for number, excess in excesses(self.cases, self.state, self.extremes):
            rooms[number - 1] = np.where(np.isnan(excess), np.inf, -excess)
        return rooms

    @cached_property
    def governs(self) -> np.ndarray:
        """The limit that the source would reach first; where no source can be allowed, the one now nearest or most passed."""
        nearest = np.argmin(self.rooms, axis=0) + 1
        has_limit = np.isfinite(self.rooms).any(axis=0)
        return np.where(self.allowable.lacking == 0, self.allowable.governs, np.where(has_limit, nearest, 0))

    @cached_property
    def headroom(self) -> Array:
        """Kelvin left before the governing limit, negative where it is passed; NaN where there is no limit."""
        room = np.take_along_axis(self.rooms, np.maximum(self.governs - 1, 0)[None, :].astype(np.intp), 0)[0]
        return np.where(self.governs > 0, room, np.nan)

    @cached_property
    def probe(self) -> Array:
        """Temperature at ``cases.probe``; NaN outside the body or where there is no probe."""
        if self.cases.probe is None:
            return np.full(len(self.cases), np.nan)
        return self.at(self.cases.probe)

    def at(self, place: Array) -> Array:
        """Temperature at a place: from the left face of a wall, else a radius. NaN outside the body."""
        first, last = self.problem.layers[0].a, self.problem.layers[-1].b
        # A place typed as the body's own size may miss it by rounding in the unit.
        slack = 1e-9 * (last - first + np.abs(place))
        inside = (place >= first - slack) & (place <= last + slack)
        within = np.where(inside, np.clip(place, first, last), first)
        return np.where(inside, self.state.sink + field.rise_at(self.state, within), np.nan)

    def _surface_film(self, side: Surface, rise: Array) -> Film | None:
        if side.law is None:
            return None
        assert side.size is not None
        assert side.fluid_celsius is not None
        return film(side.law, side.law_fluid, side.size, side.speed, side.sink + rise, side.fluid_celsius)

    @cached_property
    def left_film(self) -> Film | None:
        """What the law at the left face gives, None without one."""
        return self._surface_film(self.problem.left, self.state.u)

    @cached_property
    def right_film(self) -> Film | None:
        """What the law at the right face gives, None without one."""
        R, state = self.problem.right.resistance, self.state
        fall = 0.0 if R is None else R * state.Q_right / self.problem.area_right
        return self._surface_film(self.problem.right, state.rise_right - fall)


def status_of(problem: Problem, state: State, ends: field.Extremes) -> np.ndarray:
    """A ``Status`` for each case of a state that has a way out for its heat."""
    cold = state.sink + ends.lowest < ABSOLUTE_ZERO
    finite = np.isfinite(ends.peak) & np.isfinite(ends.lowest) & np.isfinite(state.Q_left) & np.isfinite(state.Q_right)
    status = np.where(cold, Status.BELOW_ABSOLUTE_ZERO, Status.SOLVED)
    if not problem.linear:
        status = np.where(field.balance(state) > _UNBALANCED, Status.NOT_BALANCED, status)
        for number, layer in enumerate(problem.layers):
            if isinstance(layer.k, Conductivity):
                low, high = state.sink + ends.lows[number], state.sink + ends.by_layer[number]
                status = np.where(layer.k.usable(np.minimum(low, high), high), status, Status.NO_CONDUCTIVITY)
    return np.where(finite, status, Status.OVERFLOW).astype(np.int8)

"""Cases whose sources do not depend on temperature, solved by the march."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from ingle import field
from ingle.allowable import NO_STATE, Allowable, allowable, excesses, worst
from ingle.conductivities import Conductivity
from ingle.currents import amplitude, constant_heat, even_amplitude, even_sum, layer_volume
from ingle.march import Problem, State, problem_of, solve
from ingle.shapes import MEASURE, Array
from ingle.solution import ABSOLUTE_ZERO, Heats, Solution, Status
from ingle.sources import Conductor, Generation, Source

# A state whose heats are out of balance by more than this is not answered.
_UNBALANCED = 1e-8


class MarchSolution(Solution):
    """The solved cases of one structure, none of whose sources depends on temperature."""

    @cached_property
    def problem(self) -> Problem:
        """Integrals over the layers and the laws of the faces."""
        return problem_of(self.cases, self.structure)

    def _heat(self, number: int, source: Source | None) -> Array:
        if isinstance(source, Conductor):
            return constant_heat(self.cases, number, source)
        assert not isinstance(source, Generation)
        return np.zeros(len(self.cases)) if source is None else source

    @cached_property
    def sources(self) -> tuple[Array, ...]:
        """Each layer's heat per volume."""
        return tuple(self._heat(number, layer.generation) for number, layer in enumerate(self.cases.layers))

    @cached_property
    def multiples(self) -> tuple[Array, ...]:
        """The pattern's heat per volume in each layer."""
        return tuple(self._heat(number, source) for number, source in enumerate(self.pattern))

    @cached_property
    def rest(self) -> tuple[Array, ...]:
        """Each layer's heat per volume with the scaled sources at 0."""
        return tuple(np.where(p != 0.0, 0.0, q) for q, p in zip(self.sources, self.multiples, strict=True))

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
    def allowable(self) -> Allowable:
        """The multiple of the pattern at which the first limit is reached."""
        if not self.structure.settles:
            none = np.zeros(len(self.cases), dtype=np.int8)
            return Allowable(np.full(len(self.cases), np.nan), none, none)
        found = allowable(self.cases, self.problem, self.sources, self.multiples)
        if self.problem.linear:
            return found
        # The state there must itself be one that is answered: a conductivity may fall to zero before the limit.
        multiple = np.where(found.lacking == 0, found.multiple, 0.0)
        state = solve(self.problem, tuple(f + multiple * p for f, p in zip(self.rest, self.multiples, strict=True)))
        bad = (status_of(self.problem, state, field.extremes(state)) != Status.SOLVED) & (found.lacking == 0)
        lacking = np.where(bad, NO_STATE, found.lacking).astype(np.int8)
        return Allowable(np.where(bad, np.nan, found.multiple), found.governs, lacking)

    @cached_property
    def cold_broken(self) -> np.ndarray:
        """The limit most passed with the scaled sources at 0; 0 where none is."""
        if not self.structure.settles:
            return np.zeros(len(self.cases), np.int8)
        cold = solve(self.problem, self.rest)
        excess, which = worst(excesses(self.cases, cold, field.extremes(cold)), len(self.cases))
        return np.where(excess > 0.0, which, 0)

    def excesses(self) -> list[tuple[int, Array]]:
        """See ``Solution``."""
        return excesses(self.cases, self.state, self.extremes)

    def peak(self) -> tuple[Array, Array, Array]:
        """See ``Solution``."""
        return self.state.sink + self.extremes.peak, self.extremes.place, self.extremes.layer

    def layer_range(self, n: int) -> tuple[Array, Array]:
        """See ``Solution``."""
        return self.state.sink + self.extremes.lows[n - 1], self.state.sink + self.extremes.by_layer[n - 1]

    def layer_mean(self, n: int) -> Array:
        """See ``Solution``."""
        return self.state.sink + field.layer_mean(self.state, n - 1)

    def mean(self) -> Array:
        """See ``Solution``."""
        return self.state.sink + field.mean_rise(self.state)

    def layer_ends(self, n: int) -> tuple[Array, Array]:
        """See ``Solution``."""
        ends = self.state.ends[n - 1]
        return self.state.sink + ends.T0, self.state.sink + ends.T1

    def layer_at(self, n: int, s: Array) -> Array:
        """See ``Solution``."""
        return self.state.sink + field.layer_rise(self.state, n - 1, s)

    def outermost(self) -> tuple[Array, Array]:
        """See ``Solution``."""
        R, state = self.problem.right.resistance, self.state
        fall = 0.0 if R is None else R * state.Q_right / self.problem.area_right
        return state.sink + state.u, state.sink + (state.rise_right - fall)

    @cached_property
    def _heats(self) -> Heats:
        state, measure = self.state, MEASURE[self.structure.shape]
        left, right, made = (0.0 - state.Q_left) * measure, state.Q_right * measure, field.made(state) * measure
        return Heats(left, right, np.zeros_like(left), made, field.short(state) * measure, field.largest_heat(state) * measure)

    def heats(self) -> Heats:
        """See ``Solution``."""
        return self._heats

    def current(self, n: int) -> tuple[Array, Array]:
        """See ``Solution``."""
        source = self.cases.layers[n - 1].generation
        assert isinstance(source, Conductor)
        made = amplitude(self.cases, n - 1, source)
        F = even_sum(made, source, layer_volume(self.cases, n - 1))
        return F, even_amplitude(made, F)


def status_of(problem: Problem, state: State, ends: field.Extremes) -> np.ndarray:
    """A ``Status`` for each case of a state that has a way out for its heat."""
    cold = state.sink + ends.lowest < ABSOLUTE_ZERO
    finite = np.isfinite(ends.peak) & np.isfinite(ends.lowest) & np.isfinite(state.Q_left) & np.isfinite(state.Q_right)
    status = np.where(cold, Status.BELOW_ABSOLUTE_ZERO, Status.SOLVED)
    if not problem.linear:
        short, largest = field.short(state), field.largest_heat(state)
        relative = np.where(largest > 0.0, short / np.where(largest > 0.0, largest, 1.0), short)
        status = np.where(relative > _UNBALANCED, Status.NOT_BALANCED, status)
        for number, layer in enumerate(problem.layers):
            if isinstance(layer.k, Conductivity):
                low, high = state.sink + ends.lows[number], state.sink + ends.by_layer[number]
                status = np.where(layer.k.usable(np.minimum(low, high), high), status, Status.NO_CONDUCTIVITY)
    return np.where(finite, status, Status.OVERFLOW).astype(np.int8)

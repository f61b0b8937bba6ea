"""Cases whose sources depend on temperature, and bars, solved by the network of two-ports."""

from __future__ import annotations

from collections.abc import Callable
from functools import cached_property

import numpy as np

from ingle import network
from ingle.allowable import BROKEN_WITHOUT_SOURCE, NEVER_REACHED, NO_LIMIT, NOT_FOUND, Allowable
from ingle.network import NetworkState, shape_sum, solve_network
from ingle.network_cases import Driven, network_of
from ingle.network_scales import RUNAWAY, Limit, allowable_scale
from ingle.network_state import Status as Ended
from ingle.shapes import MEASURE, Array
from ingle.solution import ABSOLUTE_ZERO, Heats, Solution, Status
from ingle.sources import Conductor, Source

_STATUS = {
    Ended.SOLVED: Status.SOLVED,
    Ended.RUNAWAY: Status.RUNAWAY,
    Ended.NO_OUTLET: Status.NO_OUTLET,
    Ended.NOT_CONVERGED: Status.NOT_BALANCED,
    Ended.FLOORED_K: Status.NO_CONDUCTIVITY,
    Ended.TOO_HOT: Status.TOO_HOT,
    Ended.UNRESOLVED: Status.UNRESOLVED,
}
_CODES = np.array([_STATUS[ended] for ended in Ended], dtype=np.int8)


class NetworkSolution(Solution):
    """The solved cases of one structure, some of whose sources depend on temperature, or bars."""

    @cached_property
    def now(self) -> Driven:
        """The problem at the cases' own sources."""
        return network_of(self.cases, self.structure, [layer.generation for layer in self.cases.layers])

    @cached_property
    def state(self) -> NetworkState:
        """The engine's result at the cases' own sources."""
        return solve_network(self.now.problem)

    @cached_property
    def status(self) -> np.ndarray:
        """See ``Solution``."""
        if not self.structure.settles:
            return np.full(len(self.cases), Status.NO_OUTLET, dtype=np.int8)
        status = _CODES[self.state.status]
        cold = (status == Status.SOLVED) & (self.state.lowest < ABSOLUTE_ZERO)
        return np.where(cold, Status.BELOW_ABSOLUTE_ZERO, status).astype(np.int8)

    @cached_property
    def limits(self) -> list[tuple[int, Limit]]:
        """Each limit and its number."""
        cases = self.cases
        found: list[tuple[int, Array | None, int | str | None]] = [
            (1, cases.limit, None),
            (2, None if self.structure.solid else cases.left_limit, "left"),
            (3, cases.right_limit, "right"),
        ]
        found += [(4 + number, limit, number) for number, limit in enumerate(cases.layer_limits)]
        return [(number, Limit(limit, where)) for number, limit, where in found if limit is not None]

    @cached_property
    def allowable(self) -> Allowable:
        """See ``Solution``."""
        n = len(self.cases)
        nothing, none = np.full(n, np.nan), np.zeros(n, dtype=np.int8)
        limited = np.zeros(n, dtype=bool)
        for _, limit in self.limits:
            limited |= ~np.isnan(limit.value)
        if not self.structure.settles or not limited.any():
            return Allowable(nothing, none, np.full(n, NO_LIMIT, dtype=np.int8))
        sources: list[Source] = []
        for layer, scaled in zip(self.cases.layers, self.pattern, strict=True):
            sources.append(layer.generation if scaled is None else scaled)
        problem = network_of(self.cases, self.structure, sources, [p is not None for p in self.pattern]).problem
        found = allowable_scale(problem, tuple(limit for _, limit in self.limits))
        numbers = np.array([number for number, _ in self.limits])
        by_limit = numbers[np.maximum(found.governs, 0)]
        governs = np.where(found.governs >= 0, by_limit, np.where(found.governs == RUNAWAY, -1, 0))
        lacking = np.where(np.isnan(found.scale), NOT_FOUND, 0)
        lacking = np.where(found.never, NEVER_REACHED, lacking)
        lacking = np.where(found.broken >= 0, BROKEN_WITHOUT_SOURCE, lacking)
        lacking = np.where(limited, lacking, NO_LIMIT)
        return Allowable(np.where(lacking == 0, found.scale, np.nan), governs.astype(np.int8), lacking.astype(np.int8))

    @cached_property
    def cold_broken(self) -> np.ndarray:
        """See ``Solution``."""
        return np.where(self.allowable.lacking == BROKEN_WITHOUT_SOURCE, self.allowable.governs, 0)

    def excesses(self) -> list[tuple[int, Array]]:
        """See ``Solution``."""
        last = len(self.cases.layers)
        watched: dict[int, Callable[[], Array]] = {
            1: lambda: self.peak()[0],
            2: lambda: self.layer_ends(1)[0],
            3: lambda: self.layer_ends(last)[1],
        }
        found = []
        for number, limit in self.limits:
            T = watched[number]() if number in watched else self.layer_range(number - 3)[1]
            found.append((number, T - limit.value))
        return found

    @cached_property
    def _peak(self) -> network.NetworkPeak:
        return network.peak(self.state)

    def peak(self) -> tuple[Array, Array, Array]:
        """See ``Solution``."""
        return self._peak.T, self._peak.place, self._peak.layer + 1.0

    def layer_range(self, n: int) -> tuple[Array, Array]:
        """See ``Solution``."""
        return network.low(self.state, n - 1), network.peak(self.state, n - 1).T

    def layer_mean(self, n: int) -> Array:
        """See ``Solution``."""
        return network.mean(self.state, n - 1)

    def mean(self) -> Array:
        """See ``Solution``."""
        return network.mean(self.state)

    def layer_ends(self, n: int) -> tuple[Array, Array]:
        """See ``Solution``."""
        return self.state.left[n - 1], self.state.right[n - 1]

    def layer_at(self, n: int, s: Array) -> Array:
        """See ``Solution``."""
        if s.ndim == 1:
            return network.temperature(self.state, n - 1, s)
        return np.stack([network.temperature(self.state, n - 1, place) for place in s])

    def outermost(self) -> tuple[Array, Array]:
        """See ``Solution``."""
        return self.state.surfaces[0], self.state.surfaces[1]

    @cached_property
    def _heats(self) -> Heats:
        state, measure = self.state, MEASURE[self.structure.shape]
        left, right = -state.Q_left[0], state.Q_right[-1]
        gross = [self._gross(number) for number in range(len(self.cases.layers))]
        made, net = gross[0], state.made[0]
        for more, of_layer in zip(gross[1:], state.made[1:], strict=True):
            made, net = made + more, net + of_layer
        side = made - net if self.cases.bar is not None and self.cases.bar.side is not None else np.zeros_like(made)
        largest = np.maximum(np.abs(made), np.abs(side))
        for contact in (self.now.problem.left.contact, self.now.problem.right.contact):
            if contact is not None:
                largest = np.maximum(largest, contact * self._multiple(0))
        for Q in (*state.Q_left, *state.Q_right):
            largest = np.maximum(largest, np.abs(Q))
        for face, end in ((self.cases.left, self.left_area), (self.cases.right, self.right_area)):
            if face.flux is not None:
                largest = np.maximum(largest, np.abs(face.flux * end))
        short = np.abs(state.imbalance) + np.abs(left + right - net)
        return Heats(*(x * measure for x in (left, right, side, made, short, largest)))

    def _gross(self, number: int) -> Array:
        """∫ s g r^m dr of a layer's source alone."""
        return self._multiple(number) * self.now.problem.layers[number].source.scale * shape_sum(self.state, number)

    def _multiple(self, number: int) -> Array | float:
        group = self.now.problem.layers[number].source.group
        if group is None:
            return 1.0
        root: Array = self.state.root_mu[group]
        return root * root

    def heats(self) -> Heats:
        """See ``Solution``."""
        return self._heats

    def current(self, n: int) -> tuple[Array, Array]:
        """See ``Solution``."""
        made, source = self.now.amplitudes[n - 1], self.cases.layers[n - 1].generation
        assert made is not None
        assert isinstance(source, Conductor)
        rho = source.resistivity.rho0
        base = np.ones_like(made.heat) if rho is None else rho
        F = shape_sum(self.state, n - 1) * (1.0 / base if made.inverse else base)
        if made.known is not None:
            return F, made.known
        group = self.now.problem.layers[n - 1].source.group
        assert group is not None
        return F, self.state.root_mu[group]

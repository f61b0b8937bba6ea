"""The state of a network's cases, what its sources are multiplied by, and how a case may end."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from enum import IntEnum

import numpy as np

from ingle.network_sweep import Network
from ingle.ports import PortModel
from ingle.shapes import Array


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
    """Rises at the elements' faces, their insides, the ends' outermost surfaces, and the unknown multiples.

    ``faces``: Ta, Tb of the first element, of the second and so on, by cases. ``surfaces`` count where a resistance lies before.
    """

    faces: Array
    theta: list[Array | None]
    surfaces: list[Array]
    mu: list[Array]

    @property
    def Ta(self) -> Array:
        """Rises at the left faces: elements × cases."""
        return self.faces[0::2]

    @property
    def Tb(self) -> Array:
        """Rises at the right faces: elements × cases."""
        return self.faces[1::2]

    def take(self, rows: np.ndarray) -> State:
        """The state of some of the cases."""
        theta = [None if x is None else x[:, rows] for x in self.theta]
        return State(self.faces[:, rows], theta, [x[rows] for x in self.surfaces], [x[rows] for x in self.mu])

    def put(self, rows: np.ndarray, other: State) -> None:
        """Write another state into some of the cases."""
        self.faces[:, rows] = other.faces
        for mine, theirs in zip(self._lists(), other._lists(), strict=True):
            mine[..., rows] = theirs

    def follow(self, other: State, where: np.ndarray | None) -> None:
        """Become another state, where asked."""
        if where is None:
            self.faces, self.theta, self.surfaces, self.mu = other.faces, other.theta, other.surfaces, other.mu
            return
        np.copyto(self.faces, other.faces, where=where)
        for mine, theirs in zip(self._lists(), other._lists(), strict=True):
            np.copyto(mine, theirs, where=where)

    def _lists(self) -> list[Array]:
        return [*(x for x in self.theta if x is not None), *self.surfaces, *self.mu]


@dataclass(frozen=True)
class Hold:
    """A temperature that is held: its rise, and derivatives to each element's Ta, Tb and μ (None where it has none)."""

    T: Array
    a: list[Array | float | None]
    b: list[Array | float | None]
    l: list[Array | float | None]  # noqa: E741 - λ


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
        return self.by_nodes or len(self.given) > 0

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


def cold(network: Network, border: Border) -> State:
    """Every temperature at the case's zero."""
    elements = network.elements
    n = len(network.zero)
    zero = np.zeros(n)
    state = State(
        np.zeros((2 * len(elements), n)), [e.port.start() for e in elements], [np.zeros(n), np.zeros(n)],
        [np.zeros(n) for _ in range(border.count)],
    )  # fmt: skip
    if border.given:
        sums: list[Array | float] = [0.0] * len(border.given)
        for element in elements:
            group, weight = element.port.source.group, element.port.source.weight
            if group is not None and weight is not None:
                sums[group] = sums[group] + weight * (element.port.source.at(zero)[0] * element.port.volume())
        for g, total in enumerate(sums):
            state.mu[g] = border.scale * (border.given[g] / total) ** 2
    return state


def usable(network: Network, border: Border, state: State) -> np.ndarray | None:
    """False where a conductivity or resistivity lies on its floor; None where that cannot be."""
    held: np.ndarray | None = None
    if not any(element.port.floors for element in network.elements):
        return None
    for e, (element, mu) in enumerate(zip(network.elements, border.multiples(network, state), strict=True)):
        port, Ta, Tb = element.port, state.faces[2 * e], state.faces[2 * e + 1]
        if not port.floors:
            continue
        Ta = port.centre(Tb, mu, state.theta[e]) if port.solid else Ta
        low, high = np.minimum(Ta, Tb), np.maximum(Ta, Tb)
        inside = port.span(state.theta[e])
        if inside is not None:
            low, high = np.minimum(low, inside[0]), np.maximum(high, inside[1])
        elif not port.solid:
            high = np.maximum(high, port.peak(Ta, Tb, mu, None).T)
        here = port.conductivity_usable(low, high)
        if here is not None:
            held = here if held is None else held & here
    return held

"""The solved cases of one structure, by either engine; each quantity is worked out when first asked for."""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from enum import IntEnum
from functools import cached_property

import numpy as np

from ingle.allowable import Allowable
from ingle.cases import Cases, Face, FaceKind, Structure
from ingle.currents import resistance, voltage
from ingle.film_laws import Film, film
from ingle.shapes import MEASURE, Array, Shape, area
from ingle.sources import Conductor, Source

ABSOLUTE_ZERO = -273.15


class Status(IntEnum):
    """Why a case has no answer."""

    SOLVED = 0
    NO_OUTLET = 1  # no face lets heat out, so there is no steady state
    BELOW_ABSOLUTE_ZERO = 2
    OVERFLOW = 3  # beyond the range of floating-point numbers
    NO_CONDUCTIVITY = 4  # a conductivity, or a resistivity, falls to zero within the body
    NOT_BALANCED = 5  # no state was found whose heats balance
    RUNAWAY = 6  # the state reached from cold does not exist at this source
    TOO_HOT = 7  # hotter than any solid stays solid
    UNRESOLVED = 8  # the temperature changes over too small a share of a layer


@dataclass(frozen=True)
class Heats:
    """W/m² of a wall or of a bar's section, W/m of a cylinder, W of a sphere: net heat leaving on the left, the right, through a
    bar's sides; heat made; what they are short of; the largest of made, put in, and crossing a layer's face."""

    left: Array
    right: Array
    side: Array
    made: Array
    short: Array
    largest: Array


class Solution(ABC):
    """The solved cases of one structure. Arrays, one case an element; temperatures in °C.

    Each quantity is worked out when first asked for. Heats are W/m² of a wall or of a bar's section, W/m of a cylinder, W of a
    sphere; fluxes are W/m² of the face. Layers are numbered from 1.
    """

    def __init__(self, cases: Cases, structure: Structure) -> None:
        self.cases, self.structure = cases, structure

    # What each engine works out its own way.

    @property
    @abstractmethod
    def status(self) -> np.ndarray:
        """A ``Status`` for each case."""

    @property
    @abstractmethod
    def allowable(self) -> Allowable:
        """The multiple of the pattern's heat at which the first limit is reached."""

    @property
    @abstractmethod
    def cold_broken(self) -> np.ndarray:
        """The limit passed with the scaled sources at 0; 0 where none is."""

    @abstractmethod
    def excesses(self) -> list[tuple[int, Array]]:
        """Each limit's number, and how many kelvin its temperature is above it (NaN where a case has not that limit)."""

    @abstractmethod
    def peak(self) -> tuple[Array, Array, Array]:
        """The highest temperature, its place and its layer."""

    @abstractmethod
    def layer_range(self, n: int) -> tuple[Array, Array]:
        """Lowest and highest temperature of a layer."""

    @abstractmethod
    def layer_mean(self, n: int) -> Array:
        """Mean over a layer's volume."""

    @abstractmethod
    def mean(self) -> Array:
        """Mean over the body's volume."""

    @abstractmethod
    def layer_ends(self, n: int) -> tuple[Array, Array]:
        """Temperatures of a layer's left face, or centre, and right face."""

    @abstractmethod
    def layer_at(self, n: int, s: Array) -> Array:
        """Temperature in a layer at a distance from its left face, or from the centre."""

    @abstractmethod
    def outermost(self) -> tuple[Array, Array]:
        """Temperatures of the outermost surfaces on the left and right, beyond the faces' resistances."""

    @abstractmethod
    def heats(self) -> Heats:
        """The heats of the body."""

    @abstractmethod
    def current(self, n: int) -> tuple[Array, Array]:
        """F = ∫ f r^m dr and the amplitude of a layer's conductor (see ``currents``)."""

    # What follows from that.

    @cached_property
    def pattern(self) -> tuple[Source | None, ...]:
        """What one multiple of the scaled sources is in each layer."""
        return self.cases.pattern or (np.ones(len(self.cases)), *(None for _ in self.cases.layers[1:]))

    @cached_property
    def rooms(self) -> Array:
        """Kelvin left before each limit, by its number less 1; infinite where there is none."""
        rooms = np.full((3 + len(self.cases.layers), len(self.cases)), np.inf)
        for number, excess in self.excesses():
            rooms[number - 1] = np.where(np.isnan(excess), np.inf, -excess)
        return rooms

    @cached_property
    def governs(self) -> np.ndarray:
        """The limit that the source would reach first, −1 for runaway; where no source can be allowed, the one now nearest or
        most passed."""
        nearest = np.argmin(self.rooms, axis=0) + 1
        has_limit = np.isfinite(self.rooms).any(axis=0)
        return np.where(self.allowable.lacking == 0, self.allowable.governs, np.where(has_limit, nearest, 0))

    @cached_property
    def headroom(self) -> Array:
        """Kelvin left before the governing limit (any, where that is runaway), negative where it is passed; NaN without one."""
        nearest = np.argmin(self.rooms, axis=0)
        number = np.where(self.governs > 0, self.governs - 1, nearest).astype(np.intp)
        room = np.take_along_axis(self.rooms, number[None, :], 0)[0]
        return np.where((self.governs != 0) & np.isfinite(room), room, np.nan)

    @cached_property
    def origins(self) -> tuple[Array, ...]:
        """Places of the layers' left faces: from the left face of a wall, else radii."""
        inner = self.cases.inner
        place = np.zeros(len(self.cases)) if inner is None or self.structure.shape == Shape.WALL else inner
        found = [place]
        for layer in self.cases.layers[:-1]:
            place = place + layer.thickness
            found.append(place)
        return tuple(found)

    @cached_property
    def inner(self) -> Array | None:
        """The bore radius, None where the body is solid or a wall."""
        return None if self.structure.solid or self.structure.shape == Shape.WALL else self.cases.inner

    @cached_property
    def left_area(self) -> Array | float:
        """r^m of the body's left face."""
        return area(self.structure.shape, self.origins[0])

    @cached_property
    def right_area(self) -> Array | float:
        """r^m of the body's right face."""
        return area(self.structure.shape, self.origins[-1] + self.cases.layers[-1].thickness)

    def left_flux(self) -> Array:
        """Net heat leaving through the left face, W/m² of that face; 0 at the centre of a solid body."""
        if self.structure.solid:
            return np.zeros(len(self.cases))
        return self.heats().left / (self.left_area * MEASURE[self.structure.shape])

    def right_flux(self) -> Array:
        """Net heat leaving through the right face, W/m² of that face."""
        return self.heats().right / (self.right_area * MEASURE[self.structure.shape])

    def left_share(self) -> Array:
        """Share of all heat that leaves which leaves on the left, 0 to 1; NaN where none leaves beyond rounding."""
        heats = self.heats()
        left, right, side = (np.maximum(x, 0.0) for x in (heats.left, heats.right, heats.side))
        total = left + right + side
        leaves = total > 1e-13 * heats.largest
        return np.where(leaves, left / np.where(leaves, total, 1.0), np.nan)

    def balance(self) -> Array:
        """What the heats are out of balance by, over the largest of heat made, taken in and passing through (a self-check)."""
        heats = self.heats()
        return np.where(heats.largest > 0.0, heats.short / np.where(heats.largest > 0.0, heats.largest, 1.0), heats.short)

    @cached_property
    def probe(self) -> Array:
        """Temperature at ``cases.probe``; NaN outside the body or where there is no probe."""
        if self.cases.probe is None:
            return np.full(len(self.cases), np.nan)
        return self.at(self.cases.probe)

    def at(self, place: Array) -> Array:
        """Temperature at a place: from the left face of a wall, else a radius; at a joint on its left. NaN outside the body."""
        first, last = self.origins[0], self.origins[-1] + self.cases.layers[-1].thickness
        # A place typed as the body's own size may miss it by rounding in the unit.
        slack = 1e-9 * (last - first + np.abs(place))
        inside = (place >= first - slack) & (place <= last + slack)
        T = np.full(len(self.cases), np.nan)
        for n, (origin, layer) in enumerate(zip(self.origins, self.cases.layers, strict=True), 1):
            here = inside & ((place > origin) | (n == 1))
            T = np.where(here, self.layer_at(n, np.clip(place - origin, 0.0, layer.thickness)), T)
        return T

    @cached_property
    def films(self) -> dict[str, Film]:
        """What the laws give at the left and right face, and on a bar's sides at its mean temperature."""
        found: dict[str, Film] = {}
        kinds = (self.structure.left, self.structure.right)
        for name, face, kind, T in zip(("left", "right"), (self.cases.left, self.cases.right), kinds, self.outermost(), strict=True):
            if face.law is not None and kind == FaceKind.SURFACE:
                found[name] = _film(face, T)
        bar = self.cases.bar
        if bar is not None and bar.side is not None and bar.side.law is not None:
            found["side"] = _film(bar.side, self.mean())
        return found

    def film(self, side: str, part: str) -> Array:
        """``h`` or ``doubt`` of a side's law; NaN without one."""
        found = self.films.get(side)
        return np.full(len(self.cases), np.nan) if found is None else np.zeros(len(self.cases)) + getattr(found, part)

    def voltage(self, n: int) -> Array:
        """Along a layer's current; NaN where it has none, or a size is not given."""
        source = self.cases.layers[n - 1].generation
        if not isinstance(source, Conductor):
            return np.full(len(self.cases), np.nan)
        return voltage(self.cases, n - 1, source, *self.current(n))

    def resistance(self, n: int) -> Array:
        """Along a layer's current; NaN where it has none, or a size is not given."""
        source = self.cases.layers[n - 1].generation
        if not isinstance(source, Conductor):
            return np.full(len(self.cases), np.nan)
        return resistance(self.cases, n - 1, source, self.current(n)[0])


def _film(face: Face, T: Array) -> Film:
    assert face.law is not None
    assert face.size is not None
    assert face.fluid is not None
    return film(face.law, face.law_fluid, face.size, face.speed, T, face.fluid)

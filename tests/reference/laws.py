"""How a property hangs on temperature: value, slope and integral of it, as functions of kelvin above a zero of choice."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
TWENTY = 293.15


class Bound(Protocol):
    """A law seen from a zero: arguments are kelvin above it."""

    def value(self, u: Array) -> Array: ...
    def slope(self, u: Array) -> Array: ...
    def integral(self, u: Array) -> Array: ...


@dataclass(frozen=True)
class Straight:
    """a + b u."""

    a: float
    b: float

    def value(self, u: Array) -> Array:
        return self.a + self.b * u

    def slope(self, u: Array) -> Array:
        return np.full_like(u, self.b)

    def integral(self, u: Array) -> Array:
        return u * (self.a + 0.5 * self.b * u)


class Broken:
    """Straight between points, held beyond the ends."""

    def __init__(self, at: Array, values: Array) -> None:
        if at[0] < 0.0 < at[-1] and 0.0 not in at:  # a point at zero, so that the integral keeps its digits there
            here = np.interp(0.0, at, values)
            place = int(np.searchsorted(at, 0.0))
            at, values = np.insert(at, place, 0.0), np.insert(values, place, here)
        self.at, self.values = at, values
        self.slopes = np.concatenate(([0.0], np.diff(values) / np.diff(at), [0.0]))
        self.filled = np.concatenate(([0.0], np.cumsum(np.diff(at) * (values[1:] + values[:-1]) / 2)))
        zero = np.array([0.0])
        self.offset = 0.0
        self.offset = float(self.integral(zero)[0])

    def _piece(self, u: Array) -> NDArray[np.intp]:
        return np.searchsorted(self.at, u, side="right")

    def value(self, u: Array) -> Array:
        return np.interp(u, self.at, self.values)

    def slope(self, u: Array) -> Array:
        return self.slopes[self._piece(u)]

    def integral(self, u: Array) -> Array:
        piece = self._piece(u)
        base = np.maximum(piece - 1, 0)
        step = u - self.at[base]
        inside: Array = self.filled[base] + step * (self.values[base] + 0.5 * self.slopes[piece] * step) - self.offset
        return inside


class Inverse:
    """One over a law (for a conductor's 1/ρ); its integral is not needed."""

    def __init__(self, law: Bound) -> None:
        self.law = law

    def value(self, u: Array) -> Array:
        return 1.0 / self.law.value(u)

    def slope(self, u: Array) -> Array:
        inverse = 1.0 / self.law.value(u)
        return -inverse * inverse * self.law.slope(u)

    def integral(self, u: Array) -> Array:
        raise NotImplementedError


@dataclass(frozen=True)
class Law:
    """base · [1 + slope (T − reference)] with T in kelvin, or a table of (kelvin, value)."""

    base: float = 1.0
    slope: float = 0.0
    reference: float = TWENTY
    table: tuple[tuple[float, float], ...] = ()

    def bound(self, zero: float) -> Bound:
        if self.table:
            return Broken(np.array([t for t, _ in self.table]) - zero, np.array([v for _, v in self.table]))
        rise = zero - self.reference
        return Straight(self.base * (1.0 + self.slope * rise), self.base * self.slope)

    def at(self, kelvin: float) -> float:
        return float(self.bound(kelvin).value(np.array([0.0]))[0])

    @property
    def varies(self) -> bool:
        return bool(self.table) or self.slope != 0.0

    def outside(self, lowest: float, highest: float) -> bool:
        """Whether a table is used beyond its ends."""
        return bool(self.table) and (lowest < self.table[0][0] or highest > self.table[-1][0])


def table_law(points: Sequence[tuple[float, float]]) -> Law:
    return Law(table=tuple(points))

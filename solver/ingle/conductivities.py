"""Properties that depend on temperature: tables, and the conductivity with its Kirchhoff integral K(T) = ∫ k dT.

Temperatures are in °C throughout. The last axis of every array of temperatures or integrals runs over the cases, so that
one case among many gets the same bits as alone; axes before it (nodes, say) are free.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from ingle.shapes import Array

# Below this share of k₀ a conductivity that falls linearly is held, so that trial temperatures stay finite.
FLOOR = 1e-3


@dataclass(frozen=True)
class Table:
    """A property y over temperature, straight between its points and held beyond its ends.

    ``T`` [°C] and ``y``: n × p arrays, T rising along each row. Rows with fewer points are padded with points beyond their
    end that hold the last y.
    """

    T: Array
    y: Array

    def at(self, T: Array) -> Array:
        """y at T."""
        j, rows = self._segment(T), self._rows
        left = np.maximum(j - 1, 0)
        y: Array = self.y[rows, left] + self._slopes[rows, j] * (T - self.T[rows, left])
        return y

    def slope(self, T: Array) -> Array:
        """dy/dT at T; at a point of the table that of its right side, 0 beyond the ends."""
        slope: Array = self._slopes[self._rows, self._segment(T)]
        return slope

    def integral(self, T0: Array, T1: Array) -> Array:
        """∫ y dT from T0 to T1. Between neighbouring points it keeps its digits for close temperatures."""
        rows, j0, j1 = self._rows, self._segment(T0), self._segment(T1)
        within = (self.at(T0) + self.at(T1)) / 2.0 * (T1 - T0)
        left0, left1 = np.maximum(j0 - 1, 0), np.maximum(j1 - 1, 0)
        # Upward the first point passed is the one right of T0 and the last the one left of T1; downward the reverse.
        up = j1 > j0
        first = np.where(up, np.minimum(j0, self._last), left0)
        last = np.where(up, left1, np.minimum(j1, self._last))
        across = (
            self._trapezium(T0, self.T[rows, first], self.y[rows, first])
            + (self._sums[rows, last] - self._sums[rows, first])
            - self._trapezium(T1, self.T[rows, last], self.y[rows, last])
        )
        return np.where(j0 == j1, within, across)

    def end(self, T0: Array, area: Array) -> Array:
        """T1 at which ∫ y dT from T0 to T1 is ``area``, for a table of positive y. Exact; small areas keep their digits."""
        rows, j0 = self._rows, self._segment(T0)
        left0 = np.maximum(j0 - 1, 0)
        before = self._trapezium(T0, self.T[rows, left0], self.y[rows, left0])  # from T0 to the point left of it
        j = np.zeros(np.broadcast_shapes(np.shape(T0), np.shape(area)), dtype=np.intp)
        for point in range(self._last + 1):
            j = j + (area >= before + (self._sums[:, point] - self._sums[rows, left0]))
        left = np.maximum(j - 1, 0)
        start = self.T[rows, left]
        rest = area - self.integral(T0, start)
        near = j == j0
        base = np.where(near, T0, start)
        return base + _root(self.at(base), self._slopes[rows, j], np.where(near, area, rest))

    def take(self, rows: np.ndarray | slice) -> Table:
        """The same table for some of the cases."""
        return Table(self.T[rows], self.y[rows])

    def shifted(self, zero: Array) -> Table:
        """The same table with temperatures counted from ``zero`` [°C]."""
        return Table(self.T - zero[:, None], self.y)

    def _segment(self, T: Array) -> np.ndarray:
        """0 below the first point, p from the last point up."""
        j = np.zeros(np.shape(T), dtype=np.intp)
        for point in range(self._last + 1):
            j += self.T[:, point] <= T
        return j

    def _trapezium(self, T: Array, T_point: Array, y_point: Array) -> Array:
        """∫ y dT from T to a point at an end of its segment."""
        return (self.at(T) + y_point) / 2.0 * (T_point - T)

    @property
    def _last(self) -> int:
        return int(self.T.shape[1]) - 1

    @cached_property
    def _rows(self) -> np.ndarray:
        return np.arange(len(self.T))

    @cached_property
    def _slopes(self) -> Array:
        n, p = self.T.shape
        slopes = np.zeros((n, p + 1))
        slopes[:, 1:p] = np.diff(self.y, axis=1) / np.diff(self.T, axis=1)
        return slopes

    @cached_property
    def _sums(self) -> Array:
        """∫ y dT from the first point to each."""
        sums = np.zeros(self.T.shape)
        sums[:, 1:] = np.cumsum((self.y[:, 1:] + self.y[:, :-1]) / 2.0 * np.diff(self.T, axis=1), axis=1)
        return sums


@dataclass(frozen=True)
class Conductivity:
    """k(T) of one layer [W/(m·K)]: constant ``k0``; ``k0`` with ``slope`` [1/K] and ``reference`` [°C]; or a ``table``.

    k = k₀[1 + slope (T − reference)], held at ``FLOOR`` k₀ where it would fall below that (see ``usable``). A table's values
    are positive. ValueError where the parts given are none of these three. Source: Kirchhoff's transformation.
    """

    k0: Array | None = None
    slope: Array | None = None
    reference: Array | None = None
    table: Table | None = None

    def __post_init__(self) -> None:
        if (self.k0 is None) == (self.table is None) or (self.slope is None) != (self.reference is None):
            raise ValueError("a conductivity is k0, or k0 with slope and reference, or a table")
        if self.table is not None and self.slope is not None:
            raise ValueError("a table of conductivity takes no slope")

    def __len__(self) -> int:
        return len(self.table.T) if self.table is not None else len(self._k0)

    @property
    def constant(self) -> bool:
        """Whether k is the same at every temperature by its form."""
        return self.table is None and self.slope is None

    def at(self, T: Array) -> Array:
        """k at T."""
        if self.table is not None:
            return self.table.at(T)
        if self.slope is None or self.reference is None:
            return self._k0 + np.zeros_like(T)
        return np.maximum(self._k0 * (1.0 + self.slope * (T - self.reference)), self._floor)

    def integral(self, T0: Array, T1: Array) -> Array:
        """I = ∫ k dT from T0 to T1 [W/m], to the last digits also where T0 and T1 are close."""
        if self.table is not None:
            return self.table.integral(T0, T1)
        if self.slope is None or self.reference is None:
            return self._k0 * (T1 - T0)
        A, B = self._kept(T0), self._kept(T1)
        k = self._k0 * (1.0 + self.slope * ((A - self.reference) + (B - self.reference)) / 2.0)
        return k * (B - A) + self._floor * ((T1 - B) - (T0 - A))

    def end(self, T0: Array, I: Array) -> Array:  # noqa: E741 - the integral's own letter
        """T1 at which ∫ k dT from T0 to T1 is I [W/m]: exact, and small I keep their digits."""
        if self.table is not None:
            return self.table.end(T0, I)
        if self.slope is None or self.reference is None:
            return T0 + I / self._k0
        A = self._kept(T0)
        J = I - self._floor * (A - T0)
        k = self._k0 * (1.0 + self.slope * (A - self.reference))
        c = self._k0 * self.slope
        # k² falls by 2c per unit of J; where it would pass the floor the rest is laid on at the floor.
        to_floor = (self._floor * self._floor - k * k) / np.where(c == 0.0, 1.0, 2.0 * c)
        short = k * k + 2.0 * c * J < self._floor * self._floor
        T_floor = np.where(c == 0.0, 0.0, self._limit)
        return np.where(short, T_floor + (J - to_floor) / self._floor, A + _root(k, c, J))

    def usable(self, T0: Array, T1: Array) -> np.ndarray:
        """False where k is at its floor somewhere between T0 and T1, so that the answer does not hold."""
        if self.constant:
            return np.ones(np.broadcast_shapes(np.shape(T0), np.shape(T1)), dtype=bool)
        least = self._floor if self.slope is not None else 0.0
        usable: np.ndarray = (self.at(T0) > least) & (self.at(T1) > least)
        return usable

    def take(self, rows: np.ndarray | slice) -> Conductivity:
        """The same conductivity for some of the cases."""
        k0, slope, reference = (None if x is None else x[rows] for x in (self.k0, self.slope, self.reference))
        return Conductivity(k0, slope, reference, None if self.table is None else self.table.take(rows))

    def shifted(self, zero: Array) -> Conductivity:
        """The same conductivity with temperatures counted from ``zero`` [°C]."""
        if self.table is not None:
            return Conductivity(table=self.table.shifted(zero))
        return Conductivity(self.k0, self.slope, None if self.reference is None else self.reference - zero)

    @property
    def _k0(self) -> Array:
        assert self.k0 is not None
        return self.k0

    @cached_property
    def _floor(self) -> Array:
        return FLOOR * self._k0

    @cached_property
    def _limit(self) -> Array:
        """The temperature at which k reaches its floor; infinite where the slope is 0."""
        assert self.slope is not None
        assert self.reference is not None
        flat = self.slope == 0.0
        return np.where(flat, -np.inf, self.reference + (FLOOR - 1.0) / np.where(flat, 1.0, self.slope))

    def _kept(self, T: Array) -> Array:
        """T, or the temperature of the floor where T lies beyond it."""
        assert self.slope is not None
        return np.where(self.slope >= 0.0, np.maximum(T, self._limit), np.minimum(T, self._limit))


def _root(k: Array, c: Array, area: Array) -> Array:
    """The x nearest 0 with kx + cx²/2 = area, without cancellation; k > 0."""
    x: Array = 2.0 * area / (k + np.sqrt(np.maximum(k * k + 2.0 * c * area, 0.0)))
    return x

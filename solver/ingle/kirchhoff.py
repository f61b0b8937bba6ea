"""Kirchhoff's θ = ∫ k dT from a case's zero, and back: T and k as functions of θ with as few operations as the form of k allows.

Temperatures are rises over the zero of each case, where θ is 0; the last axis runs over the cases. ``Conductivity`` answers
everywhere and has the last word wherever a conductivity lies on its floor.
"""

from __future__ import annotations

from functools import cached_property

import numpy as np

from ingle.conductivities import FLOOR, Conductivity
from ingle.shapes import Array


class Kirchhoff:
    """The transformation of a constant k, and the interface of the others."""

    def __init__(self, k: Conductivity) -> None:
        self.k = k

    @property
    def constant(self) -> bool:
        """Whether k is the same at every temperature."""
        return self.k.constant

    @property
    def floors(self) -> bool:
        """Whether k may fall to its floor."""
        return self.k.slope is not None

    @property
    def _k0(self) -> Array:
        assert self.k.k0 is not None
        return self.k.k0

    @property
    def cold(self) -> Array:
        """k at the zero."""
        return self._k0

    def read(self, theta: Array) -> tuple[Array, Array]:
        """T and k at θ."""
        return theta / self._k0, self._k0

    def lift(self, T: Array) -> tuple[Array, Array]:
        """θ and k at T."""
        return self._k0 * T, self._k0

    def between(self, Ta: Array, Tb: Array) -> Array:
        """θ(Ta) − θ(Tb), to the last digits also where both are close."""
        return self._k0 * (Ta - Tb)

    def at(self, T: Array) -> Array:
        """k at T."""
        del T
        return self._k0

    def take(self, rows: np.ndarray) -> Kirchhoff:
        """The transformation of some of the cases."""
        return type(self)(self.k.take(rows))


class _Sloped(Kirchhoff):
    """k = k_z(1 + cT/k_z): θ = T(k_z + cT/2), k² = k_z² + 2cθ."""

    def __init__(self, k: Conductivity) -> None:
        super().__init__(k)
        assert k.k0 is not None
        assert k.slope is not None
        assert k.reference is not None
        self.c = k.k0 * k.slope
        self.half_c = self.c / 2.0
        self.least = FLOOR * k.k0
        self.floor = self.least * self.least
        self.plain = k.k0 * (1.0 - k.slope * k.reference)
        # A zero that lies on the floor is nothing to start from.
        self.k_z = np.where(self.plain > self.least, self.plain, np.nan)
        self.k_square = self.k_z * self.k_z
        self.twice_c = 2.0 * self.c

    @property
    def cold(self) -> Array:
        """See ``Kirchhoff``."""
        return np.maximum(self.plain, self.least)

    def read(self, theta: Array) -> tuple[Array, Array]:
        """See ``Kirchhoff``."""
        square = self.k_square + self.twice_c * theta
        k: Array = np.sqrt(square)
        T = 2.0 * theta / (self.k_z + k)
        held = square > self.floor
        if np.count_nonzero(held) == held.size:
            return T, k
        slow = self.k.end(np.zeros(theta.shape[-1]), theta)
        return np.where(held, T, slow), np.where(held, k, self.k.at(slow))

    def lift(self, T: Array) -> tuple[Array, Array]:
        """See ``Kirchhoff``."""
        k = self.k_z + self.c * T
        theta = T * (self.k_z + self.half_c * T)
        held = k > self.least
        if np.count_nonzero(held) == held.size:
            return theta, k
        return np.where(held, theta, self.k.integral(np.zeros_like(T), T)), np.where(held, k, self.k.at(T))

    def between(self, Ta: Array, Tb: Array) -> Array:
        """See ``Kirchhoff``."""
        fall = (Ta - Tb) * (self.k_z + self.half_c * (Ta + Tb))
        held = (self.k_z + self.c * Ta > self.least) & (self.k_z + self.c * Tb > self.least)
        if np.count_nonzero(held) == held.size:
            return fall
        return np.where(held, fall, self.k.integral(Tb, Ta))

    def at(self, T: Array) -> Array:
        """See ``Kirchhoff``."""
        return np.maximum(self.plain + self.c * T, self.least)


class _General(Kirchhoff):
    """By the conductivity's own integral."""

    @cached_property
    def _cold(self) -> Array:
        assert self.k.table is not None
        return self.k.at(np.zeros(len(self.k.table.T)))

    @property
    def cold(self) -> Array:
        """See ``Kirchhoff``."""
        return self._cold

    def read(self, theta: Array) -> tuple[Array, Array]:
        """See ``Kirchhoff``."""
        T = self.k.end(np.zeros(theta.shape[-1]), theta)
        return T, self.k.at(T)

    def lift(self, T: Array) -> tuple[Array, Array]:
        """See ``Kirchhoff``."""
        return self.k.integral(np.zeros_like(T), T), self.k.at(T)

    def between(self, Ta: Array, Tb: Array) -> Array:
        """See ``Kirchhoff``."""
        return self.k.integral(Tb, Ta)

    def at(self, T: Array) -> Array:
        """See ``Kirchhoff``."""
        return self.k.at(T)


def kirchhoff(k: Conductivity) -> Kirchhoff:
    """The transformation for a conductivity whose temperatures are rises."""
    if k.table is not None:
        return _General(k)
    return Kirchhoff(k) if k.constant else _Sloped(k)

"""Heat made per volume as a function of temperature, and heat lost from the sides of a bar.

A layer's source is q(T) = μ s g(T) − side(T): s [W/m³] its scale, g a law of temperature without unit, μ a multiple that
is 1 unless it is sought. The last axis of every array of temperatures runs over the cases.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum
from typing import Protocol

import numpy as np

from ingle.conductivities import FLOOR, Table
from ingle.fluids import KELVIN
from ingle.shapes import Array

STEFAN_BOLTZMANN = 5.670374419e-8  # W/(m²·K⁴), exact to the digits given: SI 2019
GAS_CONSTANT = 8.31446261815324  # J/(mol·K), exact: SI 2019


class SurfaceLaw(Protocol):
    """Net heat flux [W/m²] leaving a surface at T [°C], and its derivative to T [W/(m²·K)].

    ``rows`` are the numbers of the problem's cases along the last axis of T. Each case's answer may depend on its own
    numbers only. The flux should rise with T at every trial temperature, physical or not. A law whose flux is linear in T
    may say so by an attribute ``linear = True``: refusals are then quicker, and first eigenvalues exact.
    """

    def __call__(self, T: Array, rows: np.ndarray) -> tuple[Array, Array]:
        """Flux and derivative."""
        ...


class SourceLaw(IntEnum):
    """The law g(T) of a source."""

    EVEN = 0  # 1
    SLOPED = 1  # 1 + β(T − Tr)
    PER_SLOPED = 2  # 1/[1 + α(T − Tr)]: a uniform field in a conductor of that resistivity
    TABLE = 3  # y(T)
    PER_TABLE = 4  # 1/y(T)
    ARRHENIUS = 5  # exp[−E/R (1/T − 1/Tr)], T in kelvin


@dataclass(frozen=True)
class HeatSource:
    """The source of one layer.

    ``scale`` s ≥ 0 [W/m³]; ``slope`` β or α [1/K]; ``reference`` Tr [°C]; ``activation`` E/R [K]; ``table``. ``driven``: this
    source is among those that an allowable or turning scale multiplies. ``group``: it belongs to that one of the problem's
    ``Supply`` groups, whose multiple μ is unknown, and adds ``weight`` ∫ g r^m dr to its total.
    """

    scale: Array
    law: SourceLaw = SourceLaw.EVEN
    slope: Array | None = None
    reference: Array | None = None
    activation: Array | None = None
    table: Table | None = None
    driven: bool = False
    group: int | None = None
    weight: Array | None = None
    kelvin: Array | float = KELVIN

    def __post_init__(self) -> None:
        law = self.law
        if law in (SourceLaw.TABLE, SourceLaw.PER_TABLE):
            lacking = self.table is None
        elif law == SourceLaw.ARRHENIUS:
            lacking = self.activation is None or self.reference is None
        else:
            lacking = law != SourceLaw.EVEN and (self.slope is None or self.reference is None)
        if lacking:
            raise ValueError(f"a source of law {law.name} lacks one of its parts")
        if (self.group is None) != (self.weight is None):
            raise ValueError("a source that belongs to a group needs its weight, and only such a source takes one")

    def at(self, T: Array) -> tuple[Array, Array]:
        """g and dg/dT at T; a slope that is the same everywhere has the shape of one case each."""
        if self.law == SourceLaw.EVEN:
            return np.ones(T.shape), np.zeros(T.shape[-1:])
        if self.table is not None:
            y, slope = self.table.at(T), self.table.slope(T)
            return (y, slope) if self.law == SourceLaw.TABLE else (1.0 / y, -slope / (y * y))
        assert self.reference is not None
        if self.law == SourceLaw.ARRHENIUS:
            return self._arrhenius(T)
        assert self.slope is not None
        y = 1.0 + self.slope * (T - self.reference)
        if self.law == SourceLaw.SLOPED:
            return y, self.slope
        g = 1.0 / y
        held = y >= FLOOR
        if np.count_nonzero(held) == held.size:
            return g, -self.slope * (g * g)
        return np.where(held, g, 1.0 / FLOOR), np.where(held, -self.slope * (g * g), 0.0)

    def _arrhenius(self, T: Array) -> tuple[Array, Array]:
        assert self.activation is not None
        assert self.reference is not None
        kelvin = np.maximum(T + self.kelvin, 1.0)
        span = (T - self.reference) / (kelvin * (self.reference + self.kelvin))
        g = np.exp(self.activation * span)
        return g, g * self.activation / (kelvin * kelvin)

    def usable(self, T: Array) -> np.ndarray:
        """False where the law does not hold at T: a resistivity at its floor."""
        if self.law == SourceLaw.PER_SLOPED:
            assert self.slope is not None
            assert self.reference is not None
            held: np.ndarray = 1.0 + self.slope * (T - self.reference) > FLOOR
            return held
        return np.ones(np.shape(T), dtype=bool)

    def reach(self, T: Array) -> Array | None:
        """The rise over which g grows by about a factor e²; None where that is no concern."""
        if self.law != SourceLaw.ARRHENIUS:
            return None
        assert self.activation is not None
        kelvin = np.maximum(T + self.kelvin, 1.0)
        return 2.0 * kelvin * kelvin / np.maximum(self.activation, 1e-300)

    def linear_in_rise(self) -> tuple[Array, Array]:
        """A and S of s g(T) = A + S T, where g is no more than linear."""
        if self.slope is None or self.reference is None:
            return self.scale, np.zeros_like(self.scale)
        S = self.scale * self.slope
        return self.scale * (1.0 - self.slope * self.reference), S

    def take(self, rows: np.ndarray | slice) -> HeatSource:
        """The same source for some of the cases."""
        slope, reference, activation, weight = (
            None if x is None else x[rows] for x in (self.slope, self.reference, self.activation, self.weight)
        )
        table = None if self.table is None else self.table.take(rows)
        kelvin = self.kelvin if isinstance(self.kelvin, float) else self.kelvin[rows]
        return HeatSource(
            self.scale[rows], self.law, slope, reference, activation, table, self.driven, self.group, weight, kelvin
        )  # fmt: skip

    def shifted(self, zero: Array) -> HeatSource:
        """The same source with temperatures counted from ``zero`` [°C]."""
        return HeatSource(
            self.scale, self.law, self.slope, None if self.reference is None else self.reference - zero, self.activation,
            None if self.table is None else self.table.shifted(zero), self.driven, self.group, self.weight, self.kelvin + zero,
        )  # fmt: skip


@dataclass(frozen=True)
class SideLoss:
    """Heat that leaves a bar through its sides, per volume: (P/A) [h (T − T_f) + εσ(T⁴ − T_s⁴) + law(T)].

    ``ratio`` P/A [1/m], perimeter over section; ``film`` h [W/(m²·K)] with ``fluid`` [°C]; ``emissivity`` with
    ``surroundings`` [°C]; ``law`` any other surface law. ``rows`` and ``zero`` are the solver's own.
    """

    ratio: Array
    film: Array | None = None
    fluid: Array | None = None
    emissivity: Array | None = None
    surroundings: Array | None = None
    law: SurfaceLaw | None = None
    rows: np.ndarray | None = None
    zero: Array | float = 0.0

    @property
    def linear(self) -> bool:
        """Whether the loss is a film alone."""
        return self.emissivity is None and self.law is None

    def conductance(self) -> Array | float:
        """(P/A) h [W/(m³·K)]."""
        return 0.0 if self.film is None else self.ratio * self.film

    def at(self, T: Array) -> tuple[Array, Array]:
        """Loss [W/m³] at T and its derivative."""
        flux, slope = (0.0 * T, 0.0 * T) if self.film is None or self.fluid is None else (self.film * (T - self.fluid), self.film)
        if self.emissivity is not None and self.surroundings is not None:
            radiated, change = radiation(T + (KELVIN + self.zero), self.surroundings + (KELVIN + self.zero))
            flux, slope = flux + self.emissivity * radiated, slope + self.emissivity * change
        if self.law is not None:
            assert self.rows is not None
            lost, change = self.law(T + self.zero, self.rows)
            flux, slope = flux + lost, slope + change
        return self.ratio * flux, self.ratio * slope

    def take(self, rows: np.ndarray | slice) -> SideLoss:
        """The same loss for some of the cases."""
        film, fluid, emissivity, surroundings, numbers = (
            None if x is None else x[rows] for x in (self.film, self.fluid, self.emissivity, self.surroundings, self.rows)
        )
        zero = self.zero if isinstance(self.zero, float) else self.zero[rows]
        return SideLoss(self.ratio[rows], film, fluid, emissivity, surroundings, self.law, numbers, zero)

    def shifted(self, zero: Array, rows: np.ndarray) -> SideLoss:
        """The same loss with temperatures counted from ``zero`` [°C]."""
        fluid = None if self.fluid is None else self.fluid - zero
        surroundings = None if self.surroundings is None else self.surroundings - zero
        return SideLoss(self.ratio, self.film, fluid, self.emissivity, surroundings, self.law, rows, self.zero + zero)


def radiation(T: Array, T_s: Array) -> tuple[Array, Array]:
    """σ(T⁴ − T_s⁴) of a black surface and its derivative, T in kelvin; below 0 K, in trials, continued rising by T|T|³."""
    cube = np.abs(T * (T * T))
    flux = (T - T_s) * (T + T_s) * (T * T + T_s * T_s)
    frozen = T < 0.0
    if np.count_nonzero(frozen):
        flux = np.where(frozen, T * cube - (T_s * T_s) * (T_s * T_s), flux)
    return STEFAN_BOLTZMANN * flux, 4.0 * STEFAN_BOLTZMANN * cube

"""What a layer's heat comes from: a generation that depends on temperature, or a current, voltage or current density."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum

import numpy as np

from ingle.conductivities import Table
from ingle.shapes import Array


@dataclass(frozen=True)
class Generation:
    """Heat per volume q = scale · g(T): g = 1 + slope (T − reference), or g from a ``table`` instead.

    ``scale`` [W/m³] (times the table's values, if there is one), ``slope`` [1/K], ``reference`` [°C].
    """

    scale: Array
    slope: Array | None = None
    reference: Array | None = None
    table: Table | None = None

    def __post_init__(self) -> None:
        if (self.slope is None) != (self.reference is None) or (self.slope is None) == (self.table is None):
            raise ValueError("a generation has a slope with its reference, or a table")

    def take(self, rows: np.ndarray | slice) -> Generation:
        """The same generation for some of the cases."""
        slope, reference = (None if x is None else x[rows] for x in (self.slope, self.reference))
        return Generation(self.scale[rows], slope, reference, None if self.table is None else self.table.take(rows))


@dataclass(frozen=True)
class Resistivity:
    """ρ(T) [Ω·m]: constant ``rho0``; ``rho0`` with ``slope`` [1/K] and ``reference`` [°C]; or a ``table``."""

    rho0: Array | None = None
    slope: Array | None = None
    reference: Array | None = None
    table: Table | None = None

    def __post_init__(self) -> None:
        if (self.rho0 is None) == (self.table is None) or (self.slope is None) != (self.reference is None):
            raise ValueError("a resistivity is rho0, or rho0 with slope and reference, or a table")
        if self.table is not None and self.slope is not None:
            raise ValueError("a table of resistivity takes no slope")

    @property
    def constant(self) -> bool:
        """Whether ρ is the same at every temperature by its form."""
        return self.slope is None and self.table is None

    def take(self, rows: np.ndarray | slice) -> Resistivity:
        """The same resistivity for some of the cases."""
        rho0, slope, reference = (None if x is None else x[rows] for x in (self.rho0, self.slope, self.reference))
        return Resistivity(rho0, slope, reference, None if self.table is None else self.table.take(rows))


class Drive(IntEnum):
    """What is given of a current."""

    CURRENT = 0  # A
    VOLTAGE = 1  # V
    DENSITY = 2  # A/m²: the mean over a solid conductor's section; in a winding that of the conductor itself


@dataclass(frozen=True)
class Conductor:
    """A layer that carries a current: ``given`` [A, V or A/m² by ``drive``; its sign makes no heat] and its ``resistivity``.

    ``ac_ratio`` [1] of AC to DC resistance, 1 if None. ``wound``: a winding, in which every turn carries the same current,
    with its ``turns`` and the ``fill_factor`` [1] of its section that is conductor, 1 if None; else the field along the axis
    is uniform. A bar (``Cases.bar``) carries one current through every section and is not wound.
    """

    drive: Drive
    given: Array
    resistivity: Resistivity
    ac_ratio: Array | None = None
    wound: bool = False
    turns: Array | None = None
    fill_factor: Array | None = None

    def take(self, rows: np.ndarray | slice) -> Conductor:
        """The same conductor for some of the cases."""
        ac, turns, fill = (None if x is None else x[rows] for x in (self.ac_ratio, self.turns, self.fill_factor))
        return Conductor(self.drive, self.given[rows], self.resistivity.take(rows), ac, self.wound, turns, fill)


Source = Array | Generation | Conductor

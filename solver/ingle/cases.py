"""What the solver is given: arrays of cases in SI units, temperatures in °C, one case an element."""

from __future__ import annotations

from dataclasses import dataclass, fields
from enum import IntEnum
from typing import TypeVar

import numpy as np

from ingle.conductivities import Conductivity
from ingle.film_laws import FilmLaw, FluidKind
from ingle.shapes import Array, Shape
from ingle.sources import Conductor, Generation, Source

Rows = np.ndarray | slice
Part = TypeVar("Part")


def take(part: Part, rows: Rows) -> Part:
    """Some of the cases of a dataclass of arrays; what is no array, or has its own `take`, is kept or taken."""
    values = (getattr(part, f.name) for f in fields(part))  # type: ignore[arg-type]
    return type(part)(*(taken(value, rows) for value in values))


def taken(value: object, rows: Rows) -> object:
    """An array's rows; anything else by its own `take`, or as it is."""
    if isinstance(value, np.ndarray):
        return value[rows]
    if isinstance(value, tuple):
        return tuple(taken(each, rows) for each in value)
    own = getattr(value, "take", None)
    return value if own is None else own(rows)


class FaceKind(IntEnum):
    """What is prescribed at a face."""

    FLUX = 0  # the heat entering; none is an insulated face, or the centre of a solid round body
    HELD = 1  # the temperature, at the far side of the resistance if there is one
    FILM = 2  # convection with a given coefficient, with or without a flux put in at the same surface
    SURFACE = 3  # radiation, a film law, or both, beside any of those


@dataclass(frozen=True)
class Face:
    """One face of the body. ``None``: no case has it; NaN in an element: that case has not.

    ``held`` [°C]; ``film`` [W/(m²·K)] with ``fluid`` [°C]; ``flux`` [W/m²] put in at the outermost surface;
    ``emissivity`` [1] to large ``surroundings`` [°C]; ``resistance`` [m²·K/W] between the body's face and its outermost
    surface or held temperature. ``law`` with ``law_fluid``, ``size`` [m] and ``speed`` [m/s] gives the film coefficient
    instead of ``film``, one law for all cases. A film of exactly 0 takes no heat.
    """

    held: Array | None = None
    film: Array | None = None
    fluid: Array | None = None
    flux: Array | None = None
    emissivity: Array | None = None
    surroundings: Array | None = None
    resistance: Array | None = None
    law: FilmLaw | None = None
    law_fluid: FluidKind = FluidKind.AIR
    size: Array | None = None
    speed: Array | None = None

    def __post_init__(self) -> None:
        if (self.film is None and self.law is None) != (self.fluid is None):
            raise ValueError("a film needs its fluid temperature, and a fluid temperature its film")
        if self.held is not None:
            for other in (self.film, self.flux):
                if other is not None and np.any(~np.isnan(self.held) & ~np.isnan(other)):
                    raise ValueError("a held face takes neither film nor flux")
        if self.emissivity is not None and self.surroundings is None:
            raise ValueError("radiation needs its surroundings")

    def kinds(self) -> FaceKind | np.ndarray:
        """One FaceKind for all cases, or an integer array of them."""
        kind: FaceKind | np.ndarray = FaceKind.SURFACE if self.law is not None else FaceKind.FLUX
        if self.film is not None:
            kind = _where(self.film > 0.0, FaceKind.FILM, kind)
        if self.emissivity is not None:
            kind = _where(self.emissivity > 0.0, FaceKind.SURFACE, kind)
        if self.held is not None:
            kind = _where(~np.isnan(self.held), FaceKind.HELD, kind)
        return kind

    def take(self, rows: Rows) -> Face:
        """The same face for some of the cases."""
        return take(self, rows)


def _where(mask: np.ndarray, kind: FaceKind, other: FaceKind | np.ndarray) -> FaceKind | np.ndarray:
    return kind if mask.all() else (other if not mask.any() else np.where(mask, kind, other))


@dataclass(frozen=True)
class Layer:
    """One layer: ``thickness`` d [m] (the radius of a solid body), ``conductivity`` k [W/(m·K)], and its source.

    ``generation`` is q [W/m³] as an array, or a source that depends on temperature, or a conductor with its current.
    """

    thickness: Array
    conductivity: Array | Conductivity
    generation: Source

    def take(self, rows: Rows) -> Layer:
        """The same layer for some of the cases."""
        return take(self, rows)


@dataclass(frozen=True)
class Bar:
    """A bar between terminals, which loses heat from its sides: ``section`` [m²], ``perimeter`` [m], what cools the sides.

    ``left_contact`` and ``right_contact`` [Ω] are the joints' own resistances: the heat of its current enters at that end.
    """

    section: Array
    perimeter: Array | None = None
    side: Face | None = None
    left_contact: Array | None = None
    right_contact: Array | None = None

    def take(self, rows: Rows) -> Bar:
        """The same bars for some of the cases."""
        return take(self, rows)


@dataclass(frozen=True)
class Cases:
    """n cases. ``shape`` is one Shape for all or an integer array; ``inner`` is the bore radius [m], 0 or None where solid.

    ``layers`` go from the left face, or the inside, outward; ``joints`` [m²·K/W] lie between them, per area where they
    meet (None: none). The left face of a round body is its bore. Limits [°C] are optional (NaN or None: none): ``limit``
    anywhere in the body, ``layer_limits`` one a layer, ``left_limit`` and ``right_limit`` at the faces. ``probe`` [m] is
    a place: from the left face, or a radius. ``pattern`` are the sources that scale together for an allowable multiple of
    their heat, the first layer's 1 W/m³ if not given; a layer where it is None or 0 keeps its generation. ``length`` [m]
    along a current (of a bar: its one layer's thickness is that), ``width`` [m] of a wall across it. A ``bar`` is a wall.
    """

    shape: Shape | np.ndarray
    layers: tuple[Layer, ...]
    left: Face
    right: Face
    inner: Array | None = None
    limit: Array | None = None
    left_limit: Array | None = None
    right_limit: Array | None = None
    probe: Array | None = None
    joints: tuple[Array | None, ...] = ()
    layer_limits: tuple[Array | None, ...] = ()
    pattern: tuple[Source | None, ...] = ()
    length: Array | None = None
    width: Array | None = None
    bar: Bar | None = None

    def __post_init__(self) -> None:
        if not self.layers:
            raise ValueError("a body has at least one layer")
        if len(self.joints) not in (0, len(self.layers) - 1) or len(self.layer_limits) not in (0, len(self.layers)):
            raise ValueError("there is a joint between each two layers and a limit for each layer")
        if self.bar is not None and (len(self.layers) > 1 or np.any(self.shape != Shape.WALL)):
            raise ValueError("a bar is a wall of one layer, its length")

    def __len__(self) -> int:
        return len(self.layers[0].thickness)

    @property
    def in_temperature(self) -> bool:
        """Whether a source depends on temperature, or heat leaves from the sides: the network of two-ports is for those."""
        sources = [layer.generation for layer in self.layers]
        if self.bar is not None or any(isinstance(source, Generation) for source in sources):
            return True
        return any(isinstance(source, Conductor) and not source.resistivity.constant for source in sources)

    def take(self, rows: Rows) -> Cases:
        """Some of the cases."""
        return take(self, rows)


@dataclass(frozen=True)
class Structure:
    """What all cases of a group share, so that no formula has to choose by element."""

    shape: Shape
    solid: bool
    left: FaceKind
    right: FaceKind
    side: FaceKind = FaceKind.FLUX  # of a bar

    @property
    def settles(self) -> bool:
        """Whether heat can leave at all."""
        return not (self.left == self.right == self.side == FaceKind.FLUX)


def structure_codes(cases: Cases) -> Structure | np.ndarray:
    """The structure of all cases, or an integer code for each where they differ (see ``decode``)."""
    left, right = cases.left.kinds(), cases.right.kinds()
    solid: bool | np.ndarray = cases.inner is None
    if cases.inner is not None:
        bored = cases.inner > 0.0
        solid = False if bored.all() else (True if not bored.any() else ~bored)
    shape = cases.shape
    side: FaceKind | np.ndarray = FaceKind.FLUX
    if cases.bar is not None and cases.bar.side is not None:
        side = cases.bar.side.kinds()
    if isinstance(shape, Shape) and isinstance(left, FaceKind) and isinstance(right, FaceKind) and isinstance(side, FaceKind):
        if shape == Shape.WALL:
            return Structure(shape, False, left, right, side)
        if isinstance(solid, bool):
            return Structure(shape, solid, FaceKind.FLUX if solid else left, right)
    codes = np.zeros(len(cases), dtype=np.intp)
    solid_round = np.logical_and(solid, np.not_equal(shape, Shape.WALL))
    left = np.where(solid_round, FaceKind.FLUX, left)
    codes += shape * 128 + solid_round * 64 + side * 16 + left * 4 + right
    return codes


def decode(code: int) -> Structure:
    """The structure a code stands for."""
    shape, rest = divmod(code, 128)
    solid, rest = divmod(rest, 64)
    side, rest = divmod(rest, 16)
    left, right = divmod(rest, 4)
    return Structure(Shape(shape), bool(solid), FaceKind(left), FaceKind(right), FaceKind(side))

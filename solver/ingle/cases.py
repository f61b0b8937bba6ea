"""What the solver is given: arrays of cases in SI units, temperatures in °C, one case an element."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum

import numpy as np

from ingle.shapes import Array, Shape


class FaceKind(IntEnum):
    """What is prescribed at a face."""

    FLUX = 0  # the heat entering; none is an insulated face, or the centre of a solid round body
    HELD = 1  # the temperature
    FILM = 2  # convection to a fluid, with or without a flux put in at the same surface


@dataclass(frozen=True)
class Face:
    """One face of the body. ``None``: no case has it; NaN in an element: that case has not.

    ``held`` [°C]; ``film`` [W/(m²·K)] with ``fluid`` [°C]; ``flux`` [W/m²] put into the body. A film of exactly 0 takes no
    heat, so that face is prescribed by its flux alone. A held face takes neither film nor flux (ValueError).
    """

    held: Array | None = None
    film: Array | None = None
    fluid: Array | None = None
    flux: Array | None = None

    def __post_init__(self) -> None:
        if (self.film is None) != (self.fluid is None):
            raise ValueError("a film needs its fluid temperature, and a fluid temperature its film")

    def kinds(self) -> FaceKind | np.ndarray:
        """One FaceKind for all cases, or an integer array of them."""
        if self.held is None and self.film is None:
            return FaceKind.FLUX
        kind: FaceKind | np.ndarray = FaceKind.FLUX
        if self.film is not None:
            filmed = self.film > 0.0
            kind = FaceKind.FILM if filmed.all() else np.where(filmed, FaceKind.FILM, FaceKind.FLUX)
        if self.held is not None:
            held = ~np.isnan(self.held)
            kind = FaceKind.HELD if held.all() else np.where(held, FaceKind.HELD, kind)
        return kind

    def take(self, rows: np.ndarray | slice) -> Face:
        """The same face for some of the cases."""
        parts = (None if x is None else x[rows] for x in (self.held, self.film, self.fluid, self.flux))
        return Face(*parts)


@dataclass(frozen=True)
class Layer:
    """One layer: ``thickness`` d [m] (the radius of a solid body), ``conductivity`` k [W/(m·K)], ``generation`` q [W/m³]."""

    thickness: Array
    conductivity: Array
    generation: Array

    def take(self, rows: np.ndarray | slice) -> Layer:
        """The same layer for some of the cases."""
        return Layer(self.thickness[rows], self.conductivity[rows], self.generation[rows])


@dataclass(frozen=True)
class Cases:
    """n cases. ``shape`` is one Shape for all or an integer array; ``inner`` is the bore radius [m], 0 or None where solid.

    The left face of a round body is its bore. Limits [°C] are optional (NaN or None: none): ``limit`` anywhere in the
    body, ``left_limit`` and ``right_limit`` at the faces. ``probe`` [m] is a place: from the left face, or a radius.
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

    def __post_init__(self) -> None:
        if len(self.layers) != 1:
            raise ValueError("a body of one layer is needed; bodies of several layers are not available yet")

    def __len__(self) -> int:
        return len(self.layers[0].thickness)

    def take(self, rows: np.ndarray | slice) -> Cases:
        """Some of the cases."""
        rest = (None if x is None else x[rows] for x in (self.inner, self.limit, self.left_limit, self.right_limit, self.probe))
        shape = self.shape if isinstance(self.shape, Shape) else self.shape[rows]
        return Cases(shape, tuple(layer.take(rows) for layer in self.layers), self.left.take(rows), self.right.take(rows), *rest)


@dataclass(frozen=True)
class Structure:
    """What all cases of a group share, so that no formula has to choose by element."""

    shape: Shape
    solid: bool
    left: FaceKind
    right: FaceKind


def structure_codes(cases: Cases) -> Structure | np.ndarray:
    """The structure of all cases, or an integer code for each where they differ (see ``decode``)."""
    left, right = cases.left.kinds(), cases.right.kinds()
    solid: bool | np.ndarray = cases.inner is None
    if cases.inner is not None:
        bored = cases.inner > 0.0
        solid = False if bored.all() else (True if not bored.any() else ~bored)
    shape = cases.shape
    if isinstance(shape, Shape) and isinstance(left, FaceKind) and isinstance(right, FaceKind):
        if shape == Shape.WALL:
            return Structure(shape, False, left, right)
        if isinstance(solid, bool):
            return Structure(shape, solid, FaceKind.FLUX if solid else left, right)
    codes = np.zeros(len(cases), dtype=np.intp)
    solid_round = np.logical_and(solid, np.not_equal(shape, Shape.WALL))
    left = np.where(solid_round, FaceKind.FLUX, left)
    codes += shape * 18 + solid_round * 9 + left * 3 + right
    return codes


def decode(code: int) -> Structure:
    """The structure a code stands for."""
    shape, rest = divmod(code, 18)
    solid, rest = divmod(rest, 9)
    left, right = divmod(rest, 3)
    return Structure(Shape(shape), bool(solid), FaceKind(left), FaceKind(right))

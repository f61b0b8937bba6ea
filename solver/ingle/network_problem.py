"""What the network engine is given: cases of one structure, whose sources and conductivities may depend on temperature."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.conductivities import Conductivity
from ingle.heat_sources import HeatSource, SideLoss, SurfaceLaw
from ingle.shapes import Array, Shape


@dataclass(frozen=True)
class NetworkFace:
    """One face of the body: held, or under a surface law, or a prescribed flux; none of them is insulated.

    ``held`` [°C] lies, and ``law`` acts, at the far side of ``resistance`` [m²·K/W of the face's own area; None is 0].
    ``flux`` [W/m²] is put into the body. ``contact`` [W/m²]: heat set free at the body's own face, inside the resistance, which
    goes with the source of the layer there: by its multiple.
    """

    held: Array | None = None
    law: SurfaceLaw | None = None
    flux: Array | None = None
    resistance: Array | None = None
    contact: Array | None = None

    def __post_init__(self) -> None:
        if sum(part is not None for part in (self.held, self.law, self.flux)) > 1:
            raise ValueError("a face is held, or has a law, or a flux: put a flux beside a film into the law")

    @property
    def lets_out(self) -> bool:
        """Whether heat can leave here."""
        return self.held is not None or self.law is not None

    def take(self, rows: np.ndarray | slice) -> NetworkFace:
        """The same face for some of the cases; its law is told their numbers at each call."""
        held, flux, resistance, contact = (
            None if x is None else x[rows] for x in (self.held, self.flux, self.resistance, self.contact)
        )
        return NetworkFace(held, self.law, flux, resistance, contact)


@dataclass(frozen=True)
class NetworkLayer:
    """One layer: ``thickness`` [m] (the radius of a solid body), its conductivity and source, and a bar's side loss.

    ``joint`` [m²·K/W] lies between this layer and the next one outward; None is 0.
    """

    thickness: Array
    conductivity: Conductivity
    source: HeatSource
    side: SideLoss | None = None
    joint: Array | None = None

    def take(self, rows: np.ndarray | slice) -> NetworkLayer:
        """The same layer for some of the cases."""
        side = None if self.side is None else self.side.take(rows)
        joint = None if self.joint is None else self.joint[rows]
        return NetworkLayer(self.thickness[rows], self.conductivity.take(rows), self.source.take(rows), side, joint)


@dataclass(frozen=True)
class Supply:
    """What fixes the unknown multiple μ of a group of sources: √μ Σ weight ∫ g r^m dr = ``given``.

    A current I in solid conductors: q = ac E²/ρ, g = ρ₀/ρ; with scale s = ac/ρ₀ and weight = (area factor)/ρ₀, √μ is the
    field E [V/m] and ``given`` is I [A]. A voltage along a bar: q = ac ρ J², g = ρ/ρ₀; with s = ac ρ₀/A² and weight = ρ₀/A,
    √μ is the current I [A] and ``given`` is the voltage [V]. The area factor makes r^m dr an area: the width of a wall, 2π of
    a cylinder. ``driven``: an allowable or turning scale multiplies this group's heat, hence ``given`` by its root.
    """

    given: Array
    driven: bool = False


@dataclass(frozen=True)
class NetworkProblem:
    """n cases of one structure: everything but numbers is shared by all of them.

    ``inner`` [m]: the bore radius, None where a round body is solid (its left face is then ignored). ``coldest`` [°C]: the
    lowest temperature of anything that heat can go to; every case is started there. ``numbers``: what surface laws are told
    the cases are called, 0 to n − 1 unless given. ValueError where a layer's group is not among the ``supplies``.
    """

    shape: Shape
    layers: tuple[NetworkLayer, ...]
    left: NetworkFace
    right: NetworkFace
    coldest: Array
    inner: Array | None = None
    supplies: tuple[Supply, ...] = ()
    numbers: np.ndarray | None = None

    def __post_init__(self) -> None:
        for layer in self.layers:
            if layer.source.group is not None and layer.source.group >= len(self.supplies):
                raise ValueError(f"a source belongs to group {layer.source.group}, but there are {len(self.supplies)} supplies")
            if layer.side is not None and self.shape != Shape.WALL:
                raise ValueError("only bars, plane layers here, lose heat from their sides")

    def __len__(self) -> int:
        return len(self.coldest)

    @property
    def solid(self) -> bool:
        """Whether the innermost layer has a centre instead of a left face."""
        return self.shape != Shape.WALL and self.inner is None

    @property
    def has_outlet(self) -> bool:
        """Whether heat can leave anywhere."""
        sides = any(layer.side is not None for layer in self.layers)
        return sides or self.right.lets_out or (not self.solid and self.left.lets_out)

    def take(self, rows: np.ndarray | slice) -> NetworkProblem:
        """Some of the cases."""
        numbers = np.arange(len(self)) if self.numbers is None else self.numbers
        supplies = tuple(Supply(supply.given[rows], supply.driven) for supply in self.supplies)
        return NetworkProblem(
            self.shape, tuple(layer.take(rows) for layer in self.layers), self.left.take(rows), self.right.take(rows),
            self.coldest[rows], None if self.inner is None else self.inner[rows], supplies, numbers[rows],
        )  # fmt: skip

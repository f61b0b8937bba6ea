"""What a row describes: layers, joints, faces, sources. SI, kelvin. Per m² of a wall, per m of a cylinder, whole else."""

from __future__ import annotations

import math
from dataclasses import dataclass, field, replace

from .finite_volume import CYLINDER, SPHERE, WALL
from .laws import Law

BAR = 3
SIGMA = 5.670374419e-8
SOLID_CURRENT, WOUND = "solid", "wound"


@dataclass(frozen=True)
class Source:
    """Heat a volume: size · law(T), or, of a current, ac · fill · A · f(T) with A the square of an amplitude.

    Of a solid conductor the amplitude is the field and f = 1/ρ; of a winding or a bar it is the current density in
    the conductor and f = ρ. With `whole` False the amplitude is `size`; else amplitude times the integral of f over
    the volume is `size`.
    """

    kind: str  # the heading's name
    given: float  # the heading's value, SI; 1 for a blank one
    size: float
    law: Law
    electric: str = ""
    whole: bool = False
    ac: float = 1.0
    fill: float = 1.0
    blank: bool = False
    has_table: bool = False


@dataclass(frozen=True)
class Layer:
    start: float  # distance from the left face, or from the bore or the middle
    thickness: float
    conductivity: Law
    source: Source | None = None
    turns: float = 0.0


@dataclass(frozen=True)
class Skin:
    """A face: held, or film and radiation and flux in, behind a resistance (None: none)."""

    held: float | None = None
    film: float = 0.0
    fluid: float | None = None
    emissivity: float = 0.0
    surroundings: float | None = None
    flux_in: float = 0.0
    resistance: float | None = None
    contact: float = 0.0

    @property
    def cools(self) -> bool:
        return self.held is not None or self.film > 0.0 or self.emissivity > 0.0

    @property
    def sinks(self) -> list[float]:
        out = [] if self.held is None else [self.held]
        if self.film > 0.0 and self.fluid is not None:
            out.append(self.fluid)
        if self.emissivity > 0.0 and self.surroundings is not None:
            out.append(self.surroundings)
        return out


@dataclass(frozen=True)
class Model:
    shape: int
    inner: float
    layers: tuple[Layer, ...]
    joints: tuple[float, ...]  # m²·K/W, 0 where layers touch
    left: Skin = field(default_factory=Skin)
    right: Skin = field(default_factory=Skin)
    side: Skin = field(default_factory=Skin)
    section: float = 1.0  # of a bar
    perimeter: float = 0.0

    @property
    def solid(self) -> bool:
        return self.shape in (CYLINDER, SPHERE) and self.inner == 0.0

    @property
    def thickness(self) -> float:
        last = self.layers[-1]
        return last.start + last.thickness

    def area(self, place: float) -> float:
        radius = self.inner + place
        if self.shape == BAR:
            return self.section
        return (1.0, 2.0 * math.pi * radius, 4.0 * math.pi * radius * radius)[self.shape]

    def volume(self, start: float, end: float) -> float:
        a, b, step = self.inner + start, self.inner + end, end - start
        if self.shape in (WALL, BAR):
            return step * self.area(start)
        return math.pi * step * (a + b) if self.shape == CYLINDER else 4 / 3 * math.pi * step * (a * a + a * b + b * b)

    @property
    def sinks(self) -> list[float]:
        return [*self.left.sinks, *self.right.sinks, *self.side.sinks]

    @property
    def sources(self) -> list[tuple[int, Source]]:
        return [(i, layer.source) for i, layer in enumerate(self.layers) if layer.source is not None]


def emptied(model: Model) -> Model:
    """The same with every source at nothing."""

    def nothing(source: Source | None) -> Source | None:
        return None if source is None else replace(source, given=0.0, size=0.0)

    return replace(model, layers=tuple(replace(one, source=nothing(one.source)) for one in model.layers))

"""Deliberate mistakes: each spoils a legal case, in its inputs or in its cells."""

from __future__ import annotations

import random
from collections.abc import Callable
from dataclasses import dataclass

from .case import Inputs

Cells = dict[int, object]
ToCells = Callable[[Inputs], Cells]
Spoil = Callable[[random.Random, Inputs], Inputs]

SOURCES = ("generation", "specific generation", "power", "line power")
SIZES = ("thickness", "outer radius", "outer diameter", "radius", "diameter")


def _without(inputs: Inputs, *names: str) -> Inputs:
    return {name: value for name, value in inputs.items() if name not in names}


def _of_faces(inputs: Inputs, *rests: str) -> list[str]:
    return [name for name in inputs if name.partition(" ")[2] in rests and name.partition(" ")[0] in SIDES]


SIDES = ("left", "right", "both")


def _no_shape(_rng: random.Random, inputs: Inputs) -> Inputs:
    return _without(inputs, "shape")


def _bad_shape(rng: random.Random, inputs: Inputs) -> Inputs:
    return {**inputs, "shape": rng.choice(("cube", "plate ", "walls", "cyl."))}


def _no_conductivity(_rng: random.Random, inputs: Inputs) -> Inputs:
    return _without(inputs, "conductivity")


def _no_size(_rng: random.Random, inputs: Inputs) -> Inputs:
    return _without(inputs, *SIZES)


def _no_source(_rng: random.Random, inputs: Inputs) -> Inputs:
    return _without(inputs, *SOURCES)


def _no_fluid(rng: random.Random, inputs: Inputs) -> Inputs:
    """A film without its fluid."""
    fluids = _of_faces(inputs, "fluid")
    return _without(inputs, rng.choice(fluids)) if fluids else _no_shape(rng, inputs)


def _no_density(rng: random.Random, inputs: Inputs) -> Inputs:
    return _without(inputs, "density") if "specific generation" in inputs else _no_conductivity(rng, inputs)


def _no_extent(rng: random.Random, inputs: Inputs) -> Inputs:
    """A power over a body whose size across is not given."""
    spread_out = "power" in inputs and ("area" in inputs or "length" in inputs)
    return _without(inputs, "area", "length") if spread_out else _no_size(rng, inputs)


def _negative(rng: random.Random, inputs: Inputs) -> Inputs:
    names = [name for name in ("conductivity", *SIZES, "density", "area", "length") if name in inputs]
    name = rng.choice(names)
    value = -float(inputs[name]) if rng.random() < 0.7 else 0.0
    return {**inputs, name: value}


def _negative_film(rng: random.Random, inputs: Inputs) -> Inputs:
    films = _of_faces(inputs, "film")
    if not films:
        return _negative(rng, inputs)
    name = rng.choice(films)
    return {**inputs, name: -float(inputs[name])}


def _bore_too_wide(rng: random.Random, inputs: Inputs) -> Inputs:
    factor = rng.choice((1.0, 1.5))
    for outer, outer_half in (("outer radius", 1.0), ("outer diameter", 0.5)):
        for inner, inner_half in (("inner radius", 1.0), ("inner diameter", 0.5)):
            if outer in inputs and inner in inputs:
                return {**inputs, inner: float(inputs[outer]) * outer_half / inner_half * max(factor, 1.0 + 1e-9)}
    return _negative(rng, inputs)


def _two_sources(rng: random.Random, inputs: Inputs) -> Inputs:
    have = next(name for name in SOURCES if name in inputs)
    others = [name for name in ("generation", "power") if name != have]
    return {**inputs, rng.choice(others): rng.choice((0.0, 100.0))}


def _both_and_one(rng: random.Random, inputs: Inputs) -> Inputs:
    """The same input by `both` and by a side."""
    names = _of_faces(inputs, "held", "fluid", "film")
    name = rng.choice(names)
    side, _, rest = name.partition(" ")
    other = f"right {rest}" if side == "both" else f"both {rest}"
    return {**inputs, other: inputs[name]}


def _two_sizes(_rng: random.Random, inputs: Inputs) -> Inputs:
    """A thickness and an outside for the same body."""
    have = next(name for name in SIZES if name in inputs)
    return {**inputs, "thickness" if have != "thickness" else "outer radius": float(inputs[have])}


def _held_and_film(_rng: random.Random, inputs: Inputs) -> Inputs:
    helds = _of_faces(inputs, "held")
    if helds:
        side = helds[0].partition(" ")[0]
        return {**inputs, f"{side} film": 25.0, f"{side} fluid": 300.0}
    films = _of_faces(inputs, "film")
    return {**inputs, f"{films[0].partition(' ')[0]} held": 320.0}


def _not_cooled(_rng: random.Random, inputs: Inputs) -> Inputs:
    return _without(inputs, *_of_faces(inputs, "held", "film", "fluid"))


def _too_cold(rng: random.Random, inputs: Inputs) -> Inputs:
    """Below absolute zero."""
    names = [*_of_faces(inputs, "held", "fluid", "limit"), *[n for n in ("limit", "limit 1") if n in inputs]]
    return {**inputs, rng.choice(names): -rng.uniform(1.0, 500.0)}


def _probe_outside(rng: random.Random, inputs: Inputs) -> Inputs:
    have = next(name for name in SIZES if name in inputs)
    return {**inputs, "probe": rng.choice((-1e-3, 25.0 + 10 * float(inputs[have])))}


def _middle_of_solid(_rng: random.Random, inputs: Inputs) -> Inputs:
    """A left face on a solid round body; a bore in a wall."""
    if str(inputs["shape"]).strip().lower() == "wall":
        return {**inputs, "inner radius": 0.01}
    if "inner radius" in inputs or "inner diameter" in inputs:
        return {**inputs, "diameter": 1.0}
    return {**inputs, "left held": 300.0}


@dataclass(frozen=True)
class Mistake:
    spoil: Spoil

    def before(self, rng: random.Random, inputs: Inputs, to_cells: ToCells) -> Cells:
        return to_cells(self.spoil(rng, inputs))


@dataclass(frozen=True)
class CellMistake:
    """Something that is no number in the cell of a number."""

    contents: tuple[object, ...]

    def before(self, rng: random.Random, inputs: Inputs, to_cells: ToCells) -> Cells:
        cells = to_cells(inputs)
        numbers = [index for index, cell in cells.items() if isinstance(cell, float)]
        return {**cells, rng.choice(numbers): rng.choice(self.contents)}


_SPOILS: tuple[Spoil, ...] = (
    *(_no_shape, _bad_shape, _no_conductivity, _no_size, _no_source, _no_source, _no_fluid, _no_density, _no_extent),
    *(_negative, _negative_film, _bore_too_wide, _two_sources, _both_and_one, _two_sizes, _held_and_film),
    *(_not_cooled, _too_cold, _probe_outside, _middle_of_solid),
)
MISTAKES: tuple[Mistake | CellMistake, ...] = (
    *(Mistake(spoil) for spoil in _SPOILS),
    CellMistake(("12.5", "0,5", "about 3", "n/a", "--")),
    CellMistake(("300", "7e-3", "1 000")),
    CellMistake((True, False)),
    CellMistake(("#DIV/0!", "#REF!", "#NAME?", "#VALUE!", "#N/A", "#NUM!")),
)

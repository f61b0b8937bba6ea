"""A recipe's rows as the solver's cases: sizes, conductivities, sources and faces in SI, and what does not fit together."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from math import pi

import numpy as np
from ingle import Bar, Cases, Face, Layer, Shape
from ingle.conductivities import Conductivity, Table
from ingle.film_laws import FilmLaw, FluidKind
from ingle.shapes import MEASURE, Array, solid_volume, volume

from ingle_addin.cells import CellError
from ingle_addin.faults import HERE, ROW, THERE, Fault
from ingle_addin.recipe import LayerRecipe, Recipe
from ingle_addin.slots import base_name
from ingle_addin.source_builder import Pattern, Sources
from ingle_addin.units import Kind

Get = Callable[[str], Array]
GetTable = Callable[[str], tuple[Table, Array]]
Flag = Callable[[np.ndarray, Fault], None]

_SLOPE_REFERENCE = 20.0  # °C, where the reference of a slope is blank


@dataclass(frozen=True)
class Built:
    """Cases, and what turns the solver's numbers into the row's own: ``area`` (of a wall, or a bar's section) and ``length``.

    ``table_ends`` [°C] are the last temperatures of the text tables, by slot.
    """

    cases: Cases
    area: Array | None
    length: Array | None
    table_ends: Mapping[str, Array]
    sources: Sources
    patterns: dict[str, Pattern] = field(default_factory=dict)

    def pattern(self, kind: str) -> Pattern:
        """What scales for a kind of source."""
        if kind not in self.patterns:
            self.patterns[kind] = self.sources.pattern(kind)
        return self.patterns[kind]

    def scaling(self, kind: str) -> Cases:
        """The cases with that pattern."""
        return replace(self.cases, pattern=self.pattern(kind).layers)


class _Builder:
    def __init__(self, recipe: Recipe, get: Get, tables: GetTable, flag: Flag) -> None:
        self.recipe, self.get, self.tables, self.flag = recipe, get, tables, flag
        self.table_ends: dict[str, Array] = {}
        self.inner: Array | None = None  # places, for the sizes of film laws
        self.outside: Array = np.zeros(0)

    def maybe(self, slot: str) -> Array | None:
        return self.get(slot) if slot in self.recipe.filled else None

    def fault(self, mask: np.ndarray, error: CellError, sentence: str, *slots: str) -> None:
        self.flag(mask, Fault(error, sentence, tuple(self.recipe.filled[slot].index for slot in slots)))

    def length(self, slot: str) -> Array:
        value = self.get(slot)
        return value * 0.5 if base_name(slot).endswith("diameter") else value

    def sizes(self) -> tuple[Array | None, list[Array]]:
        """The bore and each layer's thickness."""
        recipe = self.recipe
        inner = self.length(recipe.inner) if recipe.inner else None
        place = inner
        thicknesses: list[Array] = []
        for layer in recipe.layers:
            d = self.length(layer.outside)
            if base_name(layer.outside) != "thickness":
                outside = d
                if place is not None:
                    d = outside - place
                    self._check_outside(layer, d)
                place = outside
            else:
                place = d if place is None else place + d
            thicknesses.append(d)
        return inner, thicknesses

    def _check_outside(self, layer: LayerRecipe, d: Array) -> None:
        recipe = self.recipe
        label = recipe.label(layer.outside)
        if layer.number == 1:
            inner = recipe.label(recipe.inner)
            if layer.outside in ("radius", "diameter"):
                sentence = f"{label} in {ROW} is for a solid body, and {inner} is {HERE}; use outer {layer.outside} instead"
                self.fault(self.get(recipe.inner) > 0.0, CellError.VALUE, sentence, recipe.inner)
            sentence = f"{inner} in {ROW} is {HERE} and {label} is {THERE}; make the bore smaller than the outside"
            self.fault(d <= 0.0, CellError.NUM, sentence, recipe.inner, layer.outside)
        else:
            sentence = f"{label} in {ROW} is {HERE}, not beyond layer {layer.number - 1}; layers go from the inside out"
            self.fault(d <= 0.0, CellError.NUM, sentence, layer.outside)

    def in_temperature(self, slot: str, slope: str, reference: str) -> tuple[Array | None, Array | None, Array | None, Table | None]:
        """A property as number, slope and reference, or as a table."""
        if slot in self.recipe.tabled:
            table, self.table_ends[slot] = self.tables(slot)
            return None, None, None, table
        value, sloped = self.get(slot), self.maybe(slope)
        if sloped is None:
            return value, None, None, None
        known = self.maybe(reference)
        return value, sloped, np.full_like(sloped, _SLOPE_REFERENCE) if known is None else known, None

    def conductivity(self, layer: LayerRecipe) -> Array | Conductivity:
        """A number, a slope or a table."""
        slots = (layer.slot(name) for name in ("conductivity", "conductivity slope", "conductivity reference"))
        k, slope, reference, table = self.in_temperature(*slots)
        return k if k is not None and slope is None else Conductivity(k, slope, reference, table)

    def resistance(self, slot: str) -> Array | None:
        """An area resistance, given as one or as a conductance by its unit."""
        value = self.maybe(slot)
        if value is None or self.recipe.filled[slot].unit.kind is not Kind.FILM:
            return value
        self.fault(value <= 0.0, CellError.NUM, f"{self.recipe.label(slot)} in {ROW} is {HERE}; a conductance is above 0", slot)
        return 1.0 / value

    def face(self, side: str) -> Face:
        held, film, fluid, flux = (self.maybe(f"{side} {name}") for name in ("held", "film", "fluid", "flux in"))
        emissivity, surroundings = self.maybe(f"{side} emissivity"), self.maybe(f"{side} surroundings")
        resistance = self.resistance(f"{side} resistance")
        law = self.recipe.words.get(f"{side} film law")
        if fluid is not None and film is None and law is None and emissivity is None and resistance is not None:
            held, fluid = fluid, None  # with a fluid and nothing else the resistance alone is the path
        if emissivity is not None and surroundings is None:
            surroundings = fluid
        if law is None:
            return Face(held, film, None if film is None else fluid, flux, emissivity, surroundings, resistance)
        size, speed = self.maybe(f"{side} size"), self.maybe(f"{side} speed")
        if size is None:  # a round law's own diameter
            size = self.diameter(side)
        of = FluidKind[self.recipe.words.get(f"{side} fluid kind", "air").upper()]
        which = FilmLaw[law.upper().replace(" ", "_")]
        return Face(held, None, fluid, flux, emissivity, surroundings, resistance, which, of, size, speed)

    def diameter(self, side: str) -> Array:
        """The body's own at a face, or of a bar."""
        if self.recipe.bar:
            return self.get("diameter")
        return 2.0 * (self.outside if side == "right" or self.inner is None else self.inner)

    def bar(self) -> Bar:
        """Section, perimeter and what cools the sides."""
        way = self.recipe.section
        first = self.get(way[0])
        if way[0] == "section":
            section, perimeter = first, self.maybe("perimeter")
        elif way[0] == "width":
            thick = self.get("thickness")
            section, perimeter = first * thick, 2.0 * (first + thick)
        else:
            section, perimeter = pi * first * first / 4.0, pi * first
        cooled = any(slot.startswith("side ") for slot in self.recipe.filled)
        return Bar(section, perimeter, self.face("side") if cooled else None, self.maybe("left contact"), self.maybe("right contact"))


def build_cases(recipe: Recipe, get: Get, tables: GetTable, flag: Flag) -> Built:
    """Cases of a recipe's rows.

    ``get`` gives a slot's values in base units and ``tables`` its text tables; ``flag`` takes a mask of rows and their fault.
    """
    make = _Builder(recipe, get, tables, flag)
    shape = recipe.shape
    inner, thicknesses = make.sizes()
    if inner is not None:
        _flag_solid_left(recipe, inner, flag)
    place = inner
    volumes = []
    for d in thicknesses:
        if shape == Shape.WALL:
            V = d
        elif place is None:
            V = solid_volume(shape, d)
        else:
            V = volume(shape, place, d)
        place = d if place is None else place + d
        volumes.append(V * MEASURE[shape])
    bar = make.bar() if recipe.bar else None
    sources = Sources(recipe, make.maybe, make.in_temperature, volumes, None if bar is None else bar.section)
    layers = tuple(
        Layer(d, make.conductivity(layer), sources.now(layer)) for layer, d in zip(recipe.layers, thicknesses, strict=True)
    )
    assert place is not None
    make.inner, make.outside = inner, place
    _check_probe(recipe, get, flag, inner, thicknesses)
    left_limit = make.maybe("left limit")
    if left_limit is not None and inner is not None:
        left_limit = np.where(inner > 0.0, left_limit, np.nan)  # `both limit` on a body that turns out solid
    joints = tuple(make.resistance(f"joint {number}") for number in range(1, len(layers)))
    cases = Cases(
        shape,
        layers,
        make.face("left"),
        make.face("right"),
        inner,
        make.maybe("limit"),
        left_limit,
        make.maybe("right limit"),
        make.maybe("probe"),
        joints,
        tuple(make.maybe(f"limit {layer.number}") for layer in recipe.layers),
        length=make.maybe("length"),
        width=make.maybe("width"),
        bar=bar,
    )
    return Built(cases, make.maybe("area") if bar is None else bar.section, make.maybe("length"), make.table_ends, sources)


def _check_probe(recipe: Recipe, get: Get, flag: Flag, inner: Array | None, thicknesses: list[Array]) -> None:
    if "probe" not in recipe.filled:
        return
    total = thicknesses[0]
    for d in thicknesses[1:]:
        total = total + d
    probe = get("probe")
    from_left = probe - (inner if inner is not None else 0.0)
    slack = 1e-9 * (total + probe)
    where = "from the left face" if recipe.shape == Shape.WALL else "a radius"
    sentence = f"{recipe.label('probe')} in {ROW} is {HERE}, outside the body; give a place in it, {where}"
    outside = (from_left < -slack) | (from_left > total + slack)
    flag(outside, Fault(CellError.NUM, sentence, (recipe.filled["probe"].index,)))


def _flag_solid_left(recipe: Recipe, a: Array, flag: Flag) -> None:
    """A bore of 0 is solid: then only `both` may speak of its left face."""
    for slot, column in recipe.filled.items():
        if slot.startswith("left ") and len(column.slots) == 1:
            sentence = f"{column.label} in {ROW} lies on an inner face, and the bore is 0; give an inner radius or leave it blank"
            flag(a == 0.0, Fault(CellError.VALUE, sentence))

"""Each layer's source as the solver takes it, at the row's own value and as it scales for an allowable."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from ingle import Conductor, Drive, Generation, Resistivity, Shape
from ingle.conductivities import Table
from ingle.shapes import Array
from ingle.sources import Source

from ingle_addin.headings import CURRENTS
from ingle_addin.recipe import LayerRecipe, Recipe
from ingle_addin.slots import base_name

_DRIVES = {"current": Drive.CURRENT, "voltage": Drive.VOLTAGE, "current density": Drive.DENSITY}
InTemperature = Callable[[str, str, str], tuple[Array | None, Array | None, Array | None, Table | None]]


@dataclass(frozen=True)
class Pattern:
    """What one multiple of a kind of source is in each layer (None: it keeps its own), and the source that tells it.

    ``told``: the value, in base units and never negative, of the source that one multiple means; 1 where it is the unit itself;
    None where only text tables are of the kind. ``all_zero``: rows whose several sources of the kind are all 0. ``now``: how much
    of ``told`` the row has.
    """

    layers: tuple[Source | None, ...]
    told: Array | None
    now: Array
    all_zero: np.ndarray


class Sources:
    """The sources of a recipe's rows; ``volumes`` as heats are measured, ``section`` of a bar."""

    def __init__(
        self, recipe: Recipe, maybe: Callable[[str], Array | None], in_temperature: InTemperature, volumes: list[Array],
        section: Array | None,
    ) -> None:  # fmt: skip
        self.recipe, self.maybe, self.in_temperature = recipe, maybe, in_temperature
        self.volumes, self.section = volumes, section
        self.zero = np.zeros_like(volumes[0])

    def now(self, layer: LayerRecipe) -> Source:
        """A layer's source at the row's own value; none is 0."""
        return self._source(layer, layer.source, None) if layer.source else self.zero

    def pattern(self, kind: str) -> Pattern:
        """What scales with a kind of source, the rest of the row staying as it is."""
        recipe, one = self.recipe, np.ones_like(self.zero)
        mine = [layer for layer in recipe.layers if layer.source and base_name(layer.source) == kind]
        numbers = [layer for layer in mine if layer.source not in recipe.tabled]
        never = np.zeros(len(one), dtype=bool)
        if len(mine) <= 1 and len(numbers) == len(mine):
            number = mine[0].number if mine else recipe.scaled_layer
            layers = tuple(self._source(x, x.slot(kind), one) if x.number == number else None for x in recipe.layers)
            return Pattern(layers, one, self._value(mine[0].source) if mine else self.zero, never)
        if not numbers:
            return Pattern(tuple(self._source(x, x.source, None) if x in mine else None for x in recipe.layers), None, one, never)
        told = self._value(numbers[-1].source)
        for layer in reversed(numbers[:-1]):
            value = self._value(layer.source)
            told = np.where(value != 0.0, value, told)
        sign = np.where(told < 0.0, -1.0, 1.0)
        layers = tuple(
            self._source(x, x.source, None if x.source in recipe.tabled else sign * self._value(x.source)) if x in mine else None
            for x in recipe.layers
        )
        return Pattern(layers, np.abs(told), told, (told == 0.0) & (len(numbers) == len(mine)))

    def _value(self, slot: str) -> Array:
        value = self.maybe(slot)
        assert value is not None
        return value

    def _source(self, layer: LayerRecipe, slot: str, value: Array | None) -> Source:
        """The source of that heading with a value of its own, the row's if None."""
        name = base_name(slot)
        if name in CURRENTS:
            return self._conductor(layer, name, self._value(slot) if value is None else value)
        if slot in self.recipe.tabled:
            table = self.in_temperature(slot, "", "")[3]
            return Generation(np.ones_like(self.zero), table=table)
        q = self._value(slot) if value is None else value
        factor = self._per_volume(layer, name)
        q = q if factor is None else q * factor
        slope = self.maybe(layer.slot("generation slope"))
        if slope is None:
            return q
        reference = self.maybe(layer.slot("generation reference"))
        return Generation(q, slope, np.full_like(slope, 20.0) if reference is None else reference)

    def _conductor(self, layer: LayerRecipe, name: str, value: Array) -> Conductor:
        slots = (layer.slot(each) for each in ("resistivity", "resistivity slope", "resistivity reference"))
        turns, fill = self.maybe(layer.slot("turns")), self.maybe(layer.slot("fill factor"))
        wound = turns is not None or fill is not None
        ac = self.maybe(layer.slot("ac ratio"))
        return Conductor(_DRIVES[name], value, Resistivity(*self.in_temperature(*slots)), ac, wound, turns, fill)

    def _per_volume(self, layer: LayerRecipe, name: str) -> Array | None:
        """Generation made by one base unit of a source heading; None is 1."""
        V, shape = self.volumes[layer.number - 1], self.recipe.shape
        if name == "generation":
            return None
        if name == "specific generation":
            return self.maybe(layer.slot("density"))
        if self.section is not None:
            return 1.0 / (self.section if name == "line power" else V * self.section)
        if name == "line power":
            return 1.0 / V
        along = {Shape.WALL: self.maybe("area"), Shape.CYLINDER: self.maybe("length"), Shape.SPHERE: None}[shape]
        return 1.0 / (V if along is None else V * along)

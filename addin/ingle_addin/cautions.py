"""What is doubtful in a row that has an answer: each one sentence, shown by WHY and by the verdict."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np
from ingle import Conductor, Generation, Layer
from ingle.conductivities import Conductivity, Table
from ingle.film_laws import Doubt

from ingle_addin.case_builder import Built
from ingle_addin.cells import CellError
from ingle_addin.faults import HERE, ROW, Fault
from ingle_addin.recipe import Recipe

# Above anything built: a reactor fuel pellet makes below 2e9 W/m³, a fusing copper wire about 1e12.
IMPLAUSIBLE_GENERATION = 1e13
IMPLAUSIBLE_SIZE = 100.0  # m; a mass concrete pour is a few metres


def caution_masks(recipe: Recipe, built: Built, values: Mapping[str, np.ndarray]) -> Iterator[tuple[np.ndarray, Fault]]:
    """Masks of a recipe's rows and the caution each has; the first that holds is the one shown."""
    yield from law_cautions(recipe, values)
    for layer, case in zip(recipe.layers, built.cases.layers, strict=True):
        q = case.generation.scale if isinstance(case.generation, Generation) else case.generation
        if isinstance(q, np.ndarray) and layer.source and layer.source not in recipe.tabled:
            label = recipe.label(layer.source)
            yield _where(q < 0.0, f"{label} in {ROW} is negative, so the body takes heat up; make it positive if it heats itself")
            sentence = f"{label} in {ROW} is {HERE}, which makes over 1e13 W/m³, more than a fusing wire; check its unit"
            column = recipe.filled[layer.source].index
            yield np.abs(q) > IMPLAUSIBLE_GENERATION, Fault(CellError.NA, sentence, (column,))
        for name, table in _tables(case):
            slot = layer.slot(name)
            low, high = values[f"layer_low {layer.number}"], values[f"layer_peak {layer.number}"]
            sentence = f"{recipe.label(slot)} in {ROW} has a table that does not reach the body's temperatures"
            held = f"{sentence}; its end value is held there, so extend it"
            yield _where((low < table.T[:, 0]) | (high > built.table_ends[slot]), held)
        sentence = f"{recipe.label(layer.outside)} in {ROW} makes the body over 100 m thick; check its unit"
        yield _where(case.thickness > IMPLAUSIBLE_SIZE, sentence)


def _tables(layer: Layer) -> Iterator[tuple[str, Table]]:
    """The text tables of a layer, by their headings."""
    k, source = layer.conductivity, layer.generation
    found = (
        ("conductivity", k.table if isinstance(k, Conductivity) else None),
        ("generation", source.table if isinstance(source, Generation) else None),
        ("resistivity", source.resistivity.table if isinstance(source, Conductor) else None),
    )
    return ((name, table) for name, table in found if table is not None)


_DOUBTS = (
    (Doubt.PHASE, "water freezes or boils there at one atmosphere; choose another fluid or law"),
    (Doubt.PROPERTIES, "the fluid's temperatures are outside those its properties are known for; take the film as a guess"),
    (Doubt.RAYLEIGH, "its Rayleigh number is outside the law's range; take the film as a guess"),
    (Doubt.REYNOLDS, "its Reynolds number is outside the law's range; take the film as a guess"),
    (Doubt.FALLING, "a hotter face would lose less heat there, so other temperatures are possible too; test it"),
    (Doubt.DENSEST, "water is densest between face and fluid, where its currents turn; take the film as a guess"),
    (Doubt.TRANSITION, "the flow is neither laminar nor turbulent; take the film as a guess"),
    (Doubt.BUOYANCY, "natural convection would be as strong as the flow; compare with a law of still fluid"),
    (Doubt.FAST, "air that fast heats itself; the fluid's temperature is not what the face feels"),
)


def law_cautions(recipe: Recipe, values: Mapping[str, np.ndarray]) -> Iterator[tuple[np.ndarray, Fault]]:
    """The doubts of the film laws at the faces."""
    for side in ("left", "right", "side"):
        doubts = values.get(f"{side}_doubt")
        if doubts is None or np.isnan(doubts).all():
            continue
        bits = np.where(np.isnan(doubts), 0.0, doubts).astype(np.intp)
        for doubt, words in _DOUBTS:
            yield _where((bits & doubt) != 0, f"{recipe.label(f'{side} film law')} in {ROW}: {words}")


def _where(mask: np.ndarray, sentence: str) -> tuple[np.ndarray, Fault]:
    return mask, Fault(CellError.NA, sentence)

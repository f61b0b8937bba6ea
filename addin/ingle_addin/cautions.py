"""What is doubtful in a row that has an answer: each one sentence, shown by WHY and by the verdict."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from ingle import Cases

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW, Fault
from ingle_addin.recipe import Recipe

# Above anything built: a reactor fuel pellet makes below 2e9 W/m³, a fusing copper wire about 1e12.
IMPLAUSIBLE_GENERATION = 1e13
IMPLAUSIBLE_SIZE = 100.0  # m; a mass concrete pour is a few metres


def caution_masks(recipe: Recipe, cases: Cases) -> Iterator[tuple[np.ndarray, Fault]]:
    """Masks of a recipe's rows and the caution each has; the first that holds is the one shown."""
    layer = cases.layers[0]
    if recipe.source:
        label, q = recipe.label(recipe.source), layer.generation
        yield _where(q < 0.0, f"{label} in {ROW} is negative, so the body takes heat up; make it positive if it heats itself")
        yield _where(np.abs(q) > IMPLAUSIBLE_GENERATION, f"{label} in {ROW} is over 1e13 W/m³, more than a fusing wire makes; "
                     "check its unit")  # fmt: skip
    yield _where(layer.thickness > IMPLAUSIBLE_SIZE, f"{recipe.label(recipe.outer)} in {ROW} makes the body over 100 m thick; "
                 "check its unit")  # fmt: skip


def _where(mask: np.ndarray, sentence: str) -> tuple[np.ndarray, Fault]:
    return mask, Fault(CellError.NA, sentence)

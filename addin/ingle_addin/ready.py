"""What an answer needs and how it is worked out, once for all rows of a recipe."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np
from ingle.shapes import Array

from ingle_addin.case_builder import Built
from ingle_addin.faults import Fault

Faults = list[tuple[np.ndarray, Fault]]
Worked = tuple[np.ndarray, Faults]


@dataclass(frozen=True)
class Solved:
    """What an answer is worked out from: the solver's quantities for a recipe's rows, and the rows' own values."""

    values: Mapping[str, Array]
    built: Built
    get: Callable[[str], Array]


@dataclass(frozen=True)
class Ready:
    """An answer that can be given: the solver's names it needs, and the values (base units or texts) with their faults.

    ``scaling``: the kind of source that scales, the recipe's own if empty. ``beyond``: it is given also where the row's own
    source is more than any steady state bears.
    """

    quantities: tuple[str, ...]
    work: Callable[[Solved], Worked]
    scaling: str = ""
    beyond: bool = False


def plain(name: str, faults: Callable[[Array], Faults] | None = None, factor: float = 1.0) -> Ready:
    """The solver's own number."""

    def work(solved: Solved) -> Worked:
        value = solved.values[name]
        return (value if factor == 1.0 else value * factor), (faults(value) if faults else [])

    return Ready((name,), work)

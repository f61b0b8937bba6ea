"""The one entrance through which every spreadsheet host asks for function values, many calls at a time."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from ingle_addin.cells import Grid


@dataclass(frozen=True)
class Outcome:
    """What one call returns.

    ``grid`` holds the values (1×1 for a plain cell); ``reasons`` has one entry a *row of the grid* (a column of it, where
    the headings stood in a column): None where there is an answer, else the sentence that INGLE.WHY would give.
    """

    grid: Grid
    reasons: Sequence[str | None]


# (canonical function name such as "INGLE.PEAK", one sequence of argument grids per call) -> one outcome a call, in order.
# An omitted argument is an empty grid: ().
SolveCalls = Callable[[str, Sequence[Sequence[Grid]]], list[Outcome]]

"""What a workbook's formulas come to."""

from __future__ import annotations

from dataclasses import dataclass, field

from ingle_addin.book.report import NoAnswer, NotComputed, Truncated
from ingle_addin.cells import Cell


@dataclass
class Computed:
    """What a workbook's formulas come to: for each sheet, cell -> value of every cell that was computed.

    ``ingle`` are the cells (sheet, cell) that hold Ingle calls.
    """

    values: list[dict[int, Cell]]
    ingle: set[tuple[int, int]] = field(default_factory=set)
    ordinary_cells: int = 0
    no_answers: list[NoAnswer] = field(default_factory=list)
    hidden: int = 0  # calls without an answer inside formulas that show a value
    not_computed: list[NotComputed] = field(default_factory=list)
    truncated: list[Truncated] = field(default_factory=list)

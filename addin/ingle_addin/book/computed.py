"""What a workbook's formulas come to."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from ingle_addin.book.calling import Call
from ingle_addin.book.report import NoAnswer, NotComputed, Truncated
from ingle_addin.cells import Cell


@dataclass
class Computed:
    """What a workbook's formulas come to: for each sheet, cell -> value of every cell that was computed.

    ``ingle`` are the cells (sheet, cell) that hold Ingle calls; ``hidden`` are calls without an answer inside formulas that
    show a value, one entry a call; ``volatile`` are the cells (sheet, cell) that were left since they change from moment to
    moment; ``calls`` are all calls as they were last answered.
    """

    values: list[dict[int, Cell]]
    ingle: set[tuple[int, int]] = field(default_factory=set)
    ordinary_cells: int = 0
    no_answers: list[NoAnswer] = field(default_factory=list)
    hidden: list[NoAnswer] = field(default_factory=list)
    not_computed: list[NotComputed] = field(default_factory=list)
    truncated: list[Truncated] = field(default_factory=list)
    volatile: list[tuple[int, int]] = field(default_factory=list)
    calls: Sequence[Call] = ()

"""What a spreadsheet cell can hold, and the rectangles of cells that every part passes to the next."""

from __future__ import annotations

import datetime
from collections.abc import Sequence
from enum import Enum


class CellError(Enum):
    """A true cell error. The value is the text a spreadsheet shows for it."""

    NULL = "#NULL!"
    DIV0 = "#DIV/0!"
    VALUE = "#VALUE!"
    REF = "#REF!"
    NAME = "#NAME?"
    NUM = "#NUM!"
    NA = "#N/A"

    def __str__(self) -> str:
        return self.value


# None is an empty cell. Dates arrive as datetime objects where the reader can tell (by the cell's number format).
Cell = float | int | str | bool | CellError | datetime.datetime | datetime.date | datetime.time | None

# Rows of cells; every row has the same length. A lone value is ((value,),).
Grid = Sequence[Sequence[Cell]]

"""What a spreadsheet program hands to a function, as cells, and answers in the form it takes back; for every program.

Programs differ in how a range arrives (tuples of rows, lists, a flat list for one row), in how they mark an empty cell, an
error and an amount of money, and in what an error must look like on the way back. An argument left out is the caller's to
tell, since some programs hand over the same for it as for an empty cell.
"""

from __future__ import annotations

import datetime
import math
from collections.abc import Mapping
from decimal import Decimal
from numbers import Real
from typing import Any

from ingle_addin.cells import Cell, CellError, Grid

OMITTED: Grid = ()
_ERRORS = {error.value: error for error in CellError}
_MOMENTS = (datetime.datetime, datetime.date, datetime.time)


def cell_of(value: Any) -> Cell:
    """One value as a cell: empty text is blank, a currency a number, the text of an error that error."""
    kind = type(value)
    if kind is float or kind is int or kind is bool or value is None:
        return value  # type: ignore[no-any-return]
    if kind is str:
        return (_ERRORS.get(value, value) if value[:1] == "#" else value) or None
    if isinstance(value, (CellError, *_MOMENTS)):
        return value
    if type(value).__name__ in ("bool", "bool_"):  # numpy's
        return bool(value)
    if isinstance(value, (Decimal, Real)):
        return float(value)
    return cell_of(str(value))


def grid_of(value: Any) -> Grid:
    """An argument as rows of cells: one value is 1×1, a flat list one row; rows of uneven length are filled up with blanks."""
    if not isinstance(value, (list, tuple)):
        return ((cell_of(value),),)
    if not value:
        return OMITTED
    if not isinstance(value[0], (list, tuple)):
        value = (value,)
    # Long tables are mostly numbers, which need no call each.
    rows = [tuple([cell if type(cell) is float else cell_of(cell) for cell in row]) for row in value]
    widths = set(map(len, rows))
    if len(widths) > 1:
        rows = [row + (None,) * (max(widths) - len(row)) for row in rows]
    return tuple(rows)


def used_rows(grid: Grid) -> int:
    """How many rows there are up to the last that holds anything."""
    count = len(grid)
    while count and not any(cell is not None and cell != "" for cell in grid[count - 1]):
        count -= 1
    return count


def to_sheet(cell: Cell, errors: Mapping[CellError, Any]) -> Any:
    """One answer as a program takes it: ``errors`` are its errors, nothing is empty text, a number that is none #NUM!."""
    if isinstance(cell, CellError):
        return errors[cell]
    if isinstance(cell, float):
        return cell if math.isfinite(cell) else errors[CellError.NUM]
    return "" if cell is None else cell


def rows_to_sheet(grid: Grid, errors: Mapping[CellError, Any]) -> tuple[tuple[Any, ...], ...]:
    """Rows of answers as a program takes them; an answer without any cell is #N/A."""
    rows = tuple(tuple([to_sheet(cell, errors) for cell in row]) for row in grid)
    return rows if rows and rows[0] else ((errors[CellError.NA],),)

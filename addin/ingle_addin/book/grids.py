"""Answers laid into the cells that are there to take them."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from ingle_addin.book.refs import Rect, cell_name, key_of
from ingle_addin.cells import Cell, CellError, Grid


def plain(value: Cell) -> Cell:
    """A value as a cell can hold it: an empty one is empty text, a number that is none is ``#NUM!``."""
    if value is None:
        return ""
    kind = type(value)
    if kind is float or kind is str or kind is bool or isinstance(value, CellError):
        if kind is float and not math.isfinite(value):  # type: ignore[arg-type]
            return CellError.NUM
        return value
    if isinstance(value, (int, float)):
        return plain(float(value))
    return str(value)


def size_of(grid: Grid) -> tuple[int, int]:
    """Rows and columns."""
    return len(grid), len(grid[0]) if grid else 0


def laid(grid: Grid, rect: Rect, dynamic: bool) -> Iterator[tuple[int, Cell]]:
    """The cells of ``rect`` with their values.

    One row or column is repeated, as array formulas do; past the end of any other there is ``#N/A``, or, where a
    ``dynamic`` array has become smaller, empty text.
    """
    rows, columns = size_of(grid)
    for i in range(rect.rows):
        for j in range(rect.columns):
            row = 0 if rows == 1 and not dynamic else i
            column = 0 if columns == 1 and not dynamic else j
            outside: Cell = "" if dynamic else CellError.NA
            value = plain(grid[row][column]) if row < rows and column < columns else outside
            yield key_of(rect.top + i, rect.left + j), value


def range_name(rect: Rect) -> str:
    """``A1`` or ``A1:B2``."""
    first, last = cell_name(key_of(rect.top, rect.left)), cell_name(key_of(rect.bottom, rect.right))
    return first if first == last else f"{first}:{last}"


def unanswered(grid: Grid, reasons: Sequence[str | None]) -> Iterator[tuple[int, int, str, str]]:
    """Row and column (from 0), error and reason of each row of a grid (or column, as the reasons count) without answer."""
    rows, columns = size_of(grid)
    by_column = len(reasons) != rows and len(reasons) == columns
    lines: Sequence[Sequence[Cell]] = [[row[j] for row in grid] for j in range(columns)] if by_column else grid
    for index, line in enumerate(lines):
        reason = reasons[index] if index < len(reasons) else None
        place, error = next(((i, each) for i, each in enumerate(line) if isinstance(each, CellError)), (0, None))
        if reason is None and error is None:
            continue
        text = str(error) if error is not None else ""
        at = (place, index) if by_column else (index, place)
        yield *at, text, reason or f"the answer is {text}"

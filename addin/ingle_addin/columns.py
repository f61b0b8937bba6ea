"""Columns of cells as arrays: numbers with NaN for a blank, and what else each cell may be, beside them."""

from __future__ import annotations

import datetime
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ingle_addin.cells import Cell, CellError

NUMBER, BLANK, TEXT, BOOLEAN, DATE, ERROR = range(6)
_DATES = (datetime.datetime, datetime.date, datetime.time, datetime.timedelta)


@dataclass(frozen=True)
class Values:
    """One column. ``numbers`` is None in a column of texts alone; ``kinds`` is None where a column is all of one sort.

    All numbers: ``numbers`` (NaN is blank). All texts: ``cells`` (an array of str, or of str and None). Anything else:
    ``numbers``, ``kinds`` and ``cells`` (the cells themselves) together.
    """

    numbers: np.ndarray | None
    kinds: np.ndarray | None = None
    cells: np.ndarray | None = None

    def __len__(self) -> int:
        return len(self.numbers if self.numbers is not None else self.cells if self.cells is not None else ())

    def rows(self, start: int, stop: int) -> Values:
        """Some rows of the column; a column of one row serves as many as are asked for."""
        if len(self) == 1 and (start, stop) != (0, 1):
            return Values(*(None if x is None else np.repeat(x, stop - start) for x in self._parts()))
        if start == 0 and stop == len(self):
            return self
        return Values(*(None if x is None else x[start:stop] for x in self._parts()))

    def _parts(self) -> tuple[np.ndarray | None, np.ndarray | None, np.ndarray | None]:
        return self.numbers, self.kinds, self.cells

    def cell(self, row: int) -> Any:
        """The cell of a row."""
        row = 0 if len(self) == 1 else row
        if self.cells is not None:
            return self.cells[row]
        assert self.numbers is not None
        return float(self.numbers[row])

    def blank(self) -> np.ndarray | bool:
        """Which rows are blank: a boolean for all, or an array."""
        if self.kinds is not None:
            blank: np.ndarray = self.kinds == BLANK
            return blank
        if self.numbers is not None:
            missing: np.ndarray = np.isnan(self.numbers)
            return missing
        assert self.cells is not None
        if self.cells.dtype.kind == "U":
            return np.equal(np.char.str_len(np.char.strip(self.cells)), 0)
        return np.fromiter((is_blank(c) for c in self.cells), bool, len(self.cells))


def is_blank(cell: Any) -> bool:
    """An empty cell, empty text or only spaces; NaN from Python too."""
    return cell is None or (isinstance(cell, str) and not cell.strip()) or (isinstance(cell, float) and cell != cell)


def kind_of(cell: Any) -> int:
    """What a cell holds, as one of the constants of this module."""
    if is_blank(cell):
        return BLANK
    if isinstance(cell, (bool, np.bool_)):
        return BOOLEAN
    if isinstance(cell, (int, float, np.integer, np.floating)):
        return BLANK if cell != cell else NUMBER
    if isinstance(cell, CellError):
        return ERROR
    if isinstance(cell, (*_DATES, np.datetime64)):
        return DATE
    return TEXT


def from_cells(cells: Sequence[Cell]) -> Values:
    """A column read cell by cell."""
    sorts = set(map(type, cells))
    if sorts <= {float, int, type(None)}:
        try:
            return Values(np.array(cells, dtype=np.float64))
        except OverflowError:
            pass  # a whole number beyond the floats: read below, as infinite
    array = np.empty(len(cells), dtype=object)
    array[:] = cells
    return Values(None, None, array) if sorts <= {str, type(None)} else _mixed(array)


def _mixed(array: np.ndarray) -> Values:
    kinds = np.fromiter(map(kind_of, array), np.int8, len(array))
    numbers = np.full(len(array), np.nan)
    for row in np.flatnonzero(kinds == NUMBER):
        numbers[row] = to_float(array[row])
    return Values(numbers, kinds, array)


def to_float(cell: Any) -> float:
    """A number as a float, infinite where none holds it."""
    try:
        return float(cell)
    except OverflowError:
        return float("inf") if cell > 0 else float("-inf")


def from_array(array: np.ndarray) -> Values:
    """A column from a numpy array: numbers (NaN is blank), texts, or objects as cells."""
    if array.dtype.kind in "fiu":
        return Values(np.ascontiguousarray(array, dtype=np.float64))
    if array.dtype.kind == "U":
        return Values(None, None, array)
    if array.dtype.kind == "O":
        sorts = set(map(type, array))
        return Values(None, None, array) if sorts <= {str, type(None)} else from_cells(array.tolist())
    return from_cells(list(array))


def from_objects(numbers: np.ndarray) -> Values:
    """A column of numbers as cells, where texts were expected."""
    cells = np.array([None if x != x else x for x in numbers.tolist()] + [None], dtype=object)[:-1]
    return Values(numbers, np.where(np.isnan(numbers), BLANK, NUMBER).astype(np.int8), cells)


def codes(column: Values) -> tuple[np.ndarray | None, list[Any]]:
    """The distinct cells of a text column and which of them each row holds; None where all rows hold the first."""
    cells = column.cells
    assert cells is not None
    same = cells == cells[0]
    if np.all(same):
        return None, [cells[0]]
    if cells.dtype.kind == "U":
        texts, inverse = np.unique(cells, return_inverse=True)
        return inverse.reshape(-1), texts.tolist()
    if column.numbers is None:  # texts and blanks alone are their own keys
        found = {cell: i for i, cell in enumerate(dict.fromkeys(cells))}
        return np.fromiter(map(found.__getitem__, cells), np.intp, len(cells)), list(found)
    keys: dict[Any, int] = {}
    each = np.fromiter((keys.setdefault(key(c), len(keys)) for c in cells), np.intp, len(cells))
    first = np.unique(each, return_index=True)[1]
    return each, [cells[row] for row in first]


def key(cell: Any) -> Any:
    """Equal for equal cells only."""
    # 1, 1.0 and True are equal as keys, yet are different cells.
    return cell if isinstance(cell, str) or cell is None else (kind_of(cell), cell)

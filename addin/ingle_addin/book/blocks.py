"""Where the answers of nested calls stand in the engine: blocks of a sheet of their own."""

from __future__ import annotations

from ingle_addin.book.calling import Call
from ingle_addin.book.grids import plain, size_of
from ingle_addin.book.refs import Rect, cell_name, key_of, quote_sheet
from ingle_addin.cells import Cell

_ROWS = 1_000_000


class Blocks:
    """Gives each nested call a block as large as its answer."""

    def __init__(self, sheet_name: str) -> None:
        self._prefix = quote_sheet(sheet_name) + "!"
        self._row, self._column, self._width = 1, 1, 1
        self._given: list[Rect] = []

    def _take(self, rows: int, columns: int) -> Rect:
        # Blocks stand below one another in a band of columns as wide as its widest block.
        if self._row + rows > _ROWS:
            self._row, self._column, self._width = 1, self._column + self._width, 1
        self._width = max(self._width, columns)
        rect = Rect(self._row, self._column, self._row + rows - 1, self._column + columns - 1)
        self._row += rows
        self._given.append(rect)
        return rect

    def first_cells(self) -> list[int]:
        """The first cells of all blocks given so far."""
        return [key_of(rect.top, rect.left) for rect in self._given]

    def address(self, call: Call, whole: bool, element: tuple[int, int] | None) -> str:
        """The reference to a call's answer, to its first value, or to one element of it."""
        if call.block is None:
            call.block = self._take(1, 1)
        rect = call.block
        if whole:
            first, last = key_of(rect.top, rect.left), key_of(rect.bottom, rect.right)
            return f"{self._prefix}{cell_name(first)}" + ("" if first == last else f":{cell_name(last)}")
        i, j = element or (0, 0)
        i, j = (0 if rect.rows == 1 else i), (0 if rect.columns == 1 else j)
        if i >= rect.rows or j >= rect.columns:
            return "#N/A"
        return f"{self._prefix}{cell_name(key_of(rect.top + i, rect.left + j))}"

    def fit(self, call: Call) -> bool:
        """Make the block as large as the answer; return whether it has moved, so that formulas must be written anew."""
        rows, columns = size_of(call.grid)
        rows, columns = max(1, rows), max(1, columns)
        if call.block is None or (call.block.rows, call.block.columns) == (rows, columns):
            return False
        call.block = self._take(rows, columns)
        return True

    def cells(self, call: Call) -> list[tuple[int, Cell]]:
        """The block's cells with the answer in them."""
        rect = call.block
        if rect is None:
            return []
        return [(key_of(rect.top + i, rect.left + j), plain(value)) for i, row in enumerate(call.grid) for j, value in enumerate(row)]

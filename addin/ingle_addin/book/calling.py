"""Lifted calls at work: where their arguments are read, and what they last answered."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple, Protocol

from ingle_addin.book.refs import Rect
from ingle_addin.cells import Cell, CellError, Grid

NOT_YET: Grid = ((CellError.NA,),)


class Cells(Protocol):
    """Where arguments are read from."""

    def grid(self, sheet: int, rect: Rect) -> Grid:
        """The cells of a rectangle, empty ones None."""

    def common(self, area: Area) -> Grid:
        """The cells of a range that many calls read."""

    def helper(self, key: int) -> Cell:
        """The value of a cell of the helper sheet."""


class Argument(Protocol):
    """A bound argument."""

    def read(self, cells: Cells) -> Grid:
        """Its cells as they are now."""


class Constant(NamedTuple):
    """The same in every round."""

    value: Grid

    def read(self, cells: Cells) -> Grid:  # noqa: ARG002
        """The constant."""
        return self.value


class Area(NamedTuple):
    """A range of a sheet."""

    sheet: int
    rect: Rect

    def read(self, cells: Cells) -> Grid:
        """The range's cells."""
        return cells.grid(self.sheet, self.rect)


class Common(NamedTuple):
    """A range that the calls of a whole column share, such as their headings."""

    area: Area

    def read(self, cells: Cells) -> Grid:
        """The range's cells, read once for all calls of a batch."""
        return cells.common(self.area)


class Answer(NamedTuple):
    """The whole answer of another call."""

    call: Call

    def read(self, cells: Cells) -> Grid:  # noqa: ARG002
        """The other call's grid."""
        return self.call.grid


class Computed(NamedTuple):
    """An expression worked out by the engine in helper cells, one an element, row by row.

    ``blanks`` are the cells that say whether an element is an empty cell.
    """

    keys: Sequence[int]
    columns: int
    blanks: Sequence[int]

    def read(self, cells: Cells) -> Grid:
        """The elements; None where an empty cell was handed on."""
        found = [cells.helper(key) for key in self.keys]
        for place, key in enumerate(self.blanks):
            if cells.helper(key) is True:
                found[place] = None
        return tuple(tuple(found[at : at + self.columns]) for at in range(0, len(found), self.columns))


class Choice(NamedTuple):
    """``IF`` or ``CHOOSE`` between arguments."""

    selector: Computed
    branches: Sequence[Argument]
    is_if: bool

    def read(self, cells: Cells) -> Grid:
        """The chosen argument, or the error that chose none."""
        value = self.selector.read(cells)[0][0]
        if isinstance(value, CellError):
            return ((value,),)
        if self.is_if:
            if isinstance(value, str):
                return ((CellError.VALUE,),)
            if value:
                return self.branches[0].read(cells)
            return self.branches[1].read(cells) if len(self.branches) > 1 else ((False,),)
        if not isinstance(value, (int, float)) or not 1 <= int(value) <= len(self.branches):
            return ((CellError.VALUE,),)
        return self.branches[int(value) - 1].read(cells)


class Indexed(NamedTuple):
    """``INDEX`` of a range; 0 or nothing means all rows or columns."""

    sheet: int
    rect: Rect
    row: Computed | None
    column: Computed | None

    def read(self, cells: Cells) -> Grid:
        """The indexed cells."""
        rect = self.rect
        found: list[int] = []
        for each in (self.row, self.column):
            value = 0.0 if each is None else each.read(cells)[0][0]
            if isinstance(value, CellError):
                return ((value,),)
            if value is not None and not isinstance(value, (int, float)):
                return ((CellError.VALUE,),)
            found.append(int(value or 0))
        row, column = found
        if self.column is None and rect.rows == 1 and rect.columns > 1:
            row, column = 0, row  # INDEX(A1:H1, 3) counts along the row
        if not 0 <= row <= rect.rows or not 0 <= column <= rect.columns:
            return ((CellError.REF,),)
        top, bottom = (rect.top, rect.bottom) if row == 0 else (rect.top + row - 1,) * 2
        left, right = (rect.left, rect.right) if column == 0 else (rect.left + column - 1,) * 2
        return cells.grid(self.sheet, Rect(top, left, bottom, right))


@dataclass(slots=True)
class Call:
    """One Ingle call of one cell.

    ``level`` is 0, or one more than the deepest call among its own arguments. ``moves`` is whether an argument can change
    between rounds; only then are the last arguments kept for comparison. ``block`` is where a nested call's answer stands
    on the block sheet; ``first_only`` is whether its formula uses no more than the first value.
    """

    name: str
    sheet: int
    key: int
    args: tuple[Argument, ...]
    level: int
    moves: bool
    whole_column: bool
    grid: Grid = NOT_YET
    reasons: Sequence[str | None] = ()
    last: tuple[Grid, ...] | None = None
    block: Rect | None = None
    first_only: bool = False
    solved: bool = False
    stopped: bool = False

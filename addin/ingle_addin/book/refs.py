"""Cells and ranges: letters and numbers of A1 references, and the whole numbers that stand for cells inside."""

from __future__ import annotations

import re
from functools import lru_cache
from typing import NamedTuple

MAX_ROW = 1_048_576
MAX_COLUMN = 16_384
# A cell of a sheet is one int, row * 16384 + column - 1: a dict of a million of these is half one of tuples.
_BITS = 14
_MASK = MAX_COLUMN - 1
_CELL = re.compile(r"(\$?)([A-Za-z]{1,3})(\$?)([0-9]{1,7})\Z")


class Rect(NamedTuple):
    """A rectangle of cells of one sheet, all bounds included, counted from 1."""

    top: int
    left: int
    bottom: int
    right: int

    @property
    def rows(self) -> int:
        """How many rows."""
        return self.bottom - self.top + 1

    @property
    def columns(self) -> int:
        """How many columns."""
        return self.right - self.left + 1

    def holds(self, row: int, column: int) -> bool:
        """Whether the cell lies inside."""
        return self.top <= row <= self.bottom and self.left <= column <= self.right


def key_of(row: int, column: int) -> int:
    """The number that stands for a cell."""
    return row << _BITS | (column - 1)


def place_of(key: int) -> tuple[int, int]:
    """Row and column of a cell's number."""
    return key >> _BITS, (key & _MASK) + 1


@lru_cache(maxsize=20_000)
def column_number(letters: str) -> int:
    """``A`` is 1, ``XFD`` is 16384; 0 for anything else."""
    number = 0
    for letter in letters.upper():
        if not "A" <= letter <= "Z":
            return 0
        number = number * 26 + ord(letter) - 64
    return number if 0 < number <= MAX_COLUMN else 0


@lru_cache(maxsize=20_000)
def column_letters(number: int) -> str:
    """1 is ``A``."""
    letters = ""
    while number:
        number, rest = divmod(number - 1, 26)
        letters = chr(65 + rest) + letters
    return letters


def cell_name(key: int) -> str:
    """``B7``, as a spreadsheet shows it."""
    row, column = place_of(key)
    return f"{column_letters(column)}{row}"


def parse_cell(text: str) -> tuple[int, int] | None:
    """Row and column of ``B7`` or ``$B$7``; None if it is no cell of a sheet."""
    bare = text.replace("$", "")
    letters = bare.rstrip("0123456789")
    digits = bare[len(letters) :]
    column = column_number(letters)
    if not column or not 0 < len(digits) < 8:
        return None
    row = int(digits)
    return (row, column) if 0 < row <= MAX_ROW else None


def parse_rect(text: str) -> Rect | None:
    """Bounds of ``A1``, ``A1:B2``, ``A:B`` or ``1:2``, whichever corners are named; None if it is none of these."""
    first, _, last = text.replace("$", "").partition(":")
    last = last or first
    if first.isalpha() and last.isalpha():
        left, right = column_number(first), column_number(last)
        return Rect(1, min(left, right), MAX_ROW, max(left, right)) if left and right else None
    if first.isdecimal() and last.isdecimal():
        top, bottom = sorted((int(first), int(last)))
        return Rect(top, 1, bottom, MAX_COLUMN) if top > 0 and bottom <= MAX_ROW else None
    one, two = parse_cell(first), parse_cell(last)
    if one is None or two is None:
        return None
    return Rect(min(one[0], two[0]), min(one[1], two[1]), max(one[0], two[0]), max(one[1], two[1]))


def shift(text: str, rows: int, columns: int) -> str | None:
    """A reference copied that far down and right: parts behind a ``$`` stay. None if it leaves the sheet."""
    if ":" in text:
        first, last = (_shift_edge(edge, rows, columns) for edge in text.split(":"))
        return None if first is None or last is None else f"{first}:{last}"
    match = _CELL.match(text)
    if match is None:
        return None
    column_mark, letters, row_mark, digits = match.groups()
    if not column_mark:
        column = column_number(letters) + columns
        if not 0 < column <= MAX_COLUMN:
            return None
        letters = column_letters(column)
    row = int(digits) + (0 if row_mark else rows)
    if not 0 < row <= MAX_ROW:
        return None
    return f"{column_mark}{letters}{row_mark}{row}"


def _shift_edge(edge: str, rows: int, columns: int) -> str | None:
    if edge.startswith("$"):
        return edge
    if edge.isdecimal():
        row = int(edge) + rows
        return str(row) if 0 < row <= MAX_ROW else None
    column = column_number(edge) + columns
    return column_letters(column) if 0 < column <= MAX_COLUMN else None


def quote_sheet(name: str) -> str:
    """A sheet's name as a formula needs it, always in quotes."""
    return "'" + name.replace("'", "''") + "'"

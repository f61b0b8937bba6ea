"""The arguments of a call: headings in any of their forms, and values joined left to right into one column a heading."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from ingle_addin.cells import Cell, CellError, Grid
from ingle_addin.columns import Values, from_cells, is_blank
from ingle_addin.faults import Fault, number_text
from ingle_addin.heading_reader import ANSWER_NAMES, INPUT_NAMES, clean


def heading_texts(grid: Grid, names: str = "headings") -> tuple[tuple[str, ...], bool] | Fault:
    """The texts of a heading argument, and whether they stand upright (a case is then a column).

    One row, one column, two rows of names over units, two columns of names beside units, or one text split at `;`.
    """
    rows = [list(row) for row in grid]
    if not rows or not rows[0]:
        return Fault(CellError.VALUE, f"the {names} are missing; pass the range that holds them")
    height, width = len(rows), len(rows[0])
    for row in rows:
        for cell in row:
            if isinstance(cell, CellError):
                return Fault(cell, f"the {names} hold the error {cell}; correct that cell")
    if height == width == 1:
        pieces = _text(rows[0][0]).split(";")
        return _as_texts(pieces if pieces[-1].strip() or len(pieces) == 1 else pieces[:-1]), False
    if height == 1:
        return _as_texts(rows[0]), False
    if width == 1:
        return _as_texts(row[0] for row in rows), True
    beside = width == 2 and (height != 2 or not _is_name(rows[0][1]))
    if beside:
        return tuple(_with_unit(row[0], row[1]) for row in rows), True
    if height == 2:
        return tuple(_with_unit(name, unit) for name, unit in zip(rows[0], rows[1], strict=True)), False
    return Fault(
        CellError.VALUE,
        f"the {names} are {height} rows by {width} columns; pass one row, one column, or names with their units in two",
    )


def _is_name(cell: Cell) -> bool:
    name = clean(_text(cell)).split("[")[0].strip().casefold()
    base = name.rstrip("0123456789").strip()
    return base in INPUT_NAMES or base in ANSWER_NAMES


def _as_texts(cells: Any) -> tuple[str, ...]:
    return tuple(_text(cell) for cell in cells)


def _text(cell: Cell) -> str:
    if is_blank(cell):
        return ""
    if isinstance(cell, bool):
        return str(cell).upper()
    return number_text(cell) if isinstance(cell, (int, float)) else str(cell)


def _with_unit(name: Cell, unit: Cell) -> str:
    text, unit_text = _text(name), clean(_text(unit))
    if unit_text.startswith("[") and unit_text.endswith("]"):
        unit_text = unit_text[1:-1]
    return f"{text} [{unit_text}]" if unit_text and text.strip() else text


def join(blocks: Sequence[Grid], upright: bool) -> list[list[Cell]] | Fault:
    """Rows of cells, a case a row, from value arguments joined left to right; a block of one row serves all rows."""
    parts = [list(zip(*block, strict=True)) if upright else block for block in blocks if len(block) and len(block[0])]
    if not parts:
        return Fault(CellError.VALUE, "the values are missing; pass one column a heading")
    n = max(len(part) for part in parts)
    for part in parts:
        if len(part) not in (1, n):
            return Fault(
                CellError.VALUE,
                f"one value argument has {len(part)} rows and another {n}; pass ranges of the same rows",
            )
    if n == 1:
        return [[cell for part in parts for cell in part[0]]]
    wide = [part if len(part) == n else part * n if isinstance(part, list) else list(part) * n for part in parts]
    return [[cell for row in rows for cell in row] for rows in zip(*wide, strict=True)]


def to_columns(rows: Sequence[Sequence[Cell]]) -> list[Values]:
    """Rows of cells as columns."""
    return [from_cells(column) for column in zip(*rows, strict=True)]

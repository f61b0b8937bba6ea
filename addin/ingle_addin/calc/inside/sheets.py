"""What must be read from the document itself: which formulas are array formulas, and the call behind a cell."""

from __future__ import annotations

import re
from typing import Any

WHOLE = 1_048_576  # rows of a whole column, in every spreadsheet so far
_FORMULAS = 16  # com.sun.star.sheet.CellFlags.FORMULA
_COLUMN = r"\$?[A-Z]{1,3}"
_WHOLE = re.compile(rf"(?<![A-Z0-9$_.]){_COLUMN}(?:\$?1)?:{_COLUMN}(?:\$?{WHOLE})?(?![0-9A-Z(])", re.IGNORECASE)


def whole_columns(context: Any, name: str, args: tuple[Any, ...]) -> tuple[bool, tuple[Any, ...]]:
    """Whether a call that was handed whole columns is refused, and its arguments cut to the rows that are used.

    A call is not told whether it stands in an array formula, so the open documents are asked: it is let pass only if array
    formulas alone use this function with a whole column.
    """
    arrays, lone = _users(context, name)
    used = max(_used(arg) for arg in args if type(arg) is tuple and len(arg) >= WHOLE)
    cut = tuple(arg[: max(used, 1)] if type(arg) is tuple and len(arg) >= WHOLE else arg for arg in args)
    return bool(lone or not arrays), cut


def _used(rows: tuple[tuple[Any, ...], ...]) -> int:
    count = len(rows)
    while count and not any(cell != "" and cell is not None for cell in rows[count - 1]):
        count -= 1
    return count


def _users(context: Any, name: str) -> tuple[int, int]:
    """How many array formulas and how many others use a function with a whole column, in all open documents."""
    arrays = lone = 0
    desktop = context.ServiceManager.createInstanceWithContext("com.sun.star.frame.Desktop", context)
    documents = desktop.Components.createEnumeration()
    while documents.hasMoreElements():
        document = documents.nextElement()
        if not hasattr(document, "Sheets"):
            continue
        for sheet in document.Sheets:
            ranges = sheet.queryContentCells(_FORMULAS)
            for place in ranges.RangeAddresses:
                block = sheet.getCellRangeByPosition(place.StartColumn, place.StartRow, place.EndColumn, place.EndRow)
                for row in block.getFormulaArray():
                    for text in row:
                        if name in text.upper() and _WHOLE.search(text):
                            arrays, lone = arrays + (text[0] == "{"), lone + (text[0] != "{")
    return arrays, lone

"""The Ingle call behind a cell: its formula taken apart, its arguments read from the sheet."""

from __future__ import annotations

import re
from typing import Any, NamedTuple

_CALL = re.compile(r"\bINGLE\.(PEAK|FACE|ALLOW|ASK|WHY|PROFILE|SEEK)\s*\(", re.IGNORECASE)
_NUMBER = re.compile(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?")
_ON_SHEET = re.compile(r"\$?('(?:[^']|'')+'|[^.'$()]+)\.([$A-Za-z0-9:]+)")
_MOST_ROWS = 20_000
_FORMULAS = 16  # com.sun.star.sheet.CellFlags.FORMULA


class NoCallError(Exception):
    """There is no call to explain; the text says what to do."""


class Call(NamedTuple):
    """A call: the cell it stands in, its function, its arguments as Calc would hand them over, and the row it is about."""

    cell: str
    name: str
    args: tuple[Any, ...]
    row: int


def call_behind(document: Any, sheet: Any, column: int, row: int) -> Call:
    """The first Ingle call in the cell's formula; failing that, in its row's other cells, from the left."""
    places = [(column, row)]
    cursor = sheet.createCursor()
    cursor.gotoEndOfUsedArea(False)
    last = cursor.RangeAddress.EndColumn
    line = sheet.getCellRangeByPosition(0, row, last, row)
    for place in line.queryContentCells(_FORMULAS).RangeAddresses:
        places += [(each, row) for each in range(place.StartColumn, place.EndColumn + 1)]
    for x, y in places:
        cell = sheet.getCellByPosition(x, y)
        formula = str(cell.Formula)  # an array formula stands in braces
        texts = arguments_of(formula)
        if texts is None:
            continue
        name, parts = texts
        within = 0
        if formula[0] == "{":
            block = sheet.createCursorByRange(cell)
            block.collapseToCurrentArray()
            within = y - block.RangeAddress.StartRow
        at = cell.AbsoluteName.split(".")[-1].replace("$", "")
        return Call(at, name, tuple(_read(document, sheet, text) for text in parts), within)
    raise NoCallError("There is no Ingle formula in this cell or its row; choose a row that has one.")


def arguments_of(formula: str) -> tuple[str, list[str]] | None:
    """Function and argument texts of the first row call in a formula; None where there is none."""
    start = 0
    while True:
        match = _CALL.search(formula, start)
        if match is None:
            return None
        if formula[: match.start()].count('"') % 2 == 0:  # not inside a text
            break
        start = match.end()
    parts, depth, quote, begin = [], 0, "", match.end()
    for at in range(match.end(), len(formula)):
        sign = formula[at]
        if quote:
            quote = "" if sign == quote else quote
        elif sign in "\"'":
            quote = sign
        elif sign in "({":
            depth += 1
        elif sign in ")}" and depth:
            depth -= 1
        elif sign == ")" or (sign == ";" and not depth):
            parts.append(formula[begin:at].strip())
            begin = at + 1
            if sign == ")":
                break
    return f"INGLE.{match[1].upper()}", parts


def _read(document: Any, sheet: Any, text: str) -> Any:
    if not text:
        return None
    if text[0] == text[-1] == '"' and len(text) > 1 and '"' not in text[1:-1].replace('""', ""):
        return text[1:-1].replace('""', '"')
    if _NUMBER.fullmatch(text):
        return float(text)
    owner, place = sheet, text
    match = _ON_SHEET.fullmatch(text)
    try:
        if match is not None:
            name = match[1] if match[1][0] != "'" else match[1][1:-1].replace("''", "'")
            owner, place = document.Sheets.getByName(name), match[2]
        block = owner.getCellRangeByName(place)
        address = block.RangeAddress
    except Exception:  # the office's own exceptions know no common ancestor
        raise NoCallError(
            f"'{text[:60]}' is computed inside the formula and cannot be read by itself; put it into cells, or ask INGLE.WHY there."
        ) from None
    owner = document.Sheets.getByIndex(address.Sheet)
    cursor = owner.createCursor()
    cursor.gotoEndOfUsedArea(False)
    used = cursor.RangeAddress
    bottom = max(address.StartRow, min(address.EndRow, used.EndRow, address.StartRow + _MOST_ROWS))
    right = address.EndColumn if address.EndColumn - address.StartColumn < 1000 else max(address.StartColumn, used.EndColumn)
    block = owner.getCellRangeByPosition(address.StartColumn, address.StartRow, right, bottom)
    rows = [list(row) for row in block.getDataArray()]
    for i, row in enumerate(rows):
        for j, value in enumerate(row):
            if value is None or value == "":
                cell = block.getCellByPosition(j, i)
                row[j] = cell.String if cell.getError() else ""
    return tuple(map(tuple, rows))

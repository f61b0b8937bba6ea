"""One streaming pass over a worksheet: every value, every formula, and where in the bytes a cell to be written stands."""

from __future__ import annotations

import datetime
from collections.abc import Iterable
from pathlib import Path

from ingle_addin.book.dates import serial_of
from ingle_addin.book.errors import BookError
from ingle_addin.book.markup import MAIN_NAMESPACES, SEPARATOR, feed, parser, unescape
from ingle_addin.book.parts import MAX_CELL_CHARACTERS, MAX_RAW, Parts
from ingle_addin.book.refs import Rect, column_number, key_of, parse_cell, parse_rect
from ingle_addin.cells import Cell, CellError

MAX_CELLS = 5_000_000
# Larger arrays are not computed; the cells of all others count as cells, whether the file holds them or not.
MAX_ARRAY = 1_000_000

_ERRORS = {error.value: error for error in CellError}
_DIGITS = "0123456789"


class FormulaCell:
    """A cell whose value is computed.

    ``kind`` is ``normal``, ``shared``, ``array`` or ``data table``; ``text`` is without ``=`` and empty for a follower of
    the shared formula ``shared``; ``rect`` is the stored range of an array or a data table. ``start`` and ``end`` are the
    byte offsets of ``<c`` and of ``</c``; ``stored`` is the value in the file.
    """

    __slots__ = ("dynamic", "end", "key", "kind", "rect", "shared", "start", "stored", "text")

    def __init__(
        self,
        key: int,
        text: str,
        kind: str,
        shared: str | None,
        rect: Rect | None,
        dynamic: bool,
        stored: Cell,
        start: int,
        end: int,
    ) -> None:
        self.key, self.text, self.kind, self.shared, self.rect = key, text, kind, shared, rect
        self.dynamic, self.stored, self.start, self.end = dynamic, stored, start, end


class Sheet:
    """The cells of one worksheet, by :func:`ingle_addin.book.refs.key_of`.

    ``values`` are the constants and, for formula cells and the children of arrays, nothing; ``children`` are the other
    cells of array ranges with their stored value and byte offsets; ``dated`` are cells that show their number as a date;
    ``bottom`` and ``right`` bound the cells in use; ``count`` is of all cells, empty ones too.
    """

    __slots__ = ("bottom", "children", "count", "dated", "formulas", "has_hidden_rows", "right", "values")

    def __init__(self) -> None:
        self.values: dict[int, Cell] = {}
        self.formulas: list[FormulaCell] = []
        self.children: dict[int, tuple[Cell, int, int]] = {}
        self.dated: set[int] = set()
        self.bottom = 0
        self.right = 0
        self.count = 0
        self.has_hidden_rows = False


# States of the reader, from outside in.
_OUTSIDE, _DATA, _ROW, _CELL, _VALUE, _FORMULA, _INLINE, _TEXT = range(8)


def small_number(text: str) -> int | None:
    """The whole number of at most nine digits that a text is."""
    return int(text) if text.isascii() and text.isdigit() and len(text) < 10 else None


def row_number(text: str) -> int:
    """The number of a row, 0 where there is none."""
    return small_number(text) or 0


def array_cells(rect: Rect) -> int:
    """How many cells a range adds to those the file holds."""
    size = rect.rows * rect.columns
    return size if 1 < size <= MAX_ARRAY else 0


def too_many(path: Path) -> BookError:
    """The refusal of a workbook that is too large."""
    return BookError(f"{path} has more than {MAX_CELLS:,} cells; split the workbook")


def scan_sheet(chunks: Iterable[bytes], parts: Parts, path: Path, part: str, most: int = MAX_CELLS) -> Sheet:
    """Read a worksheet of at most ``most`` cells from its bytes. Raises :class:`BookError` for what is damaged or beyond limits."""
    sheet = Sheet()
    values, formulas, children, dated = sheet.values, sheet.formulas, sheet.children, sheet.dated
    texts, date_styles = parts.texts, frozenset(str(index) for index in parts.date_styles)
    made = parser(path, part)
    kinds: dict[str, str] = {
        f"{space}{SEPARATOR}{name}": name for space in MAIN_NAMESPACES for name in ("sheetData", "row", "c", "v", "f", "is", "t", "r")
    }
    columns: dict[str, int] = {}
    state, skip = _OUTSIDE, 0
    row, row_text, column = 0, "0", 0
    key = start_byte = count = 0
    kind_of_value = ""
    dated_cell = dynamic = has_formula = has_value = False
    formula_attributes: dict[str, str] = {}
    value_pieces: list[str] = []
    formula_pieces: list[str] = []
    open_arrays: list[Rect] = []
    shared_with_text: set[str] = set()

    def damaged() -> BookError:
        return BookError(f"{path} is damaged in its part {part}; open it in the spreadsheet program and save it anew")

    def start(element: str, attributes: dict[str, str]) -> None:
        nonlocal state, skip, row, row_text, column, key, start_byte, count, kind_of_value
        nonlocal dated_cell, dynamic, has_formula, has_value, formula_attributes, open_arrays
        if skip:
            skip += 1
            return
        kind = kinds.get(element)
        if state == _ROW and kind == "c":
            state = _CELL
            start_byte = made.CurrentByteIndex
            get = attributes.get
            name = get("r")
            if name is None:
                column += 1
            else:
                letters = name.rstrip(_DIGITS)
                number = columns.get(letters)
                if number is None:
                    number = columns[letters] = column_number(letters)
                column = number
                if name[len(letters) :] != row_text:
                    place = parse_cell(name)
                    if place is None:
                        raise damaged()
                    row, column = place
                    row_text = str(row)
            if not 0 < column <= 16_384 or not 0 < row <= 1_048_576:
                raise damaged()
            key = key_of(row, column)
            kind_of_value = get("t", "n")
            dated_cell = get("s") in date_styles
            dynamic = "cm" in attributes
            has_formula = has_value = False
            count += 1
            if count > most:
                raise too_many(path)
        elif state == _CELL:
            if kind == "v":
                state, has_value = _VALUE, True
                value_pieces.clear()
            elif kind == "f":
                state, has_formula = _FORMULA, True
                formula_attributes = attributes
                formula_pieces.clear()
            elif kind == "is":
                state, has_value = _INLINE, True
                value_pieces.clear()
            else:
                skip = 1
        elif state == _INLINE:
            if kind == "t":
                state = _TEXT
            elif kind != "r":  # runs of rich text are joined; phonetic hints are not part of the text
                skip = 1
        elif state == _DATA and kind == "row":
            state = _ROW
            number_text = attributes.get("r")
            row = row + 1 if number_text is None else row_number(number_text)
            row_text = str(row)
            column = 0
            if attributes.get("hidden") in ("1", "true"):
                sheet.has_hidden_rows = True
            if open_arrays:
                open_arrays = [rect for rect in open_arrays if rect.bottom >= row]
        elif state == _OUTSIDE:
            if kind == "sheetData":
                state = _DATA
        elif state in (_DATA, _ROW, _VALUE, _FORMULA, _TEXT):
            skip = 1

    def end(element: str) -> None:
        nonlocal state, skip
        if skip:
            skip -= 1
            return
        if state == _CELL:
            state = _ROW
            finish()
        elif state in (_VALUE, _FORMULA):
            state = _CELL
        elif state == _TEXT:
            state = _INLINE
        elif state == _INLINE:
            if kinds.get(element) == "is":
                state = _CELL
        elif state == _ROW:
            state = _DATA
        elif state == _DATA:
            state = _OUTSIDE

    def data(text: str) -> None:
        if skip:
            return
        if state in (_VALUE, _TEXT):
            value_pieces.append(text)
        elif state == _FORMULA:
            formula_pieces.append(text)

    def stored_value() -> Cell:
        nonlocal dated_cell
        raw = value_pieces[0] if len(value_pieces) == 1 else "".join(value_pieces)
        if kind_of_value == "n":
            raw = raw.strip()
            if not raw:
                return None
            try:
                number = float(raw)
            except ValueError:
                raise damaged() from None
            if number - number != 0.0:  # "nan" and "inf" are numbers to Python only
                raise damaged()
            return number
        if kind_of_value == "s":
            if not raw.strip():
                return None
            index = small_number(raw.strip())
            if index is None or index >= len(texts):
                raise damaged()
            return texts[index]
        if len(raw) > MAX_RAW:
            raise BookError(f"{path}: a cell holds more than {MAX_CELL_CHARACTERS:,} characters; shorten it")
        if kind_of_value == "b":
            return raw.strip() in ("1", "true")
        if kind_of_value == "e":
            return _ERRORS.get(raw.strip(), CellError.VALUE)
        if kind_of_value == "d":
            try:
                moment = datetime.datetime.fromisoformat(raw.strip()).replace(tzinfo=None)
            except ValueError:
                raise damaged() from None
            dated_cell = True
            return serial_of(moment, parts.date1904)
        return unescape(raw)

    def finish() -> None:
        child = False
        if open_arrays and not has_formula:
            child = any(rect.holds(row, column) for rect in open_arrays)
        value = stored_value() if has_value else None
        if dated_cell and (value is None or type(value) is float):
            dated.add(key)
        if child:
            children[key] = (value, start_byte, made.CurrentByteIndex)
        elif has_formula:
            finish_formula(value)
        elif value is not None:
            values[key] = value
        else:
            return
        if column > sheet.right:
            sheet.right = column
        if row > sheet.bottom:
            sheet.bottom = row

    def spread(rect: Rect) -> None:
        nonlocal count
        count += array_cells(rect)
        if count > most:
            raise too_many(path)

    def finish_formula(value: Cell) -> None:
        kind, shared, rect = "normal", None, None
        attributes = formula_attributes
        if attributes:
            match attributes.get("t", "normal"):
                case "shared":
                    kind, shared = "shared", attributes.get("si", "")
                case "array" | "dataTable" as written:
                    kind = "array" if written == "array" else "data table"
                    rect = parse_rect(attributes.get("ref", "")) or Rect(row, column, row, column)
                    if rect.rows > 1 or rect.columns > 1:
                        open_arrays.append(rect)
                    spread(rect)
        text = formula_pieces[0] if len(formula_pieces) == 1 else "".join(formula_pieces)
        if shared is not None and text:
            shared_with_text.add(shared)
        formulas.append(FormulaCell(key, text, kind, shared, rect, dynamic, value, start_byte, made.CurrentByteIndex))

    made.StartElementHandler, made.EndElementHandler, made.CharacterDataHandler = start, end, data
    feed(made, chunks, path, part)
    sheet.count = count
    return sheet

"""Small workbooks for the tests: written by XlsxWriter, filled as the command fills them, read back by openpyxl."""

from __future__ import annotations

import datetime
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

import openpyxl
import xlsxwriter
from ingle_addin.batch import solve_calls
from ingle_addin.book import Report, fill
from ingle_addin.cells import CellError
from ingle_addin.functions import NAMES
from openpyxl.cell.cell import Cell as ReadCell
from xlsxwriter.utility import xl_cell_to_rowcol, xl_rowcol_to_cell


@dataclass(frozen=True)
class Typed:
    """A cell that is more than its value: a formula with the value a spreadsheet program stored, or a number format."""

    value: object
    formula: str = ""
    number_format: str = ""


# Formulas that give each error; the engine has no #NULL! of its own, and a function nobody knows keeps its stored #NAME?.
ERRORS = {
    CellError.DIV0: Typed("#DIV/0!", "=1/0"),
    CellError.NA: Typed("#N/A", "=NA()"),
    CellError.REF: Typed("#REF!", "=#REF!"),
    CellError.NAME: Typed("#NAME?", "=NOBODYKNOWS(1)"),
    CellError.NUM: Typed("#NUM!", "=SQRT(-1)"),
    CellError.VALUE: Typed("#VALUE!", '="a"+1'),
    CellError.NULL: Typed("#NULL!", "=A1:A2 C1:C2"),
}
EMPTY_TEXT = Typed("", '=""')
DATE = Typed(datetime.datetime(2024, 5, 17), number_format="yyyy-mm-dd")
TIME = Typed(0.25, number_format="hh:mm")


@dataclass(frozen=True)
class Filled:
    """A filled workbook: ``values`` of its one sheet by cell name (errors as CellError), and what the command reports."""

    values: Mapping[str, object]
    report: Report
    book: Path
    out: Path

    def row(self, row: int, first: str, last: str) -> list[object]:
        """The values of one row between two columns."""
        start, stop = xl_cell_to_rowcol(f"{first}1")[1], xl_cell_to_rowcol(f"{last}1")[1]
        return [self.values.get(xl_rowcol_to_cell(row - 1, column)) for column in range(start, stop + 1)]


def put(cells: dict[str, object], at: str, rows: Sequence[Sequence[object]]) -> None:
    """Lay rows of values into the cells from ``at`` on."""
    top, left = xl_cell_to_rowcol(at)
    for i, row in enumerate(rows):
        for j, value in enumerate(row):
            cells[xl_rowcol_to_cell(top + i, left + j)] = value


def filled(folder: Path, cells: Mapping[str, object], arrays: Mapping[str, str] | None = None) -> Filled:
    """Write, fill and read a workbook. A text that begins with = is a formula; ``arrays`` are array formulas by range."""
    path, out = folder / "book.xlsx", folder / "book.filled.xlsx"
    write_book(path, cells, arrays)
    report = fill(path, out, functions=NAMES, solve=solve_calls)
    return Filled(read_values(out), report, path, out)


def write_book(path: Path, cells: Mapping[str, object], arrays: Mapping[str, str] | None = None) -> Path:
    """A workbook of one sheet, ``Data``."""
    book = xlsxwriter.Workbook(str(path))
    page = book.add_worksheet("Data")
    for name, value in cells.items():
        typed = value if isinstance(value, Typed) else Typed(value)
        style = book.add_format({"num_format": typed.number_format}) if typed.number_format else None
        if typed.formula:
            page.write_formula(name, typed.formula, style, typed.value)
        elif isinstance(typed.value, datetime.datetime):
            page.write_datetime(name, typed.value, style)
        elif isinstance(typed.value, str) and typed.value.startswith("="):
            page.write_formula(name, typed.value, style)
        elif isinstance(typed.value, str):
            page.write_string(name, typed.value, style)
        elif typed.value is not None:
            page.write(name, typed.value, style)
    for where, formula in (arrays or {}).items():
        page.write_array_formula(where, formula)
    book.close()
    return path


def read_values(path: Path) -> dict[str, object]:
    """Every value of the sheet by cell name; cells that hold nothing are left out."""
    page = openpyxl.load_workbook(path, data_only=True)["Data"]
    cells = [cell for row in page.iter_rows() for cell in row if cell.value is not None or cell.data_type == "str"]
    return {cell.coordinate: _value(cell) for cell in cells}


def read_typed(path: Path) -> dict[str, tuple[str, str, str]]:
    """What a person typed into each cell: formulas or constants, with their sort and number format."""
    page = openpyxl.load_workbook(path)["Data"]
    cells = [cell for row in page.iter_rows() for cell in row if cell.value is not None]
    return {cell.coordinate: (cell.data_type, _typed_text(cell), cell.number_format) for cell in cells}


def _value(cell: ReadCell) -> object:
    if cell.data_type == "e":
        return CellError(cell.value)
    if type(cell.value) is int:
        return float(cell.value)  # a file does not tell 24 from 24.0
    return "" if cell.value is None else cell.value  # a formula's empty text


def _typed_text(cell: ReadCell) -> str:
    return str(getattr(cell.value, "text", cell.value))  # an array formula is an object with its text

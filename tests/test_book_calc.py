"""Ordinary formulas agree with headless Calc: in the shipped workbooks, and random ones."""

from __future__ import annotations

import datetime
import math
import random
from pathlib import Path
from typing import Any

import pytest
import xlsxwriter
from calc_alone import OFFICE, recalculated, values_of
from drawn_formulas import Drawer, cells
from ingle_addin.batch import solve_calls
from ingle_addin.book import fill, open_book
from ingle_addin.book.refs import cell_name
from ingle_addin.cells import CellError
from ingle_addin.functions import NAMES

pytestmark = pytest.mark.skipif(OFFICE is None, reason="LibreOffice Calc is not installed")

SHIPPED = sorted((Path(__file__).parents[1] / "workbooks").glob("*.xlsx"))


def differ(ours: object, theirs: object) -> bool:
    """Whether two values are not the same; any error equals any other, since some have no name in both programs."""
    ours, theirs = "" if ours is None else ours, "" if theirs is None else theirs
    if isinstance(ours, CellError) or isinstance(theirs, CellError):
        return not (isinstance(ours, CellError) and isinstance(theirs, CellError))
    if isinstance(ours, bool) != isinstance(theirs, bool):
        return True
    if isinstance(ours, (int, float)) and isinstance(theirs, (int, float)):
        return not math.isclose(ours, theirs, rel_tol=1e-9, abs_tol=1e-12)
    if isinstance(ours, datetime.datetime) != isinstance(theirs, datetime.datetime):
        return True
    return ours != theirs


@pytest.mark.long
@pytest.mark.parametrize("seed", range(4))
def test_random_formulas(tmp_path: Path, seed: int) -> None:
    """Four workbooks of 500 formulas each."""
    draw = random.Random(seed)
    block, drawer = cells(draw), Drawer(draw)
    formulas: dict[str, str] = {}
    path = tmp_path / "book.xlsx"
    book = xlsxwriter.Workbook(str(path))
    page = book.add_worksheet("Data")
    for name, value in block.items():
        page.write(name, value)
    for number in range(500):
        row = number % 12 + 1
        name = cell_name(row << 14 | 10 + number // 12)
        formulas[name] = drawer.formula(row)
        page.write_formula(name, "=" + formulas[name], None, 0)
    book.close()
    report = fill(path, tmp_path / "out.xlsx", functions=NAMES, solve=solve_calls)
    kept = {each.cell for each in report.not_computed}
    ours, theirs = values_of(tmp_path / "out.xlsx")["Data"], recalculated(path, tmp_path)["Data"]
    wrong = {
        f"{name}: ={formula}": (ours.get(name), theirs.get(name))
        for name, formula in formulas.items()
        if name not in kept and differ(ours.get(name), theirs.get(name))
    }
    assert wrong == {}
    # Enough of them give a value, and few are left to the spreadsheet program.
    assert len(kept) < 25
    assert sum(isinstance(ours.get(name), CellError) for name in formulas) < 200


@pytest.mark.long
@pytest.mark.parametrize("shipped", SHIPPED, ids=lambda path: path.stem)
def test_the_shipped_workbooks(shipped: Path, tmp_path: Path) -> None:
    """Ingle's cells as constants, all other formulas computed by both."""
    book, out = tmp_path / shipped.name, tmp_path / "out.xlsx"
    report = fill(shipped, out, functions=NAMES, solve=solve_calls)
    kept = {(each.sheet, each.cell) for each in report.not_computed}
    ordinary = write_without_ingle(out, book)
    ours, theirs = values_of(out), recalculated(book, tmp_path)
    wrong = {
        f"{sheet}!{cell}": (ours[sheet].get(cell), theirs[sheet].get(cell))
        for sheet, cell in sorted(ordinary - kept)
        if differ(ours[sheet].get(cell), theirs[sheet].get(cell))
    }
    assert wrong == {}
    assert len(ordinary - kept) > 20


def write_without_ingle(filled: Path, out: Path) -> set[tuple[str, str]]:
    """Copy a filled workbook with values in the place of formulas that call Ingle; the cells of the other formulas."""
    import openpyxl

    formulas, values = openpyxl.load_workbook(filled), openpyxl.load_workbook(filled, data_only=True)
    ordinary: set[tuple[str, str]] = set()
    for page in formulas.worksheets:
        arrays = set(page.array_formulae)
        for row in page.iter_rows():
            for cell in row:
                text: Any = getattr(cell.value, "text", cell.value)
                if isinstance(text, str) and text.startswith("=") and cell.data_type in ("f", "a"):
                    if "INGLE" in text.upper() or cell.coordinate in arrays:
                        cell.value = values[page.title][cell.coordinate].value
                    else:
                        ordinary.add((page.title, cell.coordinate))
    formulas.save(out)
    assert open_book(out).sheets
    return ordinary

"""Workbooks in a real Calc with Ingle: the shipped ones, random mixed tables, files of another hand, saved and opened again."""

from __future__ import annotations

import math
import os
import shutil
import signal
import threading
import time
from pathlib import Path
from typing import Any

import openpyxl
import pytest
import reference
import xlsxwriter
from calc_office import CellErrorText, Office
from ingle_addin.batch import solve_calls
from ingle_addin.book import fill
from ingle_addin.functions import NAMES
from openpyxl.worksheet.formula import ArrayFormula
from reference import draw
from reference.rounding import tolerances
from xlsxwriter.utility import xl_col_to_name

BOOKS = sorted((Path(__file__).parents[1] / "workbooks").glob("*.xlsx"))
BOOKS = [book for book in BOOKS if not book.name.endswith(".filled.xlsx")]
HEADINGS = ["shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/cm³]", "both film [W/(m²·K)]", "both fluid [°C]",
            "limit [°C]"]  # fmt: skip
CLOSE = 1e-12
ERRORS = {"#N/A": "NA()", "#DIV/0!": "1/0", "#VALUE!": '"a"+1', "#NUM!": "SQRT(-1)", "#REF!": "#REF!", "#NAME?": "NOBODYKNOWS(1)"}


def ingle_cells(path: Path) -> dict[str, list[str]]:
    """The cells of each sheet whose formula asks Ingle, those of array formulas too."""
    found: dict[str, list[str]] = {}
    for sheet in openpyxl.load_workbook(path):
        names = []
        for row in sheet.iter_rows():
            for cell in row:
                text = str(getattr(cell.value, "text", cell.value))
                if text.startswith("=") and "INGLE." in text.upper():
                    area = sheet[cell.value.ref] if isinstance(cell.value, ArrayFormula) else ((cell,),)
                    names += [each.coordinate for line in area for each in line]
        found[sheet.title] = names
    return found


def read(calc: Office, number: int, sheet: str) -> dict[str, Any]:
    """All cells of a sheet in Calc."""
    rows, columns = calc.used(number, sheet)
    values = calc.values(number, sheet, f"A1:{xl_col_to_name(columns - 1)}{rows}")
    return {f"{xl_col_to_name(j)}{i}": value for i, row in enumerate(values, 1) for j, value in enumerate(row)}


def is_error(value: object) -> bool:
    return isinstance(value, CellErrorText) or (isinstance(value, str) and value.startswith("#"))


def equal(a: object, b: object) -> bool:
    """Two cells, one of them None or empty where the other is empty text; any error equals any other."""
    if is_error(a) or is_error(b):
        return is_error(a) and is_error(b)
    if isinstance(a, (int, float)) and isinstance(b, (int, float)):
        return abs(a - b) <= CLOSE * max(1.0, abs(a), abs(b))
    return (a or "") == (b or "")


@pytest.mark.parametrize("book", BOOKS, ids=lambda book: book.stem)
def test_a_shipped_workbook_agrees_with_fill_and_survives_saving(calc: Office, book: Path, tmp_path: Path) -> None:
    copy = Path(shutil.copy(book, tmp_path / book.name))
    fill(book, tmp_path / "filled.xlsx", functions=NAMES, solve=solve_calls)
    filled = openpyxl.load_workbook(tmp_path / "filled.xlsx", data_only=True)
    cells = ingle_cells(book)
    assert sum(map(len, cells.values())) > 300
    number = calc.open(str(copy))
    calc.calculate(number)
    shown = {sheet: read(calc, number, sheet) for sheet in cells}
    formulas = {sheet: [calc.formulas(number, sheet, name)[0][0] for name in names[:40]] for sheet, names in cells.items()}
    wrong = [
        (sheet, name, shown[sheet].get(name), filled[sheet][name].value)
        for sheet, names in cells.items()
        for name in names
        if not equal(shown[sheet].get(name), filled[sheet][name].value)
    ]
    assert not wrong, wrong[:5]
    for kind in ("xlsx", "ods"):
        calc.save(number, str(tmp_path / f"saved.{kind}"))
    calc.close(number)
    for kind in ("xlsx", "ods"):
        again = calc.open(str(tmp_path / f"saved.{kind}"))
        for sheet, names in cells.items():
            assert [calc.formulas(again, sheet, name)[0][0] for name in names[:40]] == formulas[sheet], kind
            values = read(calc, again, sheet)
            assert [name for name in names if not equal(values.get(name), shown[sheet][name])] == [], kind
        calc.calculate(again)
        for sheet, names in cells.items():
            values = read(calc, again, sheet)
            assert [name for name in names if not equal(values.get(name), shown[sheet][name])] == [], kind
        calc.close(again)
    stored = openpyxl.load_workbook(tmp_path / "saved.xlsx", data_only=True)
    for sheet, names in cells.items():  # another program finds names and values as they were
        assert [name for name in names if not equal(stored[sheet][name].value, shown[sheet][name])] == []
        assert ingle_cells(tmp_path / "saved.xlsx")[sheet] == names


def own(heading: str | None) -> bool:
    """Whether a column is the user's own."""
    return not (heading or "").strip() or (heading or "").strip().casefold().startswith(("#", "note"))


def write_tables(path: Path, tables: list[tuple[list[str], list[list[object]]]]) -> None:
    """Each table on a sheet; beside each row PEAK, WHY, and all answers by an array formula of that row."""
    book = xlsxwriter.Workbook(str(path), {"strings_to_formulas": False, "strings_to_numbers": False, "strings_to_urls": False})
    for number, (heads, rows) in enumerate(tables):
        sheet = book.add_worksheet(f"T{number}")
        last, first = xl_col_to_name(len(heads) - 1), len(heads) + 1
        left, right = xl_col_to_name(first + 2), xl_col_to_name(first + 1 + len(draw.ANSWERS))
        for j, head in enumerate(heads):
            sheet.write_string(0, j, head or "")
        for j, answer in enumerate(draw.ANSWERS):
            sheet.write_string(0, first + 2 + j, answer)
        for i, row in enumerate(rows, 2):
            for j, cell in enumerate(row):
                if isinstance(cell, str) and cell in ERRORS:
                    sheet.write_formula(i - 1, j, f"={ERRORS[cell]}", None, cell)
                elif isinstance(cell, str):
                    sheet.write_string(i - 1, j, cell)
                elif cell is not None:
                    sheet.write(i - 1, j, cell)
            case = f"$A$1:${last}$1,A{i}:{last}{i}"
            sheet.write_formula(i - 1, first, f"=INGLE.PEAK({case})", None, -1)
            sheet.write_formula(i - 1, first + 1, f"=INGLE.WHY({case})", None, "not computed")
            sheet.write_array_formula(
                i - 1, first + 2, i - 1, first + 1 + len(draw.ANSWERS), f"{{=INGLE.ASK(${left}$1:${right}$1,{case})}}"
            )
    book.close()


@pytest.mark.parametrize("rows", [60, pytest.param(1000, marks=pytest.mark.long)])
def test_random_mixed_rows_agree_with_the_independent_reference(calc: Office, tmp_path: Path, rows: int) -> None:
    tables = draw.tables(20, rows)
    write_tables(tmp_path / "tables.xlsx", tables)
    number = calc.open(str(tmp_path / "tables.xlsx"))
    calc.calculate(number)
    compared = skipped = refused = 0
    wrong: list[str] = []
    for place, (heads, drawn) in enumerate(tables):
        wanted, bounds = (work(draw.ANSWERS, heads, drawn) for work in (reference.answers, tolerances))
        left, right = (xl_col_to_name(c) for c in (len(heads) + 1, len(heads) + 2 + len(draw.ANSWERS)))
        shown = calc.values(number, f"T{place}", f"{left}2:{right}{len(drawn) + 1}")
        for i, row in enumerate(drawn):
            peak, why, *answers = shown[i]
            if any(isinstance(cell, str) and cell in ERRORS for cell in row):
                # Calc refuses a range with an error in it, wherever it is: in a column of the user's own too.
                refused += 1
                if not all(map(is_error, shown[i])):
                    wrong.append(f"T{place} row {i + 2}: {shown[i][:3]} beside an error")
                continue
            if any(isinstance(cell, bool) and not own(head) for head, cell in zip(heads, row, strict=True)):
                skipped += 1  # Calc hands over a truth as the number 1
                continue
            verdict = draw.ANSWERS.index("verdict")
            for j, (got, want) in enumerate(zip(answers, wanted[i], strict=True)):
                compared += 1
                if math.isinf(bounds[i][j]):
                    continue
                if j == verdict:
                    right = got == want or (got, want) in (("caution", "ok"), ("caution", "no limit"))
                    right = right or (got == "no answer" and is_error(want))
                elif isinstance(want, (int, float)):
                    right = isinstance(got, float) and abs(got - want) <= bounds[i][j]
                else:
                    right = (is_error(got) and is_error(want)) or got == want
                if not right:
                    wrong.append(f"T{place} row {i + 2} {draw.ANSWERS[j]}: {got!r}, the reference has {want!r} ({why}) for {row}")
            if peak != answers[0] or (is_error(peak) and why in ("", "ok")):
                wrong.append(f"T{place} row {i + 2}: PEAK {peak!r}, ASK {answers[0]!r}, WHY {why!r}")
    calc.close(number)
    print(f"{compared} answers compared, {skipped} rows with a truth skipped, {refused} rows with an error cell")
    assert not wrong, "\n".join(wrong[:5])
    assert compared > 0.6 * rows * len(draw.ANSWERS)


def test_a_workbook_without_stored_values_is_computed_on_opening(calc: Office, tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.title = "Data"
    sheet.append(HEADINGS)
    for number in range(5):
        sheet.append(["wall", 6.0 + number, 390.0, 0.12, 12.0, 35.0, 105.0])
        sheet[f"I{number + 2}"] = f"=INGLE.PEAK($A$1:$G$1,A{number + 2}:G{number + 2})"
        sheet[f"J{number + 2}"] = f"=ingle.why($A$1:$G$1,A{number + 2}:G{number + 2})"
    sheet["K2"] = ArrayFormula("K2:L6", '=INGLE.ASK("peak [°C]; verdict",$A$1:$G$1,A2:G6)')
    book.save(tmp_path / "data.xlsx")
    number = calc.open(str(tmp_path / "data.xlsx"))
    rows = calc.values(number, "Data", "I2:L6")
    calc.close(number)
    assert [row[1] for row in rows] == ["ok"] * 5
    assert [row[3] for row in rows] == ["ok"] * 5
    # Half of qL through each film of 12 W/(m²·K), and qL²/8k.
    peaks = [35.0 + 1.2e5 * (L / 2.0 / 12.0 + L * L / (8.0 * 390.0)) for L in (0.006, 0.007, 0.008, 0.009, 0.010)]
    assert [row[0] for row in rows] == pytest.approx(peaks, rel=1e-12)
    assert [row[2] for row in rows] == [row[0] for row in rows]


def column_book(calc: Office, rows: int) -> int:
    """A new document with so many rows, their fluid's temperature in N1, and PEAK in H."""
    number = calc.open("new")
    calc.fill(number, "Sheet1", "A1:G1", [HEADINGS])
    calc.set(number, "Sheet1", "N1", 35.0)
    table = [["wall", 10.0 + i / 100.0, 390.0, 0.12, 12.0, "=$N$1", 105.0] for i in range(rows)]
    calc.fill(number, "Sheet1", f"A2:G{rows + 1}", table)
    calc.fill(number, "Sheet1", f"H2:H{rows + 1}", [[f"=INGLE.PEAK($A$1:$G$1;A{i}:G{i})"] for i in range(2, rows + 2)])
    return number


def peaks(rows: int, fluid: float) -> list[float]:
    """The same by hand: half of qL through each film, and qL²/8k."""
    lengths = [(10.0 + i / 100.0) * 1e-3 for i in range(rows)]
    return [fluid + 1.2e5 * (L / 2.0 / 12.0 + L * L / (8.0 * 390.0)) for L in lengths]


def worker_of(calc: Office, number: int) -> int:
    said = calc.dispatch(number, "Sheet1", "A1", "ingle.calc:about")
    return int(said.splitlines()[0].rsplit(" ", 1)[1])


def column(calc: Office, number: int, rows: int) -> list[Any]:
    return [row[0] for row in calc.values(number, "Sheet1", f"H2:H{rows + 1}")]


def test_killing_the_worker_in_the_middle_of_a_recalculation_heals(calc: Office) -> None:
    rows = 300
    number = column_book(calc, rows)
    assert column(calc, number, rows) == pytest.approx(peaks(rows, 35.0), rel=1e-12)
    calc.set(number, "Sheet1", "N1", 36.0)
    takes = calc.calculate(number)
    for fluid in (37.0, 38.0):
        process = worker_of(calc, number)
        moments: list[float] = []

        def kill(process: int = process, moments: list[float] = moments) -> None:
            os.kill(process, signal.SIGKILL)
            moments.append(time.monotonic())

        calc.set(number, "Sheet1", "N1", fluid)
        killer = threading.Timer(0.4 * takes, kill)
        killer.start()
        calc.calculate(number)
        moments.append(time.monotonic())
        killer.join()
        assert moments == sorted(moments)  # killed before the end
        assert column(calc, number, rows) == pytest.approx(peaks(rows, fluid), rel=1e-12)
        assert worker_of(calc, number) != process
    calc.close(number)


def test_a_gone_environment_shows_na_and_what_to_run_and_heals_by_the_menu(calc: Office) -> None:
    number = column_book(calc, 3)
    calc.set(number, "Sheet1", "I2", "=INGLE.WHY($A$1:$G$1;A2:G2)")
    python = calc.folder / "python"
    target = python.readlink()
    os.kill(worker_of(calc, number), signal.SIGKILL)
    python.unlink()
    try:
        calc.set(number, "Sheet1", "N1", 40.0)
        start = time.monotonic()
        calc.calculate(number)
        assert time.monotonic() - start < 20.0  # no cell has waited for a time limit
        assert column(calc, number, 3) == ["#N/A"] * 3
        why = f"Ingle's Python could not be started; install Ingle again, then run: ingle install calc (it was {python})"
        assert calc.values(number, "Sheet1", "I2") == [[why[:255]]]
        assert calc.dispatch(number, "Sheet1", "A1", "ingle.calc:recalculate") == why
    finally:
        python.symlink_to(target)
    assert calc.dispatch(number, "Sheet1", "A1", "ingle.calc:recalculate") == "All cells are calculated anew."
    assert column(calc, number, 3) == pytest.approx(peaks(3, 40.0), rel=1e-12)
    assert calc.values(number, "Sheet1", "I2") == [["ok"]]
    calc.close(number)


def test_two_documents_at_once_are_served_by_one_worker(calc: Office) -> None:
    one, two = column_book(calc, 30), column_book(calc, 30)
    for step in range(3):
        for number, fluid in ((one, 20.0 + step), (two, 50.0 + step)):
            calc.set(number, "Sheet1", "N1", fluid)
        calc.calculate(two)
        assert column(calc, one, 30) == pytest.approx(peaks(30, 20.0 + step), rel=1e-12)
        assert column(calc, two, 30) == pytest.approx(peaks(30, 50.0 + step), rel=1e-12)
    assert worker_of(calc, one) == worker_of(calc, two)
    calc.close(one)
    calc.close(two)


@pytest.mark.long
def test_ten_thousand_rows_one_by_one_and_as_one_array(calc: Office) -> None:
    rows = 10_000
    number = column_book(calc, rows)
    assert column(calc, number, rows) == pytest.approx(peaks(rows, 35.0), rel=1e-12)
    calc.array(number, "Sheet1", f"I2:I{rows + 1}", f"=INGLE.PEAK($A$1:$G$1;A2:G{rows + 1})")
    assert calc.values(number, "Sheet1", f"I2:I{rows + 1}") == calc.values(number, "Sheet1", f"H2:H{rows + 1}")
    calc.close(number)

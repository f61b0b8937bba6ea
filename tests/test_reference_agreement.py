"""Random mixed rows of one layer and of the wider scope through the independent reference, `ask` and `fill`.

The reference (tests/reference) starts from headings and cells, was written from the interface design alone, and shares no
unit, heading or physics code with what it checks. Where the two read the design differently, the design's text decides;
`reference.CHOICES` holds each reading.
"""

from __future__ import annotations

import math
from collections import Counter
from functools import cache
from pathlib import Path

import numpy as np
import openpyxl
import pytest
import reference
import xlsxwriter
from ingle_addin import ask
from ingle_addin.batch import solve_calls
from ingle_addin.book import fill
from ingle_addin.cells import CellError
from ingle_addin.functions import NAMES
from reference import draw, draw2
from reference.rounding import tolerances

SEED, ROWS = 20, 2000
ANSWERS = list(draw.ANSWERS)
PEAK = ANSWERS.index("peak [°C]")
ERRORS = {error.value: error for error in CellError}
# Formulas whose value is the error: a workbook's error cells are mostly computed ones.
ERROR_FORMULAS = {"#N/A": "NA()", "#DIV/0!": "1/0", "#VALUE!": '"a"+1', "#NUM!": "SQRT(-1)", "#REF!": "#REF!", "#NAME?": "#NAME?"}

Table = tuple[list[str], list[list[object]]]


@cache
def expected() -> list[tuple[Table, list[list[object]], list[list[float]]]]:
    drawn = draw.tables(SEED, ROWS)
    return [((heads, rows), reference.answers(ANSWERS, heads, rows), tolerances(ANSWERS, heads, rows)) for heads, rows in drawn]


def typed(rows: list[list[object]]) -> list[list[object]]:
    """The cells as a host hands them over, errors being no texts."""
    return [[ERRORS.get(cell, cell) if isinstance(cell, str) else cell for cell in row] for row in rows]


def filled(heads: list[str], row: list[object]) -> dict[str, object]:
    """The cells that hold something."""
    return {head: cell for head, cell in zip(heads, row, strict=True) if cell is not None and str(cell).strip()}


def is_error(value: object) -> bool:
    return isinstance(value, str) and value.startswith("#")


def agree(answer: str, got: object, want: object, tolerance: float, row: list[object]) -> bool:
    """Whether two cells say the same; ``row`` is the reference's whole row."""
    if math.isinf(tolerance):
        return True  # not defined: the place of the peak of a body at one temperature, a share of heats that cancel
    if answer == "verdict":
        # The reference knows few causes of a `caution`; a row without an answer is `no answer` whatever its error.
        return got == want or (got == "caution" and want in ("ok", "no limit")) or (got == "no answer" and is_error(want))
    if isinstance(want, (int, float)):
        return isinstance(got, (int, float)) and abs(got - want) <= tolerance
    if is_error(want) and is_error(row[PEAK]) and answer != ANSWERS[PEAK]:
        return is_error(got)  # a row at fault: which fault an answer of its own shows is free
    return got == want


def test_ask_agrees_with_the_reference() -> None:
    wrong: list[str] = []
    count, refused = 0, 0
    for (heads, rows), wanted, tolerance in expected():
        *columns, why = ask([*ANSWERS, "why"], heads, typed(rows))
        for i, row in enumerate(wanted):
            refused += is_error(row[PEAK])
            for j, answer in enumerate(ANSWERS):
                count += 1
                got, want = columns[j][i], row[j]
                # From Python a missing number is NaN (blank rows too) and a missing text None, with the reason under why.
                missing = got is None or (isinstance(got, float) and math.isnan(got))
                if math.isinf(tolerance[i][j]):
                    right = True
                elif want == "" or is_error(want):
                    right = missing or (answer == "verdict" and got in ("", "no answer"))
                    right = right and (why[i] == "") == (want == "")
                else:
                    right = agree(answer, got if isinstance(got, str) else float(got), want, tolerance[i][j], row)
                if not right:
                    wrong.append(
                        f"{answer}: {got!r}, the reference has {want!r} ({why[i]}) for {dict(zip(heads, rows[i], strict=True))}"
                    )
    print(f"{count} answers of {ROWS} rows compared, {len(wrong)} disagree; the reference refuses {refused} rows")
    assert not wrong, "\n".join(wrong[:5])


def write_tables(path: Path) -> None:
    """Each table on a sheet: headings, rows, the answers as one array formula, and PEAK and WHY row by row."""
    book = xlsxwriter.Workbook(str(path), {"strings_to_formulas": False, "strings_to_numbers": False, "strings_to_urls": False})
    for number, ((heads, rows), _, _) in enumerate(expected()):
        sheet = book.add_worksheet(f"T{number}")
        for j, head in enumerate(heads):
            sheet.write_string(0, j, head or "")
        for i, row in enumerate(rows, 1):
            for j, cell in enumerate(row):
                if isinstance(cell, str) and cell in ERROR_FORMULAS:
                    sheet.write_formula(i, j, f"={ERROR_FORMULAS[cell]}", None, cell)
                elif isinstance(cell, str):
                    sheet.write_string(i, j, cell)
                elif cell is not None:
                    sheet.write(i, j, cell)
        last = xlsxwriter.utility.xl_col_to_name(len(heads) - 1)
        first = len(heads) + 1
        head_range, n = f"$A$1:${last}$1", len(rows)
        for j, answer in enumerate(ANSWERS):
            sheet.write_string(0, first + j, answer)
        left, right = (xlsxwriter.utility.xl_col_to_name(c) for c in (first, first + len(ANSWERS) - 1))
        sheet.write_array_formula(
            1, first, n, first + len(ANSWERS) - 1, f"{{=INGLE.ASK(${left}$1:${right}$1,{head_range},A2:{last}{n + 1})}}"
        )
        for i in range(1, n + 1):
            values = f"A{i + 1}:{last}{i + 1}"
            sheet.write_formula(i, first + len(ANSWERS), f"=INGLE.PEAK({head_range},{values})")
            sheet.write_formula(i, first + len(ANSWERS) + 1, f"=INGLE.WHY({head_range},{values})")
    book.close()


def test_fill_agrees_with_the_reference(tmp_path: Path) -> None:
    write_tables(tmp_path / "tables.xlsx")
    report = fill(tmp_path / "tables.xlsx", tmp_path / "out.xlsx", functions=NAMES, solve=solve_calls)
    assert not report.not_computed
    assert not report.truncated
    book = openpyxl.load_workbook(tmp_path / "out.xlsx", data_only=True, read_only=True)
    wrong: list[str] = []
    kinds: Counter[str] = Counter()
    for number, ((heads, _), wanted, tolerance) in enumerate(expected()):
        cells = list(book[f"T{number}"].iter_rows(min_row=2, min_col=len(heads) + 2, values_only=True))
        for i, row in enumerate(wanted):
            got = ["" if cell is None else cell for cell in cells[i][: len(ANSWERS)]]
            peak, why = cells[i][len(ANSWERS) : len(ANSWERS) + 2]
            kinds[str(row[PEAK]) if is_error(row[PEAK]) else "answer" if row[PEAK] != "" else "blank"] += 1
            wrong += [
                f"T{number} row {i + 2} {answer}: {g!r}, the reference has {w!r} ({why})"
                for answer, g, w, t in zip(ANSWERS, got, row, tolerance[i], strict=True)
                if not agree(answer, g, w, t, row)
            ]
            # One row alone is the same as the row among others, to the bit.
            if (peak if peak is not None else "") != got[PEAK]:
                wrong.append(f"T{number} row {i + 2}: PEAK {peak!r} but ASK {got[PEAK]!r}")
            if is_error(row[PEAK]) and why in (None, "", "ok"):  # (a row with an answer may have a caution there)
                wrong.append(f"T{number} row {i + 2}: {row[PEAK]!r} but WHY is {why!r}")
    print(f"filled {report.ingle_cells} Ingle cells; rows by the reference: {dict(kinds)}")
    assert not wrong, "\n".join(wrong[:5])


def test_few_rows_are_refused() -> None:
    """Rows without a drawn mistake are solved: at most one in a hundred has no peak where the reference has one."""
    refused = total = 0
    for (heads, rows), wanted, _ in expected():
        (peak,) = ask(["peak [°C]"], heads, typed(rows))
        legal = np.array([isinstance(row[PEAK], (int, float)) for row in wanted])
        total += int(legal.sum())
        refused += int(np.isnan(peak[legal].astype(float)).sum())
    print(f"refused {refused} of {total} rows that the reference answers")
    assert total > ROWS / 2
    assert refused <= total / 100


# The wider scope: layers and joints, laws in temperature, radiation, resistances, currents, windings, bars, contacts.

WIDE_SEED, WIDE_ROWS = 77, 60
MANY_SEED, MANY_ROWS = 77, 240


def disagreements(seed: int, rows: int) -> tuple[Counter[str], list[str]]:
    """What was compared, by the reference's verdict or error, and every answer that differs."""
    wrong: list[str] = []
    kinds: Counter[str] = Counter()
    for heads, drawn in draw2.tables(seed, rows):
        (outcome,) = solve_calls("INGLE.ASK", [((draw2.ANSWERS,), (heads,), typed(drawn))])
        wanted, bounds = (work(draw2.ANSWERS, heads, drawn) for work in (reference.answers, tolerances))
        for i, row in enumerate(wanted):
            got = [cell.value if isinstance(cell, CellError) else cell for cell in outcome.grid[i]]
            verdict = row[draw2.ANSWERS.index("verdict")]
            kinds[f"verdict {verdict}" if not is_error(verdict) else str(verdict)] += 1
            kinds["refused"] += isinstance(row[PEAK], float) and is_error(got[PEAK])
            for answer, g, w, t in zip(draw2.ANSWERS, got, row, bounds[i], strict=True):
                if not agree(answer, g, w, t, row):
                    wrong.append(
                        f"{answer}: {g!r}, the reference has {w!r} ± {t:.2g} ({outcome.reasons[i]}) for {filled(heads, drawn[i])}"
                    )
    print(f"{rows} rows compared in {len(draw2.ANSWERS)} answers: {dict(kinds)}; {len(wrong)} answers disagree")
    return kinds, wrong


def test_the_wider_scope_agrees_with_the_reference() -> None:
    kinds, wrong = disagreements(WIDE_SEED, WIDE_ROWS)
    assert min(kinds[f"verdict {verdict}"] for verdict in ("ok", "over limit", "no limit", "runaway")) > 0
    assert kinds["refused"] == 0
    assert not wrong, f"{len(wrong)} disagree\n" + "\n".join(wrong[:8])


@pytest.mark.long
def test_many_rows_of_the_wider_scope_agree_with_the_reference() -> None:
    kinds, wrong = disagreements(MANY_SEED, MANY_ROWS)
    assert kinds["refused"] <= MANY_ROWS / 1000
    assert not wrong, f"{len(wrong)} disagree\n" + "\n".join(wrong[:8])

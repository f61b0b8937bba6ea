"""`ingle check`: what differs from the stored values, what has no answer, and ranges that slipped."""

from __future__ import annotations

import datetime
import json
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import pytest
import sheets
from book_samples import Solver, made, with_cells
from ingle_addin.book import Checked, Difference, NoAnswer, NotComputed, Report, Shifted, check, check_summary
from ingle_addin.book.checking import agree
from ingle_addin.cells import Cell, CellError
from sheets import Typed
from test_command import CASE, HEADINGS, PEAK, typed

PLACES: Mapping[str, int | None] = {"INGLE.PEAK": 0, "INGLE.FACE": 1, "INGLE.ASK": 1, "INGLE.WHY": 0, "INGLE.ABOUT": None}


def checked(book: Path, **options: Any) -> Checked:
    before = {path: path.read_bytes() for path in book.parent.iterdir()}
    found = check(book, functions=PLACES, solve=Solver(), **options)
    assert {path: path.read_bytes() for path in book.parent.iterdir()} == before
    return found


@pytest.mark.parametrize(
    ("one", "other", "within", "same"),
    [
        (1.0, 1.0 + 1e-6, 1e-6, True),
        (1.0, 1.0 + 1.1e-6, 1e-6, False),
        (0.0, 1e-6, 1e-6, True),  # below 1 the tolerance is absolute
        (0.0, 1.1e-6, 1e-6, False),
        (1e6, 1e6 + 0.9, 1e-6, True),
        (-1e6, -1e6 - 1.1, 1e-6, False),
        (5.0, 5.0, 0.0, True),
        (1.0, True, 1.0, False),
        (None, "", 0.0, True),
        (None, 0.0, 1.0, False),
        ("a", "A", 1.0, False),
        (CellError.NA, CellError.NA, 0.0, True),
        (CellError.NA, CellError.NUM, 1.0, False),
        (CellError.NA, "#N/A", 1.0, False),
    ],
)
def test_agree(one: Cell, other: Cell, within: float, same: bool) -> None:
    assert agree(one, other, within) == agree(other, one, within) == same


def test_every_kind_of_difference(tmp_path: Path) -> None:
    def build(_book: Any, page: Any) -> None:
        page.write("A1", 2)
        page.write_formula("B1", "=A1*2", None, 4)
        page.write_formula("B2", "=A1*3", None, 6.5)
        page.write_formula("B3", '=A1&"x"', None, "2y")
        page.write_formula("B4", "=A1>1", None, False)
        page.write_formula("B5", "=1/0", None, 3)
        page.write_formula("B6", "=INGLE.PEAK(A1)", None, "")
        page.write_array_formula("D1:D2", "{=A1*{1;2}}", None, 2)
        page.write_formula("F1", "=B2/3", None, 2)

    found = checked(made(tmp_path / "book.xlsx", build))
    assert found.compared == 9
    assert found.differences == (
        Difference("Data", "B2", 6.5, 6.0, -0.5),
        Difference("Data", "D2", 0.0, 4.0, 4.0),
        Difference("Data", "B3", "2y", "2x", None),
        Difference("Data", "B4", False, True, None),
        Difference("Data", "B5", 3.0, CellError.DIV0, None),
        Difference("Data", "B6", None, 2.0, None),
    )
    assert not found.agrees(allow_unanswered=True)


def test_what_changes_from_moment_to_moment_is_left_with_all_that_rests_on_it(tmp_path: Path) -> None:
    cells = {
        "A1": Typed(45000.0, "=TODAY()"),
        "A2": Typed(45001.0, "=A1+1"),
        "A3": Typed(0.25, "=RAND()"),
        "A4": Typed(1.0, "=INGLE.PEAK(A3)*4"),
        "A5": Typed(3.0, "=NOW()-A1+INGLE.PEAK(1)"),
    }
    found = checked(sheets.write_book(tmp_path / "book.xlsx", cells))
    assert found.volatile == ("Data!A1", "Data!A3", "Data!A5")
    assert (found.compared, found.differences, found.report.not_computed) == (2, (), ())
    assert found.agrees()


def test_formulas_that_cannot_be_computed_are_listed_and_ingle_ones_count(tmp_path: Path) -> None:
    cells = {"A1": Typed(5.0, "=STRANGE(1)"), "A2": Typed(6.0, "=A1+1")}
    found = checked(sheets.write_book(tmp_path / "book.xlsx", cells))
    assert [(each.cell, each.reason) for each in found.report.not_computed] == [
        ("A1", "it uses STRANGE, which the calculation engine does not have"),
        ("A2", "rests on Data!A1, which was not computed"),
    ]
    assert found.agrees()
    found = checked(sheets.write_book(tmp_path / "book.xlsx", {"A1": Typed(5.0, "=STRANGE(INGLE.PEAK(1))")}))
    assert not found.agrees()
    assert found.agrees(allow_unanswered=True)


@pytest.mark.parametrize(
    ("formula", "headings", "values", "lines"),
    [
        ("INGLE.PEAK($A$1:$C$1,B{row}:D{row})", "A1:C1", "B2:D2", "columns"),
        ("INGLE.PEAK($B$1:$D$1,A{row}:C{row})", "B1:D1", "A2:C2", "columns"),
        ("INGLE.PEAK($A$1:$C$1,A{row}:C{row})", None, None, None),
        ("INGLE.ASK(\"x\",$A$1:$D$1,A{row}:B{row},C{row}:D{row})", None, None, None),
        ("INGLE.ASK(\"x\",$A$1:$D$1,A{row}:B{row},D{row},C{row})", "A1:D1", "D2", "columns"),
        ("INGLE.FACE(\"left\",$A$1:$D$1,A{row}:B{row},7,D{row})", None, None, None),
        ("INGLE.FACE(\"left\",$A$1:$D$1,A{row}:C{row}*1,E{row})", None, None, None),  # how wide A:C*1 is, only the engine knows
        ("INGLE.PEAK($A$1:$C$1,H{row}:J{row})", None, None, None),  # another table beside, meant so
        ("INGLE.PEAK($A$1:$C$1,Other!B{row}:D{row})", None, None, None),
        ("INGLE.PEAK($A$1,B{row})", None, None, None),
        ("INGLE.PEAK($A$1:$A$4,B2:B5)", "A1:A4", "B2:B5", "rows"),
        ("INGLE.PEAK($A$1:$A$4,B1:B4)", None, None, None),
        ("INGLE.PEAK($A$1:$B$2,B{row}:C{row})", "A1:B2", "B2:C2", "columns"),  # names over units
        ("ROUND(INGLE.PEAK($A$1:$C$1,B{row}:D{row}),2)", "A1:C1", "B2:D2", "columns"),
        ("INGLE.ABOUT()", None, None, None),
    ],
)  # fmt: skip
def test_ranges_that_slipped(tmp_path: Path, formula: str, headings: str | None, values: str | None, lines: str | None) -> None:
    def build(book: Any, page: Any) -> None:
        book.add_worksheet("Other")
        for row in (2, 3, 4):
            page.write_formula(f"K{row}", "=" + formula.format(row=row))

    found = checked(made(tmp_path / "book.xlsx", build))
    expected = [] if headings is None else [Shifted("Data", "K2", headings, str(values), str(lines), 3)]
    assert list(found.shifted) == expected


def test_summary_of_a_check_that_agrees() -> None:
    found = Checked(Path("case.xlsx"), 1e-6, 1, Report(Path("case.xlsx")))
    assert check_summary(found) == ["1 cell recomputed; none differ from the stored value by more than 1e-06."]


def test_summary_of_all_that_can_be_found() -> None:
    long = "what differs only at its end " * 3
    report = Report(
        Path("case.xlsx"),
        no_answers=(NoAnswer("Data", "D2", 2, "#N/A", "thickness is blank"),),
        not_computed=(NotComputed("Data", "A1", "it uses STRANGE, which the calculation engine does not have"),),
        remarks=("The workbook is set to calculate with the precision displayed; here the full precision was used.",),
    )
    differences = (
        Difference("Data", "B2", 6.5, 6.0, -0.5),
        Difference("Data", "B3", long, True, None),
        Difference("Data", "B4", None, CellError.NA, None),
        *(Difference("Data", f"C{row}", 1 / 3, float(row), row - 1 / 3) for row in range(1, 9)),
    )
    shifted = (Shifted("Data", "K2", "A1:C1", "B2:D2", "columns", 3), Shifted("Data", "L2", "A1:A4", "B2:B5", "rows"))
    found = Checked(Path("case.xlsx"), 1e-6, 1234, report, differences, ("Data!A9",), shifted)
    assert check_summary(found) == [
        "1,234 cells recomputed; 11 differ from the stored value by more than 1e-06:",
        "  cell     stored                                       computed  difference",
        "  Data!B2  6.5                                          6         -0.5",
        "  Data!B3  'what differs only at its end what differ…'  TRUE",
        "  Data!B4  (empty)                                      #N/A",
        *(f"  Data!C{row}  0.3333333333                                 {row}         {row - 1 / 3:.3g}" for row in range(1, 8)),
        "  … and 1 more (--json lists them all)",
        "1 row without an answer:",
        "  Data!D2 #N/A: thickness is blank",
        "1 formula not computed; the stored value was kept:",
        "  Data!A1: it uses STRANGE, which the calculation engine does not have",
        "1 formula was left alone, changing from moment to moment:",
        "  Data!A9",
        "4 Ingle calls take values that do not stand with their headings; look whether a range slipped:",
        "  Data!K2 and 2 cells of its column: the headings are A1:C1, but the values B2:D2 stand in other columns",
        "  Data!L2: the headings are A1:A4, but the values B2:B5 stand in other rows",
        "The workbook is set to calculate with the precision displayed; here the full precision was used.",
        "If the computed values are right, ingle fill case.xlsx writes them.",
    ]


# The command.


def cases(path: Path, *thicknesses: object, stored: float = PEAK) -> Path:
    """One row of PEAK a thickness, each with the same stored value."""
    cells: dict[str, object] = {}
    sheets.put(cells, "A1", [HEADINGS, *([CASE[0], each, *CASE[2:]] for each in thicknesses)])
    for row in range(2, len(thicknesses) + 2):
        cells[f"H{row}"] = Typed(stored, f"=INGLE.PEAK($A$1:$F$1,A{row}:F{row})")
    return sheets.write_book(path, cells)


def test_the_command_agrees_and_leaves_0(tmp_path: Path) -> None:
    cases(tmp_path / "parts.xlsx", 10.0, 10.0)
    ran = typed(tmp_path, "check", "parts.xlsx")
    assert (ran.code, ran.out, ran.err) == (0, ["2 cells recomputed; none differ from the stored value by more than 1e-06."], [])
    assert [path.name for path in tmp_path.iterdir()] == ["parts.xlsx"]


@pytest.mark.parametrize(("options", "code"), [((), 1), (("--within", "0.02"), 0), (("--allow-unanswered",), 1)])
def test_the_command_tells_differences(tmp_path: Path, options: tuple[str, ...], code: int) -> None:
    cases(tmp_path / "parts.xlsx", 10.0, stored=PEAK + 0.1)
    ran = typed(tmp_path, "check", "parts.xlsx", *options)
    assert (ran.code, ran.err) == (code, [])
    assert len(ran.out) == (1 if code == 0 else 4)
    if code:
        assert ran.out[2].split() == ["Data!H2", "24.1", "24", "-0.1"]


@pytest.mark.parametrize(("options", "code"), [((), 1), (("--allow-unanswered",), 0)])
def test_the_command_tells_rows_without_an_answer(tmp_path: Path, options: tuple[str, ...], code: int) -> None:
    path = cases(tmp_path / "parts.xlsx", None)
    typed(tmp_path, "fill", "parts.xlsx", "--in-place")
    ran = typed(tmp_path, "check", path.name, *options)
    assert (ran.code, ran.out, ran.err) == (code, [
        "1 cell recomputed; none differ from the stored value by more than 1e-06.",
        "1 row without an answer:",
        "  Data!H2 #N/A: Thickness [mm] in this row is blank; type a value",
    ], [])  # fmt: skip


def test_the_command_gives_json(tmp_path: Path) -> None:
    cases(tmp_path / "parts.xlsx", 10.0, None, stored=1.0)
    ran = typed(tmp_path, "check", "parts.xlsx", "--json")
    found = json.loads("\n".join(ran.out))
    assert (ran.code, ran.err) == (1, [])
    assert found == {
        "agrees": False,
        "book": "parts.xlsx",
        "within": 1e-6,
        "compared": 2,
        "differences": [
            {"sheet": "Data", "cell": "H2", "stored": 1.0, "computed": PEAK, "difference": PEAK - 1.0},
            {"sheet": "Data", "cell": "H3", "stored": 1.0, "computed": "#N/A", "difference": None},
        ],
        "without_answer": [
            {"sheet": "Data", "cell": "H3", "row": 3, "error": "#N/A", "reason": "Thickness [mm] in this row is blank; type a value"}
        ],
        "without_answer_inside": [],
        "not_computed": [],
        "larger_than_cells": [],
        "volatile": [],
        "shifted": [],
        "remarks": [],
    }


@pytest.mark.parametrize("within", ["-1", "nan", "inf", "much"])
def test_a_tolerance_that_is_none(tmp_path: Path, within: str) -> None:
    cases(tmp_path / "parts.xlsx", 10.0)
    ran = typed(tmp_path, "check", "parts.xlsx", "--within", within)
    assert (ran.code, ran.out, ran.err) == (2, [], [f"ingle: --within is {within}; give a number from 0 on, such as 1e-6"])


def test_a_filled_workbook_agrees_with_itself(tmp_path: Path) -> None:
    """Whatever a fill writes, a check finds."""

    def build(book: Any, page: Any) -> None:
        page.write_row("A1", [1, "x", True])
        page.write_datetime("D1", datetime.datetime(2024, 5, 6), book.add_format({"num_format": "yyyy-mm-dd"}))
        page.write_formula("A2", '=A1&"é<&>"')
        page.write_formula("B2", "=D1+1")
        page.write_array_formula("A3:C3", "{=INGLE.ASK(A1:D1)}")
        page.write_dynamic_array_formula("A4:B5", "=INGLE.ASK(A1:D1)")
        page.write_formula("A6", "=1/3")

    made(tmp_path / "book.xlsx", build)
    typed(tmp_path, "fill", "book.xlsx", "--in-place")
    found = typed(tmp_path, "check", "book.xlsx", "--allow-unanswered", "--within", "0")
    # Three ordinary cells and the ranges of two arrays, of which the second's last row is empty.
    assert found.out[0] == "10 cells recomputed; none differ from the stored value by more than 0."
    assert found.code == 0


def test_a_stored_zero_is_a_value(tmp_path: Path) -> None:
    found = checked(with_cells(tmp_path / "book.xlsx", {"A1": "=INGLE.PEAK(0)"}))
    assert found.differences == ()

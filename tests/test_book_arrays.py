"""Array formulas, spilled answers and shared formulas."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from book_samples import filled, made, with_cells, with_sheet_xml


def test_array_formulas(tmp_path: Path) -> None:
    def build(_book: Any, page: Any) -> None:
        page.write_column("A1", [1, 2, 3])
        page.write_column("B1", [10, 20, 30])
        page.write_array_formula("D1:D3", "{=ROUND(A1:A3/3,2)*B1:B3}")
        page.write_array_formula("E1:E1", "{=SUM(A1:A3*B1:B3)}")
        page.write_array_formula("F1:G4", "{=INGLE.ASK(A1:B3)}")
        page.write_array_formula("H1:H2", "{=INGLE.ASK(A1:B3)}")
        page.write_array_formula("I1:K1", "{=TRANSPOSE(A1:A3)}")
        page.write_array_formula("L1:M3", "{=IFERROR(ROUND(INGLE.ASK(A1:B3)/2,1),0)}")
        page.write_array_formula("N1:N2", "{=5}")
        page.write_array_formula("O1:P3", "{=INGLE.PEAK(A1)}")
        page.write_dynamic_array_formula("R1:S3", "=INGLE.ASK(A1:B2)")
        page.write_formula("A6", "=INGLE.ASK(A1:B3)")
        page.write_formula("U7", "=INGLE.ASK(B:C)")
        page.write_formula("A8", "=SUM(F1:F3)")
        page.write_formula("A9", "=ROUND(INGLE.ASK(A1:B3)*2,0)")
        page.write_formula("A10", "=INGLE.PEAK(INGLE.ASK(A1:B3)*2)")

    cells, report, _ = filled(made(tmp_path / "book.xlsx", build))
    assert [cells[f"D{row}"] for row in (1, 2, 3)] == pytest.approx([3.3, 13.4, 30], abs=1e-12)
    assert cells["E1"] == 140
    assert [[cells[f"{c}{row}"] for c in "FG"] for row in range(1, 5)] == [[11, 2], [22, 2], [33, 2], ["#N/A", "#N/A"]]
    assert [cells["H1"], cells["H2"]] == [11, 22]
    assert [cells["I1"], cells["J1"], cells["K1"]] == [1, 2, 3]
    assert [[cells[f"{c}{row}"] for c in "LM"] for row in (1, 2, 3)] == [[5.5, 1], [11, 1], [16.5, 1]]
    assert [cells["N1"], cells["N2"]] == [5, 5]
    assert [cells[f"{c}{row}"] for c in "OP" for row in (1, 2, 3)] == [1] * 6
    assert [cells.get(f"R{row}") for row in (1, 2, 3)] == [11, 22, None]
    assert (cells["A6"], cells["U7"], cells["A8"]) == (11, "#VALUE!", 66)
    assert report.not_computed == ()
    assert not report.complete
    assert [(each.cell, str(each)) for each in report.truncated] == [
        ("H1", "the answer has 3 rows and 2 columns, but the formula fills only H1:H2"),
        ("A6", "the answer has 3 rows and 2 columns, but the formula fills only A6"),
        ("A9", "the answer has 3 rows and 2 columns, but the formula uses only its first value"),
        ("A10", "the answer has 3 rows and 2 columns, but the formula uses only its first value"),
    ]
    assert [(each.cell, each.reason) for each in report.no_answers] == [
        ("U7", "a whole column stands where one row is meant; write the row's own cells, such as A2:H2")
    ]


def test_shared_formulas(tmp_path: Path) -> None:
    data = (
        '<row r="1"><c r="A1"><v>1</v></c><c r="B1"><f t="shared" ref="B1:B3" si="0">A1*$A$1+SUM(A$1:A1)</f></c></row>'
        '<row r="2"><c r="A2"><v>2</v></c><c r="B2"><f t="shared" si="0"/></c></row>'
        '<row r="3"><c r="A3"><v>3</v></c><c r="B3"><f t="shared" si="0"></f></c>'
        '<c r="C3"><f t="shared" si="9"/><v>8</v></c></row>'
    )
    cells, report, _ = filled(with_sheet_xml(tmp_path / "book.xlsx", data))
    assert [cells[f"B{row}"] for row in (1, 2, 3)] == [2, 5, 9]
    assert [(each.cell, each.reason) for each in report.not_computed] == [("C3", "the formula could not be read")]


def data_table(first: str) -> str:
    """A what-if table over B2:C3 as Excel keeps it: its formula in the first cell, the others hold values alone."""
    return (
        '<row r="1"><c r="A1"><f>1+1</f><v>2</v></c></row>'
        f'<row r="2"><c r="B2"><f t="dataTable" ref="B2:C3" dt2D="1" dtr="1" r1="D1" r2="D2"{first}<v>1</v></c>'
        '<c r="C2"><v>2</v></c><c r="D2"><f>SUM(B2:C2)</f><v>0</v></c></row>'
        '<row r="3"><c r="B3"><v>3</v></c><c r="C3"><v>4</v></c><c r="D3"><f>C3*10</f><v>0</v></c><c r="E3"><f>A1*2</f></c></row>'
    )


@pytest.mark.parametrize("first", ["/>", "></f>"])
def test_data_tables_keep_their_values(tmp_path: Path, first: str) -> None:
    cells, report, _ = filled(with_sheet_xml(tmp_path / "book.xlsx", data_table(first)))
    assert cells == {"A1": 2, "B2": 1, "C2": 2, "D2": 3, "B3": 3, "C3": 4, "D3": 40, "E3": 4}
    assert [(each.cell, each.reason) for each in report.not_computed] == [
        ("B2", "it is part of a what-if data table"),
        ("D2", "rests on Data!B2, which was not computed"),
        ("D3", "rests on Data!B2, which was not computed"),
    ]


def test_an_array_too_large_keeps_its_values(tmp_path: Path) -> None:
    data = (
        '<row r="1"><c r="A1"><f t="array" ref="A1:B1000000">1+1</f><v>7</v></c><c r="B1"><v>8</v></c>'
        '<c r="C1"><f>A1+B1</f></c></row>'
    )
    cells, report, _ = filled(with_sheet_xml(tmp_path / "book.xlsx", data))
    assert cells == {"A1": 7, "B1": 8, "C1": 15}
    assert [(each.cell, each.reason) for each in report.not_computed] == [
        ("A1", "its array has too many cells"),
        ("C1", "rests on Data!A1, which was not computed"),
    ]


def test_a_long_chain_of_calls_is_followed_without_the_engine(tmp_path: Path) -> None:
    cells = {"A1": "=INGLE.PEAK(1)", **{f"A{row}": f"=INGLE.PEAK(A{row - 1},1)" for row in range(2, 301)}, "B1": "=A300*2"}
    values, report, solver = filled(with_cells(tmp_path / "book.xlsx", cells))
    assert (values["A300"], values["B1"], report.not_computed) == (300, 600, ())
    # All of them first; then each as soon as the one before has its answer, A2 having had it already.
    assert solver.batches[0] == ("INGLE.PEAK", 300)
    assert sum(count for _, count in solver.batches) < 900


def test_a_call_that_reads_a_cell_given_up_is_asked_again(tmp_path: Path) -> None:
    data = (
        '<row r="1"><c r="A1"><f>INGLE.PEAK(B1)</f><v>4</v></c><c r="B1"><f>A1+1</f><v>5</v></c>'
        '<c r="C1"><f>INGLE.PEAK(B1,A1)</f><v>0</v></c><c r="D1"><f>INGLE.PEAK(C1)</f><v>0</v></c></row>'
    )
    values, report, _ = filled(with_sheet_xml(tmp_path / "book.xlsx", data))
    assert values == {"A1": 4, "B1": 5, "C1": 9, "D1": 9}
    ring = "the cells go round in a circle: Data!A1, Data!B1"
    kept = [(each.cell, each.reason) for each in report.not_computed if not each.rests]
    assert kept == [("A1", ring), ("B1", ring)]
    assert {each.cell for each in report.not_computed if each.rests} == {"C1", "D1"}

"""Values: ordinary formulas, Ingle calls in them, and what a call is given of each kind of cell."""

from __future__ import annotations

import datetime
from pathlib import Path
from typing import Any

import pytest
from book_samples import filled, made, with_cells, with_sheet_xml
from ingle_addin.book import open_book, summary
from ingle_addin.cells import CellError

CRITERION = "it uses a criterion (<>text, or one with ~) that the calculation engine does not read as spreadsheets do"
DATA = {
    **{f"A{row}": row for row in range(1, 6)},
    **{f"B{row}": row * 10 for row in range(1, 6)},
    "C1": "alpha",
    "C2": "beta",
    "C3": True,
}


@pytest.mark.parametrize(
    ("formula", "value"),
    [
        ("=A2*B2+3", 43),
        ("=-A2^2", 4),
        ("=A5%", 0.05),
        ("=IF(A1>1,10,20)", 20),
        ("=ROUND(A1/3,2)", 0.33),
        ("=MAX(A1:B5)+MIN(A1:A5)", 51),
        ("=SUM(A:A)", 15),
        ("=SUM(1:1)", 11),
        ("=SUM($A$1:A3)", 6),
        ("=INDEX(B1:B5,MATCH(3,A1:A5,0))", 30),
        ("=VLOOKUP(4,A1:B5,2,FALSE)", 40),
        ('=IFERROR(1/0,"none")', "none"),
        ('=C1&" "&UPPER(C2)', "alpha BETA"),
        ('="say ""hi"""', 'say "hi"'),
        ("=SUMPRODUCT(A1:A5*B1:B5)", 550),
        ("=SUMPRODUCT(--(A1:A5>2))", 3),
        ('=SUMIF(A1:A5,">3",B1:B5)', 90),
        ("=SUM(IF(A1=1,A2:A3,B2:B3))", 5),
        ('=TEXT(DATE(2024,3,1),"yyyy-mm-dd")', "2024-03-01"),
        ("=AND(C3,A1=1)", True),
        ("=A1=B1", False),
        ("=A9", 0),
        ("=ROW()+COLUMN()", 13),
        ("=SUM({1,2;3,-4})", 2),
        ("=1/0", "#DIV/0!"),
        ("=SQRT(-1)", "#NUM!"),
        ("=NA()", "#N/A"),
        ("=LOOKUP(2,1/(A1:A5<4),B1:B5)", 30),
        ("=_xlfn.XLOOKUP(2,A1:A5,B1:B5)", 20),
        ("=data!A2", 2),
        ("='Data'!A2 + 1", 3),
    ],
)
def test_ordinary_formula(tmp_path: Path, formula: str, value: object) -> None:
    cells, report, _ = filled(with_cells(tmp_path / "book.xlsx", {**DATA, "E8": formula}))
    assert cells["E8"] == value
    assert report.not_computed == ()
    assert (report.ingle_cells, report.ordinary_cells) == (0, 1)


@pytest.mark.parametrize(
    ("formula", "value"),
    [
        ("=LET(x,A2,y,x*10,x+y)", 22),
        ("=_xlfn.LET(_xlpm.x,A2,INGLE.PEAK(_xlpm.x,_xlpm.x*3))", 8),
        ("=_xlfn.LET(_xlpm.r,A1:A3,SUM(_xlpm.r)+INGLE.PEAK(_xlpm.r))", 12),
        ("=LET(x,1,LET(x,x+1,x*10)+x)", 21),
        ("=LET(rate,2,rate*A3)", 6),
        ("=SUM(_xlfn.MAP(A1:A3,_xlfn.LAMBDA(_xlpm.x,_xlpm.x*2)))", 12),
        ("=SUM(MAP(A1:A3,LAMBDA(x,x*2)))", 12),
    ],
)
def test_names_of_let_and_lambda(tmp_path: Path, formula: str, value: object) -> None:
    def build(book: Any, page: Any) -> None:
        for name, each in DATA.items():
            page.write(name, each)
        book.define_name("rate", "=7")
        page.write_formula("E8", formula)

    cells, report, _ = filled(made(tmp_path / "book.xlsx", build))
    assert cells["E8"] == value
    assert report.not_computed == ()


def test_calls_inside_names_belong_to_the_cell(tmp_path: Path) -> None:
    def build(book: Any, page: Any) -> None:
        page.write_row("A1", [1, 2])
        book.define_name("hot", "=INGLE.PEAK(Data!$A$1:$B$1)")
        book.define_name("twice", "=hot*2")
        book.define_name("lost", "=STRANGE(INGLE.PEAK(1))")
        book.define_name("made", "=_xlfn.LAMBDA(_xlpm.x,INGLE.PEAK(_xlpm.x))")
        page.write_formula("C1", "=twice+1")
        page.write_formula("C2", "=lost")
        page.write_formula("C3", "=made(A1)")

    cells, report, _ = filled(made(tmp_path / "book.xlsx", build))
    assert cells["C1"] == 7
    assert (report.ingle_cells, report.complete) == (1, False)
    assert [(each.cell, each.reason, each.ingle) for each in report.not_computed] == [
        ("C2", "it uses STRANGE, which the calculation engine does not have", True),
        ("C3", "it uses the name made as a function (LAMBDA)", True),
    ]


def test_a_criterion_in_a_cell(tmp_path: Path) -> None:
    cells = {**DATA, "E1": "=COUNTIF(A1:A5,F1)", "E2": '=COUNTIF(A1:A5,"<>3")', "E3": "=COUNTIF(A1:A5,3)"}
    values, report, _ = filled(with_cells(tmp_path / "fine.xlsx", {**cells, "F1": ">2"}))
    assert (values["E1"], values["E2"], values["E3"], report.not_computed) == (3, 4, 1, ())
    values, report, _ = filled(with_cells(tmp_path / "odd.xlsx", {**cells, "F1": "<>x"}))
    assert (values["E2"], values["E3"]) == (4, 1)
    assert [(each.cell, each.reason) for each in report.not_computed] == [("E1", CRITERION)]


@pytest.mark.parametrize(("cell", "value"), [("E3", 60), ("E9", "#VALUE!")])
def test_a_range_where_one_value_belongs_means_the_cell_in_the_own_row(tmp_path: Path, cell: str, value: object) -> None:
    cells, _, _ = filled(with_cells(tmp_path / "book.xlsx", {**DATA, cell: "=B1:B5*2", "G1": "untouched"}))
    assert cells[cell] == value
    assert cells["G1"] == "untouched"
    assert "E4" not in cells


def test_today_is_the_given_moment(tmp_path: Path) -> None:
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=TODAY()", "A2": "=NOW()-TODAY()"})
    cells, _, _ = filled(book, now=datetime.datetime(2024, 3, 1, 6))
    assert (cells["A1"], cells["A2"]) == (45352, 0.25)


def test_names_constants_ranges_and_other_sheets(tmp_path: Path) -> None:
    def build(book: Any, page: Any) -> None:
        other = book.add_worksheet("Other sheet's")
        other.write("B2", 7)
        book.define_name("factor", "=2.5")
        book.define_name("label", '="mm"')
        book.define_name("place", "='Other sheet''s'!$B$2")
        book.define_name("Data!local", "=Data!$A$1:$A$2")
        book.define_name("both", "=factor*place")
        page.write_column("A1", [3, 4])
        page.write_formula("C1", "=factor*A1")
        page.write_formula("C2", "=A1&label")
        page.write_formula("C3", "='Other sheet''s'!B2+place")
        page.write_formula("C4", "=SUM(local)")
        page.write_formula("C5", "=both+1")
        page.write_formula("C6", "=INGLE.PEAK(label,local)")

    cells, report, solver = filled(made(tmp_path / "book.xlsx", build))
    assert [cells[f"C{row}"] for row in range(1, 7)] == [7.5, "3mm", 14, 7, 18.5, 7]
    assert solver.last == ((("mm",),), ((3.0,), (4.0,)))
    assert report.not_computed == ()


def test_tables(tmp_path: Path) -> None:
    def build(_book: Any, page: Any) -> None:
        page.write_row("B2", ["thickness [mm]", "q]x", "out", "sum"])
        page.write_row("B3", [1, 2])
        page.write_row("B4", [3, None])
        page.add_table("B2:E4", {"name": "Cases", "columns": [{"header": h} for h in ("thickness [mm]", "q]x", "out", "sum")]})
        for row in (3, 4):
            page.write_formula(
                f"D{row}",
                "=INGLE.PEAK(Cases[[#Headers],[thickness '[mm']]:[q']x]],Cases[[#This Row],[thickness '[mm']]:[q']x]])",
            )
            page.write_formula(f"E{row}", "=SUM(Cases[[#This Row],[thickness '[mm']]:[q']x]])*2")
        page.write_formula("H1", "=SUM(Cases[thickness '[mm']])")
        page.write_formula("H2", "=ROWS(Cases)+COLUMNS(Cases[#All])")

    cells, report, solver = filled(made(tmp_path / "book.xlsx", build))
    assert report.not_computed == ()
    assert (cells["D3"], cells["D4"], cells["E3"], cells["H1"], cells["H2"]) == (3, 3, 6, 4, 6)
    assert solver.asked[1][1] == ((("thickness [mm]", "q]x"),), ((3.0, None),))


@pytest.mark.parametrize(
    "spelling",
    [
        "INGLE.PEAK",
        "INGLE_PEAK",
        "ingle.peak",
        "Ingle_Peak",
        "_xll.INGLE.PEAK",
        "_xludf.INGLE_PEAK",
        "_xldudf_INGLE_PEAK",
        "_xlfn._xludf.INGLE.PEAK",
        "[1]!INGLE_PEAK",
        "'C:\\add ins\\it''s.xlam'!INGLE_PEAK",
        "ingle.xlam!INGLE_PEAK",
        "@INGLE.PEAK",
        "+INGLE.PEAK",
    ],
)
@pytest.mark.parametrize("around", ["{}", "ROUND({},1)*2", "_xlfn.SINGLE({})"])
def test_spellings(tmp_path: Path, spelling: str, around: str) -> None:
    call = around.format(f"{spelling}(A1:A2,B1)")
    data = '<row r="1"><c r="A1"><v>1</v></c><c r="B1"><v>4</v></c><c r="C1"><f>{}</f></c></row>'
    data += '<row r="2"><c r="A2"><v>2</v></c></row>'
    cells, report, solver = filled(with_sheet_xml(tmp_path / "book.xlsx", data.format(call)))
    assert solver.asked == [("INGLE.PEAK", (((1.0,), (2.0,)), ((4.0,),)))]
    assert cells["C1"] == (14 if "ROUND" in around else 7)
    assert report.not_computed == ()
    assert report.ingle_cells == 1
    assert report.complete


def test_a_misspelt_function_is_listed(tmp_path: Path) -> None:
    cells, report, _ = filled(with_cells(tmp_path / "book.xlsx", {"A1": "=IFERROR(INGLE.PEEK(1),5)"}))
    assert cells["A1"] == 0
    assert [(each.cell, each.reason) for each in report.not_computed] == [("A1", "INGLE.PEEK is not a function of Ingle")]


def test_nested_calls(tmp_path: Path) -> None:
    book = with_cells(
        tmp_path / "book.xlsx",
        {
            "A1": 1,
            "B1": 2,
            "C1": "=IFERROR(ROUND(INGLE.PEAK(A1:B1)/7,3),-1)",
            "C2": "=INGLE.PEAK(INGLE.PEAK(A1:B1),A1*10)",
            "C3": "=INGLE.PEAK(INGLE.ASK(A1:B1))",
            "C4": "=SUM(INGLE.ASK(A1:B1))+MAX(INGLE.PEAK(A1),INGLE.FACE(B1))",
            "C5": "=INDEX(INGLE.ASK(A1:B1),1,2)",
            "C6": "=INGLE.PEAK(SUM(INGLE.ASK(A1:B1))*2)",
            "C7": '=IF(ISNUMBER(INGLE.PEAK(Z1)),"ok","bad")',
        },
    )
    cells, report, solver = filled(book)
    assert [cells[f"C{row}"] for row in range(1, 8)] == [0.429, 13, 5, 7, 2, 10, "ok"]
    assert report.not_computed == ()
    assert report.truncated == ()
    # Every function is asked once for each level of nesting; only the last call hangs on what came of the first round.
    assert solver.batches == [
        ("INGLE.PEAK", 4),
        ("INGLE.ASK", 4),
        ("INGLE.FACE", 1),
        ("INGLE.PEAK", 3),
        ("INGLE.PEAK", 1),
    ]


def test_chains_through_cells_settle(tmp_path: Path) -> None:
    cells = {
        "A1": "=INGLE.PEAK(1)",
        **{f"A{row}": f"=INGLE.PEAK(A{row - 1},1)" for row in range(2, 12)},
        "B1": "=A11*2",
    }
    values, report, _ = filled(with_cells(tmp_path / "book.xlsx", cells))
    assert values["A11"] == 11
    assert values["B1"] == 22
    assert report.not_computed == ()


def test_what_a_call_is_given(tmp_path: Path) -> None:
    def build(book: Any, page: Any) -> None:
        date = book.add_format({"num_format": "yyyy-mm-dd hh:mm"})
        clock = book.add_format({"num_format": 20})
        page.write("A1", 1.5)
        page.write("C1", "12,5")
        page.write_string("D1", "12.5")
        page.write("E1", True)
        page.write_datetime("F1", datetime.datetime(2024, 5, 6, 7, 8), date)
        page.write("G1", 0.25, clock)
        page.write_formula("H1", "=1/0", None, "#DIV/0!")
        page.write_formula("I1", '=""', None, "")
        page.write_formula("J1", "=F1+1", date, 0)
        page.write_rich_string("K1", "ri", book.add_format({"bold": True}), "ch")
        page.write_formula("A3", '=INGLE.PEAK(A1:K1,,"t""x",-2.5,TRUE,#N/A,{1,"a";-2,FALSE},(B1))')

    _, _, solver = filled(made(tmp_path / "book.xlsx", build))
    assert solver.last == (
        (
            (
                1.5, None, "12,5", "12.5", True, datetime.datetime(2024, 5, 6, 7, 8), datetime.time(6),
                CellError.DIV0, "", datetime.datetime(2024, 5, 7, 7, 8), "rich",
            ),
        ),
        (),
        (('t"x',),),
        ((-2.5,),),
        ((True,),),
        ((CellError.NA,),),
        ((1.0, "a"), (-2.0, False)),
        ((None,),),
    )  # fmt: skip


@pytest.mark.parametrize(
    ("argument", "grid"),
    [
        ("A1:C2", ((1.0, None, 3.0), (None, 5.0, 6.0))),
        ("A:A", ((1.0,), (None,))),
        ("2:2", ((None, 5.0, 6.0, None, None),)),
        ("INDEX(A1:C2,1,0)", ((1.0, None, 3.0),)),
        ("INDEX(A1:C2,2,1)", ((None,),)),
        ("INDEX(A1:C2,A1,2)", ((None,),)),
        ("IF(A1=1,A1:C1,A2:C2)", ((1.0, None, 3.0),)),
        ("IF(A1=2,A1:C1,A2:C2)", ((None, 5.0, 6.0),)),
        ("CHOOSE(2,A1,B1)", ((None,),)),
        ("VLOOKUP(1,A1:C2,2,FALSE)", ((None,),)),
        ("IFERROR(B1,1)", ((None,),)),
        ("A1:C1*2", ((2.0, 0.0, 6.0),)),
        ("ROUND(A1:C1/4,1)", ((0.3, 0.0, 0.8),)),
        ('A1&" [mm]"', (("1 [mm]",),)),
        ("A2", ((None,),)),
        ("@A1:A2", ((1.0,),)),
        ("C1/0", ((CellError.DIV0,),)),
        ("SUM(A1:C2)", ((15.0,),)),
        ("IF(A1=1,)", ((),)),
    ],
)
def test_arguments(tmp_path: Path, argument: str, grid: object) -> None:
    cells = {"A1": 1, "C1": 3, "B2": 5, "C2": 6, "E1": f"=IFERROR(INGLE.PEAK({argument}),-1)"}
    _, report, solver = filled(with_cells(tmp_path / "book.xlsx", cells))
    assert report.not_computed == ()
    assert solver.last == (grid if grid != ((),) else (),)


@pytest.mark.parametrize(
    ("formula", "reason"),
    [
        ("=AGGREGATE(9,6,A1:A2)", "it uses AGGREGATE, which the calculation engine does not have"),
        ("=IFERROR(STRANGE(A1),1)", "it uses STRANGE, which the calculation engine does not have"),
        ('=COUNTIF(A1:A6,"<>x")', CRITERION),
        ('=SUMIFS(A1:A6,A1:A6,">0",A1:A6,"<>"&D9)', CRITERION),
        ('=COUNTIF(A1:A6,"a~*")', CRITERION),
        ("=MAXA(A1,2)", "the calculation engine passes over truth values and texts of single cells in it (MAXA)"),
        ("=RAND()*2", "it draws random numbers (RAND)"),
        ("=A1:A3 A2:A5", "it takes the overlap of two ranges (a blank between them)"),
        ("=SUM((A1,A2))", "it joins ranges with a comma"),
        ("=SUM(A1:INDEX(A1:A5,3))", "it joins two references with a colon"),
        ("=[1]Sheet1!A1", "it refers to another workbook"),
        ("=nowhere*2", "it uses the name nowhere, which the workbook does not define"),
        ("=Gone!A1", "it refers to the sheet Gone, which the workbook does not have"),
        ("=SUM(Data:More!A1)", "it refers to several sheets at once"),
        ("=SUM(A1#)", "it refers to the spilled range of a cell (A1#)"),
        ("=SUMPRODUCT(--ISNUMBER(A1:A5))", "it uses ISNUMBER on whole arrays, which the calculation engine cannot"),
        ("=INGLE.PEAK(OFFSET(A1,1,0))", "an argument is made by OFFSET; give the range itself"),
        ("=SUM(_xlfn.MAP(A1:A2,_xlfn.LAMBDA(_xlpm.x,INGLE.PEAK(_xlpm.x))))", "it uses a LET or LAMBDA name inside an Ingle call"),
        (
            "=_xlfn.LET(_xlpm.f,_xlfn.LAMBDA(_xlpm.x,_xlpm.x+1),_xlpm.f(1))",
            "it gives a name to a function of its own (LET with LAMBDA)",
        ),
        ("=LET(a,1,b)", "it uses the name b, which the workbook does not define"),
        ("=LET(A1,1,2)", "the formula could not be read"),
        (
            "=LET(" + ",".join(f"x_{i},x_{i - 1}+x_{i - 1}" if i else "x_0,1+A1" for i in range(20)) + ",x_19)",
            "the names of its LET stand for too long an expression",
        ),
        ("=1+" + "(" * 65 + "1" + ")" * 65, "the formula is nested deeper than 64 levels"),
        ("=1" + "+1" * 4096, "the formula is longer than 8,192 characters"),
        ("=1+", "the formula could not be read"),
        ("=)", "the formula could not be read"),
        ("=A1=", "the formula could not be read"),
        ("=SIN(1,2,3)", "the calculation engine could not read it"),
    ],
)
def test_formulas_that_keep_their_value(tmp_path: Path, formula: str, reason: str) -> None:
    text = formula[1:].replace("&", "&amp;").replace("<", "&lt;")
    data = f'<row r="1"><c r="A1"><v>2</v></c><c r="B1"><f>{text}</f><v>5</v></c>'
    data += '<c r="C1"><f>B1*A1</f></c><c r="D1"><f>A1+1</f></c></row>'
    cells, report, _ = filled(with_sheet_xml(tmp_path / "book.xlsx", data))
    assert cells == {"A1": 2, "B1": 5, "C1": 10, "D1": 3}
    assert [(each.cell, each.reason, each.rests) for each in report.not_computed] == [
        ("B1", reason, False),
        ("C1", "rests on Data!B1, which was not computed", True),
    ]


def test_circles_are_named_and_left(tmp_path: Path) -> None:
    book = with_cells(
        tmp_path / "book.xlsx",
        {
            "A1": "=B1+1", "B1": "=INGLE.PEAK(C1)+1", "C1": "=A1*2", "D1": "=A1+1",
            "A3": "=B3+1", "B3": "=A3+1", "D3": "=5", "A5": "=INGLE.PEAK(A5,1)",
        },
    )  # fmt: skip
    cells, report, _ = filled(book)
    reasons = {each.cell: each.reason for each in report.not_computed}
    ring = "the cells go round in a circle: Data!A1, Data!B1, Data!C1"
    assert reasons == {
        "A1": ring, "B1": ring, "C1": ring, "D1": "rests on Data!A1, which was not computed",
        "A3": "the cells go round in a circle: Data!A3, Data!B3", "B3": "the cells go round in a circle: Data!A3, Data!B3",
        "A5": "Data!A5 rests on itself",
    }  # fmt: skip
    assert (cells["A1"], cells["D1"], cells["D3"]) == (0, 1, 5)


def test_rows_without_an_answer(tmp_path: Path) -> None:
    cells = {"A1": "=1/0", "B1": "=INGLE.PEAK(A1)", "B2": "=IFERROR(INGLE.PEAK(A1),0)", "B3": "=INGLE.PEAK(2)"}
    values, report, _ = filled(with_cells(tmp_path / "book.xlsx", cells))
    assert (values["B1"], values["B2"], values["B3"]) == ("#DIV/0!", 0, 2)
    assert [(each.sheet, each.cell, each.row, each.error, each.reason) for each in report.no_answers] == [
        ("Data", "B1", 1, "#DIV/0!", "a cell holds #DIV/0!"),
    ]
    # B2 shows a value.
    assert [(each.cell, each.row, each.error, each.reason) for each in report.hidden] == [
        ("B2", 2, "#DIV/0!", "a cell holds #DIV/0!")
    ]
    assert summary(report)[3] == "1 Ingle call without an answer stands inside formulas that show a value: Data!B2."


def test_dates_from_1904(tmp_path: Path) -> None:
    def build(book: Any, page: Any) -> None:
        page.write_datetime("A1", datetime.datetime(2024, 5, 6), book.add_format({"num_format": "dd/mm/yyyy"}))
        page.write_formula("B1", "=INGLE.PEAK(A1)")
        page.write_formula("B2", "=YEAR(A1)")

    _, report, solver = filled(made(tmp_path / "book.xlsx", build, date_1904=True))
    assert solver.last == (((datetime.datetime(2024, 5, 6),),),)
    assert [each.reason for each in report.not_computed] == ["it uses YEAR in a workbook that counts dates from 1904"]


def test_opening_reads_values_and_formulas(tmp_path: Path) -> None:
    book = open_book(with_cells(tmp_path / "book.xlsx", {"A1": 1, "B2": "=A1"}))
    assert [sheet.name for sheet in book.parts.sheets] == ["Data"]
    assert list(book.sheets[0].values.values()) == [1.0]
    assert [cell.text for cell in book.sheets[0].formulas] == ["A1"]

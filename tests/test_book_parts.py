"""The pieces: references, spellings, the parser, the tables of functions, dates and the report's words."""

from __future__ import annotations

import datetime
import re
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st
from ingle_addin import book as package
from ingle_addin.book import BookError, NoAnswer, NotComputed, Report, Truncated, summary
from ingle_addin.book.book import Formulas
from ingle_addin.book.criteria import is_odd, may_make_odd
from ingle_addin.book.dates import moment_of, serial_of
from ingle_addin.book.engine import Engine, Strange
from ingle_addin.book.formula import UnreadableError, join, parse, shifted, split
from ingle_addin.book.functions import (
    ARRAY_PARAMETERS,
    ARRAY_RETURNING,
    DATE_FUNCTIONS,
    ENGINE_FUNCTIONS,
    KEPT_FUNCTIONS,
    VECTORISED,
    takes_range,
)
from ingle_addin.book.markup import escape, unescape
from ingle_addin.book.parts import is_date_format
from ingle_addin.book.refs import Rect, cell_name, column_letters, column_number, key_of, parse_rect, place_of, shift
from ingle_addin.book.scan import FormulaCell, Sheet
from ingle_addin.book.spelling import Spelling, bare
from ingle_addin.cells import Cell, CellError
from openpyxl.formula import Tokenizer
from openpyxl.formula.translate import Translator
from openpyxl.styles.numbers import is_date_format as openpyxl_is_date_format


def test_the_public_names() -> None:
    assert sorted(package.__all__) == sorted(package._MODULES)
    assert all(getattr(package, name) is not None for name in package.__all__)
    with pytest.raises(AttributeError, match=r"^module 'ingle_addin.book' has no attribute 'nothing'$"):
        _ = package.nothing


def test_columns() -> None:
    assert [column_letters(number) for number in (1, 26, 27, 702, 703, 16384)] == ["A", "Z", "AA", "ZZ", "AAA", "XFD"]
    assert all(column_number(column_letters(number)) == number for number in range(1, 16385))
    assert [column_number(text) for text in ("XFE", "", "A1", "É")] == [0, 0, 0, 0]


@given(st.integers(1, 1_048_576), st.integers(1, 16_384))
def test_places(row: int, column: int) -> None:
    assert place_of(key_of(row, column)) == (row, column)
    assert parse_rect(cell_name(key_of(row, column))) == Rect(row, column, row, column)


@pytest.mark.parametrize(
    ("text", "rect"),
    [
        ("$B$3:A1", Rect(1, 1, 3, 2)),
        ("C:$A", Rect(1, 1, 1_048_576, 3)),
        ("$4:2", Rect(2, 1, 4, 16_384)),
        ("A0", None),
        ("A1048577", None),
        ("XFE1", None),
        ("A1:B", None),
        ("", None),
    ],
)
def test_rectangles(text: str, rect: Rect | None) -> None:
    assert parse_rect(text) == rect


@pytest.mark.parametrize(
    ("text", "moved"),
    [
        ("A1", "C4"),
        ("$A1", "$A4"),
        ("A$1", "C$1"),
        ("$A$1", "$A$1"),
        ("A:B", "C:D"),
        ("$A:B", "$A:D"),
        ("1:$2", "4:$2"),
    ],
)
def test_shift(text: str, moved: str) -> None:
    assert shift(text, 3, 2) == moved


@pytest.mark.parametrize("text", ["A1", "XFD1", "A:XFD", "1:1", "A1048576"])
def test_shift_off_the_sheet(text: str) -> None:
    assert shift(text, -1, 0) is None or shift(text, 1, 1) is None


names = st.sampled_from(["SUM", "LOG10", "_xlfn.CONCAT", "INGLE.PEAK", "'a b.xlam'!INGLE_PEAK"])
cells = st.builds(
    lambda sheet, a, column, b, row: f"{sheet}{a}{column}{b}{row}",
    st.sampled_from(["", "", "Sheet1!", "'A1 B2''s'!", "Q1!"]),
    st.sampled_from(["", "$"]),
    st.sampled_from(["A", "Z", "AA", "DZ"]),
    st.sampled_from(["", "$"]),
    st.integers(10, 999),
)
areas = st.builds(lambda cell, last: f"{cell}:$E{last}", cells, st.integers(10, 999))
leaves = st.one_of(
    cells,
    areas,
    st.sampled_from(
        [
            "1",
            "2.5",
            "1E5",
            ".5",
            "1.5E-3",
            '"a1"',
            '"x""A2"',
            "TRUE",
            "#N/A",
            "rate_1",
            "A1B",
            "Tbl[A1]",
            "$A:$B",
            "$1:$3",
        ]
    ),
    st.sampled_from(["{1,-2;3,4}", "Tbl[[#This Row],[A1 b]]", "Year2024"]),
)
formulas = st.recursive(
    leaves,
    lambda inner: st.one_of(
        st.builds(
            lambda a, op, b: f"{a}{op}{b}",
            inner,
            st.sampled_from(["+", " - ", "*", "/", "^", "&", "<>", ">=", "="]),
            inner,
        ),
        st.builds(lambda name, args: f"{name}({','.join(args)})", names, st.lists(inner, min_size=1, max_size=3)),
        st.builds("({})".format, inner),
        st.builds("-{}".format, inner),
        st.builds("{}%".format, inner),
    ),
    max_leaves=8,
)


@given(formulas)
def test_formulas_are_taken_apart_without_loss(text: str) -> None:
    shape, slots = split(text)
    assert join(shape, slots) == text
    parse(shape)
    # Every reference that an independent tokenizer finds is a slot (or two), except whole names.
    for token in Tokenizer("=" + text).items:
        if token.type == "OPERAND" and token.subtype in ("NUMBER", "TEXT"):
            assert token.value in slots


@given(formulas, st.integers(0, 50), st.integers(0, 20))
def test_copies_are_as_another_library_makes_them(text: str, down: int, right: int) -> None:
    shape, slots = split(text)
    moved = shifted(shape, slots, down, right)
    assert moved is not None
    target = f"{column_letters(1 + right)}{1 + down}"
    # That library also moves what only looks like a reference behind a table's bracket.
    if "[" not in text:
        assert "=" + join(shape, moved) == Translator("=" + text, origin="A1").translate_formula(target)


@given(formulas, st.integers(1, 99))
def test_remembered_shapes_are_the_true_ones(text: str, row: int) -> None:
    sheet = Sheet()
    taken = Formulas(sheet)
    for each in (row, row + 1, row):
        moved = text.replace("17", str(each))
        cell = FormulaCell(key_of(each, 1), moved, "normal", None, None, False, None, 0, 0)
        assert taken.take(cell) == split(moved)


@pytest.mark.parametrize(
    "text",
    ["", "1+", "*2", "(1", "1)", "SUM(1", "SUM(1;2)", "1 2", "A1 B1", "{1,2;3}", "{A1}", "'a", '"a', "a!", "A1#", "]"],
)
def test_what_is_no_formula(text: str) -> None:
    if text == "":
        assert parse("") == ()
        return
    with pytest.raises(UnreadableError):
        parse(*split(text)[:1])


def test_spelling() -> None:
    spelling = Spelling(["INGLE.PEAK"])
    assert bare("'C:\\x y\\a.xlam'!_xll.Ingle_Peak") == "INGLE_PEAK"
    assert spelling.canonical("_xlfn.SUM") is None
    assert spelling.canonical("INGLEPEAK") is None
    assert spelling.canonical("XINGLE.PEAK") is None
    assert spelling.is_misspelt("_xll.INGLE_PEEK")
    assert not spelling.is_misspelt("INGLED")
    assert not spelling.is_misspelt("INGLE_PEAK")


def test_the_engine_has_the_functions_it_is_given(tmp_path: Path) -> None:
    with Engine(tmp_path / "book.xlsx").open(["Sheet1"]) as engine:
        functions = sorted(ENGINE_FUNCTIONS)
        keys = [key_of(row, 1) for row in range(1, len(functions) + 1)]
        engine.put_formulas(0, keys, [f"{name}()" for name in functions])
        # One more, to see that the question can fail.
        engine.put_formulas(0, [key_of(1, 3)], ["NOSUCH()"])
        engine.evaluate()
        answers = engine.values(0, keys)
        assert engine.values(0, [key_of(1, 3)]) == [CellError.NAME]
    lacking = [name for name, answer in zip(functions, answers, strict=True) if answer in (CellError.NAME, "#N/IMPL!")]
    assert lacking == []


def test_the_engine_works_element_by_element_where_it_is_said_to(tmp_path: Path) -> None:
    """Each of the functions, given an array for its first argument, answers as for its elements one by one."""
    samples = {
        "LEFT": '"abc"',
        "REPLACE": '"abcdef",2,1,"x"',
        "REPLACEB": '"abcdef",2,1,"x"',
        "SUBSTITUTE": '"aba","a","x"',
    }
    samples |= {
        "MID": '"abcdef",2,2',
        "MIDB": '"abcdef",2,2',
        "DATE": "2024,1,2",
        "POWER": "2,3",
        "REPT": '"a",2',
        "EXACT": '"a","A"',
    }
    with Engine(tmp_path / "book.xlsx").open(["Sheet1"]) as engine:
        for row, (number, text) in enumerate([(0.25, "abac"), (0.5, "bcd"), (0.75, "a")], 1):
            engine.put(0, [(key_of(row, 1), number), (key_of(row, 2), text), (key_of(row, 3), 2000.0 + row)])
        for place, name in enumerate(sorted(VECTORISED), 1):
            column = (
                "C"
                if name in ("DATE", "ACOT", "ACOTH", "SEC", "SECH", "ISOWEEKNUM", "DAY", "MONTH", "YEAR", "WEEKDAY", "ODD")
                else "A"
            )
            column = (
                "B"
                if samples.get(name, "").startswith('"') or name in ("LEN", "UPPER", "LOWER", "TRIM", "PROPER", "CLEAN")
                else column
            )
            rest = samples.get(name, "").partition(",")[2]
            rest = "," + rest if rest else ""
            texts = [f"INDEX({name}({column}1:{column}3{rest}),{row},1)" for row in (1, 2, 3)]
            texts += [f"{name}({column}{row}{rest})" for row in (1, 2, 3)]
            keys = [key_of(place, 10 + index) for index in range(6)]
            engine.put_formulas(0, keys, texts)
            engine.evaluate()
            answers = engine.values(0, keys)
            assert answers[:3] == answers[3:], name


def test_the_tables_of_functions_agree() -> None:
    assert VECTORISED | ARRAY_PARAMETERS | ARRAY_RETURNING | DATE_FUNCTIONS | KEPT_FUNCTIONS.keys() <= ENGINE_FUNCTIONS
    assert not any(takes_range(name, 0) for name in VECTORISED)
    assert takes_range("SUM", 200)
    assert takes_range("NPV", 3)
    assert not takes_range("NPV", 0)
    assert not takes_range("NO SUCH", 0)


def test_engine_values(tmp_path: Path) -> None:
    with Engine(tmp_path / "book.xlsx").open(["it's", "x" * 31, "Data"]) as engine:
        values: list[Cell] = [1.5, "=1+1", "#N/A", True, CellError.NUM, "", None, 3, float("inf")]
        keys = [key_of(1, column) for column in range(1, 10)]
        engine.put(2, zip(keys, values, strict=True))
        engine.put_formulas(2, [key_of(2, 1), key_of(3, 1)], ["A2", "SUM('it''s'!A1)"])
        engine.evaluate()
        assert engine.values(2, keys) == [1.5, "=1+1", "#N/A", True, CellError.NUM, "", None, 3.0, CellError.NUM]
        assert engine.values(2, [key_of(2, 1)]) == [Strange("#CIRC!")]


def test_a_sheet_name_that_the_engine_refuses(tmp_path: Path) -> None:
    with Engine(tmp_path / "book.xlsx").open(["Data", "a/b"]) as engine, pytest.raises(BookError) as caught:
        engine.values(0, [key_of(1, 1)])
    assert str(caught.value) == f"{tmp_path / 'book.xlsx'}: the calculation engine takes no sheet of the name a/b; rename it"


@pytest.mark.parametrize(
    "code",
    [
        "General",
        "0.00",
        "0.00E+00",
        '0.0" mm"',
        "[Red]0",
        "yyyy-mm-dd",
        "[h]:mm",
        "h:mm AM/PM",
        '#,##0.00\\ "days"',
        "[$-409]d/m/yy",
        "@",
        "0_d",
        "[>=100]0;0.0",
    ],
)
def test_date_formats(code: str) -> None:
    expected = False if code in ("0_d", '#,##0.00\\ "days"') else openpyxl_is_date_format(code)
    assert is_date_format(code) == expected


@pytest.mark.parametrize(
    ("serial", "moment"),
    [
        (0.75, datetime.time(18)),
        (1.0, datetime.datetime(1900, 1, 1)),
        (59.0, datetime.datetime(1900, 2, 28)),
        (61.0, datetime.datetime(1900, 3, 1)),
        (45352.5, datetime.datetime(2024, 3, 1, 12)),
        (-1.0, -1.0),
        (3e6, 3e6),
    ],
)
def test_dates(serial: float, moment: object) -> None:
    assert moment_of(serial, False) == moment
    if isinstance(moment, datetime.datetime):
        assert serial_of(moment, False) == serial
        assert moment_of(serial_of(moment, True), True) == moment or moment < datetime.datetime(1904, 1, 1)


@given(st.text(st.characters(exclude_categories=["Cs"])))
def test_escapes(text: str) -> None:
    written = escape(text)
    assert re.search("[\x00-\x08\x0b-\x1f<>]", written) is None
    plain = written.replace("&lt;", "<").replace("&gt;", ">").replace("&amp;", "&")
    assert unescape(plain) == text


def test_summary() -> None:
    report = Report(
        book=Path("case.xlsx"),
        out=Path("case.filled.xlsx"),
        ingle_cells=1234,
        ordinary_cells=1,
        changed_cells=2,
        no_answers=tuple(NoAnswer("Data", f"D{row}", row, "#N/A", "thickness is blank") for row in range(2, 14)),
        not_computed=(
            NotComputed("Data", "A1", "it uses AGGREGATE, which the calculation engine does not have"),
            NotComputed("Data", "A2", "rests on Data!A1, which was not computed", rests=True),
        ),
        truncated=(Truncated("Data", "B1", 3, 2, "B1:B2"),),
        backup=Path("case.xlsx.bak"),
    )
    assert summary(report) == [
        "1,234 cells with Ingle formulas and 1 other formula computed; 2 values changed.",
        "12 rows without an answer:",
        *(f"  Data!D{row} #N/A: thickness is blank" for row in range(2, 12)),
        "  … and 2 more",
        "1 formula not computed; the stored value was kept:",
        "  Data!A1: it uses AGGREGATE, which the calculation engine does not have",
        "1 formula computed from such kept values:",
        "  Data!A2: rests on Data!A1, which was not computed",
        "1 answer larger than the cells to hold it:",
        "  Data!B1: the answer has 3 rows and 2 columns, but the formula fills only B1:B2",
        "The workbook as it was is kept in case.xlsx.bak.",
        "Written to case.filled.xlsx.",
    ]


@pytest.mark.parametrize(
    ("criterion", "odd"),
    [
        ("<>x", True), ("<>", False), ("<>5", False), ("<>-1.5E3", False), ("<>TRUE", False), ("<>#N/A", False), ("<>x*", False),
        ("<>?y", False), ("<> ", True), ("<>1/2", True), ("~*", True), ("=x", False), ("x", False), (">3", False), ("", False),
    ],
)  # fmt: skip
def test_criteria(criterion: str, odd: bool) -> None:
    assert is_odd(criterion) == odd


@pytest.mark.parametrize(
    ("formula", "may"),
    [('"<>"&A1', True), ('"<>"', False), ('"<>3"', False), ('IF(A1<>B1,"<>x")', True), ('"a~b"', True), ("A1<>B1", False)],
)
def test_formulas_that_may_make_such_criteria(formula: str, may: bool) -> None:
    assert may_make_odd(formula) == may


def test_the_engine_still_reads_those_criteria_wrongly(tmp_path: Path) -> None:
    """When this fails the engine has been mended, and book/criteria.py can go. Five of six cells do not hold x."""
    with Engine(tmp_path / "book.xlsx").open(["Data"]) as engine:
        engine.put(0, [(key_of(1, 1), "x"), (key_of(3, 1), "y"), (key_of(4, 1), 5.0), (key_of(5, 1), True)])
        texts = ["<>x", "<>x*", "~x", "<>5", "<>"]
        keys = [key_of(row, 3) for row in range(1, 6)]
        engine.put_formulas(0, keys, [f'COUNTIF(A1:A6,"{text}")' for text in texts])
        engine.evaluate()
        assert engine.values(0, keys) == [1.0, 5.0, 0.0, 5.0, 4.0]

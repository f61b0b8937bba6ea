"""Scan and lifter under random input: they refuse or read, they never fail, and what they say is one line.

The ordinary tests run every seed once. The long ones mutate them for INGLE_FUZZ_SECONDS each (45 if it is not set; ten
minutes before a release: INGLE_FUZZ_SECONDS=600 pytest -m long tests/test_book_fuzz.py). A fault's input belongs into
book_seeds.py.
"""

from __future__ import annotations

import datetime
import os
import time
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import pytest
from book_samples import FUNCTIONS, MAIN, Solver, with_sheet_xml
from book_seeds import FORMULAS, SHEETS
from hypothesis import HealthCheck, given, seed, settings
from hypothesis import strategies as st
from ingle_addin.book import BookError, fill, open_book
from ingle_addin.book.filling import same
from ingle_addin.book.formula import UnreadableError, check_size, split
from ingle_addin.book.lift import Lifter
from ingle_addin.book.parts import DefinedName, Parts, SheetPart, Table
from ingle_addin.book.plan import render
from ingle_addin.book.quick import quick_scan
from ingle_addin.book.refs import Rect, key_of
from ingle_addin.book.resolve import Resolver
from ingle_addin.book.scan import FormulaCell, Sheet, scan_sheet
from ingle_addin.book.spelling import Spelling
from ingle_addin.book.splice import NotWritableError, Span, splice
from ingle_addin.cells import CellError

SECONDS = float(os.environ.get("INGLE_FUZZ_SECONDS", "45"))
ROUND = 200  # examples between two looks at the clock
PATH = Path("book.xlsx")


def mutated(seeds: Sequence[str], pieces: Sequence[str]) -> st.SearchStrategy[str]:
    """A seed cut and glued: spans of it left out, doubled or swapped for pieces of others."""

    def glue(texts: list[str], cuts: list[tuple[int, int, int, str]]) -> str:
        text = texts[0]
        for start, length, kind, piece in cuts:
            at = start % (len(text) + 1)
            end = min(len(text), at + length)
            middle = (piece, "", text[at:end] * 2, texts[-1][at:end], piece + text[at:end])[kind]
            text = text[:at] + middle + text[end:]
        return text

    cut = st.tuples(st.integers(0, 400), st.integers(0, 30), st.integers(0, 4), st.sampled_from(pieces) | st.text(max_size=4))
    return st.builds(glue, st.lists(st.sampled_from(seeds), min_size=1, max_size=2), st.lists(cut, max_size=6))


XML_PIECES = (
    "<", ">", "/", "&", "&lt;", "&#0;", "&#x41;", "&e;", '"', "'", "=", "]]>", "<![CDATA[", "<!--", "-->", "<?x?>", "<v>",
    "</v>", "<f>",
    "</f>", "<f/>", "<c>", "</c>", "<c/>", '<c r="XFD1048576">', '<c r="A0">', "<row>", "</row>", "<is>", "<t>", ' t="s"', ' t="n"',
    ' r="A1"', ' r="1048577"', ' s="99999"', ' t="array"', ' ref="A1:XFD1048576"', ' ref="B2"', ' si="-1"', "nan", "1e999", "-0",
    "_x0000_",
    "x:c", ' xmlns="u"', f' xmlns="{MAIN}"', "\x00", "\r", "\ufeff", "\ud7ff", "9" * 400, "</sheetData>", "<sheetData>",
)  # fmt: skip
FORMULA_PIECES = (
    "(", ")", "{", "}", "[", "]", "[@", "#This Row", "'", '"', "!", "@", "#", "%", ",", ";", ":", " ", "$", "&", "^", "-", "<>",
    ">=", "A1", "$A$1",
    "A:A", "1:1", "XFD1048576", "A1048577", "INGLE.PEAK(", "INGLE_ASK(", "_xll.", "_xlfn.", "LET(x,", "LAMBDA(x,", "x", "IF(",
    "SUM(", "INDEX(",
    "CHOOSE(1,", "Cases[", "name", "1E400", "1e", ".5", "TRUE", "#N/A", "\x01", "\x05", "\n", "é", "[1]!", "Data!", "'O''S'!",
    "OFFSET(", "SINGLE(",
)  # fmt: skip


def for_seconds(strategy: st.SearchStrategy[Any], check: Callable[[Any], None]) -> int:
    """Try new examples, round after round, until the time is over; how many."""
    until, rounds = time.monotonic() + SECONDS, 0
    while time.monotonic() < until:
        quiet = settings(max_examples=ROUND, deadline=None, database=None, suppress_health_check=list(HealthCheck))
        seed(rounds)(quiet(given(strategy)(check)))()
        rounds += 1
    return rounds * ROUND


# The scan, and the splicing that rests on it.


def scanned(content: bytes) -> Sheet | None:
    """What the general scan reads, in pieces of a hundred bytes; the quick one must agree if it reads it."""
    parts = Parts(texts=["shared"], date_styles=frozenset([1]))

    def attempt(scan: Callable[[], Sheet | None]) -> Sheet | str | None:
        try:
            return scan()
        except BookError as error:
            return str(error)

    general = attempt(lambda: scan_sheet([content[at : at + 100] for at in range(0, len(content), 100)], parts, PATH, "part"))
    quick = attempt(lambda: quick_scan(content, parts, PATH, "part"))
    assert all(len(each.splitlines()) == 1 for each in (general, quick) if isinstance(each, str))
    if isinstance(quick, Sheet):
        assert isinstance(general, Sheet)
        for name in Sheet.__slots__:
            if name != "formulas":
                assert getattr(quick, name) == getattr(general, name), name
        for one, two in zip(quick.formulas, general.formulas, strict=True):
            assert [getattr(one, name) for name in FormulaCell.__slots__] == [getattr(two, name) for name in FormulaCell.__slots__]
    elif isinstance(quick, str):
        assert general == quick
    return general if isinstance(general, Sheet) else None


def scan_and_splice(data: str) -> None:
    content = f'<?xml version="1.0"?><worksheet xmlns="{MAIN}"><sheetData>{data}</sheetData></worksheet>'.encode(errors="replace")
    sheet = scanned(content)
    if sheet is None:
        return
    values = [1.5, "a<b", True, CellError.NUM, ""]
    new = {cell.key: values[index % 5] for index, cell in enumerate(sheet.formulas)}
    if len(new) < len(sheet.formulas):
        return  # a cell that stands there twice
    try:
        after = splice(content, {cell.key: (Span(cell.start, cell.end), new[cell.key]) for cell in sheet.formulas})
    except NotWritableError:
        return  # told as a sheet written in a way that cannot be filled
    again = scanned(after)
    assert again is not None
    assert [cell.text for cell in again.formulas] == [cell.text for cell in sheet.formulas]
    assert all(same(cell.stored, new[cell.key]) for cell in again.formulas)
    assert again.values == sheet.values
    assert {key: child[0] for key, child in again.children.items()} == {key: child[0] for key, child in sheet.children.items()}


@pytest.mark.parametrize("data", SHEETS)
def test_scan_of_a_seed(data: str) -> None:
    scan_and_splice(data)


@pytest.mark.long
def test_scan_of_anything() -> None:
    print(for_seconds(mutated(SHEETS, XML_PIECES), scan_and_splice), "sheets scanned")


# The lifter.

TABLE = Table("Cases", 0, Rect(1, 1, 9, 3), 1, 0, ("a [mm]", "a", "b"))
NAMES = [DefinedName("name", None, "Data!$A$1:$A$3"), DefinedName("made", None, "LAMBDA(x,x+1)"), DefinedName("me", None, "me+1")]
LIFTER = Lifter(
    Resolver(Parts(sheets=[SheetPart("Data", "a"), SheetPart("O'S", "b")], names=NAMES, tables=[TABLE])),
    Spelling(FUNCTIONS), ("Data", "O'S"), date1904=False, hidden_rows=False, now=datetime.datetime(2024, 1, 1),
)  # fmt: skip


def lift(formula: str) -> None:
    """A plan for a cell and for an array; where there is one, a text for the engine."""
    try:
        check_size(formula)
    except UnreadableError:
        return
    if not formula.strip():
        return  # told before a plan is made
    shape, slots = split(formula)
    for in_array in (False, True):
        plan = LIFTER.plan(shape, 0, (2, 5), in_array=in_array)
        if plan.keep is not None:
            assert plan.keep
            assert len(plan.keep.splitlines()) == 1
            continue
        text = render(plan.pieces, slots, key_of(2, 5), (0, 0), lambda *_: "Z9")
        assert isinstance(text, str)
        assert plan.whole == (not plan.pieces)


@pytest.mark.parametrize("formula", FORMULAS)
def test_lifting_a_seed(formula: str) -> None:
    lift(formula)


@pytest.mark.long
def test_lifting_anything() -> None:
    print(for_seconds(mutated(FORMULAS, FORMULA_PIECES), lift), "formulas lifted")


@pytest.mark.long
def test_filling_anything(tmp_path: Path) -> None:
    """Fifty formulas a workbook, through the engine and back into the file."""

    def attempt(formulas: list[str]) -> None:
        cells = "".join(
            f'<row r="{row}"><c r="A{row}"><v>{row}</v></c><c r="E{row}"><f>{escaped(formula)}</f><v>7</v></c></row>'
            for row, formula in enumerate(formulas, 1)
        )
        book, out = with_sheet_xml(tmp_path / "book.xlsx", cells), tmp_path / "out.xlsx"
        report = fill(book, out, functions=FUNCTIONS, solve=Solver())
        assert report.ingle_cells + report.ordinary_cells + sum(not each.rests for each in report.not_computed) == len(formulas)
        assert [cell.text for cell in open_book(out).sheets[0].formulas] == [cell.text for cell in open_book(book).sheets[0].formulas]

    def escaped(text: str) -> str:
        kept = "".join(letter for letter in text if letter >= " " and letter < "\ud800")
        return kept.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")

    global ROUND
    usual, ROUND = ROUND, 10
    try:
        print(for_seconds(st.lists(mutated(FORMULAS, FORMULA_PIECES), min_size=1, max_size=50), attempt), "workbooks filled")
    finally:
        ROUND = usual

"""Nothing but values changes in workbooks full of charts, pictures, rules, tables, macros and foreign parts."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from book_samples import FUNCTIONS, Solver, parts_of, shown
from ingle_addin.book import fill, respell
from rich_books import (
    OFFICE,
    PLAIN,
    assert_only_values_changed,
    by_calc,
    with_foreign_parts,
    with_macros,
    with_prefixes,
    without_values,
    written,
)

SHEET = "xl/worksheets/sheet1.xml"


def fills(book: Path, touched: set[str]) -> None:
    """Fill it, look at what changed, fill it again: nothing changes any more; respell it there and back."""
    out = book.with_name("out" + book.suffix)
    report = fill(book, out, functions=FUNCTIONS, solve=Solver())
    assert report.not_computed == ()
    assert report.ingle_cells >= 6
    assert_only_values_changed(book, out, touched)
    values = shown(out)
    assert [values[f"D{row}"] for row in range(2, 8)] == [row * 2.5 for row in range(2, 8)]
    assert [values[f"E{row}"] for row in (4, 5)] == [pytest.approx(10 / 3), "<hot> & high"]
    again = fill(out, book.with_name("again" + book.suffix), functions=FUNCTIONS, solve=Solver())
    assert again.changed_cells == 0
    assert again.out is not None
    assert again.out.read_bytes() == out.read_bytes()
    # Calc writes names it does not know in small letters, so one spelling is the starting point.
    start, there, back = (book.with_name(name + book.suffix) for name in ("start", "there", "back"))
    respell(book, "dotted", start, functions=FUNCTIONS)
    respell(start, "underscored", there, functions=FUNCTIONS)
    assert b"INGLE." not in parts_of(there)[SHEET]
    respell(there, "dotted", back, functions=FUNCTIONS)
    assert parts_of(back) == parts_of(start)
    assert parts_of(start)[SHEET].lower() == parts_of(book)[SHEET].lower()


@pytest.mark.parametrize("name", PLAIN)
def test_by_xlsxwriter(tmp_path: Path, name: str) -> None:
    touched = {SHEET, "xl/worksheets/sheet2.xml"} if name == "charts" else {SHEET}
    fills(written(tmp_path / "book.xlsx", PLAIN[name]), touched)


@pytest.mark.parametrize("make", [with_macros, with_foreign_parts, with_prefixes], ids=lambda make: make.__name__)
def test_by_hand(tmp_path: Path, make: Callable[[Path], Path]) -> None:
    fills(make(tmp_path / ("book.xlsm" if make is with_macros else "book.xlsx")), {SHEET})


@pytest.mark.skipif(OFFICE is None, reason="LibreOffice Calc is not installed")
def test_by_calc(tmp_path: Path) -> None:
    book = by_calc(tmp_path / "book.xlsx")
    fills(book, {SHEET})


def test_the_corpus_holds_what_it_should(tmp_path: Path) -> None:
    books = [written(tmp_path / f"{each}.xlsx", build) for each, build in PLAIN.items()]
    books += [with_macros(tmp_path / "book.xlsm"), with_foreign_parts(tmp_path / "foreign.xlsx")]
    parts = {name for book in books for name in parts_of(book)}
    for part in ("xl/charts/chart10.xml", "xl/chartsheets/sheet1.xml", "xl/drawings/vmlDrawing1.vml", "xl/comments1.xml",
                 "xl/media/image1.png", "xl/richData/rdrichvalue.xml", "xl/tables/table1.xml", "xl/metadata.xml", "xl/vbaProject.bin",
                 "docProps/custom.xml", "xl/slicers/slicer1.xml", "customXml/item1.xml"):  # fmt: skip
        assert part in parts, part


def test_a_lost_letter_is_seen(tmp_path: Path) -> None:
    """The comparison can fail: a changed formula, style or text is not mistaken for a value."""
    content = parts_of(written(tmp_path / "book.xlsx", PLAIN["rules"]))[SHEET]
    for old, new in ((b"A2+B2", b"A2-B2"), (b' s="1"', b' s="2"'), (b"<v>3</v>", b"<v>4</v>"), (b"How much?", b"How many?")):
        assert old in content
        assert without_values(content) != without_values(content.replace(old, new, 1))
    changed = content.replace(b"<f>A2+B2</f><v>0</v>", b"<f>A2+B2</f><v>1</v>")
    assert changed != content
    assert without_values(content) == without_values(changed)

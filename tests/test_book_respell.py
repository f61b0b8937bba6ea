"""`ingle respell`: one spelling turned into the other wherever a formula stands; every other byte stays."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from book_samples import FUNCTIONS, Solver, filled, made, parts_of, rewritten, sheet_xml, with_cells, with_sheet_xml
from hypothesis import example, given
from hypothesis import strategies as st
from ingle_addin.book import Respelled, check, respell, respell_summary
from ingle_addin.book.formula_bytes import formula_texts
from test_command import book as parts_book
from test_command import typed
from test_workbooks import COMMITTED


def respelled(book: Path, to: Any, **options: Any) -> Respelled:
    return respell(book, to, book.with_name("out.xlsx"), functions=FUNCTIONS, **options)


@pytest.mark.parametrize(
    ("formula", "dotted"),
    [
        ("INGLE_PEAK(A1)", "INGLE.PEAK(A1)"),
        ("ingle_peak(A1)", "INGLE.PEAK(A1)"),
        ("INGLE.PEAK(A1)", "INGLE.PEAK(A1)"),
        ("Ingle.Peak (A1)", "INGLE.PEAK (A1)"),
        ("_xll.INGLE_PEAK(A1)", "INGLE.PEAK(A1)"),
        ("_xlfn._xludf.INGLE.PEAK(A1)", "INGLE.PEAK(A1)"),
        ("_xldudf_INGLE_PEAK(A1)", "INGLE.PEAK(A1)"),
        ("[1]!INGLE_PEAK(A1)", "INGLE.PEAK(A1)"),
        ("'C:\\add ins\\it''s.xlam'!INGLE_PEAK(A1)", "INGLE.PEAK(A1)"),
        ("ingle.xlam!INGLE_PEAK(A1)", "INGLE.PEAK(A1)"),
        ("@INGLE_PEAK(A1)", "@INGLE.PEAK(A1)"),
        ("_xlfn.SINGLE(INGLE_PEAK(A1))", "_xlfn.SINGLE(INGLE.PEAK(A1))"),
        ("1+INGLE_PEAK(INGLE_FACE(A1),2)*INGLE_WHY(3)", "1+INGLE.PEAK(INGLE.FACE(A1),2)*INGLE.WHY(3)"),
        # What only looks like a call.
        ('"INGLE_PEAK(A1)"&A1', '"INGLE_PEAK(A1)"&A1'),
        ('"a""INGLE_PEAK(""b"&INGLE_PEAK(A1)', '"a""INGLE_PEAK(""b"&INGLE.PEAK(A1)'),
        ("'INGLE_PEAK(1)'!A1", "'INGLE_PEAK(1)'!A1"),
        ("T[INGLE_PEAK(1)]", "T[INGLE_PEAK(1)]"),
        ("MYINGLE_PEAK(A1)", "MYINGLE_PEAK(A1)"),
        ("INGLE_PEAKS(A1)", "INGLE_PEAKS(A1)"),
        ("INGLE_PEAK+1", "INGLE_PEAK+1"),
        ("My.INGLE_PEAK(A1)", "My.INGLE_PEAK(A1)"),
    ],
)
def test_respelling_a_formula(tmp_path: Path, formula: str, dotted: str) -> None:
    def plain(text: str) -> str:
        return text.replace("&", "&amp;")

    def quoted(text: str) -> str:
        return plain(text).replace('"', "&quot;").replace("'", "&#39;")

    for name, escape in {"plain": plain, "quoted": quoted}.items():
        data = '<row r="1"><c r="A1"><v>1</v></c><c r="B1" t="str"><f>{}</f><v>é INGLE_PEAK(1)</v></c></row>'
        book = with_sheet_xml(tmp_path / f"{name}.xlsx", data.format(escape(formula)))
        done = respelled(book, "dotted")
        assert sheet_xml(tmp_path / "out.xlsx") == sheet_xml(book).replace(escape(formula), escape(dotted), 1)
        assert (done.calls > 0) == (formula != dotted)
        respell(tmp_path / "out.xlsx", "underscored", tmp_path / "back.xlsx", functions=FUNCTIONS)
        assert "INGLE." not in sheet_xml(tmp_path / "back.xlsx").replace(escape(dotted.replace("INGLE.", "INGLE_")), "")


@pytest.mark.parametrize(
    ("written", "expected"),
    [
        ("<![CDATA[INGLE_PEAK(A1)&INGLE_WHY(1)]]>", "<![CDATA[INGLE.PEAK(A1)&INGLE.WHY(1)]]>"),
        ("INGLE_<!-- INGLE_WHY( -->PEAK(A1)", "INGLE.PEAK(A1)"),
        ("ING&#76;E_PEAK(A1)", "INGLE.PEAK(A1)"),
        ("INGLE_PEAK(A1)&amp;\r\n&quot;é&quot;&amp;INGLE_WHY(&lt;)", "INGLE.PEAK(A1)&amp;\r\n&quot;é&quot;&amp;INGLE.WHY(&lt;)"),
        ('"é€😀"&amp;INGLE_PEAK(1)', '"é€😀"&amp;INGLE.PEAK(1)'),
    ],
)
def test_however_the_letters_are_written(tmp_path: Path, written: str, expected: str) -> None:
    data = '<row r="1"><c r="A1"><f>{}</f></c></row><!-- INGLE_PEAK(1) -->'
    book = with_sheet_xml(tmp_path / "book.xlsx", data.format(written))
    respelled(book, "dotted")
    assert parts_of(tmp_path / "out.xlsx")["xl/worksheets/sheet1.xml"].decode() == parts_of(book)["xl/worksheets/sheet1.xml"].decode(
    ).replace(written, expected)  # fmt: skip


@example("a&b", False)
@given(st.text(st.characters(exclude_categories=["Cs", "Cc"]), max_size=30), st.booleans())
def test_places_of_letters(text: str, as_numbers: bool) -> None:
    def written(letter: str) -> str:
        return f"&#{ord(letter)};" if as_numbers or letter in "<&>" else letter

    content = f"<a><f>{''.join(map(written, text))}</f></a>".encode()
    (found,) = formula_texts(content, Path("book.xlsx"), "part")
    assert found.text == text
    for place, letter in enumerate(text):
        start, end = found.span(place, place + 1)
        assert content[start:end] == written(letter).encode()


def rich(path: Path) -> Path:
    def build(book: Any, page: Any) -> None:
        page.write_row("A1", [1, 2])
        page.write_formula("C1", "=INGLE_PEAK(A1:B1)", None, 3)
        page.write("E1", "=INGLE_PEAK(A1)", None, 1)
        page.write_string("E2", "=INGLE_PEAK(A1) is a text")
        page.conditional_format("A1:B1", {"type": "formula", "criteria": "=INGLE_PEAK(A1)>5", "format": book.add_format({"bold": 1})})
        page.data_validation("A2", {"validate": "custom", "value": "=INGLE_PEAK(A2)>5"})
        page.add_table("A5:B7", {"columns": [{"header": "x"}, {"header": "y", "formula": "=INGLE_PEAK([@x])"}]})
        book.define_name("hot", "=INGLE_PEAK(Data!$A$1)")
        book.add_worksheet("Other").write_formula("A1", "=1+1", None, 2)

    return made(path, build)


def test_everywhere_and_nothing_else(tmp_path: Path) -> None:
    book = rich(tmp_path / "book.xlsx")
    done = respelled(book, "dotted")
    before, after = parts_of(book), parts_of(tmp_path / "out.xlsx")
    assert list(before) == list(after)
    changed = {name for name in before if before[name] != after[name]}
    assert changed == {"xl/workbook.xml", "xl/worksheets/sheet1.xml", "xl/tables/table1.xml"}
    for name in changed:
        assert after[name].decode() == before[name].decode().replace("INGLE_PEAK", "INGLE.PEAK")
    assert b"INGLE_PEAK(A1) is a text" in after["xl/sharedStrings.xml"]
    # Two cells and two rows of the table, the format and the rule; the table and the name.
    assert (done.calls, done.formulas, done.elsewhere) == (8, 6, 2)
    respell(tmp_path / "out.xlsx", "underscored", tmp_path / "back.xlsx", functions=FUNCTIONS)
    assert parts_of(tmp_path / "back.xlsx") == before


def test_the_shipped_workbook_there_and_back(tmp_path: Path) -> None:
    book = tmp_path / "busbars.xlsx"
    book.write_bytes(COMMITTED.read_bytes())
    assert typed(tmp_path, "respell", "busbars.xlsx", "--to", "underscored").out == [
        "338 Ingle calls are now spelled as in INGLE_PEAK, in 338 formulas of sheets; the values are as they were.",
        "Written to busbars.underscored.xlsx.",
    ]
    assert "INGLE." not in "".join(
        cell for cell in map(str, parts_of(tmp_path / "busbars.underscored.xlsx")["xl/worksheets/sheet1.xml"])
    )
    assert typed(tmp_path, "respell", "busbars.underscored.xlsx", "--to", "dotted", "--in-place").code == 0
    assert parts_of(tmp_path / "busbars.underscored.xlsx") == parts_of(book)


def test_values_are_computed_from_either_spelling(tmp_path: Path) -> None:
    book = with_cells(tmp_path / "book.xlsx", {"A1": 2, "B1": "=INGLE.PEAK(A1)*2", "B2": '=INGLE.WHY("x")'})
    respelled(book, "underscored")
    (tmp_path / "out.xlsx").rename(tmp_path / "under.xlsx")
    cells, _, _ = filled(tmp_path / "under.xlsx")
    assert cells["B1"] == 4
    places = dict.fromkeys(FUNCTIONS, 0)
    assert check(tmp_path / "out.xlsx", functions=places, solve=Solver()).differences == ()


def test_nothing_to_do_in_place_leaves_the_file_alone(tmp_path: Path) -> None:
    path = parts_book(tmp_path / "parts.xlsx")
    before = path.stat()
    ran = typed(tmp_path, "respell", "parts.xlsx", "--to", "dotted", "--in-place")
    assert (ran.code, ran.out) == (0, ["Every Ingle call is spelled as in INGLE.PEAK already; nothing was changed."])
    assert (path.stat().st_mtime_ns, path.stat().st_ino) == (before.st_mtime_ns, before.st_ino)
    assert [each.name for each in tmp_path.iterdir()] == ["parts.xlsx"]


def test_words(tmp_path: Path) -> None:
    def change(name: str, content: bytes) -> bytes:
        return content.replace(b"INGLE_PEAK", b"INGLE_PEEK", 1) if name.endswith("sheet1.xml") else content

    book = rewritten(rich(tmp_path / "plain.xlsx"), tmp_path / "book.xlsx", change)
    done = respell(book, "dotted", functions=FUNCTIONS, in_place=True)
    assert [line.replace(str(tmp_path), "DIR") for line in respell_summary(done)] == [
        "7 Ingle calls are now spelled as in INGLE.PEAK, in 5 formulas of sheets and 2 elsewhere (names, tables, formats, rules); "
        "the values are as they were.",
        "Not a function of Ingle, and left: INGLE_PEEK.",
        "The workbook as it was is kept in DIR/book.xlsx.bak.",
        "Written to DIR/book.xlsx.",
    ]
    assert respell_summary(Respelled(book, "underscored", calls=1, formulas=1)) == [
        "1 Ingle call is now spelled as in INGLE_PEAK, in 1 formula of sheets; the values are as they were.",
    ]

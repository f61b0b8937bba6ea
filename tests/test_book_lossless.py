"""What is written: computed values and nothing else, whatever the sheet's XML looks like."""

from __future__ import annotations

import io
import re
import zipfile
from pathlib import Path
from typing import Any

import pytest
import xlsxwriter
from book_samples import (
    FUNCTIONS,
    MAIN,
    Solver,
    parts_of,
    rewritten,
    sheet_xml,
    shown,
    with_cells,
    with_sheet_xml,
)
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from ingle_addin.book import fill
from ingle_addin.book.archive import Archive
from ingle_addin.book.filling import same
from ingle_addin.book.parts import Parts, read_parts
from ingle_addin.book.quick import quick_scan
from ingle_addin.book.refs import cell_name, key_of
from ingle_addin.book.scan import FormulaCell, Sheet, scan_sheet
from ingle_addin.book.splice import Span, splice
from ingle_addin.cells import Cell, CellError
from rich_books import charts, layout, pictures, rules, written


def rich_book(path: Path) -> Path:
    """A workbook with most of what a careless writer loses."""

    def build(book: Any, page: Any) -> None:
        for each in (charts, pictures, rules, layout):
            each(book, page)

    return written(path, build)


def test_raw_bytes_times_and_comments_of_the_archive_stay(tmp_path: Path) -> None:
    source = rich_book(tmp_path / "plain.xlsx")
    book, out = tmp_path / "book.xlsx", tmp_path / "out.xlsx"
    with zipfile.ZipFile(book, "w") as archive:
        archive.comment = b"a comment"
        for index, (name, content) in enumerate(parts_of(source).items()):
            info = zipfile.ZipInfo(name, (2001, 2, 3, 4, 5, 6))
            info.compress_type = zipfile.ZIP_STORED if index % 2 else zipfile.ZIP_DEFLATED
            info.comment = b"part"
            info.external_attr = 0o640 << 16
            archive.writestr(info, content)
    fill(book, out, functions=FUNCTIONS, solve=Solver())
    with zipfile.ZipFile(book) as one, zipfile.ZipFile(out) as two:
        assert two.testzip() is None
        assert two.comment == b"a comment"
        for old, new in zip(one.infolist(), two.infolist(), strict=True):
            assert (old.filename, old.date_time, old.comment, old.external_attr) == (
                new.filename, new.date_time, new.comment, new.external_attr,
            )  # fmt: skip
            if not old.filename.startswith("xl/worksheets/sheet"):
                assert (old.compress_type, old.compress_size, old.CRC) == (
                    new.compress_type,
                    new.compress_size,
                    new.CRC,
                )


def test_streamed_and_zip64_members(tmp_path: Path) -> None:
    """Writers that stream leave the sizes behind the data (flag bit 3) and may use the fields for huge files."""
    source = with_cells(tmp_path / "plain.xlsx", {"A1": "=1+2"})

    class Pipe(io.RawIOBase):
        def __init__(self) -> None:
            self.content = bytearray()

        def writable(self) -> bool:
            return True

        def write(self, data: Any) -> int:
            self.content += data
            return len(data)

    pipe = Pipe()
    with zipfile.ZipFile(pipe, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in parts_of(source).items():
            with archive.open(name, "w", force_zip64=True) as part:
                part.write(content)
    book, out = tmp_path / "book.xlsx", tmp_path / "out.xlsx"
    book.write_bytes(bytes(pipe.content))
    fill(book, out, functions=FUNCTIONS, solve=Solver())
    assert shown(out)["A1"] == 3
    with zipfile.ZipFile(out) as archive:
        assert archive.testzip() is None
        assert all(info.flag_bits & 8 == 0 for info in archive.infolist())


def test_filling_twice_changes_nothing_more(tmp_path: Path) -> None:
    book = rich_book(tmp_path / "book.xlsx")
    fill(book, tmp_path / "one.xlsx", functions=FUNCTIONS, solve=Solver())
    report = fill(tmp_path / "one.xlsx", tmp_path / "two.xlsx", functions=FUNCTIONS, solve=Solver())
    assert report.changed_cells == 0
    assert (tmp_path / "one.xlsx").read_bytes() == (tmp_path / "two.xlsx").read_bytes()


def test_macros_and_the_suffix_stay(tmp_path: Path) -> None:
    plain = with_cells(tmp_path / "plain.xlsx", {"A1": "=1+2"})
    book = rewritten(plain, tmp_path / "book.xlsm", lambda _name, content: content)
    with zipfile.ZipFile(book, "a") as archive:
        archive.writestr("xl/vbaProject.bin", b"\xd0\xcf not looked at")
    report = fill(book, functions=FUNCTIONS, solve=Solver())
    assert report.out == tmp_path / "book.filled.xlsm"
    assert parts_of(report.out)["xl/vbaProject.bin"] == b"\xd0\xcf not looked at"


@pytest.mark.parametrize(
    ("cell", "expected"),
    [
        ('<c r="A1"><f>1+2</f></c>', '<c r="A1"><f>1+2</f><v>3</v></c>'),
        ('<c r="A1"><f>1+2</f><v>3</v></c>', '<c r="A1"><f>1+2</f><v>3</v></c>'),
        ('<c r="A1" s="4" t="str"><f>1+2</f><v>old</v></c>', '<c r="A1" s="4"><f>1+2</f><v>3</v></c>'),
        (
            "<c r='A1' t='e' s='2' vm='1' cm='3'><f>1+2</f><v>#N/A</v></c>",
            "<c r='A1' s='2' cm='3'><f>1+2</f><v>3</v></c>",
        ),
        ("<c><f>1+2</f></c>", "<c><f>1+2</f><v>3</v></c>"),
        ('<c r="A1" ><f ca="1" >1+2</f ><v  /></c >', '<c r="A1"><f ca="1" >1+2</f ><v>3</v></c>'),
        ('<c r="A1"><f><![CDATA[1+2]]></f><v>9</v></c>', '<c r="A1"><f><![CDATA[1+2]]></f><v>3</v></c>'),
        ('<c r="A1"><!-- <f>7</f> --><f>1+2</f><v>9</v></c>', '<c r="A1"><f>1+2</f><v>3</v></c>'),
        ('<c r="A1"><f>1<!-- x -->+2</f></c>', '<c r="A1"><f>1<!-- x -->+2</f><v>3</v></c>'),
        (
            '<c r="A1"><f>1+2</f><v>8</v><extLst><ext uri="u"><v>1</v></ext></extLst></c>',
            '<c r="A1"><f>1+2</f><v>3</v><extLst><ext uri="u"><v>1</v></ext></extLst></c>',
        ),
        ('<c r="A1" t="inlineStr"><f>1+2</f><is><t>old</t></is></c>', '<c r="A1"><f>1+2</f><v>3</v></c>'),
        ('<c r="A1"><f>1=2</f></c>', '<c r="A1" t="b"><f>1=2</f><v>0</v></c>'),
        ('<c r="A1"><f>1/0</f></c>', '<c r="A1" t="e"><f>1/0</f><v>#DIV/0!</v></c>'),
        ('<c r="A1"><f>""</f></c>', '<c r="A1" t="str"><f>""</f><v></v></c>'),
        (
            '<c r="A1"><f>"a&lt;&amp;b"&amp;CHAR(7)&amp;"_x0041_"</f></c>',
            '<c r="A1" t="str"><f>"a&lt;&amp;b"&amp;CHAR(7)&amp;"_x0041_"</f><v>a&lt;&amp;b_x0007__x005F_x0041_</v></c>',
        ),
        ('<c r="A1"><f>1/3</f></c>', '<c r="A1"><f>1/3</f><v>0.3333333333333333</v></c>'),
        ('<c r="A1"><f>10^20</f></c>', '<c r="A1"><f>10^20</f><v>1e+20</v></c>'),
    ],
)
@pytest.mark.parametrize("prefix", ["", "x"])
def test_cells_as_they_are_written(tmp_path: Path, cell: str, expected: str, prefix: str) -> None:
    def prefixed(text: str) -> str:
        return re.sub(r"<(/?)(row|c|f|v|is|t|extLst|ext)\b", rf"<\1{prefix}:\2", text) if prefix else text

    if "<!--" in cell:
        prefix = ""  # the comment would be rewritten too
    around = '<row r="1">{}<c r="B1" t="inlineStr"><is><t>é</t></is></c></row>'
    book = with_sheet_xml(tmp_path / "book.xlsx", prefixed(around.format(cell)), prefix=prefix)
    fill(book, tmp_path / "out.xlsx", functions=FUNCTIONS, solve=Solver())
    assert prefixed(around.format(expected)) in sheet_xml(tmp_path / "out.xlsx")


def test_the_children_of_an_array_are_written(tmp_path: Path) -> None:
    data = (
        '<row r="1"><c r="A1"><v>2</v></c><c r="B1" cm="1"><f t="array" ref="B1:C2">A1*{1,2;3,4}</f><v>0</v></c>'
        '<c r="C1" s="7"/></row><row r="2"><c r="B2"><v>1</v></c><c r="C2" t="str"><v>x</v></c><c r="D2"><v>5</v></c></row>'
    )
    fill(with_sheet_xml(tmp_path / "book.xlsx", data), tmp_path / "out.xlsx", functions=FUNCTIONS, solve=Solver())
    assert (
        '<c r="B1" cm="1"><f t="array" ref="B1:C2">A1*{1,2;3,4}</f><v>2</v></c><c r="C1" s="7"><v>4</v></c></row>'
        '<row r="2"><c r="B2"><v>6</v></c><c r="C2"><v>8</v></c><c r="D2"><v>5</v></c></row>'
    ) in sheet_xml(tmp_path / "out.xlsx")


def test_children_that_the_file_lacks_are_added(tmp_path: Path) -> None:
    """Some writers store only the first cell of an array formula."""
    data = (
        '<row r="1"><c r="A1"><v>2</v></c><c r="B1"><f t="array" ref="B1:C4">A1*{1,2;3,4;5,6;7,8}</f></c><c r="E1"><v>9</v></c>'
        '</row><row r="2"/><row r="3"><c r="D3"><v>5</v></c></row><row r="6"><c r="A6"><v>1</v></c></row>'
    )
    fill(with_sheet_xml(tmp_path / "book.xlsx", data), tmp_path / "out.xlsx", functions=FUNCTIONS, solve=Solver())
    assert (
        '<v>2</v></c><c r="C1"><v>4</v></c><c r="E1"><v>9</v></c></row>'
        '<row r="2"><c r="B2"><v>6</v></c><c r="C2"><v>8</v></c></row>'
        '<row r="3"><c r="B3"><v>10</v></c><c r="C3"><v>12</v></c><c r="D3"><v>5</v></c></row>'
        '<row r="4"><c r="B4"><v>14</v></c><c r="C4"><v>16</v></c></row><row r="6"><c r="A6"><v>1</v></c></row>'
    ) in sheet_xml(tmp_path / "out.xlsx")


def test_a_byte_order_mark_does_not_shift_anything(tmp_path: Path) -> None:
    plain = with_sheet_xml(tmp_path / "plain.xlsx", '<row r="1"><c r="A1"><f>1+2</f></c></row>')
    book = rewritten(plain, tmp_path / "book.xlsx", lambda _name, content: b"\xef\xbb\xbf" + content)
    fill(book, tmp_path / "out.xlsx", functions=FUNCTIONS, solve=Solver())
    assert sheet_xml(tmp_path / "out.xlsx").startswith("\ufeff<?xml")
    assert '<c r="A1"><f>1+2</f><v>3</v></c>' in sheet_xml(tmp_path / "out.xlsx")


texts = st.text(st.characters(exclude_categories=["Cs"]), max_size=12)
values = st.one_of(st.floats(allow_nan=False, allow_infinity=False), st.booleans(), st.sampled_from(list(CellError)), texts)


@settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(
    cells=st.dictionaries(st.tuples(st.integers(1, 30), st.integers(1, 40)), st.tuples(values, values, st.booleans()), min_size=1),
    prefix=st.sampled_from(["", "x:"]),
    quote=st.sampled_from("\"'"),
    space=st.sampled_from(["", " ", "\n  "]),
)
def test_what_is_written_is_read_back(
    tmp_path: Path,
    cells: dict[tuple[int, int], tuple[Cell, Cell, bool]],
    prefix: str,
    quote: str,
    space: str,
) -> None:
    """Any cells, written by the splicer over any others, come back from the scan; all other bytes stay."""
    from ingle_addin.book.splice import written

    def xml_of(place: tuple[int, int], value: Cell, has_formula: bool) -> str:
        kind, text = written(value)
        kind_text = f" t={quote}{kind.decode()}{quote}" if kind else ""
        formula = f"<{prefix}f>1</{prefix}f>" if has_formula else ""
        name = cell_name(key_of(*place))
        content = f"{space}{formula}<{prefix}v>{text.decode()}</{prefix}v>"
        return f"<{prefix}c r={quote}{name}{quote}{kind_text}{space}>{content}</{prefix}c>"

    rows: dict[int, list[str]] = {}
    for place in sorted(cells):
        rows.setdefault(place[0], []).append(xml_of(place, cells[place][0], cells[place][2]))
    colon = f":{prefix[:-1]}" if prefix else ""
    body = "".join(f'<{prefix}row r="{row}">{space.join(each)}</{prefix}row>{space}' for row, each in rows.items())
    content = f"<{prefix}worksheet xmlns{colon}='{MAIN}'><{prefix}sheetData>{body}</{prefix}sheetData></{prefix}worksheet>".encode()

    def scanned(data: bytes) -> Any:
        return scan_sheet([data[at : at + 100] for at in range(0, len(data), 100)], Parts(), tmp_path, "sheet")

    before = scanned(content)
    changes = {}
    for cell in before.formulas:
        place = (cell.key >> 14, (cell.key & 16383) + 1)
        assert same(cell.stored, cells[place][0])
        changes[cell.key] = (Span(cell.start, cell.end), cells[place][1])
    after = scanned(splice(content, changes))
    assert after.values == before.values
    assert len(after.formulas) == len(before.formulas)
    for cell in after.formulas:
        assert same(cell.stored, cells[cell.key >> 14, (cell.key & 16383) + 1][1])
    assert splice(content, {}) == content
    for each in (content, splice(content, changes)):
        assert_same_scan(each, tmp_path)


def assert_same_scan(content: bytes, path: Path, parts: Parts | None = None) -> bool:
    """The quick scan sees what the general one sees, or leaves it; whether it did see it."""
    parts = parts or Parts()
    quick, general = quick_scan(content, parts, path, "sheet"), scan_sheet([content], parts, path, "sheet")
    if quick is not None:
        for name in Sheet.__slots__:
            if name != "formulas":
                assert getattr(quick, name) == getattr(general, name), name
        for one, two in zip(quick.formulas, general.formulas, strict=True):
            for name in FormulaCell.__slots__:
                assert getattr(one, name) == getattr(two, name), name
    return quick is not None


def test_the_quick_scan_sees_the_same(tmp_path: Path) -> None:
    with Archive(rich_book(tmp_path / "book.xlsx")) as archive:
        parts = read_parts(archive)
        assert all(assert_same_scan(archive.read(sheet.part), tmp_path, parts) for sheet in parts.sheets)


@pytest.mark.parametrize(
    ("data", "usual"),
    [
        (
            '<row r="1" hidden="1"><c r="A1" s="1" t="str" cm="1"><f t="array" ref="A1:B2">1&amp;"&#65;"</f><v/></c></row>',
            True,
        ),
        (
            '<row r="1"><c r="A1"><f t="array" ref="A1:B2">1</f></c><c r="B1"/></row><row r="2"><c r="A2"><v>1</v></c></row>',
            True,
        ),
        ('<row r="1"><c r="A1"><f t="shared" si="3"/><v>1</v></c></row>\n<row/>', True),
        ('<row r="1"><c r="A1" t="inlineStr"><is><t xml:space="preserve"> a_x0041_ </t></is></c></row>', True),
        ('<row r="1"><c r="A1" t="e"><f>1/0</f><v>#SPILL!</v></c><c r="B1" t="b"><v>1</v></c></row>', True),
        ('<row r="1"><c r="A1" t="str"><f>""</f><v></v></c><c r="B1"><f>""</f><v></v></c></row>', True),
        ('<row r="1"><c r="A1"><v>1e5</v></c><c s="2" r="B1"><v>2</v></c></row>', False),
        ('<row r="1"><c><v>1</v></c></row>', False),
        ("<row r='1'><c r='A1'><v>1</v></c></row>", False),
        ('<row r="1"><c r="A1" t="str"><v>a\r\nb</v></c></row>', False),
        ('<row r="1"><!-- x --><c r="A1"><v>1</v></c></row>', False),
        ('<row r="1"><c r="A1" t="d"><v>2024-01-01</v></c></row>', False),
        ('<row r="1"><c r="A1"><v>1</v><extLst/></c></row>', False),
    ],
)
def test_what_the_quick_scan_takes(tmp_path: Path, data: str, usual: bool) -> None:
    content = f'<worksheet xmlns="{MAIN}"><sheetData>{data}</sheetData></worksheet>'.encode()
    assert assert_same_scan(content, tmp_path) == usual


def test_the_archive_reads_what_zipfile_reads(tmp_path: Path) -> None:
    book = rich_book(tmp_path / "book.xlsx")
    with Archive(book) as archive:
        assert {info.filename: archive.read(info.filename) for info in archive.infos} == parts_of(book)
        copy = io.BytesIO()
        archive.copy(copy, {})
    assert parts_of(book) == {name: zipfile.ZipFile(copy).read(name) for name in zipfile.ZipFile(copy).namelist()}


def test_xlsxwriter_is_not_special(tmp_path: Path) -> None:
    """A workbook by another writer, with array formulas of which only the first cell is stored."""
    import openpyxl
    from openpyxl.worksheet.formula import ArrayFormula

    assert xlsxwriter.__version__
    book = openpyxl.Workbook()
    page = book.active
    page.title = "Data"
    page.append([1, 2])
    page["C1"] = "=A1+B1"
    page["D1"] = ArrayFormula("D1:E2", "=A1:B1*{1;10}")
    page["G1"] = "=INGLE.PEAK(A1:B1)"
    book.save(tmp_path / "book.xlsx")
    fill(tmp_path / "book.xlsx", tmp_path / "out.xlsx", functions=FUNCTIONS, solve=Solver())
    cells = shown(tmp_path / "out.xlsx")
    assert [cells[name] for name in ("C1", "D1", "E1", "D2", "E2", "G1")] == [3, 1, 2, 10, 20, 3]

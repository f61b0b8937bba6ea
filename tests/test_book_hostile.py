"""Files that cannot or must not be read or written: each ends in one whole line that names the file and the remedy."""

from __future__ import annotations

import io
import os
import stat
import struct
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from book_samples import FUNCTIONS, Solver, made, parts_of, rewritten, with_cells, with_sheet_xml
from ingle_addin.book import BookError, fill, open_book
from ingle_addin.book import archive as archive_module
from ingle_addin.book import engine as engine_module
from ingle_addin.book import filling as filling_module


def refusal(book: Path, out: Path | None = None, **options: Any) -> str:
    """The message of a refused fill, the folder replaced by ``DIR``; nothing may be left behind."""
    before = sorted(book.parent.iterdir()) if book.parent.is_dir() else []
    with pytest.raises(BookError) as caught:
        fill(book, out, functions=FUNCTIONS, solve=Solver(), **options)
    assert "\n" not in str(caught.value)
    assert (sorted(book.parent.iterdir()) if book.parent.is_dir() else []) == before
    return str(caught.value).replace(str(book.parent), "DIR")


def part_changed(tmp_path: Path, part: str, change: Callable[[bytes], bytes | None]) -> Path:
    plain = with_cells(tmp_path / "plain.xlsx", {"A1": 1, "B1": "text", "C1": "=A1+1"})
    return rewritten(plain, tmp_path / "book.xlsx", lambda name, content: change(content) if name == part else content)


def test_absent(tmp_path: Path) -> None:
    assert refusal(tmp_path / "book.xlsx") == "DIR/book.xlsx does not exist; check the folder and the spelling"


def test_folder(tmp_path: Path) -> None:
    (tmp_path / "book.xlsx").mkdir()
    assert refusal(tmp_path / "book.xlsx") == "DIR/book.xlsx is a folder; name the workbook in it"


@pytest.mark.parametrize(
    ("content", "message"),
    [
        (b"", "is empty; take an earlier copy of it"),
        (b"a,b\n1,2\n", "is not an .xlsx workbook; open it in the spreadsheet program and save it as .xlsx"),
        (b"PK\3\4 and nothing", "is cut short or damaged; take an earlier copy of it"),
        (
            archive_module._OLE + bytes(1000) + "EncryptedPackage".encode("utf-16-le") + bytes(100),
            "is protected by a password; save it without one first",
        ),
        (
            archive_module._OLE + bytes(1000) + "Workbook".encode("utf-16-le"),
            "is an old .xls workbook; open it in the spreadsheet program and save it as .xlsx",
        ),
    ],
)
def test_not_a_workbook(tmp_path: Path, content: bytes, message: str) -> None:
    book = tmp_path / "book.xlsx"
    book.write_bytes(content)
    assert refusal(book) == f"DIR/book.xlsx {message}"


@pytest.mark.parametrize(
    ("parts", "message"),
    [
        (("a.txt",), "is a zip file but not a workbook; name an .xlsx or .xlsm file"),
        (
            ("mimetype", "content.xml"),
            "is an OpenDocument file; open it in the spreadsheet program and save it as .xlsx",
        ),
    ],
)
def test_other_zip_files(tmp_path: Path, parts: tuple[str, ...], message: str) -> None:
    book = tmp_path / "book.xlsx"
    with zipfile.ZipFile(book, "w") as archive:
        for name in parts:
            archive.writestr(name, "x")
    assert refusal(book) == f"DIR/book.xlsx {message}"


def test_binary_workbook(tmp_path: Path) -> None:
    book = part_changed(tmp_path, "_rels/.rels", lambda content: content.replace(b"workbook.xml", b"workbook.bin"))
    assert refusal(book) == "DIR/book.xlsx is a binary .xlsb workbook; open it in the spreadsheet program and save it as .xlsx"


@pytest.mark.parametrize("length", [0.3, 0.7, 0.98])
def test_cut_short(tmp_path: Path, length: float) -> None:
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    content = book.read_bytes()
    book.write_bytes(content[: int(len(content) * length)])
    assert refusal(book) == "DIR/book.xlsx is cut short or damaged; take an earlier copy of it"


def test_bits_turned(tmp_path: Path) -> None:
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    content = bytearray(book.read_bytes())
    with zipfile.ZipFile(book) as archive:
        info = archive.getinfo("xl/worksheets/sheet1.xml")
    at = info.header_offset + 30 + len(info.filename) + 10
    content[at : at + 20] = bytes(20)
    book.write_bytes(content)
    assert refusal(book) == "DIR/book.xlsx is damaged in its part xl/worksheets/sheet1.xml; take an earlier copy of it"


@pytest.mark.parametrize("part", ["xl/workbook.xml", "xl/worksheets/sheet1.xml"])
def test_missing_part(tmp_path: Path, part: str) -> None:
    book = part_changed(tmp_path, part, lambda _content: None)
    assert refusal(book) == f"DIR/book.xlsx lacks the part {part}; open it in the spreadsheet program and save it anew"


@pytest.mark.parametrize(
    "part",
    [
        "_rels/.rels",
        "xl/workbook.xml",
        "xl/_rels/workbook.xml.rels",
        "xl/styles.xml",
        "xl/sharedStrings.xml",
        "xl/worksheets/sheet1.xml",
    ],
)
@pytest.mark.parametrize("doctype", [b'<!DOCTYPE x [<!ENTITY e SYSTEM "file:///etc/passwd">]>', b'<!DOCTYPE x [<!ENTITY a "aaaa">]>'])
def test_document_type(tmp_path: Path, part: str, doctype: bytes) -> None:
    book = part_changed(tmp_path, part, lambda content: content.replace(b"?>", b"?>" + doctype, 1))
    assert refusal(book) == f"DIR/book.xlsx: the part {part} declares a document type, which no workbook needs; not opened"


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (
            lambda text: text.replace("UTF-8", "ISO-8859-1").encode("latin-1"),
            "is written in ISO-8859-1, not UTF-8; open it and save it anew",
        ),
        (
            lambda text: text.replace("UTF-8", "UTF-16").encode("utf-16"),
            "is written in UTF-16, not UTF-8; open it and save it anew",
        ),
    ],
)
def test_encoding(tmp_path: Path, change: Callable[[str], bytes], message: str) -> None:
    book = part_changed(tmp_path, "xl/worksheets/sheet1.xml", lambda content: change(content.decode()))
    assert refusal(book) == f"DIR/book.xlsx: the part xl/worksheets/sheet1.xml {message}"


@pytest.mark.parametrize(
    "data",
    [
        '<row r="1"><c r="A1"><v>1</v></row>',
        '<row r="1"><c r="A1"><v>one</v></c></row>',
        '<row r="1"><c r="A1"><v>NaN</v></c></row>',
        '<row r="1"><c r="A1" t="s"><v>7</v></c></row>',
        '<row r="1"><c r="??"><v>7</v></c></row>',
        '<row r="1"><c r="ZZZ1"><v>7</v></c></row>',
        '<row r="9999999"><c><v>7</v></c></row>',
        '<row r="1"><c r="A1" t="d"><v>yesterday</v></c></row>',
    ],
)
def test_damaged_sheet(tmp_path: Path, data: str) -> None:
    message = "DIR/book.xlsx is damaged in its part xl/worksheets/sheet1.xml; open it in the spreadsheet program and save it anew"
    assert refusal(with_sheet_xml(tmp_path / "book.xlsx", data)) == message


def test_encrypted_member(tmp_path: Path) -> None:
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    content = bytearray(book.read_bytes())
    at = content.index(b"PK\1\2")
    content[at + 8] |= 1
    book.write_bytes(content)
    assert refusal(book) == "DIR/book.xlsx is protected by a password; save it without one first"


@pytest.mark.filterwarnings("ignore:Duplicate name")
def test_doubled_part(tmp_path: Path) -> None:
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    with zipfile.ZipFile(book, "a") as archive:
        archive.writestr("xl/workbook.xml", "<x/>")
    assert refusal(book) == "DIR/book.xlsx holds the part xl/workbook.xml twice; open it and save it anew"


def test_limits(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1", "B1": "x"})
    monkeypatch.setattr(archive_module, "MAX_PARTS", 3)
    count = len(parts_of(book))
    assert refusal(book) == f"DIR/book.xlsx has {count} parts, more than the 3 of any honest workbook"
    monkeypatch.undo()
    monkeypatch.setattr(archive_module, "MAX_PART_BYTES", 1 << 8)
    assert refusal(book) == "DIR/book.xlsx: the part _rels/.rels is larger than 0 MB; split the workbook"
    monkeypatch.undo()
    monkeypatch.setattr(archive_module, "MAX_TOTAL_BYTES", 1 << 8)
    assert refusal(book) == "DIR/book.xlsx is larger than 0 MB unpacked; split the workbook"
    monkeypatch.undo()
    monkeypatch.setattr("ingle_addin.book.scan.MAX_CELLS", 3)
    monkeypatch.setattr("ingle_addin.book.book.MAX_CELLS", 3)

    def build(book: Any, page: Any) -> None:
        page.write_row("A1", [1, 2])
        book.add_worksheet("Other").write_row("A1", [3, 4])

    # All sheets count together, and an array counts with the cells that the file leaves out.
    assert refusal(made(tmp_path / "two.xlsx", build)) == "DIR/two.xlsx has more than 3 cells; split the workbook"
    for quote in "\"'":
        array = f'<row r="1"><c r={quote}A1{quote}><f t="array" ref="A1:A3">1</f></c></row>'
        assert refusal(with_sheet_xml(tmp_path / "array.xlsx", array)) == "DIR/array.xlsx has more than 3 cells; split the workbook"
    monkeypatch.undo()
    long = with_sheet_xml(tmp_path / "long.xlsx", f'<row r="1"><c r="A1" t="str"><v>{"ab" * 200_000}</v></c></row>')
    assert refusal(long) == "DIR/long.xlsx: a cell holds more than 32,767 characters; shorten it"


def test_more_sizes_than_there_are_bytes(tmp_path: Path) -> None:
    """The directory may lie about sizes; only what comes out counts."""
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    content = bytearray(book.read_bytes())
    at = content.rindex(b"xl/worksheets/sheet1.xml") - 46
    struct.pack_into("<L", content, at + 24, 10)
    book.write_bytes(content)
    assert refusal(book) == "DIR/book.xlsx is damaged in its part xl/worksheets/sheet1.xml; take an earlier copy of it"


def test_five_thousand_brackets(tmp_path: Path) -> None:
    book = with_sheet_xml(tmp_path / "book.xlsx", f'<row r="1"><c r="A1"><f>{"(" * 3000}1{")" * 3000}</f></c></row>')
    report = fill(book, functions=FUNCTIONS, solve=Solver())
    assert [each.reason for each in report.not_computed] == ["the formula is nested deeper than 64 levels"]


def test_a_crash_of_the_engine_is_one_line(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    crash = tmp_path / "crash.py"
    crash.write_text("import os, sys\nsys.stdin.buffer.read(1)\nos.abort()\n")
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    monkeypatch.setattr(engine_module, "_SCRIPT", str(crash))
    assert refusal(book) == (
        "DIR/book.xlsx: the calculation engine stopped on this workbook; nothing was written. "
        "Simplify its longest formulas and try again"
    )


def test_without_the_engine(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(engine_module, "_is_installed", lambda: False)
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    assert refusal(book) == (
        "the workbook commands need the ironcalc package, which has no wheel for this platform or is not installed; "
        "try pip install ironcalc, or use Python 3.11 to 3.14 on 64-bit Linux, Windows or macOS"
    )


# -- saving -----------------------------------------------------------------------------------------------------------


@pytest.fixture
def book(tmp_path: Path) -> Path:
    return with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})


def test_in_place_keeps_a_backup_and_the_mode(book: Path) -> None:
    book.chmod(0o640)
    before = book.read_bytes()
    report = fill(book, functions=FUNCTIONS, solve=Solver(), in_place=True)
    assert report.out == book
    assert report.backup == book.with_name("book.xlsx.bak")
    assert report.backup.read_bytes() == before
    assert book.read_bytes() != before
    assert stat.S_IMODE(book.stat().st_mode) == 0o640
    assert sorted(path.name for path in book.parent.iterdir()) == ["book.xlsx", "book.xlsx.bak"]


def test_itself_as_output(book: Path) -> None:
    assert refusal(book, book) == "DIR/book.xlsx is the workbook itself; name another file, or say --in-place to replace it"


def test_output_and_in_place(book: Path) -> None:
    message = "either --in-place or an output file (DIR/x.xlsx) can be given, not both"
    assert refusal(book, book.with_name("x.xlsx"), in_place=True) == message


def test_output_is_a_folder(book: Path) -> None:
    (book.parent / "folder").mkdir()
    assert refusal(book, book.parent / "folder") == "DIR/folder is a folder; name a file in it"


def test_output_in_no_folder(book: Path) -> None:
    assert refusal(book, book.parent / "no" / "x.xlsx") == "the folder DIR/no does not exist; make it first"


@pytest.mark.parametrize("lock", [".~lock.book.xlsx#", "~$book.xlsx"])
def test_open_elsewhere(book: Path, lock: str) -> None:
    book.with_name(lock).write_text("someone")
    message = f"DIR/book.xlsx is open in a spreadsheet program; close it there first (or delete {lock} if it is not)"
    assert refusal(book, in_place=True) == message
    out = book.with_name("out.xlsx")
    fill(book, out, functions=FUNCTIONS, solve=Solver())
    assert out.exists()


def test_output_open_elsewhere(book: Path) -> None:
    out = with_cells(book.with_name("out.xlsx"), {"A1": 1})
    book.with_name("~$out.xlsx").write_text("someone")
    message = "DIR/out.xlsx is open in a spreadsheet program; close it there first (or delete ~$out.xlsx if it is not)"
    assert refusal(book, out) == message


def test_changed_meanwhile(book: Path) -> None:
    class Meddler(Solver):
        def __call__(self, *args: Any) -> Any:
            with_cells(book, {"A1": "=INGLE.PEAK(2)"})
            return super().__call__(*args)

    with_cells(book, {"A1": "=INGLE.PEAK(1)"})
    with pytest.raises(BookError) as caught:
        fill(book, functions=FUNCTIONS, solve=Meddler(), in_place=True)
    message = f"{book} was changed by another program meanwhile; nothing was written, run again"
    assert str(caught.value) == message
    assert [path.name for path in book.parent.iterdir()] == ["book.xlsx"]


def test_read_only_folder(book: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(os, "access", lambda *_: False)
    assert refusal(book) == "the folder DIR may not be written to; name another with -o"


@pytest.mark.parametrize("in_place", [False, True])
@pytest.mark.parametrize("failure", [KeyboardInterrupt(), OSError(28, "No space left on device")])
def test_a_stopped_write_leaves_nothing(book: Path, monkeypatch: pytest.MonkeyPatch, in_place: bool, failure: BaseException) -> None:
    def stop(_book: object, _changes: object, file: io.BufferedWriter) -> None:
        file.write(b"half")
        raise failure

    before = book.read_bytes()
    monkeypatch.setattr(filling_module, "write_values", stop)
    with pytest.raises((BookError, KeyboardInterrupt)) as caught:
        fill(book, functions=FUNCTIONS, solve=Solver(), in_place=in_place)
    if isinstance(failure, OSError):
        out = book if in_place else book.with_name("book.filled.xlsx")
        assert str(caught.value) == f"{out} cannot be written: No space left on device; nothing was changed"
    assert book.read_bytes() == before
    assert [path.name for path in book.parent.iterdir()] == ["book.xlsx"]


def test_the_file_is_not_held_open(book: Path) -> None:
    open_book(book)
    book.rename(book.with_name("other.xlsx"))

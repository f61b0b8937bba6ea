"""What goes wrong while a workbook is read and written: no room, no right, killed runs, and files made to hurt."""

from __future__ import annotations

import os
import random
import subprocess
import sys
import tempfile
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from book_samples import FUNCTIONS, Solver, made, rewritten, with_cells, with_sheet_xml
from ingle_addin.book import BookError, fill
from ingle_addin.book.beside import beside, sweep

resource = pytest.importorskip("resource", reason="limits on a process are set by POSIX systems only")

MEMORY = 3 << 30  # bytes of address space
SECONDS = 12  # of processor time
_INGLE = "import sys; from ingle_addin.command import main; sys.argv = ['ingle', *sys.argv[1:]]; main()"


def command(folder: Path, *arguments: str, memory: int = MEMORY, file_size: int | None = None) -> tuple[int, list[str]]:
    """Run `ingle` in a folder within limits; its exit code and what it said on the error stream."""

    def limit() -> None:
        resource.setrlimit(resource.RLIMIT_AS, (memory, memory))
        resource.setrlimit(resource.RLIMIT_CPU, (SECONDS, SECONDS))
        if file_size is not None:
            resource.setrlimit(resource.RLIMIT_FSIZE, (file_size, file_size))

    environment = {**os.environ, "PYTHONUTF8": "1", "OPENBLAS_NUM_THREADS": "1"}
    done = subprocess.run(
        [sys.executable, "-c", _INGLE, *arguments], cwd=folder, env=environment, preexec_fn=limit, capture_output=True,
        encoding="utf-8", timeout=20 * SECONDS, check=False,
    )  # fmt: skip
    lines = [line for line in done.stderr.splitlines() if "% done" not in line]
    return done.returncode, lines


# No room, no right.


@pytest.mark.parametrize("options", [(), ("--in-place",)])
def test_a_full_disk(tmp_path: Path, options: tuple[str, ...]) -> None:
    """A limit on the size of files ends the writing in the middle, as a full disk does."""

    def build(_book: Any, page: Any) -> None:
        for row in range(4000):
            page.write_formula(row, 0, f"=SQRT({row}+0.5)", None, 0)

    book = made(tmp_path / "book.xlsx", build)
    before = book.read_bytes()
    assert len(before) > 20_000
    code, lines = command(tmp_path, "fill", "book.xlsx", *options, file_size=10_000)
    out = "book.xlsx" if options else "book.filled.xlsx"
    assert (code, lines) == (2, [f"ingle: {out} cannot be written: File too large; nothing was changed"])
    assert [path.name for path in tmp_path.iterdir()] == ["book.xlsx"]
    assert book.read_bytes() == before


def test_a_read_only_file_system(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Where asking for the right does not tell, making the file does."""

    def refuse(*_: object, **__: object) -> None:
        raise OSError(30, "Read-only file system")

    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    monkeypatch.setattr(tempfile, "mkstemp", refuse)
    with pytest.raises(BookError) as caught:
        fill(book, functions=FUNCTIONS, solve=Solver())
    out = tmp_path / "book.filled.xlsx"
    assert str(caught.value) == f"{out} cannot be written: Read-only file system; nothing was changed"
    assert [path.name for path in tmp_path.iterdir()] == ["book.xlsx"]


def test_a_link_stays_a_link(tmp_path: Path) -> None:
    (tmp_path / "real").mkdir()
    real = with_cells(tmp_path / "real" / "book.xlsx", {"A1": "=1+1"})
    link = tmp_path / "book.xlsx"
    link.symlink_to(real)
    before = real.read_bytes()
    report = fill(link, functions=FUNCTIONS, solve=Solver(), in_place=True)
    assert link.is_symlink()
    assert real.read_bytes() != before
    assert report.backup is not None
    assert report.backup.read_bytes() == before


def test_nothing_changed_in_place_keeps_the_older_backup(tmp_path: Path) -> None:
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    before = book.read_bytes()
    fill(book, functions=FUNCTIONS, solve=Solver(), in_place=True)
    report = fill(book, functions=FUNCTIONS, solve=Solver(), in_place=True)
    assert (report.changed_cells, report.out, report.backup) == (0, None, None)
    assert (tmp_path / "book.xlsx.bak").read_bytes() == before


# Killed runs.


def test_what_a_killed_run_left_is_swept_away(tmp_path: Path) -> None:
    book = with_cells(tmp_path / "book.xlsx", {"A1": "=1+1"})
    out = tmp_path / "book.filled.xlsx"
    leftover = tmp_path / ".book.filled.xlsx.ab12_xyz.ingle.part"
    others = [".book.filled.xlsx.ab12_xyz.part", ".other.xlsx.ab12_xyz.ingle.part", "book.filled.xlsx.ab12_xyz.ingle.part"]
    for name in (leftover.name, *others):
        (tmp_path / name).write_bytes(b"half")
    fill(book, functions=FUNCTIONS, solve=Solver())
    assert sorted(path.name for path in tmp_path.iterdir()) == sorted([book.name, out.name, *others])


def test_what_a_living_run_writes_is_not_swept_away(tmp_path: Path) -> None:
    target = tmp_path / "book.xlsx"
    with beside(target) as (file, path):
        file.write(b"half")
        sweep(target)
        assert path.exists()
        os.replace(path, target)
    assert target.read_bytes() == b"half"
    assert [each.name for each in tmp_path.iterdir()] == ["book.xlsx"]


# Files made to hurt, each within 3 GB of address space and 12 s of processor time.

LAUGHS = (
    '<!DOCTYPE x [<!ENTITY a0 "ha">' + "".join(f'<!ENTITY a{i} "{f"&a{i - 1};" * 10}">' for i in range(1, 10)) + "]>"
)  # fmt: skip
DEEP = f"{'(' * 5000}1{')' * 5000}"
# Ten million digits that do not compress much.
LONG = random.Random(1).randbytes(5_000_000).hex().translate(str.maketrans("abcdef", "123456"))
CELL = '<row r="1"><c r="A1"><f>1+1</f><v>0</v></c>{}</row>'


def sheet(data: str, **options: Any) -> Callable[[Path], Path]:
    return lambda path: with_sheet_xml(path, CELL.format(data), **options)


def shared_text(path: Path) -> Path:
    plain = with_cells(path.with_name("plain.xlsx"), {"A1": "=1+1", "B1": "marked"})
    return rewritten(plain, path, lambda _name, content: content.replace(b"marked", LONG.encode()))


def bomb(path: Path) -> Path:
    plain = with_cells(path.with_name("plain.xlsx"), {"A1": "=1+1"})
    spaces = b"<sheetData>" + b" " * 300_000_000
    return rewritten(plain, path, lambda _name, content: content.replace(b"<sheetData>", spaces))


def many_parts(path: Path) -> Path:
    with_cells(path, {"A1": "=1+1"})
    with zipfile.ZipFile(path, "a") as archive:
        for index in range(2000):
            archive.writestr(f"x/{index}.xml", b"")
    return path


def cut(path: Path) -> Path:
    with_cells(path, {"A1": "=1+1"})
    path.write_bytes(path.read_bytes()[:-200])
    return path


NAMES = "<definedNames>{}</definedNames>"
DAMAGED = "is damaged in its part xl/worksheets/sheet1.xml; open it in the spreadsheet program and save it anew"
TOO_LONG = ": a cell holds more than 32,767 characters; shorten it"
TOO_MANY = " has more than 5,000,000 cells; split the workbook"
DOCTYPE = ": the part xl/worksheets/sheet1.xml declares a document type, which no workbook needs; not opened"
REFUSED: dict[str, tuple[Callable[[Path], Path], str]] = {
    "bomb": (bomb, ": the part xl/worksheets/sheet1.xml unpacks to more than 100 times its size, as no honest workbook does"),
    "entities": (sheet("<c><v>&a9;</v></c>", head=LAUGHS), DOCTYPE),
    "external entity": (sheet("<c><v>&e;</v></c>", head='<!DOCTYPE x [<!ENTITY e SYSTEM "file:///etc/passwd">]>'), DOCTYPE),
    "external subset": (sheet("", head='<!DOCTYPE x SYSTEM "http://192.0.2.1/x.dtd">'), DOCTYPE),
    "cut short": (cut, " is cut short or damaged; take an earlier copy of it"),
    "long text": (sheet(f'<c r="B1" t="str"><v>{LONG}</v></c>'), TOO_LONG),
    "long text in place": (sheet(f'<c r="B1" t="inlineStr"><is><t>{LONG}</t></is></c>'), TOO_LONG),
    "long shared text": (shared_text, TOO_LONG),
    "long number": (sheet(f'<c r="B1"><v>{LONG}</v></c>'), f" {DAMAGED}"),
    "long place": (sheet(f'<c r="B{LONG}"><v>1</v></c>'), f" {DAMAGED}"),
    "long row": (sheet(f'</row><row r="{LONG}"><c><v>1</v></c>'), f" {DAMAGED}"),
    "long index": (sheet(f'<c r="B1" t="s"><v>{LONG}</v></c>'), f" {DAMAGED}"),
    "large arrays": (sheet("".join(f'<c><f t="array" ref="A{i}:A{i + 999_999}">1</f></c>' for i in range(2, 8))), TOO_MANY),
    "many parts": (many_parts, " has 2009 parts, more than the 2000 of any honest workbook"),
}  # fmt: skip
FILLED: dict[str, tuple[Callable[[Path], Path], str]] = {
    "nested": (sheet(f'<c r="B1"><f>{DEEP}</f></c>'), "the formula is longer than 8,192 characters"),
    "nested and short": (sheet(f'<c r="B1"><f>{"(" * 4000}1{")" * 4000}</f></c>'), "the formula is nested deeper than 64 levels"),
    "nested shared": (
        sheet(f'<c r="B1"><f t="shared" si="0" ref="B1:C1">{DEEP}</f></c><c r="C1"><f t="shared" si="0"/></c>'),
        "the formula is longer than 8,192 characters",
    ),
    "nested array": (sheet(f'<c r="B1"><f t="array" ref="B1:B2">{DEEP}</f></c>'), "the formula is longer than 8,192 characters"),
    "nested braces": (sheet(f'<c r="B1"><f>{"{" * 8000}</f></c>'), "the formula is nested too deep"),
    "nested name": (
        sheet('<c r="B1"><f>deep+1</f></c>', names=NAMES.format(f'<definedName name="deep">{DEEP}</definedName>')),
        "it uses the name deep, whose meaning could not be read",
    ),
    "name of itself": (
        sheet('<c r="B1"><f>me+1</f></c>', names=NAMES.format('<definedName name="me">me*2</definedName>')),
        "it uses the name me, which is defined by itself",
    ),
    "doubling names": (
        sheet('<c r="B1"><f>name_14+1</f></c>', names=NAMES.format("".join(
            f'<definedName name="name_{i}">{"+".join([f"name_{i - 1}"] * 500) if i else "1"}</definedName>' for i in range(15)))),
        "it uses the name name_2, whose meaning is too long",
    ),
    "long formula": (sheet(f'<c r="B1"><f>"{LONG}"</f></c>'), "the formula is longer than 8,192 characters"),
    "quotes": (sheet(f'<c r="B1"><f>{chr(39) * 8001}</f></c>'), "the formula could not be read"),
    "brackets": (sheet(f'<c r="B1"><f>{"[a" * 4000}</f></c>'), "the formula could not be read"),
    "array of all cells": (sheet('<c r="B1"><f t="array" ref="A1:XFD1048576">1</f></c>'), "its array has too many cells"),
    "deep elements": (sheet(f'<c r="B1"><f>,</f>{"<x>" * 200_000}{"</x>" * 200_000}</c>'), "the formula could not be read"),
}  # fmt: skip


def refusal(book: Path) -> str:
    with pytest.raises(BookError) as caught:
        fill(book, functions=FUNCTIONS, solve=Solver())
    return str(caught.value).removeprefix(str(book))


# Making ten million letters over and over is left to the long tests.
@pytest.mark.parametrize("name", [name for name in REFUSED if name != "bomb" and ("long" not in name or name == "long number")])
def test_refused_in_one_line(tmp_path: Path, name: str) -> None:
    make, message = REFUSED[name]
    assert refusal(make(tmp_path / "book.xlsx")) == message
    assert not (tmp_path / "book.filled.xlsx").exists()


@pytest.mark.parametrize("name", FILLED)
def test_filled_but_for_what_hurts(tmp_path: Path, name: str) -> None:
    make, reason = FILLED[name]
    report = fill(make(tmp_path / "book.xlsx"), functions=FUNCTIONS, solve=Solver())
    assert {each.reason for each in report.not_computed if each.cell == "B1"} == {reason}
    assert report.ordinary_cells == 1  # A1, which is healthy


@pytest.mark.long
@pytest.mark.parametrize("name", [*REFUSED, *FILLED])
def test_within_memory_and_time(tmp_path: Path, name: str) -> None:
    make, message = (REFUSED | FILLED)[name]
    make(tmp_path / "book.xlsx")
    expected = (2, [f"ingle: book.xlsx{message}"]) if name in REFUSED else (0, [])
    assert command(tmp_path, "fill", "book.xlsx") == expected

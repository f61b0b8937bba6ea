"""The whole way: open a workbook, compute it, write every computed value into its cell."""

from __future__ import annotations

import contextlib
import datetime
import gc
from collections.abc import Collection, Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import IO

from ingle_addin.book.archive import Archive
from ingle_addin.book.book import Book, open_book
from ingle_addin.book.computed import Computed
from ingle_addin.book.engine import Engine
from ingle_addin.book.errors import BookError
from ingle_addin.book.insert import insert
from ingle_addin.book.progress import WRITING, Progress
from ingle_addin.book.report import Report
from ingle_addin.book.rounds import compute
from ingle_addin.book.save import check_target, kind_of, place
from ingle_addin.book.scan import Sheet
from ingle_addin.book.splice import NotWritableError, Span, splice
from ingle_addin.book.work import elements_of
from ingle_addin.calls import SolveCalls
from ingle_addin.cells import Cell


def default_out(book: Path) -> Path:
    """``STEM.filled.xlsx`` beside the workbook (the suffix stays what it is)."""
    return book.with_name(f"{book.stem}.filled{kind_of(book)}")


def fill(
    book: Path,
    out: Path | None = None,
    *,
    functions: Collection[str],
    solve: SolveCalls,
    in_place: bool = False,
    progress: Progress | None = None,
    now: datetime.datetime | None = None,
) -> Report:
    """Evaluate the workbook ``book`` and write it, with every computed value in its cell, to ``out``.

    ``functions`` are the canonical names (``INGLE.PEAK``) that ``solve`` answers, many calls at a time. ``out`` is
    :func:`default_out` if None; with ``in_place`` the workbook itself, of which ``NAME.bak`` is kept (if no value changed,
    neither is touched). Everything else in the file stays byte for byte. Raises :class:`BookError` (one line) if anything
    prevents it; then nothing is changed.
    """
    book = Path(book)
    if in_place and out is not None:
        raise BookError(f"either --in-place or an output file ({out}) can be given, not both")
    target = book if in_place else default_out(book) if out is None else Path(out)
    if book.is_file():
        check_target(book, target, in_place=in_place)
    with no_collections(), Engine(book) as engine:
        opened = open_book(book, progress)
        computed = compute(opened, functions, solve, progress, now, engine=engine)
        changes = [Changes.of(sheet, values) for sheet, values in zip(opened.sheets, computed.values, strict=True)]
        count = sum(map(len, changes))
        if in_place and not count:  # an older copy is worth more than another of the same
            return report_of(opened, computed, 0, None, None)
        if progress is not None:
            progress("writing", WRITING)

        def write(file: IO[bytes]) -> None:
            write_values(opened, changes, file)

        backup = place(book, opened.mark, target, write, in_place=in_place)
        return report_of(opened, computed, count, target, backup)


@contextlib.contextmanager
def no_collections() -> Iterator[None]:
    """Without the search for cyclic garbage, of which there is none: among a million cells it takes a third of the time."""
    was_on = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_on:
            gc.enable()


def report_of(book: Book, computed: Computed, changed: int, out: Path | None, backup: Path | None) -> Report:
    """The report of a computation."""
    remarks = []
    if book.parts.displayed_precision:
        remarks.append("The workbook is set to calculate with the precision displayed; here the full precision was used.")
    return Report(
        book=book.path,
        out=out,
        ingle_cells=len(computed.ingle),
        ordinary_cells=computed.ordinary_cells,
        changed_cells=changed,
        no_answers=tuple(computed.no_answers),
        hidden=tuple(computed.hidden),
        not_computed=tuple(computed.not_computed),
        truncated=tuple(computed.truncated),
        backup=backup,
        remarks=tuple(remarks),
    )


def same(one: Cell, other: Cell) -> bool:
    """Whether two values are the same to a cell: TRUE is not 1, and an empty cell is not empty text."""
    return type(one) is type(other) and one == other


@dataclass(frozen=True)
class Changes:
    """The computed cells of a sheet whose value is not the stored one.

    ``cells`` maps a cell to where it stands in the file and its value; ``missing`` are cells of arrays that the file lacks.
    """

    cells: dict[int, tuple[Span, Cell]]
    missing: dict[int, Cell]

    @staticmethod
    def of(sheet: Sheet, values: Mapping[int, Cell]) -> Changes:
        """Compare computed with stored values."""
        cells: dict[int, tuple[Span, Cell]] = {}
        missing: dict[int, Cell] = {}
        get, children = values.get, sheet.children
        for cell in sheet.formulas:
            value = get(cell.key)
            stored = cell.stored
            if value is not None and (value != stored or type(value) is not type(stored)):
                cells[cell.key] = (Span(cell.start, cell.end), value)
            if cell.rect is not None and cell.key in values:
                for key, _ in elements_of(cell):
                    value = get(key)
                    if key in children or key == cell.key or value is None or value == "":
                        continue
                    missing[key] = value
        for key, (stored, start, end) in children.items():
            value = get(key)
            if value is not None and not same(value, stored):
                cells[key] = (Span(start, end), value)
        if missing:
            for cell in sheet.formulas:  # a formula inside an array's range is a damaged file; it stays
                missing.pop(cell.key, None)
        return Changes(cells, missing)

    def __len__(self) -> int:
        return len(self.cells) + len(self.missing)


def write_values(book: Book, changes: list[Changes], file: IO[bytes]) -> None:
    """Write the workbook to ``file`` with those cells changed."""
    with Archive(book.path) as archive:
        parts: dict[str, bytes] = {}
        for sheet, change in zip(book.parts.sheets, changes, strict=True):
            if len(change):
                try:
                    content = splice(archive.read(sheet.part), change.cells)
                    parts[sheet.part] = insert(content, change.missing) if change.missing else content
                except (NotWritableError, ValueError):
                    raise BookError(
                        f"{book.path}: the sheet {sheet.name} is written in a way that cannot be filled; save it anew first"
                    ) from None
        archive.copy(file, parts)

"""A workbook read into memory: its parts, its cells, and the mark by which to tell that the file has not changed."""

from __future__ import annotations

import hashlib
import os
from dataclasses import dataclass
from pathlib import Path

from ingle_addin.book.archive import Archive
from ingle_addin.book.errors import BookError
from ingle_addin.book.formula import check_size, shifted, split
from ingle_addin.book.parts import Parts, read_parts
from ingle_addin.book.progress import PLANNING, READING, Progress, share
from ingle_addin.book.quick import quick_scan
from ingle_addin.book.refs import place_of
from ingle_addin.book.scan import MAX_CELLS, FormulaCell, Sheet, scan_sheet


@dataclass(frozen=True)
class Fingerprint:
    """Size, time of change and SHA-256 of a file."""

    size: int
    changed: int
    digest: str


def fingerprint(path: Path) -> Fingerprint:
    """The mark of a file as it is now."""
    try:
        with path.open("rb") as file:
            digest = hashlib.file_digest(file, "sha256").hexdigest()
            status = os.fstat(file.fileno())
    except OSError:
        raise BookError(f"{path} can no longer be read; try again when no other program is saving it") from None
    return Fingerprint(status.st_size, status.st_mtime_ns, digest)


@dataclass
class Book:
    """An opened workbook. ``sheets`` stand in the order of ``parts.sheets``."""

    path: Path
    mark: Fingerprint
    parts: Parts
    sheets: list[Sheet]

    def name_of(self, sheet: int) -> str:
        """A worksheet's name."""
        return self.parts.sheets[sheet].name


def open_book(path: Path, progress: Progress | None = None) -> Book:
    """Read a workbook. Raises :class:`BookError` for whatever cannot be read in full and with safety."""
    sheets: list[Sheet] = []
    with Archive(path) as archive:
        mark = fingerprint(path)
        parts = read_parts(archive)
        left = MAX_CELLS
        for index, sheet in enumerate(parts.sheets):
            if progress is not None:
                progress(f"reading {sheet.name}", share(READING, PLANNING, index / len(parts.sheets)))
            sheets.append(_scan(archive, sheet.part, parts, left))
            left -= sheets[-1].count
    return Book(path, mark, parts, sheets)


def _scan(archive: Archive, part: str, parts: Parts, most: int) -> Sheet:
    content = archive.read(part)
    return quick_scan(content, parts, archive.path, part, most) or scan_sheet([content], parts, archive.path, part, most)


# In a column filled down most formulas differ by their own row number only: this stands for it.
_ROW = "\x05"
_MAX_REMEMBERED = 20_000


class Formulas:
    """The shapes and slots of one sheet's formulas, those of shared formulas worked out from the first one."""

    def __init__(self, sheet: Sheet) -> None:
        self._firsts: dict[str, FormulaCell] = {}
        self._split_firsts: dict[str, tuple[str, list[str]]] = {}
        self._remembered: dict[str, tuple[str, list[str]]] = {}
        for cell in sheet.formulas:
            if cell.shared is not None and cell.text and cell.shared not in self._firsts:
                self._firsts[cell.shared] = cell

    def take(self, cell: FormulaCell) -> tuple[str, list[str]] | None:
        """Shape and slots of a cell's formula; None where a shared formula has no first one or leaves the sheet.

        Raises :class:`~ingle_addin.book.formula.UnreadableError` for a shared formula beyond the limits.
        """
        if cell.text or cell.shared is None:
            return self._split(cell)
        first = self._firsts.get(cell.shared)
        if first is None:
            return None
        found = self._split_firsts.get(cell.shared)
        if found is None:
            check_size(first.text)
            found = self._split_firsts[cell.shared] = split(first.text)
        shape, slots = found
        (row, column), (first_row, first_column) = place_of(cell.key), place_of(first.key)
        moved = shifted(shape, slots, row - first_row, column - first_column)
        return None if moved is None else (shape, moved)

    def _split(self, cell: FormulaCell) -> tuple[str, list[str]]:
        """As :func:`split`, five times as fast where the same formula stands in another row."""
        row = str(place_of(cell.key)[0])
        pattern = cell.text.replace(row, _ROW)
        found = self._remembered.get(pattern)
        if found is not None:
            return found[0], [slot.replace(_ROW, row) for slot in found[1]]
        shape, slots = split(cell.text)
        # A row number outside of the slots (in a name, a sheet's name) makes the shape another one in every row.
        patterns = [slot.replace(row, _ROW) for slot in slots]
        if _ROW not in shape.replace(row, _ROW) and len(self._remembered) < _MAX_REMEMBERED:
            self._remembered[pattern] = (shape, patterns)
        return shape, slots

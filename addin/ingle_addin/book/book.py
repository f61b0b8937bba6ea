"""A workbook read into memory: its parts, its cells, and the mark by which to tell that the file has not changed."""

from __future__ import annotations

import hashlib
import os
import re
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from ingle_addin.book.archive import Archive
from ingle_addin.book.errors import BookError
from ingle_addin.book.formula import MARKS, REFERENCE_MARKS, ROW, check_size, shifted, split
from ingle_addin.book.parts import Parts, read_parts
from ingle_addin.book.progress import PLANNING, READING, Progress, share
from ingle_addin.book.quick import quick_scan
from ingle_addin.book.refs import place_of
from ingle_addin.book.scan import MAX_CELLS, FormulaCell, Sheet, scan_sheet

# A row's number that moves with the formula.
_RELATIVE_ROW = re.compile(r"(?<![$\d])(\d+)")


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


_MAX_REMEMBERED = 20_000


class Formulas:
    """The shapes and slots of one sheet's formulas, those of shared formulas worked out from the first one."""

    def __init__(self, sheet: Sheet) -> None:
        self._firsts: dict[str, FormulaCell] = {}
        self._split_firsts: dict[str, tuple[str, list[str]]] = {}
        self._remembered: dict[tuple[str, int], tuple[str, list[str]]] = {}
        for cell in sheet.formulas:
            if cell.shared is not None and cell.text and cell.shared not in self._firsts:
                self._firsts[cell.shared] = cell

    def take(self, cell: FormulaCell) -> tuple[str, list[str]] | None:
        """Shape and slots of a cell's formula; None where a shared formula has no first one or leaves the sheet.

        Raises :class:`~ingle_addin.book.formula.UnreadableError` for a shared formula beyond the limits.
        """
        pattern = self.pattern(cell)
        known = self._remembered.get(pattern)
        if known is not None:
            row = str(place_of(cell.key)[0])
            return known[0], [slot.replace(ROW, row) for slot in known[1]]
        taken = split(cell.text) if cell.text or cell.shared is None else self._followed(cell)
        if taken is not None and len(self._remembered) < _MAX_REMEMBERED:
            patterns = self._patterns(cell, *taken)
            if patterns is not None:
                self._remembered[pattern] = (taken[0], patterns)
        return taken

    def patterns(self, cell: FormulaCell) -> list[str] | None:
        """The slots with the row's number left open, as they hold for every formula of the same :meth:`pattern`.

        None if they hold for this one only. To be asked after :meth:`take`.
        """
        known = self._remembered.get(self.pattern(cell))
        return None if known is None else known[1]

    def _followed(self, cell: FormulaCell) -> tuple[str, list[str]] | None:
        """A follower of a shared formula, from the first one."""
        first = self._firsts.get(cell.shared or "")
        if first is None:
            return None
        found = self._split_firsts.get(cell.shared or "")
        if found is None:
            check_size(first.text)
            found = self._split_firsts[cell.shared or ""] = split(first.text)
        shape, slots = found
        (row, column), (first_row, first_column) = place_of(cell.key), place_of(first.key)
        moved = shifted(shape, slots, row - first_row, column - first_column)
        return None if moved is None else (shape, moved)

    @staticmethod
    def pattern(cell: FormulaCell) -> tuple[str, int]:
        """What the formulas of a column filled down have in common.

        A formula written out with its own row's number left open; a follower of a shared formula by that and its column.
        """
        if cell.text or cell.shared is None:
            return cell.text.replace(str(cell.key >> 14), ROW), 0
        return ROW + cell.shared, place_of(cell.key)[1]

    @staticmethod
    def _patterns(cell: FormulaCell, shape: str, slots: Sequence[str]) -> list[str] | None:
        own = str(place_of(cell.key)[0])
        if cell.text or cell.shared is None:
            # A row number outside of the slots (in a name, a sheet's name) makes the shape another one in every row.
            return None if own in shape else [slot.replace(own, ROW) for slot in slots]
        found = []
        for mark, slot in zip((letter for letter in shape if letter in MARKS), slots, strict=True):
            open_slot = slot
            if mark in REFERENCE_MARKS:
                for match in _RELATIVE_ROW.finditer(slot):
                    if match[1] != own:
                        return None  # a row above or below: not the same distance when it is written as a number
                open_slot = _RELATIVE_ROW.sub(ROW, slot)
            found.append(open_slot)
        return found

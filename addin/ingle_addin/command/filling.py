"""`ingle fill`."""

from __future__ import annotations

from pathlib import Path

from ingle_addin.command.failure import workbook_failures
from ingle_addin.command.progress import shown_progress
from ingle_addin.command.solving import solve


def fill_book(book: Path, out: Path | None, in_place: bool, strict: bool) -> int:
    """Fill a workbook and print its summary; 1 if ``strict`` and an answer is missing."""
    with workbook_failures(book), shown_progress() as progress:
        from ingle_addin.book import fill, summary
        from ingle_addin.functions import NAMES

        report = fill(book, out, functions=NAMES, solve=solve, in_place=in_place, progress=progress)
    for line in summary(report):
        print(line)
    return 1 if strict and not report.complete else 0

"""`ingle respell`."""

from __future__ import annotations

from pathlib import Path

from ingle_addin.command.failure import Failure, workbook_failures
from ingle_addin.command.progress import shown_progress


def respell_book(book: Path, to: str, out: Path | None, in_place: bool) -> int:
    """Respell a workbook's Ingle functions and say what was changed."""
    if to not in ("dotted", "underscored"):
        raise Failure(f"--to is {to}; write dotted (INGLE.PEAK) or underscored (INGLE_PEAK)")
    with workbook_failures(book), shown_progress() as progress:
        from ingle_addin.book import respell, respell_summary
        from ingle_addin.functions import NAMES

        done = respell(
            book, "dotted" if to == "dotted" else "underscored", out, functions=NAMES, in_place=in_place, progress=progress
        )
    for line in respell_summary(done):
        print(line)
    return 0

"""`ingle fill`."""

from __future__ import annotations

from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

from ingle_addin.command.failure import Failure

if TYPE_CHECKING:
    from collections.abc import Iterator

    from ingle_addin.book.work import Progress


def fill_book(book: Path, out: Path | None, in_place: bool, strict: bool) -> int:
    """Fill a workbook and print its summary; 1 if ``strict`` and an answer is missing."""
    from ingle_addin.batch import solve_calls
    from ingle_addin.book import BookError, fill, summary
    from ingle_addin.functions import NAMES

    if not book.name or book.is_dir():
        raise Failure(f"{book} is a folder; name the workbook in it")
    try:
        with _progress() as progress:
            report = fill(book, out, functions=NAMES, solve=solve_calls, in_place=in_place, progress=progress)
    except BookError as error:
        raise Failure(str(error)) from None
    for line in summary(report):
        print(line)
    return 1 if strict and not report.complete else 0


@contextmanager
def _progress() -> Iterator[Progress]:
    """A bar on the terminal's error stream, gone when done; nothing where that is a file."""
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn

    console = Console(stderr=True)
    columns = (TextColumn("{task.description}"), BarColumn(), TimeElapsedColumn())
    with Progress(*columns, console=console, transient=True, disable=not console.is_terminal) as bar:
        task = bar.add_task("reading", total=1.0)
        yield lambda stage, share: bar.update(task, description=stage, completed=share)

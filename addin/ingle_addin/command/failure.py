"""What stops a command."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path


class Failure(Exception):  # noqa: N818 - a message for people, shown without its type
    """One line that says what could not be done and what to do; the command leaves with 2."""


@contextmanager
def workbook_failures(book: Path) -> Iterator[None]:
    """Turn what the workbook engine refuses into the line of a failed command; a folder is refused at once."""
    if not book.name or book.is_dir():
        raise Failure(f"{book} is a folder; name the workbook in it")
    from ingle_addin.book.errors import BookError

    try:
        yield
    except BookError as error:
        raise Failure(str(error)) from None

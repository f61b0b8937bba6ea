"""Workbooks without a spreadsheet program: read, computed and written with nothing else in the file touched."""

from ingle_addin.book.book import Book, open_book
from ingle_addin.book.computed import Computed
from ingle_addin.book.errors import BookError
from ingle_addin.book.filling import default_out, fill
from ingle_addin.book.report import NoAnswer, NotComputed, Report, Truncated, summary
from ingle_addin.book.rounds import compute

__all__ = [
    "Book",
    "BookError",
    "Computed",
    "NoAnswer",
    "NotComputed",
    "Report",
    "Truncated",
    "compute",
    "default_out",
    "fill",
    "open_book",
    "summary",
]

"""Workbooks without a spreadsheet program: read, computed and written with nothing else in the file touched."""

from ingle_addin.book.book import Book, open_book
from ingle_addin.book.check_words import check_summary
from ingle_addin.book.checking import Checked, Difference, check
from ingle_addin.book.computed import Computed
from ingle_addin.book.errors import BookError
from ingle_addin.book.filling import default_out, fill
from ingle_addin.book.report import NoAnswer, NotComputed, Report, Truncated, summary
from ingle_addin.book.respell import Respelled, To, respell, respell_summary, respelled_out
from ingle_addin.book.rounds import compute
from ingle_addin.book.shifted import Shifted

__all__ = [
    "Book",
    "BookError",
    "Checked",
    "Computed",
    "Difference",
    "NoAnswer",
    "NotComputed",
    "Report",
    "Respelled",
    "Shifted",
    "To",
    "Truncated",
    "check",
    "check_summary",
    "compute",
    "default_out",
    "fill",
    "open_book",
    "respell",
    "respell_summary",
    "respelled_out",
    "summary",
]

"""Workbooks without a spreadsheet program: read, computed and written with nothing else in the file touched."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from ingle_addin.book.book import Book, open_book
    from ingle_addin.book.check_words import check_summary
    from ingle_addin.book.checking import Checked, Difference, check
    from ingle_addin.book.computed import Computed
    from ingle_addin.book.errors import BookError
    from ingle_addin.book.filling import default_out, fill
    from ingle_addin.book.report import NoAnswer, NotComputed, Report, Truncated, summary
    from ingle_addin.book.respelling import Respelled, To, respell, respell_summary, respelled_out
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

# Each name is loaded when it is first asked for: a fill need not wait for what checks or respells.
_MODULES = {
    "Book": "book",
    "BookError": "errors",
    "Checked": "checking",
    "Computed": "computed",
    "Difference": "checking",
    "NoAnswer": "report",
    "NotComputed": "report",
    "Report": "report",
    "Respelled": "respelling",
    "Shifted": "shifted",
    "To": "respelling",
    "Truncated": "report",
    "check": "checking",
    "check_summary": "check_words",
    "compute": "rounds",
    "default_out": "filling",
    "fill": "filling",
    "open_book": "book",
    "respell": "respelling",
    "respell_summary": "respelling",
    "respelled_out": "respelling",
    "summary": "report",
}


def __getattr__(name: str) -> Any:
    if name not in _MODULES:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    return getattr(import_module(f"{__name__}.{_MODULES[name]}"), name)

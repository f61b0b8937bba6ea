"""The one exception of the workbook commands."""

from __future__ import annotations


class BookError(Exception):
    """A workbook cannot be read, computed or written; ``str`` of it is one line that names the file and the remedy."""

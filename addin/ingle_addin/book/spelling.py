"""Which names in a formula are Ingle's functions, however the spreadsheet program has dressed them up."""

from __future__ import annotations

import re
from collections.abc import Collection

_PREFIX = re.compile(r"(?:_xlfn\.|_xlws\.|_xll\.|_xludf\.|_xldudf_|@)", re.IGNORECASE)


def bare(name: str) -> str:
    """A function's name without what a spreadsheet puts before it, in capitals.

    Strips ``'path\\book.xlam'!``, ``[1]!`` and ``book.xlam!``, then any run of ``_xlfn.``, ``_xlws.``, ``_xll.``,
    ``_xludf.``, ``_xldudf_`` and ``@``.
    """
    name = name.strip().rpartition("!")[2]
    while match := _PREFIX.match(name):
        name = name[match.end() :]
    return name.upper()


class Spelling:
    """Recognises a set of functions given by their dotted names (``INGLE.PEAK``)."""

    def __init__(self, functions: Collection[str]) -> None:
        self._canonical: dict[str, str] = {}
        for name in functions:
            self._canonical[name.upper()] = name
            self._canonical[name.upper().replace(".", "_")] = name
        # "INGLE" of "INGLE.PEAK": a name of that family that is not in the table is a slip to report, not a stranger.
        self._families = {name.upper().partition(".")[0] for name in functions}

    def canonical(self, name: str) -> str | None:
        """``INGLE.PEAK`` for any spelling of it, None for a function that is not Ingle's."""
        return self._canonical.get(bare(name))

    def is_of_family(self, name: str) -> bool:
        """Whether the name is one of the functions, or looks like one."""
        return self.canonical(name) is not None or self.is_misspelt(name)

    def is_misspelt(self, name: str) -> bool:
        """Whether the name looks like one of the family but is not in the table."""
        plain = bare(name)
        if plain in self._canonical:
            return False
        return any(plain.startswith((family + ".", family + "_")) for family in self._families)

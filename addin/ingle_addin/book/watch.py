"""Which calls must be asked again when a cell has changed."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Sequence

from ingle_addin.book.calling import Area, Call, Constant
from ingle_addin.book.refs import key_of

# Calls with larger ranges are asked about every time instead.
_SMALL = 256


class Watch:
    """Knows, cell by cell, the calls that read it, and remembers those that something has stirred.

    ``restless`` are calls of which only asking tells whether their arguments have changed.
    """

    def __init__(self, calls: Iterable[Call], sheets: int) -> None:
        self._readers: list[defaultdict[int, list[Call]]] = [defaultdict(list) for _ in range(sheets)]
        self._stirred: dict[int, Call] = {}
        self.restless: list[Call] = []
        for call in calls:
            if not call.moves:
                continue
            areas = [arg for arg in call.args if isinstance(arg, Area)]
            others = sum(not isinstance(arg, (Area, Constant)) for arg in call.args)
            if others or any(area.rect.rows * area.rect.columns > _SMALL for area in areas):
                self.restless.append(call)
                continue
            for sheet, rect in areas:
                for row in range(rect.top, rect.bottom + 1):
                    start = key_of(row, rect.left)
                    for key in range(start, start + rect.columns):
                        self._readers[sheet][key].append(call)

    def watched(self, sheet: int) -> Iterable[int]:
        """The cells of a sheet that calls read."""
        return self._readers[sheet].keys()

    def stir(self, sheet: int, keys: Iterable[int]) -> None:
        """Take note that cells have changed."""
        readers = self._readers[sheet]
        if readers:
            for key in keys:
                for call in readers.get(key, ()):
                    self._stirred[id(call)] = call

    def take(self) -> Sequence[Call]:
        """The calls stirred since the last time of asking."""
        found, self._stirred = list(self._stirred.values()), {}
        return found

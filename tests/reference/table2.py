"""Rows of the wider scope in a table: which they are, their answers and the errors of these."""

from __future__ import annotations

import math
from collections.abc import Sequence
from functools import lru_cache

from . import headings2 as h
from . import units
from .build2 import Cells
from .chain import StuckError
from .rows import IMPOSSIBLE, NEEDED, WRONG, RefusedError
from .rows2 import Row2


def concerns(columns: Sequence[h.Column], cells: Sequence[object]) -> bool:
    """Whether a row needs the wider scope: a heading of it filled, a text table, a bar, or only its source blank."""
    sources_filled = False
    for col, cell in zip(columns, cells, strict=True):
        if col.what == "bad" and col.new:
            return True
        if col.what != "use" or cell is None or (isinstance(cell, str) and not cell.strip()):
            continue
        if col.new or (isinstance(cell, str) and (":" in cell or cell.strip().lower() == "bar")):
            return True
        sources_filled = sources_filled or col.source
    return not sources_filled and any(col.new and col.source for col in columns)


@lru_cache(maxsize=4096)
def _row(columns: tuple[h.Column, ...], cells: tuple[tuple[str, object], ...]) -> Row2 | RefusedError:
    try:
        return Row2(Cells(columns, [cell for _, cell in cells]))
    except RefusedError as refused:
        return refused


def _known(columns: Sequence[h.Column], cells: Sequence[object]) -> Row2 | RefusedError:
    used = [(col, (type(cell).__name__, cell)) for col, cell in zip(columns, cells, strict=True) if col.what != "skip"]
    return _row(tuple(col for col, _ in used), tuple(cell for _, cell in used))


def _no_answer(ask: h.Asked, refused: RefusedError) -> object:
    words = ask.what == "use" and ask.name == "verdict" and not refused.exact
    return "no answer" if words else refused.error


def _one(row: Row2, ask: h.Asked) -> tuple[object, float]:
    if ask.what == "bad":
        return WRONG, 0.0
    if ask.what == "later":
        return NEEDED, 0.0
    try:
        value, error = row.answer(ask.name, ask.kind)
    except RefusedError as refused:
        return _no_answer(ask, refused), 0.0
    except StuckError:  # no trustworthy number
        return IMPOSSIBLE, math.inf
    if ask.name == "peak layer":
        value = int(value)
    if not isinstance(value, float):
        return value, error
    return units.from_si(value, ask.unit), error / abs(ask.unit[0])


def answers(asks: Sequence[h.Asked], columns: Sequence[h.Column], cells: Sequence[object]) -> list[object]:
    row = _known(columns, cells)
    if isinstance(row, RefusedError):
        return [_no_answer(ask, row) for ask in asks]
    return [_one(row, ask)[0] for ask in asks]


def tolerances(asks: Sequence[h.Asked], columns: Sequence[h.Column], cells: Sequence[object]) -> list[float]:
    row = _known(columns, cells)
    if isinstance(row, RefusedError):
        return [0.0] * len(asks)
    out = []
    for ask in asks:
        value, error = _one(row, ask)
        refused = isinstance(value, str) and value.startswith("#")
        if not refused and ask.name in ("peak layer", "limited by", "headroom") and row.unsure(ask.name):
            error = math.inf
        out.append(error)
    return out

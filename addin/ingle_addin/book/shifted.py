"""Finds calls whose values do not stand under their headings: a range shifted by one gives a plausible wrong number."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import NamedTuple

from ingle_addin.book.calling import Area, Argument, Call, Common, Constant
from ingle_addin.book.grids import range_name, size_of
from ingle_addin.book.refs import Rect, cell_name, place_of


@dataclass(frozen=True)
class Shifted:
    """Values that stand in other columns (in a turned table, rows) than their headings; ``cells`` such formulas in a column.

    ``cell`` is the first of them, ``headings`` and ``values`` its ranges.
    """

    sheet: str
    cell: str
    headings: str
    values: str
    lines: str
    cells: int = 1

    def __str__(self) -> str:
        return f"the headings are {self.headings}, but the values {self.values} stand in other {self.lines}"


class Misplaced(NamedTuple):
    """The ranges of one call: ``headings`` over other columns than ``values``, or beside other rows if ``upright``."""

    headings: Rect
    values: Rect
    upright: bool


def misplaced(call: Call, place: int | None) -> Misplaced | None:
    """Whether values of a call stand beside their headings' columns; ``place`` is where among the arguments these stand.

    Told only where headings and values are ranges of one sheet whose columns overlap or touch: a table of values elsewhere
    may well be meant.
    """
    if place is None or place >= len(call.args):
        return None
    heads = _area(call.args[place])
    if heads is None:
        return None
    upright = _is_upright(heads.rect)
    first, count = (heads.rect.top, heads.rect.rows) if upright else (heads.rect.left, heads.rect.columns)
    if count == 1:
        return None
    for at, area in _areas(call.args[place + 1 :], upright):
        if area.sheet != heads.sheet or at >= count:
            continue
        start, last = (area.rect.top, area.rect.bottom) if upright else (area.rect.left, area.rect.right)
        if start != first + at and start <= first + count and last >= first - 1:
            return Misplaced(heads.rect, area.rect, upright)
    return None


def _areas(values: Sequence[Argument], upright: bool) -> Iterator[tuple[int, Area]]:
    """Each range among the values, with the number of the heading that its first column belongs to."""
    at = 0
    for each in values:
        area = _area(each)
        if area is not None:
            yield at, area
            at += area.rect.rows if upright else area.rect.columns
        elif isinstance(each, Constant):
            at += size_of(each.value)[0 if upright else 1]
        else:
            return  # how wide it is depends on what it comes to


def _area(argument: Argument) -> Area | None:
    """The range that an argument is."""
    if isinstance(argument, Common):
        return argument.area
    return argument if isinstance(argument, Area) else None


def _is_upright(heads: Rect) -> bool:
    """Whether headings stand in a column; a block of two by two is names over units."""
    return heads.rows > 1 and heads.columns <= 2 and heads.rows > heads.columns


def shifted_ranges(calls: Sequence[Call], places: Mapping[str, int | None], sheet_names: Sequence[str]) -> tuple[Shifted, ...]:
    """All such calls, those of one column with the same headings and value columns told as one."""
    found: dict[tuple[object, ...], list[tuple[int, Misplaced]]] = {}
    for call in calls:
        wrong = misplaced(call, places.get(call.name))
        if wrong is None:
            continue
        column = place_of(call.key)[1]
        values = wrong.values
        span = (values.top, values.bottom) if wrong.upright else (values.left, values.right)
        found.setdefault((call.sheet, column, wrong.headings, span), []).append((call.key, wrong))
    told = []
    for (sheet, *_), wrongs in found.items():
        key, first = min(wrongs)
        lines = "rows" if first.upright else "columns"
        name = sheet_names[sheet] if isinstance(sheet, int) else ""
        told.append(Shifted(name, cell_name(key), range_name(first.headings), range_name(first.values), lines, len(wrongs)))
    return tuple(told)

"""Calls one at a time, as a spreadsheet program makes them: headings are read once, and a row is solved once for all its cells.

A program asks cell by cell: PEAK of every row down a column, then FACE of every row, or all answers of one row and then of
the next. So what was asked of the row before is worked out together with what is asked of a new one, and when a row that is
known is asked something new, the rows that came after it are answered in the same go. Each is what a call of its own gives,
to the bit. Rows are known by what their cells hold.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from itertools import chain
from typing import Any

import numpy as np

from ingle_addin.asking import mismatch_of
from ingle_addin.batch import asked_of, cells_of, failed, solve_calls
from ingle_addin.calls import Outcome
from ingle_addin.cells import Cell, CellError, Grid
from ingle_addin.evaluate import evaluate
from ingle_addin.evaluation import Alone
from ingle_addin.faults import Fault, finished, number_text
from ingle_addin.from_sheet import OMITTED, cell_of, grid_of, rows_to_sheet, to_sheet
from ingle_addin.heading_reader import Asked, Plan, clean, read_headings
from ingle_addin.tables import heading_texts, join, to_columns
from ingle_addin.units import Kind

MOST_CELLS = 1_000_000  # of the rows that are kept
AHEAD = 512  # rows answered in one go
_LEADS = {"INGLE.PEAK": 0, "INGLE.FACE": 1, "INGLE.ALLOW": 0, "INGLE.ASK": 1, "INGLE.WHY": 0}
_PLAIN = {float, str, type(None)}
WHOLE_COLUMN = "a whole column is passed where one row is asked; pass the cells of this row, as in A2:H2"

Row = tuple[Any, ...]
Slots = tuple[int, ...]


@dataclass
class _Known:
    """A row: its place among its table's rows, and the answers found so far, by slot."""

    place: int
    row: Row
    found: dict[int, Row] = field(default_factory=dict)


@dataclass
class _Table:
    """Rows under one set of headings. ``pattern`` is what the row before was asked until the next one came."""

    plan: Plan
    upright: bool
    rows: dict[Any, _Known] = field(default_factory=dict)
    order: list[_Known] = field(default_factory=list)
    pattern: set[int] = field(default_factory=set)
    since: set[int] = field(default_factory=set)


class RowAnswers:
    """Answers calls in the form a program takes them; ``errors`` are its cell errors.

    With ``lone_zero_may_be_empty`` an argument of its own that is exactly 0 under a temperature heading is refused, for
    programs that hand over 0 for an empty cell.
    """

    def __init__(self, errors: Mapping[CellError, Any], lone_zero_may_be_empty: bool = False) -> None:
        self._errors = errors
        self._wary = lone_zero_may_be_empty
        self._tables: dict[Any, _Table | None] = {}
        self._questions: dict[Any, Slots | None] = {}
        self._slots: dict[tuple[Asked | Fault, ...], int] = {}
        self._asked: list[tuple[Asked | Fault, ...]] = []
        self._cells = 0

    def answer(self, name: str, args: Sequence[Any], whole_column: bool = False) -> tuple[Row, ...]:
        """Rows of values for a call, its arguments as the program hands them over (None is one left out).

        ``whole_column`` is of a call for one row that was given a whole column.
        """
        if whole_column:
            return self._failed(name, Fault(CellError.VALUE, WHOLE_COLUMN))
        lead = _LEADS.get(name)
        if lead is None or len(args) < lead + 2:
            return self._many(name, args)
        try:
            slots = self._questions[name, *args[:lead]]
            table = self._tables[args[lead]]
        except (KeyError, TypeError):
            args = tuple(map(_hashable, args))
            slots = self._question(name, args[:lead])
            table = self._table(args[lead])
        if slots is None or table is None:
            return self._many(name, args)
        first = args[lead + 1]
        if len(args) == lead + 2 and type(first) is tuple and len(first) == 1 and not table.upright:
            row = first[0]
        else:
            doubt = self._doubt(table, args[lead + 1 :])
            if doubt is not None:
                return self._failed(name, doubt)
            rows = join([_grid(arg) for arg in args[lead + 1 :]], table.upright)
            if isinstance(rows, Fault):
                return self._many(name, args)
            if len(rows) > 1:
                return self._of_rows(table, rows, slots)
            row = tuple(rows[0])
        if len(row) != table.plan.width:
            return self._many(name, args)
        found = self._of_row(table, row, slots)
        cells = found[slots[0]] if len(slots) == 1 else tuple(chain.from_iterable(map(found.__getitem__, slots)))
        return tuple((cell,) for cell in cells) if table.upright else (cells,)

    def explain(self, name: str, args: Sequence[Any], row: int = 0) -> tuple[list[tuple[str, str]], str]:
        """The filled headings of a row that are not the user's own, with their values as texts, and what INGLE.WHY says of it."""
        args = args[_LEADS.get(name, 1) :]
        texts = heading_texts(_grid(args[0]))
        rows = join([_grid(arg) for arg in args[1:]], texts[1]) if not isinstance(texts, Fault) else texts
        if isinstance(texts, Fault) or isinstance(rows, Fault):
            fault = texts if isinstance(texts, Fault) else rows
            return [], finished(fault.sentence, 0)  # type: ignore[union-attr]
        cells, own = rows[min(row, len(rows) - 1)], read_headings(texts[0]).own
        (why,) = solve_calls("INGLE.WHY", [((texts[0],), (cells,))])
        pairs = [
            (clean(text), _text(cell))
            for place, (text, cell) in enumerate(zip(texts[0], cells, strict=False))
            if place not in own and cell is not None and str(cell).strip()
        ]
        return pairs, str(why.grid[0][0]) or "this row is blank"

    def _many(self, name: str, args: Sequence[Any]) -> tuple[Row, ...]:
        """A call that could not be read as rows under headings: another function, or one with a fault of the call itself."""
        (outcome,) = solve_calls(name, [tuple(map(_grid, args))])
        return rows_to_sheet(outcome.grid, self._errors)

    def _failed(self, name: str, fault: Fault) -> tuple[Row, ...]:
        shown = Outcome(((finished(fault.sentence, 0),),), (None,)) if name == "INGLE.WHY" else failed(fault)
        return rows_to_sheet(shown.grid, self._errors)

    def _question(self, name: str, lead: Row) -> Slots | None:
        """The slots of what a function asks for; None where that cannot be read."""
        key = (name, *lead)
        if key not in self._questions:
            if len(self._questions) > 1000:
                self._questions.clear()
            asked = asked_of(name, [_grid(arg) for arg in lead])
            self._questions[key] = None if isinstance(asked, Fault) else self._slots_of(asked)
        return self._questions[key]

    def _slots_of(self, asked: tuple[Asked | Fault, ...]) -> Slots:
        """A slot an answer; `why` among others tells of those others and shares one slot with them."""
        has_why = any(isinstance(each, Asked) and each.item.quantity == "why" for each in asked)
        parts: list[tuple[Asked | Fault, ...]] = [asked] if has_why and len(asked) > 1 else [(each,) for each in asked]
        if has_why and len(asked) == 1 and isinstance(asked[0], Asked):
            parts = [(Alone.of(asked[0]),)]
        for part in parts:
            if part not in self._slots:
                self._slots[part] = len(self._asked)
                self._asked.append(part)
        return tuple(self._slots[part] for part in parts)

    def _table(self, headings: Any) -> _Table | None:
        if headings not in self._tables:
            if len(self._tables) > 200:
                self._forget()
                self._tables.clear()
            texts = heading_texts(_grid(headings))
            self._tables[headings] = None if isinstance(texts, Fault) else _Table(read_headings(texts[0]), texts[1])
        return self._tables[headings]

    def _forget(self) -> None:
        for table in self._tables.values():
            if table is not None:
                table.rows.clear()
                table.order.clear()
        self._cells = 0

    def _of_row(self, table: _Table, row: Row, slots: Slots) -> dict[int, Row]:
        key: Any = row
        if not _PLAIN.issuperset(map(type, row)):
            key = (row, tuple(map(type, row)))  # TRUE is not 1
        known = table.rows.get(key)
        if known is None:
            if self._cells > MOST_CELLS:
                self._forget()
            table.pattern, table.since = table.since, set()
            known = table.rows[key] = _Known(len(table.order), row)
            table.order.append(known)
            self._cells += len(row)
            self._solve(table, [known], [*slots, *table.pattern.difference(slots)])
        else:
            lacking = [slot for slot in slots if slot not in known.found]
            if lacking:
                ahead = table.order[known.place : known.place + AHEAD]
                self._solve(table, [other for other in ahead if any(slot not in other.found for slot in lacking)], lacking)
        table.since.update(slots)
        return known.found

    def _solve(self, table: _Table, rows: list[_Known], slots: list[int]) -> None:
        """Find the answers of these slots for these rows, those that can stand together at once."""
        together = [slot for slot in slots if len(self._asked[slot]) == 1]
        for group in ([together] if together else []) + [[slot] for slot in slots if len(self._asked[slot]) > 1]:
            asked = tuple(chain.from_iterable(self._asked[slot] for slot in group))
            columns = to_columns([[cell_of(value) for value in known.row] for known in rows])
            result = evaluate(table.plan, columns, asked, None, np.zeros(len(rows), np.intp))
            cells = [[to_sheet(cell, self._errors) for cell in cells_of(result, j)] for j in range(len(asked))]
            start = 0
            for slot in group:
                stop = start + len(self._asked[slot])
                for known, values in zip(rows, zip(*cells[start:stop], strict=True), strict=True):
                    known.found[slot] = values
                start = stop

    def _of_rows(self, table: _Table, rows: list[list[Cell]], slots: Slots) -> tuple[Row, ...]:
        """Many rows of one call: long tables are not kept."""
        asked = tuple(chain.from_iterable(self._asked[slot] for slot in slots))
        result = evaluate(table.plan, to_columns(rows), asked, mismatch_of(len(rows[0]), table.plan))
        columns = [[to_sheet(cell, self._errors) for cell in cells_of(result, j)] for j in range(len(asked))]
        return tuple(map(tuple, columns)) if table.upright else tuple(zip(*columns, strict=True))

    def _doubt(self, table: _Table, values: Sequence[Any]) -> Fault | None:
        """An argument of its own that is 0 where a temperature belongs, for it may have been an empty cell."""
        if not self._wary:
            return None
        at = 0
        for value in values:
            if isinstance(value, (int, float)) and not isinstance(value, bool) and value == 0:
                for column in table.plan.columns:
                    if column.index == at and column.unit.kind is Kind.TEMPERATURE:
                        sentence = f"{column.label} is 0 and may be an empty cell; pass a range, as in A2:H2"
                        return Fault(CellError.VALUE, sentence)
            at += _width(value, table.upright)
        return None


def _width(value: Any, upright: bool) -> int:
    """How many headings an argument's columns (or rows, where headings stand upright) belong to."""
    if value is None:
        return 0
    if not isinstance(value, (list, tuple)) or not value:
        return int(not isinstance(value, (list, tuple)))
    if not isinstance(value[0], (list, tuple)):
        return 1 if upright else len(value)
    return len(value) if upright else len(value[0])


def _grid(value: Any) -> Grid:
    return OMITTED if value is None else grid_of(value)


def _hashable(value: Any) -> Any:
    return tuple(map(_hashable, value)) if isinstance(value, (list, tuple)) else value


def _text(cell: Cell) -> str:
    if isinstance(cell, bool):
        return str(cell).upper()
    return number_text(cell) if isinstance(cell, (int, float)) else str(cell)

"""Rows of values under a plan of headings, to columns of answers: the one path every front end takes.

    cells → headings and columns → cases (SI arrays) → solver → answers → cells

Work goes in blocks of rows from the first check to the last answer. Within a block, rows that fill the same headings share
a recipe; a row with a fault is left out of its group and keeps nothing but its fault.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from ingle import Answers, Status, steady
from ingle.conductivities import Table
from ingle.steady import BLOCK, OF_SCALING

from ingle_addin import answers, checks, columns, limit_answers, recipe
from ingle_addin.case_builder import Built, build_cases
from ingle_addin.cautions import caution_masks
from ingle_addin.cells import CellError
from ingle_addin.columns import Values
from ingle_addin.evaluation import Evaluation, judge
from ingle_addin.faults import Fault
from ingle_addin.heading_reader import Asked, Column, Plan, clean
from ingle_addin.ready import Ready, Solved
from ingle_addin.recipe import Recipe
from ingle_addin.status_faults import BEYOND, STATUS_FAULTS
from ingle_addin.text_tables import TextTables, read_table
from ingle_addin.units import Kind


def evaluate(
    plan: Plan,
    table: Sequence[Values],
    asked: Sequence[Asked | Fault],
    mismatch: Fault | None = None,
    numbers: np.ndarray | None = None,
    keep_cases: bool = False,
) -> Evaluation:
    """Answer the rows of a table; never raises for anything a cell may hold.

    ``table`` has one column a heading, each of n rows or of one that serves all. ``mismatch`` is a fault of the call
    itself, such as a wrong number of columns, which every row that is not blank then has. ``numbers`` are the rows' numbers
    in sentences, 0 for a row that stands alone; from 1 if not given. ``keep_cases`` keeps the solver's cases for a profile.
    """
    n = max((len(column) for column in table), default=0)
    result = Evaluation(
        n,
        tuple(asked),
        [np.full(n, None, object) if _is_text(a) else np.full(n, np.nan) for a in asked],
        [np.full(n, -1, np.intp) for _ in asked],
        np.zeros(n, bool),
        np.full(n, -1, np.intp),
        keep_cases=keep_cases,
    )
    spoilt = mismatch or plan.fault
    with np.errstate(all="ignore"):
        for start in range(0, n, BLOCK):
            rows = slice(start, min(start + BLOCK, n))
            _Block(plan, [column.rows(rows.start, rows.stop) for column in table], result, rows).run(spoilt)
    judge(result, table, numbers)
    return result


def _is_text(asked: Asked | Fault) -> bool:
    return isinstance(asked, Asked) and asked.unit.kind is Kind.TEXT


_Key = tuple[tuple[int, ...], tuple[tuple[int, str | None], ...], tuple[int, ...]]


class _Block:
    """A block of rows on its way from cells to answers."""

    def __init__(self, plan: Plan, table: list[Values], result: Evaluation, rows: slice) -> None:
        self.plan, self.table, self.result, self.rows = plan, table, result, rows
        self.n = rows.stop - rows.start
        self.fault: np.ndarray | None = None  # of the row as a whole, made when the first is found
        self.first = np.zeros(0, bool)
        self.base: dict[int, np.ndarray] = {}
        self.filled: dict[int, np.ndarray | bool] = {}
        self.words: dict[int, tuple[np.ndarray | None, list[str | None]]] = {}
        self.tables: dict[int, TextTables] = {}

    def run(self, spoilt: Fault | None) -> None:
        """Check the cells, group the rows and answer each group."""
        if spoilt is not None:
            self._spoil(spoilt)
            return
        for column in self.plan.columns:
            self._check(column)
        for key, rows in self._groups():
            self._answer(key, rows)
        for j, asked in enumerate(self.result.asked):
            if isinstance(asked, Fault):  # an answer that cannot be read says so in every row
                self.result.fault[j][self.rows] = np.where(self.result.blank[self.rows], -1, self.result.number(asked))

    def _spoil(self, fault: Fault) -> None:
        blank: np.ndarray | bool = True
        skipped = self.plan.own if len(self.table) == self.plan.width else frozenset()
        for index, column in enumerate(self.table):
            if index not in skipped:
                blank = blank & column.blank()
            if column.kinds is not None and column.cells is not None and index not in skipped:
                label = clean(self.plan.texts[index]) if index < len(self.plan.texts) else f"column {index + 1}"
                for row in np.flatnonzero(column.kinds == columns.ERROR):  # reading: the cell's error is the row's
                    self._flag(np.arange(self.n) == row, checks.error_fault(label, column.cells[row]), first=True)
        self.result.blank[self.rows] = blank
        for j, asked in enumerate(self.result.asked):
            own = self.result.number(asked if isinstance(asked, Fault) else fault)
            shown = (
                np.full(self.n, own) if self.fault is None or isinstance(asked, Fault) else np.where(self.fault < 0, own, self.fault)
            )
            self.result.fault[j][self.rows] = np.where(self.result.blank[self.rows], -1, shown)

    def _flag(self, mask: np.ndarray, fault: Fault, first: bool = False) -> None:
        """The rows' fault, where they have none yet; one that goes ``first`` replaces any that did not."""
        if self.fault is None:
            self.fault = np.full(self.n, -1, np.intp)
            self.first = np.zeros(self.n, bool)
        free = self.fault < 0
        if first:
            free |= ~self.first
            self.first |= mask
        self.fault[mask & free] = self.result.number(fault)

    # Cells, a heading at a time.

    def _check(self, column: Column) -> None:
        values = self.table[column.index]
        if column.unit.kind is Kind.TEXT:
            self._check_words(column, values)
            return
        if values.numbers is None:
            values = columns.from_cells(values.cells.tolist() if values.cells is not None else [])
            if values.kinds is None and values.cells is not None:  # texts alone
                kinds = np.fromiter(map(columns.kind_of, values.cells), np.int8, self.n)
                values = Values(np.full(self.n, np.nan), kinds, values.cells)
        numbers = values.numbers
        assert numbers is not None
        base = column.unit.to_base(numbers)
        if values.kinds is None:
            blank = np.isnan(numbers)
            self.filled[column.index] = ~blank if blank.any() else True
        else:
            self.filled[column.index] = values.kinds != columns.BLANK
            self._check_odd(column, values)
        bad = checks.outside(column, base)
        if bad is not None:
            self._flag(bad, checks.range_fault(column))
        self.base[column.index] = base

    def _check_odd(self, column: Column, values: Values) -> None:
        assert values.kinds is not None
        assert values.cells is not None
        odd = np.flatnonzero(values.kinds >= columns.TEXT)
        seen: dict[object, list[int]] = {}
        tables = TextTables.none(self.n) if column.item.table else None
        for row in odd:  # reading: a fault is worded from the cell itself, a text table read from it
            seen.setdefault(columns.key(values.cells[row]), []).append(int(row))
        for rows in seen.values():
            cell = values.cells[rows[0]]
            if tables is not None and isinstance(cell, str) and checks.is_table(cell):
                table = read_table(column, cell)
                if not isinstance(table, Fault):
                    tables.put(rows, table)
                    continue
                fault = table
            else:
                fault = checks.cell_fault(column, cell)
            mask = np.zeros(self.n, bool)
            mask[rows] = True
            self._flag(mask, fault, first=isinstance(cell, CellError))
        if tables is not None and tables.given.any():
            self.tables[column.index] = tables

    def _check_words(self, column: Column, values: Values) -> None:
        if values.cells is None:
            assert values.numbers is not None
            values = columns.from_objects(values.numbers)
        codes, found = columns.codes(values)
        words: list[str | None] = []
        for code, cell in enumerate(found):
            words.append(None if columns.is_blank(cell) else checks.word(cell))
            fault = None if columns.is_blank(cell) else checks.word_fault(column, cell)
            if fault is not None:
                mask = np.ones(self.n, bool) if codes is None else codes == code
                self._flag(mask, fault, first=isinstance(cell, CellError))
        self.words[column.index] = codes, words
        blanks = np.array([w is None for w in words])
        self.filled[column.index] = (not blanks[0]) if codes is None else ~blanks[codes]

    # Groups of rows that fill the same headings, with the same words and the same sort of value.

    def _groups(self) -> list[tuple[_Key, np.ndarray | slice]]:
        used = self.plan.columns
        mixed = [c.index for c in used if not isinstance(self.filled[c.index], bool)]
        always = any(self.filled[c.index] is True for c in used)
        worded = [(index, codes) for index, (codes, _) in self.words.items() if codes is not None]
        keys = np.zeros(self.n, np.int64)
        blank = np.full(self.n, not always)
        for count, index in enumerate(mixed):
            filled = self.filled[index]
            assert isinstance(filled, np.ndarray)
            blank &= ~filled
            keys = keys * 2 + filled
            if count % 40 == 39:  # before the bits run out
                keys = _compact(keys)
        for _, codes in worded:
            keys = _compact(keys) * (int(codes.max()) + 1) + codes
        for index in self.tables:
            keys = _compact(keys) * 2 + self.tables[index].given
        self.result.blank[self.rows] = blank
        clean: np.ndarray | None = None
        if self.fault is not None:
            self.fault[blank] = -1
            self._spread(self.fault)
            clean = (self.fault < 0) & ~blank
        elif blank.any():
            clean = ~blank
        if clean is None and not worded and not mixed and not self.tables:
            return [(self._key(0), slice(None))]
        rows = np.arange(self.n) if clean is None else np.flatnonzero(clean)
        _, first, inverse = np.unique(keys[rows], return_index=True, return_inverse=True)
        inverse = inverse.reshape(-1)
        return [(self._key(int(rows[start])), rows[inverse == number]) for number, start in enumerate(first)]

    def _key(self, row: int) -> _Key:
        """What a row's group shares: the columns it fills, the words in them, the columns that hold text tables."""

        def fills(index: int) -> bool:
            filled = self.filled[index]
            return filled if isinstance(filled, bool) else bool(filled[row])

        indices = tuple(c.index for c in self.plan.columns if fills(c.index))
        words = tuple(
            (index, found[0 if codes is None else codes[row]]) for index, (codes, found) in self.words.items() if fills(index)
        )
        return indices, words, tuple(index for index in self.tables if self.tables[index].given[row])

    def _spread(self, fault: np.ndarray) -> None:
        """Give every answer the rows' own fault."""
        for j in range(len(self.result.asked)):
            part = self.result.fault[j][self.rows]
            self.result.fault[j][self.rows] = np.where(part < 0, fault, part)

    # Answers of one group.

    def _answer(self, key: _Key, rows: np.ndarray | slice) -> None:
        made = _recipe(self.plan, key)
        result = self.result
        if isinstance(made, Fault):
            for j in range(len(result.asked)):
                self._put_fault(j, rows, made)
            return
        ready = [_ready(a, self.plan, made) if isinstance(a, Asked) else a for a in result.asked]
        for j, r in enumerate(ready):
            if isinstance(r, Fault):
                self._put_fault(j, rows, r)
        judged = any(isinstance(a, Asked) and a.item.quantity in ("why", "verdict") for a in result.asked)
        if not any(isinstance(r, Ready) for r in ready):
            return
        cache: dict[str, np.ndarray] = {}

        def get(slot: str) -> np.ndarray:
            if slot not in cache:
                cache[slot] = self.base[made.filled[slot].index][rows]
            return cache[slot]

        faults: list[tuple[np.ndarray, Fault]] = []
        built = build_cases(
            made, get, lambda slot: self._table(made.filled[slot].index, rows), lambda mask, fault: faults.append((mask, fault))
        )
        if result.keep_cases:
            result.cases.append(built.cases)
        solved = {kind: self._solve(made, built, kind, ready) for kind in dict.fromkeys(_scalings(ready))}
        whole = [(mask, fault) for mask, fault in faults if mask.any()]
        if judged:
            known = solved[""].values
            for mask, caution in (*limit_answers.passed_limits(made, known), *caution_masks(made, built, known)):
                self._put_caution(rows, mask, caution)
        for j, r in enumerate(ready):
            if isinstance(r, Ready):
                found = solved[r.scaling]
                failed = [
                    (found.status == code, fault)
                    for code, fault in STATUS_FAULTS.items()
                    if found.status.any() and not (r.beyond and code in BEYOND)
                ]
                values, own = r.work(Solved(found.values, built, get))
                self._put(j, rows, values, [(mask, fault) for mask, fault in (*whole, *failed, *own) if mask.any()])

    @staticmethod
    def _solve(made: Recipe, built: Built, kind: str, ready: list[Ready | Fault]) -> Answers:
        """The solver's quantities where that kind of source scales, the recipe's own if empty."""
        wanted = dict.fromkeys(name for r in ready if isinstance(r, Ready) and r.scaling == kind for name in r.quantities)
        scales = (kind or made.scaled) and not OF_SCALING.isdisjoint(wanted)
        return steady(built.scaling(kind or made.scaled) if scales else built.cases, wanted)

    def _table(self, index: int, rows: np.ndarray | slice) -> tuple[Table, np.ndarray]:
        tables = self.tables[index]
        return tables.of(rows), tables.ends(rows)

    def _put_fault(self, j: int, rows: np.ndarray | slice, fault: Fault) -> None:
        self.result.fault[j][self.rows][rows] = self.result.number(fault)

    def _put_caution(self, rows: np.ndarray | slice, mask: np.ndarray, caution: Fault) -> None:
        part = self.result.caution[self.rows]
        chosen = np.arange(self.n)[rows][mask]
        chosen = chosen[part[chosen] < 0]
        part[chosen] = len(self.result.cautions)
        self.result.cautions.append(caution)

    def _put(self, j: int, rows: np.ndarray | slice, values: np.ndarray, faults: list[tuple[np.ndarray, Fault]]) -> None:
        asked = self.result.asked[j]
        assert isinstance(asked, Asked)
        if asked.unit.kind is not Kind.TEXT:
            values = asked.unit.from_base(values) + 0.0  # + 0.0: no cell shows −0
            empty = np.isnan(values)
            if empty.any():  # a number that is none never leaves without a fault
                faults = [*faults, (empty, STATUS_FAULTS[Status.OVERFLOW])]
        if faults:
            number = np.full(len(values), -1, np.intp)
            for mask, fault in faults:
                number[mask & (number < 0)] = self.result.number(fault)
            self.result.fault[j][self.rows][rows] = number
            bad = number >= 0
            values = values.copy()
            values[bad] = None if values.dtype == object else np.nan
        self.result.values[j][self.rows][rows] = values


def _scalings(ready: list[Ready | Fault]) -> list[str]:
    """The kinds of source that the answers scale, the recipe's own first: judging needs it."""
    return ["", *(r.scaling for r in ready if isinstance(r, Ready))]


def _compact(keys: np.ndarray) -> np.ndarray:
    """The same groups by small numbers."""
    small: np.ndarray = np.unique(keys, return_inverse=True)[1].reshape(-1).astype(np.int64)
    return small


def _recipe(plan: Plan, key: _Key) -> Recipe | Fault:
    made: Recipe | Fault | None = plan.recipes.get(key)
    if made is None:
        indices, words, tabled = key
        filled = {c.index: c for c in plan.columns if c.index in indices}
        texts = {slot: word for index, word in words if word is not None for slot in filled[index].slots}
        slots = frozenset(slot for index in tabled for slot in filled[index].slots)
        made = recipe.build(plan, tuple(filled.values()), texts, slots)
        plan.recipes[key] = made
    return made


def _ready(asked: Asked, plan: Plan, made: Recipe) -> Ready | Fault:
    found = made.answers.get(asked)
    if found is None:
        found = answers.ready(asked, plan, made)
        made.answers[asked] = found
    return found

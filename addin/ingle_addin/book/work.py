"""A workbook taken apart: which formula goes to the engine, which is a call, which keeps its stored value."""

from __future__ import annotations

import datetime
import re
from collections.abc import Collection, Sequence
from dataclasses import dataclass
from functools import cached_property

from ingle_addin.book.bind import Binder, HelperSheet
from ingle_addin.book.blocks import Blocks
from ingle_addin.book.book import Book, Formulas
from ingle_addin.book.calling import Call
from ingle_addin.book.criteria import is_odd, may_make_odd, odd_criterion
from ingle_addin.book.engine import Engine
from ingle_addin.book.filled_down import Filled
from ingle_addin.book.formula import MAX_NESTING, ROW, UnreadableError, check_size
from ingle_addin.book.lift import Lifter
from ingle_addin.book.plan import Plan, Result, rect_of, render
from ingle_addin.book.progress import LOADING, PLANNING, WORKING, Progress, share
from ingle_addin.book.refs import MAX_COLUMN, cell_name, key_of, place_of
from ingle_addin.book.resolve import Resolver
from ingle_addin.book.scan import MAX_ARRAY, FormulaCell, Sheet
from ingle_addin.book.spelling import Spelling
from ingle_addin.cells import Cell, CellError

_BATCH = 50_000
_FORBIDDEN_IN_NAMES = re.compile(r"[\[\]*?/\\:\x00-\x1f]")


@dataclass(slots=True)
class Lifted:
    """A formula with calls nested in ordinary functions; ``elements`` are its cells with their place in the array."""

    sheet: int
    cell: FormulaCell
    plan: Plan
    slots: Sequence[str]
    calls: list[Call]
    elements: list[tuple[int, tuple[int, int] | None]]


class Work:
    """A workbook taken apart, ready for the rounds of :mod:`ingle_addin.book.rounds`.

    ``values`` holds every cell as it is known now; ``engine_cells`` are those the engine computes; ``whole`` are the
    calls that are a cell's whole formula; ``kept`` says why a formula keeps its stored value, and ``volatile`` are those
    of them that would give another one each time.
    """

    def __init__(
        self, book: Book, functions: Collection[str], now: datetime.datetime | None, progress: Progress, engine: Engine
    ) -> None:
        self.book = book
        self._engine = engine
        self.progress = progress
        count = len(book.sheets)
        self.helper_index, self.block_index, self.test_index = count, count + 1, count + 2
        self.sheet_names = _engine_names([sheet.name for sheet in book.parts.sheets])
        self.values = [sheet.values for sheet in book.sheets]
        self.engine_cells: list[list[int]] = [[] for _ in book.sheets]
        self.whole: list[tuple[Call, FormulaCell]] = []
        self.nested: list[Lifted] = []
        self.kept: dict[tuple[int, int], str] = {}
        self.volatile: set[tuple[int, int]] = set()
        self.plans: list[list[Plan]] = []
        self.formulas: list[Formulas] = []
        self._waiting: list[tuple[list[int], list[str]]] = [([], []) for _ in book.sheets]
        self.helper = HelperSheet()
        self.blocks = Blocks(self.sheet_names[self.block_index])
        self.tests: list[tuple[int, Plan]] = []
        self._lifter = Lifter(
            Resolver(book.parts),
            Spelling(functions),
            tuple(self.sheet_names),
            book.parts.date1904,
            any(sheet.has_hidden_rows for sheet in book.sheets),
            now,
        )
        self._cache: dict[tuple[int, str, bool], Plan] = {}
        self._asked: list[set[int]] = [set() for _ in book.sheets]

    @property
    def engine(self) -> Engine:
        """The engine, opened when first needed."""
        return self._engine if self._engine.is_open else self._engine.open(self.sheet_names)

    @property
    def has_engine(self) -> bool:
        """Whether any formula needed the engine."""
        return self._engine.is_open

    def cell_text(self, place: tuple[int, int]) -> str:
        """A cell (sheet, cell) with its sheet's name, for people."""
        return f"{self.book.name_of(place[0])}!{cell_name(place[1])}"

    # -- taking the formulas apart ------------------------------------------------------------------------------------

    def prepare(self) -> None:
        """Plan and bind every formula, and put into the engine what it is to compute."""
        moving = [_filled_cells(sheet) for sheet in self.book.sheets]
        binder = Binder(self.book.sheets, moving, self.helper, self.blocks.address)
        for sheet, each in enumerate(self.book.sheets):
            formulas = Formulas(each)
            self.formulas.append(formulas)
            self.plans.append([])
            known: dict[tuple[str, int], Filled] = {}
            for index, cell in enumerate(each.formulas):
                if index % _BATCH == 0:
                    done = (sheet + index / len(each.formulas)) / len(self.book.sheets)
                    self.progress("reading formulas", share(PLANNING, LOADING, done))
                if cell.rect is not None:
                    self._take(binder, formulas, cell, sheet)
                    continue
                pattern = formulas.pattern(cell)
                filled = known.get(pattern)
                if filled is not None:
                    self.plans[sheet].append(filled.plan)
                    self._fill_down(binder, filled, cell, sheet)
                    continue
                plan = self._take(binder, formulas, cell, sheet)
                patterns = formulas.patterns(cell)
                if patterns is not None and plan.keep is None and not plan.is_local:
                    known[pattern] = Filled.of(plan, patterns, sheet, binder)
            self._send(sheet)
        if self.helper.keys:
            self.engine.put_formulas(self.helper_index, self.helper.keys, self.helper.texts)
        if self.has_engine:
            self._load()

    def _take(self, binder: Binder, formulas: Formulas, cell: FormulaCell, sheet: int) -> Plan:
        """Plan and bind one formula."""
        plan, slots = self._plan_of(formulas, cell, sheet)
        self.plans[sheet].append(plan)
        if plan.keep is not None:
            self.keep(sheet, cell, plan.keep)
            if plan.volatile:
                self.volatile.add((sheet, cell.key))
            return plan
        self._note_asked(plan, slots, sheet)
        if plan.calls:
            try:
                calls = binder.calls(plan, slots, sheet, cell.key)
            except UnreadableError as reason:
                self.keep(sheet, cell, str(reason))
            else:
                self._bind(calls, sheet, cell, plan, slots)
        elif cell.rect is not None:
            self._put_array(sheet, cell, plan, slots)
        else:
            self._queue(sheet, [cell.key], [render(plan.pieces, slots, cell.key)])
            self.engine_cells[sheet].append(cell.key)
        return plan

    def _fill_down(self, binder: Binder, filled: Filled, cell: FormulaCell, sheet: int) -> None:
        """The same for a formula whose like stands in another row."""
        key, plan = cell.key, filled.plan
        row = key >> 14
        if plan.calls:
            if filled.calls is None or not plan.whole:
                slots = filled.slots(str(row))
                try:
                    calls = binder.calls(plan, slots, sheet, key)
                except UnreadableError as reason:
                    self.keep(sheet, cell, str(reason))
                    return
            else:
                slots = []
                calls = [each.at(sheet, key, row) for each in filled.calls]
            self._bind(calls, sheet, cell, plan, slots)
            return
        text = filled.text.replace(ROW, str(row)) if filled.text else render(plan.pieces, filled.slots(str(row)), key)
        self._queue(sheet, [key], [text])
        self.engine_cells[sheet].append(key)

    def _note_asked(self, plan: Plan, slots: Sequence[str], sheet: int) -> None:
        """Remember the columns that the engine is asked about: it need not hold the others."""
        for ref in plan.asked:
            rect = rect_of(ref, slots, 0)
            owner = sheet if ref.sheet is None else int(ref.sheet)
            if rect is not None:
                self._asked[owner].update(range(rect.left, rect.right + 1))
        if plan.asks_anywhere:
            for each in self._asked:
                each.update(range(1, MAX_COLUMN + 1))

    def _queue(self, sheet: int, keys: list[int], texts: list[str]) -> None:
        """Have formulas put into the engine, many at a time."""
        waiting_keys, waiting_texts = self._waiting[sheet]
        waiting_keys += keys
        waiting_texts += texts
        if len(waiting_keys) >= _BATCH:
            self._send(sheet)

    def _send(self, sheet: int) -> None:
        keys, texts = self._waiting[sheet]
        if keys:
            self.engine.put_formulas(sheet, keys, texts)
            self._waiting[sheet] = ([], [])

    def _plan_of(self, formulas: Formulas, cell: FormulaCell, sheet: int) -> tuple[Plan, Sequence[str]]:
        try:
            if cell.kind == "data table":
                raise UnreadableError("it is part of a what-if data table")
            if len(cell.text) > MAX_NESTING:  # a shorter one cannot be too long or nested too deep
                check_size(cell.text)
            taken = formulas.take(cell)
            if taken is None or (not cell.text.strip() and cell.shared is None):
                raise UnreadableError("the formula could not be read")
        except UnreadableError as reason:
            return Plan(keep=str(reason), is_ingle="INGLE" in cell.text.upper()), ()
        shape, slots = taken
        in_array = cell.kind == "array"
        cached = (sheet, shape, in_array)
        plan = self._cache.get(cached)
        if plan is None:
            plan = self._lifter.plan(shape, sheet, place_of(cell.key), in_array=in_array)
            if not plan.is_local:
                self._cache[cached] = plan
            if plan.keep is None and not plan.whole and not plan.array:
                self._add_test(plan, slots, cell.key)
        odd = odd_criterion(plan.criteria, slots, self._odd_texts) if plan.criteria and plan.keep is None else None
        return (plan if odd is None else Plan(keep=odd, is_ingle=plan.is_ingle, refs=plan.refs)), slots

    @cached_property
    def _odd_texts(self) -> bool:
        """Whether a cell holds a criterion that the engine does not read as it should, or a formula may make one."""
        return any(
            any(type(value) is str and is_odd(value) for value in sheet.values.values())
            or any(may_make_odd(cell.text) for cell in sheet.formulas)
            for sheet in self.book.sheets
        )

    def _add_test(self, plan: Plan, slots: Sequence[str], key: int) -> None:
        """One formula of each shape stands on a sheet of its own, to tell a formula the engine cannot read."""
        place = key_of(1_048_000 - len(self.tests), 16_384) if len(self.tests) < 1_000_000 else None
        if place is not None:
            self.tests.append((place, plan))
            self.engine.put_formulas(self.test_index, [place], [render(plan.pieces, slots, key, (0, 0), _one)])

    def keep(self, sheet: int, cell: FormulaCell, reason: str) -> dict[int, Cell]:
        """Leave the stored value in a formula's cell, and in the children of its array; return these values."""
        self.kept[sheet, cell.key] = reason
        children = self.book.sheets[sheet].children
        stored = {key: children.get(key, (None, 0, 0))[0] for key, _ in elements_of(cell)}
        if cell.rect is not None and len(stored) == 1:  # an array too large for us; its cells are those of the file
            stored = {key: value for key, (value, _, _) in children.items() if cell.rect.holds(*place_of(key))}
        stored[cell.key] = cell.stored
        values = self.values[sheet]
        for key, value in stored.items():
            if value is None:
                values.pop(key, None)
            else:
                values[key] = value
        return stored

    def _put_array(self, sheet: int, cell: FormulaCell, plan: Plan, slots: Sequence[str]) -> None:
        rect = cell.rect
        assert rect is not None
        elements = elements_of(cell)
        if len(elements) < rect.rows * rect.columns:
            self.keep(sheet, cell, "its array has too many cells")
            return
        if plan.array:
            text = render(plan.pieces, slots, cell.key)
            self.engine.put_array(sheet, cell.key, rect.rows, rect.columns, text)
        else:
            texts = [render(plan.pieces, slots, cell.key, at) for _, at in elements]
            self._queue(sheet, [key for key, _ in elements], texts)
        self.engine_cells[sheet] += [key for key, _ in elements]

    def _bind(self, calls: list[Call], sheet: int, cell: FormulaCell, plan: Plan, slots: Sequence[str]) -> None:
        """Take the calls of a formula to work."""
        elements = elements_of(cell)
        for piece in plan.pieces if cell.kind != "array" else ():
            if isinstance(piece, Result) and not piece.whole:
                calls[piece.call].first_only = True
        if plan.whole:
            self.values[sheet].update((key, CellError.NA) for key, _ in elements)
            self.whole.append((calls.pop(), cell))
            elements = []
        if calls or elements:
            lifted = Lifted(sheet, cell, plan, slots, calls, elements)
            self.nested.append(lifted)
            if elements:
                self.write_nested(lifted)
                self.engine_cells[sheet] += [key for key, _ in elements]

    def write_nested(self, lifted: Lifted) -> None:
        """Put the formula around nested calls into the engine, with the answers' present places."""
        plan, cell = lifted.plan, lifted.cell

        def address(call: int, whole: bool, element: tuple[int, int] | None) -> str:
            return self.blocks.address(lifted.calls[call], whole, element)

        if plan.array and cell.rect is not None:
            text = render(plan.pieces, lifted.slots, cell.key, None, address)
            self.engine.put_array(lifted.sheet, cell.key, cell.rect.rows, cell.rect.columns, text)
            return
        keys = [key for key, _ in lifted.elements]
        texts = [render(plan.pieces, lifted.slots, cell.key, at, address) for _, at in lifted.elements]
        self._queue(lifted.sheet, keys, texts)

    def rewrite(self, lifted: Sequence[Lifted]) -> None:
        """As :meth:`write_nested` for many, sent at once."""
        for each in lifted:
            self.write_nested(each)
        for sheet in range(len(self._waiting)):
            self._send(sheet)

    def _load(self) -> None:
        for sheet, values in enumerate(self.values):
            self.progress("loading the calculation engine", share(LOADING, WORKING, sheet / len(self.values)))
            asked = self._asked[sheet]
            if asked:
                # Numbers of cells hold the column less 1 in their last 14 bits.
                columns = {column - 1 for column in asked}
                self.engine.put(sheet, ((key, value) for key, value in values.items() if key & 16_383 in columns))
        self.engine.put(self.block_index, ((key, CellError.NA) for key in self.blocks.first_cells()))


def _one(_call: int, _whole: bool, _element: tuple[int, int] | None) -> str:
    return "1"


def _filled_cells(sheet: Sheet) -> set[int]:
    """All cells that formulas fill."""
    found = {cell.key for cell in sheet.formulas}
    for cell in sheet.formulas:
        if cell.rect is not None:
            found.update(key for key, _ in elements_of(cell))
    return found


def elements_of(cell: FormulaCell) -> list[tuple[int, tuple[int, int] | None]]:
    """The cells that a formula fills, with their place in its array (None outside of an array formula)."""
    rect = cell.rect
    if rect is None:
        return [(cell.key, None)]
    if rect.rows * rect.columns > MAX_ARRAY:
        return [(cell.key, (0, 0))]
    return [(key_of(rect.top + i, rect.left + j), (i, j)) for i in range(rect.rows) for j in range(rect.columns)]


def _engine_names(names: Sequence[str]) -> list[str]:
    """Names that the engine takes: those of the file where it can, and three more for our own sheets."""
    taken: set[str] = set()
    found: list[str] = []
    for index, name in enumerate([*names, "in", "out", "try"]):
        ours = index >= len(names)
        good = not ours and 0 < len(name) <= 31 and not _FORBIDDEN_IN_NAMES.search(name) and "'" not in (name[0], name[-1])
        free = name if good and name.casefold() not in taken else f"of Ingle {index}"
        while free.casefold() in taken:
            free += "'s"
        taken.add(free.casefold())
        found.append(free)
    return found

"""Works a workbook out: ordinary formulas by the engine, Ingle calls in batches, in turns until nothing moves."""

from __future__ import annotations

import datetime
from collections import defaultdict
from collections.abc import Collection, Iterable, Iterator, Mapping, Sequence
from operator import itemgetter

from ingle_addin.book.book import Book
from ingle_addin.book.calling import Area, Call
from ingle_addin.book.collect import Collector
from ingle_addin.book.computed import Computed
from ingle_addin.book.dates import moment_of
from ingle_addin.book.engine import Engine, Strange
from ingle_addin.book.graph import Graph, Place
from ingle_addin.book.grids import laid, plain, range_name, size_of
from ingle_addin.book.progress import WORKING, WRITING, Progress, share
from ingle_addin.book.refs import Rect, cell_name, key_of, place_of
from ingle_addin.book.report import Truncated
from ingle_addin.book.scan import FormulaCell
from ingle_addin.book.watch import Watch
from ingle_addin.book.work import Work
from ingle_addin.calls import Outcome, SolveCalls
from ingle_addin.cells import Cell, CellError, Grid

_WHOLE_COLUMN = "a whole column stands where one row is meant; write the row's own cells, such as A2:H2"
# Rounds before the search for circles: longer chains of calls are rare, and the search reads every formula.
_PATIENCE = 3
# What the engine answers where no spreadsheet would, and what to say of it.
_NOT_READ = "the calculation engine could not read it"
_UNREADABLE = ("#ERROR!", "#N/IMPL!")
_CIRCLE = "#CIRC!"


def compute(
    book: Book,
    functions: Collection[str],
    solve: SolveCalls,
    progress: Progress | None = None,
    now: datetime.datetime | None = None,
    *,
    keep_volatile: bool = False,
    engine: Engine | None = None,
) -> Computed:
    """Evaluate every formula of ``book``, whose cells are used up: their values become the computed ones.

    ``functions`` are the canonical names of the functions that ``solve`` answers; ``now`` is what TODAY and NOW mean.
    Formulas that cannot be computed keep their stored value and are listed; with ``keep_volatile`` so do those that give
    another value each time. ``engine`` is one that has been started already, and is closed here. Raises
    :class:`~ingle_addin.book.errors.BookError` if the engine is missing or stops.
    """
    moment = None if keep_volatile else now or datetime.datetime.now()
    with engine or Engine(book.path) as used:
        work = Work(book, functions, moment, progress or _silent, used)
        work.prepare()
        return _Rounds(work, solve).run()


def _silent(_what: str, _share: float) -> None:
    pass


class _Rounds:
    def __init__(self, work: Work, solve: SolveCalls) -> None:
        self._work = work
        self._book = work.book
        self._solve = solve
        self._helper_values: dict[int, Cell] = {}
        self._dirty: defaultdict[int, list[tuple[int, Cell]]] = defaultdict(list)
        self._common: dict[Area, Grid] = {}
        self._graph_made: Graph | None = None
        self._truncated: dict[int, tuple[Place, Truncated]] = {}  # by the call's id
        self._moved: set[int] = set()  # calls whose block has changed its place since the engine was last told
        self._cells_of: dict[int, FormulaCell] = {id(call): cell for call, cell in work.whole}
        self._calls = [call for call, _ in work.whole] + [call for each in work.nested for call in each.calls]
        self._watch = Watch(self._calls, len(self._book.sheets))
        # What calls read of the cells that the engine computes.
        self._read = [[key for key in keys if key in watched] for keys, watched in self._engine_and_watched()]

    def _engine_and_watched(self) -> Iterator[tuple[list[int], set[int]]]:
        for sheet, keys in enumerate(self._work.engine_cells):
            yield keys, set(self._watch.watched(sheet))

    @property
    def _graph(self) -> Graph:
        if self._graph_made is None:
            self._graph_made = Graph(self._book, self._work.formulas, self._work.plans)
        return self._graph_made

    # -- Cells of the arguments ---------------------------------------------------------------------------------------

    def grid(self, sheet: int, rect: Rect) -> Grid:
        """The cells of a rectangle, empty ones None, dates as such."""
        get = self._work.values[sheet].get
        dated = self._book.sheets[sheet].dated
        rows = []
        for row in range(rect.top, rect.bottom + 1):
            start = key_of(row, rect.left)
            keys = range(start, start + rect.columns)
            cells = tuple(map(get, keys))
            if dated and not dated.isdisjoint(keys):
                cells = tuple(self._dated(value) if key in dated else value for key, value in zip(keys, cells, strict=True))
            rows.append(cells)
        return tuple(rows)

    def common(self, area: Area) -> Grid:
        """The same of a range that many calls of a batch read."""
        found = self._common.get(area)
        if found is None:
            found = self._common[area] = self.grid(area.sheet, area.rect)
        return found

    def _dated(self, value: Cell) -> Cell:
        return moment_of(value, self._book.parts.date1904) if type(value) is float else value

    def helper(self, key: int) -> Cell:
        """The value of a helper cell."""
        value = self._helper_values.get(key)
        return CellError.VALUE if isinstance(value, Strange) else value

    # -- Rounds -------------------------------------------------------------------------------------------------------

    def run(self) -> Computed:
        work = self._work
        count = 0
        limit = len(self._calls) + 2
        while True:
            self._evaluate()
            if not self._solve_all(first=count == 0) and not self._stop_error_circles():
                break
            count += 1
            work.progress("solving", share(WORKING, WRITING, 0.5 + 0.1 * count))
            if count == _PATIENCE or count > limit:
                self._stop_circles([(call.sheet, call.key) for call in self._calls if call.moves and not call.stopped])
            if count > limit:
                self._stop_unsettled()
            self._flush()
        result = Collector(work, self._calls, self._cells_of, lambda: self._graph).collect()
        result.truncated = [note for _, note in sorted(self._truncated.values(), key=itemgetter(0))]
        return result

    def _evaluate(self) -> None:
        work = self._work
        if not work.has_engine:
            return
        refused = [place for place in work.engine.refused() if place[0] < len(self._book.sheets)]
        if refused:
            self._give_up(dict.fromkeys(refused, _NOT_READ))
        while True:
            work.progress("calculating", WORKING)
            work.engine.evaluate()
            strange: list[tuple[Place, str]] = []
            for sheet, keys in enumerate(work.engine_cells):
                if not keys:
                    continue
                values, odd = work.engine.read(sheet, keys)
                known = work.values[sheet]
                before = [known.get(key) for key in self._read[sheet]]
                known.update(zip(keys, values, strict=True))
                self._watch.stir(sheet, _changed(known, self._read[sheet], before))
                strange += [((sheet, keys[index]), str(values[index])) for index in odd]
            if not strange or not self._keep_strange(strange):
                break
        if work.helper.keys:
            self._helper_values.update(zip(work.helper.keys, work.engine.values(work.helper_index, work.helper.keys), strict=True))

    def _keep_strange(self, strange: list[tuple[Place, str]]) -> bool:
        """Give up formulas that the engine cannot do; whether there were any (others only rest on them)."""
        texts = dict(strange)
        reasons: dict[Place, str] = {}
        bad = self._unreadable_plans()
        for place in texts:
            found = self._graph.formula(place)
            if found is not None and id(found[2]) in bad:
                reasons[found[0]] = _NOT_READ
        if not reasons:
            for ring in self._graph.circles(place for place, text in strange if text == _CIRCLE):
                reasons.update(dict.fromkeys(ring, self._ring_text(ring)))
        if not reasons:
            roots = [place for place in texts if not self._graph.rests_on(place, texts.keys() - {place})]
            for place in roots or texts:
                found = self._graph.formula(place)
                if found is not None:
                    reasons[found[0]] = f"the calculation engine answers {texts[place]}"
        self._give_up(reasons)
        return bool(reasons)

    def _unreadable_plans(self) -> set[int]:
        tests = self._work.tests
        values = self._work.engine.values(self._work.test_index, [key for key, _ in tests])
        return {
            id(plan) for (_, plan), value in zip(tests, values, strict=True)
            if isinstance(value, Strange) and value in _UNREADABLE
        }  # fmt: skip

    def _ring_text(self, ring: list[Place]) -> str:
        names = [self._work.cell_text(place) for place in ring[:4]]
        if len(ring) == 1:
            return f"{names[0]} rests on itself"
        more = f" and {len(ring) - 4} more" if len(ring) > 4 else ""
        return f"the cells go round in a circle: {', '.join(names)}{more}"

    def _give_up(self, reasons: dict[Place, str]) -> None:
        """Let these formulas keep their stored values, in the engine too."""
        work = self._work
        gone: defaultdict[int, set[int]] = defaultdict(set)
        for place, reason in reasons.items():
            found = self._graph.formula(place)
            if found is None or place in work.kept:
                continue
            (sheet, _), cell, _ = found
            stored = work.keep(sheet, cell, reason)
            gone[sheet].update(stored)
            self._watch.stir(sheet, stored)
            if work.has_engine:
                work.engine.put(sheet, stored.items())
        for sheet, keys in gone.items():
            work.engine_cells[sheet] = [key for key in work.engine_cells[sheet] if key not in keys]
        for call in self._calls:
            if (call.sheet, call.key) in reasons:
                call.stopped = True

    # -- Calls --------------------------------------------------------------------------------------------------------

    def _solve_all(self, *, first: bool) -> bool:
        """Solve every call whose arguments have changed, one batch a function; whether any answer changed.

        Calls that read the cells of other calls follow at once, without the engine.
        """
        changed = False
        calls: Sequence[Call] = self._calls if first else [*self._watch.take(), *self._watch.restless]
        passes = 0
        while calls:
            changed |= self._solve_some(calls)
            calls = self._watch.take()
            passes += 1
            if calls and passes == _PATIENCE:
                self._stop_circles((call.sheet, call.key) for call in calls)
            if passes > len(self._calls):
                self._stop_unsettled()
        return changed

    def _solve_some(self, calls: Iterable[Call]) -> bool:
        """Solve those of the calls whose arguments have changed, inner ones first; whether any answer changed."""
        levels: defaultdict[int, list[Call]] = defaultdict(list)
        for call in calls:
            if not call.stopped:
                levels[call.level].append(call)
        changed = False
        for level in sorted(levels):
            self._common.clear()  # an answer of the level before may stand in them
            batches: defaultdict[str, list[tuple[Call, tuple[Grid, ...]]]] = defaultdict(list)
            for call in levels[level]:
                args = tuple(arg.read(self) for arg in call.args)
                if call.solved and args == call.last:
                    continue
                if call.moves:
                    call.last = args
                batches[call.name].append((call, args))
            for name, batch in batches.items():
                self._work.progress(f"solving {len(batch):,} × {name}", share(WORKING, WRITING, 0.5))
                outcomes = self._solve(name, [args for _, args in batch])
                if len(outcomes) != len(batch):
                    raise RuntimeError(f"{name}: {len(outcomes)} outcomes for {len(batch)} calls")
                for (call, _), outcome in zip(batch, outcomes, strict=True):
                    changed |= self._take(call, outcome)
        return changed

    def _take(self, call: Call, outcome: Outcome) -> bool:
        grid = outcome.grid if outcome.grid and len(outcome.grid[0]) else ((None,),)
        call.reasons = outcome.reasons
        same = call.solved and grid == call.grid
        call.solved, call.grid = True, grid
        if same:
            return False
        cell = self._cells_of.get(id(call))
        self._truncated.pop(id(call), None)
        if call.first_only and size_of(grid) != (1, 1):
            self._note_truncated(call, "")
        if cell is not None:
            self._place(call, cell)
        elif call.block is not None:
            if self._work.blocks.fit(call):
                self._moved.add(id(call))
            self._dirty[self._work.block_index] += self._work.blocks.cells(call)
        return True

    def _place(self, call: Call, cell: FormulaCell) -> None:
        """Put the answer of a formula that is one call into the cell, or the cells of its array."""
        rows, columns = size_of(call.grid)
        stored = cell.rect or Rect(*place_of(cell.key), *place_of(cell.key))
        many = rows > stored.rows or columns > stored.columns
        if many and call.whole_column and cell.kind != "array":
            call.grid = ((CellError.VALUE,),)
            call.reasons = [_WHOLE_COLUMN]
        elif many:
            self._note_truncated(call, range_name(stored))
        cells = list(laid(call.grid, stored, cell.dynamic)) if cell.kind == "array" else [(cell.key, plain(call.grid[0][0]))]
        self._work.values[call.sheet].update(cells)
        self._watch.stir(call.sheet, (key for key, _ in cells))
        self._dirty[call.sheet] += cells

    def _note_truncated(self, call: Call, stored: str) -> None:
        rows, columns = size_of(call.grid)
        note = Truncated(self._book.name_of(call.sheet), cell_name(call.key), rows, columns, stored)
        self._truncated[id(call)] = ((call.sheet, call.key), note)

    def _flush(self) -> None:
        """Tell the engine what has changed."""
        work = self._work
        if work.has_engine:
            for sheet, cells in self._dirty.items():
                work.engine.put(sheet, cells)
            if self._moved:
                work.rewrite(
                    [lifted for lifted in work.nested if lifted.elements and any(id(call) in self._moved for call in lifted.calls)]
                )
                for key, write, calls in work.helper.open:
                    if any(id(call) in self._moved for call in calls):
                        work.engine.put_formulas(work.helper_index, [key], [write()])
        self._dirty.clear()
        self._moved.clear()

    def _stop_circles(self, places: Iterable[Place]) -> bool:
        """Give up those calls that rest on their own answers; whether there were any."""
        reasons: dict[Place, str] = {}
        for ring in self._graph.circles(places):
            reasons.update(dict.fromkeys(ring, self._ring_text(ring)))
        self._give_up(reasons)
        return bool(reasons)

    def _stop_error_circles(self) -> bool:
        """Give up calls at rest in an error that is only their own, gone round a circle; whether there were any."""
        failed = [
            (call.sheet, call.key)
            for call in self._calls
            if call.moves and not call.stopped and any(isinstance(each, CellError) for row in call.grid for each in row)
        ]
        return bool(failed) and self._stop_circles(failed)

    def _stop_unsettled(self) -> None:
        """Give up what still moves after more rounds than there are calls: its references must be hidden ones."""
        reasons = {
            (call.sheet, call.key): "its answer does not come to rest; it may rest on itself"
            for call in self._calls
            if call.moves and not call.stopped
        }
        self._give_up(reasons)


def _changed(known: Mapping[int, Cell], keys: Sequence[int], before: Sequence[Cell]) -> Iterator[int]:
    """The cells that no longer hold what they held."""
    for key, old in zip(keys, before, strict=True):
        new = known.get(key)
        if new != old or type(new) is not type(old):
            yield key

"""Gathers what came of the rounds: the value of every computed cell, and all that is amiss."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence

from ingle_addin.book.calling import Call
from ingle_addin.book.computed import Computed
from ingle_addin.book.graph import Graph, Place
from ingle_addin.book.grids import laid, plain, unanswered
from ingle_addin.book.refs import MAX_COLUMN, cell_name, key_of, place_of
from ingle_addin.book.report import NoAnswer, NotComputed
from ingle_addin.book.scan import MAX_ARRAY, FormulaCell
from ingle_addin.book.work import Work
from ingle_addin.cells import CellError


class Collector:
    """Reads the results off a workbook at rest.

    ``cells_of`` maps the id of a call that is a cell's whole formula to that cell. ``graph`` gives what rests on what; it
    is asked only if a formula could not be computed.
    """

    def __init__(self, work: Work, calls: Sequence[Call], cells_of: Mapping[int, FormulaCell], graph: Callable[[], Graph]) -> None:
        self._work, self._book = work, work.book
        self._calls, self._cells_of = calls, cells_of
        self._graph = graph

    def collect(self) -> Computed:
        """The values and the lists, but for what was too large for its cells."""
        work, book = self._work, self._book
        result = Computed([{} for _ in book.sheets], calls=self._calls)
        for sheet, keys in enumerate(work.engine_cells):
            values = work.values[sheet]
            result.values[sheet].update(
                (key, value if type(value := values.get(key)) is float and value - value == 0.0 else plain(value)) for key in keys
            )
        answers: dict[tuple[int, int, int], NoAnswer] = {}
        for call in self._calls:
            place = (call.sheet, call.key)
            if place in work.kept:
                continue
            result.ingle.add(place)
            cell = self._cells_of.get(id(call))
            if cell is not None and self._is_plain(call, cell):
                result.values[call.sheet][cell.key] = work.values[call.sheet][cell.key]
                continue
            if cell is not None:
                keys = [cell.key] if cell.kind != "array" else [key for key, _ in laid(call.grid, cell.rect, False)]  # type: ignore[arg-type]
                values = work.values[call.sheet]
                result.values[call.sheet].update((key, values[key]) for key in keys)
            if cell is None and not isinstance(work.values[call.sheet].get(call.key), CellError):
                # A call in a branch not taken, or whose error its formula answers for: the cell shows a value.
                for _, _, error, reason in unanswered(call.grid, call.reasons):
                    result.hidden.append(self._no_answer(place, error, reason))
                    break
                continue
            self._note_unanswered(call, cell, answers)
        result.no_answers = [answers[key] for key in sorted(answers)]
        self._note_kept(result)
        formulas = sum(len(sheet.formulas) for sheet in book.sheets)
        result.ordinary_cells = formulas - len(result.ingle) - len(work.kept)
        return result

    def _is_plain(self, call: Call, cell: FormulaCell) -> bool:
        """Whether a call has one number for an answer, like most."""
        return (
            type(self._work.values[call.sheet][cell.key]) is float
            and cell.kind != "array"
            and len(call.grid) == 1 == len(call.grid[0])
            and list(call.reasons) == [None]
        )

    def _no_answer(self, place: Place, error: str, reason: str) -> NoAnswer:
        return NoAnswer(self._book.name_of(place[0]), cell_name(place[1]), place_of(place[1])[0], error, reason)

    def _note_unanswered(self, call: Call, cell: FormulaCell | None, answers: dict[tuple[int, int, int], NoAnswer]) -> None:
        row, column = place_of(call.key)
        for i, j, error, reason in unanswered(call.grid, call.reasons):
            # A nested call's own rows are nowhere to be seen: its formula's cell stands for them.
            spread = cell is not None and cell.kind == "array"
            at_row, at_column = (row + i, min(column + j, MAX_COLUMN)) if spread else (row, column)
            if spread and cell is not None and cell.rect is not None and not cell.rect.holds(at_row, at_column):
                continue
            if not spread and (i, j) != (0, 0) and cell is not None:
                continue
            key = (call.sheet, at_row, at_column)
            if key not in answers or cell is not None:
                answers[key] = self._no_answer((call.sheet, key_of(at_row, at_column)), error, reason)

    def _note_kept(self, result: Computed) -> None:
        """List the formulas that kept their value, and those that rest on them; volatile ones are only listed themselves."""
        work = self._work
        result.volatile = sorted(work.volatile)
        kept = {place: work.kept[place] for place in sorted(work.kept.keys() - work.volatile)}
        if not kept:
            return
        result.not_computed = [self._not_computed(place, reason, rests=False) for place, reason in kept.items()]
        resting = self._graph().dependents(self._filled(kept))
        result.not_computed += [
            self._not_computed(place, f"rests on {self._work.cell_text(cause)}, which was not computed", rests=True)
            for place, cause in sorted(resting.items())
            if place not in work.kept
        ]

    def _filled(self, kept: Mapping[Place, str]) -> dict[Place, Place]:
        """The cells of the kept formulas, those of their arrays and tables included, each with its formula's cell."""
        found = {place: place for place in kept}
        for sheet, key in kept:
            cell = self._graph().formula((sheet, key))
            rect = cell[1].rect if cell is not None else None
            if rect is not None and rect.rows * rect.columns <= MAX_ARRAY:
                for row in range(rect.top, rect.bottom + 1):
                    for column in range(rect.left, rect.right + 1):
                        found.setdefault((sheet, key_of(row, column)), (sheet, key))
        return found

    def _not_computed(self, place: Place, reason: str, *, rests: bool) -> NotComputed:
        found = self._graph().formula(place)
        is_ingle = not rests and found is not None and found[2].is_ingle
        return NotComputed(self._book.name_of(place[0]), cell_name(place[1]), reason, rests, is_ingle)

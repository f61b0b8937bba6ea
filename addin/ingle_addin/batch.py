"""Worksheet calls, many at a time: calls of one function under the same headings become one table of rows.

This is the `SolveCalls` of ``ingle_addin.calls``, which every spreadsheet host uses; a single cell is a batch of one.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import partial

import numpy as np

from ingle_addin import more_functions
from ingle_addin.about import about
from ingle_addin.asking import mismatch_of
from ingle_addin.calls import Outcome
from ingle_addin.cells import Cell, CellError, Grid
from ingle_addin.evaluate import evaluate
from ingle_addin.evaluation import Evaluation, reason
from ingle_addin.faults import Fault, finished, quoted
from ingle_addin.functions import FUNCTIONS
from ingle_addin.heading_reader import Asked, Plan, allowable_source, read_answer, read_headings
from ingle_addin.tables import heading_texts, join, to_columns

_FUNCTIONS = {function.name: function for function in FUNCTIONS}
_ASKED = {
    "INGLE.PEAK": read_answer("peak [°C]"),
    "INGLE.WHY": read_answer("why"),
    "INGLE.ALLOW": allowable_source(),
}
_FACES = {word: read_answer(f"{word} face [°C]") for word in ("left", "right", "inner", "outer")}


@dataclass(frozen=True)
class _Call:
    """A call read: what is asked, the heading texts, and rows of cells, one a case."""

    asked: tuple[Asked | Fault, ...]
    texts: tuple[str, ...]
    upright: bool
    rows: list[list[Cell]]


def solve_calls(name: str, calls: Sequence[Sequence[Grid]]) -> list[Outcome]:
    """Answer calls of one function, in order; never raises for what cells hold."""
    function = _FUNCTIONS.get(name)
    if function is None:
        return [failed(Fault(CellError.NAME, f"Ingle has no function {name}; see `ingle reference`"))] * len(calls)
    if not function.available:
        return [failed(Fault(CellError.NA, f"{name} is not available yet; it needs a later version"))] * len(calls)
    least = sum(not argument.repeats for argument in function.arguments) + bool(function.arguments and function.arguments[-1].repeats)
    outcomes: list[Outcome | None] = [None] * len(calls)
    good: list[int] = []
    for i, call in enumerate(calls):
        if len(call) < least or (len(call) > len(function.arguments) and not _repeats(name)):
            words = ", ".join(argument.name for argument in function.arguments) or "nothing"
            given = "argument was" if len(call) == 1 else "arguments were"
            outcomes[i] = failed(Fault(CellError.VALUE, f"{name} takes {words}; {len(call)} {given} given"))
        else:
            good.append(i)
    answer = _OTHERS.get(name) or partial(_row_calls, name)
    for i, outcome in zip(good, answer([calls[i] for i in good]), strict=True):
        outcomes[i] = outcome
    return [outcome for outcome in outcomes if outcome is not None]


def _repeats(name: str) -> bool:
    arguments = _FUNCTIONS[name].arguments
    return bool(arguments) and arguments[-1].repeats


def failed(fault: Fault) -> Outcome:
    """A call that has no answer at all: one error cell and its sentence."""
    return Outcome(((fault.error,),), (finished(fault.sentence, 0),))


def _row_calls(name: str, calls: Sequence[Sequence[Grid]]) -> list[Outcome]:
    outcomes: list[Outcome | None] = [None] * len(calls)
    groups: dict[tuple[tuple[Asked | Fault, ...], tuple[str, ...]], list[tuple[int, _Call]]] = {}
    for i, call in enumerate(calls):
        read = _read(name, call)
        if isinstance(read, Fault):
            # INGLE.WHY puts its sentence into the cell; every other function shows the error.
            shown = finished(read.sentence, 0)
            outcomes[i] = Outcome(((shown,),), (None,)) if name == "INGLE.WHY" else failed(read)
        else:
            groups.setdefault((read.asked, read.texts), []).append((i, read))
    for (asked, texts), members in groups.items():
        for i, outcome in _answer_group(asked, read_headings(texts), members):
            outcomes[i] = outcome
    return [outcome for outcome in outcomes if outcome is not None]


def _read(name: str, call: Sequence[Grid]) -> _Call | Fault:
    """What a row function's arguments hold."""
    asked = asked_of(name, call)
    if isinstance(asked, Fault):
        return asked
    first = 0 if name in _ASKED else 1
    texts = heading_texts(call[first])
    if isinstance(texts, Fault):
        return texts
    rows = join(call[first + 1 :], texts[1])
    if isinstance(rows, Fault):
        return rows
    return _Call(asked, texts[0], texts[1], rows)


def asked_of(name: str, call: Sequence[Grid]) -> tuple[Asked | Fault, ...] | Fault:
    """What a row function asks for, by its name or its first argument."""
    if name == "INGLE.ASK":
        answers = heading_texts(call[0], "answers")
        return answers if isinstance(answers, Fault) else tuple(read_answer(text) for text in answers[0])
    if name == "INGLE.FACE":
        side = _side(call[0])
        return side if isinstance(side, Fault) else (side,)
    return (_ASKED[name],)


def _side(grid: Grid) -> Asked | Fault:
    cell = grid[0][0] if len(grid) and len(grid[0]) else None
    if isinstance(cell, CellError):
        return Fault(cell, f"the side holds the error {cell}; correct that cell")
    word = " ".join(str(cell or "").split()).casefold()
    return _FACES.get(word) or Fault(
        CellError.VALUE, f"the side {quoted(str(cell or ''))} is not known; write left, right, inner or outer"
    )


def _answer_group(asked: tuple[Asked | Fault, ...], plan: Plan, members: Sequence[tuple[int, _Call]]) -> list[tuple[int, Outcome]]:
    """Calls under the same headings as one table; calls of a wrong width are answered apart, with their fault."""
    done: list[tuple[int, Outcome]] = []
    fits = [member for member in members if len(member[1].rows[0]) == plan.width]
    for member in members:
        if len(member[1].rows[0]) != plan.width:
            done += _evaluated(asked, plan, [member], mismatch_of(len(member[1].rows[0]), plan))
    if fits:
        done += _evaluated(asked, plan, fits, None)
    return done


def _evaluated(
    asked: tuple[Asked | Fault, ...], plan: Plan, members: Sequence[tuple[int, _Call]], mismatch: Fault | None
) -> list[tuple[int, Outcome]]:
    rows = [row for _, call in members for row in call.rows]
    numbers = np.array(
        [0 if len(call.rows) == 1 else number for _, call in members for number in range(1, len(call.rows) + 1)], np.intp
    )
    table = to_columns(rows)
    result = evaluate(plan, table, asked, mismatch, numbers)
    cells = [cells_of(result, j) for j in range(len(asked))]
    firsts = _first_faults(result)
    done, start = [], 0
    for i, call in members:
        stop = start + len(call.rows)
        grid = [[column[row] for column in cells] for row in range(start, stop)]
        reasons = [
            None if firsts[row] < 0 else reason(result, table, int(firsts[row]), row, int(numbers[row])) for row in range(start, stop)
        ]
        done.append((i, Outcome(list(zip(*grid, strict=True)) if call.upright else grid, reasons)))
        start = stop
    return done


def _first_faults(result: Evaluation) -> np.ndarray:
    """The first answer of each row that has a fault, −1 where none has."""
    first = np.full(result.n, -1, np.intp)
    for j in range(len(result.asked)):
        first = np.where((first < 0) & (result.fault[j] >= 0), j, first)
    return first


def cells_of(result: Evaluation, j: int) -> list[Cell]:
    """One answer's column as cells: empty text in blank rows, errors where there is a fault."""
    values: list[Cell] = result.values[j].tolist()
    for row in np.flatnonzero(result.blank):
        values[row] = ""
    for row in np.flatnonzero(result.fault[j] >= 0):
        values[row] = result.faults[result.fault[j][row]].error
    return values


_OTHERS: dict[str, Callable[[Sequence[Sequence[Grid]]], list[Outcome]]] = {
    "INGLE.PROFILE": lambda calls: [more_functions.profile(call, failed) for call in calls],
    "INGLE.POINTS": lambda calls: [more_functions.points(call, failed) for call in calls],
    "INGLE.ABOUT": lambda calls: [Outcome(((about(),),), (None,)) for _ in calls],
}

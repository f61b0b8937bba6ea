"""The worksheet functions that do not answer rows: a profile of one case, a text table, the version."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import pairwise

import ingle

from ingle_addin import columns
from ingle_addin.asking import mismatch_of
from ingle_addin.calls import Outcome
from ingle_addin.cells import Cell, CellError, Grid
from ingle_addin.evaluate import evaluate
from ingle_addin.evaluation import reason
from ingle_addin.faults import Fault, number_text, quoted
from ingle_addin.heading_reader import Asked, read_answer, read_headings
from ingle_addin.tables import heading_texts, join, to_columns

MOST_POINTS = 10_000
_LONGEST_TEXT = 32_767  # characters a cell holds

Failed = Callable[[Fault], Outcome]


def _number(grid: Grid, what: str) -> float | Fault:
    cell = grid[0][0] if len(grid) and len(grid[0]) else None
    kind = columns.kind_of(cell)
    if kind == columns.NUMBER:
        return columns.to_float(cell)
    if isinstance(cell, CellError):
        return Fault(cell, f"{what} hold the error {cell}; correct that cell")
    if kind == columns.BLANK:
        return Fault(CellError.NA, f"{what} are blank; type a number")
    return Fault(CellError.VALUE, f"{what} are {_shown(cell)}; a number belongs here")


def _typed(grid: Grid) -> str:
    cell = grid[0][0]
    return number_text(cell) if isinstance(cell, (int, float)) else str(cell)


def _shown(cell: Cell) -> str:
    return str(cell).upper() if isinstance(cell, bool) else quoted(str(cell))


def profile(call: Sequence[Grid], failed: Failed) -> Outcome:
    """Rows of place [mm] and temperature [°C] through one case's body."""
    count = _number(call[0], "the points")
    if isinstance(count, Fault):
        return failed(count)
    if not math.isfinite(count) or count != int(count) or not 2 <= count <= MOST_POINTS:
        return failed(Fault(CellError.NUM, f"the points are {_typed(call[0])}; give a whole number from 2 to {MOST_POINTS}"))
    texts = heading_texts(call[1])
    rows = join(call[2:], texts[1]) if not isinstance(texts, Fault) else texts
    if isinstance(texts, Fault) or isinstance(rows, Fault):
        return failed(texts if isinstance(texts, Fault) else rows)  # type: ignore[arg-type]
    if len(rows) != 1:
        return failed(Fault(CellError.VALUE, f"a profile is of one case and {len(rows)} were given; pass one row of values"))
    plan, table = read_headings(texts[0]), to_columns(rows)
    peak = read_answer("peak [°C]")
    assert isinstance(peak, Asked)
    result = evaluate(plan, table, (peak,), mismatch_of(len(table), plan), keep_cases=True)
    if result.blank[0]:
        return Outcome((("", ""),), (None,))
    sentence = reason(result, table, 0, 0, 0)
    if sentence is not None:
        return failed(Fault(result.faults[result.fault[0][0]].error, sentence))
    layers = len(result.cases[0].layers)
    if count < 2 * layers:
        sentence = f"the points are {number_text(count)}; a body of {layers} layers needs at least {2 * layers}"
        return failed(Fault(CellError.NUM, sentence))
    place, T, _ = ingle.profile(result.cases[0], int(count))
    grid = [[1e3 * r, t] for r, t in zip(place[0].tolist(), T[0].tolist(), strict=True)]
    return Outcome(grid, (None,) * len(grid))


def points(call: Sequence[Grid], failed: Failed) -> Outcome:
    """A text table `20:16.2; 500:21.5` from two ranges; pairs with both cells blank are skipped."""
    temperatures, values = ([cell for row in grid for cell in row] for grid in call)
    if len(temperatures) != len(values):
        counts = f"the temperatures are {len(temperatures)} and the values {len(values)}"
        return failed(Fault(CellError.VALUE, f"{counts}; pass two ranges of the same size"))
    pairs: list[tuple[float, float]] = []
    for place, (temperature, value) in enumerate(zip(temperatures, values, strict=True), 1):
        if columns.is_blank(temperature) and columns.is_blank(value):
            continue
        for cell, what in ((temperature, "temperature"), (value, "value")):
            fault = _point_fault(cell, f"{what} {place}")
            if fault is not None:
                return failed(fault)
        pairs.append((float(temperature), float(value)))  # type: ignore[arg-type]
    if not pairs:
        return failed(Fault(CellError.NA, "both ranges are blank; give at least one temperature and its value"))
    for (low, _), (high, _) in pairwise(pairs):
        if not low < high:
            return failed(Fault(CellError.NUM, f"temperature {number_text(high)} follows {number_text(low)}; they must rise"))
    text = "; ".join(f"{_plain(low)}:{_plain(value)}" for low, value in pairs)
    if len(text) > _LONGEST_TEXT:
        return failed(Fault(CellError.VALUE, f"the table has {len(pairs)} points, more than a cell can hold; pass fewer"))
    return Outcome(((text,),), (None,))


def _plain(x: float) -> str:
    return repr(x).removesuffix(".0")


def _point_fault(cell: Cell, what: str) -> Fault | None:
    kind = columns.kind_of(cell)
    if kind == columns.NUMBER and math.isfinite(columns.to_float(cell)):
        return None
    if kind == columns.NUMBER:
        return Fault(CellError.NUM, f"{what} is beyond the range of numbers; correct it")
    if isinstance(cell, CellError):
        return Fault(cell, f"{what} holds the error {cell}; correct that cell")
    if kind == columns.BLANK:
        return Fault(CellError.NA, f"{what} is blank; fill it in or clear the cell beside it")
    return Fault(CellError.VALUE, f"{what} is {_shown(cell)}; a number belongs here")

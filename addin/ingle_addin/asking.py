"""`ask`: the answers of INGLE.ASK for Python, over numpy columns or plain lists."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from ingle_addin.cells import CellError
from ingle_addin.columns import Values, from_array, from_cells
from ingle_addin.evaluate import evaluate
from ingle_addin.faults import Fault
from ingle_addin.heading_reader import Asked, Plan, read_answer, read_headings
from ingle_addin.tables import heading_texts

Headings = str | Sequence[str] | Sequence[Sequence[str]] | np.ndarray


def ask(answers: Headings, headings: Headings, *values: Any) -> list[np.ndarray]:
    """Answer a table of cases: one array an answer, one element a row.

    ``answers`` and ``headings`` are one text split at `;` or a list of texts, each `name [unit]`. Each of ``values`` is a
    one-dimensional array or flat list (one column), a two-dimensional array or list of rows (a block of columns), or one
    value that serves every row; together, left to right, they give one column a heading. NaN, None and blank text are
    blank. Number answers are float arrays in the answer's own unit, NaN without an answer, with the reason under ``why``;
    text answers are object arrays. Nothing is raised for what a cell or heading may hold.
    """
    asked = _asked(answers)
    texts = _texts(headings)
    plan = read_headings(texts) if not isinstance(texts, Fault) else Plan(0, (), texts)
    table, mismatch = _table(values, plan)
    return evaluate(plan, table, asked, mismatch).values


def _as_rows(given: Headings) -> list[list[Any]]:
    if isinstance(given, str):
        return [[given]]
    rows = list(given)
    return [list(row) for row in rows] if rows and not isinstance(rows[0], str) else [rows]


def _texts(given: Headings) -> tuple[str, ...] | Fault:
    found = heading_texts(_as_rows(given))
    return found if isinstance(found, Fault) else found[0]


def _asked(given: Headings) -> list[Asked | Fault]:
    found = heading_texts(_as_rows(given), "answers")
    return [found] if isinstance(found, Fault) else [read_answer(text) for text in found[0]]


def _table(values: Sequence[Any], plan: Plan) -> tuple[list[Values], Fault | None]:
    try:
        table = [column for value in values for column in _columns(value)]
    except (TypeError, ValueError):  # ragged rows, more than two dimensions
        fault = Fault(CellError.VALUE, "a value is neither a column nor a block of even rows; give columns of the same rows")
        return [Values(np.zeros(1))], fault
    sizes = sorted({len(column) for column in table} - {1})
    if len(sizes) > 1:
        fault = Fault(CellError.VALUE, f"one value has {sizes[0]} rows and another {sizes[1]}; give columns of the same rows")
        return [column.rows(0, 1) for column in table], fault
    if any(len(column) == 0 for column in table):
        return [column.rows(0, 0) for column in table if len(column) == 0], None
    return table, mismatch_of(len(table), plan)


def mismatch_of(width: int, plan: Plan) -> Fault | None:
    """The fault of a call whose columns are not as many as its headings."""
    if plan.fault is not None or width == plan.width:
        return None
    heads = f"are {plan.width} headings" if plan.width != 1 else "is 1 heading"
    columns = f"{width} column{'s' if width != 1 else ''}"
    return Fault(CellError.VALUE, f"there {heads} but {columns} of values; pass one column a heading")


def _columns(value: Any) -> list[Values]:
    if isinstance(value, np.ma.MaskedArray):
        value = np.ma.filled(value.astype(object), None)  # what is masked is blank
    if isinstance(value, np.ndarray) or hasattr(value, "__array__"):
        array = np.asarray(value)
        if array.ndim == 2:
            return [from_array(np.ascontiguousarray(column)) for column in array.T]
        return [from_array(np.atleast_1d(array))]
    if isinstance(value, (list, tuple)):
        if value and isinstance(value[0], (list, tuple)):
            return [from_cells(column) for column in zip(*value, strict=True)]
        return [from_cells(value)]
    return [from_cells([value])]


__all__ = ["ask", "mismatch_of"]

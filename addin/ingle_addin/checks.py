"""A column's cells checked one heading at a time: what is no number, no known text, or outside the heading's range."""

from __future__ import annotations

import re
from typing import Any

import numpy as np

from ingle_addin import columns
from ingle_addin.cells import CellError
from ingle_addin.faults import HERE, ROW, Fault, number_text, quoted
from ingle_addin.heading_reader import Column, clean
from ingle_addin.headings import ABSOLUTE_ZERO
from ingle_addin.units import Kind

_NUMERIC = re.compile(r"[+\-−]?\s*(\d+\.?\d*|\.\d+)([eE][+\-]?\d+)?\s*%?")
_DECIMAL_COMMA = re.compile(r"[+\-−]?\s*\d[\d.  ' ]*,\d+([eE][+\-]?\d+)?")
_THOUSANDS = re.compile(r"[+\-−]?\d{1,3}(,\d{3})+(\.\d+)?")


def text_fault(column: Column, cell: str) -> Fault:
    """Why a text under a number's heading is no number."""
    text = clean(cell)
    where, shown = f"{column.label} in {ROW}", quoted(text)
    if _NUMERIC.fullmatch(text):
        return Fault(CellError.VALUE, f"{where} is {shown} and is stored as text; convert it to a number")
    if _THOUSANDS.fullmatch(text):
        remedy = "its comma may part thousands or decimals, so type it as a number of your spreadsheet"
        return Fault(CellError.VALUE, f"{where} is {shown}, a text; {remedy}")
    if _DECIMAL_COMMA.fullmatch(text):
        return Fault(CellError.VALUE, f"{where} is {shown}, a text with a decimal comma; type it as a number of your spreadsheet")
    return Fault(CellError.VALUE, f"{where} is the text {shown}; a number belongs here")


def is_table(text: str) -> bool:
    """Whether a text means to be a text table: `20:16.2; 500:21.5`."""
    return ":" in text


def cell_fault(column: Column, cell: Any) -> Fault:
    """Why a cell that is neither number nor blank cannot stand under a number's heading."""
    where, kind = f"{column.label} in {ROW}", columns.kind_of(cell)
    if kind == columns.ERROR:
        return error_fault(column.label, cell)
    if kind == columns.BOOLEAN:
        return Fault(CellError.VALUE, f"{where} is {str(bool(cell)).upper()}; a number belongs here")
    if kind == columns.DATE:
        return Fault(CellError.VALUE, f"{where} is a date or time; a number belongs here, so check the cell's format")
    return text_fault(column, str(cell))


def error_fault(label: str, cell: Any) -> Fault:
    """A cell that holds an error gives that error in its row."""
    return Fault(cell, f"{label} in {ROW} holds the error {cell}; correct that cell")


def word_fault(column: Column, cell: Any) -> Fault | None:
    """Why a cell cannot stand under a text heading, None where it can."""
    where, kind = f"{column.label} in {ROW}", columns.kind_of(cell)
    known = column.item.texts
    listed = f"{', '.join(known[:-1])} or {known[-1]}" if known else ""
    if kind == columns.TEXT:
        if not known or word(cell) in known:
            return None
        return Fault(CellError.VALUE, f"{where} is {quoted(str(cell))}, which is not known; write {listed}")
    if kind == columns.ERROR:
        return error_fault(column.label, cell)
    what = {columns.BOOLEAN: str(cell).upper(), columns.DATE: "a date or time"}.get(kind, "a number")
    return Fault(CellError.VALUE, f"{where} is {what}; a text belongs here" + (f": {listed}" if listed else ""))


def word(cell: Any) -> str:
    """A text value as it is compared."""
    return clean(str(cell)).casefold()


def range_fault(column: Column) -> Fault:
    """What a number outside the heading's range is told; HERE stands for the number."""
    item, where = column.item, f"{column.label} in {ROW}"
    if item.kinds[0] is Kind.TEMPERATURE:
        cold, hot = (number_text(column.unit.from_base(x)) for x in (ABSOLUTE_ZERO, item.highest))
        limits = f"nothing is colder than {cold} (absolute zero) and at most {hot} belongs here"
    else:
        low, high = (number_text(column.unit.from_base(x)) for x in (item.lowest, item.highest))
        limits = f"it must be {'above' if item.above else 'at least'} {low} and at most {high}"
    return Fault(CellError.NUM, f"{where} is {HERE}; {limits}; correct the value or the heading's unit", (column.index,))


def outside(column: Column, base: np.ndarray) -> np.ndarray | None:
    """Which numbers, in base units, lie outside the heading's range; None where none does. NaN is blank."""
    item = column.item
    low, high = (base[0], base[0]) if len(base) == 1 else (np.fmin.reduce(base), np.fmax.reduce(base))
    if not (low < item.lowest or high > item.highest or (item.above and low == item.lowest)):
        return None
    below = base <= item.lowest if item.above else base < item.lowest
    bad: np.ndarray = below | (base > item.highest)
    return bad

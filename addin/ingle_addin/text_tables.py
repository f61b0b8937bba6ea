"""Text tables in temperature, `20:16.2; 500:21.5`: read from a cell, and kept for a block of rows.

Temperatures are °C, or have a unit inside (`300 K:398`); values are in the heading's unit. Temperatures rise.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import pairwise

import numpy as np
from ingle.conductivities import Table

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW, Fault, quoted
from ingle_addin.heading_reader import Column
from ingle_addin.headings import ABSOLUTE_ZERO
from ingle_addin.units import Kind, UnitError, read_unit

MOST_POINTS = 200
HOTTEST = 1e5  # °C, as for every temperature heading
_NUMBER = r"[+\-−]?(?:\d+\.?\d*|\.\d+)(?:[eE][+\-]?\d+)?"
_POINT = re.compile(rf"\s*(?P<T>{_NUMBER})\s*(?P<unit>[^:\d]*?)\s*:\s*(?P<y>{_NUMBER})\s*")

Points = tuple[tuple[float, ...], tuple[float, ...]]


def read_table(column: Column, text: str) -> Points | Fault:
    """Temperatures [°C] and values in base units of a text table, or why it is none."""
    return _read(column, text)


@lru_cache(maxsize=1024)
def _read(column: Column, text: str) -> Points | Fault:
    where = f"{column.label} in {ROW}"
    temperatures: list[float] = []
    values: list[float] = []
    units: set[str] = set()
    for piece in text.split(";"):
        if not piece.strip():
            continue
        match = _POINT.fullmatch(piece.replace("−", "-"))
        if match is None:
            return Fault(CellError.VALUE, f"{where} has {quoted(piece)} in its table; write points as temperature:value, 20:16.2")
        try:
            unit = read_unit(match["unit"] or "°C", Kind.TEMPERATURE)
        except UnitError as error:
            return Fault(CellError.VALUE, f"{where} has {quoted(piece)} in its table: {error}")
        units.add(match["unit"])
        temperatures.append(unit.to_base(float(match["T"])))
        values.append(column.unit.to_base(float(match["y"])))
    if len(units) > 1:
        return Fault(CellError.VALUE, f"{where} has a table of mixed temperature units; give every point the same unit, or none")
    if temperatures and max(temperatures) > HOTTEST:
        return Fault(CellError.NUM, f"{where} has a table that goes beyond 1e5 °C; check its temperatures and their unit")
    if temperatures and temperatures[0] < ABSOLUTE_ZERO:
        return Fault(CellError.NUM, f"{where} has a table that begins below absolute zero; check its temperatures and their unit")
    if len(values) > MOST_POINTS:
        return Fault(CellError.VALUE, f"{where} has a table of {len(values)} points; at most {MOST_POINTS} are read")
    for low, high in pairwise(temperatures):
        if not low < high:
            return Fault(CellError.NUM, f"{where} has a table whose temperatures do not rise; put its points in order")
    item = column.item
    for value in values:
        if not (item.lowest < value or (value == item.lowest and not item.above)) or value > item.highest:
            return Fault(CellError.NUM, f"{where} has a value in its table that no material has; check the values and the unit")
    return tuple(temperatures), tuple(values)


@dataclass
class TextTables:
    """The tables of a block's rows: ``given`` marks the rows that have one."""

    given: np.ndarray
    number: np.ndarray
    points: list[Points]

    @classmethod
    def none(cls, n: int) -> TextTables:
        """No table in any of n rows."""
        return cls(np.zeros(n, bool), np.zeros(n, np.intp), [])

    def put(self, rows: Sequence[int], points: Points) -> None:
        """Give rows a table."""
        self.given[rows] = True
        self.number[rows] = len(self.points)
        self.points.append(points)

    def ends(self, rows: np.ndarray | slice) -> np.ndarray:
        """The last temperature of each row's table."""
        last: np.ndarray = np.array([T[-1] for T, _ in self.points])[self.number[rows]]
        return last

    def of(self, rows: np.ndarray | slice) -> Table:
        """The tables of some rows as arrays; shorter ones go on with their last value."""
        longest = max(len(T) for T, _ in self.points)
        T = np.array([[*T, *(T[-1] + i for i in range(1, longest - len(T) + 1))] for T, _ in self.points])
        y = np.array([[*y, *(y[-1] for _ in range(longest - len(y)))] for _, y in self.points])
        number = self.number[rows]
        return Table(T[number], y[number])

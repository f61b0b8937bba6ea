"""The calculation engine as the rest sees it: constants and formulas in, values out, many at a time."""

from __future__ import annotations

import contextlib
import importlib.util
import math
import os
import subprocess
import sys
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import Any, BinaryIO, cast

from ingle_addin.book import child
from ingle_addin.book.errors import BookError
from ingle_addin.cells import Cell, CellError

_ERRORS = {error.value: error for error in CellError}
# Cells sent at a time: large enough to cost little, small enough that no second copy of a sheet is in memory.
_BATCH = 50_000


_SCRIPT = child.__file__


class Strange(str):
    """An error of the engine that is none of a spreadsheet's: a formula it cannot read, a circle, an array that spills."""

    __slots__ = ()


class Engine:
    """One workbook in the engine, sheets by index, cells by :func:`ingle_addin.book.refs.key_of`.

    Lives in a process of its own, so that a crash of native code loses nothing; whatever the process does wrong is a
    :class:`BookError` that names the workbook. It starts while its owner reads the workbook, and is given work after
    :meth:`open`. Close it, or use it in ``with``.
    """

    def __init__(self, path: Path) -> None:
        self._path = path
        self._is_waiting = False  # for the answer to what opened it
        self.is_open = False
        self._process: subprocess.Popen[bytes] | None = None
        if not _is_installed():
            return
        environment = {**os.environ, "PYTHONPATH": os.pathsep.join(each for each in sys.path if each)}
        self._process = subprocess.Popen(
            [sys.executable, "-P", _SCRIPT],
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.DEVNULL,
            env=environment,
        )
        # Both are there, since both were asked for.
        self._input, self._output = cast(BinaryIO, self._process.stdin), cast(BinaryIO, self._process.stdout)

    def open(self, sheet_names: Sequence[str]) -> Engine:
        """Give it sheets of these names. Raises :class:`BookError` if the engine is not installed."""
        if self._process is None:
            raise BookError(NOT_INSTALLED)
        self.is_open = self._is_waiting = True
        self._tell("start", list(sheet_names))
        return self

    def __enter__(self) -> Engine:
        return self

    def __exit__(self, *_: object) -> None:
        self.close()

    def close(self) -> None:
        """End the process."""
        if self._process is None:
            return
        self._process.kill()
        with contextlib.suppress(OSError):  # what is still in the pipe has no reader
            self._input.close()
        self._output.close()
        self._process.wait()

    def _tell(self, name: str, *args: object) -> None:
        """Send a command that is not answered."""
        try:
            child.send(self._input, (name, args))
        except OSError:
            with contextlib.suppress(OSError, EOFError):
                self._await_start()  # it may have said why it ended
            raise self._stopped() from None

    def _ask(self, name: str, *args: object) -> Any:
        """Send a command and wait for its answer."""
        self._tell(name, *args)
        try:
            self._await_start()
            return child.receive(self._output)
        except (OSError, EOFError):
            raise self._stopped() from None

    def _await_start(self) -> None:
        """Hear, once, how its start went."""
        if not self._is_waiting:
            return
        self._is_waiting = False
        answer = child.receive(self._output)
        if answer is not True:
            self.close()
            if answer is False:
                raise BookError(NOT_INSTALLED)
            raise BookError(f"{self._path}: the calculation engine takes no sheet of the name {answer}; rename it")

    def _stopped(self) -> BookError:
        self.close()
        return BookError(
            f"{self._path}: the calculation engine stopped on this workbook; nothing was written. "
            "Simplify its longest formulas and try again"
        )

    def put(self, sheet: int, cells: Iterable[tuple[int, Cell]]) -> None:
        """Set constants; None empties the cell."""
        keys: list[int] = []
        values: list[object] = []
        for key, value in cells:
            keys.append(key)
            values.append(_outward(value))
            if len(keys) >= _BATCH:
                self._tell("put", sheet, keys, values)
                keys, values = [], []
        if keys:
            self._tell("put", sheet, keys, values)

    def put_formulas(self, sheet: int, keys: Sequence[int], texts: Sequence[str]) -> None:
        """Set formulas (without ``=``)."""
        for at in range(0, len(keys), _BATCH):
            self._tell("formulas", sheet, keys[at : at + _BATCH], texts[at : at + _BATCH])

    def put_array(self, sheet: int, key: int, rows: int, columns: int, text: str) -> None:
        """Set an array formula over a range."""
        self._tell("array", sheet, key, rows, columns, text)

    def refused(self) -> list[tuple[int, int]]:
        """The cells (sheet, cell) whose formula the engine has refused since the last time of asking."""
        return [(sheet, key) for sheet, key in self._ask("refused")]

    def evaluate(self) -> None:
        """Work everything out."""
        self._tell("evaluate")

    def values(self, sheet: int, keys: Sequence[int]) -> list[Cell]:
        """Read cells; an error that no spreadsheet knows comes back as :class:`Strange`."""
        return self.read(sheet, keys)[0]

    def read(self, sheet: int, keys: Sequence[int]) -> tuple[list[Cell], list[int]]:
        """The same, and which of them (counted from 0) are :class:`Strange`."""
        found: list[Cell] = []
        strange: list[int] = []
        for at in range(0, len(keys), _BATCH):
            values, errors = self._ask("values", sheet, keys[at : at + _BATCH])
            for index, text in errors:
                values[index] = error = _inward(text)
                if isinstance(error, Strange):
                    strange.append(at + index)
            found += values
        return found, strange


NOT_INSTALLED = (
    "the workbook commands need the ironcalc package, which has no wheel for this platform or is not installed; "
    "try pip install ironcalc, or use Python 3.11 to 3.14 on 64-bit Linux, Windows or macOS"
)


def _is_installed() -> bool:
    return importlib.util.find_spec("ironcalc") is not None


def _outward(value: Cell) -> object:
    if value is None or type(value) is str or type(value) is bool:
        return value
    if type(value) is float:
        return value if math.isfinite(value) else ("#NUM!",)
    if isinstance(value, CellError):
        return (value.value,)
    return float(value) if isinstance(value, (int, float)) else str(value)


def _inward(text: str) -> Cell:
    return _ERRORS.get(text) or Strange(text)

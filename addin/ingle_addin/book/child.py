"""The calculation engine in a process of its own: a crash there is one clear line here.

Run as a script, not as a module of the package, so that it starts with nothing but IronCalc. Commands come in on the
standard input and answers go out on the standard output, each as one marshalled object behind its length. An error value
travels in as a tuple that holds its text.
"""

from __future__ import annotations

import marshal
import struct
import sys
from collections.abc import Sequence
from typing import Any, BinaryIO

_LENGTH = struct.Struct("<Q")
_BITS = 14
_MASK = (1 << _BITS) - 1


def send(stream: BinaryIO, message: Any) -> None:
    """Write one object."""
    content = marshal.dumps(message)
    stream.write(_LENGTH.pack(len(content)))
    stream.write(content)
    stream.flush()


def receive(stream: BinaryIO) -> Any:
    """Read one object; EOFError when the other side is gone."""
    head = stream.read(_LENGTH.size)
    if len(head) < _LENGTH.size:
        raise EOFError
    (length,) = _LENGTH.unpack(head)
    content = stream.read(length)
    if len(content) < length:
        raise EOFError
    return marshal.loads(content)


class Model:
    """A workbook in the engine. Cells are named by sheet index and by row * 16384 + column - 1."""

    def __init__(self, names: Sequence[str]) -> None:
        import ironcalc

        self._model = ironcalc.create("book", "en", "UTC", "en")
        self._is_error = ironcalc.CellType.ErrorValue
        self._refused: list[tuple[int, int]] = []
        for index, name in enumerate(names):
            try:
                if index:
                    self._model.add_sheet(name)
                else:
                    self._model.rename_sheet(0, name)
            except ironcalc.WorkbookError:
                raise NameError(name) from None

    def put(self, sheet: int, keys: Sequence[int], values: Sequence[Any]) -> None:
        """Set constants; None empties the cell."""
        model = self._model
        number, text = model.update_cell_with_number, model.update_cell_with_text
        for key, value in zip(keys, values, strict=True):
            row, column = key >> _BITS, (key & _MASK) + 1
            kind = type(value)
            if kind is float:
                number(sheet, row, column, value)
            elif kind is str:
                text(sheet, row, column, value)
            elif kind is bool:
                model.update_cell_with_bool(sheet, row, column, value)
            elif isinstance(value, tuple):
                model.set_user_input(sheet, row, column, value[0])
            else:
                model.clear_cell_contents(sheet, row, column)

    def formulas(self, sheet: int, keys: Sequence[int], texts: Sequence[str]) -> None:
        """Set formulas (without ``=``), remembering the cells whose formula the engine refuses."""
        put = self._model.update_cell_with_formula
        for key, text in zip(keys, texts, strict=True):
            try:
                put(sheet, key >> _BITS, (key & _MASK) + 1, "=" + text)
            except Exception:
                self._refused.append((sheet, key))

    def array(self, sheet: int, key: int, rows: int, columns: int, text: str) -> None:
        """Set an array formula, remembering its cell if the engine refuses it."""
        try:
            self._model.set_user_array_formula(sheet, key >> _BITS, (key & _MASK) + 1, columns, rows, "=" + text)
        except Exception:
            self._refused.append((sheet, key))

    def refused(self) -> list[tuple[int, int]]:
        """The cells (sheet, key) refused since the last time of asking."""
        found, self._refused = self._refused, []
        return found

    def evaluate(self) -> None:
        """Work everything out."""
        self._model.evaluate()

    def values(self, sheet: int, keys: Sequence[int]) -> tuple[list[object], list[tuple[int, str]]]:
        """Read cells; errors come apart, as (index, text)."""
        model = self._model
        get = model.get_cell_value
        found: list[object] = []
        errors: list[tuple[int, str]] = []
        for key in keys:
            row, column = key >> _BITS, (key & _MASK) + 1
            value = get(sheet, row, column)
            if type(value) is str and value[:1] == "#" and model.get_cell_type(sheet, row, column) == self._is_error:
                errors.append((len(found), value))
            found.append(value)
        return found, errors


def main() -> None:
    """Serve one parent until it closes its end."""
    stdin, stdout = sys.stdin.buffer, sys.stdout.buffer
    model: Model | None = None
    while True:
        try:
            name, args = receive(stdin)
        except EOFError:
            return
        if name == "start":
            try:
                model = Model(*args)
            except ImportError:
                send(stdout, False)
                return
            except NameError as refused:
                send(stdout, str(refused))
                return
            send(stdout, True)
        else:
            answer = getattr(model, name)(*args)
            # What only puts is not answered, so that the parent prepares the next batch meanwhile.
            if name in ("values", "refused"):
                send(stdout, answer)


if __name__ == "__main__":
    main()

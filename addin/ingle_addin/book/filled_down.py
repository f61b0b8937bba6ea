"""Formulas filled down a column, worked out once: what differs from row to row is the row's own number."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

from ingle_addin.book.bind import Binder, constant
from ingle_addin.book.calling import Area, Argument, Call, Common, Constant
from ingle_addin.book.formula import ROW
from ingle_addin.book.plan import ArgPlan, BlockArg, CallPlan, ConstArg, Omitted, Place, Plan, RefArg, rect_of, text_of
from ingle_addin.book.refs import Rect, column_number, key_of

_CELL = re.compile(r"\$?([A-Za-z]{1,3})\$?" + ROW + r"\Z")


class OwnRow(NamedTuple):
    """Cells of the formula's own row; ``moving`` are those of their sheet that can change between rounds, None if none can."""

    sheet: int
    left: int
    right: int
    moving: set[int] | None


class FilledCall(NamedTuple):
    """A call with the arguments that are the same in every row, and those of the row at hand."""

    name: str
    args: tuple[Argument | OwnRow, ...]
    moves: bool
    whole_column: bool

    def at(self, sheet: int, key: int, row: int) -> Call:
        """The call of the cell ``key``."""
        moves = self.moves
        args: list[Argument] = []
        for arg in self.args:
            if type(arg) is OwnRow:
                owner, left, right, moving = arg
                start = key_of(row, left)
                if moving is not None and not moves:
                    moves = not moving.isdisjoint(range(start, start + right - left + 1))
                args.append(Area(owner, Rect(row, left, row, right)))
            else:
                args.append(arg)  # type: ignore[arg-type]
        return Call(self.name, sheet, key, tuple(args), 0, moves, self.whole_column)


@dataclass(frozen=True, slots=True)
class Filled:
    """A formula for every row: its plan, and what of it need not be worked out again.

    ``patterns`` are its slots and ``text`` what the engine is given (empty if that must be put together), with :data:`ROW`
    for the row's number; ``calls`` are its calls, None if they must be bound one by one.
    """

    plan: Plan
    patterns: Sequence[str]
    text: str
    calls: tuple[FilledCall, ...] | None

    @staticmethod
    def of(plan: Plan, patterns: Sequence[str], sheet: int, binder: Binder) -> Filled:
        """Work out what is common to all rows of a formula on a sheet."""
        text = ""
        if not plan.calls and all(isinstance(piece, (str, int)) or piece is Place.ROW for piece in plan.pieces):
            text = "".join(_text(piece, patterns) for piece in plan.pieces)
        made = [_call(each, patterns, sheet, binder) for each in plan.calls]
        calls = [each for each in made if each is not None]
        return Filled(plan, patterns, text, tuple(calls) if len(calls) == len(made) else None)

    def slots(self, row: str) -> list[str]:
        """The slots in one row."""
        return [pattern.replace(ROW, row) for pattern in self.patterns]


def _text(piece: object, patterns: Sequence[str]) -> str:
    if piece is Place.ROW:
        return ROW
    return patterns[piece] if isinstance(piece, int) else str(piece)


def _call(plan: CallPlan, patterns: Sequence[str], sheet: int, binder: Binder) -> FilledCall | None:
    args: list[Argument | OwnRow] = []
    moves = whole_column = False
    for each in plan.args:
        made = _argument(each, patterns, sheet, binder)
        if made is None:
            return None
        arg, moved, whole = made
        args.append(arg)
        moves, whole_column = moves or moved, whole_column or whole
    return FilledCall(plan.name, tuple(args), moves, whole_column)


def _argument(plan: ArgPlan, patterns: Sequence[str], sheet: int, binder: Binder) -> tuple[Argument | OwnRow, bool, bool] | None:
    """The argument, whether it moves, whether it is a whole column; None if it must be bound row by row."""
    match plan:
        case Omitted():
            return Constant(()), False, False
        case ConstArg(sign, const) if ROW not in text_of(const.slot, patterns):
            return Constant(((constant(sign, const, patterns),),)), False, False
        case BlockArg(block) if not any(ROW in text_of(const.slot, patterns) for row in block.rows for _, const in row):
            return Constant(tuple(tuple(constant(*each, patterns) for each in row) for row in block.rows)), False, False
        case RefArg(ref) if not ref.this_row:
            owner = sheet if ref.sheet is None else int(ref.sheet)
            edges = [text_of(ref.first, patterns), text_of(ref.first if ref.last is None else ref.last, patterns)]
            if all(ROW not in edge for edge in edges):
                rect = rect_of(ref, patterns, 0)
                if rect is None:
                    return None
                area, moves, whole = binder.area(owner, rect, ref.band)
                return Common(area), moves, whole
            matches = [_CELL.match(edge) for edge in edges]
            left, right = sorted(column_number(match[1]) if match else 0 for match in matches)
            if left:
                return OwnRow(owner, left, right, binder.moving_in(owner, left, right)), False, False
    return None

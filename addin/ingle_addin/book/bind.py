"""Turns the plan of a shape into the calls and helper cells of one formula."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from ingle_addin.book.calling import Answer, Area, Argument, Call, Choice, Computed, Constant, Indexed
from ingle_addin.book.formula import Const, UnreadableError
from ingle_addin.book.plan import (
    ArgPlan,
    BlockArg,
    CallArg,
    ChoiceArg,
    ConstArg,
    HelperArg,
    IndexArg,
    Omitted,
    Piece,
    Plan,
    RefArg,
    Result,
    rect_of,
    render,
    shape_of,
    text_of,
)
from ingle_addin.book.refs import MAX_COLUMN, MAX_ROW, Rect, key_of, place_of
from ingle_addin.book.scan import Sheet
from ingle_addin.cells import Cell, CellError

_HELPER_ROWS = 1_000_000
_MAX_ELEMENTS = 100_000
_ERRORS = {error.value: error for error in CellError}


class HelperSheet:
    """Hands out cells of the helper sheet and remembers the formulas put there."""

    def __init__(self) -> None:
        self.keys: list[int] = []
        self.texts: list[str] = []
        # Formulas whose text depends on how large a nested call's answer is.
        self.open: list[tuple[int, Callable[[], str], list[Call]]] = []

    def add(self, text: str) -> int:
        """Put a formula (without ``=``) into a new cell; return the cell."""
        count = len(self.keys)
        if count >= _HELPER_ROWS * MAX_COLUMN:
            raise UnreadableError("the workbook has too many formulas inside Ingle calls")
        key = key_of(count % _HELPER_ROWS + 1, count // _HELPER_ROWS + 1)
        self.keys.append(key)
        self.texts.append(text)
        return key


class Binder:
    """Binds plans to the cells of a workbook.

    ``moving`` holds, for each sheet, the cells whose value can change between rounds. ``address`` gives the place of a
    nested call's answer for use in a helper formula.
    """

    def __init__(
        self,
        sheets: Sequence[Sheet],
        moving: Sequence[set[int]],
        helper: HelperSheet,
        address: Callable[[Call, bool, tuple[int, int] | None], str],
    ) -> None:
        self._sheets = sheets
        self._moving = moving
        self._moving_columns = [{place_of(key)[1] for key in keys} for keys in moving]
        self._helper = helper
        self._address = address
        self._fixed: dict[tuple[int, Rect], Area] = {}

    def calls(self, plan: Plan, slots: Sequence[str], sheet: int, key: int) -> list[Call]:
        """The calls of one formula, inner ones first."""
        made: list[Call] = []
        for each in plan.calls:
            state = _State()
            args = tuple(self._argument(arg, slots, sheet, key, made, state) for arg in each.args)
            made.append(Call(each.name, sheet, key, args, state.level, state.moves, state.whole_column))
        return made

    def _argument(self, plan: ArgPlan, slots: Sequence[str], sheet: int, key: int, made: list[Call], state: _State) -> Argument:
        match plan:
            case Omitted():
                return Constant(())
            case RefArg(ref):
                rect = rect_of(ref, slots, key)
                if rect is None:
                    return Constant(((CellError.REF,),))
                owner = sheet if ref.sheet is None else int(ref.sheet)
                return self._area(owner, rect, ref.band, state)
            case ConstArg(sign, const):
                return Constant(((constant(sign, const, slots),),))
            case BlockArg(block):
                return Constant(tuple(tuple(constant(*each, slots) for each in row) for row in block.rows))
            case CallArg(index):
                state.level = max(state.level, made[index].level + 1)
                state.moves = True
                return Answer(made[index])
            case HelperArg():
                return self._computed(plan, slots, key, made, state)
            case ChoiceArg(selector, branches, is_if):
                chosen = self._single(selector, slots, key, made, state)
                return Choice(chosen, [self._argument(each, slots, sheet, key, made, state) for each in branches], is_if)
            case IndexArg(ref, row, column):
                rect = rect_of(ref, slots, key)
                if rect is None:
                    return Constant(((CellError.REF,),))
                owner = sheet if ref.sheet is None else int(ref.sheet)
                state.moves = True
                return Indexed(
                    owner,
                    self._used(owner, rect) if ref.band else rect,
                    None if row is None else self._single(row, slots, key, made, state),
                    None if column is None else self._single(column, slots, key, made, state),
                )

    def area(self, sheet: int, rect: Rect, band: bool) -> tuple[Area, bool, bool]:
        """A range as an argument, whether it can move, and whether it is a whole column."""
        state = _State()
        return self._area(sheet, rect, band, state), state.moves, state.whole_column

    def moving_in(self, sheet: int, left: int, right: int) -> set[int] | None:
        """The cells of a sheet that can change between rounds, None if there are none in those columns."""
        columns = self._moving_columns[sheet]
        return self._moving[sheet] if any(column in columns for column in range(left, right + 1)) else None

    def _area(self, sheet: int, rect: Rect, band: bool, state: _State) -> Area:
        if band or rect.rows * rect.columns > _MAX_ELEMENTS:
            state.whole_column = state.whole_column or (band and rect.bottom == MAX_ROW)
            rect = self._used(sheet, rect)
        if not state.moves:
            state.moves = self._can_move(sheet, rect)
        # One object for all the rows that share their headings.
        found = self._fixed.get((sheet, rect)) if len(self._fixed) < 10_000 else None
        if found is None:
            found = self._fixed[sheet, rect] = Area(sheet, rect)
        return found

    def _used(self, sheet: int, rect: Rect) -> Rect:
        used = self._sheets[sheet]
        return Rect(
            rect.top,
            rect.left,
            max(rect.top, min(rect.bottom, used.bottom)),
            max(rect.left, min(rect.right, used.right)),
        )

    def _can_move(self, sheet: int, rect: Rect) -> bool:
        moving = self.moving_in(sheet, rect.left, rect.right)
        if moving is None:
            return False
        for row in range(rect.top, rect.bottom + 1):
            start = key_of(row, rect.left)
            if not moving.isdisjoint(range(start, start + rect.columns)):
                return True
        return False

    def _single(self, plan: HelperArg, slots: Sequence[str], key: int, made: list[Call], state: _State) -> Computed:
        found = self._computed(plan, slots, key, made, state)
        if len(found.keys) != 1:
            raise UnreadableError("the choice between two ranges is an array; give one condition")
        return found

    def _computed(self, plan: HelperArg, slots: Sequence[str], key: int, made: list[Call], state: _State) -> Computed:
        state.moves = True
        rows, columns = shape_of(plan.pieces, slots, key)
        if rows * columns > _MAX_ELEMENTS:
            raise UnreadableError("an argument is a formula over too many cells")
        inner = _inner_calls(plan.pieces)
        for piece in plan.pieces:
            if isinstance(piece, Result) and not piece.whole:
                made[piece.call].first_only = True
        for index in inner:
            state.level = max(state.level, made[index].level + 1)
        keys, blanks = [], []
        for i in range(rows):
            for j in range(columns):
                element = (i, j) if rows * columns > 1 else None
                write = self._writer(plan, slots, key, element, made)
                text = write()
                keys.append(self._helper.add(text))
                if inner:
                    self._helper.open.append((keys[-1], write, [made[index] for index in inner]))
                elif plan.may_be_blank:
                    blanks.append(self._helper.add(f"ISBLANK({text})"))
        return Computed(keys, columns, blanks)

    def _writer(
        self, plan: HelperArg, slots: Sequence[str], key: int, element: tuple[int, int] | None, made: list[Call]
    ) -> Callable[[], str]:
        def write() -> str:
            return render(plan.pieces, slots, key, element, lambda call, whole, at: self._address(made[call], whole, at))

        return write


class _State:
    """What is learnt of a call while its arguments are bound."""

    __slots__ = ("level", "moves", "whole_column")

    def __init__(self) -> None:
        self.level = 0
        self.moves = False
        self.whole_column = False


def _inner_calls(pieces: Sequence[Piece]) -> list[int]:
    return [piece.call for piece in pieces if isinstance(piece, Result)]


def constant(sign: str, const: Const, slots: Sequence[str]) -> Cell:
    """The value of a constant in a formula."""
    text = text_of(const.slot, slots)
    match const.kind:
        case "number":
            return -float(text) if sign else float(text)
        case "text":
            return text[1:-1].replace('""', '"')
        case "bool":
            return text == "TRUE"
    return _ERRORS.get(text, CellError.VALUE)

"""What is to be done with a formula: pieces of text for the engine, and the Ingle calls lifted out of it."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from enum import Enum, auto

from ingle_addin.book.criteria import Criterion
from ingle_addin.book.formula import Block, Const, Ref, Slot
from ingle_addin.book.refs import MAX_COLUMN, MAX_ROW, Rect, column_letters, column_number, key_of, parse_cell, place_of


class Place(Enum):
    """The formula's own row or column number."""

    ROW = auto()
    COLUMN = auto()


@dataclass(frozen=True, slots=True)
class Pick:
    """One cell of a range, where a formula wants one value.

    In an array formula the element at hand; in any other (and with ``crossing``, always) the cell of the range in the
    formula's own row or column.
    """

    ref: Ref
    prefix: str
    crossing: bool


@dataclass(frozen=True, slots=True)
class PickBlock:
    """One element of an array constant."""

    block: Block


@dataclass(frozen=True, slots=True)
class ThisRow:
    """A table's cells in the formula's own row."""

    prefix: str
    left: str
    right: str | None


@dataclass(frozen=True, slots=True)
class Result:
    """The answer of a lifted call: its first value (in an array formula the element at hand), or ``whole``."""

    call: int
    whole: bool


# An int is a slot of the formula at hand; text stands for itself.
Piece = str | int | Pick | PickBlock | ThisRow | Result | Place


@dataclass(frozen=True, slots=True)
class Omitted:
    """An argument left out."""


@dataclass(frozen=True, slots=True)
class RefArg:
    """A plain reference, read cell by cell so that an empty cell stays empty."""

    ref: Ref


@dataclass(frozen=True, slots=True)
class ConstArg:
    """A constant with its sign (empty or a minus)."""

    sign: str
    const: Const


@dataclass(frozen=True, slots=True)
class BlockArg:
    """An array constant."""

    block: Block


@dataclass(frozen=True, slots=True)
class CallArg:
    """The whole answer of another lifted call."""

    call: int


@dataclass(frozen=True, slots=True)
class HelperArg:
    """An expression for the engine; ``may_be_blank`` if its outcome can be an empty cell rather than a value."""

    pieces: tuple[Piece, ...]
    may_be_blank: bool


@dataclass(frozen=True, slots=True)
class ChoiceArg:
    """``IF`` (``selector`` true or false) or ``CHOOSE`` (a number from 1) between arguments."""

    selector: HelperArg
    branches: tuple[ArgPlan, ...]
    is_if: bool


@dataclass(frozen=True, slots=True)
class IndexArg:
    """``INDEX(range, row, column)``: cells of a range, which stay empty where they are."""

    ref: Ref
    row: HelperArg | None
    column: HelperArg | None


ArgPlan = Omitted | RefArg | ConstArg | BlockArg | CallArg | HelperArg | ChoiceArg | IndexArg


@dataclass(frozen=True, slots=True)
class CallPlan:
    """A lifted call: the function's canonical name and its arguments."""

    name: str
    args: tuple[ArgPlan, ...]


@dataclass(slots=True)
class Plan:
    """How every formula of one shape is computed.

    ``keep`` is the reason for leaving the stored value, else None; ``volatile`` if that is because it changes from moment
    to moment. ``whole`` formulas are a single call; ``array`` ones
    the engine must work out as one array; all others are rendered from ``pieces``. ``refs`` are all references, for
    following what rests on what (in an ``is_local`` plan they hold for one cell only, "[column]" being of the table around
    it); ``asked`` are those of them that the engine follows, and if it ``asks_anywhere`` it may
    look at any cell. ``criteria`` must be looked at in each formula.
    """

    keep: str | None = None
    calls: list[CallPlan] = field(default_factory=list)
    pieces: tuple[Piece, ...] = ()
    whole: bool = False
    array: bool = False
    is_ingle: bool = False
    is_local: bool = False
    volatile: bool = False
    refs: list[Ref] = field(default_factory=list)
    asked: list[Ref] = field(default_factory=list)
    asks_anywhere: bool = False
    criteria: list[Criterion] = field(default_factory=list)


# (call, whole, element or None) -> the address of a lifted call's answer
ResultAddress = Callable[[int, bool, tuple[int, int] | None], str]


def text_of(slot: Slot, slots: Sequence[str]) -> str:
    """A slot's text in the formula at hand."""
    return slots[slot] if isinstance(slot, int) else slot


def rect_of(ref: Ref, slots: Sequence[str], key: int) -> Rect | None:
    """The cells a reference means in the formula of the cell ``key``; None if they are none."""
    first = text_of(ref.first, slots)
    if ref.this_row:
        row, _ = place_of(key)
        return Rect(row, column_number(first), row, column_number(str(ref.last or first)))
    if ref.band:
        one, _, two = first.replace("$", "").partition(":")
        if one.isdecimal():
            return Rect(min(int(one), int(two)), 1, max(int(one), int(two)), MAX_COLUMN)
        left, right = sorted((column_number(one), column_number(two)))
        return Rect(1, left, MAX_ROW, right)
    start = parse_cell(first)
    stop = start if ref.last is None else parse_cell(text_of(ref.last, slots))
    if start is None or stop is None:
        return None
    return Rect(min(start[0], stop[0]), min(start[1], stop[1]), max(start[0], stop[0]), max(start[1], stop[1]))


def render(
    pieces: Sequence[Piece],
    slots: Sequence[str],
    key: int,
    element: tuple[int, int] | None = None,
    address: ResultAddress | None = None,
) -> str:
    """The text of a formula for the engine, without ``=``. ``element`` is the place inside an array, from (0, 0)."""
    out: list[str] = []
    for piece in pieces:
        match piece:
            case str():
                out.append(piece)
            case int():
                out.append(slots[piece])
            case Pick(ref, prefix, crossing):
                out.append(_picked(ref, prefix, slots, key, None if crossing else element))
            case PickBlock(block):
                out.append(_picked_constant(block, slots, element or (0, 0)))
            case ThisRow(prefix, left, right):
                row, _ = place_of(key)
                out.append(f"{prefix}${left}{row}" + ("" if right is None else f":${right}{row}"))
            case Result(call, whole):
                assert address is not None
                out.append(address(call, whole, element))
            case Place.ROW:
                out.append(str(place_of(key)[0]))
            case Place.COLUMN:
                out.append(str(place_of(key)[1]))
    return "".join(out)


def _picked(ref: Ref, prefix: str, slots: Sequence[str], key: int, element: tuple[int, int] | None) -> str:
    rect = rect_of(ref, slots, key)
    if rect is None:
        return "#REF!"
    if element is not None:
        i, j = element
        # One row serves all rows of an array formula, one column all columns; beyond the rest there is nothing.
        i, j = (0 if rect.rows == 1 else i), (0 if rect.columns == 1 else j)
        if i >= rect.rows or j >= rect.columns:
            return "#N/A"
        row, column = rect.top + i, rect.left + j
    else:
        row, column = place_of(key)
        if rect.columns == 1 and rect.top <= row <= rect.bottom:
            column = rect.left
        elif rect.rows == 1 and rect.left <= column <= rect.right:
            row = rect.top
        elif not (rect.rows == 1 and rect.columns == 1):
            return "#VALUE!"
        else:
            row, column = rect.top, rect.left
    return f"{prefix}{column_letters(column)}{row}"


def constant_text(sign: str, const: Const, slots: Sequence[str]) -> str:
    """A constant as a formula writes it."""
    return sign + text_of(const.slot, slots)


def _picked_constant(block: Block, slots: Sequence[str], element: tuple[int, int]) -> str:
    i, j = element
    i, j = (0 if len(block.rows) == 1 else i), (0 if len(block.rows[0]) == 1 else j)
    if i >= len(block.rows) or j >= len(block.rows[0]):
        return "#N/A"
    return constant_text(*block.rows[i][j], slots)


def shape_of(pieces: Sequence[Piece], slots: Sequence[str], key: int) -> tuple[int, int]:
    """Rows and columns of the array that the pieces make, element by element."""
    rows = columns = 1
    for piece in pieces:
        if isinstance(piece, Pick) and not piece.crossing:
            rect = rect_of(piece.ref, slots, key)
            if rect is not None:
                rows, columns = max(rows, rect.rows), max(columns, rect.columns)
        elif isinstance(piece, PickBlock):
            rows, columns = max(rows, len(piece.block.rows)), max(columns, len(piece.block.rows[0]))
    return rows, columns


def cell_keys(rect: Rect) -> range | list[int]:
    """The numbers of a rectangle's cells, row by row."""
    if rect.rows == 1:
        start = key_of(rect.top, rect.left)
        return range(start, start + rect.columns)
    return [key for row in range(rect.top, rect.bottom + 1) for key in range(key_of(row, rect.left), key_of(row, rect.right) + 1)]

"""Formulas as trees. Cells filled down a column share one tree: what differs from row to row is kept aside as slots."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Literal

from ingle_addin.book.refs import shift

MAX_CHARACTERS = 8_192
MAX_NESTING = 64

# A slot is the index of a reference, number or text of the formula at hand, or that text itself where it is the same
# for every row (it came from a defined name or a table).
Slot = int | str

_REFERENCE, _NUMBER, _STRING, _BAND = "\x01", "\x02", "\x03", "\x04"
MARKS = (_BAND, _REFERENCE, _NUMBER, _STRING)
REFERENCE_MARKS = (_BAND, _REFERENCE)
# Stands for the row's own number where formulas filled down a column are told together.
ROW = "\x05"
_OURS = re.compile(f"[{''.join(MARKS)}{ROW}]")
# A shape that no parser takes.
UNREADABLE = "\x06"
_SLOT = re.compile(
    r"""
      (?<![\w.\\$]) ( \$?[A-Z]{1,3}:\$?[A-Z]{1,3} | \$?\d{1,7}:\$?\d{1,7} ) (?![\w.(!\[$])   # A:B  1:2
    | (?<![\w.\\$]) ( \$?[A-Z]{1,3}\$?[1-9]\d{0,6} ) (?![\w.(!\[])                       # A1
    | (?<![\w.\\$]) ( (?:\d+\.?\d*|\.\d+)(?:E[+-]?\d+)? ) (?![\w(!\[])
    | ( "(?:[^"]|"")*" )
    | ( '(?:[^']|'')*'!? | \[(?:[^\[\]']|'.|\[(?:[^\[\]']|'.)*\])*\] )                   # kept: sheet names, [brackets]
    """,
    re.VERBOSE | re.IGNORECASE | re.DOTALL,
)
_TOKEN = re.compile(
    r"""
      (?P<ws>[ \t\r\n\u00a0]+)
    | (?P<mark>[\x01-\x04])
    | (?P<error>\#(?:NULL!|DIV/0!|VALUE!|REF!|NAME\?|NUM!|N/A|GETTING_DATA|SPILL!|CALC!|FIELD!|BLOCKED!|CONNECT!|UNKNOWN!))
    | (?P<quoted>'(?:[^']|'')*'!)
    | (?P<bracket>\[(?:[^\[\]']|'.|\[(?:[^\[\]']|'.)*\])*\])
    | (?P<sheet>(?:[^\W\d]|\\)[\w.\\]*(?::[\w.\\]+)?!)
    | (?P<name>(?:[^\W\d]|\\)[\w.\\?]*)
    | (?P<op><>|<=|>=|[-+*/^&=<>%:,;(){}@!\#])
    """,
    re.VERBOSE | re.DOTALL,
)


class UnreadableError(Exception):
    """A formula that cannot be taken apart; ``str`` is the reason, for people."""


class VolatileError(UnreadableError):
    """A formula whose value changes from one moment to the next."""


@dataclass(frozen=True, slots=True)
class Op:
    """An operator, or the white space beside it."""

    text: str


@dataclass(frozen=True, slots=True)
class Const:
    """A number, text, truth value or error as written."""

    kind: Literal["number", "text", "bool", "error"]
    slot: Slot


@dataclass(frozen=True, slots=True)
class Ref:
    """A cell (``last`` None), a range, or whole columns or rows (``band``, both edges in ``first``).

    ``sheet`` is the name before the ``!``, or an index once it is resolved, or None for the formula's own sheet. In a
    ``this row`` reference of a table the edges are column letters.
    """

    sheet: str | int | None
    first: Slot
    last: Slot | None = None
    band: bool = False
    this_row: bool = False


@dataclass(frozen=True, slots=True)
class Named:
    """A defined name or a table's name, perhaps with brackets behind it, perhaps with a sheet before it."""

    sheet: str | None
    name: str
    bracket: str | None = None


@dataclass(frozen=True, slots=True)
class Block:
    """An array constant: rows of constants, each with its sign (empty or a minus)."""

    rows: tuple[tuple[tuple[str, Const], ...], ...]


@dataclass(frozen=True, slots=True)
class Group:
    """A bracketed expression."""

    body: Expr


@dataclass(frozen=True, slots=True)
class Func:
    """A function call, its name as written."""

    name: str
    args: tuple[Expr, ...]


Node = Op | Const | Ref | Named | Block | Group | Func
Expr = tuple[Node, ...]


def split(text: str) -> tuple[str, list[str]]:
    """A formula's shape and its slots: the same shape in every row of a column filled down."""
    slots: list[str] = []
    if not text.isprintable() and _OURS.search(text):  # no file can hold these, so nobody means them
        return UNREADABLE, slots

    def mark(match: re.Match[str]) -> str:
        group = match.lastindex or 5
        if group == 5:
            return match[0]
        slots.append(match[0])
        return MARKS[group - 1]

    return _SLOT.sub(mark, text), slots


def shifted(shape: str, slots: Sequence[str], rows: int, columns: int) -> list[str] | None:
    """The slots of the same formula copied down and right; None if a reference leaves the sheet."""
    moved = []
    marks = (letter for letter in shape if letter in MARKS)
    for mark, slot in zip(marks, slots, strict=True):
        if mark in REFERENCE_MARKS:
            copy = shift(slot, rows, columns)
            if copy is None:
                return None
            moved.append(copy)
        else:
            moved.append(slot)
    return moved


def join(shape: str, slots: Sequence[str]) -> str:
    """The formula's text again."""
    each = iter(slots)
    return "".join(next(each) if letter in MARKS else letter for letter in shape)


def check_size(text: str) -> None:
    """Refuse what would hurt a parser: more than 8,192 characters or 64 levels of brackets."""
    if len(text) > MAX_CHARACTERS:
        raise UnreadableError(f"the formula is longer than {MAX_CHARACTERS:,} characters")
    if text.count("(") <= MAX_NESTING:
        return
    depth = 0
    # Brackets inside texts count too; a formula that has 64 of them there is not worth a second thought.
    for letter in text:
        if letter == "(":
            depth += 1
            if depth > MAX_NESTING:
                raise UnreadableError(f"the formula is nested deeper than {MAX_NESTING} levels")
        elif letter == ")":
            depth -= 1


def parse(shape: str, slots: Sequence[str] | None = None) -> Expr:
    """The tree of a shape made by :func:`split`. With ``slots`` their texts stand in the tree instead of indices.

    Raises :class:`UnreadableError` for anything but a well-formed formula.
    """
    return _Parser(shape, slots).whole()


class _Parser:
    def __init__(self, shape: str, slots: Sequence[str] | None) -> None:
        self._tokens = list(_tokens(shape))
        self._at = 0
        self._slots = slots
        self._next_slot = 0

    def whole(self) -> Expr:
        expression = self._expression()
        if self._at < len(self._tokens):
            raise UnreadableError("the formula could not be read")
        return expression

    def _peek(self) -> tuple[str, str]:
        return self._tokens[self._at] if self._at < len(self._tokens) else ("end", "")

    def _take(self) -> tuple[str, str]:
        token = self._peek()
        self._at += 1
        return token

    def _slot(self) -> Slot:
        index = self._next_slot
        self._next_slot += 1
        return index if self._slots is None else self._slots[index]

    def _expression(self) -> Expr:
        nodes: list[Node] = []
        after_operand = False  # whether an operand came last, blanks aside
        while True:
            kind, text = self._peek()
            if kind == "end" or (kind == "op" and text in ",;)}"):
                break
            if kind == "ws":
                self._at += 1
                nodes.append(Op(text))
                continue
            if kind == "op" and text not in "({":
                self._at += 1
                if text in ("!", "#"):
                    raise UnreadableError(
                        "it refers to the spilled range of a cell (A1#)" if text == "#" else "the formula could not be read"
                    )
                if text == ":":
                    raise UnreadableError("it joins two references with a colon")
                if after_operand:
                    if text == "@":
                        raise UnreadableError("the formula could not be read")
                    after_operand = text == "%"
                elif text not in "+-@":
                    raise UnreadableError("the formula could not be read")
                nodes.append(Op(text))
                continue
            if after_operand:
                raise UnreadableError("it takes the overlap of two ranges (a blank between them)")
            nodes.append(self._operand(None))
            after_operand = True
        if nodes and not after_operand and any(not is_space(node) for node in nodes):
            raise UnreadableError("the formula could not be read")
        return tuple(nodes)

    def _operand(self, sheet: str | None) -> Node:
        kind, text = self._take()
        match kind:
            case "mark":
                return self._marked(text, sheet)
            case "error":
                if sheet is not None:  # Sheet1!#REF!
                    return Const("error", "#REF!")
                return Const("error", text)
            case "quoted" | "sheet" if sheet is None:
                name = text[:-1]
                if kind == "quoted":
                    name = name[1:-1].replace("''", "'")
                return self._behind_sheet(name, text)
            case "bracket" if sheet is None:
                next_kind, next_text = self._peek()
                if next_kind == "sheet":
                    self._at += 1
                    return self._behind_sheet(text + next_text[:-1], text + next_text)
                if (next_kind, next_text) == ("op", "!"):
                    self._at += 1
                    return self._behind_sheet(text, text + "!")
                return Named(None, "", text)
            case "name":
                return self._named(text, sheet)
            case "op" if text == "(" and sheet is None:
                body = self._expression()
                if self._peek()[1] == ",":
                    raise UnreadableError("it joins ranges with a comma")
                self._close(")")
                return Group(body)
            case "op" if text == "{" and sheet is None:
                return self._block()
        raise UnreadableError("the formula could not be read")

    def _behind_sheet(self, sheet: str, written: str) -> Node:
        """What follows ``Sheet1!``; a function keeps what stands before it, for it may name an add-in."""
        if self._peek()[0] == "name" and self._following() == ("op", "("):
            name = self._take()[1]
            return self._call(written + name)
        return self._operand(sheet)

    def _following(self) -> tuple[str, str]:
        return self._tokens[self._at + 1] if self._at + 1 < len(self._tokens) else ("end", "")

    def _marked(self, mark: str, sheet: str | None) -> Node:
        slot = self._slot()
        if mark == _REFERENCE:
            if self._peek() == ("op", ":") and self._following() == ("mark", _REFERENCE):
                self._at += 2
                node: Node = Ref(sheet, slot, self._slot())
            else:
                node = Ref(sheet, slot)
        elif mark == _BAND:
            node = Ref(sheet, slot, band=True)
        elif sheet is not None:
            raise UnreadableError("the formula could not be read")
        else:
            node = Const("number" if mark == _NUMBER else "text", slot)
        return node

    def _named(self, name: str, sheet: str | None) -> Node:
        kind, text = self._peek()
        if (kind, text) == ("op", "("):
            return self._call(name)
        if kind == "bracket":
            self._at += 1
            return Named(sheet, name, text)
        if sheet is None and name.upper() in ("TRUE", "FALSE"):
            return Const("bool", name.upper())
        return Named(sheet, name)

    def _call(self, name: str) -> Func:
        self._close("(")
        args: list[Expr] = []
        if self._peek() == ("op", ")"):
            self._at += 1
            return Func(name, ())
        while True:
            args.append(self._expression())
            _, text = self._take()
            if text == ")":
                # Blanks between empty brackets are no argument.
                if len(args) == 1 and all(is_space(node) for node in args[0]):
                    args.clear()
                return Func(name, tuple(args))
            if text != ",":
                raise UnreadableError("the formula could not be read")

    def _block(self) -> Block:
        rows: list[tuple[tuple[str, Const], ...]] = []
        row: list[tuple[str, Const]] = []
        while True:
            nodes = [node for node in self._expression() if not is_space(node)]
            last = nodes[-1] if nodes else None
            signs = [node.text for node in nodes[:-1] if isinstance(node, Op) and node.text in "+-"]
            if not isinstance(last, Const) or len(signs) != len(nodes) - 1:
                raise UnreadableError("the formula could not be read")
            row.append(("-" if signs.count("-") % 2 else "", last))
            _, text = self._take()
            if text == ",":
                continue
            rows.append(tuple(row))
            if text == "}" and len({len(each) for each in rows}) == 1:
                return Block(tuple(rows))
            if text != ";":
                raise UnreadableError("the formula could not be read")
            row = []

    def _close(self, bracket: str) -> None:
        if self._take() != ("op", bracket):
            raise UnreadableError("the formula could not be read")


def walk(expression: Expr) -> Iterator[Node]:
    """Every node of a tree, those inside brackets and arguments too."""
    for node in expression:
        yield node
        if isinstance(node, Group):
            yield from walk(node.body)
        elif isinstance(node, Func):
            for each in node.args:
                yield from walk(each)


def is_space(node: Node) -> bool:
    """Whether the node is blanks or line breaks only."""
    return isinstance(node, Op) and not node.text.strip(" \t\r\n\u00a0")


def _tokens(shape: str) -> Iterator[tuple[str, str]]:
    at = 0
    while at < len(shape):
        match = _TOKEN.match(shape, at)
        if match is None:
            raise UnreadableError("the formula could not be read")
        yield match.lastgroup or "", match[0]
        at = match.end()

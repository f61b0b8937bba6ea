"""Names, tables and sheets of a workbook, turned into plain references inside a formula's tree."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping

from ingle_addin.book.formula import (
    Block,
    Const,
    Expr,
    Func,
    Group,
    Named,
    Node,
    Op,
    Ref,
    UnreadableError,
    check_size,
    is_space,
    parse,
    split,
    walk,
)
from ingle_addin.book.parts import DefinedName, Parts, Table
from ingle_addin.book.refs import Rect, column_letters
from ingle_addin.book.spelling import bare

_MAX_NAME_DEPTH = 16
# LET(a, 1+1, b, a+a, c, b+b, ...) doubles with every name, and so do names defined by names.
_MAX_NODES = 2_000
_ITEM = re.compile(r"\s*(?:\[((?:[^\[\]']|'.)*)\]|([^,:\[\]]+))\s*([,:]?)", re.DOTALL)


# The names that LET and LAMBDA give -> what they stand for; None for a parameter, which is known only at work.
Bound = Mapping[str, Expr | None]


class Resolver:
    """Looks up what a formula refers to. All look-ups ignore case, as spreadsheets do."""

    def __init__(self, parts: Parts) -> None:
        self._parts = parts
        self._sheets = {sheet.name.casefold(): index for index, sheet in enumerate(parts.sheets)}
        self._names: dict[tuple[str, int | None], DefinedName] = {(name.name.casefold(), name.scope): name for name in parts.names}
        self._meanings: dict[tuple[DefinedName, int], Node] = {}
        self._tables = {table.name.casefold(): table for table in parts.tables}

    def sheet(self, name: str) -> int:
        """The index of a worksheet; :class:`UnreadableError` if it is none of this workbook."""
        if "[" in name or "\\" in name or "/" in name:
            raise UnreadableError("it refers to another workbook")
        index = self._sheets.get(name.casefold())
        if index is None:
            if ":" in name:
                raise UnreadableError("it refers to several sheets at once")
            raise UnreadableError(f"it refers to the sheet {name}, which the workbook does not have")
        return index

    def resolve(self, expression: Expr, own_sheet: int, row: tuple[int, int], depth: int = 0, bound: Bound | None = None) -> Expr:
        """The same tree with sheets as indices and names, those of LET too, replaced by what they stand for.

        ``row`` is (row, column) of a cell of the formula: brackets without a table's name mean the table around it.
        """
        return tuple(self._node(node, own_sheet, row, depth, bound or {}) for node in expression)

    def meaning(self, name: str, own_sheet: int) -> str | None:
        """The text of a defined name as a sheet sees it, None if there is none."""
        key = name.casefold()
        found = self._names.get((key, own_sheet)) or self._names.get((key, None))
        return None if found is None else found.text

    def _node(self, node: Node, own_sheet: int, place: tuple[int, int], depth: int, bound: Bound) -> Node:
        match node:
            case Ref(sheet=str() as sheet):
                return Ref(self.sheet(sheet), node.first, node.last, node.band)
            case Group(body=body):
                return Group(self.resolve(body, own_sheet, place, depth, bound))
            case Func():
                return self._function(node, own_sheet, place, depth, bound)
            case Named():
                return self._named(node, own_sheet, place, depth, bound)
        return node

    def _function(self, call: Func, own_sheet: int, place: tuple[int, int], depth: int, bound: Bound) -> Node:
        def resolved(args: Iterable[Expr], names: Bound) -> tuple[Expr, ...]:
            return tuple(self.resolve(each, own_sheet, place, depth, names) for each in args)

        kind = bare(call.name)
        if kind == "LAMBDA" and call.args:
            return Func(call.name, resolved(call.args, {**bound, **{_own_name(each): None for each in call.args[:-1]}}))
        if kind == "LET" and len(call.args) % 2 == 1:
            inside = dict(bound)
            for name, meaning in zip(call.args[::2], call.args[1::2], strict=False):
                (value,) = resolved([meaning], inside)
                if any(isinstance(each, Func) and bare(each.name) == "LAMBDA" for each in value):
                    raise UnreadableError("it gives a name to a function of its own (LET with LAMBDA)")
                inside[_own_name(name)] = value
                if _count(value, _MAX_NODES) < 0:
                    raise UnreadableError("the names of its LET stand for too long an expression")
            return Group(*resolved([call.args[-1]], inside))
        if call.name.casefold().removeprefix("_xlpm.") in bound or self.meaning(call.name, own_sheet) is not None:
            raise UnreadableError(f"it uses the name {call.name.removeprefix('_xlpm.')} as a function (LAMBDA)")
        return Func(call.name, resolved(call.args, bound))

    def _named(self, node: Named, own_sheet: int, place: tuple[int, int], depth: int, bound: Bound) -> Node:
        if node.bracket is not None:
            return self._structured(node, own_sheet, place)
        local = node.name.casefold().removeprefix("_xlpm.")
        if node.sheet is None and local in bound:
            meant = bound[local]
            return node if meant is None else Group(meant)
        if node.name.lower().startswith("_xlpm."):
            return node
        scope = own_sheet if node.sheet is None else self.sheet(node.sheet)
        key = node.name.casefold()
        found = self._names.get((key, scope)) or self._names.get((key, None))
        if found is None:
            table = self._tables.get(key)
            if table is not None and node.sheet is None:
                return _area(table, _body(table), 0, len(table.columns) - 1)
            raise UnreadableError(f"it uses the name {node.name}, which the workbook does not define")
        cached = (found, own_sheet)
        known = self._meanings.get(cached)
        if known is not None:
            return known
        if depth >= _MAX_NAME_DEPTH:
            raise UnreadableError(f"it uses the name {node.name}, which is defined by itself")
        try:
            check_size(found.text)
            tree = parse(*split(found.text))
        except UnreadableError:
            raise UnreadableError(f"it uses the name {node.name}, whose meaning could not be read") from None
        if not _is_fixed(tree):
            raise UnreadableError(f"it uses the name {node.name}, whose meaning moves with the cell")
        is_local = any(isinstance(each, Named) and each.bracket is not None and not each.name for each in walk(tree))
        tree = self.resolve(tree, own_sheet if found.scope is None else found.scope, place, depth + 1)
        if _count(tree, _MAX_NODES) < 0:
            raise UnreadableError(f"it uses the name {node.name}, whose meaning is too long")
        meaningful = [each for each in tree if not (isinstance(each, Op) and not each.text.strip())]
        stands_for = meaningful[0] if len(meaningful) == 1 else Group(tree)
        if not is_local:  # "[column]" means the table around the cell
            self._meanings[cached] = stands_for
        return stands_for

    def _structured(self, node: Named, own_sheet: int, place: tuple[int, int]) -> Node:
        if node.sheet is not None and ("[" in node.sheet or not node.name):
            raise UnreadableError("it refers to another workbook")
        if node.name:
            table = self._tables.get(node.name.casefold())
            if table is None:
                raise UnreadableError(f"it uses the table {node.name}, which the workbook does not have")
        else:
            inside = [each for each in self._parts.tables if each.sheet == own_sheet and each.rect.holds(*place)]
            if not inside:
                raise UnreadableError("it uses a table's columns outside of the table")
            table = inside[0]
        return _bracket(table, (node.bracket or "[]")[1:-1])


def _own_name(expression: Expr) -> str:
    """The name that an argument of LET or LAMBDA introduces."""
    nodes = [node for node in expression if not is_space(node)]
    node = nodes[0] if len(nodes) == 1 else None
    if not isinstance(node, Named) or node.sheet is not None or node.bracket is not None:
        raise UnreadableError("the formula could not be read")
    return node.name.casefold().removeprefix("_xlpm.")


def _count(expression: Expr, left: int) -> int:
    """How many nodes are left of so many when an expression is written out; below 0 as soon as they do not suffice."""
    for node in expression:
        left -= 1
        if isinstance(node, Group):
            left = _count(node.body, left)
        elif isinstance(node, Func):
            for each in node.args:
                left = _count(each, left)
                if left < 0:
                    break
        if left < 0:
            break
    return left


def _bracket(table: Table, inner: str) -> Ref | Const:
    """``[#This Row],[a]:[b]`` and its kin, for one table."""
    inner = inner.strip()
    parts: set[str] = set()
    columns: list[str] = []
    if inner.startswith("@"):
        parts.add("#this row")
        inner = inner[1:].strip()
    if inner and not inner.startswith("[") and not inner.startswith("#"):
        columns.append(_unquote(inner))
    else:
        for text in _items(inner):
            if text.startswith("#"):
                parts.add(text.lower())
            else:
                columns.append(_unquote(text))
    indices = [_column(table, name) for name in columns]
    first, last = (min(indices), max(indices)) if indices else (0, len(table.columns) - 1)
    if "#this row" in parts:
        if len(parts) > 1:
            raise UnreadableError(f"it uses a part of the table {table.name} that could not be read")
        left = column_letters(table.rect.left + first)
        right = column_letters(table.rect.left + last)
        return Ref(table.sheet, left, None if left == right else right, this_row=True)
    rect, body = table.rect, _body(table)
    bounds: list[tuple[int, int]] = []
    for part in parts or {"#data"}:
        if part == "#all":
            bounds.append((rect.top, rect.bottom))
        elif part == "#data":
            bounds.append((body.top, body.bottom))
        elif part == "#headers" and table.headings:
            bounds.append((rect.top, rect.top))
        elif part == "#totals" and table.totals:
            bounds.append((rect.bottom, rect.bottom))
        elif part in ("#headers", "#totals"):
            return Const("error", "#REF!")
        else:
            raise UnreadableError(f"it uses a part of the table {table.name} that could not be read")
    top, bottom = min(each[0] for each in bounds), max(each[1] for each in bounds)
    return _area(table, Rect(top, rect.left, bottom, rect.right), first, last)


def _items(inner: str) -> Iterable[str]:
    at = 0
    while at < len(inner):
        match = _ITEM.match(inner, at)
        if match is None:
            raise UnreadableError("it uses a part of a table that could not be read")
        yield match[1] if match[1] is not None else match[2].strip()
        at = match.end()


def _unquote(name: str) -> str:
    return re.sub("'(.)", r"\1", name, flags=re.DOTALL)


def _flat(name: str) -> str:
    return re.sub(r"\s+", " ", name).casefold()


def _column(table: Table, name: str) -> int:
    wanted = _flat(name)
    for index, column in enumerate(table.columns):
        if _flat(column) == wanted:
            return index
    raise UnreadableError(f"it uses the column {name} of the table {table.name}, which has none of that name")


def _body(table: Table) -> Rect:
    rect = table.rect
    return Rect(rect.top + table.headings, rect.left, rect.bottom - table.totals, rect.right)


def _area(table: Table, rect: Rect, first: int, last: int) -> Ref:
    left, right = column_letters(table.rect.left + first), column_letters(table.rect.left + last)
    one, two = f"${left}${rect.top}", f"${right}${rect.bottom}"
    return Ref(table.sheet, one, None if one == two else two)


def _is_fixed(expression: Expr) -> bool:
    """Whether no reference of a name's meaning moves with the cell that uses it."""
    for node in expression:
        match node:
            case Ref(sheet=sheet, first=first, last=last, band=band):
                edges = str(first).split(":") if band else [str(first), str(last or first)]
                marks = 1 if band else 2
                if sheet is None or any(edge.count("$") != marks for edge in edges):
                    return False
            case Group(body=body):
                if not _is_fixed(body):
                    return False
            case Func(args=args):
                if not all(_is_fixed(each) for each in args):
                    return False
            case Block() | Const() | Op() | Named():
                continue
    return True

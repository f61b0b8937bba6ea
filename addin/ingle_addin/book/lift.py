"""Takes a formula apart once for all rows that share its shape: what the engine may have, what is an Ingle call."""

from __future__ import annotations

import datetime
from dataclasses import dataclass

from ingle_addin.book.criteria import criteria_of
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
    VolatileError,
    check_size,
    is_space,
    parse,
    split,
    walk,
)
from ingle_addin.book.functions import (
    ARRAY_PARAMETERS,
    ARRAY_RETURNING,
    BRANCHING,
    DATE_FUNCTIONS,
    ENGINE_FUNCTIONS,
    KEPT_FUNCTIONS,
    REFERENCE_RETURNING,
    VECTORISED,
    VECTORISED_BY_FIRST,
    VOLATILE_FUNCTIONS,
    takes_range,
)
from ingle_addin.book.plan import (
    ArgPlan,
    BlockArg,
    CallArg,
    CallPlan,
    ChoiceArg,
    ConstArg,
    HelperArg,
    IndexArg,
    Omitted,
    Pick,
    PickBlock,
    Piece,
    Place,
    Plan,
    RefArg,
    Result,
    ThisRow,
)
from ingle_addin.book.refs import quote_sheet
from ingle_addin.book.resolve import Resolver
from ingle_addin.book.spelling import Spelling, bare

# Where an expression stands decides what a range in it means:
_ONE = "one"  # one value is wanted: the cell in the formula's row or column, or the array's element at hand
_RANGE = "range"  # a range may stand alone; inside operators it is as in _ONE (in an array formula as in _ARRAY)
_ARRAY = "array"  # the engine works on all elements

# Looked-up cells that may be empty: asked about with ISBLANK, since the engine hands back 0 for them.
_LOOK_UPS = frozenset(["VLOOKUP", "HLOOKUP", "LOOKUP", "XLOOKUP", "INDEX", "IF", "IFS", "SWITCH", "IFERROR", "IFNA", "CHOOSE"])
# The engine's ISBLANK is wrong about these.
_NEVER_PLAIN = frozenset(["OFFSET", "INDIRECT", "CHOOSE"])


@dataclass(frozen=True)
class Lifter:
    """Makes plans for the formulas of one workbook.

    ``now`` is the moment that TODAY and NOW mean throughout; None leaves them, and what draws random numbers, as volatile.
    """

    resolver: Resolver
    spelling: Spelling
    sheet_names: tuple[str, ...]
    date1904: bool
    hidden_rows: bool
    now: datetime.datetime | None

    def plan(self, shape: str, sheet: int, place: tuple[int, int], *, in_array: bool) -> Plan:
        """The plan of a shape on a sheet; ``place`` is (row, column) of one of its cells.

        Never raises for a formula's sake: what cannot be done is a plan to keep the stored value, with the reason.
        """
        work = _Work(self, sheet, in_array)
        result = work.result
        result.is_ingle = _mentions(shape)
        try:
            tree = parse(shape)
            result.is_local = any(isinstance(node, Named) and node.bracket is not None and not node.name for node in walk(tree))
            result.is_ingle = _has_call(tree, self.spelling) or self._named_call(tree, sheet, set())
            work.compile(self.resolver.resolve(tree, sheet, place))
        except UnreadableError as reason:
            result.keep = " ".join(str(reason).split())  # a name in it may hold line breaks
            result.volatile = isinstance(reason, VolatileError)
        except RecursionError:
            result.keep = "the formula is nested too deep"
        return result

    def _named_call(self, tree: Expr, sheet: int, seen: set[str]) -> bool:
        """Whether a defined name that the formula uses holds a call."""
        for name in _names_in(tree) - seen:
            seen.add(name)
            meaning = self.resolver.meaning(name, sheet)
            if meaning is None:
                continue
            if _mentions(meaning):
                return True
            try:
                check_size(meaning)
                inside = parse(split(meaning)[0])
            except UnreadableError:
                continue
            if self._named_call(inside, sheet, seen):
                return True
        return False


def _mentions(text: str) -> bool:
    # Only for what cannot be parsed: better one line too many in the report than a missing one.
    text = text.upper()
    return "INGLE." in text or "INGLE_" in text


def _names_in(expression: Expr) -> set[str]:
    return {
        node.name for node in walk(expression) if isinstance(node, Func) or (isinstance(node, Named) and node.bracket is None)
    }  # fmt: skip


def _has_call(expression: Expr, spelling: Spelling) -> bool:
    return any(isinstance(node, Func) and spelling.is_of_family(node.name) for node in walk(expression))


class _Work:
    """The compilation of one shape."""

    def __init__(self, lifter: Lifter, sheet: int, in_array: bool) -> None:
        self._lifter = lifter
        self._sheet = sheet
        self._in_array = in_array
        self._arrays_inside = in_array  # whether operators inside a range's place work on arrays
        self._helper = 0  # how many arguments of lifted calls are around
        self._names: set[str] = set()
        self._picks = False
        self.result = Plan()

    def compile(self, tree: Expr) -> None:
        result = self.result
        lone = _lone(tree)
        while isinstance(lone, Func) and bare(lone.name) == "SINGLE" and len(lone.args) == 1:
            lone = _lone(lone.args[0])
        if isinstance(lone, Func) and self._canonical(lone.name):
            self._lift(lone)
            result.whole = True
            return
        functions = {bare(each) for each in _function_names(tree)}
        result.array = self._in_array and bool(functions & ARRAY_RETURNING)
        pieces: list[Piece] = []
        self._emit(tree, _ARRAY if result.array else _ONE, pieces)
        if not self._in_array and functions & (ARRAY_RETURNING | REFERENCE_RETURNING):
            # Whatever comes back, one cell takes one value; without this the engine would fill the cells beside.
            pieces = ["@(", *pieces, ")"]
        result.pieces = _merged(pieces)

    def _canonical(self, name: str) -> str | None:
        return self._lifter.spelling.canonical(name)

    # -- text for the engine ------------------------------------------------------------------------------------------

    def _emit(self, expression: Expr, mode: str, out: list[Piece]) -> bool:
        """Write an expression; return whether the engine will see an array in it."""
        nodes = [node for node in expression if not is_space(node)]
        if mode == _RANGE and len(nodes) > 1:
            mode = _ARRAY if self._arrays_inside else _ONE
        is_array = False
        crossing = False
        for node in nodes:
            if isinstance(node, Op):
                crossing = node.text == "@"
                if not crossing:
                    out.append(node.text)
                continue
            is_array |= self._emit_node(node, _ONE if crossing else mode, out, crossing)
            crossing = False
        return is_array

    def _emit_node(self, node: Node, mode: str, out: list[Piece], crossing: bool) -> bool:
        match node:
            case Const(slot=slot):
                out.append(slot)
            case Ref():
                return self._emit_ref(node, mode, out, crossing)
            case Group(body=body):
                out.append("(")
                is_array = self._emit(body, mode, out)
                out.append(")")
                return is_array
            case Block():
                return self._emit_block(node, mode, out)
            case Named(name=name):  # only the names of LET and LAMBDA are left
                if self._helper:
                    raise UnreadableError("it uses a LET or LAMBDA name inside an Ingle call")
                out.append(name)
            case Func():
                return self._emit_call(node, mode, out)
        return False

    def _prefix(self, ref: Ref) -> str:
        if ref.sheet is None:
            return quote_sheet(self._lifter.sheet_names[self._sheet]) + "!" if self._helper else ""
        assert isinstance(ref.sheet, int)
        return quote_sheet(self._lifter.sheet_names[ref.sheet]) + "!"

    def _emit_ref(self, ref: Ref, mode: str, out: list[Piece], crossing: bool) -> bool:
        self.result.refs.append(ref)
        self.result.asked.append(ref)
        prefix = self._prefix(ref)
        if ref.this_row:
            if ref.last is not None and mode == _ONE:
                raise UnreadableError("it uses several columns of a table where one value belongs")
            out.append(ThisRow(prefix, str(ref.first), None if ref.last is None else str(ref.last)))
            return ref.last is not None
        many = ref.last is not None or ref.band
        if many and mode == _ONE:
            out.append(Pick(ref, prefix, crossing))
            return False
        out.extend((prefix, ref.first))
        if ref.last is not None:
            out.extend((":", ref.last))
        return many

    def _emit_block(self, block: Block, mode: str, out: list[Piece]) -> bool:
        if mode == _ONE:
            out.append(PickBlock(block))
            return False
        out.append("{")
        for index, row in enumerate(block.rows):
            out.append(";" if index else "")
            for place, (sign, const) in enumerate(row):
                out.extend(("," if place else "", sign, const.slot))
        out.append("}")
        return True

    def _emit_call(self, call: Func, mode: str, out: list[Piece]) -> bool:
        name = bare(call.name)
        if self._canonical(call.name):
            index = self._lift(call)
            out.append(Result(index, mode != _ONE))
            return mode != _ONE
        if name == "SINGLE" and len(call.args) == 1:
            out.append("(")
            for node in call.args[0]:
                if not is_space(node):
                    self._emit_node(node, _ONE, out, True)
            out.append(")")
            return False
        self._check(call, name)
        self.result.criteria += criteria_of(name, call.args)
        self.result.asks_anywhere |= name in ("INDIRECT", "OFFSET")
        if name in ("TODAY", "NOW") and not call.args:
            out.append(self._moment(name))
            return False
        if name in ("ROW", "COLUMN") and not call.args:
            out.append(Place.ROW if name == "ROW" else Place.COLUMN)
            return False
        return self._emit_ordinary(call, name, mode, out)

    def _emit_ordinary(self, call: Func, name: str, mode: str, out: list[Piece]) -> bool:
        out.append(name + "(")
        branch = BRANCHING.get(name)
        one_arrays: list[bool] = []
        before = self._arrays_inside
        for place, arg in enumerate(call.args):
            if place:
                out.append(",")
            if takes_range(name, place):
                if name in ARRAY_PARAMETERS:
                    self._arrays_inside = True
                self._emit(arg, _ARRAY if name in ARRAY_PARAMETERS else _RANGE, out)
                self._arrays_inside = before
            elif branch is not None and place >= branch and mode == _RANGE:
                self._emit(arg, _RANGE, out)
            else:
                one_arrays.append(self._emit(arg, _ARRAY if mode == _ARRAY else _ONE, out))
        out.append(")")
        if any(one_arrays):
            ok = name in VECTORISED or (name in VECTORISED_BY_FIRST and one_arrays[0])
            if not ok:
                raise UnreadableError(f"it uses {name} on whole arrays, which the calculation engine cannot")
            return True
        return name in ARRAY_RETURNING

    def _check(self, call: Func, name: str) -> None:
        if self._lifter.spelling.is_misspelt(call.name):
            raise UnreadableError(f"{name} is not a function of Ingle")
        if "[" in call.name or "!" in call.name:
            raise UnreadableError(f"it uses {name} of another add-in or workbook")
        if self._lifter.now is None and name in VOLATILE_FUNCTIONS:
            raise VolatileError(f"it is volatile ({name})")
        if name in KEPT_FUNCTIONS:
            raise UnreadableError(f"{KEPT_FUNCTIONS[name]} ({name})")
        if name not in ENGINE_FUNCTIONS:
            raise UnreadableError(f"it uses {name}, which the calculation engine does not have")
        if self._lifter.date1904 and name in DATE_FUNCTIONS:
            raise UnreadableError(f"it uses {name} in a workbook that counts dates from 1904")
        if self._lifter.hidden_rows and name == "SUBTOTAL":
            raise UnreadableError("it uses SUBTOTAL in a workbook with hidden rows")

    def _moment(self, name: str) -> str:
        assert self._lifter.now is not None
        elapsed = self._lifter.now - datetime.datetime(1899, 12, 30)
        days = elapsed.days if name == "TODAY" else elapsed / datetime.timedelta(days=1)
        return repr(days)

    # -- Ingle calls --------------------------------------------------------------------------------------------------

    def _lift(self, call: Func) -> int:
        canonical = self._canonical(call.name)
        assert canonical is not None
        self._helper += 1
        args = tuple(self._arg(each) for each in call.args)
        self._helper -= 1
        self.result.calls.append(CallPlan(canonical, args))
        return len(self.result.calls) - 1

    def _arg(self, expression: Expr) -> ArgPlan:
        nodes = [node for node in expression if not is_space(node)]
        if not nodes:
            return Omitted()
        while len(nodes) == 1 and isinstance(nodes[0], Group):
            nodes = [node for node in nodes[0].body if not is_space(node)]
        last = nodes[-1]
        if isinstance(last, Const) and all(isinstance(each, Op) and each.text in "+-" for each in nodes[:-1]):
            minus = sum(isinstance(each, Op) and each.text == "-" for each in nodes[:-1]) % 2
            if len(nodes) == 1 or last.kind == "number":
                return ConstArg("-" if minus else "", last)
        if len(nodes) == 1:
            match last:
                case Ref():
                    self.result.refs.append(last)
                    return RefArg(last)
                case Block():
                    return BlockArg(last)
                case Func():
                    found = self._function_arg(last)
                    if found is not None:
                        return found
        return self._expression_arg(tuple(nodes))

    def _function_arg(self, call: Func) -> ArgPlan | None:
        """Arguments that hand a range on: its empty cells must stay empty, so the range is read, not computed."""
        if self._canonical(call.name):
            return CallArg(self._lift(call))
        name = bare(call.name)
        if name in ("IF", "CHOOSE") and len(call.args) >= 2:
            self._check(call, name)
            branches = tuple(self._arg(each) for each in call.args[1:])
            return ChoiceArg(self._expression_arg(call.args[0]), branches, name == "IF")
        if name == "INDEX" and 2 <= len(call.args) <= 3:
            ref = _lone(call.args[0])
            if isinstance(ref, Ref) and not ref.this_row:
                self.result.refs.append(ref)
                row, column = (*call.args[1:], ())[:2]
                return IndexArg(
                    ref,
                    self._expression_arg(row) if _lone(row) or row else None,
                    self._expression_arg(column) if _lone(column) or column else None,
                )
        return None

    def _expression_arg(self, expression: Expr) -> HelperArg:
        names = {bare(each) for each in _function_names(expression)}
        outer = _lone(expression)
        outer_name = bare(outer.name) if isinstance(outer, Func) else ""
        if outer_name in _NEVER_PLAIN or names & ARRAY_RETURNING:
            made_by = outer_name or min(names & ARRAY_RETURNING)
            raise UnreadableError(f"an argument is made by {made_by}; give the range itself")
        before, self._arrays_inside = self._arrays_inside, True
        pieces: list[Piece] = []
        self._emit(expression, _ONE, pieces)
        self._arrays_inside = before
        return HelperArg(_merged(pieces), outer_name in _LOOK_UPS)


def _lone(expression: Expr) -> Node | None:
    """The only node of an expression, brackets around it aside; None if there are more."""
    nodes = [node for node in expression if not is_space(node)]
    while nodes and isinstance(nodes[0], Op) and nodes[0].text in "@+":
        if nodes[0].text == "+" and not (len(nodes) == 2 and isinstance(nodes[1], Func)):
            return None
        nodes = nodes[1:]
    if len(nodes) != 1:
        return None
    return _lone(nodes[0].body) if isinstance(nodes[0], Group) else nodes[0]


def _function_names(expression: Expr) -> set[str]:
    return {node.name for node in walk(expression) if isinstance(node, Func)}


def _merged(pieces: list[Piece]) -> tuple[Piece, ...]:
    """The same pieces, neighbouring texts joined: fewer to put together for every row."""
    out: list[Piece] = []
    for piece in pieces:
        if isinstance(piece, str) and out and isinstance(out[-1], str):
            out[-1] += piece
        elif piece != "":
            out.append(piece)
    return tuple(out)

"""Criteria of COUNTIF and its kin that the calculation engine does not read as spreadsheets do.

Of ``"<>x"`` it counts texts alone, where spreadsheets count every cell that does not hold that text; and it knows no ``~``
before a wildcard. A test holds both against the installed engine, so that this module can go when they are mended.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from typing import NamedTuple

from ingle_addin.book.formula import Const, Expr, Slot, is_space, walk

REASON = "it uses a criterion (<>text, or one with ~) that the calculation engine does not read as spreadsheets do"

# Function -> the places of its criteria among the arguments, from 0.
_PLACES: Mapping[str, range] = {
    **dict.fromkeys(("COUNTIF", "SUMIF", "AVERAGEIF"), range(1, 2)),
    "COUNTIFS": range(1, 256, 2),
    **dict.fromkeys(("SUMIFS", "AVERAGEIFS", "MAXIFS", "MINIFS"), range(2, 256, 2)),
    **dict.fromkeys(
        ("DAVERAGE", "DCOUNT", "DCOUNTA", "DGET", "DMAX", "DMIN", "DPRODUCT", "DSTDEV", "DSTDEVP", "DSUM", "DVAR", "DVARP"),
        range(2, 3),
    ),
}
# "<>" before a number, a truth value, an error, nothing, or a wildcard comes out right.
_RIGHT = re.compile(r"<>(?:|[-+]?(?:\d+\.?\d*|\.\d+)(?:e[-+]?\d+)?|true|false|#[a-z0-9/!?]+|.*[*?].*)\Z", re.IGNORECASE | re.DOTALL)
_TEXT = re.compile(r'"(?:[^"]|"")*"')
_JOINED = re.compile(r'"<>"\s*&')


class Criterion(NamedTuple):
    """A criterion of a formula: its texts, and whether a text is all of it."""

    texts: tuple[Slot, ...]
    is_literal: bool


def criteria_of(function: str, args: Sequence[Expr]) -> list[Criterion]:
    """The criteria among the arguments of a function."""
    places = _PLACES.get(function)
    found = []
    for place, arg in enumerate(args) if places is not None else ():
        if places is not None and place in places:
            nodes = tuple(node for node in arg if not is_space(node))
            literal = len(nodes) == 1 and isinstance(nodes[0], Const)
            texts = tuple(node.slot for node in walk(nodes) if isinstance(node, Const) and node.kind == "text")
            found.append(Criterion(texts, literal))
    return found


def is_odd(text: str) -> bool:
    """Whether the engine reads a criterion otherwise than spreadsheets do."""
    return "~" in text or (text.startswith("<>") and _RIGHT.match(text) is None)


def may_make_odd(formula: str) -> bool:
    """Whether such a criterion may be the outcome of a formula."""
    if "~" not in formula and "<>" not in formula:
        return False
    return _JOINED.search(formula) is not None or any(is_odd(text[1:-1]) for text in _TEXT.findall(formula))


def odd_criterion(criteria: Sequence[Criterion], slots: Sequence[str], odd_texts: bool) -> str | None:
    """The reason for keeping a formula's stored value, None if its criteria can be trusted.

    ``odd_texts`` is whether some cell of the workbook holds, or may come to hold, a criterion that is :func:`is_odd`.
    """
    for texts, is_literal in criteria:
        written = [(slots[slot] if isinstance(slot, int) else slot)[1:-1].replace('""', '"') for slot in texts]
        if any(map(is_odd, written)) if is_literal else odd_texts or any(text.startswith("<>") or "~" in text for text in written):
            return REASON
    return None

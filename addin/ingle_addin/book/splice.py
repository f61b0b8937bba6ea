"""Writes computed values into a worksheet's bytes; every other byte stays."""

from __future__ import annotations

import re
from collections.abc import Mapping
from operator import itemgetter
from typing import NamedTuple
from xml.parsers import expat

from ingle_addin.book.markup import escape
from ingle_addin.cells import Cell, CellError

_NAME = rb"[A-Za-z_][\w.-]*"
_ATTRIBUTE = rb"\s+[\w:.-]+\s*=\s*(?:\"[^\"]*\"|'[^']*')"
_START = re.compile(rb"<((?:" + _NAME + rb":)?)c((?:" + _ATTRIBUTE + rb")*)\s*(/?)>")
_DROPPED = re.compile(rb"\s+(?:t|vm)\s*=\s*(?:\"[^\"]*\"|'[^']*')")
_PREFIX = rb"(?:" + _NAME + rb":)?"
# The common cell: an optional formula and an optional value, nothing else.
_PLAIN_FORMULA = rb"<" + _PREFIX + rb"f(?:" + _ATTRIBUTE + rb")*\s*(?:/>|>[^<]*</" + _PREFIX + rb"f\s*>)"
_PLAIN_VALUE = rb"<" + _PREFIX + rb"v(?:" + _ATTRIBUTE + rb")*\s*(?:/>|>[^<]*</" + _PREFIX + rb"v\s*>)"
_PLAIN_CELL = re.compile(rb"\s*(" + _PLAIN_FORMULA + rb")?\s*(?:" + _PLAIN_VALUE + rb")?\s*\Z")


class Span(NamedTuple):
    """Where a cell stands in the bytes: of ``<c`` and of its ``</c`` (the same for an empty element)."""

    start: int
    end: int


class NotWritableError(Exception):
    """The bytes at a span are not the cell they were when the sheet was scanned."""


# A cell as nearly every writer writes it. Group 1 is kept up to the type, group 2 up to the value.
_USUAL = re.compile(
    rb'(<c r="[A-Z]+[0-9]+"(?: s="[0-9]+")?)(?: t="[a-z]+")?(>(?:<f(?: [a-zA-Z]+="[^"<]*")*>[^<]*</f>)?)'
    rb"(?:<v>[^<]*</v>)?</c>"
)


def splice(content: bytes, changes: Mapping[int, tuple[Span, Cell]]) -> bytes:
    """The sheet with new values. ``changes`` maps any key to (where the cell stands, its value), in any order."""
    pieces: list[bytes] = []
    at = 0
    usual = _USUAL.match
    for (start, end), value in sorted(changes.values(), key=itemgetter(0)):
        match = usual(content, start)
        if match is not None and match.end() > end >= at:
            kind, text = written(value)
            kind_text = b' t="%b"' % kind if kind else b""
            pieces += (content[at:start], match[1], kind_text, match[2], b"<v>", text, b"</v></c>")
            at = match.end()
            continue
        match = _START.match(content, start)
        if match is None or start < at:
            raise NotWritableError
        prefix, attributes, empty = match.groups()
        if empty:
            inner, after = b"", match.end()
        else:
            inner = content[match.end() : end]
            after = content.index(b">", end) + 1
        pieces += (content[at:start], _cell(prefix, attributes, inner, value))
        at = after
    pieces.append(content[at:])
    return b"".join(pieces)


def _cell(prefix: bytes, attributes: bytes, inner: bytes, value: Cell) -> bytes:
    kind, text = written(value)
    kept = _DROPPED.sub(b"", attributes) if b"t" in attributes or b"vm" in attributes else attributes
    before, after = _kept_children(prefix, inner)
    return (
        b"<" + prefix + b"c" + kept + (b' t="' + kind + b'"' if kind else b"") + b">" + before
        + b"<" + prefix + b"v>" + text + b"</" + prefix + b"v>" + after + b"</" + prefix + b"c>"
    )  # fmt: skip


def written(value: Cell) -> tuple[bytes, bytes]:
    """The ``t`` attribute (empty for a number) and the content of ``<v>``."""
    if type(value) is float and -1e15 < value < 1e15:
        return b"", (b"%d" % value if value.is_integer() else repr(value).encode())
    if isinstance(value, bool):
        return b"b", b"1" if value else b"0"
    if isinstance(value, CellError):
        return b"e", value.value.encode()
    if isinstance(value, (int, float)):
        number = float(value)
        return b"", (repr(int(number)) if number.is_integer() and abs(number) < 1e15 else repr(number)).encode()
    return b"str", escape("" if value is None else str(value)).encode()


def _kept_children(prefix: bytes, inner: bytes) -> tuple[bytes, bytes]:
    """What of a cell's content stands before and after its value: the formula, and anything that is not the value."""
    match = _PLAIN_CELL.match(inner)
    if match is not None:
        return match[1] or b"", b""
    return _sorted_children(prefix, inner)


def _sorted_children(prefix: bytes, inner: bytes) -> tuple[bytes, bytes]:
    """The slow way, for cells with comments, CDATA or extensions in them."""
    made = expat.ParserCreate()
    # Any prefix is allowed without its declaration, since names are not resolved here.
    head = b"<" + prefix + b"c>"
    spans: list[tuple[str, int, int]] = []
    depth = 0
    opened = 0
    name_opened = ""

    def start(name: str, _attributes: object) -> None:
        nonlocal depth, opened, name_opened
        depth += 1
        if depth == 2:
            opened, name_opened = made.CurrentByteIndex - len(head), name.rpartition(":")[2]

    def end(_name: str) -> None:
        nonlocal depth
        if depth == 2:
            # At an empty element the index is past it already; at any other it is at the end tag.
            position = made.CurrentByteIndex - len(head)
            is_end_tag = inner[position : position + 2] == b"</" and position > opened and not _is_empty(inner, opened)
            spans.append((name_opened, opened, inner.index(b">", position) + 1 if is_end_tag else _tag_end(inner, opened)))
        depth -= 1

    made.StartElementHandler, made.EndElementHandler = start, end
    try:
        made.Parse(head + inner + b"</" + prefix + b"c>", True)
    except expat.ExpatError:
        raise NotWritableError from None
    before: list[bytes] = []
    after: list[bytes] = []
    for name, first, last in spans:
        if name in ("v", "is"):
            continue
        (before if name == "f" else after).append(inner[first:last])
    return b"".join(before), b"".join(after)


_TAG = re.compile(rb"<[\w:.-]+(?:" + _ATTRIBUTE + rb")*\s*(/?)>")


def _is_empty(inner: bytes, at: int) -> bool:
    match = _TAG.match(inner, at)
    return match is not None and match[1] == b"/"


def _tag_end(inner: bytes, at: int) -> int:
    match = _TAG.match(inner, at)
    if match is None:
        raise NotWritableError
    return match.end()

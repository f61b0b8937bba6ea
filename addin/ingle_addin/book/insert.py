"""Adds cells that a worksheet lacks: some writers store only the first cell of an array formula."""

from __future__ import annotations

import re
from bisect import bisect_right
from collections.abc import Mapping
from dataclasses import dataclass, field
from xml.parsers import expat

from ingle_addin.book.refs import cell_name, column_number, place_of
from ingle_addin.book.splice import written
from ingle_addin.cells import Cell

_TAG_END = re.compile(rb"<(?:[^\"'>]|\"[^\"]*\"|'[^']*')*>")


@dataclass
class _Row:
    """A row that wants cells: where it begins and ends, and where each of its cells begins."""

    start: int
    end: int = 0
    columns: list[int] = field(default_factory=list)
    starts: list[int] = field(default_factory=list)


class _Rows:
    """The rows of a sheet, and the cells of those that want more."""

    def __init__(self, content: bytes, wanted: set[int]) -> None:
        self.numbers: list[int] = []
        self.starts: list[int] = []
        self.rows: dict[int, _Row] = {}
        self.end = 0
        self.prefix = ""
        self._wanted = wanted
        self._depth = 0  # 1 inside sheetData, 2 inside a row, 3 inside a cell
        self._number = self._column = 0
        self._parser = expat.ParserCreate()
        self._parser.StartElementHandler = self._start
        self._parser.EndElementHandler = self._end
        self._parser.Parse(content, True)

    def _start(self, name: str, attributes: dict[str, str]) -> None:
        prefix, _, bare = name.rpartition(":")
        if self._depth:
            self._depth += 1
        elif bare == "sheetData":
            self._depth = 1
            self.prefix = prefix + ":" if prefix else ""
        at = self._parser.CurrentByteIndex
        if self._depth == 2 and bare == "row":
            self._number = int(attributes.get("r", self._number + 1))
            self._column = 0
            self.numbers.append(self._number)
            self.starts.append(at)
            if self._number in self._wanted:
                self.rows[self._number] = _Row(at)
        elif self._depth == 3 and bare == "c" and self._number in self._wanted:
            name = attributes.get("r", "")
            self._column = column_number(name.rstrip("0123456789")) or self._column + 1
            row = self.rows[self._number]
            row.columns.append(self._column)
            row.starts.append(at)

    def _end(self, _name: str) -> None:
        if self._depth == 2 and self._number in self._wanted:
            self.rows[self._number].end = self._parser.CurrentByteIndex
        elif self._depth == 1:
            self.end = self._parser.CurrentByteIndex
        self._depth -= bool(self._depth)


def insert(content: bytes, cells: Mapping[int, Cell]) -> bytes:
    """The sheet with new cells in their places. None of them may be there already."""
    by_row: dict[int, list[int]] = {}
    for key in sorted(cells):
        by_row.setdefault(place_of(key)[0], []).append(key)
    found = _Rows(content, set(by_row))
    prefix = found.prefix.encode()
    # (where, how many bytes are replaced, by what)
    edits: list[tuple[int, int, bytes]] = []
    for number, keys in by_row.items():
        row = found.rows.get(number)
        if row is None:
            after = bisect_right(found.numbers, number)
            at = found.starts[after] if after < len(found.starts) else found.end
            inside = b"".join(_cell(prefix, key, cells[key]) for key in keys)
            edits.append((at, 0, b'<%brow r="%d">%b</%brow>' % (prefix, number, inside, prefix)))
            continue
        tag = _TAG_END.match(content, row.start)
        assert tag is not None
        if tag[0].endswith(b"/>"):
            inside = b"".join(_cell(prefix, key, cells[key]) for key in keys)
            edits.append((tag.end() - 2, 2, b">%b</%brow>" % (inside, prefix)))
            continue
        for key in keys:
            after = bisect_right(row.columns, place_of(key)[1])
            at = row.starts[after] if after < len(row.starts) else row.end
            edits.append((at, 0, _cell(prefix, key, cells[key])))
    pieces: list[bytes] = []
    done = 0
    for at, length, new in sorted(edits, key=lambda edit: edit[0]):
        pieces += (content[done:at], new)
        done = at + length
    pieces.append(content[done:])
    return b"".join(pieces)


def _cell(prefix: bytes, key: int, value: Cell) -> bytes:
    kind, text = written(value)
    kind_text = b' t="%b"' % kind if kind else b""
    return b'<%bc r="%b"%b><%bv>%b</%bv></%bc>' % (
        prefix,
        cell_name(key).encode(),
        kind_text,
        prefix,
        text,
        prefix,
        prefix,
    )

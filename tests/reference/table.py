"""Whole tables: every row on its own, every answer on its own."""

from __future__ import annotations

from collections.abc import Sequence

from . import headings as h
from . import headings2, table2, units
from .rows import NEEDED, WRONG, RefusedError, Row, is_blank, read, understand


def wanted(answers: str | Sequence[str]) -> list[headings2.Asked]:
    texts = answers.split(";") if isinstance(answers, str) else list(answers)
    return [headings2.asked(text) for text in texts]


def padded(cells: Sequence[object], width: int) -> list[object]:
    if len(cells) > width:
        raise ValueError("a row has more cells than there are headings")
    return [*cells, *[None] * (width - len(cells))]


def _one(row: Row, ask: headings2.Asked) -> object:
    if ask.what == "bad":
        return WRONG
    if ask.what == "later":
        return NEEDED
    try:
        value = row.answer(ask.name, ask.kind)
    except RefusedError as refused:
        return "no answer" if ask.name == "verdict" else refused.error
    if isinstance(value, (str, int)):
        return value
    return units.from_si(value, ask.unit)


def _refused(refused: RefusedError, asks: Sequence[headings2.Asked]) -> list[object]:
    def words(ask: headings2.Asked) -> bool:
        return ask.what == "use" and ask.name == "verdict" and not refused.exact

    return ["no answer" if words(ask) else refused.error for ask in asks]


def answers(answers: str | Sequence[str], headings: Sequence[str], rows: Sequence[Sequence[object]]) -> list[list[object]]:
    """One list a row, one entry an answer: numbers in the unit asked, texts, "" for a blank row, or a cell error."""
    asks = wanted(answers)
    columns = [h.column(heading) for heading in headings]
    wider = [headings2.column(heading) for heading in headings]
    out: list[list[object]] = []
    for given in rows:
        cells = padded(given, len(columns))
        if all(is_blank(cell) for col, cell in zip(columns, cells, strict=True) if col.what != "skip"):
            out.append([""] * len(asks))
            continue
        if table2.concerns(wider, cells):
            out.append(table2.answers(asks, wider, cells))
            continue
        try:
            row = understand(read(columns, cells), columns)
        except RefusedError as refused:
            out.append(_refused(refused, asks))
            continue
        out.append([_one(row, ask) for ask in asks])
    return out

"""Recomputes a workbook and holds what comes out against the values stored in it; nothing is written."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from operator import itemgetter
from pathlib import Path

from ingle_addin.book.book import open_book
from ingle_addin.book.engine import Engine
from ingle_addin.book.filling import no_collections, report_of
from ingle_addin.book.progress import Progress
from ingle_addin.book.refs import cell_name
from ingle_addin.book.report import Report
from ingle_addin.book.rounds import compute
from ingle_addin.book.scan import Sheet
from ingle_addin.book.shifted import Shifted, shifted_ranges
from ingle_addin.book.work import elements_of
from ingle_addin.calls import SolveCalls
from ingle_addin.cells import Cell

WITHIN = 1e-6


@dataclass(frozen=True)
class Difference:
    """A cell whose stored value is not the computed one. ``difference`` is computed less stored, None unless both are numbers."""

    sheet: str
    cell: str
    stored: Cell
    computed: Cell
    difference: float | None


@dataclass(frozen=True)
class Checked:
    """What a check found.

    ``compared`` counts cells; ``volatile`` are cells ``Sheet!A1`` left as they are, since they change from moment to moment;
    ``shifted`` are calls whose values stand in other columns (or rows) than their headings. ``report`` holds the rows without
    an answer and the formulas that could not be computed, as of a fill that writes nothing.
    """

    book: Path
    within: float
    compared: int
    report: Report
    differences: tuple[Difference, ...] = ()
    volatile: tuple[str, ...] = ()
    shifted: tuple[Shifted, ...] = ()

    @property
    def unanswered(self) -> bool:
        """Whether a row has no answer, or an Ingle formula could not be computed at all."""
        return bool(self.report.no_answers) or any(each.ingle for each in self.report.not_computed)

    def agrees(self, *, allow_unanswered: bool = False) -> bool:
        """Whether every compared cell is as stored and (unless allowed) every row has an answer."""
        return not self.differences and (allow_unanswered or not self.unanswered)


def check(
    book: Path,
    *,
    functions: Mapping[str, int | None],
    solve: SolveCalls,
    within: float = WITHIN,
    progress: Progress | None = None,
) -> Checked:
    """Evaluate the workbook ``book`` and compare with its stored values.

    Numbers a and b agree if |a-b| <= ``within`` · max(1, |a|, |b|); anything else must be equal, an empty cell being empty
    text. ``functions`` maps the canonical names that ``solve`` answers to the place of their headings among the arguments
    (None where they take none); the values follow them. Raises :class:`~ingle_addin.book.errors.BookError` as a fill does.
    """
    book = Path(book)
    with no_collections(), Engine(book) as engine:
        opened = open_book(book, progress)
        computed = compute(opened, functions, solve, progress, keep_volatile=True, engine=engine)
        compared = 0
        differences: list[Difference] = []
        for index, (sheet, values) in enumerate(zip(opened.sheets, computed.values, strict=True)):
            for key, stored in sorted(stored_values(sheet, values), key=itemgetter(0)):
                compared += 1
                value = values[key]
                if not agree(stored, value, within):
                    differences.append(Difference(opened.name_of(index), cell_name(key), stored, value, difference_of(stored, value)))
        return Checked(
            book=book,
            within=within,
            compared=compared,
            report=report_of(opened, computed, len(differences), None, None),
            differences=tuple(differences),
            volatile=tuple(f"{opened.name_of(sheet)}!{cell_name(key)}" for sheet, key in computed.volatile),
            shifted=shifted_ranges(computed.calls, functions, [sheet.name for sheet in opened.parts.sheets]),
        )


def stored_values(sheet: Sheet, values: Mapping[int, Cell]) -> Iterator[tuple[int, Cell]]:
    """The computed cells of a sheet with the values that the file holds for them."""
    children = sheet.children
    for cell in sheet.formulas:
        if cell.key not in values:
            continue
        for key, _ in elements_of(cell):
            if key in values:
                yield key, cell.stored if key == cell.key else children.get(key, (None, 0, 0))[0]


def agree(one: Cell, other: Cell, within: float) -> bool:
    """Whether two cells hold the same value, numbers within the tolerance of :func:`check`."""
    one, other = "" if one is None else one, "" if other is None else other
    if type(one) is float and type(other) is float:
        return abs(one - other) <= within * max(1.0, abs(one), abs(other))
    return type(one) is type(other) and one == other


def difference_of(stored: Cell, computed: Cell) -> float | None:
    """Computed less stored of two numbers."""
    return computed - stored if type(stored) is float and type(computed) is float else None

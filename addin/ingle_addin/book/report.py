"""What came of filling a workbook, as data and as plain lines for people."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

SHOWN = 10


@dataclass(frozen=True)
class NoAnswer:
    """A row of an Ingle answer that holds an error: ``cell`` is where, ``error`` what it shows, ``reason`` why."""

    sheet: str
    cell: str
    row: int
    error: str
    reason: str


@dataclass(frozen=True)
class NotComputed:
    """A formula that kept its stored value; ``ingle`` if there is an Ingle call in it.

    ``rests`` if it was computed, but from a cell that was not.
    """

    sheet: str
    cell: str
    reason: str
    rests: bool = False
    ingle: bool = False


@dataclass(frozen=True)
class Truncated:
    """An answer larger than the cells its formula may fill (``stored``; empty where one value is used in a formula)."""

    sheet: str
    cell: str
    rows: int
    columns: int
    stored: str

    def __str__(self) -> str:
        used = f"fills only {self.stored}" if self.stored else "uses only its first value"
        return f"the answer has {count(self.rows, 'row')} and {count(self.columns, 'column')}, but the formula {used}"


@dataclass(frozen=True)
class Report:
    """Counts and lists: Ingle cells and ordinary cells computed, cells whose value changed, and all that is amiss."""

    book: Path
    out: Path | None = None
    ingle_cells: int = 0
    ordinary_cells: int = 0
    changed_cells: int = 0
    no_answers: tuple[NoAnswer, ...] = ()
    hidden: tuple[NoAnswer, ...] = ()
    not_computed: tuple[NotComputed, ...] = ()
    truncated: tuple[Truncated, ...] = ()
    backup: Path | None = None
    remarks: tuple[str, ...] = ()

    @property
    def complete(self) -> bool:
        """Whether every Ingle call was computed, has an answer in every row, and all of it is shown."""
        return not (self.no_answers or self.truncated or any(each.ingle for each in self.not_computed))


def summary(report: Report) -> list[str]:
    """Plain lines, the main result first, at most ten examples of each kind."""
    lines = [
        f"{count(report.ingle_cells, 'cell')} with Ingle formulas and {count(report.ordinary_cells, 'other formula')} "
        f"computed; {count(report.changed_cells, 'value')} changed."
    ]
    lines += amiss(report)
    lines.extend(report.remarks)
    if report.backup is not None:
        lines.append(f"The workbook as it was is kept in {report.backup}.")
    lines.append("The workbook was left as it is." if report.out is None else f"Written to {report.out}.")
    return lines


def amiss(report: Report) -> list[str]:
    """Rows without an answer, formulas that could not be computed, answers too large for their cells."""
    lines: list[str] = []
    if report.no_answers:
        rows = _by_row(report.no_answers)
        lines.append(f"{count(len(rows), 'row')} without an answer:")
        examples(lines, rows)
    if report.hidden:
        verb = "stands" if len(report.hidden) == 1 else "stand"
        cells = list(dict.fromkeys(at(each.sheet, each.cell) for each in report.hidden))
        more = f" and {len(cells) - SHOWN:,} more cells" if len(cells) > SHOWN else ""
        lines.append(
            f"{count(len(report.hidden), 'Ingle call')} without an answer {verb} inside formulas that show a value: "
            f"{', '.join(cells[:SHOWN])}{more}."
        )
    left = [each for each in report.not_computed if not each.rests]
    resting = [each for each in report.not_computed if each.rests]
    if left:
        lines.append(f"{count(len(left), 'formula')} not computed; the stored value was kept:")
        examples(lines, [f"{at(each.sheet, each.cell)}: {each.reason}" for each in left])
    if resting:
        lines.append(f"{count(len(resting), 'formula')} computed from such kept values:")
        examples(lines, [f"{at(each.sheet, each.cell)}: {each.reason}" for each in resting])
    if report.truncated:
        lines.append(f"{count(len(report.truncated), 'answer')} larger than the cells to hold it:")
        examples(lines, [f"{at(each.sheet, each.cell)}: {each}" for each in report.truncated])
    return lines


def _by_row(missing: Sequence[NoAnswer]) -> list[str]:
    """One line a row and reason: a row at fault has as many cells in error as it has answers."""
    found: dict[tuple[str, int, str], list[NoAnswer]] = {}
    for each in missing:
        found.setdefault((each.sheet, each.row, each.reason), []).append(each)
    lines = []
    for (sheet, _, reason), cells in found.items():
        more = f" and {count(len(cells) - 1, 'cell')} beside it" if len(cells) > 1 else ""
        lines.append(f"{at(sheet, cells[0].cell)}{more} {cells[0].error}: {reason}")
    return lines


def examples(lines: list[str], texts: Sequence[str]) -> None:
    """Add the first few of them, and how many more there are."""
    lines.extend("  " + text for text in texts[:SHOWN])
    if len(texts) > SHOWN:
        lines.append(f"  … and {len(texts) - SHOWN:,} more")


def at(sheet: str, cell: str) -> str:
    """A cell with its sheet's name."""
    return f"{sheet}!{cell}"


def count(number: int, noun: str) -> str:
    """``1 row``, ``2,000 rows``."""
    return f"{number:,} {noun}" + ("" if number == 1 else "s")

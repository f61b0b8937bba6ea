"""The outcome of a check as plain lines for people."""

from __future__ import annotations

from collections.abc import Sequence

from ingle_addin.book.checking import Checked, Difference
from ingle_addin.book.report import SHOWN, amiss, at, count, examples
from ingle_addin.cells import Cell

_LONGEST = 40


def check_summary(checked: Checked) -> list[str]:
    """The main result first, at most ten examples of each kind."""
    report, different = checked.report, len(checked.differences)
    verb = "differs" if different == 1 else "differ"
    lines = [f"{count(checked.compared, 'cell')} recomputed; {different or 'none'} {verb} from the stored value by more than "
             f"{checked.within:g}" + (":" if different else ".")]  # fmt: skip
    lines += _table(checked.differences)
    lines += amiss(report)
    if checked.volatile:
        verb = "was" if len(checked.volatile) == 1 else "were"
        lines.append(f"{count(len(checked.volatile), 'formula')} {verb} left alone, changing from moment to moment:")
        examples(lines, checked.volatile)
    if checked.shifted:
        cells = sum(each.cells for each in checked.shifted)
        verb = "takes" if cells == 1 else "take"
        lines.append(
            f"{count(cells, 'Ingle call')} {verb} values that do not stand with their headings; look whether a range slipped:"
        )
        examples(lines, [
            f"{at(each.sheet, each.cell)}{_more(each.cells - 1)}: {each}" for each in checked.shifted
        ])  # fmt: skip
    lines += report.remarks
    if different:
        lines.append(f"If the computed values are right, ingle fill {checked.book} writes them.")
    return lines


def _more(cells: int) -> str:
    return f" and {count(cells, 'cell')} of its column" if cells else ""


def _table(differences: Sequence[Difference]) -> list[str]:
    if not differences:
        return []
    rows = [("cell", "stored", "computed", "difference")]
    rows += [
        (at(each.sheet, each.cell), _text(each.stored), _text(each.computed), _number(each.difference))
        for each in differences[:SHOWN]
    ]
    widths = [max(len(row[place]) for row in rows) for place in range(4)]
    lines = ["  " + "  ".join(text.ljust(width) for text, width in zip(row, widths, strict=True)).rstrip() for row in rows]
    if len(differences) > SHOWN:
        lines.append(f"  … and {len(differences) - SHOWN:,} more (--json lists them all)")
    return lines


def _number(value: float | None) -> str:
    return "" if value is None else f"{value:.3g}"


def _text(value: Cell) -> str:
    """A value as a person tells it from others: text in quotes, and cut if it is long."""
    if value is None or value == "":
        return "(empty)"
    if isinstance(value, bool):
        return str(value).upper()
    if isinstance(value, float):
        return f"{value:.10g}"
    if isinstance(value, str):
        return f"'{value}'" if len(value) <= _LONGEST else f"'{value[:_LONGEST]}…'"
    return str(value)

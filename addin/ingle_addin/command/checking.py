"""`ingle check`."""

from __future__ import annotations

import json
import math
from dataclasses import asdict
from pathlib import Path
from typing import TYPE_CHECKING, Any

from ingle_addin.cells import Cell
from ingle_addin.command.failure import Failure, workbook_failures
from ingle_addin.command.progress import shown_progress
from ingle_addin.command.solving import solve

if TYPE_CHECKING:
    from ingle_addin.book import Checked


def check_book(book: Path, within: str, as_json: bool, allow_unanswered: bool) -> int:
    """Check a workbook and print what was found; 1 if anything differs or (unless allowed) has no answer."""
    try:
        tolerance = float(within)
    except ValueError:
        tolerance = math.nan
    if not (math.isfinite(tolerance) and tolerance >= 0.0):
        raise Failure(f"--within is {within}; give a number from 0 on, such as 1e-6")
    with workbook_failures(book), shown_progress() as progress:
        from ingle_addin.book import check, check_summary
        from ingle_addin.functions import FUNCTIONS

        places = {
            function.name: next((i for i, argument in enumerate(function.arguments) if argument.name == "headings"), None)
            for function in FUNCTIONS
        }
        checked = check(book, functions=places, solve=solve, within=tolerance, progress=progress)
    agrees = checked.agrees(allow_unanswered=allow_unanswered)
    if as_json:
        print(json.dumps({"agrees": agrees, **as_data(checked)}, ensure_ascii=False, indent=1))
    else:
        for line in check_summary(checked):
            print(line)
    return 0 if agrees else 1


def as_data(checked: Checked) -> dict[str, Any]:
    """A check as JSON holds it: an error value is its text, an empty cell null."""
    report = checked.report
    return {
        "book": str(checked.book),
        "within": checked.within,
        "compared": checked.compared,
        "differences": [
            {**asdict(each), "stored": _plain(each.stored), "computed": _plain(each.computed)} for each in checked.differences
        ],
        "without_answer": [asdict(each) for each in report.no_answers],
        "without_answer_inside": [asdict(each) for each in report.hidden],
        "not_computed": [asdict(each) for each in report.not_computed],
        "larger_than_cells": [asdict(each) for each in report.truncated],
        "volatile": list(checked.volatile),
        "shifted": [asdict(each) for each in checked.shifted],
        "remarks": list(report.remarks),
    }


def _plain(value: Cell) -> float | str | bool | None:
    return value if value is None or isinstance(value, (float, str, bool)) else str(value)

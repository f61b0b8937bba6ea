"""The benchmark of fill runs, its workbook is filled in full, and it gives ratios; no time is asserted."""

from __future__ import annotations

import sys
from pathlib import Path

from ingle_addin.batch import solve_calls
from ingle_addin.book import fill
from ingle_addin.functions import NAMES

from benchmarks import fill_book


def test_the_benchmark_measures_both(tmp_path: Path) -> None:
    ours, theirs = fill_book.measure_fill(tmp_path, 20, 1)
    assert ours.seconds > 0.0
    assert theirs.seconds > 0.0
    if sys.platform == "linux":
        assert min(ours.megabytes, theirs.megabytes) > 5.0
    report = fill(tmp_path / "book.xlsx", tmp_path / "again.xlsx", functions=NAMES, solve=solve_calls)
    assert (report.ingle_cells, report.ordinary_cells, report.complete) == (20, 60, True)
    assert (tmp_path / "again.xlsx").read_bytes() == (tmp_path / "filled.xlsx").read_bytes()

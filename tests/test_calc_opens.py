"""The shipped workbook in LibreOffice Calc, without the add-in: stored answers show, ordinary formulas come out the same."""

from __future__ import annotations

import csv
import shutil
import subprocess
from pathlib import Path

import openpyxl
import pytest

BOOK = Path(__file__).parents[1] / "workbooks" / "busbars.xlsx"
OFFICE = shutil.which("soffice")


@pytest.mark.skipif(OFFICE is None, reason="LibreOffice Calc is not installed")
def test_calc_shows_the_stored_answers(tmp_path: Path) -> None:
    assert OFFICE is not None
    # Field 44, quote 34, UTF-8 (76), first line 1, cell contents as shown; -1 writes every sheet.
    text = "csv:Text - txt - csv (StarCalc):44,34,76,1,,0,false,true,false,false,false,-1"
    profile = f"-env:UserInstallation={(tmp_path / 'profile').as_uri()}"
    command = [OFFICE, profile, "--headless", "--convert-to", text, "--outdir", str(tmp_path), str(BOOK)]
    subprocess.run(command, check=True, timeout=180, capture_output=True)
    with (tmp_path / "busbars-Cases.csv").open(encoding="utf-8", newline="") as file:
        shown = list(csv.reader(file))
    stored = openpyxl.load_workbook(BOOK, data_only=True)["Cases"]
    head = next(row for row in range(1, 20) if stored.cell(row, 1).value == "# no.")
    peak = next(c for c in range(1, 80) if stored.cell(head, c).value == "peak [°C]")
    verdict = next(c for c in range(1, 80) if stored.cell(head, c).value == "verdict")
    compared = 0
    for row in range(head + 1, stored.max_row + 1):
        value = stored.cell(row, peak).value
        if isinstance(value, float):
            # The column's format is one decimal.
            assert float(shown[row - 1][peak - 1]) == pytest.approx(value, abs=0.0500001), row
            assert shown[row - 1][verdict - 1] == stored.cell(row, verdict).value
            compared += 1
    assert compared == 26

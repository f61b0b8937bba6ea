"""Long checks, run by `.ci/run` only: damaged workbooks, fills killed in the middle, a hundred thousand rows."""

from __future__ import annotations

import random
import signal
import subprocess
import sys
import time
import zipfile
from pathlib import Path

import numpy as np
import openpyxl
import pytest
import xlsxwriter
from ingle_addin import ask
from ingle_addin.batch import solve_calls
from ingle_addin.book import BookError, fill
from ingle_addin.functions import NAMES

pytestmark = pytest.mark.long

BUSBARS = Path(__file__).parents[1] / "workbooks" / "busbars.xlsx"
HEADINGS = ("shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/cm³]", "both film [W/(m²·K)]", "both fluid [°C]")


def write_cases(path: Path, rows: int) -> np.ndarray:
    """Walls with PEAK row by row and no stored values; returns their thicknesses."""
    thickness = np.random.default_rng(7).uniform(5.0, 50.0, rows)
    book = xlsxwriter.Workbook(str(path), {"constant_memory": True})
    sheet = book.add_worksheet("Cases")
    sheet.write_row(0, 0, HEADINGS)
    for i, d in enumerate(thickness, 1):
        sheet.write_row(i, 0, ["wall", d, 20.0, 1.0, 50.0, 20.0])
        sheet.write_formula(i, 6, f"=INGLE.PEAK($A$1:$F$1,A{i + 1}:F{i + 1})", None, 0)
    book.close()
    return thickness


def test_a_hundred_thousand_rows(tmp_path: Path) -> None:
    rows = 100_000
    thickness = write_cases(tmp_path / "big.xlsx", rows)
    report = fill(tmp_path / "big.xlsx", tmp_path / "out.xlsx", functions=NAMES, solve=solve_calls)
    assert (report.ingle_cells, report.changed_cells, report.no_answers) == (rows, rows, ())
    book = openpyxl.load_workbook(tmp_path / "out.xlsx", read_only=True, data_only=True)
    stored = np.array([row[0] for row in book["Cases"].iter_rows(min_row=2, min_col=7, max_col=7, values_only=True)])
    book.close()
    (peak,) = ask("peak [°C]", list(HEADINGS), "wall", thickness, 20.0, 1.0, 50.0, 20.0)
    assert np.allclose(stored, peak, rtol=1e-13, atol=0.0)  # the writer keeps 16 digits of a thickness
    # A slab cooled equally on both faces: q d/(2h) + q d²/(8k) above the fluid, from Fourier's law.
    d = thickness / 1000.0
    assert np.allclose(peak, 20.0 + 1e6 * d / 100.0 + 1e6 * d * d / 160.0, rtol=1e-12)


def test_a_killed_fill_leaves_the_old_file_or_the_new(tmp_path: Path) -> None:
    """Fifty fills in place killed at random moments, drawn more densely where the file is written."""
    book, backup = tmp_path / "cases.xlsx", tmp_path / "cases.xlsx.bak"
    write_cases(book, 3000)
    old = book.read_bytes()
    command = [sys.executable, "-c", "from ingle_addin.command import main; main()", "fill", str(book), "--in-place"]
    start = time.perf_counter()
    subprocess.run(command, check=True, capture_output=True)
    whole = time.perf_counter() - start
    new = book.read_bytes()
    assert new != old
    draw = random.Random(11)
    killed = left_over = replaced = 0
    for number in range(50):
        book.write_bytes(old)
        backup.unlink(missing_ok=True)
        process = subprocess.Popen(command, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
        time.sleep(draw.uniform(*((0.3, 1.1) if number % 2 else (0.75, 1.05))) * whole)
        process.send_signal(signal.SIGKILL)
        killed += process.wait() == -signal.SIGKILL
        assert book.read_bytes() in (old, new)
        assert not backup.exists() or backup.read_bytes() == old
        assert backup.exists() or book.read_bytes() == old
        replaced += book.read_bytes() == new
        left_over += any(path.name.endswith(".ingle.part") for path in tmp_path.iterdir())
    print(f"{killed} of 50 fills killed before their end, {left_over} times a half file beside the workbook, {replaced} times filled")
    assert killed > 10
    book.write_bytes(old)
    subprocess.run(command, check=True, capture_output=True)
    assert sorted(path.name for path in tmp_path.iterdir()) == ["cases.xlsx", "cases.xlsx.bak"]
    assert (book.read_bytes(), backup.read_bytes()) == (new, old)


def refusal(book: Path) -> str | None:
    """Why a workbook is refused, None if it is filled; any other exception is a failure."""
    try:
        fill(book, functions=NAMES, solve=solve_calls)
    except BookError as error:
        return str(error)
    return None


def test_damaged_workbooks_are_refused_or_filled_never_a_crash(tmp_path: Path) -> None:
    """Bytes of the parts, and of the zip itself, changed at random."""
    draw = random.Random(5)
    with zipfile.ZipFile(BUSBARS) as source:
        parts = {name: source.read(name) for name in source.namelist()}
    refused = 0
    for number in range(120):
        book, name = tmp_path / f"{number}.xlsx", draw.choice(list(parts))
        broken = bytearray(parts[name])
        for _ in range(draw.randint(1, 4)):
            at = draw.randrange(len(broken))
            broken[at : at + draw.randint(0, 3)] = bytes(draw.randrange(256) for _ in range(draw.randint(0, 3)))
        with zipfile.ZipFile(book, "w") as out:
            for each, data in parts.items():
                out.writestr(each, bytes(broken) if each == name else data)
        if number % 3 == 0:  # the container too
            raw = bytearray(book.read_bytes())
            raw[draw.randrange(len(raw))] ^= 1 << draw.randrange(8)
            book.write_bytes(bytes(raw))
        message = refusal(book)
        if message is not None:
            refused += 1
            assert "\n" not in message
            assert not book.with_name(f"{number}.filled.xlsx").exists()
    print(f"{refused} of 120 damaged workbooks refused in one line, the others filled")
    assert 0 < refused < 120

"""How long `ingle fill` takes over what openpyxl takes to load and save the same workbook, both in one run.

    python tests/benchmarks/fill_book.py [ROWS] [--calc]

The workbook has 12 columns a row: eight values, an Ingle call, and three ordinary formulas, one of which feeds the call and
two of which rest on it. Every run is a process of its own, so that start-up and memory count; the fill's peak memory is
that of its two processes together. With ``--calc``, LibreOffice Calc loads, recalculates and saves the workbook too.
"""

from __future__ import annotations

import argparse
import os
import shutil
import statistics
import subprocess
import sys
import tempfile
import threading
import time
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import xlsxwriter

ROWS = 100_000
SMALL = 500
HEADINGS = ("shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [kW/m³]", "both film [W/(m²·K)]", "both fluid [°C]",
            "limit [°C]", "note")  # fmt: skip
FORMULAS = 4
FILL_TARGET, START_TARGET = 0.7, 3.0
_INGLE = "import sys; from ingle_addin.command import main; sys.argv = ['ingle', *sys.argv[1:]]; main()"
_OPENPYXL = "import sys, openpyxl; openpyxl.load_workbook(sys.argv[1]).save(sys.argv[2])"


def write_book(path: Path, rows: int) -> None:
    """Walls of drawn sizes, sources and films; no stored values."""
    draw = np.random.default_rng(3)
    thickness, k = draw.uniform(2.0, 80.0, rows), 10.0 ** draw.uniform(0.0, 2.0, rows)
    generation, film = 10.0 ** draw.uniform(0.0, 3.0, rows), 10.0 ** draw.uniform(1.0, 3.0, rows)
    book = xlsxwriter.Workbook(str(path), {"constant_memory": True})
    sheet = book.add_worksheet("Cases")
    sheet.write_row(0, 0, [*HEADINGS, "generation [kW/m³]", "peak [°C]", "headroom [K]", "verdict"])
    for i in range(rows):
        row = i + 2
        sheet.write_row(i + 1, 0, ["wall", thickness[i], k[i], generation[i], film[i], 35.0, 120.0, f"case {i % 100}"])
        sheet.write_formula(i + 1, 8, f"=ROUND(D{row}*1.05,3)", None, 0)
        sheet.write_formula(i + 1, 9, f"=INGLE.PEAK(($A$1:$H$1),A{row}:C{row},I{row},E{row}:H{row})", None, 0)
        sheet.write_formula(i + 1, 10, f"=G{row}-J{row}", None, 0)
        sheet.write_formula(i + 1, 11, f'=IF(K{row}<0,"over","ok")', None, 0)
    book.close()


@dataclass(frozen=True)
class Run:
    """What one process (with its children) took: seconds, and peak memory in MB."""

    seconds: float
    megabytes: float


def run(*command: str) -> Run:
    """Run a command to its end; it must succeed."""
    start = time.perf_counter()
    process = subprocess.Popen(command, stdout=subprocess.DEVNULL, stderr=subprocess.PIPE)
    peak = _Peak(process.pid)
    peak.start()
    _, err = process.communicate()
    seconds = time.perf_counter() - start
    peak.stop()
    if process.returncode != 0:
        raise RuntimeError(err.decode(errors="replace"))
    return Run(seconds, peak.megabytes)


class _Peak(threading.Thread):
    """Watches the memory of a process and its children (Linux only: elsewhere it stays 0)."""

    def __init__(self, pid: int) -> None:
        super().__init__(daemon=True)
        self._pid, self._done, self.megabytes = pid, threading.Event(), 0.0

    def run(self) -> None:
        while not self._done.wait(0.02):
            self.megabytes = max(self.megabytes, sum(map(_resident, [self._pid, *_children(self._pid)])))

    def stop(self) -> None:
        self._done.set()
        self.join()


def _children(pid: int) -> list[int]:
    try:
        texts = [path.read_text() for path in Path(f"/proc/{pid}/task").glob("*/children")]
    except OSError:
        return []
    found = [int(text) for each in texts for text in each.split()]
    return found + [below for child in found for below in _children(child)]


def _resident(pid: int) -> float:
    """Proportional memory, so that pages which two processes share count once."""
    try:
        lines = Path(f"/proc/{pid}/smaps_rollup").read_text().splitlines()
    except OSError:
        return 0.0
    return sum(int(line.split()[1]) for line in lines if line.startswith("Pss:")) / 1024


def ingle(*arguments: str) -> tuple[str, ...]:
    """The command as it is typed, from the sources that this script imports."""
    return (sys.executable, "-c", _INGLE, *arguments)


def measure_fill(folder: Path, rows: int, rounds: int) -> tuple[Run, Run]:
    """Medians of a fill and of openpyxl's load and save, in turn."""
    book = folder / "book.xlsx"
    write_book(book, rows)
    fills, loads = [], []
    for _ in range(rounds):
        fills.append(run(*ingle("fill", str(book), "-o", str(folder / "filled.xlsx"))))
        loads.append(run(sys.executable, "-c", _OPENPYXL, str(book), str(folder / "saved.xlsx")))
    return _median(fills), _median(loads)


def measure_start(folder: Path, rounds: int) -> tuple[Run, Run]:
    """Medians of a fill of a small workbook and of `ingle --version`, in turn."""
    book = folder / "small.xlsx"
    write_book(book, SMALL)
    fills, versions = [], []
    for _ in range(rounds):
        fills.append(run(*ingle("fill", str(book), "-o", str(folder / "small.filled.xlsx"))))
        versions.append(run(*ingle("--version")))
    return _median(fills), _median(versions)


def measure_calc(folder: Path) -> Run | None:
    """Calc's own load and save of the workbook that :func:`measure_fill` left, its formulas recalculated on loading."""
    office = shutil.which("soffice")
    if office is None:
        return None
    profile = f"-env:UserInstallation={(folder / 'profile').as_uri()}"
    run(office, profile, "--headless", "--terminate_after_init")
    return run(office, profile, "--headless", "--convert-to", "xlsx:Calc MS Excel 2007 XML", "--outdir", str(folder / "calc"),
               str(folder / "book.xlsx"))  # fmt: skip


def _median(runs: list[Run]) -> Run:
    return Run(statistics.median(each.seconds for each in runs), max(each.megabytes for each in runs))


def main() -> None:
    options = argparse.ArgumentParser()
    options.add_argument("rows", nargs="?", type=int, default=ROWS)
    options.add_argument("--calc", action="store_true")
    options.add_argument("--rounds", type=int, default=3)
    chosen = options.parse_args()
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        small, version = measure_start(folder, 5)
        print(f"{SMALL} rows: fill {small.seconds:.2f} s, ingle --version {version.seconds:.2f} s, "
              f"ratio {small.seconds / version.seconds:.2f} (target {START_TARGET})")  # fmt: skip
        fill, load = measure_fill(folder, chosen.rows, chosen.rounds)
        print(f"{chosen.rows:,} rows, {chosen.rows * FORMULAS:,} formulas: fill {fill.seconds:.1f} s and {fill.megabytes:.0f} MB, "
              f"openpyxl load and save {load.seconds:.1f} s and {load.megabytes:.0f} MB, "
              f"ratio {fill.seconds / load.seconds:.2f} (target {FILL_TARGET})")  # fmt: skip
        calc = measure_calc(folder) if chosen.calc else None
        if calc is not None:
            print(f"Calc load, recalculation and save {calc.seconds:.1f} s, fill over it {fill.seconds / calc.seconds:.2f}")


if __name__ == "__main__":
    os.environ.setdefault("PYTHONUTF8", "1")
    main()

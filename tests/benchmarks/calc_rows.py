"""What a row costs in a real Calc: one-row calls down a column and one array formula, over a native formula of the same physics.

    python tests/benchmarks/calc_rows.py [ROWS]

Every figure is a full recalculation (calculateAll) of a document of its own. `new rows` has one input of every row changed
before, so that every row is solved; `known rows` has nothing changed, so that Calc's own bridge and the pipe to the worker
are all that is left. Beside them stands what one row costs within the evaluator alone, in this process, without Calc.
"""

from __future__ import annotations

import statistics
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from ingle_addin.batch import solve_calls
from ingle_addin.calc.extension import worker_command
from ingle_addin.calc.inside.client import Client

if TYPE_CHECKING:
    from calc_office import Office

HEADINGS = ["shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/cm³]", "both film [W/(m²·K)]", "both fluid [°C]",
            "limit [°C]"]  # fmt: skip
SHEET = "Sheet1"
CASE = "$A$1:$G$1;$A{row}:$G{row}"
# Half of qL through each film, and qL²/8k, as it would be typed.
NATIVE = "=F{row}+D{row}*B{row}*1000/2/E{row}+D{row}*B{row}*B{row}/8/C{row}"
PEAK, WHY = f"=INGLE.PEAK({CASE})", f"=INGLE.WHY({CASE})"
FACE, ALLOW = f'=INGLE.FACE("left";{CASE})', f"=INGLE.ALLOW({CASE})"


@dataclass(frozen=True)
class Line:
    """One measured line; ``seconds`` are for all rows."""

    name: str
    rows: int
    seconds: float

    @property
    def each(self) -> float:
        """Microseconds a row."""
        return self.seconds / self.rows * 1e6


def measure(calc: Office, rows: int, times: int = 3) -> list[Line]:
    """Medians of some full recalculations of each kind."""
    lines = [_timed(calc, "native formula, inputs changed", rows, times, [NATIVE], change=True)]
    lines.append(_timed(calc, "INGLE.ABOUT: a call that computes nothing", rows, times, ["=INGLE.ABOUT()"], change=False))
    for name, formulas in (("PEAK", [PEAK]), ("PEAK, FACE, ALLOW, WHY", [PEAK, FACE, ALLOW, WHY])):
        lines.append(_timed(calc, f"{name} row by row, new rows", rows, times, formulas, change=True))
        lines.append(_timed(calc, f"{name} row by row, known rows", rows, times, formulas, change=False))
    lines.append(_timed(calc, "PEAK as one array formula", rows, times, [], change=True))
    few = min(rows, 2000)
    case = ((tuple(HEADINGS),), (("wall", 10.0, 390.0, 0.12, 12.0, 35.0, 105.0),))
    lines.append(Line("the evaluator alone: PEAK of one row", few, _seconds(lambda: solve_calls("INGLE.PEAK", [case]), few)))
    worker = Client(worker_command())
    lines.append(
        Line("the worker alone: a known row over the pipe", few, _seconds(lambda: worker.ask(("INGLE.PEAK", case, False)), few))
    )
    worker.close()
    return lines


def _timed(calc: Office, name: str, rows: int, times: int, formulas: list[str], *, change: bool) -> Line:
    number = calc.open("new")
    last = rows + 1
    calc.fill(number, SHEET, "A1:G1", [HEADINGS])
    calc.set(number, SHEET, "N1", 35.0)
    table = [["wall", 6.0 + 4.0 * i / rows, 390.0, 0.12, 12.0, "=$N$1", 105.0] for i in range(rows)]
    calc.fill(number, SHEET, f"A2:G{last}", table)
    for column, formula in zip("HIJK", formulas, strict=False):
        calc.fill(number, SHEET, f"{column}2:{column}{last}", [[formula.format(row=row)] for row in range(2, last + 1)])
    if not formulas:
        calc.array(number, SHEET, f"H2:H{last}", f"=INGLE.PEAK($A$1:$G$1;A2:G{last})")
    found = []
    calc.calculate(number)
    for step in range(times):
        if change:
            calc.set(number, SHEET, "N1", 36.0 + step)
        found.append(calc.calculate(number))
    calc.close(number)
    return Line(name, rows, statistics.median(found))


def _seconds(work: Callable[[], object], times: int) -> float:
    work()
    start = time.perf_counter()
    for _ in range(times):
        work()
    return time.perf_counter() - start


def table_of(lines: list[Line]) -> str:
    """The lines as a table of text: microseconds a row, and over the native formula and the array formula."""
    native = lines[0].each
    (array,) = (line.each for line in lines if "array" in line.name)
    rows = [f"{'':46}{'rows':>8}{'µs a row':>10}{'native':>9}{'array':>8}"]
    rows += [
        f"{line.name:46}{line.rows:>8,}{line.each:>10.1f}{line.each / native:>8.0f}×{line.each / array:>7.1f}×" for line in lines
    ]
    return "\n".join(rows)


def main() -> None:
    """Print the table for the number of rows given, 10,000 if none is."""
    sys.path.insert(0, str(Path(__file__).resolve().parents[1]))
    import calc_office

    if calc_office.MISSING:
        raise SystemExit(calc_office.MISSING)
    with tempfile.TemporaryDirectory() as folder, calc_office.office(Path(folder)) as calc:
        print(table_of(measure(calc, int(sys.argv[1]) if len(sys.argv) > 1 else 10_000)))


if __name__ == "__main__":
    main()

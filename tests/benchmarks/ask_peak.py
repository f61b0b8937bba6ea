"""How long `ask` takes over what a formula typed for the same columns takes, both in one run.

    python tests/benchmarks/ask_peak.py [ROWS]

Each line is measured in turn with the formula it is divided by, several times over, and the medians are compared, so that
what else the machine does falls on both. Sizes, films and sources are drawn; nothing here is taken from a publication.
"""

from __future__ import annotations

import statistics
import sys
import time
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from ingle_addin import ask

Array = np.ndarray
Columns = dict[str, Array]


@dataclass(frozen=True)
class Line:
    """One line of the table: ``ours`` is what is timed, ``rows`` how many answers it gives; no ``formula`` is no ratio."""

    name: str
    rows: int
    ours: Callable[[], object]
    formula: Callable[[], object] | None = None
    target: float | None = None


@dataclass(frozen=True)
class Timing:
    """Medians in seconds of a line; the formula's is None where it has none."""

    line: Line
    ours: float
    formula: float | None

    @property
    def ratio(self) -> float | None:
        """How many times the formula's own time it took."""
        return None if self.formula is None else self.ours / self.formula


WALL = ("thickness [mm]", "conductivity [W/(m·K)]", "generation [kW/m³]", "left film [W/(m²·K)]", "left fluid [°C]",
        "right film [W/(m²·K)]", "right fluid [°C]")  # fmt: skip


def walls(n: int) -> Columns:
    """Walls cooled unequally on both faces."""
    draw = np.random.default_rng(1)
    columns = (
        draw.uniform(2.0, 80.0, n),
        10.0 ** draw.uniform(-1.0, 2.0, n),
        10.0 ** draw.uniform(0.0, 3.0, n),
        10.0 ** draw.uniform(0.5, 3.0, n),
        draw.uniform(0.0, 60.0, n),
        10.0 ** draw.uniform(0.5, 3.0, n),
        draw.uniform(0.0, 60.0, n),
    )
    return dict(zip(WALL, columns, strict=True))


def wall_peak(d_mm: Array, k: Array, q_kW: Array, h1: Array, f1: Array, h2: Array, f2: Array) -> Array:
    """The heat entering on the left settles both faces; the peak is where no heat flows, or at the hotter face."""
    d, q = d_mm * 1e-3, q_kW * 1e3
    Q = (f1 - f2 - q * d / h2 - q * d * d / (2.0 * k)) / (1.0 / h1 + d / k + 1.0 / h2)
    left = f1 - Q / h1
    right = f2 + (Q + q * d) / h2
    x = -Q / q
    inside = left + Q * Q / (2.0 * k * q)
    return np.where((x > 0.0) & (x < d), inside, np.maximum(left, right))


def wall_allowable(d_mm: Array, k: Array, q_kW: Array, h1: Array, f1: Array, h2: Array, f2: Array, limit: Array) -> Array:  # noqa: ARG001
    """Newton's method on the same formula, as it would be typed beside the table; eight steps."""
    q = np.full_like(d_mm, 1e4)
    for _ in range(8):
        low = wall_peak(d_mm, k, q, h1, f1, h2, f2)
        high = wall_peak(d_mm, k, q * 1.0001, h1, f1, h2, f2)
        q = np.maximum(q - (low - limit) / (high - low) * q * 1e-4, 1e-6)
    return q


def mixed(n: int) -> tuple[Array, Columns]:
    """Walls, solid and hollow cylinders and spheres; in the columns that not all of them fill, half the cells are blank."""
    draw = np.random.default_rng(2)
    shape = draw.choice(np.array(["wall", "cylinder", "sphere"], dtype=object), n)
    table = walls(n)
    bored = (shape != "wall") & (draw.random(n) < 0.5)
    cooled_left = bored | (shape == "wall")
    cooled_left &= draw.random(n) < 0.75
    table["inner radius [mm]"] = np.where(bored, draw.uniform(1.0, 50.0, n), np.nan)
    for heading in ("left film [W/(m²·K)]", "left fluid [°C]"):
        table[heading] = np.where(cooled_left, table[heading], np.nan)
    held = draw.random(n) < 0.5
    table["right held [°C]"] = np.where(held, table["right fluid [°C]"], np.nan)
    for heading in ("right film [W/(m²·K)]", "right fluid [°C]"):
        table[heading] = np.where(held, np.nan, table[heading])
    return shape, table


def lines(n: int) -> list[Line]:
    """What is measured, on tables of n rows."""
    table = walls(n)
    columns = list(table.values())
    headings = ["shape", *WALL]
    objects = np.full(n, "wall", dtype=object)
    unicode = np.full(n, "wall")
    shape, other = mixed(n)
    limit = np.full(n, 400.0)
    few = min(n, 20_000)
    cells = [["wall", *row] for row in np.column_stack(columns)[:few].tolist()]
    lone = ["wall", *(float(column[0]) for column in columns)]
    cell_columns = [column[:few] for column in columns]

    def formula() -> Array:
        return wall_peak(*columns)

    def allowable_formula() -> Array:
        return wall_allowable(*columns, limit)

    def few_formula() -> Array:
        return wall_peak(*cell_columns)

    return [
        Line("walls; shapes in an object array", n, lambda: ask("peak [°C]", headings, objects, *columns), formula, 8.0),
        Line("walls; shapes in a '<U4' array", n, lambda: ask("peak [°C]", headings, unicode, *columns), formula, 8.0),
        Line("walls; one shape for all", n, lambda: ask("peak [°C]", headings, "wall", *columns), formula, 8.0),
        Line("walls; peak, both faces, mean, why", n, lambda: ask(
            "peak [°C]; left face [°C]; right face [°C]; mean [°C]; why", headings, objects, *columns), formula),
        Line("mixed shapes, half the cells blank", n, lambda: ask("peak [°C]", ["shape", *other], shape, *other.values()), formula),
        Line("cells of a sheet: a list of rows", few, lambda: ask("peak [°C]", headings, cells), few_formula),
        Line("allowable generation of walls", n, lambda: ask(
            "allowable generation [kW/m³]", [*headings, "limit [°C]"], objects, *columns, limit), allowable_formula),
        Line("one row", 1, lambda: ask("peak [°C]", headings, *lone)),
    ]  # fmt: skip


def check(n: int) -> None:
    """What is timed gives the same answers as what it is divided by, and an answer in every row."""
    table = walls(n)
    columns = list(table.values())
    headings = ["shape", *WALL]
    want = wall_peak(*columns)
    (found,) = ask("peak [°C]", headings, "wall", *columns)
    assert np.max(np.abs(found - want) / (want - np.minimum(columns[4], columns[6]))) < 1e-12
    shape, other = mixed(n)
    assert not np.isnan(ask("peak [°C]", ["shape", *other], shape, *other.values())[0]).any()
    limit = np.full(n, 400.0)
    (allowed,) = ask("allowable generation [kW/m³]", [*headings, "limit [°C]"], "wall", *columns, limit)
    assert np.max(np.abs(wall_allowable(*columns, limit) / allowed - 1.0)) < 1e-6


def measure(n: int, repetitions: int) -> list[Timing]:
    """Medians of every line, its formula timed in turn with it."""
    timings = []
    for line in lines(n):
        line.ours()  # the plan of the headings is read once, as in a sheet
        ours, formula = [], []
        # A quick line is repeated within each turn, so that the clock's own step does not show.
        times = max(1, 2000 // max(line.rows, 1)) if line.formula is None else 1
        for _ in range(repetitions):
            if line.formula is not None:
                formula.append(_seconds(line.formula, 1))
            ours.append(_seconds(line.ours, times))
        timings.append(Timing(line, statistics.median(ours), statistics.median(formula) if formula else None))
    return timings


def _seconds(work: Callable[[], object], times: int) -> float:
    start = time.perf_counter()
    for _ in range(times):
        work()
    return (time.perf_counter() - start) / times


def table_of(timings: list[Timing]) -> str:
    """The timings as a table of text."""
    rows = [f"{'':40}{'rows':>9}{'ms':>10}{'µs a row':>10}{'formula ms':>12}{'ratio':>8}{'target':>8}"]
    for timing in timings:
        line, ratio = timing.line, timing.ratio
        formula = "" if timing.formula is None else f"{1e3 * timing.formula:.2f}"
        row = f"{line.name:40}{line.rows:>9,}{1e3 * timing.ours:>10.2f}{1e6 * timing.ours / line.rows:>10.2f}{formula:>12}"
        row += f"{'' if ratio is None else f'{ratio:.1f}':>8}{'' if line.target is None else f'{line.target:.0f}':>8}"
        rows.append(row.rstrip())
    return "\n".join(rows)


def main() -> None:
    """Print the table for the number of rows given, 200,000 if none is."""
    n = int(sys.argv[1]) if len(sys.argv) > 1 else 200_000
    check(min(n, 20_000))
    print(table_of(measure(n, 11)))


if __name__ == "__main__":
    main()

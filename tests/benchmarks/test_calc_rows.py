"""The benchmark of Calc runs and gives a ratio for every line; no time is asserted."""

from __future__ import annotations

from calc_office import Office

from benchmarks import calc_rows


def test_the_benchmark_of_calc_gives_ratios(calc: Office) -> None:
    lines = calc_rows.measure(calc, 40, 1)
    assert all(line.seconds > 0.0 for line in lines)
    assert len({line.name for line in lines}) == len(lines) == 9
    text = calc_rows.table_of(lines).splitlines()
    assert text[0].split() == ["rows", "µs", "a", "row", "native", "array"]
    assert [row.count("×") for row in text[1:]] == [2] * len(lines)

"""The benchmark runs, its formulas agree with what they are compared with, and it gives ratios; no time is asserted."""

from __future__ import annotations

from benchmarks import ask_peak


def test_the_benchmark_gives_a_ratio_for_every_line_that_has_a_formula() -> None:
    ask_peak.check(400)
    timings = ask_peak.measure(400, 2)
    assert [timing.line.name for timing in timings if timing.ratio is None] == ["one row"]
    assert all(timing.ours > 0.0 for timing in timings)
    assert all(timing.ratio > 0.0 for timing in timings if timing.ratio is not None)
    text = ask_peak.table_of(timings).splitlines()
    assert len(text) == len(timings) + 1
    assert text[0].split() == ["rows", "ms", "µs", "a", "row", "formula", "ms", "ratio", "target"]
    assert all(line.startswith(timing.line.name) for line, timing in zip(text[1:], timings, strict=True))

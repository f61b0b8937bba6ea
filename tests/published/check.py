"""What one published check holds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any


@dataclass(frozen=True)
class Number:
    """A value as printed, with its unit; ``tolerance`` is absolute, in that unit, and covers the digits not printed."""

    name: str
    value: Any  # a number, numbers in a row, or words
    unit: str
    tolerance: float = 0.0


@dataclass(frozen=True)
class Check:
    """Values of one publication: what goes in, what comes out, where it is printed, and how it was come by.

    ``standing`` says how far the figures can be trusted: read from a copy, partly so, or recalled and computed again.
    """

    id: str
    topic: str
    inputs: tuple[Number, ...]
    expected: tuple[Number, ...]
    source: str
    standing: str
    note: str = ""

    def given(self, start: str) -> Any:
        """The input whose name begins so."""
        return _one(self.inputs, start).value

    def number(self, start: str) -> Number:
        """The expected number whose name begins so."""
        return _one(self.expected, start)


def _one(numbers: tuple[Number, ...], start: str) -> Number:
    exact = [number for number in numbers if number.name == start]
    found = exact or [number for number in numbers if number.name.startswith(start)]
    assert len(found) == 1, f"{len(found)} numbers begin with {start!r}"
    return found[0]

"""What an evaluation found, and the words that tell it: a fault's sentence, `why` and `verdict`."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from ingle import Cases

from ingle_addin.cells import CellError
from ingle_addin.columns import Values
from ingle_addin.faults import Fault, finished, number_text
from ingle_addin.heading_reader import Asked


@dataclass
class Evaluation:
    """Answers of n rows. ``values[j]`` are numbers (in the answer's unit, NaN without one) or texts; ``fault[j]`` indexes
    ``faults`` or is −1. ``blank`` marks rows that are wholly blank; ``caution`` indexes ``cautions`` or is −1."""

    n: int
    asked: tuple[Asked | Fault, ...]
    values: list[np.ndarray]
    fault: list[np.ndarray]
    blank: np.ndarray
    caution: np.ndarray
    faults: list[Fault] = field(default_factory=list)
    cautions: list[Fault] = field(default_factory=list)
    known: dict[Fault, int] = field(default_factory=dict)
    cases: list[Cases] = field(default_factory=list)
    keep_cases: bool = False

    def number(self, fault: Fault) -> int:
        """The fault's number in ``faults``."""
        if fault not in self.known:
            self.known[fault] = len(self.faults)
            self.faults.append(fault)
        return self.known[fault]


@dataclass(frozen=True)
class Alone(Asked):
    """`why` asked beside others, yet answered as in a call of its own: the faults of the other answers are not its."""

    @classmethod
    def of(cls, asked: Asked) -> Alone:
        """The same answer, alone."""
        return cls(asked.item, asked.side, asked.layer, asked.unit, asked.label)


def reason(result: Evaluation, table: Sequence[Values], j: int, row: int, number: int) -> str | None:
    """The sentence why answer j of a row is missing, None where it is not."""
    index = result.fault[j][row]
    return None if index < 0 else sentence(result.faults[index], table, row, number)


def sentence(fault: Fault, table: Sequence[Values], row: int, number: int) -> str:
    """A fault's sentence for one row; ``number`` names the row, 0 where it is the only one."""
    return finished(fault.sentence, number, [number_text(table[column].cell(row)) for column in fault.columns])


def judge(result: Evaluation, table: Sequence[Values], numbers: np.ndarray | None) -> None:
    """Turn what was found into the words of `why` and `verdict`, which are texts whatever the row holds."""
    names = [a.item.quantity if isinstance(a, Asked) else "" for a in result.asked]
    others = [j for j, name in enumerate(names) if name not in ("why", "verdict")]
    for j, name in enumerate(names):
        if name not in ("why", "verdict"):
            continue
        found = np.full(result.n, -1, np.intp)
        joined = name == "why" and others and not isinstance(result.asked[j], Alone)
        for other in others if joined else [j]:
            found = np.where(found < 0, result.fault[other], found)
        if joined:
            # Its own: a limit passed with no source. That a source is blank is no fault of the other answers.
            own = np.array([fault.error is CellError.NUM for fault in result.faults] + [False])[result.fault[j]]
            found = np.where((found < 0) & own, result.fault[j], found)
        texts = np.where(result.blank, "", result.values[j])
        if name == "verdict":
            doubtful = (result.caution >= 0) & (found < 0) & (texts != "over limit")
            verdicts = np.array([fault.verdict for fault in result.faults] + [""], dtype=object)
            texts = np.where(found >= 0, verdicts[found], np.where(doubtful, "caution", texts))
        else:
            texts = np.where(result.blank, "", "ok").astype(object)
            for row in np.flatnonzero((found >= 0) | (result.caution >= 0)):  # writing: a sentence is worded for its cell
                fault = result.faults[found[row]] if found[row] >= 0 else result.cautions[result.caution[row]]
                number = (int(row) + 1 if result.n > 1 else 0) if numbers is None else int(numbers[row])
                texts[row] = sentence(fault, table, int(row), number)
        result.values[j] = texts.astype(object)
    for j, name in enumerate(names):
        if name in ("why", "verdict"):
            result.fault[j] = np.full(result.n, -1, np.intp)

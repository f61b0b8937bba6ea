"""The evaluator, loaded when the first question is asked: a workbook that is refused need not wait for it."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from ingle_addin.calls import Outcome
    from ingle_addin.cells import Grid


def solve(name: str, calls: Sequence[Sequence[Grid]]) -> list[Outcome]:
    """Answer calls of one worksheet function, in order."""
    from ingle_addin.batch import solve_calls

    return solve_calls(name, calls)

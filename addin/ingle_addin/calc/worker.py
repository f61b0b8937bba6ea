"""The worker: one process in Ingle's own environment that answers the calls of a Calc session, and ends with it.

It is started by the extension (``inside/client.py``) with pipes as its standard input and output, and leaves when the input
ends. A call comes as (function, arguments) as Calc handed them over and goes back as rows of values that Calc takes as they
are; any other answer to a call is a text, the reason why there is none.
"""

from __future__ import annotations

import gc
import os
import sys
from collections.abc import Callable
from typing import Any

from ingle_addin.about import about
from ingle_addin.calc.inside import wire
from ingle_addin.calc.inside.errors import FAILED, error_value
from ingle_addin.cells import CellError
from ingle_addin.row_answers import RowAnswers

ERRORS = {error: error_value(error.value) for error in CellError}


class Desk:
    """Answers messages; one for a worker's life, so that what one call has read and solved serves the next."""

    def __init__(self) -> None:
        self._rows = RowAnswers(ERRORS, lone_zero_may_be_empty=True)
        self._others: dict[str, Callable[..., Any]] = {"hello": self._hello, "explain": self._rows.explain}

    def answer(self, message: tuple[Any, ...]) -> Any:
        """The answer to one message."""
        other = self._others.get(message[0])
        if other is not None:
            return other(*message[1:])
        name, args, whole_column = message
        return self._rows.answer(name, args, whole_column)

    @staticmethod
    def _hello() -> tuple[str, int]:
        return about(), os.getpid()


def main() -> None:
    """Serve until the input ends."""
    # The pipe of the answers is out of reach of anything that prints.
    out = os.dup(1)
    os.dup2(2, 1)
    source = sys.stdin.fileno()
    desk = Desk()
    desk.answer(("INGLE.WHY", ((("",),), (("",),)), False))
    gc.collect()
    gc.freeze()
    while True:
        try:
            message = wire.read(source)
        except EOFError:
            return
        try:
            answer = desk.answer(message)
        except Exception as error:
            # Ours to mend; the cell says so, and the next call is answered as ever.
            answer = FAILED.format(type(error).__name__, error)
        try:
            wire.write(out, wire.frame(answer))
        except OSError:
            return

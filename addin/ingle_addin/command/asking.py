"""`ingle ask`: one case typed on the command line."""

from __future__ import annotations

import re

from ingle_addin.batch import solve_calls
from ingle_addin.cells import Cell, CellError
from ingle_addin.command.failure import Failure
from ingle_addin.heading_reader import read_answer

_NUMBER = re.compile(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?")


def ask_case(answers: str, case: str) -> int:
    """Print each answer of a case beside its heading, and why one is missing or doubtful."""
    headings, values = read_case(case)
    (found,) = solve_calls("INGLE.ASK", [(((answers,),), ((*headings,),), ((*values,),))])
    (why,) = solve_calls("INGLE.WHY", [(((*headings,),), ((*values,),))])
    asked = [text.strip() for text in answers.removesuffix(";").split(";")]
    row = found.grid[0]
    width = max((len(text) for text in asked), default=0)
    for text, cell in zip(asked, row, strict=False):
        print(f"{text.ljust(width)}  {shown(cell)}")
    reason = found.reasons[0] or (why.grid[0][0] if why.grid[0][0] != "ok" else None)
    named = any(getattr(getattr(read_answer(text), "item", None), "name", "") == "why" for text in asked)
    if reason and not named:
        print(reason)
    return 0


def read_case(case: str) -> tuple[list[str], list[Cell]]:
    """Headings and values of `HEADING = VALUE; …`; a piece without `=` belongs to the value before it."""
    headings: list[str] = []
    texts: list[str] = []
    for piece in case.split(";"):
        if "=" in piece:
            heading, _, text = piece.partition("=")
            if not heading.strip():
                raise Failure(f"'{piece.strip()}' has no heading before '='; write 'HEADING = VALUE'")
            headings.append(heading.strip())
            texts.append(text)
        elif texts:
            texts[-1] += ";" + piece
        elif piece.strip():
            raise Failure(f"'{piece.strip()}' has no '='; write the case as 'HEADING = VALUE; HEADING = VALUE'")
    if not headings:
        raise Failure("the case is empty; write it as 'HEADING = VALUE; HEADING = VALUE'")
    return headings, [_value(text.strip()) for text in texts]


def _value(text: str) -> Cell:
    if not text:
        return None
    return float(text) if _NUMBER.fullmatch(text) else text


def shown(cell: Cell) -> str:
    """A cell as a person reads it: at most seven significant digits."""
    if isinstance(cell, CellError):
        return str(cell)
    return f"{cell:.7g}" if isinstance(cell, float) else str(cell)

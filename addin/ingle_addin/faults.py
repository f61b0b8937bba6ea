"""Why a cell has no answer: the error it shows and the sentence behind it, with the row and the value filled in late."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from ingle_addin.cells import CellError

# Stand for the row and one or two cells' values in a sentence until it is shown; no heading can hold them.
ROW, HERE, THERE = "\x00", "\x01", "\x02"
LONGEST = 255


@dataclass(frozen=True)
class Fault:
    """``error`` is the cell's; ``sentence`` may hold ROW, HERE and THERE; ``columns`` hold the values of the last two.

    ``verdict`` is what the answer of that name says of the row.
    """

    error: CellError
    sentence: str
    columns: tuple[int, ...] = ()
    verdict: str = "no answer"


def quoted(text: str) -> str:
    """A user's own text inside a sentence, short and on one line."""
    line = " ".join("".join(c if c.isprintable() else " " for c in text).split())
    return f"'{line if len(line) <= 60 else line[:57] + '...'}'"


def row_words(number: int) -> str:
    """How a sentence names a row: by its number among several, else as this one."""
    return f"row {number} of the values" if number > 0 else "this row"


def finished(sentence: str, row: int, values: Sequence[str] = ()) -> str:
    """The sentence as shown: the row and values in their places, at most 255 characters."""
    text = sentence.replace(ROW, row_words(row))
    for mark, value in zip((HERE, THERE), values, strict=False):
        text = text.replace(mark, value)
    text = text[:1].upper() + text[1:]
    return text if len(text) <= LONGEST else text[: LONGEST - 3] + "..."


def number_text(x: float) -> str:
    """A number as a person would type it."""
    try:
        value = float(x)
    except OverflowError:  # a whole number that no float holds
        return "a number beyond 1e308"
    text = f"{value:.10g}" if abs(value) < 1e7 else f"{value:.6g}"
    return text.replace("e+0", "e").replace("e+", "e").replace("e-0", "e-")

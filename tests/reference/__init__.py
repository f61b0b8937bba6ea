"""Reference answers for the worksheet functions' interface: plain, slow, and sharing nothing with anything.

reference.answers(answers, headings, rows)      answers of each row
reference.tolerance(answer, headings, row)      how far those numbers may be off, in the answer's unit
reference.draw.tables(seed, rows)               random mixed tables;  reference.draw.ANSWERS  what to ask of them
reference.draw2.tables(seed, rows)              the same for the wider scope;      reference.draw2.ANSWERS
reference.CHOICES                               what was chosen where the design leaves it open
"""

from __future__ import annotations

from . import draw, draw2, rows
from .choices import CHOICES
from .rounding import tolerance
from .table import answers

__all__ = ["CHOICES", "answers", "draw", "draw2", "rows", "tolerance"]

"""Reference answers for the worksheet functions' interface: plain, slow, and sharing nothing with anything.

reference.answers(answers, headings, rows)      answers of each row
reference.tolerance(answer, headings, row)      how far those numbers may be off, in the answer's unit
reference.draw.tables(seed, rows)               random mixed tables;  reference.draw.ANSWERS  what to ask of them
reference.CHOICES                               what was chosen where the design leaves it open
"""

from __future__ import annotations

from . import draw, rows
from .choices import CHOICES
from .rounding import tolerance
from .table import answers

__all__ = ["CHOICES", "answers", "draw", "rows", "tolerance"]

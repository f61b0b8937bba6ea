"""Cell errors as Calc knows them: a NaN whose low 32 bits hold the number of the error.

Also the words that a failure of our own has.
"""

from __future__ import annotations

import struct

FAILED = "Ingle itself failed here ({}: {}); please report it with this row"
NUMBERS = {
    "#NULL!": 521,
    "#DIV/0!": 532,
    "#VALUE!": 519,
    "#REF!": 524,
    "#NAME?": 525,
    "#NUM!": 503,
    "#N/A": 32767,
}


def error_value(text: str) -> float:
    """The value that shows as this error in a cell."""
    value: float = struct.unpack("<d", struct.pack("<Q", 0x7FF8000000000000 | NUMBERS[text]))[0]
    return value

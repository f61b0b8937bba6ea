"""Dates as spreadsheets count them: days since the end of 1899, or since the start of 1904."""

from __future__ import annotations

import datetime

_DAY = datetime.timedelta(days=1)
_1900 = datetime.datetime(1899, 12, 30)
_1904 = datetime.datetime(1904, 1, 1)
_LAST = 2_958_466.0  # the day after 9999-12-31


def moment_of(serial: float, date1904: bool) -> datetime.datetime | datetime.time | float:
    """The moment a number shown as a date means; the number itself where no calendar reaches.

    A number below 1 is a time of day. Spreadsheets count a 29 February 1900 that never was: before 1 March 1900 their
    count is one lower.
    """
    if not 0 <= serial < _LAST:
        return serial
    if date1904:
        days = serial
        epoch = _1904
    else:
        days = serial + 1 if 0 < serial < 60 else serial
        epoch = _1900
    try:
        # Rounded to the microsecond-hiding millisecond: 0.1 s is not a whole number of days in binary.
        moment = epoch + datetime.timedelta(milliseconds=round(days * 86_400_000))
    except OverflowError:
        return serial
    return moment.time() if serial < 1 else moment


def serial_of(moment: datetime.datetime, date1904: bool) -> float:
    """The number a spreadsheet keeps for a moment."""
    serial = (moment - (_1904 if date1904 else _1900)) / _DAY
    return serial - 1 if not date1904 and serial < 61 else serial

"""Reads a text table: `20:16.2; 500:21.5`, degrees Celsius or with a unit inside, rising."""

from __future__ import annotations

import math
import re
from itertools import pairwise

from . import units

NUMBER = r"[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?"
POINT = re.compile(rf"\s*({NUMBER})\s*([^\d:;\s][^:;]*?)?\s*:\s*({NUMBER})\s*")


class TableError(Exception):
    """A text that is no table."""


def points(text: str, unit: units.Unit) -> tuple[tuple[float, float], ...]:
    """(kelvin, SI value) pairs; TableError if the text cannot be read or does not rise."""
    out: list[tuple[float, float]] = []
    spoken: set[str] = set()
    pieces = text.split(";")
    if len(pieces) > 1 and not pieces[-1].strip():
        pieces.pop()
    for piece in pieces:
        found = POINT.fullmatch(piece)
        if found is None:
            raise TableError(piece)
        spelling = (found[2] or "").strip()
        spoken.add(spelling)
        scale = units.TEMPERATURE.get(spelling or "°C")
        if scale is None:
            raise TableError(spelling)
        pair = units.to_si(float(found[1]), scale), units.to_si(float(found[3]), unit)
        if not all(math.isfinite(one) for one in pair):
            raise TableError(piece)
        out.append(pair)
    if len(spoken) > 1 or any(b[0] <= a[0] for a, b in pairwise(out)):
        raise TableError(text)
    return tuple(out)

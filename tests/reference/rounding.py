"""How far the reference's own numbers may be off."""

from __future__ import annotations

import math
from collections.abc import Sequence

from . import headings as h
from . import headings2, table2
from .rows import RefusedError, Row, read, understand
from .table import padded, wanted

RELATIVE = 1e-6
FLAT = 1e-9
TEMPERATURES = ("peak", "peak 1", "left face", "right face", "mean", "mean 1", "probe temperature", "headroom")


def temperature_scale(row: Row) -> float:
    """Largest difference in kelvin among peak, lowest, faces, fluids, held temperatures."""
    return row.solved.scale(row.source or 0.0)


def _heat(row: Row) -> float:
    """Heat of the unit body that the errors of heats are measured by."""
    q, solved, body = row.source or 0.0, row.solved, row.body
    warm = max(abs(sink) for sink in solved.sinks)
    floor = 1e-12 * warm * body.conductivity * body.area(body.thickness) / body.thickness
    return row.largest_heat(q) + floor / RELATIVE


def _allowable(row: Row) -> float:
    """Error of the allowable source, W/m³."""
    name, source = row.first
    if name is None or source is None or source < 0.0:
        return 0.0
    rise = (row.limited(name, 2.0 * source + 1.0) - row.limited(name, source)) / (source + 1.0)
    scale = row.solved.scale(source, *row.limits.values())
    return RELATIVE * (source + scale / rise) if rise > 0.0 else math.inf


def _place(row: Row) -> float:
    """Error of the peak's place; infinite where two places are as hot as each other."""
    q, solved = row.source or 0.0, row.solved
    scale, peak = temperature_scale(row), solved.peak(q)
    left, right = solved.left(q), solved.right(q)
    if peak - solved.lowest(q) <= FLAT * scale:
        return math.inf
    if q <= 0.0 and abs(left - right) <= RELATIVE * scale:
        return math.inf
    return RELATIVE * (row.body.thickness + row.body.inner * 1e-6)


def _tied(row: Row) -> bool:
    """Whether two limits are reached at the same source, so that either may be named."""
    known = sorted(source for source in row.reached.values() if source is not None)
    return len(known) > 1 and known[1] - known[0] <= 2.0 * _allowable(row)


def _absolute(row: Row, ask: headings2.Asked) -> float:
    """Error in the unit asked."""
    factor = ask.unit[0]
    if ask.name in ("limited by", "headroom") and _tied(row):
        return math.inf
    if ask.name in TEMPERATURES:
        return RELATIVE * temperature_scale(row) / factor + 1e-12 * max(abs(sink) for sink in row.solved.sinks) / factor
    if ask.name == "peak place":
        return _place(row) / factor
    if ask.name in ("left heat out", "right heat out", "heat made"):
        if ask.name == "left heat out" and row.body.solid:
            return 0.0
        face = {"left heat out": 0.0, "right heat out": row.body.thickness}.get(ask.name)
        return abs(row.total(RELATIVE * _heat(row), ask.kind, face)) / factor
    if ask.name == "balance":
        return RELATIVE / factor
    if ask.name == "left share":
        q = row.source or 0.0
        leaving = max(row.solved.left_out(q), 0.0) + max(row.solved.right_out(q), 0.0)
        error = RELATIVE * _heat(row) / leaving if leaving > 0.0 else math.inf
        return error / factor if error < 1e-2 else math.inf
    if ask.name.startswith("allowable "):
        return _allowable(row) / row.per_source / factor
    if ask.name == "utilisation" and row.source is not None:
        allowable = row.allowable()
        return abs(row.source) / allowable * _allowable(row) / allowable / factor if allowable else 0.0
    return 0.0


def tolerances(answers: str | Sequence[str], headings: Sequence[str], rows: Sequence[Sequence[object]]) -> list[list[float]]:
    """For every row and answer the greatest error of the reference's number, in the unit asked.

    0 for texts and errors, infinite where the answer is not defined (the place of the peak of a body at one
    temperature; the share of heats that cancel; which of
    two limits is reached first at the same source). Everything rests on 1e-6 of the row's temperature scale, of its
    largest heat, and of its thickness.

    In the wider scope three grids tell what is left of their errors; ten times that is added to the same 1e-6. An
    allowable's error is 1e-6 of it, and what 1e-6 of the temperature scale makes of it; near a turn of the branch that
    is much. Infinite too: which layer is hottest, or which limit comes first, where two are equal but for rounding.
    """
    asks = wanted(answers)
    columns = [h.column(heading) for heading in headings]
    wider = [headings2.column(heading) for heading in headings]
    out = []
    for given in rows:
        cells = padded(given, len(columns))
        if table2.concerns(wider, cells):
            out.append(table2.tolerances(asks, wider, cells))
            continue
        try:
            row = understand(read(columns, cells), columns)
        except RefusedError:
            out.append([0.0] * len(asks))
            continue
        errors = []
        for ask in asks:
            try:
                errors.append(_absolute(row, ask) if ask.what == "use" else 0.0)
            except RefusedError:
                errors.append(0.0)
        out.append(errors)
    return out


def tolerance(answer: str, headings: Sequence[str], row: Sequence[object]) -> float:
    """The same for one answer of one row."""
    return tolerances([answer], headings, [row])[0][0]

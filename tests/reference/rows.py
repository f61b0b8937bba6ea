"""From cells to a body: reads one row, and answers it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

from . import headings as h
from . import units
from .finite_volume import CYLINDER, SPHERE, WALL, Body, Face, Solved, first_source

NEEDED, WRONG, IMPOSSIBLE = "#N/A", "#VALUE!", "#NUM!"
ERROR_CELLS = {"#N/A", "#VALUE!", "#NUM!", "#DIV/0!", "#REF!", "#NAME?", "#NULL!", "#SPILL!", "#CALC!"}
SHAPES = {"wall": WALL, "cylinder": CYLINDER, "sphere": SPHERE}
OUTSIDE = ("thickness", "outer radius", "outer diameter", "radius", "diameter")
LIMITS = ("limit", "limit 1", "left limit", "right limit")
POSITIVE = (*OUTSIDE, "conductivity", "density", "length", "width", "area")
NOT_NEGATIVE = ("inner radius", "inner diameter", "left film", "right film")
USELESS = {
    WALL: ("inner radius", "inner diameter", "outer radius", "outer diameter", "radius", "diameter"),
    CYLINDER: ("width", "area"),
    SPHERE: ("width", "area", "length", "line power"),
}
PLACE_SLACK = 1e-9
NO_HEAT = 1e-11  # of the largest heat: less than rounding leaves


class RefusedError(Exception):
    """A row, or one answer of it, that ends in a cell error."""

    def __init__(self, error: str, exact: bool = False) -> None:
        super().__init__(error)
        self.error = error
        self.exact = exact  # an error cell, or out of the reference's scope: even `verdict` is that error


def is_blank(cell: object) -> bool:
    return cell is None or (isinstance(cell, str) and not cell.strip())


def is_error(cell: object) -> bool:
    return isinstance(cell, str) and (cell.strip() in ERROR_CELLS or cell.strip().startswith("Err:"))


def _value(column: h.Column, name: str, cell: object) -> float | str:
    """One cell in SI, or its text."""
    if column.kind == "text":
        if not isinstance(cell, str):
            raise RefusedError(WRONG)
        return " ".join(cell.split()).lower()
    if isinstance(cell, str) and ":" in cell and name in ("conductivity", "generation"):
        raise RefusedError(NEEDED, exact=True)
    if isinstance(cell, bool) or not isinstance(cell, (int, float)):
        raise RefusedError(WRONG)
    if not math.isfinite(cell):
        raise RefusedError(IMPOSSIBLE)
    return units.to_si(float(cell), column.unit)


def read(columns: Sequence[h.Column], cells: Sequence[object]) -> dict[str, float | str]:
    """Inputs of one row by name, in SI. Raises RefusedError for what a single cell or a doubled one shows."""
    filled = [(col, cell) for col, cell in zip(columns, cells, strict=True) if col.what != "skip" and not is_blank(cell)]
    for _, cell in filled:
        if is_error(cell):
            raise RefusedError(str(cell).strip(), exact=True)
    if any(col.what == "bad" for col in columns):
        raise RefusedError(WRONG)
    if any(col.what == "later" for col, _ in filled):
        raise RefusedError(NEEDED, exact=True)
    shape = next((str(cell).strip().lower() for col, cell in filled if "shape" in col.inputs), "")
    if shape == "bar":
        raise RefusedError(NEEDED, exact=True)
    bores = [cell for col, cell in filled if col.inputs[0] in ("inner radius", "inner diameter")]
    solid = shape in ("cylinder", "sphere") and all(cell == 0 for cell in bores)
    row: dict[str, float | str] = {}
    for col, cell in filled:
        for name in col.inputs[1:] if col.both and solid else col.inputs:
            if name in row:
                raise RefusedError(WRONG)
            row[name] = _value(col, name, cell)
    return row


@dataclass
class Row:
    """A legal row: its body, the source now (None if its only source column is blank) and how to answer."""

    body: Body
    inputs: dict[str, float | str]
    source_kind: str
    per_source: float  # W/m³ for one SI unit of the row's source kind
    source: float | None

    @cached_property
    def solved(self) -> Solved:
        return Solved(self.body)

    @cached_property
    def limits(self) -> dict[str, float]:
        return {name: float(self.inputs[name]) for name in LIMITS if name in self.inputs}

    def limited(self, name: str, source: float) -> float:
        """The temperature that a limit watches."""
        ask = {"left limit": self.solved.left, "right limit": self.solved.right}.get(name, self.solved.peak)
        return ask(source)

    @cached_property
    def reached(self) -> dict[str, float | None]:
        """For each limit the source that reaches it; None if no source does, below zero if broken with no source."""
        start = self.body.conductivity / self.body.thickness**2
        found: dict[str, float | None] = {}
        for name, limit in self.limits.items():
            if self.limited(name, 0.0) > limit:
                found[name] = -1.0
            else:
                found[name] = first_source(lambda q, name=name: self.limited(name, q), limit, start)
        return found

    @cached_property
    def first(self) -> tuple[str | None, float | None]:
        """The limit reached first and its source; (None, None) if none is ever reached; source -1 if broken."""
        if not self.limits:
            raise RefusedError(NEEDED)
        known = {name: value for name, value in self.reached.items() if value is not None}
        if not known:
            return None, None
        name = min(known, key=lambda one: known[one])
        return name, known[name]

    def allowable(self) -> float:
        """Largest source in W/m³."""
        _, source = self.first
        if source is None or source < 0.0:
            raise RefusedError(IMPOSSIBLE)
        return source

    def margin(self, name: str) -> float:
        return self.limits[name] - self.limited(name, self.source or 0.0)

    def limited_by(self) -> str:
        name, source = self.first
        if name is None or source is None or source < 0.0:
            return min(self.limits, key=self.margin)
        return name

    def total(self, per_body: float, kind: str, face: float | None) -> float:
        """Heat of the unit body (per m² of a wall, per m of a cylinder, a sphere) by the unit asked."""
        shape = self.body.shape
        if kind == "flux":
            if face is None and shape != WALL:
                raise RefusedError(NEEDED)
            return per_body if face is None else per_body / self.body.area(face)
        if kind == "line power":
            if shape != CYLINDER:
                raise RefusedError(NEEDED)
            return per_body
        needed = {WALL: "area", CYLINDER: "length"}.get(shape)
        if needed is None:
            return per_body
        if needed not in self.inputs:
            raise RefusedError(NEEDED)
        return per_body * float(self.inputs[needed])

    def _left_exists(self) -> None:
        if self.body.solid:
            raise RefusedError(NEEDED)

    def answer(self, name: str, kind: str) -> float | int | str:
        """One answer in SI (percent as a fraction)."""
        if name.startswith("allowable "):
            if name.removeprefix("allowable ") != self.source_kind:
                raise RefusedError(NEEDED)
            return self.allowable() / self.per_source
        q, solved, body = self.source, self.solved, self.body
        if name == "limited by" and self.source_kind:
            return self.limited_by()
        if q is None:
            raise RefusedError(NEEDED)
        if name in ("peak", "peak 1"):
            return solved.peak(q)
        if name == "peak place":
            return body.inner + solved.peak_place(q)
        if name == "peak layer":
            return 1
        if name == "left face":
            self._left_exists()
            return solved.left(q)
        if name == "right face":
            return solved.right(q)
        if name in ("mean", "mean 1"):
            return solved.mean(q)
        if name == "probe temperature":
            if "probe" not in self.inputs:
                raise RefusedError(NEEDED)
            return solved.at(probe_place(body, float(self.inputs["probe"])), q)
        if name == "left heat out":
            self._left_exists()
            return self.total(solved.left_out(q), kind, 0.0)
        if name == "right heat out":
            return self.total(solved.right_out(q), kind, body.thickness)
        if name == "heat made":
            return self.total(solved.made(q), kind, None)
        if name == "left share":
            return self._left_share(q)
        if name == "balance":
            return self._balance(q)
        if name == "headroom":
            return self.margin(self.limited_by()) if self.limits else self._no_limit()
        if name == "utilisation":
            allowable = self.allowable()
            if allowable == 0.0:
                raise RefusedError(IMPOSSIBLE)
            return q / allowable
        if name == "verdict":
            if not self.limits:
                return "no limit"
            return "over limit" if any(self.margin(one) < 0.0 for one in self.limits) else "ok"
        raise RefusedError(NEEDED, exact=True)

    def _no_limit(self) -> float:
        raise RefusedError(NEEDED)

    def largest_heat(self, q: float) -> float:
        """Largest of heat made, put in at a face and passing through a face, of the unit body."""
        body, solved = self.body, self.solved
        put_in = (body.area(0.0) * body.left.flux_in, body.area(body.thickness) * body.right.flux_in)
        return max(abs(heat) for heat in (solved.made(q), solved.left_out(q), solved.right_out(q), *put_in))

    def _left_share(self, q: float) -> float:
        left, right = max(self.solved.left_out(q), 0.0), max(self.solved.right_out(q), 0.0)
        if left + right <= NO_HEAT * self.largest_heat(q):
            raise RefusedError(IMPOSSIBLE)
        return left / (left + right)

    def _balance(self, q: float) -> float:
        made, left, right = self.solved.made(q), self.solved.left_out(q), self.solved.right_out(q)
        largest = self.largest_heat(q)
        return 0.0 if largest == 0.0 else abs(made - left - right) / largest


def probe_place(body: Body, probe: float) -> float:
    """Distance of the probe from the left face; refused outside the body."""
    place = probe - body.inner
    slack = PLACE_SLACK * (body.inner + body.thickness)
    if not -slack <= place <= body.thickness + slack:
        raise RefusedError(IMPOSSIBLE)
    return min(max(place, 0.0), body.thickness)


def _face(row: dict[str, float | str], side: str) -> tuple[Face, str]:
    """The face, and the error that an incomplete or contradictory one ends in ("" if none)."""
    got = {name: row.get(f"{side} {name}") for name in ("held", "film", "fluid", "flux in")}
    if got["held"] is not None:
        others = any(got[name] is not None for name in ("film", "fluid", "flux in"))
        return Face(held=float(got["held"])), WRONG if others else ""
    if (got["film"] is None) != (got["fluid"] is None):
        return Face(), NEEDED
    film, fluid, flux = (float(got[name] or 0.0) for name in ("film", "fluid", "flux in"))
    return Face(film=film, fluid=fluid, flux_in=flux), ""


def _geometry(row: dict[str, float | str], shape: int) -> tuple[float, float, list[str]]:
    """Bore radius, thickness and the errors found."""
    errors = []
    outsides = [name for name in OUTSIDE if name in row]
    bores = [name for name in ("inner radius", "inner diameter") if name in row]
    if len(outsides) > 1 or len(bores) > 1 or any(name in row for name in USELESS[shape]):
        errors.append(WRONG)
    if bores and ("radius" in row or "diameter" in row):
        errors.append(WRONG)
    bore = float(row[bores[0]]) * (0.5 if "diameter" in bores[0] else 1.0) if bores else 0.0
    if not outsides:
        return bore, 0.0, [*errors, NEEDED]
    size = float(row[outsides[0]]) * (0.5 if "diameter" in outsides[0] else 1.0)
    thickness = size if outsides[0] == "thickness" else size - bore
    if thickness <= 0.0:
        errors.append(IMPOSSIBLE)
    return bore, thickness, errors


def _per_source(row: dict[str, float | str], kind: str, body: Body) -> tuple[float, str]:
    """W/m³ for one SI unit of this kind of source, and the error for what is lacking."""
    if kind == "generation":
        return 1.0, ""
    needed = {"specific generation": "density"}.get(kind)
    if kind == "power":
        needed = {WALL: "area", CYLINDER: "length"}.get(body.shape)
    if kind == "line power" and body.shape != CYLINDER:
        return 1.0, NEEDED
    if needed and needed not in row:
        return 1.0, NEEDED
    size = float(row[needed]) if needed else 1.0
    if kind == "specific generation":
        return size, ""
    whole = body.volume(0.0, body.thickness) * size
    return (1.0 / whole if whole > 0.0 else 1.0), ""


def understand(row: dict[str, float | str], columns: Sequence[h.Column]) -> Row:
    """Checks the inputs together; every error is collected and the gravest in meaning is reported."""
    if "shape" in row and row["shape"] not in SHAPES:
        raise RefusedError(WRONG)
    errors: list[str] = []
    for name, value in row.items():
        if isinstance(value, str):
            continue
        below = name.endswith(("held", "fluid", "limit", "limit 1")) and value < 0.0
        if below or (name in POSITIVE and value <= 0.0) or (name in NOT_NEGATIVE and value < 0.0):
            errors.append(IMPOSSIBLE)
    if "shape" not in row:
        raise RefusedError(NEEDED)
    shape = SHAPES[str(row["shape"])]
    bore, thickness, found = _geometry(row, shape)
    errors += found
    left, left_error = _face(row, "left")
    right, right_error = _face(row, "right")
    errors += [left_error, right_error]
    if shape != WALL and bore == 0.0 and any(name.startswith("left ") for name in row):
        errors.append(WRONG)
    if "conductivity" not in row:
        errors.append(NEEDED)
    kinds = [name for name in h.SOURCES if name in row]
    source_columns = [col for col in columns if col.source]
    source: float | None = None
    kind = kinds[0] if kinds else ""
    if len(kinds) > 1:
        errors.append(WRONG)
    if not kinds:
        if len(source_columns) != 1 or source_columns[0].what != "use":
            errors.append(NEEDED)
        else:
            kind = source_columns[0].inputs[0]
    body = Body(shape, bore, thickness, float(row.get("conductivity", 1.0)), left, right)
    per_source = 1.0
    if kind and IMPOSSIBLE not in errors and NEEDED not in errors:
        per_source, lacking = _per_source(row, kind, body)
        errors.append(lacking)
        source = float(row[kind]) * per_source if kinds else None
    if not any(face.held is not None or face.film > 0.0 for face in (left, right)):
        errors.append(IMPOSSIBLE)
    for error in (WRONG, NEEDED, IMPOSSIBLE):
        if error in errors:
            raise RefusedError(error)
    if "probe" in row:
        probe_place(body, float(row["probe"]))
    answer = Row(body, row, kind, per_source, source)
    if answer.solved.lowest(source or 0.0) < 0.0:
        raise RefusedError(IMPOSSIBLE)
    return answer

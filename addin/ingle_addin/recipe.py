"""From the headings a row fills in to a solver case: what is missing, doubled or contradictory, and which formula gives what.

All rows that fill the same headings with the same shape share one recipe, so nothing here is decided row by row.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from ingle import Cases, Face, Layer, Shape
from ingle.shapes import MEASURE, Array, solid_volume, volume

from ingle_addin.cells import CellError
from ingle_addin.faults import HERE, ROW, THERE, Fault
from ingle_addin.heading_reader import Column, Plan
from ingle_addin.headings import SOURCES

Get = Callable[[str], Array]
Flag = Callable[[np.ndarray, Fault], None]

_SHAPES = {"wall": Shape.WALL, "cylinder": Shape.CYLINDER, "sphere": Shape.SPHERE}
# Headings of one shape only: a value under one of them in another shape's row is a slip of column.
_BELONGS = {
    "inner radius": ("cylinder", "sphere"),
    "inner diameter": ("cylinder", "sphere"),
    "outer radius": ("cylinder", "sphere"),
    "outer diameter": ("cylinder", "sphere"),
    "radius": ("cylinder", "sphere"),
    "diameter": ("cylinder", "sphere"),
    "length": ("wall", "cylinder"),
    "width": ("wall",),
    "area": ("wall",),
}
_HALF = {"inner diameter": 0.5, "outer diameter": 0.5, "diameter": 0.5}
_OUTSIDES = ("outer radius", "outer diameter", "radius", "diameter")
_ON_FACE = ("held", "flux in", "film", "fluid", "limit")


@dataclass(frozen=True)
class Recipe:
    """How rows of one pattern become cases. ``filled`` maps a slot to the column that fills it."""

    shape: Shape
    filled: dict[str, Column]
    inner: str
    outer: str
    source: str  # the heading that gives the heat, empty where its cell is blank
    scaled: str  # the heading an allowable source is told in, empty where more than one could be meant
    no_source: Fault | None
    has_limit: bool
    labels: dict[str, str]
    answers: dict[Any, Any] = field(default_factory=dict, compare=False, repr=False)  # what each answer needs, kept

    def label(self, slot: str) -> str:
        """The heading as typed."""
        return self.labels.get(slot, slot)


class _Stop(Exception):  # noqa: N818
    def __init__(self, fault: Fault) -> None:
        super().__init__(fault.sentence)
        self.fault = fault


def _stop(error: CellError, sentence: str) -> _Stop:
    return _Stop(Fault(error, sentence))


def build(plan: Plan, filled_columns: tuple[Column, ...], shape_text: str | None) -> Recipe | Fault:
    """The recipe of rows that fill these columns, or why they have no answer."""
    try:
        return _build(plan, filled_columns, shape_text)
    except _Stop as stop:
        return stop.fault


def _build(plan: Plan, columns: tuple[Column, ...], shape_text: str | None) -> Recipe:
    for column in columns:
        if not column.available:
            raise _stop(CellError.NA, f"{column.label} in {ROW} is not available yet; leave it blank or wait for a later version")
    if shape_text is None:
        raise _missing(plan, "shape", "write wall, cylinder or sphere")
    if shape_text == "bar":
        raise _stop(CellError.NA, f"shape 'bar' in {ROW} is not available yet; bars along their length need a later version")
    shape = _SHAPES[shape_text]
    bored = any(slot in ("inner radius", "inner diameter") for column in columns for slot in column.slots)
    solid = shape != Shape.WALL and not bored
    filled = _by_slot(columns, solid, shape_text)
    for slot, shapes in _BELONGS.items():
        if slot in filled and shape_text not in shapes:
            belongs = " or a ".join(shapes)
            raise _stop(CellError.VALUE, f"{filled[slot].label} in {ROW} belongs to a {belongs}, not to a {shape_text}; leave it "
                        "blank")  # fmt: skip
    inner = _one(filled, ("inner radius", "inner diameter"), "the bore")
    outer = _outside(plan, filled, shape_text)
    if "conductivity" not in filled:
        raise _missing(plan, "conductivity", "type a value")
    source, scaled, no_source = _source(plan, filled, shape_text)
    for side in ("left", "right"):
        _check_face(plan, filled, side)
    has_limit = any(slot in filled for slot in ("limit", "limit 1", "left limit", "right limit"))
    labels = {slot: column.label for slot, column in filled.items()}
    return Recipe(shape, filled, inner, outer, source, scaled, no_source, has_limit, labels)


def _missing(plan: Plan, slot: str, remedy: str) -> _Stop:
    if plan.has(slot):
        return _stop(CellError.NA, f"{plan.label(slot)} in {ROW} is blank; {remedy}")
    return _stop(CellError.NA, f"{ROW} has no {slot}, and no heading for it; add a column '{_suggest(slot)}'")


def _suggest(slot: str) -> str:
    from ingle_addin.heading_reader import INPUT_NAMES

    unit = INPUT_NAMES[slot].item.kinds[0].example
    return f"{slot} [{unit}]" if unit else slot


def _by_slot(columns: tuple[Column, ...], solid: bool, shape_text: str) -> dict[str, Column]:
    """The column of each slot; `both` is the outer face alone on a solid round body, whose middle takes nothing."""
    filled: dict[str, Column] = {}
    for column in columns:
        slots = column.slots
        if solid and len(slots) == 2:
            slots = slots[1:]
        for slot in slots:
            if slot in filled:
                raise _stop(CellError.VALUE, f"{filled[slot].label} and {column.label} in {ROW} are both filled in and mean the "
                            "same; leave one blank")  # fmt: skip
            if solid and slot.startswith("left "):
                raise _stop(CellError.VALUE, f"{column.label} in {ROW} lies on an inner face, and this {shape_text} is solid; give "
                            "an inner radius or leave it blank")  # fmt: skip
            filled[slot] = column
    return filled


def _one(filled: dict[str, Column], slots: tuple[str, ...], what: str) -> str:
    given = [slot for slot in slots if slot in filled]
    if len(given) > 1:
        raise _stop(CellError.VALUE, f"{filled[given[0]].label} and {filled[given[1]].label} in {ROW} both give {what}; leave one "
                    "blank")  # fmt: skip
    return given[0] if given else ""


def _outside(plan: Plan, filled: dict[str, Column], shape_text: str) -> str:
    if shape_text == "wall":
        if "thickness" not in filled:
            raise _missing(plan, "thickness", "type a value")
        return "thickness"
    outer = _one(filled, (*_OUTSIDES, "thickness"), "the outside")
    if not outer:
        there = [plan.label(slot) for slot in (*_OUTSIDES, "thickness") if plan.has(slot)]
        if there:
            raise _stop(CellError.NA, f"the outside of this {shape_text} is blank in {ROW}; fill in {' or '.join(there[:2])}")
        raise _missing(plan, "outer radius", "type a value")
    return outer


def _source(plan: Plan, filled: dict[str, Column], shape_text: str) -> tuple[str, str, Fault | None]:
    given = [slot for slot in SOURCES if slot in filled]
    if len(given) > 1:
        raise _stop(CellError.VALUE, f"{filled[given[0]].label} and {filled[given[1]].label} in {ROW} are two sources in one layer; "
                    "leave one blank")  # fmt: skip
    headed = [slot for slot in SOURCES if plan.has(slot)]
    columns = sum(slot in SOURCES for column in plan.columns for slot in column.slots)
    scaled = given[0] if given else (headed[0] if columns == 1 else "")
    for slot in (scaled,) if scaled else ():
        need = _source_needs(slot, filled, shape_text)
        if need:
            if slot in filled or need.error is CellError.VALUE:
                raise _Stop(need)
            return "", "", need
    if given:
        return given[0], scaled, None
    words = " and ".join(plan.label(slot) for slot in headed)
    if headed:
        verb = "is" if columns == 1 else "are"
        return "", scaled, Fault(CellError.NA, f"{words} in {ROW} {verb} blank; write 0 for no source")
    fault = Fault(CellError.NA, f"{ROW} has no source, and no heading for one; add a column 'generation [W/m³]', 0 for none")
    return "", "", fault


def _source_needs(slot: str, filled: dict[str, Column], shape_text: str) -> Fault | None:
    label = filled[slot].label if slot in filled else slot
    if slot == "specific generation" and "density" not in filled:
        return Fault(CellError.NA, f"{label} in {ROW} needs a density; fill in 'density [kg/m³]'")
    if slot == "power" and shape_text == "cylinder" and "length" not in filled:
        return Fault(CellError.NA, f"{label} in {ROW} needs the cylinder's length; fill in 'length [mm]'")
    if slot == "power" and shape_text == "wall" and "area" not in filled:
        return Fault(CellError.NA, f"{label} in {ROW} needs the wall's area; fill in 'area [m²]'")
    if slot == "line power" and shape_text == "wall":
        return Fault(CellError.NA, f"{label} in {ROW} is by length, which a wall has not; give its power in W, with its area")
    if slot == "line power" and shape_text == "sphere":
        return Fault(CellError.VALUE, f"{label} in {ROW} has no meaning for a sphere; give its power in W")
    return None


def _check_face(plan: Plan, filled: dict[str, Column], side: str) -> None:
    held, film, fluid = (filled.get(f"{side} {name}") for name in ("held", "film", "fluid"))
    flux = filled.get(f"{side} flux in")
    if held:
        for other in (film, fluid, flux):
            if other:
                raise _stop(CellError.VALUE, f"{held.label} and {other.label} in {ROW} contradict each other: a held face takes no "
                            "film, fluid or flux; leave one blank")  # fmt: skip
    if film and not fluid:
        raise _face_missing(plan, film, f"{side} fluid", "the temperature of its fluid")
    if fluid and not film:
        raise _face_missing(plan, fluid, f"{side} film", "a film")


def _face_missing(plan: Plan, given: Column, slot: str, what: str) -> _Stop:
    known = plan.label(slot) if plan.has(slot) else _suggest(slot)
    return _stop(CellError.NA, f"{given.label} in {ROW} needs {what}; fill in '{known}'")


@dataclass(frozen=True)
class Extent:
    """The sizes that turn heats into watts: each an array, or None where the row does not give it."""

    V: Array  # in the solver's measure, per metre or per area as MEASURE says
    area: Array | None
    length: Array | None


def cases_of(recipe: Recipe, get: Get, flag: Flag) -> tuple[Cases, Extent, Array | None]:
    """Cases of a recipe's rows, their extents, and the generation that one unit of the row's source heading makes.

    ``get`` gives a slot's values in base units; ``flag`` takes a mask of rows and the fault they have.
    """
    shape, filled = recipe.shape, recipe.filled

    def maybe(slot: str) -> Array | None:
        return get(slot) if slot in filled else None

    def length(slot: str) -> Array:
        return get(slot) * _HALF[slot] if slot in _HALF else get(slot)

    a = length(recipe.inner) if recipe.inner else None
    d = length(recipe.outer)
    if a is not None:
        inner, outer = filled[recipe.inner], filled[recipe.outer]
        if recipe.outer in ("radius", "diameter"):
            sentence = f"{outer.label} in {ROW} is for a solid body, and {inner.label} is {HERE}; use outer {recipe.outer} instead"
            flag(a > 0.0, Fault(CellError.VALUE, sentence, (inner.index,)))
        if recipe.outer != "thickness":
            d = d - a
            sentence = f"{inner.label} in {ROW} is {HERE}, not below {outer.label} of {THERE}; make the bore smaller than the outside"
            flag(d <= 0.0, Fault(CellError.NUM, sentence, (inner.index, outer.index)))
    if recipe.inner:
        _flag_solid_left(recipe, a, flag)
    if shape == Shape.WALL:
        V = d
    elif a is None:
        V = solid_volume(shape, d)
    else:
        V = volume(shape, a, d)
    extent = Extent(V * MEASURE[shape], maybe("area"), maybe("length"))
    scale = _scale(recipe, get, extent)
    q = get(recipe.source) if recipe.source else np.zeros_like(d)
    if scale is not None:
        q = q * scale
    if "probe" in filled:
        from_left = get("probe") - (a if a is not None else 0.0)
        slack = 1e-9 * (d + get("probe"))
        where = "from the left face" if shape == Shape.WALL else "a radius"
        probe = filled["probe"]
        sentence = f"{probe.label} in {ROW} is {HERE}, outside the body; give a place in it, {where}"
        flag((from_left < -slack) | (from_left > d + slack), Fault(CellError.NUM, sentence, (probe.index,)))
    limit, limit_1 = maybe("limit"), maybe("limit 1")
    if limit is not None and limit_1 is not None:
        limit = np.fmin(limit, limit_1)
    left_limit = maybe("left limit")
    if left_limit is not None and a is not None:
        left_limit = np.where(a > 0.0, left_limit, np.nan)  # `both limit` on a body that turns out solid
    cases = Cases(
        shape,
        (Layer(d, get("conductivity"), q),),
        _face("left", maybe),
        _face("right", maybe),
        a,
        limit_1 if limit is None else limit,
        left_limit,
        maybe("right limit"),
        maybe("probe"),
    )
    return cases, extent, scale


def _flag_solid_left(recipe: Recipe, a: Array | None, flag: Flag) -> None:
    """A bore of 0 is solid: then only `both` may speak of its left face."""
    for slot, column in recipe.filled.items():
        if slot.startswith("left ") and len(column.slots) == 1 and a is not None:
            flag(a == 0.0, Fault(CellError.VALUE, f"{column.label} in {ROW} lies on an inner face, and the bore is 0; give an "
                 "inner radius above 0 or leave it blank"))  # fmt: skip


def _face(side: str, maybe: Callable[[str], Array | None]) -> Face:
    return Face(maybe(f"{side} held"), maybe(f"{side} film"), maybe(f"{side} fluid"), maybe(f"{side} flux in"))


def _scale(recipe: Recipe, get: Get, extent: Extent) -> Array | None:
    """Generation [W/m³] made by one base unit of the row's source heading; None is 1."""
    slot = recipe.scaled
    if slot in ("", "generation"):
        return None
    if slot == "specific generation":
        return get("density")
    if slot == "line power":
        return 1.0 / extent.V
    along = {Shape.WALL: extent.area, Shape.CYLINDER: extent.length, Shape.SPHERE: None}[recipe.shape]
    return 1.0 / (extent.V if along is None else extent.V * along)

"""What the rows that fill the same headings have in common: which formula gives what, or what is missing or contradictory.

Nothing here is decided row by row; `case_builder` then turns the rows' values into cases.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from ingle import Shape

from ingle_addin import bar_recipe
from ingle_addin.cells import CellError
from ingle_addin.face_recipe import check_face
from ingle_addin.faults import ROW, Fault
from ingle_addin.film_headings import law_fault
from ingle_addin.heading_reader import Column, Plan
from ingle_addin.headings import Where
from ingle_addin.slots import Stop, base_name, missing, one, slope_fault, slot_of
from ingle_addin.source_recipe import layer_source, scaled_source

_SHAPES = {"wall": Shape.WALL, "cylinder": Shape.CYLINDER, "sphere": Shape.SPHERE, "bar": Shape.WALL}
_ROUND = ("cylinder", "sphere")
# Headings of some shapes only: a value under one of them in another shape's row is a slip of column.
_BELONGS = {
    "inner radius": _ROUND,
    "inner diameter": _ROUND,
    "outer radius": _ROUND,
    "outer diameter": _ROUND,
    "radius": _ROUND,
    "diameter": (*_ROUND, "bar"),
    "length": ("wall", "cylinder", "bar"),
    "width": ("wall", "bar"),
    "area": ("wall",),
    "section": ("bar",),
    "perimeter": ("bar",),
    "turns": ("wall", "cylinder"),
    "fill factor": ("wall", "cylinder"),
    "left contact": ("bar",),
    "right contact": ("bar",),
}
_OUTSIDES = ("outer radius", "outer diameter", "radius", "diameter")


@dataclass(frozen=True)
class LayerRecipe:
    """One layer: its number, the slots that give its outside and its source (empty: none), and k's own."""

    number: int
    outside: str
    source: str

    def slot(self, name: str) -> str:
        """The slot of one of its headings."""
        return slot_of(name, self.number)


@dataclass(frozen=True)
class Recipe:
    """How rows of one pattern become cases. ``filled`` maps a slot to the column that fills it; ``words`` to its text."""

    shape: Shape
    body: str  # the shape's own word
    filled: dict[str, Column]
    words: Mapping[str, str]
    tabled: frozenset[str]  # slots whose cells are text tables
    inner: str
    layers: tuple[LayerRecipe, ...]
    scaled: str  # the kind of source an allowable is told in, empty where more than one could be meant
    scaled_layer: int  # the first layer of that kind, also where its cell is blank
    no_source: Fault | None
    limits: tuple[str, ...]
    section: tuple[str, ...] = ()  # the slots that give a bar's section
    answers: dict[Any, Any] = field(default_factory=dict, compare=False, repr=False)  # what each answer needs, kept

    def label(self, slot: str) -> str:
        """The heading as typed."""
        return self.filled[slot].label if slot in self.filled else slot

    @property
    def bar(self) -> bool:
        """Whether the body is a bar, conducting along its length."""
        return self.body == "bar"

    @property
    def kinds(self) -> tuple[str, ...]:
        """The kinds of source in the row, the scaled one first; that of a blank source too."""
        given = [base_name(layer.source) for layer in self.layers if layer.source]
        return tuple(dict.fromkeys([*given, *([self.scaled] if self.scaled else [])]))

    def slots_of(self, kind: str) -> tuple[str, ...]:
        """The filled source slots of a kind."""
        return tuple(layer.source for layer in self.layers if layer.source and base_name(layer.source) == kind)


def build(plan: Plan, columns: tuple[Column, ...], words: Mapping[str, str], tabled: frozenset[str] = frozenset()) -> Recipe | Fault:
    """The recipe of rows that fill these columns, with the words their text headings hold, or why they have no answer."""
    try:
        return _build(plan, columns, words, tabled)
    except Stop as stop:
        return stop.fault


def _build(plan: Plan, columns: tuple[Column, ...], words: Mapping[str, str], tabled: frozenset[str]) -> Recipe:
    for column in columns:
        if not column.available:
            raise Stop(CellError.NA, f"{column.label} in {ROW} is not available yet; leave it blank or wait for a later version")
    shape_text = words.get("shape")
    if shape_text is None:
        raise missing(plan, "shape", "write wall, cylinder, sphere or bar")
    shape = _SHAPES[shape_text]
    bored = any(slot in ("inner radius", "inner diameter") for column in columns for slot in column.slots)
    solid = shape != Shape.WALL and not bored
    filled = _by_slot(columns, solid, shape_text)
    words = {slot: word for slot, word in words.items() if slot in filled}
    for slot, column in filled.items():
        shapes = ("bar",) if slot.startswith("side ") else _BELONGS.get(base_name(slot), (shape_text,))
        if shape_text not in shapes:
            belongs = ", a ".join(shapes[:-1]) + (" or a " if len(shapes) > 1 else "") + shapes[-1]
            raise Stop(CellError.VALUE, f"{column.label} in {ROW} belongs to a {belongs}, not to a {shape_text}; leave it blank")
    if shape_text == "bar":
        bar_recipe.check_layers(columns)
    inner = one(filled, ("inner radius", "inner diameter"), "the bore")
    count = max((column.layer for column in columns if column.item.where is Where.LAYER), default=1)
    _check_numbers(columns, count)
    outsides = [_outside(plan, filled, shape_text, number, count) for number in range(1, count + 1)]
    section = bar_recipe.section_of(plan, filled) if shape_text == "bar" else ()
    for number in range(1, count + 1):
        _check_conductivity(plan, filled, tabled, number)
    sources = [layer_source(filled, number) for number in range(1, count + 1)]
    scaled, scaled_layer, no_source = scaled_source(plan, filled, tabled, shape_text, sources)
    for side in ("left", "right", "side") if shape_text == "bar" else ("left", "right"):
        check_face(plan, filled, side)
        fault = law_fault(filled, words, side, shape_text)
        if fault is not None:
            raise Stop(fault.error, fault.sentence)
    limits = ("limit", "left limit", "right limit", *(f"limit {n}" for n in range(1, count + 1)))
    layers = tuple(LayerRecipe(n, outside, source) for n, (outside, source) in enumerate(zip(outsides, sources, strict=True), 1))
    given = tuple(slot for slot in limits if slot in filled)
    return Recipe(shape, shape_text, filled, words, tabled, inner, layers, scaled, scaled_layer, no_source, given, section)


def _by_slot(columns: tuple[Column, ...], solid: bool, shape_text: str) -> dict[str, Column]:
    """The column of each slot; `both` is the outer face alone on a solid round body, whose middle takes nothing."""
    filled: dict[str, Column] = {}
    for column in columns:
        slots = column.slots
        if solid and len(slots) == 2:
            slots = slots[1:]
        for slot in slots:
            if slot in filled:
                sentence = f"{filled[slot].label} and {column.label} in {ROW} both give the {slot}"
                raise Stop(CellError.VALUE, f"{sentence}; leave one blank")
            if solid and slot.startswith("left "):
                sentence = f"{column.label} in {ROW} lies on an inner face, and this {shape_text} is solid"
                raise Stop(CellError.VALUE, f"{sentence}; give an inner radius or leave it blank")
            filled[slot] = column
    return filled


def _check_numbers(columns: tuple[Column, ...], count: int) -> None:
    """Numbered headings of layers and joints that the row's body has not, and bare ones where a number is compulsory."""
    for column in columns:
        item = column.item
        beyond = column.layer + 1 if item.where is Where.JOINT else column.layer
        if item.where in (Where.JOINT, Where.FACE_AND_LAYER) and beyond > count:
            sentence = f"{column.label} in {ROW} needs layer {beyond}, which this body has not"
            raise Stop(CellError.NA, f"{sentence}; describe that layer or leave it blank")
        if count > 1 and item.name in _OUTSIDES and not column.numbered:
            if item.name in ("radius", "diameter"):
                sentence = f"{column.label} in {ROW} is for a body of one layer, and this one has {count}"
                raise Stop(CellError.VALUE, f"{sentence}; use 'outer {item.name} 1'")
            sentence = f"{column.label} in {ROW} does not say of which layer, and this body has {count}"
            raise Stop(CellError.VALUE, f"{sentence}; write '{item.name} 1' or '{item.name} {count}'")


def _outside(plan: Plan, filled: Mapping[str, Column], shape_text: str, number: int, count: int) -> str:
    thickness = slot_of("thickness", number)
    if shape_text == "bar":
        if "length" not in filled:
            raise missing(plan, "length", "type a value")
        return "length"
    if shape_text == "wall":
        if thickness not in filled:
            raise missing(plan, thickness, "type a value")
        return thickness
    names = _OUTSIDES if number == 1 else _OUTSIDES[:2]
    slots = (*(slot_of(name, number) for name in names), thickness)
    of = f"the outside of layer {number}" if count > 1 else "the outside"
    outside = one(filled, slots, of)
    if not outside:
        there = [plan.label(slot) for slot in slots if plan.has(slot)]
        if there:
            either = " or ".join(f"'{label}'" for label in there[:2])
            raise Stop(CellError.NA, f"{of} of the {shape_text} in {ROW} is blank; fill in {either}")
        raise missing(plan, slot_of("outer radius", number), "type a value")
    return outside


def _check_conductivity(plan: Plan, filled: Mapping[str, Column], tabled: frozenset[str], number: int) -> None:
    slot = slot_of("conductivity", number)
    if slot not in filled:
        raise missing(plan, slot, "type a value")
    slope, reference = slot_of("conductivity slope", number), slot_of("conductivity reference", number)
    fault = slope_fault(filled, tabled, slot, slope, reference)
    if fault is not None:
        raise fault
